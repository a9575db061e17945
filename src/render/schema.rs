//! JSON Schema (draft 2020-12) of the scenario file, made from the reading code.
//!
//! It serves editors: keys, documentation, ranges and choices. The program checks more:
//! units, names, and the rules between values.

use super::number::json;
use crate::analysis::study;
use crate::quantity::{Dimension, units};
use crate::scenario::describe;
use crate::signal::read::describe_forms;
use crate::tree::{FieldDescription, Range, Shape};
use serde_json::{Map, Value, json};
use std::collections::BTreeMap;

/// A name of the user's.
const NAME: &str = "^[a-z][a-z0-9_]*$";

/// A number, with or without a unit behind it.
const QUANTITY: &str = r"^\s*[-+\u2212]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?\s*\S*.*$";

/// The schema of the whole file.
pub fn schema() -> Value {
    let mut parts = Parts::default();
    let mut root = parts.group(&describe::root());
    // The reader of the file keeps studies as they stand; what they may be is known above it.
    let mut studies = section(parts.one_key_map(&study::spec::describe()));
    studies["description"] = root["properties"]["studies"]["description"].clone();
    root["properties"]["studies"] = studies;
    let definitions: Map<String, Value> = parts.definitions.into_iter().collect();
    let mut whole = json!({
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Lodeshaft scenario",
        "description": "One case of a drivetrain with magnetic gears. A bare number is in SI.",
    });
    if let (Value::Object(whole), Value::Object(root)) = (&mut whole, &mut root) {
        whole.append(root);
        whole.insert("$defs".to_owned(), Value::Object(definitions));
    }
    whole
}

/// Definitions met on the way, by name.
#[derive(Default)]
struct Parts {
    definitions: BTreeMap<String, Value>,
}

impl Parts {
    /// A map of known keys.
    fn group(&mut self, fields: &[FieldDescription]) -> Value {
        let properties: Map<String, Value> =
            fields.iter().map(|field| (field.key.to_owned(), self.field(field))).collect();
        let required: Vec<&str> =
            fields.iter().filter(|field| field.required).map(|field| field.key).collect();
        let mut group =
            json!({ "type": "object", "properties": properties, "additionalProperties": false });
        if !required.is_empty() {
            group["required"] = Value::from(required);
        }
        group
    }

    fn field(&mut self, field: &FieldDescription) -> Value {
        let mut shape = self.shape(&field.shape);
        if let Value::Object(map) = &mut shape {
            if !field.doc.is_empty() {
                map.insert("description".to_owned(), Value::from(field.doc));
            }
            if let Some(default) = field.default {
                map.insert("default".to_owned(), json(default));
            }
        }
        shape
    }

    fn shape(&mut self, shape: &Shape) -> Value {
        match shape {
            Shape::Quantity(dimension, range) => self.quantity(*dimension, *range),
            Shape::Whole(low, high) => {
                let mut whole = json!({ "type": "integer", "minimum": low });
                if *high < i64::MAX {
                    whole["maximum"] = Value::from(*high);
                }
                whole
            }
            Shape::Text => json!({ "type": ["string", "number", "boolean", "null"] }),
            Shape::Name => json!({ "type": "string" }),
            Shape::Flag => json!({ "type": "boolean" }),
            Shape::Word(words) => json!({ "enum": words }),
            Shape::Signal(dimension) => self.signal(*dimension),
            Shape::Rows(columns) => {
                let cells: Vec<Value> =
                    columns.iter().map(|column| self.quantity(*column, Range::Any)).collect();
                let count = cells.len();
                let row = json!({
                    "type": "array", "prefixItems": cells, "items": false, "minItems": count
                });
                json!({ "type": "array", "items": row })
            }
            Shape::Names(count) => json!({
                "type": "array", "items": { "type": "string" }, "minItems": count, "maxItems": count
            }),
            Shape::Group(inside) => self.group(inside),
            Shape::List(inside) => {
                json!({ "type": ["array", "null"], "items": self.group(inside) })
            }
            Shape::Section(inside) => {
                let thing = self.group(inside);
                section(thing)
            }
            Shape::Paths(inside) => {
                json!({ "type": "object", "additionalProperties": self.group(inside) })
            }
            Shape::Choice(inside) => {
                // What this version does not know yet has no documentation of its keys.
                let known: Vec<FieldDescription> =
                    inside.iter().filter(|choice| is_known(choice)).cloned().collect();
                self.one_key_map(&known)
            }
            Shape::QuantityOrGroup(dimension, range, inside) => {
                let (quantity, group) = (self.quantity(*dimension, *range), self.group(inside));
                json!({ "anyOf": [quantity, group] })
            }
            Shape::Signals => section(self.named_signal()),
            Shape::OfChannel => json!({ "type": ["number", "string"] }),
            Shape::Free => json!({}),
        }
    }

    fn one_key_map(&mut self, choices: &[FieldDescription]) -> Value {
        let properties: Map<String, Value> = choices
            .iter()
            .map(|choice| {
                let mut shape = self.shape(&choice.shape);
                if let Value::Object(map) = &mut shape {
                    map.insert("description".to_owned(), Value::from(choice.doc));
                }
                (choice.key.to_owned(), shape)
            })
            .collect();
        json!({
            "type": "object", "properties": properties, "additionalProperties": false,
            "minProperties": 1, "maxProperties": 1,
        })
    }

