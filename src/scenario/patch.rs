//! Values by dotted path: read for studies, set from the command line and by studies.

use super::describe::{Found, Kind, PathFault, find};
use super::locate::Places;
use super::yaml;
use crate::component::channel::dimension_of;
use crate::diagnostic::{Diagnostics, Severity};
use crate::quantity::{self, Dimension};
use crate::tree::Node;

/// A number of the file as studies see it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Value {
    /// The design value in SI: as typed, or what absence stands for; `None` when absence
    /// stands for no number.
    pub design: Option<f64>,
    /// Its dimension.
    pub dimension: Dimension,
    /// Whether the file states it.
    pub stated: bool,
    /// Whether only whole values make sense.
    pub whole: bool,
}

/// The number at a path.
pub fn value_at(root: &Node, path: &str) -> Result<Value, PathFault> {
    let found = find(root, path)?;
    let not_a_number = |what: &str| Err((format!("`{path}` is {what}, not a number"), None));
    let (dimension, whole) = match &found.kind {
        Kind::Quantity(dimension) => (*dimension, false),
        Kind::QuantityOrMap(dimension, _) => (Some(*dimension), false),
        Kind::OfChannel => (None, false),
        Kind::Whole(..) => (Some(Dimension::One), true),
        Kind::Signal(dimension) => (*dimension, false),
        Kind::Free => (None, false),
        Kind::Word => return not_a_number("a word"),
        Kind::Rows(_) | Kind::Row(_) | Kind::List(_) | Kind::Names | Kind::SignalList(_) => {
            return not_a_number("a list");
        }
        _ => return not_a_number("a map"),
    };
    let dimension = dimension.or_else(|| dimension_beside(root, path, &found));
    let Some(node) = found.node.filter(|node| **node != Node::Null) else {
        let design = found.default.or_else(|| default_of(root, path, &found));
        return Ok(Value {
            design,
            dimension: dimension.unwrap_or(Dimension::One),
            stated: false,
            whole,
        });
    };
    let text = match node {
        Node::Number(number) => {
            return Ok(Value {
                design: Some(*number),
                dimension: dimension.unwrap_or(Dimension::One),
                stated: true,
                whole,
            });
        }
        Node::Text(text) => text,
        Node::Map(_) if matches!(found.kind, Kind::Signal(_)) => {
            return Err((
                format!("`{path}` is a signal that varies in time, not a number"),
                Some("name one of its values, for example its `to`".to_owned()),
            ));
        }
        other => return not_a_number(other.kind()),
    };
    let read = match dimension {
        Some(dimension) => quantity::parse(text, dimension).map(|(value, _)| (value, dimension)),
        None => quantity::parse_any(text)
            .map(|(value, dimension)| (value, dimension.unwrap_or(Dimension::One))),
    };
    match read {
        Ok((value, dimension)) => Ok(Value { design: Some(value), dimension, stated: true, whole }),
        Err(_) if matches!(found.kind, Kind::Signal(_)) => Err((
            format!("`{path}` is the named signal `{text}`, not a number"),
            Some(format!("name a value of it, for example one below signals.{text}")),
        )),
        Err(_) if matches!(found.kind, Kind::Free) => not_a_number("text"),
        Err(fault) => Err((fault.message, fault.hint)),
    }
}

/// The dimension of a bare number that something beside it tells.
fn dimension_beside(root: &Node, path: &str, found: &Found<'_>) -> Option<Dimension> {
    let Some(Node::Number(_)) = found.node else { return None };
    let (parent, key) = path.rsplit_once('.')?;
    let beside = |key: &str| match find(root, parent).ok()?.node?.get(key)? {
        Node::Text(text) => Some(text),
        _ => None,
    };
    match (&found.kind, key) {
        // A bare share of the value.
        (Kind::OfChannel, "stays_within") => None,
        (Kind::OfChannel, _) => dimension_of(beside("of")?),
        (Kind::Free, "to") => match find(root, beside("set")?).ok()?.kind {
            Kind::Signal(dimension) => dimension,
            _ => None,
        },
        _ => None,
    }
}

