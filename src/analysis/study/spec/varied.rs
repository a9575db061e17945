//! A number of the file that a study varies.

use crate::quantity::{self, Dimension};
use crate::scenario::describe::PathFault;
use crate::scenario::{Display, patch};
use crate::tree::Node;

/// A number of the file by its dotted path.
#[derive(Clone, Debug, PartialEq)]
pub struct Varied {
    /// Dotted path.
    pub path: String,
    /// Dimension of its value.
    pub dimension: Dimension,
    /// The value the file has for it, SI; `None` when its absence stands for no number.
    pub design: Option<f64>,
    /// Takes whole values only.
    pub whole: bool,
    /// The unit for people: as typed in the file, or the one its dimension is shown in.
    pub unit: &'static str,
}

impl Varied {
    /// The number at a path of a tree.
    ///
    /// # Errors
    /// A path that leads nowhere or to no number, with a hint where one can be given.
    pub fn find(root: &Node, path: &str, display: &Display) -> Result<Self, PathFault> {
        let value = patch::value_at(root, path)?;
        Ok(Self {
            path: path.to_owned(),
            dimension: value.dimension,
            design: value.design,
            whole: value.whole,
            unit: typed_unit(root, path, value.dimension)
                .unwrap_or_else(|| usual_unit(value.dimension, display)),
        })
    }

    /// A value for people, with its unit.
    pub fn shown(&self, value: f64) -> String {
        quantity::format_quantity(value, self.dimension, self.unit)
    }

    /// Sets the number in a tree; false when the path is not there.
    pub fn set(&self, tree: &mut Node, value: f64) -> bool {
        patch::set_number(tree, &self.path, value, self.dimension)
    }

    /// Head of its column in a table: the path and its SI unit.
    pub fn column(&self) -> String {
        format!("{} [{}]", self.path, self.dimension.si_unit())
    }

    /// The nearest value that the file may hold.
    pub fn allowed(&self, value: f64) -> f64 {
        if self.whole { value.round() } else { value }
    }
}

/// The unit that the text of a quantity ends with.
fn typed_unit(root: &Node, path: &str, dimension: Dimension) -> Option<&'static str> {
    let Node::Text(text) = at(root, path)? else { return None };
    let text = text.trim();
    // The longest ending that is a unit: `3 kN*m` is not in m.
    text.char_indices()
        .filter_map(|(start, _)| quantity::find_unit(text.get(start..)?.trim_start()))
        .find(|unit| unit.dimension == dimension)
        .map(|unit| unit.symbol)
}

/// The value at a path that is known to lead somewhere.
fn at<'n>(node: &'n Node, path: &str) -> Option<&'n Node> {
    if path.is_empty() {
        return Some(node);
    }
    match node {
        Node::Map(entries) => entries.iter().find_map(|(key, inside)| {
            let rest = path.strip_prefix(key.as_str())?;
            if rest.is_empty() { Some(inside) } else { at(inside, rest.strip_prefix('.')?) }
        }),
        Node::List(items) => {
            let (step, rest) = path.split_once('.').unwrap_or((path, ""));
            at(items.get(step.parse::<usize>().ok()?)?, rest)
        }
        _ => None,
    }
}

fn usual_unit(dimension: Dimension, display: &Display) -> &'static str {
    let wanted = match dimension {
        Dimension::Speed => Some(display.speed.as_str()),
        Dimension::Torque => Some(display.torque.as_str()),
        Dimension::Angle => Some(display.angle.as_str()),
        _ => None,
    };
    wanted.and_then(quantity::find_unit).map_or_else(|| dimension.si_unit(), |unit| unit.symbol)
}
