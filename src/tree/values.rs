//! Questions for single values: quantities, whole numbers, names, words, text.

use super::{Fields, Node, Range, Shape};
use crate::diagnostic::closest;
use crate::quantity::{self, Dimension};

impl Fields<'_> {
    /// A quantity that must be there; NaN stands in for a faulty one.
    pub fn quantity(
        &mut self,
        key: &'static str,
        dimension: Dimension,
        range: Range,
        doc: &'static str,
    ) -> f64 {
        self.note(key, Shape::Quantity(dimension, range), true, doc);
        match self.lookup(key, true) {
            Some(node) => self.number(key, node, dimension, range),
            None => f64::NAN,
        }
    }

    /// A quantity that may be absent.
    pub fn quantity_optional(
        &mut self,
        key: &'static str,
        dimension: Dimension,
        range: Range,
        doc: &'static str,
    ) -> Option<f64> {
        self.note(key, Shape::Quantity(dimension, range), false, doc);
        self.lookup(key, false).map(|node| self.number(key, node, dimension, range))
    }

    /// A quantity with a default.
    pub fn quantity_or(
        &mut self,
        key: &'static str,
        dimension: Dimension,
        range: Range,
        default: f64,
        doc: &'static str,
    ) -> f64 {
        let typed = self.quantity_optional(key, dimension, range, doc);
        self.note_default(default);
        typed.unwrap_or(default)
    }

    pub(super) fn number(&self, key: &str, node: &Node, dimension: Dimension, range: Range) -> f64 {
        let path = self.path_of(key);
        let value = quantity::read(&path, node, dimension, &mut self.faults().borrow_mut());
        if let Some(text) = value.is_finite().then(|| range.fault(value, dimension)).flatten() {
            self.faults().borrow_mut().error(path, format!("`{key}` {text}"));
            return f64::NAN;
        }
        value
    }

    /// A whole number that must be there.
    pub fn whole(&mut self, key: &'static str, low: i64, high: i64, doc: &'static str) -> i64 {
        self.note(key, Shape::Whole(low, high), true, doc);
        self.lookup(key, true).map_or(low, |node| self.integer(key, node, low, high))
    }

    /// A whole number that may be absent.
    pub fn whole_optional(
        &mut self,
        key: &'static str,
        low: i64,
        high: i64,
        doc: &'static str,
    ) -> Option<i64> {
        self.note(key, Shape::Whole(low, high), false, doc);
        self.lookup(key, false).map(|node| self.integer(key, node, low, high))
    }

    fn integer(&self, key: &str, node: &Node, low: i64, high: i64) -> i64 {
        let number = match node {
            Node::Number(value) => Some(*value),
            Node::Text(text) => text.trim().parse::<f64>().ok(),
            _ => None,
        };
        match number {
            Some(value) if value.fract() == 0.0 && value >= low as f64 && value <= high as f64 => {
                value as i64
            }
            Some(_) if high == i64::MAX => {
                self.fault(key, format!("`{key}` must be a whole number, {low} or more"));
                low
            }
            Some(_) => {
                self.fault(key, format!("`{key}` must be a whole number from {low} to {high}"));
                low
            }
            None => {
                self.fault(key, format!("`{key}` must be a whole number, not {}", node.kind()));
                low
            }
        }
    }

    /// A name of a body or another thing that must be there; empty stands in for a faulty one.
    pub fn name(&mut self, key: &'static str, doc: &'static str) -> String {
        self.note(key, Shape::Name, true, doc);
        self.lookup(key, true).map_or_else(String::new, |node| self.word(key, node))
    }

    /// A name that may be absent.
    pub fn name_optional(&mut self, key: &'static str, doc: &'static str) -> Option<String> {
        self.note(key, Shape::Name, false, doc);
        self.lookup(key, false).map(|node| self.word(key, node))
    }

    /// A list of exactly `count` names; empty names stand in for faulty ones.
    pub fn names(&mut self, key: &'static str, count: usize, doc: &'static str) -> Vec<String> {
        self.note(key, Shape::Names(count), true, doc);
        match self.lookup(key, true) {
            Some(Node::List(items)) if items.len() == count => items
                .iter()
                .enumerate()
                .map(|(index, item)| match item {
                    Node::Text(text) => text.clone(),
                    other => {
                        self.fault(
                            &format!("{key}.{index}"),
                            format!("a name is needed here, not {}", other.kind()),
                        );
                        String::new()
                    }
                })
                .collect(),
            Some(_) => {
                self.fault(key, format!("`{key}` must be a list of {count} names"));
                vec![String::new(); count]
            }
            None => vec![String::new(); count],
        }
    }

    fn word(&self, key: &str, node: &Node) -> String {
        match node {
            Node::Text(text) => text.clone(),
            other => {
                self.fault(key, format!("a name is needed here, not {}", other.kind()));
                String::new()
            }
        }
    }

    /// A list of two names; empty names stand in for faulty ones.
    pub fn pair(&mut self, key: &'static str, doc: &'static str) -> [String; 2] {
        let mut names = self.names(key, 2, doc).into_iter();
        [names.next().unwrap_or_default(), names.next().unwrap_or_default()]
    }

    /// `source`, which every named thing may carry.
    pub fn source(&mut self) -> Option<String> {
        self.text("source", "Where the figures come from; printed in the report.")
    }

    /// Free text that may be absent; numbers and booleans are taken as typed.
    pub fn text(&mut self, key: &'static str, doc: &'static str) -> Option<String> {
        self.note(key, Shape::Text, false, doc);
        match self.lookup(key, false)? {
            Node::Text(text) => Some(text.clone()),
            Node::Number(value) => Some(value.to_string()),
            Node::Bool(value) => Some(value.to_string()),
            Node::Null => None,
            other => {
                self.fault(key, format!("`{key}` must be text, not {}", other.kind()));
                None
            }
        }
    }

    /// One of a few words; the first is the default when the key may be absent.
    pub fn one_of(
        &mut self,
        key: &'static str,
        words: &[&'static str],
        required: bool,
        doc: &'static str,
    ) -> &'static str {
        self.note(key, Shape::Word(words.to_vec()), required, doc);
        let Some(node) = self.lookup(key, required) else { return words[0] };
        let typed = match node {
            Node::Text(text) => text.clone(),
            Node::Number(value) => value.to_string(),
            other => {
                self.fault(
                    key,
                    format!("`{key}` must be one of {}, not {}", words.join(", "), other.kind()),
                );
                return words[0];
            }
        };
        if let Some(word) = words.iter().find(|word| **word == typed) {
            return word;
        }
        let message = format!("`{key}: {typed}` is not known; it may be {}", words.join(", "));
        match closest(&typed, words.iter().copied()) {
            Some(near) => self.fault_hint(key, message, format!("did you mean `{near}`?")),
            None => self.fault(key, message),
        }
        words[0]
    }

    /// `true` or `false`, with a default.
    pub fn flag(&mut self, key: &'static str, default: bool, doc: &'static str) -> bool {
        self.note(key, Shape::Flag, false, doc);
        match self.lookup(key, false) {
            None => default,
            Some(Node::Bool(value)) => *value,
            Some(other) => {
                self.fault(key, format!("`{key}` must be true or false, not {}", other.kind()));
                default
            }
        }
    }
}
