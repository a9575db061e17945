//! The scenario as a plain tree of values, and the cursor that reads it into typed parts.
//!
//! [`Node`] is what was typed, without places: a value is known by its dotted path.
//! [`Fields`] reads one map of it. Each question names the key, what it must be and one
//! line of documentation, so that the same code reads a file, lists the keys it knows
//! (unknown ones are faults) and, in describing mode, yields the reference and the schema.
//! A fault is recorded and a stand-in returned, so that all faults of a file are found.

use crate::diagnostic::{Diagnostics, closest};
use crate::quantity::{self, Dimension};
use std::cell::RefCell;

/// A value of the scenario file.
#[derive(Clone, Debug, PartialEq)]
pub enum Node {
    /// Nothing: an empty section.
    Null,
    /// `true` or `false`.
    Bool(bool),
    /// A number (never NaN or infinite once the reader has accepted the file).
    Number(f64),
    /// Text, quantities with units included.
    Text(String),
    /// A list.
    List(Vec<Node>),
    /// A map in the order of the file.
    Map(Vec<(String, Node)>),
}

impl Node {
    /// The value under `key` when this is a map.
    pub fn get(&self, key: &str) -> Option<&Node> {
        match self {
            Self::Map(entries) => {
                entries.iter().find(|(name, _)| name == key).map(|(_, node)| node)
            }
            _ => None,
        }
    }

    /// What a message calls this value.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Null => "nothing",
            Self::Bool(_) => "true or false",
            Self::Number(_) => "a number",
            Self::Text(_) => "text",
            Self::List(_) => "a list",
            Self::Map(_) => "a map",
        }
    }
}

/// The range a quantity must lie in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Range {
    /// Any finite number.
    Any,
    /// Above zero.
    Positive,
    /// Zero or above.
    NotNegative,
    /// Anything but zero.
    NotZero,
    /// From the first to the second, both included.
    Between(f64, f64),
}

impl Range {
    fn fault(self, value: f64, dimension: Dimension) -> Option<String> {
        let ok = match self {
            Self::Any => true,
            Self::Positive => value > 0.0,
            Self::NotNegative => value >= 0.0,
            Self::NotZero => value != 0.0,
            Self::Between(low, high) => (low..=high).contains(&value),
        };
        (!ok).then(|| match self {
            Self::Positive => "must be above zero".to_owned(),
            Self::NotNegative => "must not be negative".to_owned(),
            Self::NotZero => "must not be zero".to_owned(),
            Self::Between(low, high) => {
                let number = |value| quantity::format_number(value, 6);
                let unit = match dimension.si_unit() {
                    "1" => String::new(),
                    unit => format!(" {unit}"),
                };
                format!("must lie between {} and {}{unit}", number(low), number(high))
            }
            Self::Any => String::new(),
        })
    }
}

/// What a key holds, for the reference and the schema.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A quantity of a dimension within a range.
    Quantity(Dimension, Range),
    /// A whole number from the first to the second.
    Whole(i64, i64),
    /// Free text.
    Text,
    /// A name of a body or another thing of the file.
    Name,
    /// `true` or `false`.
    Flag,
    /// One of these words.
    Word(Vec<&'static str>),
    /// A signal of a dimension.
    Signal(Dimension),
    /// A list of quantities, one dimension a column, one row an entry.
    Rows(Vec<Dimension>),
    /// A list of names.
    Names(usize),
    /// A nested map.
    Group(Vec<FieldDescription>),
    /// A list of nested maps.
    List(Vec<FieldDescription>),
    /// A map from names of the user's to nested maps: a section of the file.
    Section(Vec<FieldDescription>),
    /// A one-key map: exactly one of these.
    Choice(Vec<FieldDescription>),
    /// A quantity of a dimension within a range, or a nested map it is worked out from.
    QuantityOrGroup(Dimension, Range, Vec<FieldDescription>),
    /// A map from names of the user's to signals.
    Signals,
    /// A quantity of the dimension of the channel that `of` names.
    OfChannel,
    /// Any value: read elsewhere.
    Free,
}

/// One key of a map, as the reading code knows it.
#[derive(Clone, Debug, PartialEq)]
pub struct FieldDescription {
    /// The key.
    pub key: &'static str,
    /// What it holds.
    pub shape: Shape,
    /// Whether it must be there.
    pub required: bool,
    /// What an absent number stands for, SI.
    pub default: Option<f64>,
    /// One line of documentation.
    pub doc: &'static str,
}

