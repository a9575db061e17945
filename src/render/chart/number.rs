//! Numbers as a reader of charts expects them.

/// True minus.
pub const MINUS: char = '\u{2212}';
/// No-break space: before units and as thousands mark.
pub const NBSP: char = '\u{00A0}';

/// A value with at most `digits` significant digits and no trailing zeros after the point.
///
/// From 10 000 on thousands are marked; what cannot be told is a dash.
pub fn number(value: f64, digits: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    if value == 0.0 {
        return "0".to_owned();
    }
    let digits = digits.clamp(1, 15) as i32;
    // Rounded first: 9.9996 has one place more than its logarithm says.
    let rounded: f64 = format!("{:.*e}", digits as usize - 1, value).parse().unwrap_or(value);
    let decimals = (digits - 1 - rounded.abs().log10().floor() as i32).clamp(0, 12) as usize;
    let text = fixed(rounded, decimals);
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// A value with a fixed number of decimals, true minus, thousands marks and never "-0".
pub fn fixed(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    let plain = format!("{:.*}", decimals, value.abs());
    let zero = plain.chars().all(|letter| matches!(letter, '0' | '.'));
    let (whole, rest) = match plain.split_once('.') {
        Some((whole, rest)) => (whole, Some(rest)),
        None => (plain.as_str(), None),
    };
    let mut text = String::new();
    if value < 0.0 && !zero {
        text.push(MINUS);
    }
    for (place, letter) in whole.chars().enumerate() {
        if whole.len() > 4 && place > 0 && (whole.len() - place) % 3 == 0 {
            text.push(NBSP);
        }
        text.push(letter);
    }
    if let Some(rest) = rest {
        text.push('.');
        text.push_str(rest);
    }
    text
}

/// A label for a tick: its decimals follow from the step.
pub fn tick(value: f64, step: f64) -> String {
    fixed(value, decimals_of_step(step))
}

fn decimals_of_step(step: f64) -> usize {
    if !(step.is_finite() && step > 0.0) {
        return 0;
    }
    let places = (-step.log10().floor()).max(0.0) as usize;
    // A step of 2.5 needs one place more than its size says.
    let scaled = step * 10_f64.powi(places as i32);
    let extra = usize::from((scaled - scaled.round()).abs() > 1e-6);
    (places + extra).min(9)
}

/// Labels for values that stand in a row: as few decimals as tell them apart to a thirtieth of
/// their smallest distance, the same for all.
pub fn alike(values: &[f64]) -> Vec<String> {
    let mut sorted: Vec<f64> = values.iter().copied().filter(|value| value.is_finite()).collect();
    sorted.sort_by(f64::total_cmp);
    let step = sorted
        .windows(2)
        .map(|pair| pair[1] - pair[0])
        .filter(|step| *step > 0.0)
        .fold(f64::INFINITY, f64::min);
    if !step.is_finite() {
        return values.iter().map(|value| number(*value, 4)).collect();
    }
    let decimals = (0..9).find(|decimals| {
        let power = 10_f64.powi(*decimals);
        sorted.iter().all(|value| ((value * power).round() / power - value).abs() <= step / 30.0)
    });
    values.iter().map(|value| fixed(*value, decimals.unwrap_or(9) as usize)).collect()
}

/// A number and its unit, held together by a no-break space.
pub fn with_unit(value: f64, digits: usize, unit: &str) -> String {
    if unit.is_empty() {
        number(value, digits)
    } else {
        format!("{}{NBSP}{unit}", number(value, digits))
    }
}

/// A share as percent without decimals.
pub fn percent(share: f64) -> String {
    format!("{}{NBSP}%", fixed(100.0 * share, 0))
}

/// A unit as it is printed: `N*m` becomes N·m, `kg*m2` becomes kg·m².
pub fn unit_text(unit: &str) -> String {
    if unit == "1" {
        return String::new();
    }
    unit.replace('*', "·")
        .replace("m2", "m²")
        .replace("rad2", "rad²")
        .replace("s2", "s²")
        .replace("m3", "m³")
        .replace("degC", "°C")
}

/// A name of the file as words: `motor_rotor` becomes "motor rotor".
pub fn words(name: &str) -> String {
    name.replace('_', " ")
}

/// The same text with a capital at its head.
pub fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn minus_is_true_and_zero_has_no_sign() {
        assert_eq!(tick(-500.0, 500.0), "\u{2212}500");
        assert_eq!(tick(-0.0, 0.5), "0.0");
        assert_eq!(fixed(-0.004, 2), "0.00");
    }

    #[test]
    fn thousands_are_marked_from_ten_thousand_on() {
        assert_eq!(number(1500.0, 4), "1500");
        assert_eq!(number(12_500.0, 4), "12\u{a0}500");
        assert_eq!(number(-1_234_567.0, 7), "\u{2212}1\u{a0}234\u{a0}567");
    }

    #[test]
    fn decimals_follow_the_step() {
        assert_eq!(tick(1.0, 0.5), "1.0");
        assert_eq!(tick(0.25, 0.05), "0.25");
        assert_eq!(tick(2.5, 2.5), "2.5");
        assert_eq!(tick(150.0, 50.0), "150");
    }

    #[test]
    fn significant_digits_are_rounded_once() {
        assert_eq!(number(9.9996, 4), "10");
        assert_eq!(number(0.038_25, 2), "0.038");
        assert_eq!(number(272.727, 4), "272.7");
        assert_eq!(number(f64::NAN, 4), "–");
    }

    #[test]
    fn values_in_a_row_have_the_same_decimals() {
        assert_eq!(alike(&[0.5, 0.75, 1.0]), ["0.50", "0.75", "1.00"]);
        assert_eq!(alike(&[300.0, 334.48, 368.97]), ["300", "334", "369"]);
        assert_eq!(alike(&[2.0]), ["2"]);
    }

    #[test]
    fn units_hold_to_their_number() {
        assert_eq!(with_unit(400.0, 4, "N·m"), "400\u{a0}N·m");
        assert_eq!(percent(0.849), "85\u{a0}%");
        assert_eq!(unit_text("N*m*s2/rad2"), "N·m·s²/rad²");
    }
}
