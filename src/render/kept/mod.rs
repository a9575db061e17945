//! Results of earlier runs, read back from their folder.
//!
//! A folder of results holds the scenario as it was read, so that what was asked is known even
//! when the file has changed since.

mod figures;
mod records;
mod series;

use super::folder::FolderFault;
use super::leftovers;
use crate::analysis::records::RecordComparison;
use crate::results::{RunResult, Traces};
use crate::scenario::{self, Loaded};
use crate::solve::TraceRequest;
use serde_json::Value;
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// The file of a folder of results that holds the text of its scenario.
pub const SCENARIO: &str = "scenario.yaml";

/// A run read back.
#[derive(Debug)]
pub struct Kept {
    /// The scenario as it was, changes by `--set` included.
    pub loaded: Loaded,
    /// What the run found; traces are made from the rows when asked for.
    pub result: RunResult,
    /// How far it is from measured records.
    pub records: Vec<RecordComparison>,
    /// What must be known about it.
    pub warnings: Vec<String>,
    folder: PathBuf,
}

/// Why a folder cannot be read as a result.
#[derive(Debug)]
pub struct KeptFault {
    /// The fault.
    pub fault: FolderFault,
    /// Faults of the kept scenario as printed, when these are the reason.
    pub detail: String,
}

impl KeptFault {
    fn new(message: String, hint: &str) -> Box<Self> {
        let hint = (!hint.is_empty()).then(|| hint.to_owned());
        Box::new(Self { fault: FolderFault { message, hint }, detail: String::new() })
    }
}

/// The version by which a folder says that it was made; `None`: it was made by this one.
fn other_version(summary: &Value) -> Option<String> {
    let ours = concat!("lodeshaft ", env!("CARGO_PKG_VERSION"));
    match summary.get("program").and_then(Value::as_str) {
        Some(program) if program == ours => None,
        Some(program) => Some(program.to_owned()),
        None => Some("an unknown version".to_owned()),
    }
}

/// Reads a folder of results.
///
/// # Errors
/// A folder that is none of ours, holds no run, or cannot be understood.
pub fn read(folder: &Path) -> Result<Kept, Box<KeptFault>> {
    let shown = folder.display().to_string();
    if !leftovers::is_ours(folder) {
        return Err(KeptFault::new(
            format!("`{shown}` is a folder, but holds no results of this program"),
            "name a scenario file, or a folder that `lodeshaft run` or `report` wrote",
        ));
    }
    let text = |name: &str| fs::read_to_string(folder.join(name));
    let summary = match text("summary.json") {
        Ok(summary) => summary,
        Err(error) if error.kind() == io::ErrorKind::NotFound => {
            return Err(KeptFault::new(
                format!("`{shown}` holds no run, only studies"),
                "`lodeshaft run` or `report` with --out puts one there",
            ));
        }
        Err(error) => {
            return Err(KeptFault::new(format!("cannot read `{shown}/summary.json`: {error}"), ""));
        }
    };
    let summary: Value = serde_json::from_str(&summary).map_err(|error| {
        KeptFault::new(
            format!("`{shown}/summary.json` is no JSON: {error}"),
            "run the scenario again into this folder",
        )
    })?;
    let version = other_version(&summary);
    let again = match &version {
        Some(program) => format!(
            "it was written by {program}; run the scenario again with {}",
            concat!("lodeshaft ", env!("CARGO_PKG_VERSION"))
        ),
        None => "run the scenario again into this folder".to_owned(),
    };
    let kept = text(SCENARIO).map_err(|error| {
        KeptFault::new(
            format!("cannot read the scenario that `{shown}` should hold: {}", told(&error)),
            &again,
        )
    })?;
    let loaded = load(folder, &summary, &kept).map_err(|detail| {
        let message = format!("the scenario kept in `{shown}` is at fault for this program");
        let mut fault = KeptFault::new(message, &again);
        fault.detail = detail;
        fault
    })?;
    let events = text("events.csv").unwrap_or_default();
    let result = figures::result(&summary, &events, &loaded.scenario).map_err(|missing| {
        let message = format!("`{shown}/summary.json` cannot be understood: {missing}");
        KeptFault::new(message, &again)
    })?;
    let warnings = version
        .map(|program| {
            format!(
                "`{shown}` was written by {program}, not by {}; figures may be defined differently",
                concat!("lodeshaft ", env!("CARGO_PKG_VERSION"))
            )
        })
        .into_iter()
        .collect();
    let records = records::read(&summary, &loaded.scenario);
    Ok(Kept { loaded, result, records, warnings, folder: folder.to_path_buf() })
}

fn told(error: &io::Error) -> String {
    match error.kind() {
        io::ErrorKind::NotFound => format!("there is no `{SCENARIO}`"),
        _ => error.to_string(),
    }
}

/// The scenario as it was; tables are looked for where the file stood, then in the folder.
fn load(folder: &Path, summary: &Value, text: &str) -> Result<Loaded, String> {
    let typed = summary.get("scenario").and_then(Value::as_str).unwrap_or_default();
    let sets: Vec<(String, String)> = match summary.get("set") {
        Some(Value::Object(entries)) => entries
            .iter()
            .filter_map(|(path, value)| Some((path.clone(), value.as_str()?.to_owned())))
            .collect(),
        _ => Vec::new(),
    };
    let name = folder.join(SCENARIO).display().to_string();
    let beside = Path::new(typed).parent().unwrap_or(Path::new(""));
    match scenario::load_text(&name, beside, text, &sets) {
        Ok(loaded) => Ok(loaded),
        Err(failure) => {
            scenario::load_text(&name, folder, text, &sets).map_err(|_| failure.render())
        }
    }
}

impl Kept {
    /// Minimum and maximum of channels in each column of a chart, from the rows of the series.
    ///
    /// # Errors
    /// A series that is not there or cannot be read.
    pub fn traces(&self, request: &TraceRequest) -> Result<Traces, String> {
        let path = self.folder.join("series.csv");
        let channels: Vec<(&str, &'static str)> = request
            .channels
            .iter()
            .filter_map(|place| self.loaded.scenario.channels.get(*place))
            .map(|channel| (channel.name.as_str(), channel.unit))
            .collect();
        let file = fs::File::open(&path)
            .map_err(|error| format!("cannot read `{}`: {error}", path.display()))?;
        series::traces(io::BufReader::new(file), &channels, request)
            .map_err(|fault| format!("`{}`: {fault}", path.display()))
    }
}
