//! Display units: what the axes are numbered in.

/// A unit of display.
#[derive(Clone, Debug, PartialEq)]
pub struct Unit {
    /// As printed, for example `rpm` or `N·m`.
    pub text: String,
    /// How many of it make one SI unit: 30/pi for rpm.
    pub per_si: f64,
}

impl Unit {
    /// A unit by its text and size.
    pub fn new(text: &str, per_si: f64) -> Self {
        Self { text: text.to_owned(), per_si }
    }

    /// A value in SI, told in this unit.
    pub fn of(&self, si: f64) -> f64 {
        si * self.per_si
    }

    /// The same unit with a prefix that keeps values up to `largest` (SI) below five digits;
    /// units that carry no prefix in the trade stay as they are.
    pub fn prefixed(&self, largest: f64) -> Self {
        let shown = self.of(largest).abs();
        let steps = [(2e7, "M", 1e-6), (2e4, "k", 1e-3)];
        let plain = matches!(self.text.as_str(), "N·m" | "W" | "J");
        for (from, prefix, factor) in steps {
            if plain && shown >= from {
                return Self::new(&format!("{prefix}{}", self.text), self.per_si * factor);
            }
        }
        self.clone()
    }
}

/// Units a scenario asks for.
#[derive(Clone, Debug, PartialEq)]
pub struct Display {
    /// Of speeds, from rad/s.
    pub speed: Unit,
    /// Of torques, from N·m; the chart chooses a prefix.
    pub torque: Unit,
    /// Of twists and angles of bodies, from rad.
    pub angle: Unit,
}

impl Default for Display {
    fn default() -> Self {
        Self {
            speed: Unit::new("rpm", 30.0 / std::f64::consts::PI),
            torque: Unit::new("N·m", 1.0),
            angle: Unit::new("°", 180.0 / std::f64::consts::PI),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_prefix_comes_with_size() {
        let unit = Unit::new("N·m", 1.0);
        assert_eq!(unit.prefixed(1450.0).text, "N·m");
        assert_eq!(unit.prefixed(55_000.0).text, "kN·m");
        let mega = unit.prefixed(-4.6e7);
        assert_eq!((mega.text.as_str(), mega.of(1e6)), ("MN·m", 1.0));
        assert_eq!(Unit::new("lbf·ft", 0.7).prefixed(1e9).text, "lbf·ft");
    }
}