    /// A quantity: a number in SI within its range, or a text with a unit.
    fn quantity(&mut self, dimension: Dimension, range: Range) -> Value {
        let name = format!("text_of_{}", dimension.name().replace(' ', "_"));
        self.definitions.entry(name.clone()).or_insert_with(|| {
            let fitting = units(dimension);
            let shown: Vec<&str> = fitting.iter().copied().filter(|unit| *unit != "1").collect();
            json!({
                "type": "string",
                "pattern": QUANTITY,
                "description": format!("{} with a unit: {}", dimension.name(), shown.join(", ")),
                "examples": shown.iter().map(|unit| format!("1 {unit}")).collect::<Vec<_>>(),
            })
        });
        let mut number = json!({ "type": "number" });
        match range {
            Range::Any => {}
            Range::Positive => number["exclusiveMinimum"] = json!(0),
            Range::NotNegative => number["minimum"] = json!(0),
            Range::NotZero => number["not"] = json!({ "const": 0 }),
            Range::Between(low, high) => {
                number["minimum"] = json(low);
                number["maximum"] = json(high);
            }
        }
        json!({ "anyOf": [number, { "$ref": format!("#/$defs/{name}") }] })
    }

    /// A signal: a quantity, a name, or a one-key map; sums and products hold signals again.
    fn signal(&mut self, dimension: Dimension) -> Value {
        let name = format!("signal_of_{}", dimension.name().replace(' ', "_"));
        let reference = json!({ "$ref": format!("#/$defs/{name}") });
        if self.definitions.contains_key(&name) {
            return reference;
        }
        // Stands before its inside is worked out, so that it may hold itself.
        self.definitions.insert(name.clone(), Value::Null);
        let quantity = self.quantity(dimension, Range::Any);
        let members = self.signal_of_any();
        let forms = self.forms(&describe_forms(dimension), &reference, &members);
        let signal = json!({
            "anyOf": [quantity, { "type": "string", "pattern": NAME }, forms],
        });
        self.definitions.insert(name, signal);
        reference
    }

    /// A signal whose own units tell its dimension.
    fn signal_of_any(&mut self) -> Value {
        let reference = json!({ "$ref": "#/$defs/signal_of_any" });
        if !self.definitions.contains_key("signal_of_any") {
            self.definitions.insert("signal_of_any".to_owned(), Value::Null);
            let forms = self.forms(&any_forms(), &reference, &reference);
            let signal = json!({ "anyOf": [{ "type": ["number", "string"] }, forms] });
            self.definitions.insert("signal_of_any".to_owned(), signal);
        }
        reference
    }

    /// A signal of the section `signals`, which may carry its source.
    fn named_signal(&mut self) -> Value {
        let reference = self.signal_of_any();
        let mut forms = self.forms(&any_forms(), &reference, &reference);
        forms["properties"]["source"] = self.shape(&Shape::Text);
        forms["maxProperties"] = json!(2);
        json!({ "anyOf": [{ "type": ["number", "string"] }, forms] })
    }

    /// The one-key map of a signal; one member of a product may carry the dimension.
    fn forms(&mut self, forms: &[FieldDescription], sum: &Value, product: &Value) -> Value {
        let mut forms = self.one_key_map(forms);
        for (form, item) in [("sum", sum), ("product", product)] {
            if let Some(place) = forms["properties"].get_mut(form) {
                *place = json!({
                    "type": "array", "items": item, "minItems": 1,
                    "description": place["description"].clone(),
                });
            }
        }
        forms
    }
}

/// The forms of a signal whose own units tell its dimension.
fn any_forms() -> Vec<FieldDescription> {
    // No form has a torque among its own keys, so a torque is the signal's value.
    let own = Dimension::Torque;
    let mut forms = describe_forms(own);
    for form in &mut forms {
        match &mut form.shape {
            Shape::Group(inside) => {
                for field in inside {
                    if field.shape == Shape::Quantity(own, Range::Any) {
                        field.shape = Shape::OfChannel;
                    }
                }
            }
            Shape::Rows(_) => form.shape = Shape::Free,
            _ => {}
        }
    }
    forms
}

/// A map from names of the user's; a section with nothing under it is empty.
fn section(thing: Value) -> Value {
    json!({
        "type": ["object", "null"],
        "propertyNames": { "pattern": NAME },
        "additionalProperties": thing,
    })
}

fn is_known(choice: &FieldDescription) -> bool {
    match &choice.shape {
        Shape::Group(inside) => inside.is_empty() || inside.iter().any(|it| !it.doc.is_empty()),
        _ => true,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_reference_leads_to_a_definition() {
        let schema = schema();
        let text = schema.to_string();
        let mut count = 0;
        for part in text.split("\"#/$defs/").skip(1) {
            let name = part.split('"').next().unwrap();
            assert!(schema["$defs"][name].is_object(), "{name}");
            count += 1;
        }
        assert!(count > 20);
    }

    #[test]
    fn keys_and_ranges_come_from_the_reading_code() {
        let schema = schema();
        let body = &schema["properties"]["bodies"]["additionalProperties"];
        assert_eq!(body["required"], json!(["inertia"]));
        assert_eq!(body["properties"]["inertia"]["anyOf"][0]["minimum"], json!(0));
        let motor = &schema["properties"]["motors"]["additionalProperties"]["properties"];
        assert!(motor["law"]["properties"]["rating_plate"].is_object());
        assert!(motor["law"]["properties"]["induction_circuit"].is_object());
        assert_eq!(schema["required"], json!(["lodeshaft", "duration"]));
        let study = &schema["properties"]["studies"]["additionalProperties"]["properties"];
        assert!(study["margin"]["properties"]["between"].is_object());
        let spread = &study["monte_carlo"]["properties"]["spread"]["additionalProperties"];
        assert!(spread["properties"]["normal"]["properties"]["relative"].is_object());
    }
}