/// One alternative of a one-key map: its key, its documentation and how its inside is read.
pub type Alternative<T> = (&'static str, &'static str, fn(&mut Fields<'_>) -> T);

/// A cursor over one map of the file.
pub struct Fields<'a> {
    path: String,
    entries: &'a [(String, Node)],
    asked: Vec<&'static str>,
    faults: &'a RefCell<Diagnostics>,
    /// Not a map at all: that is told once, and no key is missed.
    no_map: bool,
    /// Required keys that are absent, with a hint.
    missing: Vec<(&'static str, Option<String>)>,
    description: Option<Vec<FieldDescription>>,
}

impl<'a> Fields<'a> {
    /// A cursor over `node`, which stands at `path`; anything but a map is a fault.
    pub fn new(path: impl Into<String>, node: &'a Node, faults: &'a RefCell<Diagnostics>) -> Self {
        let path = path.into();
        let (entries, no_map): (&[(String, Node)], bool) = match node {
            Node::Map(entries) => (entries, false),
            Node::Null => (&[], false),
            other => {
                faults.borrow_mut().error(
                    path.as_str(),
                    format!("a map of keys is needed here, not {}", other.kind()),
                );
                (&[], true)
            }
        };
        Self {
            path,
            entries,
            asked: Vec::new(),
            faults,
            no_map,
            missing: Vec::new(),
            description: None,
        }
    }

    /// Runs a reading function without a file and returns the keys it asks for.
    pub fn describe<T>(read: impl FnOnce(&mut Fields<'_>) -> T) -> Vec<FieldDescription> {
        let faults = RefCell::new(Diagnostics::new());
        let mut fields = Fields {
            path: String::new(),
            entries: &[],
            asked: Vec::new(),
            faults: &faults,
            no_map: false,
            missing: Vec::new(),
            description: Some(Vec::new()),
        };
        let _ = read(&mut fields);
        fields.description.take().unwrap_or_default()
    }

    /// Reads a map with `read`, then reports the keys nobody asked for.
    pub fn read<T>(
        path: impl Into<String>,
        node: &Node,
        faults: &RefCell<Diagnostics>,
        read: impl FnOnce(&mut Fields<'_>) -> T,
    ) -> T {
        let mut fields = Fields::new(path, node, faults);
        let value = read(&mut fields);
        fields.finish();
        value
    }

    /// The path of this map.
    pub fn path(&self) -> &str {
        &self.path
    }

    /// The name of the thing this map describes: the last step of its path.
    pub fn own_name(&self) -> &str {
        self.path.rsplit('.').next().unwrap_or_default()
    }

    /// True when this map could not be read as a map, which has been told.
    pub fn is_no_map(&self) -> bool {
        self.no_map
    }

    /// The entries of this map in the order of the file.
    pub fn entries(&self) -> &'a [(String, Node)] {
        self.entries
    }

    /// The path of a key of this map.
    pub fn path_of(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_owned() } else { format!("{}.{key}", self.path) }
    }

    /// True while the reading code is only being asked what it would read.
    pub fn describing(&self) -> bool {
        self.description.is_some()
    }

    /// True when the key is in the file.
    pub fn has(&self, key: &str) -> bool {
        self.entries.iter().any(|(name, _)| name == key)
    }

    /// Records a fault at a key of this map.
    pub fn fault(&self, key: &str, message: impl Into<String>) {
        if !self.describing() {
            self.faults.borrow_mut().error(self.path_of(key), message);
        }
    }

    /// Records a fault with a hint at a key of this map.
    pub fn fault_hint(&self, key: &str, message: impl Into<String>, hint: impl Into<String>) {
        if !self.describing() {
            self.faults.borrow_mut().error_hint(self.path_of(key), message, hint);
        }
    }

    /// Records a warning at a key of this map.
    pub fn warn(&self, key: &str, message: impl Into<String>) {
        if !self.describing() {
            self.faults.borrow_mut().warning(self.path_of(key), message);
        }
    }

    /// Records a fault at this map itself.
    pub fn fault_here(&self, message: impl Into<String>) {
        if !self.describing() {
            self.faults.borrow_mut().error(self.path.as_str(), message);
        }
    }

    /// Records a fault with a hint at this map itself.
    pub fn fault_here_hint(&self, message: impl Into<String>, hint: impl Into<String>) {
        if !self.describing() {
            self.faults.borrow_mut().error_hint(self.path.as_str(), message, hint);
        }
    }

    /// The list in which faults are collected, for reading code that goes its own way.
    pub fn faults(&self) -> &'a RefCell<Diagnostics> {
        self.faults
    }

    fn note(&mut self, key: &'static str, shape: Shape, required: bool, doc: &'static str) {
        self.asked.push(key);
        if let Some(list) = &mut self.description {
            list.push(FieldDescription { key, shape, required, default: None, doc });
        }
    }

    /// The raw value of a key that this cursor does not read itself.
    pub fn raw(
        &mut self,
        key: &'static str,
        shape: Shape,
        required: bool,
        doc: &'static str,
    ) -> Option<&'a Node> {
        self.note(key, shape, required, doc);
        self.lookup(key, required)
    }

    fn lookup(&mut self, key: &'static str, required: bool) -> Option<&'a Node> {
        let found = self.entries.iter().find(|(name, _)| name == key).map(|(_, node)| node);
        if found.is_none() && required {
            self.missing.push((key, None));
        }
        found
    }

    /// Records that a key is missing which is required in this case only.
    pub fn miss(&mut self, key: &'static str, hint: impl Into<String>) {
        self.missing.push((key, Some(hint.into())));
    }

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

    /// In describing mode, records what the key asked for last stands for when it is absent.
    pub fn note_default(&mut self, default: f64) {
        if let Some(last) = self.description.as_mut().and_then(|list| list.last_mut()) {
            last.default = Some(default);
        }
    }

    fn number(&self, key: &str, node: &Node, dimension: Dimension, range: Range) -> f64 {
        let path = self.path_of(key);
        let value = quantity::read(&path, node, dimension, &mut self.faults.borrow_mut());
        if let Some(text) = value.is_finite().then(|| range.fault(value, dimension)).flatten() {
            self.faults.borrow_mut().error(path, format!("`{key}` {text}"));
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

    /// Rows of quantities, for example `[[0 s, 1 N*m], [2 s, 3 N*m]]`; empty when faulty.
    pub fn rows(
        &mut self,
        key: &'static str,
        columns: &[Dimension],
        required: bool,
        doc: &'static str,
    ) -> Vec<Vec<f64>> {
        self.note(key, Shape::Rows(columns.to_vec()), required, doc);
        let Some(node) = self.lookup(key, required) else { return Vec::new() };
        let Node::List(items) = node else {
            self.fault(key, format!("`{key}` must be a list of rows, not {}", node.kind()));
            return Vec::new();
        };
        let mut rows = Vec::with_capacity(items.len());
        for (index, item) in items.iter().enumerate() {
            match item {
                Node::List(cells) if cells.len() == columns.len() => {
                    let row =
                        cells.iter().zip(columns).enumerate().map(|(column, (cell, dimension))| {
                            let path = self.path_of(&format!("{key}.{index}.{column}"));
                            quantity::read(&path, cell, *dimension, &mut self.faults.borrow_mut())
                        });
                    rows.push(row.collect());
                }
                _ => self.fault(
                    &format!("{key}.{index}"),
                    format!("a row of {} values is needed here", columns.len()),
                ),
            }
        }
        if rows.len() < items.len() { Vec::new() } else { rows }
    }

    /// A nested map that must be there.
    pub fn group<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        read: impl FnOnce(&mut Fields<'_>) -> T,
    ) -> Option<T> {
        self.nested(key, true, doc, read)
    }

    /// A nested map that may be absent.
    pub fn group_optional<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        read: impl FnOnce(&mut Fields<'_>) -> T,
    ) -> Option<T> {
        self.nested(key, false, doc, read)
    }

    fn nested<T>(
        &mut self,
        key: &'static str,
        required: bool,
        doc: &'static str,
        read: impl FnOnce(&mut Fields<'_>) -> T,
    ) -> Option<T> {
        if self.describing() {
            let inside = Self::describe(read);
            self.note(key, Shape::Group(inside), required, doc);
            return None;
        }
        self.asked.push(key);
        let node = self.lookup(key, required)?;
        if !matches!(node, Node::Map(_)) {
            self.fault(key, format!("`{key}` must be a map of keys, not {}", node.kind()));
            return None;
        }
        Some(Fields::read(self.path_of(key), node, self.faults, read))
    }

    /// A quantity, or a nested map in its place; `None` when absent or no map where one is needed.
    pub fn quantity_or_group<T>(
        &mut self,
        key: &'static str,
        (dimension, range): (Dimension, Range),
        doc: &'static str,
        plain: impl FnOnce(f64) -> T,
        read: impl FnOnce(&mut Fields<'_>) -> T,
    ) -> Option<T> {
        if self.describing() {
            let inside = Self::describe(read);
            self.note(key, Shape::QuantityOrGroup(dimension, range, inside), false, doc);
            return None;
        }
        self.asked.push(key);
        match self.lookup(key, false)? {
            node @ Node::Map(_) => Some(Fields::read(self.path_of(key), node, self.faults, read)),
            node => Some(plain(self.number(key, node, dimension, range))),
        }
    }

    /// A section: a map from names of the user's to maps, read in the order of the file.
    ///
    /// Names are checked by the caller. An entry that is no map is told and left out.
    pub fn section<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        read: impl Fn(&mut Fields<'_>) -> T,
    ) -> Vec<T> {
        if self.describing() {
            let inside = Self::describe(&read);
            self.note(key, Shape::Section(inside), false, doc);
            return Vec::new();
        }
        self.asked.push(key);
        let Some(node) = self.lookup(key, false) else { return Vec::new() };
        let section = Fields::new(self.path_of(key), node, self.faults);
        let mut things = Vec::with_capacity(section.entries.len());
        for (name, inside) in section.entries {
            let mut fields = Fields::new(section.path_of(name), inside, self.faults);
            let thing = read(&mut fields);
            if !fields.no_map {
                things.push(thing);
            }
            fields.finish();
        }
        things
    }

    /// A list of nested maps that may be absent.
    pub fn list<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        read: impl Fn(&mut Fields<'_>) -> T,
    ) -> Vec<T> {
        if self.describing() {
            let inside = Self::describe(&read);
            self.note(key, Shape::List(inside), false, doc);
            return Vec::new();
        }
        self.asked.push(key);
        match self.lookup(key, false) {
            None | Some(Node::Null) => Vec::new(),
            Some(Node::List(items)) => items
                .iter()
                .enumerate()
                .map(|(index, item)| {
                    Fields::read(self.path_of(&format!("{key}.{index}")), item, self.faults, &read)
                })
                .collect(),
            Some(other) => {
                self.fault(key, format!("`{key}` must be a list, not {}", other.kind()));
                Vec::new()
            }
        }
    }

    /// A one-key map that names one of several alternatives.
    pub fn choice<T>(
        &mut self,
        key: &'static str,
        required: bool,
        doc: &'static str,
        alternatives: &[Alternative<T>],
    ) -> Option<T> {
        if self.describing() {
            let inside = alternatives
                .iter()
                .map(|(name, doc, read)| FieldDescription {
                    key: name,
                    shape: Shape::Group(Self::describe(read)),
                    required: true,
                    default: None,
                    doc,
                })
                .collect();
            self.note(key, Shape::Choice(inside), required, doc);
            return None;
        }
        self.asked.push(key);
        let node = self.lookup(key, required)?;
        choose(&self.path_of(key), node, self.faults, alternatives)
    }

    /// Refuses a key of the contract that this version does not know yet.
    pub fn later(&mut self, key: &'static str) {
        self.asked.push(key);
        if self.has(key) {
            self.fault(key, format!("`{key}` is not in this version of the program"));
        }
    }

    /// Reports every key that was never asked for and every required one that is missing.
    ///
    /// A missing key is not told when a misspelt one stands in its place.
    pub fn finish(self) {
        if self.describing() {
            return;
        }
        let mut misspelt = Vec::new();
        for (name, _) in self.entries {
            if self.asked.iter().any(|key| key == name) {
                continue;
            }
            let hint = match closest(name, self.asked.iter().copied()) {
                Some(near) => {
                    misspelt.push(near);
                    format!("did you mean `{near}`?")
                }
                None => format!("it takes {}", self.asked.join(", ")),
            };
            let message = format!("`{name}` is not a key of this map");
            self.faults.borrow_mut().error_at_key(self.path_of(name), message, Some(hint));
        }
        if self.no_map {
            return;
        }
        for (key, hint) in self.missing {
            if !misspelt.contains(&key) {
                let message = format!("`{key}` is missing");
                let severity = crate::diagnostic::Severity::Error;
                self.faults.borrow_mut().add(severity, self.path.as_str(), message, hint);
            }
        }
    }
}

/// Reads a one-key map at `path` by the alternative that its key names.
pub fn choose<T>(
    path: &str,
    node: &Node,
    faults: &RefCell<Diagnostics>,
    alternatives: &[Alternative<T>],
) -> Option<T> {
    let known = || alternatives.iter().map(|(name, ..)| *name);
    let Node::Map(entries) = node else {
        let list: Vec<_> = known().collect();
        faults.borrow_mut().error(
            path,
            format!("a one-key map is needed here ({}), not {}", list.join(", "), node.kind()),
        );
        return None;
    };
    let [(name, inside)] = entries.as_slice() else {
        faults
            .borrow_mut()
            .error(path, format!("exactly one key is needed here, not {}", entries.len()));
        return None;
    };
    let inner_path = format!("{path}.{name}");
    let Some((.., read)) = alternatives.iter().find(|(known, ..)| known == name) else {
        let list: Vec<_> = known().collect();
        let message = format!("`{name}` is not known here");
        let hint = match closest(name, known()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("it may be {}", list.join(", ")),
        };
        faults.borrow_mut().error_at_key(inner_path, message, Some(hint));
        return None;
    };
    Some(Fields::read(inner_path, inside, faults, read))
}
