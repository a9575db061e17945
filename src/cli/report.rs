//! `lodeshaft report`: run and studies as one page.

use super::interrupt::Interrupt;
use super::progress::Progress;
use super::report_studies::{self, Gathered};
use super::run::{judge, output_folder, tell_failure, tell_warnings};
use super::status::Status;
use super::{Common, Format, open, streams};
use crate::analysis::records::{Follower, RecordComparison, Shared};
use crate::analysis::study::{self, Plan};
use crate::analysis::train::{self, Train as TrainFigures};
use crate::analysis::transient::{prepare, run_prepared};
use crate::diagnostic::{Diagnostics, Severity};
use crate::equations::Equations;
use crate::render::chart::axes::Sheet;
use crate::render::chart::train::Train;
use crate::render::charts;
use crate::render::folder::{Folder, FolderFault};
use crate::render::pictures::Picture;
use crate::render::report::{self, Material, Written};
use crate::render::series::SeriesWriter;
use crate::render::{events, json, kept, text};
use crate::results::{RunResult, Warning};
use crate::scenario::{Loaded, Method};
use crate::solve::{RunOptions, TraceRequest, Wanted};
use clap::Args;
use serde_json::Value;
use std::path::{Path, PathBuf};

/// What `report` takes.
#[derive(Debug, Args)]
pub struct ReportArguments {
    /// The scenario; `-` reads standard input.
    pub file: PathBuf,
    /// Opens the page in the browser of the desktop.
    #[arg(long)]
    pub open: bool,
}

/// Name of the page in the folder of results.
const PAGE: &str = "report.html";

/// Why a report could not be made.
enum Trouble {
    /// The file is at fault.
    File(Diagnostics),
    /// Results could not be written.
    Writing(FolderFault),
}

impl From<FolderFault> for Trouble {
    fn from(fault: FolderFault) -> Self {
        Self::Writing(fault)
    }
}

/// Runs the command.
pub fn run(arguments: &ReportArguments, common: &Common) -> Status {
    let interrupt = Interrupt::listen();
    let plan = match study::load(&arguments.file, &common.sets) {
        Ok(plan) => plan,
        Err(failure) => {
            streams::tell(&failure.render());
            return Status::Fault;
        }
    };
    let shown = output_folder(&arguments.file, common);
    let desk =
        Desk { plan: &plan, file: &arguments.file, shown: &shown, common, interrupt: &interrupt };
    match desk.make() {
        Ok(made) => {
            let status = desk.tell(&made);
            if arguments.open {
                open::page(&shown.join(PAGE));
            }
            status
        }
        Err(Trouble::File(found)) => {
            let mut all = plan.loaded.warnings.clone();
            all.extend(found);
            streams::tell(&plan.loaded.source.render(&all));
            Status::Fault
        }
        Err(Trouble::Writing(fault)) => {
            streams::complain(Severity::Error, &fault.message, fault.hint.as_deref());
            Status::NotWritten
        }
    }
}

/// What was made.
struct Made {
    result: RunResult,
    records: Vec<RecordComparison>,
    studies: Gathered,
    summary: Value,
    files: Vec<String>,
}

/// What the page is made of.
struct Parts {
    figures: TrainFigures,
    train: Train,
    result: RunResult,
    records: Vec<RecordComparison>,
    drawings: Vec<Picture>,
    sharper: Option<RunResult>,
    studies: Gathered,
}

struct Desk<'a> {
    plan: &'a Plan,
    file: &'a Path,
    shown: &'a Path,
    common: &'a Common,
    interrupt: &'a Interrupt,
}

