//! How far measured records and the run are apart, in words and for machines.

use super::json::named;
use super::number::{json, json_optional};
use super::shown::{self, Shown};
use super::table::Table;
use crate::analysis::records::RecordComparison;
use serde_json::Value;

/// The records as JSON, by name: SI.
pub fn to_json(records: &[RecordComparison]) -> Value {
    named(records.iter().map(|one| {
        let figures = named([
            ("of", Value::from(one.of.as_str())),
            ("unit", Value::from(one.unit)),
            ("from", json(one.window[0])),
            ("to", json(one.window[1])),
            ("rows", Value::from(one.rows)),
            ("rms", json(one.rms)),
            ("rms_share", json_optional(one.rms_share)),
            ("bias", json(one.bias)),
            ("peak_measured", json(one.peak_measured)),
            ("peak_measured_time", json(one.peak_measured_time)),
            ("peak_computed", json(one.peak_computed)),
            ("peak_computed_time", json(one.peak_computed_time)),
            ("peak_error", json_optional(one.peak_error)),
            ("lag", json_optional(one.lag)),
            ("rms_without_lag", json_optional(one.rms_without_lag)),
        ]);
        (one.name.as_str(), figures)
    }))
}

/// The figures of one record for people, in the order of the heads: record, channel, rows, root
/// mean square, its share, peaks, their difference, lag, root mean square without it.
pub fn cells(one: &RecordComparison, shown: Shown<'_>) -> [String; 9] {
    let value = |it: f64| shown.value(&one.of, one.unit, it);
    let percent = |it: Option<f64>| it.map_or_else(String::new, shown::percent);
    let sign = |it: Option<f64>| if it.is_some_and(|it| it > 0.0) { "+" } else { "" };
    [
        one.name.clone(),
        one.of.clone(),
        one.rows.to_string(),
        value(one.rms),
        percent(one.rms_share),
        format!("{} / {}", value(one.peak_measured), value(one.peak_computed)),
        format!("{}{}", sign(one.peak_error), percent(one.peak_error)),
        one.lag.map_or_else(String::new, |it| format!("{}{}", sign(one.lag), shown::time(it))),
        one.rms_without_lag.map_or_else(String::new, value),
    ]
}

/// Heads of these cells.
pub const HEADS: [&str; 9] = [
    "record",
    "of",
    "rows",
    "rms error",
    "of span",
    "peak measured / computed",
    "peak off",
    "lag",
    "rms less lag",
];

/// The records for a terminal.
pub fn text(records: &[RecordComparison], shown: Shown<'_>) -> String {
    if records.is_empty() {
        return String::new();
    }
    let mut table = Table::new("<<>>>>>>>");
    table.row(HEADS);
    for one in records {
        table.cells(cells(one, shown).to_vec());
    }
    format!(
        "\nMeasured against computed (a lag above zero: the run does it later)\n{}",
        table.text(2)
    )
}
