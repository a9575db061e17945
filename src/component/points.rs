//! Reading curves: rows of speed and torque whose speeds rise.

use crate::quantity::Dimension;
use crate::tree::Fields;

/// Reads `points: [[speed, torque], ...]`, speeds rising from `first` on; empty when faulty.
pub(crate) fn read_curve(fields: &mut Fields<'_>, first: f64, doc: &'static str) -> Vec<[f64; 2]> {
    let rows = fields.rows("points", &[Dimension::Speed, Dimension::Torque], true, doc);
    let points: Vec<[f64; 2]> = rows
        .iter()
        .filter_map(|row| match row.as_slice() {
            [speed, torque] if speed.is_finite() && torque.is_finite() => Some([*speed, *torque]),
            _ => None,
        })
        .collect();
    if rows.is_empty() || points.len() < rows.len() {
        return Vec::new();
    }
    if points.len() < 2 {
        fields.fault("points", "a curve needs at least two points");
        return Vec::new();
    }
    let mut sound = true;
    if points.iter().take(1).any(|point| point[0] < first) {
        fields.fault("points.0.0", "the speeds of this curve are read at |speed|: none below zero");
        sound = false;
    }
    for (index, pair) in points.windows(2).enumerate() {
        if pair[1][0] <= pair[0][0] {
            fields.fault(
                &format!("points.{}.0", index + 1),
                "the speeds of a curve must rise from point to point",
            );
            sound = false;
        }
    }
    if sound { points } else { Vec::new() }
}

/// Reads a list of two-column rows whose first members rise; `None` when absent, empty when faulty.
pub(crate) fn read_pairs(
    fields: &mut Fields<'_>,
    key: &'static str,
    columns: [Dimension; 2],
    what: &str,
    doc: &'static str,
) -> Option<Vec<[f64; 2]>> {
    let rows = fields.rows(key, &columns, false, doc);
    if !fields.has(key) {
        return None;
    }
    let points: Vec<[f64; 2]> = rows
        .iter()
        .filter_map(|row| match row.as_slice() {
            [x, y] if x.is_finite() && y.is_finite() => Some([*x, *y]),
            _ => None,
        })
        .collect();
    if points.len() < rows.len() || rows.is_empty() {
        return Some(Vec::new());
    }
    if points.len() < 2 {
        fields.fault(key, "a curve needs at least two points");
        return Some(Vec::new());
    }
    for (index, pair) in points.windows(2).enumerate() {
        if pair[1][0] <= pair[0][0] {
            fields.fault(
                &format!("{key}.{}.0", index + 1),
                format!("the {what} must rise from point to point"),
            );
            return Some(Vec::new());
        }
    }
    Some(points)
}