impl Desk<'_> {
    fn loaded(&self) -> &Loaded {
        &self.plan.loaded
    }

    /// Runs everything and writes the folder.
    fn make(&self) -> Result<Made, Trouble> {
        let scenario = &self.loaded().scenario;
        let equations = prepare(scenario).map_err(Trouble::File)?;
        let figures = train::figures(&equations.model);
        let folder = Folder::open(self.shown)?;
        let traces = (!self.common.no_charts).then(|| charts::request(&equations));
        let (mut result, records) = self.transient(&equations, &folder, traces)?;
        let typed = self
            .loaded()
            .warnings
            .warnings()
            .map(|warning| Warning { path: warning.path.clone(), text: warning.message.clone() });
        result.warnings.splice(0..0, typed);
        let drawings = self.drawings(&equations, &result);
        let train = charts::describe(&equations, &figures);
        let sharper = if result.completed { self.sharper(&equations) } else { None };
        let studies = if result.completed || !self.interrupt.is_asked() {
            report_studies::gather(self.plan, &folder, self.shown, self.common, self.interrupt)?
        } else {
            Gathered::default()
        };
        let parts = Parts { figures, train, result, records, drawings, sharper, studies };
        self.write(folder, parts)
    }

    fn transient(
        &self,
        equations: &Equations,
        folder: &Folder,
        traces: Option<TraceRequest>,
    ) -> Result<(RunResult, Vec<RecordComparison>), Trouble> {
        let scenario = &self.loaded().scenario;
        let out = folder.create("series.csv")?;
        let mut rows = SeriesWriter::new(out, &scenario.channels, Some(self.interrupt.flag()));
        let mut follower = Follower::new(scenario);
        let mut progress = Progress::new(scenario.duration, self.common.quiet);
        let mut show = |time: f64| progress.at(time);
        let options = RunOptions {
            rows: Some(&mut Shared { rows: &mut rows, follower: &mut follower }),
            traces,
            interrupt: Some(self.interrupt.flag()),
            progress: Some(&mut show),
            ..RunOptions::default()
        };
        let outcome = run_prepared(equations, options);
        progress.end();
        let result = outcome.map_err(Trouble::File)?;
        rows.finish().map_err(|error| FolderFault::disk("`series.csv`", &error))?;
        Ok((result, follower.finish()))
    }

    /// The drawings of the run; windows that deserve a closer look are run and traced again.
    fn drawings(&self, equations: &Equations, result: &RunResult) -> Vec<Picture> {
        let mut again = |request: TraceRequest| {
            let options = RunOptions {
                wanted: Wanted::Asked(Vec::new()),
                traces: Some(request),
                interrupt: Some(self.interrupt.flag()),
                ..RunOptions::default()
            };
            run_prepared(equations, options).ok()?.traces
        };
        charts::drawings(equations, result, &mut again, Sheet::PAGE)
    }

    /// The same run at a tenth of the tolerance, or of the step of a fixed-step method.
    fn sharper(&self, equations: &Equations) -> Option<RunResult> {
        let scenario = &self.loaded().scenario;
        let options = RunOptions {
            interrupt: Some(self.interrupt.flag()),
            tolerance: Some(scenario.solver.tolerance / 10.0),
            ..RunOptions::default()
        };
        let result = if scenario.solver.method == Method::Rk4 {
            let mut finer = scenario.clone();
            finer.solver.step = finer.solver.step.map(|step| step / 10.0);
            run_prepared(&prepare(&finer).ok()?, options).ok()?
        } else {
            run_prepared(equations, options).ok()?
        };
        (!self.interrupt.is_asked()).then_some(result)
    }

    fn write(&self, folder: Folder, parts: Parts) -> Result<Made, Trouble> {
        let Parts { figures, train, result, records, drawings, sharper, studies } = parts;
        let loaded = self.loaded();
        let out = folder.create("events.csv")?;
        events::write(out, &result.events)
            .map_err(|error| FolderFault::disk("`events.csv`", &error))?;
        let origin = json::Origin {
            scenario: &self.file.display().to_string(),
            sets: &self.common.sets,
            output_folder: &self.shown.display().to_string(),
        };
        let mut summary = json::summary(&result, &records, &origin);
        folder.write("summary.json", json::pretty(&summary).as_bytes())?;
        folder.write(kept::SCENARIO, loaded.source.text.as_bytes())?;
        let page = report::page(&Material {
            scenario: &loaded.scenario,
            source: &loaded.source,
            node: &loaded.node,
            figures: &figures,
            result: &result,
            records: &records,
            train,
            drawings,
            sharper,
            studies: &studies.results,
            unfinished: &studies.unfinished,
            written: Written::new(&loaded.scenario.display),
        });
        folder.write(PAGE, page.as_bytes())?;
        if let Value::Object(entries) = &mut summary {
            entries.insert("report".to_owned(), Value::from(PAGE));
            entries.insert("studies".to_owned(), Value::Object(studies.answers.clone()));
        }
        let files = [PAGE, "summary.json", "series.csv", "events.csv", kept::SCENARIO]
            .map(str::to_owned)
            .to_vec();
        folder.commit()?;
        Ok(Made { result, records, studies, summary, files })
    }

    /// Prints what was found and tells how it ended.
    fn tell(&self, made: &Made) -> Status {
        tell_warnings(&self.loaded().source, &made.result.warnings);
        let own = judge(&made.result, self.interrupt);
        tell_failure(&made.result, own);
        let status = own.max(made.studies.status);
        match self.common.format {
            Format::Json => streams::print(&json::pretty(&made.summary), status),
            Format::Text if self.common.quiet => status,
            Format::Text => {
                let telling = text::Telling {
                    file: &self.loaded().source.name,
                    output_folder: &self.shown.display().to_string(),
                    files: &made.files,
                    records: &made.records,
                };
                let mut summary = made.studies.text(&self.loaded().scenario);
                summary
                    .insert_str(0, &text::summary(&self.loaded().scenario, &made.result, &telling));
                streams::print(&summary, status)
            }
        }
    }
}
