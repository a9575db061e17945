//! `lodeshaft schema` knows each key of each train and nothing that the program refuses.
//!
//! The rules are those of JSON Schema 2020-12 as far as the program writes them.

use super::descriptions::walk_file;
use super::program::{call, none};
use super::trees::{trains, value, with};
use lodeshaft::tree::{Node, Shape};
use serde_json::Value;

/// The schema as printed.
fn schema() -> Value {
    let call = call(&Node::Map(Vec::new()), &["schema"]);
    assert_eq!(call.status, Some(0), "{}", call.stderr);
    serde_json::from_str(&call.stdout).unwrap()
}

/// Faults of a value under a schema.
fn faults(whole: &Value, schema: &Value, value: &Value, path: &str, found: &mut Vec<String>) {
    if let Some(name) = schema["$ref"].as_str() {
        let name = name.strip_prefix("#").unwrap();
        let inside = whole.pointer(name).unwrap_or_else(|| panic!("no {name} in the schema"));
        faults(whole, inside, value, path, found);
    }
    for key in ["anyOf", "oneOf"] {
        let Some(choices) = schema[key].as_array() else { continue };
        let fitting = choices.iter().filter(|choice| fits(whole, choice, value)).count();
        if fitting == 0 || (key == "oneOf" && fitting > 1) {
            found.push(format!("{path}: {fitting} of the schema's {key} fit"));
        }
    }
    if let Some(kinds) = kinds(&schema["type"])
        && !kinds.iter().any(|kind| is_kind(value, kind))
    {
        found.push(format!("{path}: {value} is none of {kinds:?}"));
    }
    if let Some(words) = schema["enum"].as_array()
        && !words.contains(value)
    {
        found.push(format!("{path}: {value} is none of {words:?}"));
    }
    let number = value.as_f64();
    let outside = |key: &str, is_outside: fn(f64, f64) -> bool| matches!((number, schema[key].as_f64()), (Some(value), Some(limit)) if is_outside(value, limit));
    if outside("minimum", |value, limit| value < limit)
        || outside("maximum", |value, limit| value > limit)
        || outside("exclusiveMinimum", |value, limit| value <= limit)
        || outside("exclusiveMaximum", |value, limit| value >= limit)
    {
        found.push(format!("{path}: {value} lies outside the schema's range"));
    }
    match value {
        Value::Object(map) => {
            for (key, inside) in map {
                let path = format!("{path}.{key}");
                if let Some(known) = schema["properties"].get(key) {
                    faults(whole, known, inside, &path, found);
                    continue;
                }
                let others = match &schema["additionalProperties"] {
                    Value::Null => schema["patternProperties"]
                        .as_object()
                        .and_then(|patterns| patterns.values().next()),
                    Value::Bool(false) => {
                        let patterns = schema["patternProperties"].as_object();
                        let inside = patterns.and_then(|patterns| patterns.values().next());
                        if inside.is_none() {
                            found.push(format!("{path}: the schema does not know the key"));
                        }
                        inside
                    }
                    others => Some(others),
                };
                if let Some(others) = others {
                    faults(whole, others, inside, &path, found);
                }
            }
            for key in schema["required"].as_array().into_iter().flatten() {
                if !map.contains_key(key.as_str().unwrap()) {
                    found.push(format!("{path}: the schema misses {key}"));
                }
            }
        }
        Value::Array(items) => {
            for (index, item) in items.iter().enumerate() {
                let path = format!("{path}.{index}");
                match schema["prefixItems"].get(index) {
                    Some(inside) => faults(whole, inside, item, &path, found),
                    None => faults(whole, &schema["items"], item, &path, found),
                }
            }
        }
        _ => {}
    }
}

fn fits(whole: &Value, schema: &Value, value: &Value) -> bool {
    let mut found = Vec::new();
    faults(whole, schema, value, "", &mut found);
    found.is_empty()
}

fn kinds(value: &Value) -> Option<Vec<&str>> {
    match value {
        Value::String(kind) => Some(vec![kind]),
        Value::Array(kinds) => kinds.iter().map(Value::as_str).collect(),
        _ => None,
    }
}

fn is_kind(value: &Value, kind: &str) -> bool {
    match kind {
        "object" => value.is_object(),
        "array" => value.is_array(),
        "string" => value.is_string(),
        "boolean" => value.is_boolean(),
        "null" => value.is_null(),
        "number" => value.is_number(),
        "integer" => value.is_i64() || value.is_u64(),
        _ => false,
    }
}

#[test]
fn the_schema_accepts_every_train() {
    let schema = schema();
    let mut wrong = Vec::new();
    for train in trains() {
        let mut found = Vec::new();
        faults(&schema, &schema, &value(&train.tree), "", &mut found);
        wrong.extend(found.into_iter().map(|fault| format!("{}: {fault}", train.name)));
    }
    none(&wrong);
}

#[test]
fn the_schema_refuses_unknown_keys_in_every_map() {
    let schema = schema();
    let mut wrong = Vec::new();
    for train in trains() {
        walk_file(&train.tree, &mut |met| {
            let is_map = matches!(met.field.shape, Shape::Group(_) | Shape::QuantityOrGroup(..));
            if is_map && matches!(met.node, Node::Map(_)) {
                let path = format!("{}.no_such_key", met.path);
                let tree = with(&train.tree, &path, Some(&Node::Number(1.0)));
                if fits(&schema, &schema, &value(&tree)) {
                    wrong.push(format!("{}: the schema lets {path} pass", train.name));
                }
            }
        });
    }
    none(&wrong);
}
