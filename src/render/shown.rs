//! Figures for people: in the units the file asks for, with few digits.

use crate::quantity::{Dimension, format_number, format_quantity};
use crate::scenario::Display;

/// Significant digits of figures for people.
const DIGITS: usize = 4;

/// Writes figures in the units of a scenario.
#[derive(Clone, Copy, Debug)]
pub struct Shown<'a> {
    display: &'a Display,
}

impl<'a> Shown<'a> {
    /// For the units of a scenario.
    pub fn new(display: &'a Display) -> Self {
        Self { display }
    }

    /// A speed given in rad/s.
    pub fn speed(&self, value: f64) -> String {
        format_quantity(value, Dimension::Speed, &self.display.speed)
    }

    /// A torque given in N*m.
    pub fn torque(&self, value: f64) -> String {
        format_quantity(value, Dimension::Torque, &self.display.torque)
    }

    /// An angle given in rad.
    pub fn angle(&self, value: f64) -> String {
        format_quantity(value, Dimension::Angle, &self.display.angle)
    }

    /// A load angle given in electrical rad.
    pub fn electrical_angle(&self, value: f64) -> String {
        let angle = self.angle(value);
        format!("{angle} electrical")
    }

    /// The value of a channel, given in its SI unit: the figure and its unit.
    pub fn channel(&self, name: &str, unit: &str, value: f64) -> (String, String) {
        let in_unit = |dimension, wanted: &str| {
            split(&format_quantity(value, dimension, wanted), value, wanted)
        };
        match unit {
            // Electrical: a shaft's unit would mislead.
            "rad/s" if name.ends_with(".slip_speed") => in_unit(Dimension::Speed, "rad/s"),
            "rad/s" => in_unit(Dimension::Speed, &self.display.speed),
            "rad" => in_unit(Dimension::Angle, &self.display.angle),
            "N*m" => in_unit(Dimension::Torque, &self.display.torque),
            "1" if name.ends_with(".pull_out_share") => in_unit(Dimension::One, "%"),
            _ => (format_number(value, DIGITS), if unit == "1" { "" } else { unit }.to_owned()),
        }
    }

    /// The value of a channel with its unit.
    pub fn value(&self, name: &str, unit: &str, value: f64) -> String {
        if unit == "s" {
            return time(value);
        }
        let (figure, unit) = self.channel(name, unit, value);
        if unit.is_empty() { figure } else { format!("{figure} {unit}") }
    }
}

fn split(text: &str, value: f64, wanted: &str) -> (String, String) {
    match text.split_once(' ') {
        Some((figure, unit)) => (figure.to_owned(), unit.to_owned()),
        None => (format_number(value, DIGITS), wanted.to_owned()),
    }
}

/// A time in s, or in ms when it is short.
pub fn time(value: f64) -> String {
    let short = value != 0.0 && value.abs() < 0.1;
    format_quantity(value, Dimension::Time, if short { "ms" } else { "s" })
}

/// A share as a percentage.
pub fn percent(share: f64) -> String {
    format!("{} %", format_number(100.0 * share, 3))
}

/// An energy given in J with a fitting prefix.
pub fn energy(value: f64) -> String {
    prefixed(value, Dimension::Energy, ["J", "kJ", "MJ"])
}

/// A power given in W with a fitting prefix.
pub fn power(value: f64) -> String {
    prefixed(value, Dimension::Power, ["W", "kW", "MW"])
}

fn prefixed(value: f64, dimension: Dimension, units: [&str; 3]) -> String {
    let unit = match value.abs() {
        size if size >= 1e6 => units[2],
        size if size >= 1e3 => units[1],
        _ => units[0],
    };
    format_quantity(value, dimension, unit)
}

/// A plain number.
pub fn number(value: f64) -> String {
    format_number(value, DIGITS)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_come_in_the_units_asked_for() {
        let display = Display { speed: "rpm".into(), torque: "kN*m".into(), angle: "deg".into() };
        let shown = Shown::new(&display);
        assert_eq!(shown.value("rotor.speed", "rad/s", std::f64::consts::PI), "30 rpm");
        assert_eq!(shown.value("gear.slip_speed", "rad/s", 3.0), "3 rad/s");
        assert_eq!(shown.value("gear.pull_out_share", "1", 0.85), "85 %");
        assert_eq!(shown.value("gear.slips", "1", 2.0), "2");
        assert_eq!(shown.value("shaft.torque", "N*m", 1500.0), "1.5 kN*m");
        assert_eq!(shown.value("motor.power", "W", 1500.0), "1500 W");
    }

    #[test]
    fn prefixes_fit_the_size() {
        assert_eq!(energy(63_143.8), "63.14 kJ");
        assert_eq!(power(-2.5e6), "-2.5 MW");
        assert_eq!(time(0.016_57), "16.57 ms");
        assert_eq!(time(0.0), "0 s");
        assert_eq!(percent(0.743_8), "74.4 %");
    }
}
