//! The trains, and trees of them with something changed.

use lodeshaft::scenario::load;
use lodeshaft::tree::Node;
use serde_json::{Map, Value};
use std::fs;
use std::path::{Path, PathBuf};

/// The folder of the trains.
pub fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/conformance/trains")
}

/// A minimal train.
pub struct Train {
    /// Name of its file without the ending.
    pub name: String,
    /// Its value tree.
    pub tree: Node,
}

impl Train {
    /// The entry of the list that it shows.
    pub fn entry(&self) -> &str {
        self.name.split_once('+').map_or(self.name.as_str(), |(entry, _)| entry)
    }

    /// True when it is there for a study; it is run like any other too.
    pub fn is_study(&self) -> bool {
        self.name.starts_with("studies.")
    }
}

/// Every train, by name.
pub fn trains() -> Vec<Train> {
    let mut files: Vec<PathBuf> = fs::read_dir(folder())
        .expect("the folder of trains")
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
        .collect();
    files.sort();
    let read = |path: &PathBuf| {
        let loaded = load(path, &[])
            .unwrap_or_else(|failure| panic!("{}:\n{}", path.display(), failure.render()));
        let name = path.file_stem().unwrap().to_str().unwrap().to_owned();
        Train { name, tree: loaded.node }
    };
    files.iter().map(read).collect()
}

/// The tree as JSON, which is YAML as well.
pub fn text(tree: &Node) -> String {
    serde_json::to_string_pretty(&value(tree)).unwrap()
}

/// The tree as JSON sees it.
pub fn value(tree: &Node) -> Value {
    match tree {
        Node::Null => Value::Null,
        Node::Bool(value) => Value::from(*value),
        Node::Number(number) if number.fract() == 0.0 && number.abs() < 1e15 => {
            Value::from(*number as i64)
        }
        Node::Number(number) => Value::from(*number),
        Node::Text(text) => Value::from(text.as_str()),
        Node::List(items) => items.iter().map(value).collect(),
        Node::Map(entries) => {
            let entries = entries.iter().map(|(key, inside)| (key.clone(), value(inside)));
            Value::Object(entries.collect::<Map<_, _>>())
        }
    }
}

/// The tree with another value at a path; `None` takes the key out. A dotted path that is itself
/// a key of the tree is one step.
pub fn with(tree: &Node, path: &str, value: Option<&Node>) -> Node {
    match tree {
        Node::Map(entries) => {
            let mut entries = entries.clone();
            let inside = entries.iter_mut().find_map(|(key, inside)| {
                let rest = path.strip_prefix(key.as_str())?.strip_prefix('.')?;
                Some((inside, rest))
            });
            let here = entries_place(tree, path);
            match (here, inside, value) {
                (Some(place), _, Some(value)) => entries[place].1 = value.clone(),
                (Some(place), _, None) => {
                    entries.remove(place);
                }
                (None, Some((inside, rest)), _) => *inside = with(inside, rest, value),
                (None, None, Some(value)) if !path.contains('.') => {
                    entries.push((path.to_owned(), value.clone()));
                }
                (None, None, _) => panic!("{path} is not there"),
            }
            Node::Map(entries)
        }
        Node::List(items) => {
            let (step, rest) = path.split_once('.').unwrap_or((path, ""));
            let place: usize = step.parse().unwrap();
            let mut items = items.clone();
            items[place] = match (rest, value) {
                ("", value) => value.expect("places of lists stay").clone(),
                (rest, value) => with(&items[place], rest, value),
            };
            Node::List(items)
        }
        _ => panic!("{path} leads into a plain value"),
    }
}

fn entries_place(tree: &Node, key: &str) -> Option<usize> {
    let Node::Map(entries) = tree else { return None };
    entries.iter().position(|(name, _)| name == key)
}
