//! A train turned round does the same the other way: the laws of motion know no left or right.
//!
//! All given speeds and angles change sign and every law is `reversed`; speeds, angles and
//! torques must then change sign and nothing else, events come at the same times. Laws that are
//! odd by themselves (torque against the motion) must do so without being reversed as well.

use super::program::{none, run};
use super::trees::{Train, trains};
use lodeshaft::tree::Node;

/// How a value is turned round.
#[derive(Clone, Copy)]
enum Turn {
    /// Its sign.
    Sign,
    /// `true` for `false` (absent) and back.
    Flag,
    /// `at_least` and `at_most` change places and sign; `reaches` changes sign.
    Limits,
}

/// What is turned round in a train; `*` stands for any name or place in a list.
const TURNED: [(&str, Turn); 11] = [
    ("bodies.*.speed", Turn::Sign),
    ("motors.*.reversed", Turn::Flag),
    ("loads.*.reversed", Turn::Flag),
    ("overrunning_clutches.*.reversed", Turn::Flag),
    ("magnetic_gears.*.initial_load_angle", Turn::Sign),
    ("magnetic_gears.*.harmonics.*.phase", Turn::Sign),
    ("magnetic_gears.*.cogging.*.phase", Turn::Sign),
    ("magnetic_couplings.*.initial_load_angle", Turn::Sign),
    ("magnetic_couplings.*.harmonics.*.phase", Turn::Sign),
    ("requirements.*", Turn::Limits),
    ("protections.*.when", Turn::Limits),
];

/// Load laws that act against the motion alike in both directions.
const ODD_LOADS: [&str; 4] = ["power_law", "friction", "viscous", "curve"];

/// Agreement asked for, as a share of a column's largest value.
const ALIKE: f64 = 1e-7;

fn turned(node: &Node, turn: Turn) -> Node {
    match (turn, node) {
        (Turn::Sign, Node::Number(value)) => Node::Number(-value),
        (Turn::Sign, Node::Text(text)) => Node::Text(match text.strip_prefix('-') {
            Some(positive) => positive.to_owned(),
            None => format!("-{text}"),
        }),
        (Turn::Flag, Node::Bool(value)) => Node::Bool(!value),
        (Turn::Limits, Node::Map(entries)) if node.get("signed") == Some(&Node::Bool(true)) => {
            let entries = entries.iter().map(|(key, value)| match key.as_str() {
                "at_least" => ("at_most".to_owned(), turned(value, Turn::Sign)),
                "at_most" => ("at_least".to_owned(), turned(value, Turn::Sign)),
                "reaches" => (key.clone(), turned(value, Turn::Sign)),
                _ => (key.clone(), value.clone()),
            });
            Node::Map(entries.collect())
        }
        (_, other) => other.clone(),
    }
}

/// The tree with everything that a pattern names turned round.
fn apply(node: &Node, pattern: &str, turn: Turn) -> Node {
    let (step, rest) = pattern.split_once('.').unwrap_or((pattern, ""));
    let inside = |value: &Node| match rest {
        "" => turned(value, turn),
        rest => apply(value, rest, turn),
    };
    match node {
        Node::Map(entries) => {
            let mut entries: Vec<(String, Node)> = entries
                .iter()
                .map(|(key, value)| {
                    let wanted = step == "*" || key == step;
                    (key.clone(), if wanted { inside(value) } else { value.clone() })
                })
                .collect();
            // A flag that is absent is false.
            let absent = rest.is_empty() && entries.iter().all(|(key, _)| key != step);
            if absent && matches!(turn, Turn::Flag) {
                entries.push((step.to_owned(), Node::Bool(true)));
            }
            Node::Map(entries)
        }
        Node::List(items) if step == "*" => Node::List(items.iter().map(inside).collect()),
        other => other.clone(),
    }
}

/// The whole train turned round.
fn mirrored(tree: &Node) -> Node {
    TURNED.iter().fold(tree.clone(), |tree, (pattern, turn)| apply(&tree, pattern, *turn))
}

