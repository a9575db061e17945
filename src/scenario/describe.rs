//! What stands, or could stand, at a dotted path: its shape, its value and its default.
//!
//! The description of the file comes from the reading code itself, so it never lags behind.

use super::sections;
use crate::diagnostic::closest;
use crate::quantity::Dimension;
use crate::signal::NamedSignal;
use crate::tree::{FieldDescription, Fields, Node, Shape};

pub use crate::component::protection::PathFault;

/// What a path leads to.
#[derive(Clone, Debug, PartialEq)]
pub enum Kind {
    /// A map of known keys.
    Map(Vec<FieldDescription>),
    /// A map from names of the user's to maps.
    Section(Vec<FieldDescription>),
    /// A list of maps.
    List(Vec<FieldDescription>),
    /// A one-key map.
    Choice(Vec<FieldDescription>),
    /// A quantity; `None`: its own unit tells the dimension.
    Quantity(Option<Dimension>),
    /// A quantity or a map in its place.
    QuantityOrMap(Dimension, Vec<FieldDescription>),
    /// A limit in the dimension of the channel that `of` beside it names.
    OfChannel,
    /// A whole number from the first to the second.
    Whole(i64, i64),
    /// A list of rows, a dimension a column.
    Rows(Vec<Option<Dimension>>),
    /// One row.
    Row(Vec<Option<Dimension>>),
    /// The section of named signals.
    Signals,
    /// A signal; `None`: of a dimension that its own units tell.
    Signal(Option<Dimension>),
    /// A map inside a signal.
    InSignal(Option<Dimension>),
    /// A list of signals inside a sum or a product.
    SignalList(Option<Dimension>),
    /// A list of names.
    Names,
    /// Text, a word, a name, true or false.
    Word,
    /// Anything: read elsewhere.
    Free,
}

impl From<&Shape> for Kind {
    fn from(shape: &Shape) -> Self {
        match shape {
            Shape::Quantity(dimension, _) => Self::Quantity(Some(*dimension)),
            Shape::Whole(low, high) => Self::Whole(*low, *high),
            Shape::Text | Shape::Name | Shape::Flag | Shape::Word(_) => Self::Word,
            Shape::Signal(dimension) => Self::Signal(Some(*dimension)),
            Shape::Rows(columns) => Self::Rows(columns.iter().copied().map(Some).collect()),
            Shape::Names(_) => Self::Names,
            Shape::Group(inside) => Self::Map(inside.clone()),
            Shape::List(inside) => Self::List(inside.clone()),
            Shape::Section(inside) | Shape::Paths(inside) => Self::Section(inside.clone()),
            Shape::Choice(inside) => Self::Choice(inside.clone()),
            Shape::QuantityOrGroup(dimension, _, inside) => {
                Self::QuantityOrMap(*dimension, inside.clone())
            }
            Shape::OfChannel => Self::OfChannel,
            Shape::Signals => Self::Signals,
            Shape::Free => Self::Free,
        }
    }
}

/// What is known of a path.
#[derive(Clone, Debug, PartialEq)]
pub struct Found<'n> {
    /// What it leads to.
    pub kind: Kind,
    /// Its value in the tree; `None` for an absent optional key.
    pub node: Option<&'n Node>,
    /// What absence stands for, SI, where that is a number.
    pub default: Option<f64>,
}

impl<'n> Found<'n> {
    fn there(kind: Kind, node: &'n Node) -> Self {
        Self { kind, node: Some(node), default: None }
    }
}

/// The description of the whole file, in the order of the documentation.
pub fn root() -> Vec<FieldDescription> {
    Fields::describe(|fields| sections::read(fields, &Node::Null))
}

/// Looks a path up in a tree and in the description of the file.
///
/// Named things, list entries and choices must be there; an optional key may be absent.
pub fn find<'n>(tree: &'n Node, path: &str) -> Result<Found<'n>, PathFault> {
    find_in(&root(), tree, path)
}

/// As [`find`], with the description at hand.
fn find_in<'n>(
    description: &[FieldDescription],
    tree: &'n Node,
    path: &str,
) -> Result<Found<'n>, PathFault> {
    if path.is_empty() {
        return Err(("the path is empty".to_owned(), None));
    }
    let mut here = Found::there(Kind::Map(description.to_vec()), tree);
    let mut walked = String::new();
    let mut rest = path;
    while !rest.is_empty() {
        let (step, after) = next_step(&here, rest);
        here = At { node: here.node, walked: &walked }.enter(&here.kind, step)?;
        if !walked.is_empty() {
            walked.push('.');
        }
        walked.push_str(step);
        rest = after;
    }
    Ok(here)
}

