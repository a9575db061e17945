//! `lodeshaft run`: a scenario in time, with everything written and told.

use super::interrupt::Interrupt;
use super::progress::Progress;
use super::status::Status;
use super::{Common, Format, streams};
use crate::analysis::study;
use crate::analysis::transient::{prepare, run_prepared};
use crate::diagnostic::{Diagnostics, Severity};
use crate::render::folder::{Folder, FolderFault};
use crate::render::series::SeriesWriter;
use crate::render::{charts, events, json, text};
use crate::results::{RunResult, Warning};
use crate::scenario::{self, Loaded, Source};
use crate::solve::{RunOptions, Wanted};
use clap::Args;
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
        study::load(&arguments.file, &common.sets).map(|plan| plan.loaded)
    } else {
        scenario::load(&arguments.file, &common.sets)
    };
    let loaded = match read {
        Ok(loaded) => loaded,
        Err(failure) => {
            streams::tell(&failure.render());
            return Status::Fault;
        }
    };
    let shown = output_folder(&arguments.file, common);
    let written = write_run(&loaded, &shown, &arguments.file, common, &interrupt);
    let Written { result, summary, files } = match written {
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
    /// The text of `summary.json`.
    summary: String,
    /// The files in the folder.
    files: Vec<String>,
}

/// Runs a scenario and writes its folder.
fn write_run(
    loaded: &Loaded,
    shown: &Path,
    file: &Path,
    common: &Common,
    interrupt: &Interrupt,
) -> Result<Written, Trouble> {
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
    let mut progress = Progress::new(scenario.duration, common.quiet);
    let mut show = |time: f64| progress.at(time);
    let options = RunOptions {
        rows: Some(&mut rows),
        traces: (!common.no_charts).then(|| charts::request(&equations)),
        interrupt: Some(interrupt.flag()),
        progress: Some(&mut show),
        ..RunOptions::default()
    };
    let outcome = run_prepared(&equations, options);
    progress.end();
    let mut result = outcome.map_err(at_fault)?;
    let of = |name: &'static str| move |error| Trouble::Writing(FolderFault::disk(name, &error));
    rows.finish().map_err(of("`series.csv`"))?;
    let typed = loaded
        .warnings
        .warnings()
        .map(|warning| Warning { path: warning.path.clone(), text: warning.message.clone() });
    result.warnings.splice(0..0, typed);
    let out = folder.create("events.csv").map_err(Trouble::Writing)?;
    events::write(out, &result.events).map_err(of("`events.csv`"))?;
    let origin = json::Origin {
        scenario: &file.display().to_string(),
        sets: &common.sets,
        output_folder: &shown.display().to_string(),
    };
    let summary = json::pretty(&json::summary(&result, &origin));
    folder.write("summary.json", summary.as_bytes()).map_err(Trouble::Writing)?;
    let mut files = ["summary.json", "series.csv", "events.csv"].map(str::to_owned).to_vec();
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
        let drawings = charts::drawings(&equations, &result, &mut again);
        files.extend(charts::write(folder.path(), &drawings).map_err(of("the charts"))?);
    }
    folder.commit().map_err(Trouble::Writing)?;
    Ok(Written { result, summary, files })
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
