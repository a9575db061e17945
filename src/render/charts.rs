//! The charts of a run: which traces they need, and the files they become.

use crate::results::RunResult;
use crate::scenario::Scenario;
use crate::solve::TraceRequest;
use std::io;
use std::path::Path;

/// What a run must record for its charts; `None` while no chart is drawn.
pub fn request(_scenario: &Scenario) -> Option<TraceRequest> {
    None
}

/// Writes the charts into a folder and returns the names of the files.
///
/// # Errors
/// The fault of the disk.
pub fn write(_folder: &Path, _scenario: &Scenario, _result: &RunResult) -> io::Result<Vec<String>> {
    Ok(Vec::new())
}
