//! Where a dotted path stands in the text: line and column, and what only the text shows.
//!
//! The value tree knows no places. This index is built once from the same text with an
//! event parser; it also finds keys that stand twice, which the tree cannot show.

use crate::diagnostic::{Diagnostic, Diagnostics, Severity, Spot};
use saphyr_parser::{Event, Parser, Span};
use std::collections::{BTreeMap, BTreeSet};

/// Maps nested deeper than any scenario needs; the limit keeps every later stage shallow.
const DEEPEST: usize = 64;

/// A line and a column, both from 1.
pub type LineColumn = (usize, usize);

/// The places of every path of a text.
#[derive(Clone, Debug, Default)]
pub struct Places {
    values: BTreeMap<String, Place>,
}

/// Where a value stands.
#[derive(Clone, Copy, Debug)]
struct Place {
    /// Its key; of a list entry the entry itself.
    key: LineColumn,
    /// The value; of a nested map or list its key.
    value: LineColumn,
}

impl Places {
    /// Indexes a text that the YAML reader has accepted; structural faults go to `faults`.
    pub fn scan(text: &str, faults: &mut Diagnostics) -> Self {
        let mut scan = Scan { places: Self::default(), open: Vec::new(), too_deep: false, faults };
        for event in Parser::new_from_str(text) {
            // What the tree reader took and this parser does not read only costs places.
            let Ok((event, span)) = event else { break };
            scan.take(&event, span);
        }
        scan.places
    }

    /// The place of a path, or of the nearest thing around it that stands in the text.
    pub fn find(&self, path: &str, spot: Spot) -> Option<LineColumn> {
        if let Spot::Text { line, column } = spot {
            return Some((line, column));
        }
        let mut shorter = path;
        loop {
            if let Some(place) = self.values.get(shorter) {
                let exact = shorter.len() == path.len();
                return Some(if exact && spot == Spot::Value { place.value } else { place.key });
            }
            shorter = shorter.rsplit_once('.')?.0;
        }
    }
}

/// An open map or list.
enum Open {
    Map { path: String, key: Option<(String, LineColumn)>, seen: BTreeSet<String> },
    List { path: String, next: usize },
}

struct Scan<'a> {
    places: Places,
    open: Vec<Open>,
    too_deep: bool,
    faults: &'a mut Diagnostics,
}

impl Scan<'_> {
    fn take(&mut self, event: &Event<'_>, span: Span) {
        let at = (span.start.line(), span.start.col() + 1);
        match event {
            Event::Scalar(text, _, _, tag) => {
                self.refuse_tag(tag.is_some(), at);
                if !self.take_key(text, at) {
                    self.take_value(at, false);
                }
            }
            Event::Alias(_) if !self.take_key("*", at) => {
                self.take_value(at, false);
            }
            Event::MappingStart(_, tag) => {
                self.refuse_tag(tag.is_some(), at);
                let path = self.take_value(at, true);
                self.enter(Open::Map { path, key: None, seen: BTreeSet::new() }, at);
            }
            Event::SequenceStart(_, tag) => {
                self.refuse_tag(tag.is_some(), at);
                let path = self.take_value(at, true);
                self.enter(Open::List { path, next: 0 }, at);
            }
            Event::MappingEnd | Event::SequenceEnd => {
                self.open.pop();
            }
            _ => {}
        }
    }

    fn enter(&mut self, open: Open, at: LineColumn) {
        self.open.push(open);
        if self.open.len() > DEEPEST && !self.too_deep {
            self.too_deep = true;
            self.fault(
                at,
                String::new(),
                format!("maps and lists are nested deeper than {DEEPEST}"),
            );
        }
    }

    /// Takes a scalar as a key where a map waits for one.
    fn take_key(&mut self, text: &str, at: LineColumn) -> bool {
        let Some(Open::Map { path, key, seen }) = self.open.last_mut() else { return false };
        if key.is_some() {
            return false;
        }
        let fresh = seen.insert(text.to_owned());
        let full = join(path, text);
        *key = Some((text.to_owned(), at));
        if !fresh {
            let first = self.places.values.get(&full).map_or(0, |place| place.key.0);
            let message = format!("`{text}` stands twice in one map, first on line {first}");
            self.fault(at, full, message);
        }
        true
    }

    /// Notes the place of a value and returns its path.
    fn take_value(&mut self, at: LineColumn, nested: bool) -> String {
        let (path, key) = match self.open.last_mut() {
            None => (String::new(), at),
            Some(Open::Map { path, key, .. }) => match key.take() {
                Some((name, place)) => (join(path, &name), place),
                None => (path.clone(), at),
            },
            Some(Open::List { path, next }) => {
                *next += 1;
                (join(path, &(*next - 1).to_string()), at)
            }
        };
        let value = if nested { key } else { at };
        self.places.values.entry(path.clone()).or_insert(Place { key, value });
        path
    }

    fn refuse_tag(&mut self, tagged: bool, at: LineColumn) {
        if tagged {
            self.fault(at, String::new(), "YAML tags (`!word`) are not used here".to_owned());
        }
    }

    fn fault(&mut self, at: LineColumn, path: String, message: String) {
        self.faults.push(Diagnostic {
            severity: Severity::Error,
            path,
            message,
            hint: None,
            spot: Spot::Text { line: at.0, column: at.1 },
        });
    }
}

fn join(path: &str, step: &str) -> String {
    if path.is_empty() { step.to_owned() } else { format!("{path}.{step}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn places(text: &str) -> (Places, Diagnostics) {
        let mut faults = Diagnostics::new();
        let places = Places::scan(text, &mut faults);
        (places, faults)
    }

    #[test]
    fn paths_lead_to_lines_and_columns() {
        let text =
            "title: x\nshafts:\n  main: { between: [a, rotr], stiffness: 2 }\nlist:\n- 3\n- k: 4\n";
        let (places, faults) = places(text);
        assert!(faults.is_empty());
        for (path, place) in [
            ("title", (1, 8)),
            ("shafts", (2, 1)),
            ("shafts.main", (3, 3)),
            ("shafts.main.between.1", (3, 24)),
            ("shafts.main.stiffness", (3, 42)),
            ("list.0", (5, 3)),
            ("list.1.k", (6, 6)),
            ("shafts.main.damping", (3, 3)),
        ] {
            assert_eq!(places.find(path, Spot::Value), Some(place), "{path}");
        }
        assert_eq!(places.find("shafts.main.stiffness", Spot::Key), Some((3, 31)));
        assert_eq!(places.find("nowhere", Spot::Value), None);
    }

    #[test]
    fn a_key_that_stands_twice_is_told_with_both_lines() {
        let (_, faults) = places("a:\n  b: 1\n  c: 2\n  b: 3\n");
        let all: Vec<_> = faults.into_iter().collect();
        assert_eq!(all.len(), 1);
        assert_eq!(all[0].message, "`b` stands twice in one map, first on line 2");
        assert_eq!(all[0].spot, Spot::Text { line: 4, column: 3 });
    }
}
