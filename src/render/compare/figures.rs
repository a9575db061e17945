//! Figures of a comparison in the units of people.

use super::{NOTABLE, ROUNDING};
use crate::analysis::comparison::{Comparison, Figure, Found};
use crate::quantity::format_number;
use crate::render::shown::{self, Shown};

/// Channels whose extremes are told; all others stand in the JSON and the table.
const CHANNELS: [&str; 4] = [".speed", ".torque", ".slip_speed", ".flow"];

/// The value of a figure for people.
pub fn value(figure: &Figure, found: Option<&Found>, shown: Shown<'_>) -> String {
    match found {
        None => "\u{2013}".to_owned(),
        Some(Found::Word("not met")) => "NOT MET".to_owned(),
        Some(Found::Word(word)) => (*word).to_owned(),
        Some(Found::Count(count)) => count.to_string(),
        Some(Found::Number(value)) => {
            let value = if value.abs() < ROUNDING * figure.size { 0.0 } else { *value };
            match figure.unit {
                "J" => shown::energy(value),
                unit => shown.value(&figure.channel, unit, value),
            }
        }
    }
}

/// A change with its sign: `+12.3 %`; nothing where it says nothing.
pub fn change(change: Option<f64>) -> String {
    match change {
        Some(change) if change.abs() >= 0.5 * NOTABLE => {
            let sign = if change > 0.0 { "+" } else { "-" };
            format!("{sign}{} %", format_number(100.0 * change.abs(), 3))
        }
        _ => String::new(),
    }
}

/// The figures that people are told: what differs notably, channels only of the usual kinds.
pub fn told(comparison: &Comparison) -> Vec<&Figure> {
    comparison
        .differing(NOTABLE)
        .filter(|figure| !figure.path.starts_with("channels.") || is_usual(&figure.of))
        .filter(|figure| !figure.path.ends_with(".net_slips") || !follows_slips(comparison, figure))
        .collect()
}

fn is_usual(channel: &str) -> bool {
    CHANNELS.iter().any(|ending| channel.ends_with(ending))
}

/// True when the net count says no more than the count of all slips.
fn follows_slips(comparison: &Comparison, net: &Figure) -> bool {
    let path = net.path.replace(".net_slips", ".slips");
    let all = comparison.figures.iter().find(|figure| figure.path == path);
    all.is_some_and(|all| {
        let size = |found: &Option<Found>| found.as_ref().and_then(Found::number).map(f64::abs);
        all.values.iter().map(size).eq(net.values.iter().map(size))
    })
}

/// How many figures differ beside those told, and how many are the same.
pub fn rest(comparison: &Comparison) -> (usize, usize) {
    let different = comparison.differing(ROUNDING).count();
    (different - told(comparison).len().min(different), comparison.figures.len() - different)
}

/// The sentence on what is not told.
pub fn rest_sentence(comparison: &Comparison, where_all: &str) -> String {
    let (more, same) = rest(comparison);
    let of = |count: usize, one: &str, many: &str| match count {
        0 => "no figure".to_owned() + one,
        1 => "1 figure".to_owned() + one,
        _ => format!("{count} figures{many}"),
    };
    format!(
        "Beside these {} by less than 0.1 % or in a channel of less interest, and {}; all stand in {where_all}.",
        of(more, " differs", " differ"),
        of(same, " is the same", " are the same")
    )
}
