//! The units of the scenario file and their factors to SI.
//!
//! Exact by definition where a factor is not rounded (NIST SP 811, appendix B):
//! 1 lbf = 4.4482216152605 N, 1 ft = 0.3048 m, 1 in = 0.0254 m, 1 lb = 0.45359237 kg,
//! 1 hp = 550 ft*lbf/s, 1 PS = 75 kgf*m/s.

use super::Dimension;
use std::f64::consts::PI;

/// One spelling of a unit: `value in SI = value * factor + offset`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unit {
    /// As the program writes it.
    pub symbol: &'static str,
    /// What it measures.
    pub dimension: Dimension,
    factor: f64,
    offset: f64,
}

const RPM: f64 = PI / 30.0;
const DEGREE: f64 = PI / 180.0;
const POUND_FORCE: f64 = 4.448_221_615_260_5;
const FOOT: f64 = 0.3048;
const INCH: f64 = 0.0254;
const POUND: f64 = 0.453_592_37;
const HORSEPOWER: f64 = 550.0 * FOOT * POUND_FORCE;
const METRIC_HORSEPOWER: f64 = 735.498_75;

const fn unit(symbol: &'static str, dimension: Dimension, factor: f64) -> Unit {
    Unit { symbol, dimension, factor, offset: 0.0 }
}

/// Every unit, the SI unit of a dimension first.
const UNITS: &[Unit] = &[
    unit("1", Dimension::One, 1.0),
    unit("%", Dimension::One, 0.01),
    unit("s", Dimension::Time, 1.0),
    unit("ms", Dimension::Time, 1e-3),
    unit("min", Dimension::Time, 60.0),
    unit("h", Dimension::Time, 3600.0),
    unit("rad", Dimension::Angle, 1.0),
    unit("deg", Dimension::Angle, DEGREE),
    unit("rev", Dimension::Angle, 2.0 * PI),
    unit("rad/s", Dimension::Speed, 1.0),
    unit("rpm", Dimension::Speed, RPM),
    unit("r/min", Dimension::Speed, RPM),
    unit("deg/s", Dimension::Speed, DEGREE),
    unit("rev/s", Dimension::Speed, 2.0 * PI),
    unit("rad/s2", Dimension::Acceleration, 1.0),
    unit("rpm/s", Dimension::Acceleration, RPM),
    unit("N*m", Dimension::Torque, 1.0),
    unit("kN*m", Dimension::Torque, 1e3),
    unit("MN*m", Dimension::Torque, 1e6),
    unit("mN*m", Dimension::Torque, 1e-3),
    unit("lbf*ft", Dimension::Torque, POUND_FORCE * FOOT),
    unit("lbf*in", Dimension::Torque, POUND_FORCE * INCH),
    unit("kg*m2", Dimension::Inertia, 1.0),
    unit("g*m2", Dimension::Inertia, 1e-3),
    unit("t*m2", Dimension::Inertia, 1e3),
    unit("kg*cm2", Dimension::Inertia, 1e-4),
    unit("lb*ft2", Dimension::Inertia, POUND * FOOT * FOOT),
    unit("N*m/rad", Dimension::Stiffness, 1.0),
    unit("kN*m/rad", Dimension::Stiffness, 1e3),
    unit("MN*m/rad", Dimension::Stiffness, 1e6),
    unit("GN*m/rad", Dimension::Stiffness, 1e9),
    unit("N*m/deg", Dimension::Stiffness, 1.0 / DEGREE),
    unit("lbf*in/rad", Dimension::Stiffness, POUND_FORCE * INCH),
    unit("N*m*s/rad", Dimension::Damping, 1.0),
    unit("kN*m*s/rad", Dimension::Damping, 1e3),
    unit("MN*m*s/rad", Dimension::Damping, 1e6),
    unit("N*m/s", Dimension::TorqueRate, 1.0),
    unit("kN*m/s", Dimension::TorqueRate, 1e3),
    unit("MN*m/s", Dimension::TorqueRate, 1e6),
    unit("N*m*s2/rad2", Dimension::TorquePerSpeedSquared, 1.0),
    unit("N*m/rpm2", Dimension::TorquePerSpeedSquared, 1.0 / (RPM * RPM)),
    unit("W", Dimension::Power, 1.0),
    unit("kW", Dimension::Power, 1e3),
    unit("MW", Dimension::Power, 1e6),
    unit("hp", Dimension::Power, HORSEPOWER),
    unit("PS", Dimension::Power, METRIC_HORSEPOWER),
    unit("J", Dimension::Energy, 1.0),
    unit("kJ", Dimension::Energy, 1e3),
    unit("MJ", Dimension::Energy, 1e6),
    unit("degC", Dimension::Temperature, 1.0),
    Unit { symbol: "K", dimension: Dimension::Temperature, factor: 1.0, offset: -273.15 },
    unit("J/K", Dimension::HeatCapacity, 1.0),
    unit("kJ/K", Dimension::HeatCapacity, 1e3),
    unit("K/W", Dimension::ThermalResistance, 1.0),
    unit("1/K", Dimension::PerKelvin, 1.0),
    unit("%/K", Dimension::PerKelvin, 0.01),
    unit("V", Dimension::Voltage, 1.0),
    unit("A", Dimension::Current, 1.0),
    unit("ohm", Dimension::Resistance, 1.0),
    unit("m", Dimension::Length, 1.0),
    unit("mm", Dimension::Length, 1e-3),
    unit("m/s", Dimension::LinearSpeed, 1.0),
    unit("kg", Dimension::Mass, 1.0),
    unit("t", Dimension::Mass, 1e3),
    unit("N", Dimension::Force, 1.0),
    unit("kN", Dimension::Force, 1e3),
    unit("Pa", Dimension::Pressure, 1.0),
    unit("GPa", Dimension::Pressure, 1e9),
    unit("kg/m3", Dimension::Density, 1.0),
    unit("Hz", Dimension::Frequency, 1.0),
];

