//! A scenario with its studies, read together so that all faults of a file are told at once.

use super::spec::{self, Context, Study};
use crate::diagnostic::Diagnostics;
use crate::scenario::{self, Failure, Loaded, Tables};
use crate::tree::Node;
use std::cell::RefCell;
use std::path::Path;

/// A scenario that may run, with its studies.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The scenario; its warnings include those of the studies.
    pub loaded: Loaded,
    /// Its studies in the order of the file.
    pub studies: Vec<Study>,
}

/// Reads a file (`-`: standard input) with its studies.
///
/// # Errors
/// All faults of the file, those of its studies included.
pub fn load(path: &Path, sets: &[(String, String)]) -> Result<Plan, Failure> {
    plan(scenario::load(path, sets))
}

/// Reads the studies of a scenario that was read, or adds their faults to those found already.
///
/// # Errors
/// All faults of the file, those of its studies included.
pub fn plan(loaded: Result<Loaded, Failure>) -> Result<Plan, Failure> {
    match loaded {
        Ok(mut loaded) => {
            let faults = RefCell::new(Diagnostics::new());
            let studies = {
                let tables = loaded.tables.clone();
                let context = Context::new(&loaded.node, Some(&loaded.scenario), tables, &faults);
                spec::read(section(&loaded.node), &context)
            };
            let mut diagnostics = loaded.warnings.clone();
            diagnostics.extend(faults.into_inner());
            if diagnostics.has_errors() {
                return Err(Failure {
                    diagnostics,
                    source: Box::new(loaded.source),
                    node: Some(Box::new(loaded.node)),
                });
            }
            loaded.warnings = diagnostics;
            Ok(Plan { loaded, studies })
        }
        Err(mut failure) => {
            if let Some(node) = failure.node.as_deref() {
                let faults = RefCell::new(failure.diagnostics.clone());
                let context = Context::new(node, None, Tables::new(Path::new(".")), &faults);
                let _ = spec::read(section(node), &context);
                failure.diagnostics = faults.into_inner();
            }
            Err(failure)
        }
    }
}

/// The section of studies of a tree.
fn section(node: &Node) -> &Node {
    node.get("studies").unwrap_or(&Node::Null)
}
