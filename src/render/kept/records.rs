//! From `summary.json` back to what was told of measured records.

use crate::analysis::records::RecordComparison;
use crate::scenario::Scenario;
use serde_json::Value;

/// The records of a summary; one that cannot be understood is left out, since no result hangs on it.
pub(super) fn read(summary: &Value, scenario: &Scenario) -> Vec<RecordComparison> {
    let Some(Value::Object(records)) = summary.get("measured") else { return Vec::new() };
    records.iter().filter_map(|(name, record)| one(name, record, scenario)).collect()
}

fn one(name: &str, record: &Value, scenario: &Scenario) -> Option<RecordComparison> {
    let number = |key: &str| record.get(key).and_then(Value::as_f64);
    let of = record.get("of")?.as_str()?;
    let channel = scenario.channels.iter().find(|channel| channel.name == of)?;
    Some(RecordComparison {
        name: name.to_owned(),
        of: of.to_owned(),
        unit: channel.unit,
        window: [number("from")?, number("to")?],
        rows: usize::try_from(record.get("rows")?.as_u64()?).ok()?,
        rms: number("rms")?,
        rms_share: number("rms_share"),
        bias: number("bias")?,
        peak_measured: number("peak_measured")?,
        peak_measured_time: number("peak_measured_time")?,
        peak_computed: number("peak_computed")?,
        peak_computed_time: number("peak_computed_time")?,
        peak_error: number("peak_error"),
        lag: number("lag"),
        rms_without_lag: number("rms_without_lag"),
    })
}