/// The dimension of the signal at a path, as a protection may set it; `None` means any.
pub(super) fn signal_dimension_at(
    description: &[FieldDescription],
    tree: &Node,
    signals: &[NamedSignal],
    path: &str,
) -> Result<Option<Dimension>, PathFault> {
    if let Some(name) = path.strip_prefix("signals.")
        && let Some(signal) = signals.iter().find(|signal| signal.name == name)
    {
        return Ok(signal.dimension);
    }
    match find_in(description, tree, path)?.kind {
        Kind::Signal(dimension) if !is_inside_signal(path) => Ok(dimension),
        Kind::Signal(_) => Err((
            format!("`{path}` is a part of a signal"),
            Some("name the whole signal".to_owned()),
        )),
        _ => Err((
            format!("`{path}` is not a signal"),
            Some("for example motors.NAME.scale or signals.NAME".to_owned()),
        )),
    }
}

/// True when a signal at this path is a member of another one.
fn is_inside_signal(path: &str) -> bool {
    path.rsplit_once('.')
        .is_some_and(|(list, _)| list.ends_with(".sum") || list.ends_with(".product"))
}

/// Takes the next step off a path; in free maps a key may hold dots itself.
fn next_step<'p>(here: &Found<'_>, rest: &'p str) -> (&'p str, &'p str) {
    if let (Kind::Free, Some(Node::Map(entries))) = (&here.kind, here.node) {
        for (key, _) in entries {
            match rest.strip_prefix(key.as_str()) {
                Some("") => return (rest, ""),
                Some(after) if after.starts_with('.') => {
                    return (rest.get(..key.len()).unwrap_or(rest), &after[1..]);
                }
                _ => {}
            }
        }
    }
    rest.split_once('.').unwrap_or((rest, ""))
}

/// A value on the way, with the path that led to it.
struct At<'n, 'w> {
    node: Option<&'n Node>,
    walked: &'w str,
}

