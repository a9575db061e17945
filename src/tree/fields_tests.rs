//! Tests of the cursor: what is asked, what is told.

use super::*;
use crate::quantity::Dimension;
use crate::tree::{Range, choose};

fn text(value: &str) -> Node {
    Node::Text(value.to_owned())
}

fn map(entries: &[(&str, Node)]) -> Node {
    Node::Map(entries.iter().map(|(key, node)| ((*key).to_owned(), node.clone())).collect())
}

/// Reads a map and returns what was told, `path: message (hint)`.
fn told(node: &Node, read: impl FnOnce(&mut Fields<'_>)) -> Vec<String> {
    let faults = RefCell::new(Diagnostics::new());
    Fields::read("top", node, &faults, read);
    faults
        .into_inner()
        .into_iter()
        .map(|fault| match fault.hint {
            Some(hint) => format!("{}: {} ({hint})", fault.path, fault.message),
            None => format!("{}: {}", fault.path, fault.message),
        })
        .collect()
}

fn inertia(fields: &mut Fields<'_>) -> f64 {
    fields.quantity("inertia", Dimension::Inertia, Range::Positive, "the inertia")
}

#[test]
fn a_missing_key_is_told_unless_a_misspelt_one_stands_there() {
    let missing = told(&map(&[]), |fields| {
        inertia(fields);
    });
    assert_eq!(missing, ["top: `inertia` is missing"]);
    let misspelt = told(&map(&[("inertai", Node::Number(1.0))]), |fields| {
        inertia(fields);
    });
    assert_eq!(
        misspelt,
        ["top.inertai: `inertai` is not a key of this map (did you mean `inertia`?)"]
    );
}

#[test]
fn what_is_no_map_is_told_once() {
    let said = told(&text("5 kg*m2"), |fields| {
        inertia(fields);
    });
    assert_eq!(said, ["top: a map of keys is needed here, not text"]);
}

#[test]
fn ranges_and_whole_numbers_hold() {
    let node = map(&[
        ("inertia", Node::Number(0.0)),
        ("pairs", Node::Number(4.5)),
        ("teeth", text("1e3")),
        ("share", text("120 %")),
    ]);
    let said = told(&node, |fields| {
        assert!(inertia(fields).is_nan());
        fields.whole("pairs", 1, 100, "pole pairs");
        assert_eq!(fields.whole("teeth", 1, 5000, "teeth"), 1000);
        fields.quantity("share", Dimension::One, Range::Between(0.0, 1.0), "a share");
    });
    assert_eq!(
        said,
        [
            "top.inertia: `inertia` must be above zero",
            "top.pairs: `pairs` must be a whole number from 1 to 100",
            "top.share: `share` must lie between 0 and 1",
        ]
    );
}

#[test]
fn a_choice_has_exactly_one_known_key() {
    let faults = RefCell::new(Diagnostics::new());
    let alternatives = [("plain", "a plain one", inertia as fn(&mut Fields<'_>) -> f64)];
    let node = map(&[("plain", map(&[("inertia", Node::Number(2.0))]))]);
    assert_eq!(choose("law", &node, &faults, &alternatives), Some(2.0));
    assert!(faults.borrow().is_empty());
    for bad in [map(&[]), map(&[("plian", Node::Null)]), Node::Number(1.0)] {
        assert_eq!(choose("law", &bad, &faults, &alternatives), None);
    }
    assert_eq!(faults.borrow().len(), 3);
}

#[test]
fn reading_code_describes_itself() {
    let described = Fields::describe(|fields| {
        inertia(fields);
        fields.quantity_or("play", Dimension::Angle, Range::NotNegative, 0.5, "free play");
        fields.group_optional("inside", "a nested map", |inside| {
            inside.flag("rigid", false, "turns as one");
        });
    });
    assert_eq!(described.len(), 3);
    assert!(described[0].required && described[0].default.is_none());
    assert_eq!(described[1].default, Some(0.5));
    let Shape::Group(inside) = &described[2].shape else { panic!("{described:?}") };
    assert_eq!(inside[0].key, "rigid");
}