impl Unit {
    /// The value in SI of `value` in this unit.
    pub fn to_si(&self, value: f64) -> f64 {
        value * self.factor + self.offset
    }

    /// The value in this unit of `value` in SI.
    pub fn from_si(&self, value: f64) -> f64 {
        (value - self.offset) / self.factor
    }
}

/// The symbols of the units that fit a dimension, the SI unit first.
pub fn units(dimension: Dimension) -> Vec<&'static str> {
    UNITS.iter().filter(|unit| unit.dimension == dimension).map(|unit| unit.symbol).collect()
}

/// The unit of this spelling, of whatever dimension.
pub fn find_unit(text: &str) -> Option<&'static Unit> {
    if let Some(exact) = UNITS.iter().find(|unit| unit.symbol == text) {
        return Some(exact);
    }
    let plain = plain_spelling(text);
    UNITS.iter().find(|unit| same_unit(unit.symbol, &plain))
}

/// The unit nearest to a misspelt one: first by letters of the wrong size, then by distance.
pub(super) fn nearest_unit(text: &str, dimension: Option<Dimension>) -> Option<&'static str> {
    let plain = plain_spelling(text).to_lowercase();
    let fitting = || UNITS.iter().filter(|unit| dimension.is_none_or(|d| unit.dimension == d));
    fitting()
        .find(|unit| same_unit(&unit.symbol.to_lowercase(), &plain))
        .map(|unit| unit.symbol)
        .or_else(|| crate::diagnostic::closest(text, fitting().map(|unit| unit.symbol)))
}

/// Converts a value in SI to a unit; `None` when the unit does not fit the dimension.
pub fn to_unit(value: f64, dimension: Dimension, unit: &str) -> Option<f64> {
    find_unit(unit).filter(|unit| unit.dimension == dimension).map(|unit| unit.from_si(value))
}

/// Converts a value in a unit to SI; `None` when the unit does not fit the dimension.
pub fn from_unit(value: f64, dimension: Dimension, unit: &str) -> Option<f64> {
    find_unit(unit).filter(|unit| unit.dimension == dimension).map(|unit| unit.to_si(value))
}

/// Brings the many ways to write a product or a power to one: `kg·m²` becomes `kg*m2`.
fn plain_spelling(text: &str) -> String {
    let mut plain = String::with_capacity(text.len());
    for letter in text.trim().chars() {
        match letter {
            '*' | '·' | '⋅' | '∙' | '×' | '.' => star(&mut plain),
            _ if letter.is_whitespace() => star(&mut plain),
            '/' => {
                if plain.ends_with('*') {
                    plain.pop();
                }
                plain.push('/');
            }
            '^' => {}
            '²' => plain.push('2'),
            '³' => plain.push('3'),
            '°' => plain.push_str("deg"),
            '\u{3a9}' | '\u{2126}' => plain.push_str("ohm"),
            _ => plain.push(letter),
        }
    }
    plain
}

