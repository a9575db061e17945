//! Reading signals: a quantity, a name from `signals`, or a one-key map that tells the course.

use super::kind::Kind;
use super::table::{Across, order_fault};
use super::{NamedSignal, Signal, forms};
use crate::diagnostic::{Diagnostics, closest};
use crate::quantity::{self, Dimension};
use crate::tree::{FieldDescription, Fields, Node, Shape};
use std::cell::RefCell;

/// The keys of a signal's one-key map, in the order of the reference.
const FORMS: [&str; 11] = [
    "step",
    "ramp",
    "pulse",
    "points",
    "sine",
    "table",
    "extreme_gust",
    "extreme_coherent_gust",
    "turbulence",
    "sum",
    "product",
];

/// Reads the signal under `key`; `None` when it is absent or faulty.
pub fn read_signal(
    fields: &mut Fields<'_>,
    key: &'static str,
    dimension: Dimension,
    required: bool,
    doc: &'static str,
) -> Option<Signal> {
    let node = fields.raw(key, Shape::Signal(dimension), required, doc)?;
    let mut kind = Kind { wanted: Some(dimension), found: None };
    read_node(&fields.path_of(key), node, &mut kind, fields.faults())
}

/// Reads the signal under `key`, or takes a constant when it is absent.
pub fn read_signal_or(
    fields: &mut Fields<'_>,
    key: &'static str,
    dimension: Dimension,
    default: f64,
    doc: &'static str,
) -> Signal {
    let typed = read_signal(fields, key, dimension, false, doc);
    fields.note_default(default);
    typed.unwrap_or(Signal::Constant(default))
}

/// Reads a named signal, whose dimension its own units tell.
pub fn read_named_signal(
    name: &str,
    path: &str,
    node: &Node,
    faults: &RefCell<Diagnostics>,
) -> NamedSignal {
    let mut kind = Kind { wanted: None, found: None };
    let (course, source) = without_source(node);
    let signal = read_node(path, &course, &mut kind, faults).unwrap_or(Signal::Constant(f64::NAN));
    NamedSignal { name: name.to_owned(), dimension: kind.found, signal, source }
}

/// The forms a signal's one-key map can take, for the reference and the schema.
pub fn describe_forms(dimension: Dimension) -> Vec<FieldDescription> {
    Fields::describe(|fields| {
        let mut kind = Kind { wanted: Some(dimension), found: None };
        forms::describe(fields, &mut kind);
        fields.raw(
            "points",
            Shape::Rows(vec![Dimension::Time, dimension]),
            false,
            "Straight lines between [time, value]; two equal times are a jump.",
        );
        fields.raw("sum", Shape::Free, false, "The sum of the signals of a list.");
        fields.raw("product", Shape::Free, false, "The product of the signals of a list.");
    })
}

/// Reads a signal wherever it stands.
pub(super) fn read_node(
    path: &str,
    node: &Node,
    kind: &mut Kind,
    faults: &RefCell<Diagnostics>,
) -> Option<Signal> {
    match node {
        Node::Text(text) if is_name(text) => Some(Signal::Named(text.clone())),
        Node::Number(_) | Node::Text(_) => Some(Signal::Constant(kind.value(path, node, faults))),
        Node::Map(entries) => match entries.as_slice() {
            [(form, inside)] => read_form(path, form, inside, kind, faults),
            _ => {
                faults.borrow_mut().error_hint(
                    path,
                    format!("a signal has exactly one key, not {}", entries.len()),
                    format!("it may be {}", FORMS.join(", ")),
                );
                None
            }
        },
        other => {
            faults.borrow_mut().error_hint(
                path,
                format!("a signal is needed here, not {}", other.kind()),
                format!("a quantity, a name from `signals`, or one of {}", FORMS.join(", ")),
            );
            None
        }
    }
}

fn read_form(
    path: &str,
    form: &str,
    inside: &Node,
    kind: &mut Kind,
    faults: &RefCell<Diagnostics>,
) -> Option<Signal> {
    let inner = format!("{path}.{form}");
    match form {
        "points" => read_points(&inner, inside, kind, faults),
        "sum" => {
            let list = members(&inner, inside, faults)?;
            let read = list.iter().enumerate().map(|(index, member)| {
                read_node(&format!("{inner}.{index}"), member, kind, faults)
            });
            read.collect::<Vec<_>>().into_iter().collect::<Option<_>>().map(Signal::Sum)
        }
        "product" => read_product(&inner, inside, kind, faults),
        form if FORMS.contains(&form) => {
            Fields::read(inner, inside, faults, |fields| forms::read(form, fields, kind))
        }
        unknown => {
            let message = format!("`{unknown}` is not a form of signal");
            let hint = match closest(unknown, FORMS) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("it may be {}", FORMS.join(", ")),
            };
            faults.borrow_mut().error_hint(inner, message, hint);
            None
        }
    }
}

