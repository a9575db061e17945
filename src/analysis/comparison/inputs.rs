//! Which inputs differ: two trees walked side by side.

use crate::quantity::{format_number, parse_any};
use crate::tree::Node;

/// Keys on which no result depends, and texts.
const NO_INPUTS: [&str; 7] =
    ["lodeshaft", "title", "about", "document", "display", "measured", "studies"];

/// Values closer than this share are the same figure in other units.
const SAME: f64 = 1e-12;

/// An input that is not the same in all runs.
#[derive(Clone, Debug, PartialEq)]
pub struct InputDifference {
    /// Dotted path.
    pub path: String,
    /// The value as given in each run; `None`: it is not there.
    pub values: Vec<Option<String>>,
}

/// The inputs that differ, in the order in which the files bring them.
pub fn differences(nodes: &[&Node]) -> Vec<InputDifference> {
    let mut found = Vec::new();
    let roots: Vec<Option<&Node>> = nodes.iter().map(|node| Some(*node)).collect();
    walk("", &roots, &mut found);
    found
}

fn walk(path: &str, nodes: &[Option<&Node>], found: &mut Vec<InputDifference>) {
    if all_same(nodes) {
        return;
    }
    let maps = nodes.iter().flatten().any(|node| matches!(node, Node::Map(_)));
    let only_maps = nodes.iter().flatten().all(|node| matches!(node, Node::Map(_) | Node::Null));
    if maps && only_maps {
        for key in keys(nodes) {
            let texts = key == "source" || key == "about";
            if texts || (path.is_empty() && NO_INPUTS.contains(&key)) {
                continue;
            }
            let below = if path.is_empty() { key.to_owned() } else { format!("{path}.{key}") };
            let inside: Vec<Option<&Node>> =
                nodes.iter().map(|node| node.and_then(|node| node.get(key))).collect();
            walk(&below, &inside, found);
        }
        return;
    }
    if let Some(length) = common_length(nodes) {
        for index in 0..length {
            let inside: Vec<Option<&Node>> =
                nodes.iter().map(|node| node.and_then(|node| entry(node, index))).collect();
            walk(&format!("{path}.{index}"), &inside, found);
        }
        return;
    }
    let values = nodes.iter().map(|node| node.map(written)).collect();
    found.push(InputDifference { path: path.to_owned(), values });
}

/// Keys of all maps: those of the first in its order, then what others have beside them.
fn keys<'n>(nodes: &[Option<&'n Node>]) -> Vec<&'n str> {
    let mut keys: Vec<&str> = Vec::new();
    for node in nodes.iter().flatten() {
        let Node::Map(entries) = node else { continue };
        for (key, _) in entries {
            if !keys.contains(&key.as_str()) {
                keys.push(key);
            }
        }
    }
    keys
}

/// The length of lists that all have the same.
fn common_length(nodes: &[Option<&Node>]) -> Option<usize> {
    let mut length = None;
    for node in nodes {
        let Some(Node::List(items)) = node else { return None };
        if *length.get_or_insert(items.len()) != items.len() {
            return None;
        }
    }
    length
}

fn entry(node: &Node, index: usize) -> Option<&Node> {
    match node {
        Node::List(items) => items.get(index),
        _ => None,
    }
}

fn all_same(nodes: &[Option<&Node>]) -> bool {
    nodes.windows(2).all(|pair| match (pair[0], pair[1]) {
        (Some(one), Some(two)) => same(one, two),
        (None, Some(Node::Null)) | (Some(Node::Null), None) | (None, None) => true,
        _ => false,
    })
}

/// True for equal values, also where they are written in other units.
fn same(one: &Node, two: &Node) -> bool {
    match (one, two) {
        (Node::Map(a), Node::Map(b)) => {
            a.len() == b.len()
                && a.iter().all(|(key, inside)| two.get(key).is_some_and(|it| same(inside, it)))
        }
        (Node::List(a), Node::List(b)) => {
            a.len() == b.len() && a.iter().zip(b).all(|(a, b)| same(a, b))
        }
        _ if one == two => true,
        _ => match (quantity(one), quantity(two)) {
            (Some((a, of_a)), Some((b, of_b))) => {
                let near = (a - b).abs() <= SAME * a.abs().max(b.abs());
                // A bare number is in SI whatever it measures.
                near && (of_a == of_b || of_a.is_none() || of_b.is_none())
            }
            _ => false,
        },
    }
}

fn quantity(node: &Node) -> Option<(f64, Option<crate::quantity::Dimension>)> {
    match node {
        Node::Number(value) => Some((*value, None)),
        Node::Text(text) => parse_any(text).ok(),
        _ => None,
    }
}

/// A value on one line, as a file may have it.
fn written(node: &Node) -> String {
    match node {
        Node::Null => "nothing".to_owned(),
        Node::Bool(value) => value.to_string(),
        Node::Number(value) => format_number(*value, 12),
        Node::Text(text) => text.trim().to_owned(),
        Node::List(items) => {
            let items: Vec<String> = items.iter().map(written).collect();
            format!("[{}]", items.join(", "))
        }
        Node::Map(entries) => {
            let entries: Vec<String> =
                entries.iter().map(|(key, inside)| format!("{key}: {}", written(inside))).collect();
            format!("{{ {} }}", entries.join(", "))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn map(entries: &[(&str, Node)]) -> Node {
        Node::Map(entries.iter().map(|(key, node)| ((*key).to_owned(), node.clone())).collect())
    }

    fn text(text: &str) -> Node {
        Node::Text(text.to_owned())
    }

    #[test]
    fn the_same_figure_in_other_units_is_no_difference() {
        // 30/pi revolutions a minute make one radian a second.
        let one = map(&[("duration", text("2 s")), ("inertia", Node::Number(0.5))]);
        let two = map(&[("duration", text("2000 ms")), ("inertia", text("0.5 kg*m2"))]);
        assert!(differences(&[&one, &two]).is_empty());
    }

    #[test]
    fn what_differs_is_named_by_its_path() {
        let body = |inertia: &str| {
            map(&[
                ("title", text(inertia)),
                ("bodies", map(&[("hub", map(&[("inertia", text(inertia))]))])),
            ])
        };
        let (one, two) = (body("1 kg*m2"), body("2 kg*m2"));
        let found = differences(&[&one, &two, &one]);
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].path, "bodies.hub.inertia");
        let value = |text: &str| Some(text.to_owned());
        assert_eq!(found[0].values, [value("1 kg*m2"), value("2 kg*m2"), value("1 kg*m2")]);
    }

    #[test]
    fn a_thing_that_only_one_has_is_told_value_by_value() {
        let one = map(&[("loads", Node::Null)]);
        let two = map(&[("loads", map(&[("pump", map(&[("body", text("hub"))]))]))]);
        let found = differences(&[&one, &two]);
        assert_eq!(found[0].path, "loads.pump.body");
        assert_eq!(found[0].values, [None, Some("hub".to_owned())]);
    }

    #[test]
    fn rows_are_told_one_by_one_where_their_number_is_the_same() {
        let list = |values: &[f64]| {
            map(&[("points", Node::List(values.iter().map(|it| Node::Number(*it)).collect()))])
        };
        let found = differences(&[&list(&[1.0, 2.0]), &list(&[1.0, 3.0])]);
        assert_eq!(found[0].path, "points.1");
        let found = differences(&[&list(&[1.0]), &list(&[1.0, 3.0])]);
        assert_eq!(found[0].values[1].as_deref(), Some("[1, 3]"));
    }
}
