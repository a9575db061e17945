//! From a number or a text with a unit to a value in SI.

use super::units::{Unit, find_unit, nearest_unit};
use super::{Dimension, format_number, to_unit, units};
use crate::diagnostic::Diagnostics;
use crate::tree::Node;

/// Why a quantity cannot be read, with what to type instead where that can be said.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct QuantityFault {
    /// One sentence, lower case at the start, without a full stop.
    pub message: String,
    /// What to type instead.
    pub hint: Option<String>,
}

impl QuantityFault {
    fn new(message: impl Into<String>) -> Self {
        Self { message: message.into(), hint: None }
    }

    fn with_hint(message: impl Into<String>, hint: impl Into<String>) -> Self {
        Self { message: message.into(), hint: Some(hint.into()) }
    }

    /// Records this fault at `path`.
    pub fn report(self, path: &str, faults: &mut Diagnostics) {
        match self.hint {
            Some(hint) => faults.error_hint(path, self.message, hint),
            None => faults.error(path, self.message),
        }
    }
}

/// Reads a quantity: a number in SI or a text with a unit; NaN stands in for a faulty one.
///
/// A bare number other than zero for an angle or a rotational speed is taken, with a warning
/// that tells how it was read.
pub fn read(path: &str, node: &Node, dimension: Dimension, faults: &mut Diagnostics) -> f64 {
    let (value, bare) = match node {
        Node::Number(value) if value.is_finite() => (*value, true),
        Node::Text(text) => match parse(text, dimension) {
            Ok(found) => found,
            Err(fault) => {
                fault.report(path, faults);
                return f64::NAN;
            }
        },
        other => {
            not_a_quantity(other, Some(dimension)).report(path, faults);
            return f64::NAN;
        }
    };
    if bare && value != 0.0 {
        warn_of_bare_number(path, value, dimension, faults);
    }
    value
}

/// Reads a quantity whose dimension its own unit tells; a bare number tells none.
///
/// The value is in SI; NaN stands in for a faulty one.
pub fn read_any(path: &str, node: &Node, faults: &mut Diagnostics) -> (f64, Option<Dimension>) {
    let found = match node {
        Node::Number(value) if value.is_finite() => Ok((*value, None)),
        Node::Text(text) => parse_any(text),
        other => Err(not_a_quantity(other, None)),
    };
    found.unwrap_or_else(|fault| {
        fault.report(path, faults);
        (f64::NAN, None)
    })
}

/// Reads the text of a quantity of a known dimension: the value in SI, and whether it stood bare.
pub fn parse(text: &str, dimension: Dimension) -> Result<(f64, bool), QuantityFault> {
    let (number, symbol) = split(text)?;
    if symbol.is_empty() {
        return Ok((number, true));
    }
    let unit = known_unit(text, symbol, Some(dimension))?;
    if unit.dimension != dimension {
        return Err(QuantityFault::with_hint(
            format!(
                "`{}` is {}, but {} is needed here",
                text.trim(),
                unit.dimension.with_article(),
                dimension.with_article()
            ),
            fitting_units(dimension),
        ));
    }
    finite(text, unit.to_si(number)).map(|value| (value, false))
}

/// Reads the text of a quantity of any dimension: the value in SI, and the dimension of its unit.
pub fn parse_any(text: &str) -> Result<(f64, Option<Dimension>), QuantityFault> {
    let (number, symbol) = split(text)?;
    if symbol.is_empty() {
        return Ok((number, None));
    }
    let unit = known_unit(text, symbol, None)?;
    finite(text, unit.to_si(number)).map(|value| (value, Some(unit.dimension)))
}

/// Tells how a bare number for an angle or a rotational speed is read, in case it was meant otherwise.
pub fn warn_of_bare_number(path: &str, value: f64, dimension: Dimension, faults: &mut Diagnostics) {
    let usual = match dimension {
        Dimension::Angle => "deg",
        Dimension::Speed => "rpm",
        _ => return,
    };
    let Some(shown) = to_unit(value, dimension, usual) else { return };
    faults.add(
        crate::diagnostic::Severity::Warning,
        path,
        format!(
            "{value} is read as {value} {} = {} {usual}",
            dimension.si_unit(),
            format_number(shown, 5)
        ),
        Some(format!("write the unit: \"{value} {}\" or \"{value} {usual}\"", dimension.si_unit())),
    );
}

fn known_unit(
    text: &str,
    symbol: &str,
    dimension: Option<Dimension>,
) -> Result<&'static Unit, QuantityFault> {
    find_unit(symbol).ok_or_else(|| {
        if symbol.starts_with([',', '\'', '_', '.'])
            || symbol.starts_with(|c: char| c.is_ascii_digit())
        {
            return QuantityFault::with_hint(
                format!("`{}` is not a number with a unit", text.trim()),
                "write a decimal point and no thousands mark, for example 1500.5",
            );
        }
        let message = format!("`{symbol}` is not a unit");
        match (nearest_unit(symbol, dimension), dimension) {
            (Some(near), _) => QuantityFault::with_hint(message, format!("did you mean `{near}`?")),
            (None, Some(dimension)) => QuantityFault::with_hint(message, fitting_units(dimension)),
            (None, None) => QuantityFault::new(message),
        }
    })
}