/// Defaults that depend on other values.
fn default_of(root: &Node, path: &str, found: &Found<'_>) -> Option<f64> {
    let (parent, key) = path.rsplit_once('.').unwrap_or(("", path));
    let beside = |key: &str| {
        let path = if parent.is_empty() { key.to_owned() } else { format!("{parent}.{key}") };
        value_at(root, &path).ok().and_then(|value| value.design)
    };
    match (key, &found.kind) {
        ("breakaway", _) => beside("torque").or_else(|| beside("sliding")),
        ("output_step", _) => beside("duration").map(|duration| duration / 2000.0),
        // An absent factor leaves things as they are.
        (_, Kind::Signal(Some(Dimension::One))) => Some(1.0),
        _ => None,
    }
}

/// Sets a value as typed on the command line; a path that leads nowhere is a fault.
pub(super) fn set_typed(root: &mut Node, path: &str, text: &str, faults: &mut Diagnostics) {
    let mut told = Diagnostics::new();
    let value = match yaml::parse_value(text) {
        Ok(value) => {
            Places::scan(text, &mut told);
            value
        }
        Err(fault) => {
            told.push(fault);
            Node::Null
        }
    };
    if let Some(fault) = told.into_iter().next() {
        faults.add(Severity::Error, path, fault.message, fault.hint);
    } else if let Err((message, hint)) = set(root, path, value) {
        faults.add(Severity::Error, path, message, hint);
    }
}

/// Sets the value at a path, which must be one the file knows.
pub fn set(root: &mut Node, path: &str, value: Node) -> Result<(), PathFault> {
    find(root, path)?;
    if write(root, path, value) { Ok(()) } else { Err((format!("`{path}` cannot be set"), None)) }
}

/// Sets a number in SI at a path that [`value_at`] has found; false when it is not there.
///
/// An absent key is added. Angles and rotational speeds carry their unit, so that reading
/// them again asks no question.
pub fn set_number(root: &mut Node, path: &str, value: f64, dimension: Dimension) -> bool {
    let node = match dimension {
        Dimension::Angle | Dimension::Speed => {
            Node::Text(format!("{value:e} {}", dimension.si_unit()))
        }
        _ => Node::Number(value),
    };
    write(root, path, node)
}

/// Writes a value without asking whether the file knows the path.
fn write(node: &mut Node, path: &str, value: Node) -> bool {
    match node {
        Node::Map(entries) => {
            // A key of a study's map may hold dots itself.
            let known = entries.iter().position(|(key, _)| {
                path.strip_prefix(key.as_str())
                    .is_some_and(|rest| rest.is_empty() || rest.starts_with('.'))
            });
            if let Some((key, inside)) = known.and_then(|index| entries.get_mut(index)) {
                let rest = path.get(key.len()..).unwrap_or_default().trim_start_matches('.');
                if rest.is_empty() {
                    *inside = value;
                    return true;
                }
                return write(inside, rest, value);
            }
            let (key, rest) = path.split_once('.').unwrap_or((path, ""));
            let mut inside = value;
            for step in rest.rsplit('.').filter(|step| !step.is_empty()) {
                inside = Node::Map(vec![(step.to_owned(), inside)]);
            }
            entries.push((key.to_owned(), inside));
            true
        }
        Node::Null => {
            *node = Node::Map(Vec::new());
            write(node, path, value)
        }
        Node::List(items) => {
            let (step, rest) = path.split_once('.').unwrap_or((path, ""));
            let Some(item) = step.parse().ok().and_then(|index: usize| items.get_mut(index)) else {
                return false;
            };
            if rest.is_empty() {
                *item = value;
                true
            } else {
                write(item, rest, value)
            }
        }
        _ => false,
    }
}

#[cfg(test)]
#[path = "patch_tests.rs"]
mod tests;
