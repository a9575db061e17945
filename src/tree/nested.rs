//! Questions for what holds more than one value: rows, nested maps, lists, choices, sections.

use super::{FieldDescription, Fields, Node, Range, Shape};
use crate::diagnostic::{Diagnostics, closest};
use crate::quantity::{self, Dimension};
use std::cell::RefCell;

/// One alternative of a one-key map: its key, its documentation and how its inside is read.
pub type Alternative<T> = (&'static str, &'static str, fn(&mut Fields<'_>) -> T);

impl Fields<'_> {
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
                            quantity::read(&path, cell, *dimension, &mut self.faults().borrow_mut())
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
        self.ask(key);
        let node = self.lookup(key, required)?;
        if !matches!(node, Node::Map(_)) {
            self.fault(key, format!("`{key}` must be a map of keys, not {}", node.kind()));
            return None;
        }
        Some(Fields::read(self.path_of(key), node, self.faults(), read))
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
        self.ask(key);
        match self.lookup(key, false)? {
            node @ Node::Map(_) => Some(Fields::read(self.path_of(key), node, self.faults(), read)),
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
        self.entries_of(key, doc, Shape::Section, read)
    }

    /// A map from dotted paths of the file to maps, read in the order of the file.
    ///
    /// Paths are checked by the caller. An entry that is no map is told and left out.
    pub fn paths<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        read: impl Fn(&mut Fields<'_>) -> T,
    ) -> Vec<T> {
        self.entries_of(key, doc, Shape::Paths, read)
    }

    fn entries_of<T>(
        &mut self,
        key: &'static str,
        doc: &'static str,
        shape: fn(Vec<FieldDescription>) -> Shape,
        read: impl Fn(&mut Fields<'_>) -> T,
    ) -> Vec<T> {
        if self.describing() {
            let inside = Self::describe(&read);
            self.note(key, shape(inside), false, doc);
            return Vec::new();
        }
        self.ask(key);
        let Some(node) = self.lookup(key, false) else { return Vec::new() };
        let section = Fields::new(self.path_of(key), node, self.faults());
        let mut things = Vec::with_capacity(section.entries().len());
        for (name, inside) in section.entries() {
            let mut fields = Fields::new(section.path_of(name), inside, self.faults());
            let thing = read(&mut fields);
            if !fields.is_no_map() {
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
        self.ask(key);
        match self.lookup(key, false) {
            None | Some(Node::Null) => Vec::new(),
            Some(Node::List(items)) => items
                .iter()
                .enumerate()
                .map(|(index, item)| {
                    Fields::read(
                        self.path_of(&format!("{key}.{index}")),
                        item,
                        self.faults(),
                        &read,
                    )
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
        self.ask(key);
        let node = self.lookup(key, required)?;
        choose(&self.path_of(key), node, self.faults(), alternatives)
    }
}

/// Reads a one-key map at `path` by the alternative that its key names.
pub fn choose<T>(
    path: &str,
    node: &Node,
    faults: &RefCell<Diagnostics>,
    alternatives: &[Alternative<T>],
) -> Option<T> {
    let known: Vec<&'static str> = alternatives.iter().map(|(name, ..)| *name).collect();
    let (name, inside) = chosen(path, node, faults, &known)?;
    let (.., read) = alternatives.iter().find(|(known, ..)| *known == name)?;
    Some(Fields::read(format!("{path}.{name}"), inside, faults, read))
}

/// The key of a one-key map at `path`, which must be one of the known ones, and what stands
/// under it; anything else is a fault.
pub fn chosen<'n>(
    path: &str,
    node: &'n Node,
    faults: &RefCell<Diagnostics>,
    known: &[&'static str],
) -> Option<(&'static str, &'n Node)> {
    let Node::Map(entries) = node else {
        faults.borrow_mut().error(
            path,
            format!("a one-key map is needed here ({}), not {}", known.join(", "), node.kind()),
        );
        return None;
    };
    let [(name, inside)] = entries.as_slice() else {
        faults
            .borrow_mut()
            .error(path, format!("exactly one key is needed here, not {}", entries.len()));
        return None;
    };
    let Some(found) = known.iter().find(|known| *known == name) else {
        let message = format!("`{name}` is not known here");
        let hint = match closest(name, known.iter().copied()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("it may be {}", known.join(", ")),
        };
        faults.borrow_mut().error_at_key(format!("{path}.{name}"), message, Some(hint));
        return None;
    };
    Some((found, inside))
}
