//! Rules for measured records: they must fit the run in time.

use super::Scenario;
use crate::diagnostic::Diagnostics;
use crate::quantity::format_number;

/// A record must have this many rows within the run to be compared with it.
const LEAST: usize = 3;

/// Checks every record against the run.
pub(super) fn check(scenario: &Scenario, faults: &mut Diagnostics) {
    let end = scenario.duration;
    if !end.is_finite() {
        return;
    }
    let shown = |value: f64| format_number(value, 4);
    for record in &scenario.measured {
        let (Some(first), Some(last)) = (record.rows.first(), record.rows.last()) else { continue };
        let path = format!("measured.{}", record.name);
        let inside = record.rows.iter().filter(|row| (0.0..=end).contains(&row[0])).count();
        let span = format!(
            "on the clock of the run the record goes from {} s to {} s",
            shown(first[0]),
            shown(last[0])
        );
        if last[0] < 0.0 || first[0] > end {
            faults.error_hint(
                path,
                format!("{span}; the run from 0 s to {} s does not meet it", shown(end)),
                "`offset` is the time of the run at which the record's clock shows 0",
            );
        } else if inside < LEAST {
            let rows = if inside == 1 { "row" } else { "rows" };
            faults.error_hint(
                path,
                format!("{span}; only {inside} {rows} lie within the run"),
                "`offset` is the time of the run at which the record's clock shows 0",
            );
        } else if inside < record.rows.len() {
            let left_out = record.rows.len() - inside;
            let words = if left_out == 1 {
                "1 row lies outside the run and is left out".to_owned()
            } else {
                format!("{left_out} rows lie outside the run and are left out")
            };
            faults.warning(path, format!("{span}; {words}"));
        } else if let Some(spacing) = spacing(&record.rows)
            && spacing < 0.9 * scenario.output_step
        {
            faults.warning(
                path,
                format!(
                    "the record has a row each {} s, the series one each {} s; between these it is compared with straight lines",
                    shown(spacing),
                    shown(scenario.output_step)
                ),
            );
        }
    }
}

/// Mean time between rows.
fn spacing(rows: &[[f64; 2]]) -> Option<f64> {
    let span = rows.last()?[0] - rows.first()?[0];
    (rows.len() > 1).then(|| span / (rows.len() - 1) as f64)
}