fn members<'a>(path: &str, node: &'a Node, faults: &RefCell<Diagnostics>) -> Option<&'a [Node]> {
    match node {
        Node::List(list) if !list.is_empty() => Some(list),
        Node::List(_) => {
            faults.borrow_mut().error(path, "the list is empty; at least one signal is needed");
            None
        }
        other => {
            faults
                .borrow_mut()
                .error(path, format!("a list of signals is needed here, not {}", other.kind()));
            None
        }
    }
}

fn read_points(
    path: &str,
    node: &Node,
    kind: &mut Kind,
    faults: &RefCell<Diagnostics>,
) -> Option<Signal> {
    let Node::List(list) = node else {
        faults
            .borrow_mut()
            .error(path, format!("a list of [time, value] is needed here, not {}", node.kind()));
        return None;
    };
    if list.is_empty() {
        faults.borrow_mut().error(path, "the list is empty; at least one point is needed");
        return None;
    }
    let mut points: Vec<[f64; 2]> = Vec::with_capacity(list.len());
    let mut sound = true;
    for (index, row) in list.iter().enumerate() {
        let Node::List(cells) = row else {
            faults
                .borrow_mut()
                .error(format!("{path}.{index}"), "a row of [time, value] is needed here");
            sound = false;
            continue;
        };
        let [time, value] = cells.as_slice() else {
            faults.borrow_mut().error(
                format!("{path}.{index}"),
                format!("a row of [time, value] is needed here, not {} values", cells.len()),
            );
            sound = false;
            continue;
        };
        let time = quantity::read(
            &format!("{path}.{index}.0"),
            time,
            Dimension::Time,
            &mut faults.borrow_mut(),
        );
        let value = kind.value(&format!("{path}.{index}.1"), value, faults);
        points.push([time, value]);
        // A row that is out of order is told once and left out, so that it blames no other row.
        if let Some(fault) = order_fault(&points, Across::Time) {
            faults.borrow_mut().error(format!("{path}.{index}.0"), fault);
            points.pop();
            sound = false;
        }
        sound &= time.is_finite() && value.is_finite();
    }
    sound.then_some(Signal::Points(points))
}

fn read_product(
    path: &str,
    node: &Node,
    kind: &mut Kind,
    faults: &RefCell<Diagnostics>,
) -> Option<Signal> {
    let list = members(path, node, faults)?;
    let mut carrier = None;
    let mut read = Vec::with_capacity(list.len());
    for (index, member) in list.iter().enumerate() {
        let member_path = format!("{path}.{index}");
        let mut own = Kind { wanted: None, found: None };
        read.push(read_node(&member_path, member, &mut own, faults));
        let Some(dimension) = own.found.filter(|found| *found != Dimension::One) else { continue };
        if carrier.is_some() {
            faults.borrow_mut().error(
                member_path,
                "a product has at most one member with a dimension, and one stands before it",
            );
        } else {
            kind.meet(&member_path, Some(dimension), &mut faults.borrow_mut());
            carrier = Some(index);
        }
    }
    let members = read.into_iter().collect::<Option<_>>()?;
    Some(Signal::Product { members, carrier })
}

/// Whether a text names a signal: a word that is no number.
fn is_name(text: &str) -> bool {
    let number = matches!(text.to_ascii_lowercase().as_str(), "nan" | "inf" | "infinity");
    text.starts_with(|first: char| first.is_ascii_alphabetic())
        && text.chars().all(|c| c.is_ascii_alphanumeric() || c == '_')
        && !number
}

/// A named signal's map without its `source`, which may stand beside the one key.
fn without_source(node: &Node) -> (Node, Option<String>) {
    match node {
        Node::Map(entries) if entries.len() > 1 => {
            let source = match node.get("source") {
                Some(Node::Text(text)) => Some(text.clone()),
                _ => None,
            };
            let rest = entries
                .iter()
                .filter(|(key, _)| key != "source" || source.is_none())
                .cloned()
                .collect();
            (Node::Map(rest), source)
        }
        other => (other.clone(), None),
    }
}

#[cfg(test)]
#[path = "read_tests.rs"]
mod tests;