fn star(plain: &mut String) {
    if !plain.is_empty() && !plain.ends_with(['*', '/']) {
        plain.push('*');
    }
}

/// True when `typed` is `symbol`, product signs left out or not.
fn same_unit(symbol: &str, typed: &str) -> bool {
    let mut typed = typed.bytes().peekable();
    for letter in symbol.bytes() {
        if typed.peek() == Some(&letter) {
            typed.next();
        } else if letter != b'*' {
            return false;
        }
    }
    typed.next().is_none()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_spelling_of_a_product_or_a_power_means_the_same() {
        for spelling in ["N*m", "N·m", "Nm", "N m", "N.m", "N * m"] {
            assert_eq!(find_unit(spelling).map(|unit| unit.symbol), Some("N*m"), "{spelling}");
        }
        for spelling in ["kg·m²", "kg*m^2", "kg m2", "kgm2", "kg m^2", "kg⋅m²"] {
            assert_eq!(find_unit(spelling).map(|unit| unit.symbol), Some("kg*m2"), "{spelling}");
        }
        for spelling in ["Nms/rad", "N·m·s/rad", "N m s / rad", "Nm s/rad"] {
            assert_eq!(
                find_unit(spelling).map(|unit| unit.symbol),
                Some("N*m*s/rad"),
                "{spelling}"
            );
        }
        assert_eq!(find_unit("°C").map(|unit| unit.symbol), Some("degC"));
        assert_eq!(find_unit("rad/s²").map(|unit| unit.symbol), Some("rad/s2"));
    }

    #[test]
    fn a_product_sign_that_does_not_belong_makes_no_unit() {
        assert!(find_unit("m s").is_none(), "metre seconds are not milliseconds");
        assert!(find_unit("k g").is_none());
        assert!(find_unit("").is_none());
        assert!(find_unit("RPM").is_none());
    }

    #[test]
    fn milli_and_mega_differ() {
        assert_eq!(from_unit(1.0, Dimension::Torque, "mNm"), Some(1e-3));
        assert_eq!(from_unit(1.0, Dimension::Torque, "MNm"), Some(1e6));
    }

    /// NIST SP 811, appendix B (from memory): 1 lbf*ft = 1.355 818 N*m, 1 lbf*in = 0.112 984 8 N*m,
    /// 1 hp = 745.6999 W, metric hp = 735.4988 W, 1 rpm = 0.104 719 8 rad/s; 1 lb*ft2 = 0.042 140 11 kg*m2.
    #[test]
    fn factors_agree_with_the_published_table() {
        let table = [
            (Dimension::Torque, "lbf*ft", 1.355_818),
            (Dimension::Torque, "lbf*in", 0.112_984_8),
            (Dimension::Power, "hp", 745.699_9),
            (Dimension::Power, "PS", 735.498_8),
            (Dimension::Speed, "rpm", 0.104_719_8),
            (Dimension::Inertia, "lb*ft2", 0.042_140_11),
        ];
        for (dimension, unit, printed) in table {
            let ours = from_unit(1.0, dimension, unit).unwrap();
            assert!((ours / printed - 1.0).abs() < 5e-7, "{unit}: {ours}");
        }
    }

    #[test]
    fn the_first_unit_of_a_dimension_is_its_si_unit() {
        for unit in UNITS {
            assert_eq!(units(unit.dimension)[0], unit.dimension.si_unit());
            assert_eq!(from_unit(2.5, unit.dimension, unit.dimension.si_unit()), Some(2.5));
        }
    }

    #[test]
    fn a_value_goes_to_a_unit_and_back() {
        for unit in UNITS {
            let there = unit.from_si(unit.to_si(12.5));
            assert!((there - 12.5).abs() < 1e-9, "{}: {there}", unit.symbol);
        }
        assert_eq!(to_unit(20.0, Dimension::Temperature, "K"), Some(293.15));
    }
}
