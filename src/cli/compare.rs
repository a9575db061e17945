//! `lodeshaft compare`: several runs side by side.

use super::compared::{self, Wanted};
use super::interrupt::Interrupt;
use super::progress::Progress;
use super::run::{judge, tell_failure, tell_warnings};
use super::status::Status;
use super::{Common, Format, streams};
use crate::analysis::comparison::{self, Comparison, Subject};
use crate::analysis::records::{Follower, RecordComparison};
use crate::analysis::train;
use crate::analysis::transient::{prepare, run_prepared};
use crate::diagnostic::Severity;
use crate::equations::Equations;
use crate::render::chart::drawing::Drawing;
use crate::render::chart::run::run_chart;
use crate::render::chart::run_input::RunChart;
use crate::render::chart::{compare as overlay, pick};
use crate::render::compare::{self, Origin, Side, page};
use crate::render::folder::{Folder, FolderFault};
use crate::render::kept::{self, Kept};
use crate::render::{charts, json, pictures};
use crate::results::{RunResult, Traces, Warning};
use crate::scenario::{self, Display, Loaded};
use crate::solve::RunOptions;
use clap::Args;
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// What `compare` takes.
#[derive(Debug, Args)]
pub struct CompareArguments {
    /// Scenario files and folders of results, in the order of the comparison.
    #[arg(required = true, value_name = "FILE|FOLDER")]
    pub subjects: Vec<PathBuf>,
    /// Adds the one scenario file with changes, for example "heavy: bodies.rotor.inertia=4 kg*m2";
    /// several changes are parted by `;`, the name may be left out.
    #[arg(long = "variant", value_name = "[NAME:] PATH=VALUE[; ...]")]
    pub variants: Vec<String>,
}

/// Where a comparison goes when nothing else is said.
const PLACE: &str = "output/compare";

/// A run that is read back or made here.
struct Run {
    wanted: Wanted,
    loaded: Loaded,
    result: RunResult,
    records: Vec<RecordComparison>,
    equations: Option<Equations>,
    kept: Option<Kept>,
    status: Status,
}

/// Runs the command.
pub fn run(arguments: &CompareArguments, common: &Common) -> Status {
    let interrupt = Interrupt::listen();
    let wanted = match compared::wanted(arguments, common) {
        Ok(wanted) => wanted,
        Err((message, hint)) => {
            streams::complain(Severity::Error, message, Some(hint));
            return Status::Fault;
        }
    };
    let out = common.out.clone().unwrap_or_else(|| PathBuf::from(PLACE));
    if let Some(same) = wanted.iter().find(|one| one.kept && is_same(&one.path, &out)) {
        let message = format!("the comparison would replace `{}`", same.path.display());
        streams::complain(Severity::Error, message, Some("name another folder with --out"));
        return Status::Fault;
    }
    let mut runs = Vec::new();
    let mut status = Status::Done;
    let mut told = BTreeSet::new();
    for one in wanted {
        match made(one, common, &interrupt, &mut told) {
            Ok(run) => {
                status = status.max(run.status);
                runs.push(run);
            }
            Err(how) => status = status.max(how),
        }
        if interrupt.is_asked() {
            return Status::Interrupted;
        }
    }
    if status == Status::Fault {
        return status;
    }
    match write(&runs, &out, common) {
        Ok((told, text)) => match common.format {
            Format::Json => streams::print(&told, status),
            Format::Text if common.quiet => status,
            Format::Text => streams::print(&text, status),
        },
        Err(fault) => {
            streams::complain(Severity::Error, &fault.message, fault.hint.as_deref());
            Status::NotWritten
        }
    }
}

fn is_same(one: &Path, two: &Path) -> bool {
    match (one.canonicalize(), two.canonicalize()) {
        (Ok(one), Ok(two)) => one == two,
        _ => false,
    }
}

/// Makes a run or reads it back; faults are told.
fn made(
    wanted: Wanted,
    common: &Common,
    interrupt: &Interrupt,
    told: &mut BTreeSet<String>,
) -> Result<Run, Status> {
    if !wanted.kept {
        return fresh(wanted, common, interrupt, told);
    }
    let kept = kept::read(&wanted.path).map_err(|fault| {
        streams::complain(Severity::Error, &fault.fault.message, fault.fault.hint.as_deref());
        streams::tell(&fault.detail);
        Status::Fault
    })?;
    for warning in &kept.warnings {
        streams::complain(Severity::Warning, warning, None);
    }
    let met =
        kept.result.completed && kept.result.requirements.iter().all(|it| it.met == Some(true));
    Ok(Run {
        wanted: Wanted { sets: kept.loaded.source.sets.clone(), ..wanted },
        loaded: kept.loaded.clone(),
        result: kept.result.clone(),
        records: kept.records.clone(),
        equations: prepare(&kept.loaded.scenario).ok(),
        kept: Some(kept),
        status: if met { Status::Done } else { Status::NotMet },
    })
}

