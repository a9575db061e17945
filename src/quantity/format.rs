//! Numbers for people: few digits, no exponent where none is needed.

use super::{Dimension, to_unit};

/// Writes a number with at most `digits` significant digits, without trailing zeros or "-0".
pub fn format_number(value: f64, digits: usize) -> String {
    if !value.is_finite() {
        return if value.is_nan() { "-".to_owned() } else { "infinite".to_owned() };
    }
    let digits = digits.max(1);
    let scientific = format!("{value:.*e}", digits - 1);
    let Some((mantissa, exponent)) = scientific.split_once('e') else { return scientific };
    let exponent: i32 = exponent.parse().unwrap_or(0);
    let mantissa = without_trailing_zeros(mantissa);
    if mantissa == "0" || mantissa == "-0" {
        return "0".to_owned();
    }
    if (-4..7).contains(&exponent) {
        // Reading the rounded figure back and printing it plainly keeps the zeros before the point.
        let rounded: f64 = scientific.parse().unwrap_or(value);
        let decimals = usize::try_from(digits as i32 - 1 - exponent).unwrap_or(0);
        return without_trailing_zeros(&format!("{rounded:.decimals$}")).to_owned();
    }
    format!("{mantissa}e{exponent}")
}

fn without_trailing_zeros(text: &str) -> &str {
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { text }
}

/// Writes a value in SI in `unit` with at most four significant digits, the unit after it.
///
/// A unit that does not fit the dimension is passed over for the SI unit.
pub fn format_quantity(value: f64, dimension: Dimension, unit: &str) -> String {
    let (shown, unit) = match to_unit(value, dimension, unit) {
        Some(shown) => (shown, unit),
        None => (value, dimension.si_unit()),
    };
    let number = format_number(shown, 4);
    if unit == "1" { number } else { format!("{number} {unit}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_keep_four_digits_and_no_more() {
        for (value, text) in [
            (1500.0, "1500"),
            (14_323.94, "14320"),
            (0.123_456, "0.1235"),
            (-0.0, "0"),
            (2.0, "2"),
            (-1.50, "-1.5"),
            (99_999.0, "100000"),
            (1.0e-7, "1e-7"),
            (1.234_56e9, "1.235e9"),
            (0.000_123_456, "0.0001235"),
            (f64::NAN, "-"),
        ] {
            assert_eq!(format_number(value, 4), text);
        }
        assert_eq!(format_number(14_323.94, 5), "14324");
    }

    #[test]
    fn a_quantity_is_written_in_the_unit_asked_for() {
        let speed = 1500.0 * std::f64::consts::PI / 30.0;
        assert_eq!(format_quantity(speed, Dimension::Speed, "rpm"), "1500 rpm");
        assert_eq!(format_quantity(0.85, Dimension::One, "%"), "85 %");
        assert_eq!(format_quantity(3.0, Dimension::One, "1"), "3");
        assert_eq!(format_quantity(3.0, Dimension::Torque, "rpm"), "3 N*m");
    }
}