/// Splits `1.5e3 N*m` into its number and its unit.
fn split(text: &str) -> Result<(f64, &str), QuantityFault> {
    let text = text.trim();
    let (negative, rest) = match text.strip_prefix(['-', '\u{2212}']) {
        Some(rest) => (true, rest),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    };
    let length = number_length(rest.as_bytes());
    let (digits, symbol) = rest.split_at(length);
    let Ok(number) = digits.parse::<f64>() else {
        let word = text.trim_start_matches(['+', '-', '.']).to_ascii_lowercase();
        return Err(if word.starts_with("nan") || word.starts_with("inf") {
            QuantityFault::new(format!("`{text}` is not a finite number"))
        } else {
            QuantityFault::with_hint(
                format!("`{text}` is not a number with a unit"),
                "write a number, or a number and its unit, for example 12.5 N*m",
            )
        });
    };
    let number = if negative { -number } else { number };
    finite(text, number).map(|number| (number, symbol.trim_start()))
}

/// The number of bytes of the decimal number at the start.
fn number_length(bytes: &[u8]) -> usize {
    let digits_from =
        |start: usize| bytes.iter().skip(start).take_while(|byte| byte.is_ascii_digit()).count();
    let mut length = digits_from(0);
    if bytes.get(length) == Some(&b'.') {
        let decimals = digits_from(length + 1);
        if length + decimals > 0 {
            length += 1 + decimals;
        }
    }
    if length > 0 && matches!(bytes.get(length), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(length + 1), Some(b'+' | b'-')));
        let exponent = digits_from(length + 1 + sign);
        if exponent > 0 {
            length += 1 + sign + exponent;
        }
    }
    length
}

fn finite(text: &str, value: f64) -> Result<f64, QuantityFault> {
    if value.is_finite() {
        Ok(value)
    } else {
        Err(QuantityFault::new(format!("`{}` is not a finite number", text.trim())))
    }
}

fn not_a_quantity(node: &Node, dimension: Option<Dimension>) -> QuantityFault {
    let wanted = dimension.map_or_else(|| "a quantity".to_owned(), Dimension::with_article);
    match node {
        Node::Number(_) => QuantityFault::new(format!("{wanted} must be a finite number")),
        other => QuantityFault::new(format!("{wanted} is needed here, not {}", other.kind())),
    }
}

fn fitting_units(dimension: Dimension) -> String {
    let list = units(dimension);
    match list.as_slice() {
        [only] => format!("the unit that fits is {only}"),
        list => format!("units that fit: {}", list.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn fault(text: &str, dimension: Dimension) -> QuantityFault {
        parse(text, dimension).unwrap_err()
    }

    #[test]
    fn numbers_are_read_with_and_without_units() {
        for (text, value) in [
            ("1500", 1500.0),
            ("1e-7", 1e-7),
            (" +2.5E+3 N*m ", 2500.0),
            ("20 kN*m", 20_000.0),
            ("-3Nm", -3.0),
            ("\u{2212}3 N·m", -3.0),
            (".5 N m", 0.5),
            ("5. Nm", 5.0),
        ] {
            let (found, _) = parse(text, Dimension::Torque).unwrap();
            assert!((found - value).abs() <= 1e-12 * value.abs(), "{text}: {found}");
        }
        assert_eq!(parse("85 %", Dimension::One).map(|found| found.0), Ok(0.85));
        assert_eq!(parse("293.15 K", Dimension::Temperature).map(|found| found.0), Ok(20.0));
    }

    #[test]
    fn a_wrong_dimension_names_the_units_that_fit() {
        let found = fault("0.25 kg", Dimension::Inertia);
        assert_eq!(found.message, "`0.25 kg` is a mass, but a moment of inertia is needed here");
        assert_eq!(
            found.hint.as_deref(),
            Some("units that fit: kg*m2, g*m2, t*m2, kg*cm2, lb*ft2")
        );
    }

    #[test]
    fn an_unknown_unit_offers_the_nearest_one() {
        assert_eq!(fault("5 RPM", Dimension::Speed).hint.as_deref(), Some("did you mean `rpm`?"));
        assert_eq!(fault("5 rmp", Dimension::Speed).hint.as_deref(), Some("did you mean `rpm`?"));
        assert_eq!(
            fault("5 quids", Dimension::Mass).hint.as_deref(),
            Some("units that fit: kg, t")
        );
    }

    #[test]
    fn what_is_no_finite_number_is_refused() {
        for text in ["nan", ".nan", "-inf N*m", ".inf", "1e999", "1e308 MN*m"] {
            let found = fault(text, Dimension::Torque).message;
            assert!(found.contains("not a finite number"), "{text}: {found}");
        }
        for text in ["", "N*m", "fast", "1,5 N*m", "1 500 N*m", "e5", ".", "-"] {
            let found = fault(text, Dimension::Torque).message;
            assert!(found.contains("not a number with a unit"), "{text}: {found}");
        }
    }

    #[test]
    fn a_bare_speed_is_taken_with_a_warning() {
        let mut faults = Diagnostics::new();
        let value = read("p", &Node::Number(1500.0), Dimension::Speed, &mut faults);
        assert!((value - 1500.0).abs() < 1e-12);
        let messages: Vec<_> = faults.iter().map(|entry| entry.message.as_str()).collect();
        assert_eq!(messages, ["1500 is read as 1500 rad/s = 14324 rpm"]);
        let mut quiet = Diagnostics::new();
        read("p", &Node::Text("1500 rad/s".into()), Dimension::Speed, &mut quiet);
        read("p", &Node::Number(0.0), Dimension::Angle, &mut quiet);
        read("p", &Node::Number(7.0), Dimension::Torque, &mut quiet);
        assert!(quiet.is_empty());
    }

    #[test]
    fn a_unit_tells_its_dimension() {
        assert_eq!(parse_any("3 m/s"), Ok((3.0, Some(Dimension::LinearSpeed))));
        assert_eq!(parse_any("3"), Ok((3.0, None)));
    }
}
