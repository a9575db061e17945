//! `lodeshaft run`: a scenario in time, with everything written and told.

use super::interrupt::Interrupt;
use super::progress::Progress;
use super::status::Status;
use super::{Common, Format, streams};
use crate::analysis::records::{Follower, RecordComparison, Shared};
use crate::analysis::study;
use crate::analysis::transient::{prepare, run_prepared};
use crate::diagnostic::{Diagnostics, Severity};
use crate::render::folder::{Folder, FolderFault};
use crate::render::report::carry;
use crate::render::series::SeriesWriter;
use crate::render::{charts, events, json, kept, pictures, text};
use crate::results::{RunResult, Warning};
use crate::scenario::{self, Loaded, Source};
use crate::solve::{RunOptions, Wanted};
use clap::Args;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// What `run` takes.
#[derive(Debug, Args)]
pub struct RunArguments {
    /// The scenario; `-` reads standard input.
    pub file: PathBuf,
}

/// Why a command ended before its results were complete.
pub enum Trouble {
    /// The file is at fault; told already.
    File,
    /// Results could not be written.
    Writing(FolderFault),
}

/// Runs the command.
pub fn run(arguments: &RunArguments, common: &Common) -> Status {
    let interrupt = Interrupt::listen();
    // A change by --set may take away what a study varies: that concerns the studies, not this run.
    let read = if common.sets.is_empty() {
        study::load(&arguments.file, &common.sets).map(|plan| (marks(&plan), plan.loaded))
    } else {
        scenario::load(&arguments.file, &common.sets).map(|loaded| {
            let plan = study::plan(Ok(loaded.clone()));
            (plan.map_or_else(|_| BTreeMap::new(), |plan| marks(&plan)), loaded)
        })
    };
    let (marks, loaded) = match read {
        Ok(read) => read,
        Err(failure) => {
            streams::tell(&failure.render());
            return Status::Fault;
        }
    };
    let shown = output_folder(&arguments.file, common);
    let desk = Desk { loaded: &loaded, shown: &shown, file: &arguments.file, marks: &marks };
    let written = desk.write(common, &interrupt);
    let Written { result, records, summary, files } = match written {
        Ok(written) => written,
        Err(Trouble::File) => return Status::Fault,
        Err(Trouble::Writing(fault)) => {
            streams::complain(Severity::Error, &fault.message, fault.hint.as_deref());
            return Status::NotWritten;
        }
    };
    tell_warnings(&loaded.source, &result.warnings);
    let status = judge(&result, &interrupt);
    tell_failure(&result, status);
    match common.format {
        Format::Json => streams::print(&summary, status),
        Format::Text if common.quiet => status,
        Format::Text => {
            let telling = text::Telling {
                file: &loaded.source.name,
                output_folder: &shown.display().to_string(),
                files: &files,
                records: &records,
            };
            streams::print(&text::summary(&loaded.scenario, &result, &telling), status)
        }
    }
}

/// The folder of the results: as asked, or after the file.
pub fn output_folder(file: &Path, common: &Common) -> PathBuf {
    common.out.clone().unwrap_or_else(|| {
        let stem = if file == Path::new("-") { None } else { file.file_stem() };
        Path::new("output").join(stem.unwrap_or_else(|| "standard_input".as_ref()))
    })
}

/// What a run left behind.
struct Written {
    result: RunResult,
    /// Measured records against the run.
    records: Vec<RecordComparison>,
    /// The text of `summary.json`.
    summary: String,
    /// The files in the folder.
    files: Vec<String>,
}

/// What a run works on.
struct Desk<'a> {
    loaded: &'a Loaded,
    shown: &'a Path,
    file: &'a Path,
    /// Marks of the work of its studies, by name.
    marks: &'a BTreeMap<String, String>,
}

