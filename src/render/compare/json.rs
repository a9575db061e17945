//! A comparison for machines.

use super::{ROUNDING, Side};
use crate::analysis::comparison::{Figure, Found};
use crate::render::json::named;
use crate::render::number::{json, json_optional};
use serde_json::Value;

/// The comparison as JSON: SI and rad; all lists in the order of the runs.
pub fn to_json(side: &Side<'_>) -> Value {
    let runs = side.origins.iter().map(|origin| {
        let sets = origin.sets.iter().map(|(path, text)| (path.as_str(), text.as_str().into()));
        named([
            ("name", Value::from(origin.name.as_str())),
            (if origin.kept { "results" } else { "scenario" }, Value::from(origin.from.as_str())),
            ("set", named(sets)),
            ("met", origin.met.map_or(Value::Null, Value::from)),
        ])
    });
    let inputs = side.comparison.inputs.iter().map(|input| {
        let values: Vec<Value> =
            input.values.iter().map(|it| it.as_deref().map_or(Value::Null, Value::from)).collect();
        (input.path.as_str(), Value::Array(values))
    });
    let answers = side.comparison.differing(ROUNDING).map(|it| (it.path.as_str(), figure(it)));
    named([
        ("runs", Value::Array(runs.collect())),
        ("inputs", named(inputs)),
        ("answers", named(answers)),
        (
            "same",
            Value::from(
                side.comparison.figures.len() - side.comparison.differing(ROUNDING).count(),
            ),
        ),
        ("notes", Value::from(side.notes.to_vec())),
        ("output_folder", Value::from(side.output_folder)),
        ("files", Value::from(side.files.to_vec())),
    ])
}

fn figure(figure: &Figure) -> Value {
    let values: Vec<Value> = figure
        .values
        .iter()
        .map(|value| match value {
            None => Value::Null,
            Some(Found::Number(value)) => json(*value),
            Some(Found::Count(count)) => Value::from(*count),
            Some(Found::Word(word)) => Value::from(*word),
        })
        .collect();
    let changes = figure.changes().into_iter().map(json_optional).collect();
    named([
        ("unit", if figure.unit.is_empty() { Value::Null } else { Value::from(figure.unit) }),
        ("values", Value::Array(values)),
        ("change", Value::Array(changes)),
    ])
}