impl<'n> At<'n, '_> {
    fn enter(&self, kind: &Kind, step: &str) -> Result<Found<'n>, PathFault> {
        match kind {
            Kind::Map(inside) => self.key(inside, step),
            Kind::Section(inside) => {
                self.named(step).map(|node| Found::there(Kind::Map(inside.clone()), node))
            }
            Kind::List(inside) => {
                self.entry(step).map(|node| Found::there(Kind::Map(inside.clone()), node))
            }
            Kind::Choice(inside) => {
                let present = self.node.and_then(|node| node.get(step));
                match (inside.iter().find(|choice| choice.key == step), present) {
                    (Some(choice), Some(node)) => Ok(Found::there(Kind::from(&choice.shape), node)),
                    _ => Err(self.other_choice(step)),
                }
            }
            Kind::QuantityOrMap(_, inside) => match self.node {
                Some(Node::Map(_)) => self.key(inside, step),
                _ => Err((format!("`{}` is a plain quantity here", self.walked), None)),
            },
            Kind::Rows(columns) => {
                self.entry(step).map(|node| Found::there(Kind::Row(columns.clone()), node))
            }
            Kind::Row(columns) => {
                let node = self.entry(step)?;
                let column = step.parse().ok().and_then(|index: usize| columns.get(index));
                Ok(Found::there(Kind::Quantity(column.copied().flatten()), node))
            }
            Kind::Names => self.entry(step).map(|node| Found::there(Kind::Word, node)),
            Kind::Signals => self.named(step).map(|node| Found::there(Kind::Signal(None), node)),
            Kind::Signal(dimension) => match self.node.and_then(|node| node.get(step)) {
                Some(node) => Ok(Found::there(signal_form(step, *dimension), node)),
                None => Err(self.other_choice(step)),
            },
            Kind::SignalList(dimension) => {
                self.entry(step).map(|node| Found::there(Kind::Signal(*dimension), node))
            }
            Kind::InSignal(dimension) => self.key_of_signal(step, *dimension),
            Kind::Free => {
                let node = match self.node {
                    Some(Node::List(_)) => self.entry(step)?,
                    // A key of a study may be absent; what is not one is told when it is read.
                    Some(node @ Node::Map(_)) if self.is_in_study() && node.get(step).is_none() => {
                        return Ok(Found { kind: Kind::Free, node: None, default: None });
                    }
                    _ => self.named(step)?,
                };
                Ok(Found::there(Kind::Free, node))
            }
            Kind::Quantity(_) | Kind::OfChannel | Kind::Whole(..) | Kind::Word => {
                Err((format!("`{}` has nothing inside", self.walked), None))
            }
        }
    }

    fn key(&self, inside: &[FieldDescription], step: &str) -> Result<Found<'n>, PathFault> {
        let Some(field) = inside.iter().find(|field| field.key == step) else {
            let of = if self.walked.is_empty() {
                "the scenario".to_owned()
            } else {
                format!("`{}`", self.walked)
            };
            return Err((
                format!("`{step}` is not a key of {of}"),
                closest(step, inside.iter().map(|field| field.key))
                    .map(|near| format!("did you mean `{near}`?")),
            ));
        };
        Ok(Found {
            kind: Kind::from(&field.shape),
            node: self.node.and_then(|node| node.get(step)),
            default: field.default,
        })
    }

    /// True inside the description of a study: below its name and its kind.
    fn is_in_study(&self) -> bool {
        self.walked.starts_with("studies.") && self.walked.split('.').count() >= 3
    }

    /// An entry of a map whose names the user chose.
    fn named(&self, step: &str) -> Result<&'n Node, PathFault> {
        let entries: &[(String, Node)] = match self.node {
            Some(Node::Map(entries)) => entries,
            _ => &[],
        };
        if let Some((_, node)) = entries.iter().find(|(name, _)| name == step) {
            return Ok(node);
        }
        let names = entries.iter().map(|(name, _)| name.as_str());
        let hint = match closest(step, names) {
            Some(near) => Some(format!("did you mean `{near}`?")),
            None if entries.is_empty() => None,
            None => Some(format!(
                "`{}` has {}",
                self.walked,
                entries.iter().map(|(name, _)| name.as_str()).collect::<Vec<_>>().join(", ")
            )),
        };
        Err((format!("`{}` has no `{step}`", self.walked), hint))
    }

    /// An entry of a list.
    fn entry(&self, step: &str) -> Result<&'n Node, PathFault> {
        let Some(Node::List(items)) = self.node else {
            return Err((format!("`{}` is not a list here", self.walked), None));
        };
        step.parse::<usize>().ok().and_then(|index| items.get(index)).ok_or_else(|| {
            let hint = match items.len() {
                0 => "the list is empty".to_owned(),
                count => format!("entries count from 0 to {}", count - 1),
            };
            (format!("`{}` has no entry {step}", self.walked), Some(hint))
        })
    }

    fn other_choice(&self, step: &str) -> PathFault {
        let there = match self.node {
            Some(Node::Map(entries)) => entries.first().map(|(key, _)| key.as_str()),
            _ => None,
        };
        let message = match there {
            Some(there) => format!("`{}` is `{there}` here, not `{step}`", self.walked),
            None => format!("`{}` has no `{step}`", self.walked),
        };
        (message, None)
    }

    /// A key inside a form of signal: times by their names, the rest in the signal's dimension.
    fn key_of_signal(
        &self,
        step: &str,
        dimension: Option<Dimension>,
    ) -> Result<Found<'n>, PathFault> {
        let (dimension, default) = match step {
            "at" | "start" | "end" | "every" | "largest_gap" => (Some(Dimension::Time), None),
            "frequency" => (Some(Dimension::Frequency), None),
            "phase" => (Some(Dimension::Angle), Some(0.0)),
            "rotor_diameter" | "hub_height" => (Some(Dimension::Length), None),
            "from" | "to" | "base" | "peak" | "mean" | "amplitude" | "hub_wind" => {
                (dimension, None)
            }
            _ => (None, None),
        };
        let node = self.node.and_then(|node| node.get(step));
        if node.is_none() && default.is_none() {
            return self.named(step).map(|node| Found::there(Kind::Free, node));
        }
        Ok(Found { kind: Kind::Quantity(dimension), node, default })
    }
}

/// What stands under a form of signal.
fn signal_form(form: &str, dimension: Option<Dimension>) -> Kind {
    match form {
        "points" => Kind::Rows(vec![Some(Dimension::Time), dimension]),
        "sum" => Kind::SignalList(dimension),
        // Any member may carry the dimension.
        "product" => Kind::SignalList(None),
        _ => Kind::InSignal(dimension),
    }
}

#[cfg(test)]
#[path = "describe_tests.rs"]
mod tests;
