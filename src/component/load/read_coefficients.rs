//! How the coefficients of rotors and propellers are written in a scenario.

use super::coefficient_file::CoefficientFile;
use super::power_coefficient::{DEFAULT, PowerCoefficient, Rows};
use super::propeller::TorqueCoefficient;
use super::propeller_series;
use crate::component::points::read_pairs;
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Node, Range, Shape};

/// The torque coefficient of a propeller.
pub(super) fn torque_coefficient(fields: &mut Fields<'_>) -> Option<TorqueCoefficient> {
    let constant = fields
        .quantity_optional(
            "constant",
            Dimension::One,
            Range::NotNegative,
            "The same KQ at every advance ratio, typically 0.02 to 0.07.",
        )
        .map(TorqueCoefficient::constant);
    let points = read_pairs(
        fields,
        "points",
        [Dimension::One, Dimension::One],
        "advance ratios",
        "Rows of J and KQ, J rising; straight lines, end values are held.",
    )
    .map(|points| TorqueCoefficient::points(&points));
    let series =
        fields.group_optional("b_series", "Wageningen B series, Reynolds number 2e6.", b_series);
    one_of_ways(fields, ["constant", "points", "b_series"], [constant, points, series])
}

/// The one of several ways that is given; none or several are a fault.
fn one_of_ways<T, const N: usize>(
    fields: &Fields<'_>,
    keys: [&'static str; N],
    ways: [Option<T>; N],
) -> Option<T> {
    let given: Vec<&str> = keys.into_iter().filter(|key| fields.has(key)).collect();
    match given.as_slice() {
        [] => {
            fields.fault_here(format!(
                "one of {} is needed here",
                keys.map(|key| format!("`{key}`")).join(", ")
            ));
        }
        [_] => {}
        [first, second, ..] => {
            fields.fault(second, format!("either `{first}` or `{second}` is stated, not both"));
        }
    }
    ways.into_iter().flatten().next()
}

fn b_series(fields: &mut Fields<'_>) -> TorqueCoefficient {
    let blades = fields.whole("blades", 2, 7, "Number of blades.");
    let mut ratio =
        |key, low, high, doc| fields.quantity(key, Dimension::One, Range::Between(low, high), doc);
    let pitch_ratio = ratio("pitch_ratio", 0.5, 1.4, "Pitch over diameter.");
    let area_ratio = ratio("area_ratio", 0.3, 1.05, "Expanded blade area over disc area.");
    propeller_series::torque_coefficient(blades as u32, pitch_ratio, area_ratio)
}

/// The power coefficient of a rotor.
pub(super) fn power_coefficient(fields: &mut Fields<'_>) -> Option<PowerCoefficient> {
    let constant = fields
        .quantity_optional(
            "constant",
            Dimension::One,
            Range::NotNegative,
            "The same Cp everywhere, that is constant power; the torque grows towards standstill.",
        )
        .map(PowerCoefficient::Constant);
    let points = read_pairs(
        fields,
        "points",
        [Dimension::One, Dimension::One],
        "tip speed ratios",
        "Rows of tip speed ratio and Cp; straight lines, to zero at 0, the last value held.",
    );
    let points = points.map(|points| {
        first_row(fields, "points", points.first().map(|row| row.as_slice()));
        let values = points.iter().map(|row| vec![row[1]]).collect();
        let ratios = points.iter().map(|row| row[0]).collect();
        PowerCoefficient::Rows(Rows::new(ratios, vec![0.0], values))
    });
    let table = fields.group_optional(
        "table",
        "Cp by rows over the tip speed ratio, a column for each pitch.",
        table,
    );
    let table = table.map(PowerCoefficient::Rows);
    let exponential = fields.group_optional(
        "exponential",
        "Formula c1*(c2*z - c3*b - c4*b^c5 - c6)*exp(-c7*z) + c10*lambda, z = 1/(lambda + c8*b) - c9/(b^3 + 1), b in degrees.",
        exponential,
    );
    one_of_ways(
        fields,
        ["constant", "points", "table", "exponential"],
        [constant, points, table, exponential],
    )
}

/// A first row at a tip speed ratio of 0 must be 0, and none lies below.
fn first_row(fields: &Fields<'_>, key: &str, row: Option<&[f64]>) {
    let Some([ratio, values @ ..]) = row else { return };
    if *ratio < 0.0 {
        fields.fault(&format!("{key}.0.0"), "a tip speed ratio must not be negative");
    } else if *ratio == 0.0 && values.iter().any(|value| *value != 0.0) {
        fields.fault(
            &format!("{key}.0.1"),
            "at a tip speed ratio of 0 the power coefficient must be 0: a rotor at rest has no power",
        );
    }
}

fn exponential(fields: &mut Fields<'_>) -> PowerCoefficient {
    const KEYS: [(&str, &str); 10] = [
        ("c1", "Scale."),
        ("c2", "Weight of z."),
        ("c3", "Weight of the pitch."),
        ("c4", "Weight of the pitch to the power c5."),
        ("c5", "Power of the pitch."),
        ("c6", "Bias."),
        ("c7", "Decay."),
        ("c8", "Shift of the tip speed ratio per degree of pitch."),
        ("c9", "Shift of z."),
        ("c10", "Added per tip speed ratio."),
    ];
    let mut constants = DEFAULT;
    for (slot, (key, doc)) in constants.iter_mut().zip(KEYS) {
        *slot = fields.quantity_or(key, Dimension::One, Range::Any, *slot, doc);
    }
    PowerCoefficient::Formula(constants)
}

fn table(fields: &mut Fields<'_>) -> Rows {
    let doc = "Pitches of the columns, rising: [0 deg, 5 deg, 10 deg].";
    let pitches = fields.raw("pitch", Shape::Free, false, doc);
    let pitches = pitches.and_then(|node| numbers(fields, "pitch", node, Dimension::Angle));
    let doc = "Rows of a tip speed ratio and one Cp for each pitch, ratios rising.";
    let rows = fields.raw("rows", Shape::Free, false, doc);
    if let Some(file) = coefficient_file(fields) {
        return Rows::of_file(file);
    }
    for key in ["pitch", "rows"] {
        if !fields.has(key) && !fields.has("file") {
            fields.miss(key, "give `pitch` and `rows`, or `file` with both in it");
        }
    }
    let (Some(pitches), Some(rows)) = (pitches, rows) else {
        return Rows::new(vec![], vec![], vec![]);
    };
    let Node::List(list) = rows else {
        fields.fault("rows", format!("`rows` must be a list of rows, not {}", rows.kind()));
        return Rows::new(vec![], vec![], vec![]);
    };
    let read: Vec<Vec<f64>> = list
        .iter()
        .enumerate()
        .filter_map(|(place, row)| numbers(fields, &format!("rows.{place}"), row, Dimension::One))
        .collect();
    if read.len() < list.len() {
        return Rows::new(vec![], vec![], vec![]);
    }
    if read.len() < 2 {
        fields.fault("rows", "a table needs at least two rows");
    }
    for (place, row) in read.iter().enumerate() {
        if row.len() != pitches.len() + 1 {
            fields.fault(
                &format!("rows.{place}"),
                format!(
                    "a row holds a tip speed ratio and {} values, one for each pitch, not {}",
                    pitches.len(),
                    row.len().saturating_sub(1)
                ),
            );
        }
    }
    for (place, pair) in read.windows(2).enumerate() {
        if pair[1].first() <= pair[0].first() {
            fields.fault(
                &format!("rows.{}.0", place + 1),
                "the tip speed ratios must rise from row to row",
            );
        }
    }
    for (place, pair) in pitches.windows(2).enumerate() {
        if pair[1] <= pair[0] {
            fields.fault(&format!("pitch.{}", place + 1), "the pitches must rise");
        }
    }
    first_row(fields, "rows", read.first().map(Vec::as_slice));
    let ratios = read.iter().filter_map(|row| row.first().copied()).collect();
    let values = read.iter().map(|row| row.iter().skip(1).copied().collect()).collect();
    Rows::new(ratios, pitches, values)
}

/// The file in place of pitches and rows; `None` when there is none, or it is at fault.
fn coefficient_file(fields: &mut Fields<'_>) -> Option<CoefficientFile> {
    let doc = "CSV file in place of `pitch` and `rows`: ratios in its first column, one column for each pitch, headed by it.";
    let file = fields.name_optional("file", doc);
    let doc = "Unit of pitches in the file's heading that stand without one, for example deg.";
    let pitch_unit = fields.text("pitch_unit", doc);
    if let Some(unit) = &pitch_unit
        && let Err(fault) = quantity::parse(&format!("1 {unit}"), Dimension::Angle)
    {
        fault.report(&fields.path_of("pitch_unit"), &mut fields.faults().borrow_mut());
    }
    let Some(file) = file else {
        if pitch_unit.is_some() {
            fields.fault("pitch_unit", "`pitch_unit` goes with `file` only");
        }
        return None;
    };
    for key in ["pitch", "rows"] {
        if fields.has(key) {
            fields.fault(key, format!("either `file` or `{key}` is stated, not both"));
        }
    }
    (!file.is_empty()).then_some(CoefficientFile { file, pitch_unit })
}

/// A list of numbers of one dimension; `None` when faulty.
fn numbers(fields: &Fields<'_>, key: &str, node: &Node, kind: Dimension) -> Option<Vec<f64>> {
    let Node::List(list) = node else {
        fields.fault(key, format!("a list of numbers is needed here, not {}", node.kind()));
        return None;
    };
    if list.is_empty() {
        fields.fault(key, "the list is empty; at least one number is needed");
        return None;
    }
    let read: Vec<f64> = list
        .iter()
        .enumerate()
        .map(|(place, cell)| {
            let path = fields.path_of(&format!("{key}.{place}"));
            quantity::read(&path, cell, kind, &mut fields.faults().borrow_mut())
        })
        .collect();
    read.iter().all(|value| value.is_finite()).then_some(read)
}
