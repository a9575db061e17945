//! Walks a tree along the program's description of the file.

use lodeshaft::analysis::study::spec;
use lodeshaft::quantity::Dimension;
use lodeshaft::scenario::describe::root;
use lodeshaft::signal::read::describe_forms;
use lodeshaft::tree::{FieldDescription, Node, Shape};
use std::collections::BTreeSet;

/// A key met in a tree.
pub struct Met<'a> {
    /// Its path with names and places of lists taken out: the key as such.
    pub generic: String,
    /// Its path in this tree.
    pub path: String,
    /// What the program says of it.
    pub field: &'a FieldDescription,
    /// What stands under it.
    pub node: &'a Node,
    /// False for alternatives, of which one is enough.
    pub counted: bool,
}

type Look<'l> = dyn FnMut(&Met<'_>) + 'l;

/// Looks at every key of a file.
pub fn walk_file(tree: &Node, look: &mut Look<'_>) {
    walk(&root(), tree, &Place::default(), true, look);
}

#[derive(Clone, Default)]
struct Place {
    generic: String,
    path: String,
}

impl Place {
    fn below(&self, generic: &str, step: &str) -> Self {
        let join = |path: &str, step: &str| {
            if path.is_empty() { step.to_owned() } else { format!("{path}.{step}") }
        };
        Self { generic: join(&self.generic, generic), path: join(&self.path, step) }
    }
}

fn entries(node: &Node) -> &[(String, Node)] {
    match node {
        Node::Map(entries) => entries,
        _ => &[],
    }
}

fn items(node: &Node) -> &[Node] {
    match node {
        Node::List(items) => items,
        _ => &[],
    }
}

fn walk(
    fields: &[FieldDescription],
    node: &Node,
    place: &Place,
    counted: bool,
    look: &mut Look<'_>,
) {
    for field in fields {
        let Some(value) = node.get(field.key) else { continue };
        let here = place.below(field.key, field.key);
        look(&Met {
            generic: here.generic.clone(),
            path: here.path.clone(),
            field,
            node: value,
            counted,
        });
        match &field.shape {
            Shape::Group(inside) | Shape::QuantityOrGroup(_, _, inside) => {
                walk(inside, value, &here, true, look);
            }
            Shape::Choice(inside) => walk(inside, value, &here, false, look),
            Shape::List(inside) => {
                for (index, item) in items(value).iter().enumerate() {
                    walk(inside, item, &here.below("0", &index.to_string()), true, look);
                }
            }
            Shape::Section(inside) | Shape::Paths(inside) => {
                for (name, thing) in entries(value) {
                    walk(inside, thing, &here.below("NAME", name), true, look);
                }
            }
            Shape::Signal(dimension) => signal(value, &here, *dimension, look),
            Shape::Signals => {
                for (name, course) in entries(value) {
                    signal(course, &here.below("NAME", name), Dimension::Torque, look);
                }
            }
            Shape::Free if field.key == "studies" && place.path.is_empty() => {
                for (name, study) in entries(value) {
                    walk(&spec::describe(), study, &here.below("NAME", name), false, look);
                }
            }
            Shape::Free if field.key == "sum" || field.key == "product" => {
                for (index, member) in items(value).iter().enumerate() {
                    signal(member, &here.below("0", &index.to_string()), Dimension::Torque, look);
                }
            }
            _ => {}
        }
    }
}

/// A signal's own keys are the same wherever it stands.
fn signal(node: &Node, place: &Place, dimension: Dimension, look: &mut Look<'_>) {
    let place = Place { generic: "SIGNAL".to_owned(), path: place.path.clone() };
    walk(&describe_forms(dimension), node, &place, false, look);
}

/// Every key that the program knows.
pub fn all_keys() -> BTreeSet<String> {
    let mut keys = BTreeSet::new();
    list(&root(), "", &mut keys);
    list(&spec::describe(), "studies.NAME", &mut keys);
    list(&describe_forms(Dimension::Torque), "SIGNAL", &mut keys);
    keys
}

fn list(fields: &[FieldDescription], path: &str, keys: &mut BTreeSet<String>) {
    for field in fields {
        let here =
            if path.is_empty() { field.key.to_owned() } else { format!("{path}.{}", field.key) };
        match &field.shape {
            Shape::Group(inside) | Shape::QuantityOrGroup(_, _, inside) | Shape::Choice(inside) => {
                list(inside, &here, keys);
            }
            Shape::List(inside) => list(inside, &format!("{here}.0"), keys),
            Shape::Section(inside) | Shape::Paths(inside) => {
                list(inside, &format!("{here}.NAME"), keys);
            }
            _ => {}
        }
        keys.insert(here);
    }
}
