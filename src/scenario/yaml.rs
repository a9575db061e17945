//! From YAML text to the value tree.
//!
//! The only place that knows the YAML library. The tree is built directly, so that the
//! order of keys is kept; a key that stands twice keeps its first value (the places index
//! tells the fault).

use crate::diagnostic::{Diagnostic, Severity, Spot};
use crate::tree::Node;
use serde::de::{Deserialize, Deserializer, Error, MapAccess, SeqAccess, Visitor};
use std::collections::BTreeSet;
use std::fmt;

/// Reads a text; the fault of a text that is no YAML carries its line.
pub fn parse(text: &str) -> Result<Node, Diagnostic> {
    match serde_yaml::from_str::<Typed>(text) {
        Ok(typed) => Ok(typed.0),
        Err(error) => Err(fault(&error)),
    }
}

/// Reads a value typed on the command line: a map or list in brackets, else a number or a text.
pub fn parse_value(text: &str) -> Result<Node, Diagnostic> {
    let bracketed = text.trim_start().starts_with(['{', '[']);
    match parse(text) {
        Err(fault) if bracketed => Err(fault),
        Ok(Node::Map(_) | Node::List(_)) | Err(_) if !bracketed => Ok(Node::Text(text.to_owned())),
        other => other,
    }
}

fn fault(error: &serde_yaml::Error) -> Diagnostic {
    let full = error.to_string();
    let spot = error.location().map_or(Spot::Value, |place| Spot::Text {
        line: place.line().max(1),
        column: place.column().max(1),
    });
    // The library adds its own line and path; the place is told apart.
    let text = full.split(" at line ").next().unwrap_or(&full);
    let (message, hint) = explain(text);
    Diagnostic { severity: Severity::Error, path: String::new(), message, hint, spot }
}

/// Puts the commonest syntax faults in words that tell what to change.
fn explain(text: &str) -> (String, Option<String>) {
    let with = |message: &str, hint: &str| (message.to_owned(), Some(hint.to_owned()));
    if text.contains("cannot start any token") {
        with(
            "this is not YAML: a character stands here that cannot start a value",
            "indent with spaces, never tabs; put text that starts with a special character in quotes",
        )
    } else if text.contains("mapping values are not allowed") {
        with(
            "this is not YAML: a colon stands where no key can be",
            "put text with a colon in quotes, and check the indentation of this line and the one above",
        )
    } else if text.contains("did not find expected ',' or") {
        with(
            "this is not YAML: a list or map in brackets is not closed or lacks a comma",
            "check the brackets and commas of this line and the ones above",
        )
    } else if text.contains("did not find expected key")
        || text.contains("did not find expected '-'")
    {
        with(
            "this is not YAML: the block does not go on as it began",
            "entries of one block start in the same column; check the indentation",
        )
    } else if text.contains("invalid type: enum") {
        with("YAML tags (`!word`) are not used here", "put text that starts with `!` in quotes")
    } else if text.contains("repetition limit") {
        with("aliases repeat too much of the file", "write the values out")
    } else if text.contains("recursion limit") {
        ("maps and lists are nested too deeply".to_owned(), None)
    } else if text.contains("more than one document") {
        with("the file holds more than one document", "one case a file: remove the line `---`")
    } else {
        (format!("this is not YAML: {text}"), None)
    }
}

/// A value tree as the YAML library hands it over.
struct Typed(Node);

impl<'de> Deserialize<'de> for Typed {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(Build).map(Typed)
    }
}

struct Build;

impl<'de> Visitor<'de> for Build {
    type Value = Node;

    fn expecting(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str("a plain value, a list or a map")
    }

    fn visit_bool<E: Error>(self, value: bool) -> Result<Node, E> {
        Ok(Node::Bool(value))
    }

    fn visit_i64<E: Error>(self, value: i64) -> Result<Node, E> {
        Ok(Node::Number(value as f64))
    }

    fn visit_u64<E: Error>(self, value: u64) -> Result<Node, E> {
        Ok(Node::Number(value as f64))
    }

    fn visit_i128<E: Error>(self, value: i128) -> Result<Node, E> {
        Ok(Node::Number(value as f64))
    }

    fn visit_u128<E: Error>(self, value: u128) -> Result<Node, E> {
        Ok(Node::Number(value as f64))
    }

    fn visit_f64<E: Error>(self, value: f64) -> Result<Node, E> {
        Ok(Node::Number(value))
    }

    fn visit_str<E: Error>(self, value: &str) -> Result<Node, E> {
        Ok(Node::Text(value.to_owned()))
    }

    fn visit_unit<E: Error>(self) -> Result<Node, E> {
        Ok(Node::Null)
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Node, A::Error> {
        let mut items = Vec::new();
        while let Some(Typed(item)) = list.next_element()? {
            items.push(item);
        }
        Ok(Node::List(items))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Node, A::Error> {
        let mut entries = Vec::new();
        let mut seen = BTreeSet::new();
        while let Some(Typed(key)) = map.next_key()? {
            let Typed(value) = map.next_value()?;
            let key = match key {
                Node::Text(text) => text,
                Node::Number(number) => number.to_string(),
                Node::Bool(value) => value.to_string(),
                Node::Null => "null".to_owned(),
                other => return Err(A::Error::custom(format!("{} is no key", other.kind()))),
            };
            if seen.insert(key.clone()) {
                entries.push((key, value));
            }
        }
        Ok(Node::Map(entries))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_keep_their_kind_and_keys_their_order() {
        let node = parse("b: 1\na: [1e-7, 2 rpm, true, ~]\n1: x\nb: 2\n").unwrap();
        let Node::Map(entries) = &node else { panic!("{node:?}") };
        let keys: Vec<_> = entries.iter().map(|(key, _)| key.as_str()).collect();
        assert_eq!(keys, ["b", "a", "1"]);
        assert_eq!(node.get("b"), Some(&Node::Number(1.0)));
        assert_eq!(
            node.get("a"),
            Some(&Node::List(vec![
                Node::Number(1e-7),
                Node::Text("2 rpm".into()),
                Node::Bool(true),
                Node::Null
            ]))
        );
    }

    #[test]
    fn a_syntax_fault_has_its_line_and_a_hint() {
        let fault = parse("a:\n\tb: 1\n").unwrap_err();
        assert!(matches!(fault.spot, Spot::Text { line: 2, .. }), "{fault:?}");
        assert!(fault.hint.is_some_and(|hint| hint.contains("tabs")));
        let fault = parse("title: a: b\n").unwrap_err();
        assert!(fault.hint.is_some_and(|hint| hint.contains("quotes")));
    }

    #[test]
    fn aliases_that_grow_without_bound_are_refused() {
        let mut bomb = "a0: &a0 [x, x, x, x, x, x, x, x, x, x]\n".to_owned();
        for level in 1..12 {
            let before = level - 1;
            let list = vec![format!("*a{before}"); 10].join(", ");
            bomb.push_str(&format!("a{level}: &a{level} [{list}]\n"));
        }
        assert!(parse(&bomb).is_err());
    }
}