fn fresh(
    wanted: Wanted,
    common: &Common,
    interrupt: &Interrupt,
    told: &mut BTreeSet<String>,
) -> Result<Run, Status> {
    let loaded = scenario::load(&wanted.path, &wanted.sets).map_err(|failure| {
        streams::tell(&failure.render());
        Status::Fault
    })?;
    let at_fault = |found| {
        let mut all = loaded.warnings.clone();
        all.extend(found);
        streams::tell(&loaded.source.render(&all));
        Status::Fault
    };
    let equations = prepare(&loaded.scenario).map_err(at_fault)?;
    let mut progress = Progress::new(loaded.scenario.duration, common.quiet);
    let mut show = |time: f64| progress.at(time);
    let mut follower = Follower::new(&loaded.scenario);
    let options = RunOptions {
        rows: Some(&mut follower),
        traces: (!common.no_charts).then(|| charts::request(&equations)),
        interrupt: Some(interrupt.flag()),
        progress: Some(&mut show),
        ..RunOptions::default()
    };
    let outcome = run_prepared(&equations, options);
    progress.end();
    let mut result = outcome.map_err(at_fault)?;
    let records = follower.finish();
    let typed = loaded
        .warnings
        .warnings()
        .map(|warning| Warning { path: warning.path.clone(), text: warning.message.clone() });
    result.warnings.splice(0..0, typed);
    // Variants of a file warn alike: each warning is told once.
    let mut fresh = |warning: &&Warning| {
        told.insert(format!("{} {} {}", wanted.path.display(), warning.path, warning.text))
    };
    let new: Vec<Warning> = result.warnings.iter().filter(&mut fresh).cloned().collect();
    tell_warnings(&loaded.source, &new);
    let status = judge(&result, interrupt);
    tell_failure(&result, status);
    Ok(Run { wanted, loaded, result, records, equations: Some(equations), kept: None, status })
}

/// The chart of a run on its own; `Err` says why there is none.
fn chart(run: &Run, display: &Display) -> Result<RunChart, String> {
    let nothing = || format!("`{}` has no curves", run.wanted.name);
    let equations = run.equations.as_ref().ok_or_else(nothing)?;
    let traces: Traces = match (&run.result.traces, &run.kept) {
        (Some(traces), _) => traces.clone(),
        (None, Some(kept)) => kept.traces(&charts::request(equations))?,
        (None, None) => return Err(nothing()),
    };
    let figures = train::figures(&equations.model);
    let train = charts::describe(equations, &figures);
    let units = charts::display_of(display);
    Ok(pick::run(&run.result, &traces, &train, &units, "run"))
}

fn write(runs: &[Run], out: &Path, common: &Common) -> Result<(String, String), FolderFault> {
    let subjects: Vec<Subject<'_>> = runs
        .iter()
        .map(|run| Subject {
            name: &run.wanted.name,
            node: &run.loaded.node,
            result: &run.result,
            records: &run.records,
        })
        .collect();
    let comparison: Comparison = comparison::compare(&subjects);
    let origins: Vec<Origin> = runs.iter().map(origin).collect();
    let usual = Display::default();
    let display = runs.first().map_or(&usual, |run| &run.loaded.scenario.display);
    let mut notes = Vec::new();
    let mut single = Vec::new();
    if !common.no_charts {
        for run in runs {
            match chart(run, display) {
                Ok(chart) => single.push((run.wanted.name.clone(), chart)),
                Err(why) => notes.push(format!("{why}; it is left out of the charts")),
            }
        }
    }
    let drawn: Vec<(RunChart, Drawing)> = overlay::overlays(&single)
        .into_iter()
        .map(|chart| {
            let chart = RunChart { sheet: common.print().sheet, ..chart };
            let drawing = run_chart(&chart);
            (chart, drawing)
        })
        .collect();
    let folder = Folder::open(out)?;
    let drawings: Vec<&Drawing> = drawn.iter().map(|(_, drawing)| drawing).collect();
    let pictures = pictures::write(folder.path(), &drawings, common.print())
        .map_err(|error| FolderFault::disk("the charts", &error))?;
    let mut files = ["compare.html", "compare.json", "compare.csv"].map(str::to_owned).to_vec();
    files.extend(pictures);
    let shown = out.display().to_string();
    let side = Side {
        comparison: &comparison,
        origins: &origins,
        display,
        notes: &notes,
        output_folder: &shown,
        files: &files,
    };
    let told = json::pretty(&compare::to_json(&side));
    folder.write("compare.html", page::page(&side, &drawn).as_bytes())?;
    folder.write("compare.json", told.as_bytes())?;
    folder.write("compare.csv", compare::table(&side).as_bytes())?;
    folder.commit()?;
    Ok((told, compare::text(&side)))
}

fn origin(run: &Run) -> Origin {
    let requirements = &run.result.requirements;
    let met = if requirements.is_empty() || !run.result.completed {
        None
    } else if requirements.iter().any(|one| one.met == Some(false)) {
        Some(false)
    } else {
        requirements.iter().all(|one| one.met == Some(true)).then_some(true)
    };
    Origin {
        name: run.wanted.name.clone(),
        from: run.wanted.path.display().to_string(),
        kept: run.wanted.kept,
        sets: run.wanted.sets.clone(),
        met,
    }
}