impl Desk<'_> {
    /// Runs a scenario and writes its folder.
    fn write(&self, common: &Common, interrupt: &Interrupt) -> Result<Written, Trouble> {
        let Self { loaded, shown, file, marks } = *self;
        let scenario = &loaded.scenario;
        let at_fault = |found: Diagnostics| {
            let mut all = loaded.warnings.clone();
            all.extend(found);
            streams::tell(&loaded.source.render(&all));
            Trouble::File
        };
        let equations = prepare(scenario).map_err(at_fault)?;
        let folder = Folder::open(shown).map_err(Trouble::Writing)?;
        let out = folder.create("series.csv").map_err(Trouble::Writing)?;
        let mut rows = SeriesWriter::new(out, &scenario.channels, Some(interrupt.flag()));
        let mut follower = Follower::new(scenario);
        let mut progress = Progress::new(scenario.duration, common.quiet);
        let mut show = |time: f64| progress.at(time);
        let options = RunOptions {
            rows: Some(&mut Shared { rows: &mut rows, follower: &mut follower }),
            traces: (!common.no_charts).then(|| charts::request(&equations)),
            interrupt: Some(interrupt.flag()),
            progress: Some(&mut show),
            ..RunOptions::default()
        };
        let outcome = run_prepared(&equations, options);
        progress.end();
        let mut result = outcome.map_err(at_fault)?;
        let of =
            |name: &'static str| move |error| Trouble::Writing(FolderFault::disk(name, &error));
        rows.finish().map_err(of("`series.csv`"))?;
        let typed = loaded
            .warnings
            .warnings()
            .map(|warning| Warning { path: warning.path.clone(), text: warning.message.clone() });
        result.warnings.splice(0..0, typed);
        let records = follower.finish();
        let out = folder.create("events.csv").map_err(Trouble::Writing)?;
        events::write(out, &result.events).map_err(of("`events.csv`"))?;
        let origin = json::Origin {
            scenario: &file.display().to_string(),
            sets: &common.sets,
            output_folder: &shown.display().to_string(),
        };
        let summary = json::pretty(&json::summary(&result, &records, &origin));
        folder.write("summary.json", summary.as_bytes()).map_err(Trouble::Writing)?;
        folder.write(kept::SCENARIO, loaded.source.text.as_bytes()).map_err(Trouble::Writing)?;
        let mut files = ["summary.json", "series.csv", "events.csv", kept::SCENARIO]
            .map(str::to_owned)
            .to_vec();
        if !common.no_charts {
            let mut again = |request| {
                let options = RunOptions {
                    traces: Some(request),
                    wanted: Wanted::Asked(Vec::new()),
                    interrupt: Some(interrupt.flag()),
                    ..RunOptions::default()
                };
                run_prepared(&equations, options).ok()?.traces
            };
            let print = common.print();
            let drawn = charts::drawings(&equations, &result, &mut again, print.sheet);
            let drawings: Vec<_> = drawn.iter().map(|picture| &picture.drawing).collect();
            files.extend(
                pictures::write(folder.path(), &drawings, print).map_err(of("the charts"))?,
            );
        }
        let left = carry::all(shown, folder.path(), marks).map_err(Trouble::Writing)?;
        folder.commit().map_err(Trouble::Writing)?;
        tell_left(&left, shown);
        Ok(Written { result, records, summary, files })
    }
}

/// The mark of the work of each study, by its name.
fn marks(plan: &study::Plan) -> BTreeMap<String, String> {
    let mark = |one: &study::Study| (one.name.clone(), study::mark(&plan.loaded, one));
    plan.studies.iter().map(mark).collect()
}

/// Says which studies of an earlier state of the file are gone.
fn tell_left(left: &[String], shown: &Path) {
    if left.is_empty() {
        return;
    }
    let names: Vec<String> = left.iter().map(|name| format!("`{name}`")).collect();
    let message = format!(
        "{} in `{}` answered for another state of the scenario and {} dropped",
        names.join(", "),
        shown.display(),
        if left.len() == 1 { "was" } else { "were" }
    );
    let hint = "--out keeps the results of a changed scenario apart";
    streams::complain(Severity::Warning, message, Some(hint));
}

pub(super) fn tell_warnings(source: &Source, warnings: &[Warning]) {
    let mut list = Diagnostics::new();
    for warning in warnings {
        list.warning(warning.path.as_str(), warning.text.as_str());
    }
    streams::tell(&source.render(&list));
}

pub(super) fn judge(result: &RunResult, interrupt: &Interrupt) -> Status {
    if result.completed {
        let met = result.requirements.iter().all(|requirement| requirement.met == Some(true));
        if met { Status::Done } else { Status::NotMet }
    } else if interrupt.is_asked() {
        Status::Interrupted
    } else {
        Status::GaveUp
    }
}

pub(super) fn tell_failure(result: &RunResult, status: Status) {
    let Some(failure) = &result.failure else { return };
    let hint = "what was found up to then is written, with `completed: false`";
    match status {
        Status::Interrupted => streams::complain(Severity::Warning, failure, Some(hint)),
        _ => streams::complain(
            Severity::Error,
            format!("the run was given up: {failure}"),
            Some(hint),
        ),
    }
}
