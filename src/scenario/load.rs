//! From a path or a text to a checked scenario, or to all its faults.

use super::{Scenario, Source, Tables, check, patch, sections};
use crate::diagnostic::{Diagnostics, Severity};
use crate::tree::{Fields, Node};
use std::cell::RefCell;
use std::path::Path;

/// A scenario that may run, with what it was read from.
#[derive(Clone, Debug)]
pub struct Loaded {
    /// The typed scenario.
    pub scenario: Scenario,
    /// Its value tree, changes from outside included: the handle of studies.
    pub node: Node,
    /// What a reader of the results must know.
    pub warnings: Diagnostics,
    /// Its text, for places.
    pub source: Source,
    /// The tables its signals name.
    pub tables: Tables,
}

/// A file at fault.
#[derive(Clone, Debug)]
pub struct Failure {
    /// All faults and warnings.
    pub diagnostics: Diagnostics,
    /// The text, for places; without text when the file could not be read.
    pub source: Box<Source>,
    /// The value tree, when the text could be read at all.
    pub node: Option<Box<Node>>,
}

impl Failure {
    /// The faults as printed, in line order.
    pub fn render(&self) -> String {
        self.source.render(&self.diagnostics)
    }
}

/// Reads a file (`-`: standard input), sets values by path, and checks it.
pub fn load(path: &Path, sets: &[(String, String)]) -> Result<Loaded, Failure> {
    match Source::open(path) {
        Ok(source) => load_source(source, sets),
        Err(unread) => {
            let (source, diagnostics) = *unread;
            Err(Failure { diagnostics, source: Box::new(source), node: None })
        }
    }
}

/// Reads a text in memory as [`load`] reads a file; relative files start from `base`.
pub fn load_text(
    name: &str,
    base: &Path,
    text: &str,
    sets: &[(String, String)],
) -> Result<Loaded, Failure> {
    load_source(Source::from_text(name, base, text), sets)
}

fn load_source(mut source: Source, sets: &[(String, String)]) -> Result<Loaded, Failure> {
    let mut diagnostics = Diagnostics::new();
    let fail = |diagnostics, source, node| {
        Err(Failure { diagnostics, source: Box::new(source), node: Some(Box::new(node)) })
    };
    let Some(mut node) = source.parse(&mut diagnostics) else {
        return Err(Failure { diagnostics, source: Box::new(source), node: None });
    };
    for (path, value) in sets {
        source.sets.push((path.clone(), value.clone()));
        patch::set_typed(&mut node, path, value, &mut diagnostics);
    }
    if diagnostics.has_errors() {
        // A key that stands twice hides nothing else; a path that was not found does not either.
        let mut tables = Tables::new(&source.base);
        if let Err(more) = read_node(&node, &mut tables) {
            diagnostics.extend(more);
        }
        return fail(diagnostics, source, node);
    }
    let mut tables = Tables::new(&source.base);
    match read_node(&node, &mut tables) {
        Ok((mut scenario, warnings)) => {
            if scenario.title.is_empty() {
                scenario.title = source.stem();
            }
            diagnostics.extend(warnings);
            Ok(Loaded { scenario, node, warnings: diagnostics, source, tables })
        }
        Err(faults) => {
            diagnostics.extend(faults);
            fail(diagnostics, source, node)
        }
    }
}

/// Reads a value tree: the scenario with its warnings, or all faults.
pub fn read_node(node: &Node, tables: &mut Tables) -> Result<(Scenario, Diagnostics), Diagnostics> {
    let faults = RefCell::new(Diagnostics::new());
    let mut scenario = Fields::read("", node, &faults, |root| sections::read(root, node));
    let mut faults = faults.into_inner();
    tables.fill(&mut scenario, &mut faults);
    check::check(&scenario, node, &mut faults);
    if faults.iter().any(|entry| entry.severity == Severity::Error) {
        Err(faults)
    } else {
        Ok((scenario, faults))
    }
}
