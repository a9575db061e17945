//! The cursor over one map: its path, its faults, what it was asked for.

use super::{FieldDescription, Node, Shape};
use crate::diagnostic::{Diagnostics, closest};
use std::cell::RefCell;

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

    /// True when a key stands here that was not asked for so far and is not among `later`.
    pub fn has_unknown(&self, later: &[&str]) -> bool {
        self.entries.iter().any(|(name, _)| !self.asked.iter().chain(later).any(|key| key == name))
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

    /// Counts a key among those that may stand here, and describes it.
    pub(super) fn note(
        &mut self,
        key: &'static str,
        shape: Shape,
        required: bool,
        doc: &'static str,
    ) {
        self.ask(key);
        if let Some(list) = &mut self.description {
            list.push(FieldDescription { key, shape, required, default: None, doc });
        }
    }

    /// Counts a key among those that may stand here.
    pub(super) fn ask(&mut self, key: &'static str) {
        self.asked.push(key);
    }

    /// In describing mode, records what the key asked for last stands for when it is absent.
    pub fn note_default(&mut self, default: f64) {
        if let Some(last) = self.description.as_mut().and_then(|list| list.last_mut()) {
            last.default = Some(default);
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

    /// The value of a key; a required one that is absent is noted.
    pub(super) fn lookup(&mut self, key: &'static str, required: bool) -> Option<&'a Node> {
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

#[cfg(test)]
#[path = "fields_tests.rs"]
mod tests;