/// The same, loads with an odd law as they were; `None` when there are none.
fn mirrored_but_odd_loads(tree: &Node) -> Option<Node> {
    let mut tree = mirrored(tree);
    let mut any = false;
    let Node::Map(sections) = &mut tree else { return None };
    let (_, Node::Map(loads)) = sections.iter_mut().find(|(key, _)| key == "loads")? else {
        return None;
    };
    for (_, load) in loads {
        let law = load.get("law").cloned();
        let odd =
            ODD_LOADS.iter().any(|odd| law.as_ref().is_some_and(|law| law.get(odd).is_some()));
        if odd {
            any = true;
            *load = apply(load, "reversed", Turn::Flag);
        }
    }
    any.then_some(tree)
}

/// Columns of a series by their heads.
fn columns(text: &str) -> Vec<(String, Vec<f64>)> {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let mut columns: Vec<(String, Vec<f64>)> =
        reader.headers().unwrap().iter().map(|head| (head.to_owned(), Vec::new())).collect();
    for row in reader.records().map(Result::unwrap) {
        for ((_, column), field) in columns.iter_mut().zip(&row) {
            column.push(field.parse().unwrap());
        }
    }
    columns
}

/// The sign with which a channel comes back; `None` when either will do.
fn sign(head: &str) -> Option<f64> {
    let unit = head.rsplit_once(" [").map_or("", |(_, unit)| unit.trim_end_matches(']'));
    match unit {
        // Blades are pitched alike either way.
        "rad" if head.contains(".pitch ") => Some(1.0),
        "rad/s" | "rad" | "N*m" => Some(-1.0),
        "s" | "W" | "m/s" => Some(1.0),
        _ if head.contains(".net_slips ") => Some(-1.0),
        _ => Some(1.0),
    }
}

/// Times, kinds and things of the events.
fn events(text: &str) -> Vec<(f64, String, String)> {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let rows = reader.records().map(Result::unwrap);
    let mut events: Vec<_> =
        rows.map(|row| (row[0].parse().unwrap(), row[1].to_owned(), row[2].to_owned())).collect();
    events.sort_by(|a: &(f64, String, String), b| {
        (a.1.as_str(), a.2.as_str()).cmp(&(b.1.as_str(), b.2.as_str())).then(a.0.total_cmp(&b.0))
    });
    events
}

fn compare(train: &Train, tree: &Node, wrong: &mut Vec<String>) {
    let (plain, other) = (run(&train.tree), run(tree));
    if other.status != Some(0) {
        wrong.push(format!("{}: turned round: {:?}\n{}", train.name, other.status, other.stderr));
        return;
    }
    let (a, b) = (columns(&plain.file("series.csv")), columns(&other.file("series.csv")));
    for ((head, plain), (other_head, other)) in a.iter().zip(&b) {
        assert_eq!(head, other_head);
        let largest = plain.iter().fold(1e-9, |most: f64, value| most.max(value.abs()));
        let Some(sign) = sign(head) else { continue };
        let off = plain
            .iter()
            .zip(other)
            .map(|(plain, other)| (plain - sign * other).abs())
            .fold(0.0, f64::max);
        if off > ALIKE * largest || plain.len() != other.len() {
            wrong.push(format!("{}: {head} is off by {off:e} of {largest}", train.name));
        }
    }
    let (a, b) = (events(&plain.file("events.csv")), events(&other.file("events.csv")));
    let same = a.len() == b.len()
        && a.iter().zip(&b).all(|(a, b)| a.1 == b.1 && a.2 == b.2 && (a.0 - b.0).abs() < 1e-7);
    if !same {
        wrong.push(format!("{}: other events: {a:?} and {b:?}", train.name));
    }
}

#[test]
fn every_train_turned_round_does_the_same_the_other_way() {
    let mut wrong = Vec::new();
    for train in trains() {
        compare(&train, &mirrored(&train.tree), &mut wrong);
    }
    none(&wrong);
}

#[test]
fn odd_laws_need_not_be_reversed() {
    let mut wrong = Vec::new();
    let mut shown = std::collections::BTreeSet::new();
    for train in trains() {
        let Some(tree) = mirrored_but_odd_loads(&train.tree) else { continue };
        shown.insert(train.entry().to_owned());
        compare(&train, &tree, &mut wrong);
    }
    for odd in ODD_LOADS {
        assert!(shown.contains(&format!("loads.{odd}")), "{odd} was not looked at");
    }
    none(&wrong);
}
