//! Numbers for files: the fewest digits that read back exactly, never "-0", NaN or infinity.

use serde_json::Value;

/// A number for JSON; null when it is not finite.
pub fn json(value: f64) -> Value {
    // Adding zero turns a negative zero into zero.
    serde_json::Number::from_f64(value + 0.0).map_or(Value::Null, Value::Number)
}

/// A number that may be absent, for JSON.
pub fn json_optional(value: Option<f64>) -> Value {
    value.map_or(Value::Null, json)
}

/// Appends a number for CSV; nothing when it is not finite.
pub fn append(line: &mut Vec<u8>, value: f64) {
    if !value.is_finite() {
        return;
    }
    let start = line.len();
    // Writing to memory cannot fail.
    let _ = serde_json::to_writer(&mut *line, &(value + 0.0));
    if line.len() >= start + 2 && line.ends_with(b".0") {
        line.truncate(line.len() - 2);
    }
}

/// A number for CSV as text.
pub fn plain(value: f64) -> String {
    let mut line = Vec::new();
    append(&mut line, value);
    String::from_utf8(line).unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_back_exactly() {
        for value in [
            0.1,
            1.0 / 3.0,
            6.0,
            1e-7,
            1e21,
            1.797_693_134_862_315_7e308,
            5e-324,
            -2.5e-3,
            123_456_789.125,
        ] {
            let text = plain(value);
            assert_eq!(text.parse::<f64>().unwrap().to_bits(), value.to_bits(), "{text}");
            let text = json(value).to_string();
            assert_eq!(text.parse::<f64>().unwrap().to_bits(), value.to_bits(), "{text}");
        }
    }

    #[test]
    fn no_digit_is_wasted() {
        for (value, text) in [(0.1, "0.1"), (3.0, "3"), (-0.0, "0"), (1e-7, "1e-7"), (250.0, "250")]
        {
            assert_eq!(plain(value), text);
        }
        assert_eq!(json(-0.0).to_string(), "0.0");
    }

    #[test]
    fn what_is_not_finite_is_left_out() {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            assert_eq!(plain(value), "");
            assert_eq!(json(value), Value::Null);
        }
        assert_eq!(json_optional(None), Value::Null);
    }
}
