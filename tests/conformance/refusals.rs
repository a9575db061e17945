//! What lies outside a key's range, is missing or unknown is refused at its place, with the range.

use super::descriptions::{Met, walk_file};
use super::program::{call, none};
use super::trees::{trains, with};
use lodeshaft::tree::{Node, Range, Shape};

/// Values that a key must refuse, each with words of the message that is due.
fn bad_values(shape: &Shape) -> Vec<(Node, String)> {
    let number = |value: f64, words: &str| (Node::Number(value), words.to_owned());
    match shape {
        Shape::Quantity(_, range) | Shape::QuantityOrGroup(_, range, _) => match range {
            Range::Positive => {
                vec![number(-1.0, "must be above zero"), number(0.0, "must be above zero")]
            }
            Range::NotNegative => vec![number(-1.0, "must not be negative")],
            Range::NotZero => vec![number(0.0, "must not be zero")],
            Range::Between(low, high) => {
                let beyond = (high - low).max(1.0);
                let words = "must lie between ";
                vec![number(low - beyond, words), number(high + beyond, words)]
            }
            Range::Any => {
                vec![(Node::Text("3 parsecs".to_owned()), "parsecs".to_owned())]
            }
        },
        Shape::Whole(low, high) => {
            let words = if *high == i64::MAX {
                format!("must be a whole number, {low} or more")
            } else {
                format!("must be a whole number from {low} to {high}")
            };
            let mut bad = vec![
                (Node::Number(*low as f64 - 1.0), words.clone()),
                (Node::Number(*low as f64 + 0.5), words.clone()),
            ];
            if *high < 1_000_000_000 {
                bad.push((Node::Number(*high as f64 + 1.0), words));
            }
            bad
        }
        Shape::Word(_) => {
            vec![(Node::Text("no_such_word".to_owned()), "it may be ".to_owned())]
        }
        Shape::Flag => {
            vec![(Node::Text("perhaps".to_owned()), "must be true or false".to_owned())]
        }
        Shape::Signal(_) => {
            vec![(Node::Text("3 parsecs".to_owned()), "parsecs".to_owned())]
        }
        Shape::Name => vec![(Node::List(Vec::new()), "a name is needed here".to_owned())],
        _ => Vec::new(),
    }
}

/// Asks `check` about a changed tree; says what is wrong unless it is refused as it should be.
fn refused(name: &str, tree: &Node, path: &str, words: &str) -> Option<String> {
    let call = call(tree, &["check", "case.yaml"]);
    let said = call
        .stderr
        .split("error: ")
        .skip(1)
        .any(|fault| fault.contains(words) && fault.contains(&format!("({path})")));
    let placed = call.stderr.contains("--> case.yaml:");
    (call.status != Some(2) || !said || !placed).then(|| {
        format!(
            "{name}: {path} should be refused with `{words}`; status {:?}\n{}",
            call.status, call.stderr
        )
    })
}

#[test]
fn every_key_refuses_what_lies_outside_its_range() {
    let mut wrong = Vec::new();
    let mut asked = std::collections::BTreeSet::new();
    for train in trains() {
        let mut bad: Vec<(String, Node, String)> = Vec::new();
        walk_file(&train.tree, &mut |met: &Met<'_>| {
            // The version of the format has words of its own.
            if met.generic != "lodeshaft" && asked.insert(met.generic.clone()) {
                for (value, words) in bad_values(&met.field.shape) {
                    bad.push((met.path.clone(), value, words));
                }
            }
        });
        for (path, value, words) in bad {
            let tree = with(&train.tree, &path, Some(&value));
            wrong.extend(refused(&train.name, &tree, &path, &words));
        }
    }
    assert!(asked.len() > 200, "only {} keys were asked", asked.len());
    none(&wrong);
}

#[test]
fn every_required_key_is_missed() {
    let mut wrong = Vec::new();
    let mut asked = std::collections::BTreeSet::new();
    for train in trains() {
        let mut required = Vec::new();
        walk_file(&train.tree, &mut |met: &Met<'_>| {
            if met.counted && met.field.required && asked.insert(met.generic.clone()) {
                required.push((met.path.clone(), met.field.key));
            }
        });
        for (path, key) in required {
            let call = call(&with(&train.tree, &path, None), &["check", "case.yaml"]);
            if call.status != Some(2) || !call.stderr.contains(&format!("`{key}` is missing")) {
                wrong.push(format!("{}: {path} is not missed\n{}", train.name, call.stderr));
            }
        }
    }
    assert!(asked.len() > 60, "only {} keys were asked", asked.len());
    none(&wrong);
}

#[test]
fn every_map_refuses_a_key_that_it_does_not_know() {
    let mut wrong = Vec::new();
    let mut asked = std::collections::BTreeSet::new();
    for train in trains() {
        let mut maps = Vec::new();
        walk_file(&train.tree, &mut |met: &Met<'_>| {
            let is_map = matches!(met.field.shape, Shape::Group(_) | Shape::QuantityOrGroup(..));
            if is_map && matches!(met.node, Node::Map(_)) && asked.insert(met.generic.clone()) {
                maps.push(met.path.clone());
            }
        });
        for map in maps {
            let path = format!("{map}.no_such_key");
            let tree = with(&train.tree, &path, Some(&Node::Number(1.0)));
            wrong.extend(refused(&train.name, &tree, &path, "no_such_key"));
        }
    }
    none(&wrong);
}
