//! `lodeshaft study`: the studies of a scenario, each with its table and its answer.

use super::interrupt::Interrupt;
use super::run::output_folder;
use super::status::Status;
use super::study_progress::StudyProgress;
use super::{Common, Format, streams};
use crate::analysis::study::results::StudyResult;
use crate::analysis::study::work::{Blind, Cost, Forget, Stop};
use crate::analysis::study::{self, Plan, Study, StudyOptions};
use crate::analysis::transient;
use crate::diagnostic::{Severity, closest};
use crate::render::folder::FolderFault;
use crate::render::json;
use crate::render::study::folder::{Begun, StudyFolder};
use crate::render::study::rows::Columns;
use crate::render::study::{json as study_json, of_one_run as one_run, text};
use crate::scenario::Loaded;
use clap::Args;
use serde_json::{Map, Value};
use std::collections::BTreeMap;
use std::path::PathBuf;

/// What `study` takes.
#[derive(Debug, Args)]
pub struct StudyArguments {
    /// The scenario; `-` reads standard input.
    pub file: PathBuf,
    /// The studies to run [default: all of the file].
    pub names: Vec<String>,
    /// Goes on with studies that were stopped; no finished run is lost or repeated.
    #[arg(long)]
    pub resume: bool,
}

/// How a study ended.
enum Ended {
    Done(Box<StudyResult>, Value),
    Stopped(Status, Value),
}

/// Runs the command.
pub fn run(arguments: &StudyArguments, common: &Common) -> Status {
    let interrupt = Interrupt::listen();
    let plan = match study::load(&arguments.file, &common.sets) {
        Ok(plan) => plan,
        Err(failure) => {
            streams::tell(&failure.render());
            return Status::Fault;
        }
    };
    let mut found = plan.loaded.warnings.clone();
    let prepared = transient::prepare(&plan.loaded.scenario);
    let fault = prepared.is_err();
    match prepared {
        Ok(equations) => found.extend(equations.model.warnings.clone()),
        Err(faults) => found.extend(faults),
    }
    streams::tell(&plan.loaded.source.render(&found));
    if fault {
        return Status::Fault;
    }
    let chosen = match choose(&plan, &arguments.names) {
        Ok(chosen) => chosen,
        Err(status) => return status,
    };
    let shown = output_folder(&arguments.file, common);
    let folder = match StudyFolder::open(&shown) {
        Ok(folder) => folder,
        Err(fault) => return not_written(&fault),
    };
    let mut status = Status::Done;
    let mut answers = Map::new();
    for (index, study) in chosen.iter().enumerate() {
        let ended = match one(&plan, study, &folder, arguments.resume, common, &interrupt) {
            Ok(ended) => ended,
            Err(fault) => return status.max(not_written(&fault)),
        };
        match ended {
            Ended::Done(result, answer) => {
                status = status.max(judge(&result));
                answers.insert(study.name.clone(), answer);
                if common.format == Format::Text && !common.quiet {
                    let gap = if index > 0 { "\n" } else { "" };
                    let summary = text::summary(&result, &plan.loaded.scenario);
                    status = streams::print(&format!("{gap}{summary}"), status);
                }
            }
            Ended::Stopped(how, told) => {
                status = status.max(how);
                answers.insert(study.name.clone(), told);
                // What is wrong with one study does not stand in the way of the next.
                if how != Status::Fault {
                    break;
                }
            }
        }
    }
    match common.format {
        Format::Json => {
            let all = json::named([("studies", Value::Object(answers))]);
            streams::print(&json::pretty(&all), status)
        }
        Format::Text if common.quiet => status,
        Format::Text => {
            let place = shown.join(crate::render::study::folder::NAME);
            streams::print(&format!("\nTables and answers in {}\n", place.display()), status)
        }
    }
}

/// The studies asked for, in the order asked; all of the file when none is named.
fn choose<'p>(plan: &'p Plan, names: &[String]) -> Result<Vec<&'p Study>, Status> {
    let known = || plan.studies.iter().map(|study| study.name.as_str());
    if plan.studies.is_empty() {
        streams::complain(
            Severity::Error,
            format!("`{}` has no studies", plan.loaded.source.name),
            Some("for example studies: { hot: { margin: { vary: ..., between: [..., ...] } } }"),
        );
        return Err(Status::Fault);
    }
    if names.is_empty() {
        return Ok(plan.studies.iter().collect());
    }
    let mut chosen: Vec<&Study> = Vec::new();
    let mut sound = true;
    for name in names {
        match plan.studies.iter().find(|study| study.name == *name) {
            Some(study) if chosen.iter().any(|known| known.name == *name) => {
                let _ = study;
            }
            Some(study) => chosen.push(study),
            None => {
                sound = false;
                let hint = match closest(name, known()) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("it has {}", known().collect::<Vec<_>>().join(", ")),
                };
                let message = format!("`{}` has no study `{name}`", plan.loaded.source.name);
                streams::complain(Severity::Error, message, Some(&hint));
            }
        }
    }
    if sound { Ok(chosen) } else { Err(Status::Fault) }
}

/// Runs one study and writes its files.
fn one(
    plan: &Plan,
    study: &Study,
    folder: &StudyFolder,
    resume: bool,
    common: &Common,
    interrupt: &Interrupt,
) -> Result<Ended, FolderFault> {
    let loaded = &plan.loaded;
    let work = study::mark(loaded, study);
    if !study.kind.has_runs() {
        return of_one_run(plan, study, folder, &work, common, interrupt);
    }
    let label = study.kind.label();
    let columns = Columns::new(study::varied(study), study::layout(loaded, study), label);
    let Some(mut begun) = folder.begin(&study.name, &work, &columns, resume)? else {
        let message = format!(
            "`{}` cannot go on: the scenario, its tables, the study or the program has changed since its runs were made",
            study.name
        );
        let hint = "without --resume it begins anew";
        streams::complain(Severity::Error, message, Some(hint));
        return Ok(Ended::Stopped(Status::Fault, study_json::unfinished(0, "it has changed")));
    };
    if begun.restarted {
        let message = format!("`{}` was stopped before and begins anew", study.name);
        streams::complain(Severity::Warning, message, Some("--resume goes on with it"));
    }
    let mut progress = StudyProgress::new(&study.name, common.quiet);
    let ended = make(loaded, study, common, interrupt, &mut begun, &mut progress);
    let result = match ended {
        Ok(result) => result,
        Err(Stop::Interrupted) => {
            let message = format!(
                "`{}` was interrupted; {} finished runs are kept",
                study.name,
                progress.done()
            );
            streams::complain(Severity::Warning, message, Some("--resume goes on with it"));
            let told = study_json::unfinished(progress.done(), "interrupted");
            return Ok(Ended::Stopped(Status::Interrupted, told));
        }
        Err(Stop::NoAnswer(reason)) => return Ok(no_answer(&study.name, &reason)),
        Err(Stop::NotKept(reason)) => {
            let hint = "--resume goes on from the last run kept";
            streams::complain(Severity::Error, &reason, Some(hint));
            let told = study_json::unfinished(progress.done(), &reason);
            return Ok(Ended::Stopped(Status::NotWritten, told));
        }
    };
    if !common.quiet {
        tell_cost(&study.name, &result.cost);
    }
    let answer = study_json::study(&result, &work);
    folder.finish(&study.name, &columns, &result.rows, &json::pretty(&answer))?;
    Ok(Ended::Done(Box::new(result), answer))
}

/// Runs a study of the train as typed, or of its one run.
fn of_one_run(
    plan: &Plan,
    study: &Study,
    folder: &StudyFolder,
    work: &str,
    common: &Common,
    interrupt: &Interrupt,
) -> Result<Ended, FolderFault> {
    let ended = study::run(
        &plan.loaded,
        study,
        StudyOptions {
            threads: common.threads.map(usize::from),
            interrupt: interrupt.flag(),
            known: BTreeMap::new(),
            keep: &mut Forget,
            watch: &mut Blind,
        },
    );
    match ended {
        Ok(result) => {
            let answer = study_json::study(&result, work);
            let table = one_run::table(&result);
            folder.write(&study.name, table.as_deref(), &json::pretty(&answer))?;
            Ok(Ended::Done(Box::new(result), answer))
        }
        Err(Stop::Interrupted) => {
            streams::complain(Severity::Warning, format!("`{}` was interrupted", study.name), None);
            Ok(Ended::Stopped(Status::Interrupted, study_json::unfinished(0, "interrupted")))
        }
        Err(Stop::NoAnswer(reason) | Stop::NotKept(reason)) => Ok(no_answer(&study.name, &reason)),
    }
}

/// A study whose question has no answer.
fn no_answer(name: &str, reason: &str) -> Ended {
    streams::complain(Severity::Error, format!("`{name}` has no answer: {reason}"), None);
    Ended::Stopped(Status::Fault, study_json::unfinished(0, reason))
}

/// What a study cost, on standard error: it differs from run to run.
fn tell_cost(name: &str, cost: &Cost) {
    let elapsed = cost.elapsed.as_secs_f64();
    if cost.runs == 0 || elapsed <= 0.0 {
        return;
    }
    let threads = if cost.threads == 1 { "1 thread" } else { &format!("{} threads", cost.threads) };
    let rate = cost.runs as f64 / elapsed;
    let preparing = cost.preparing.as_secs_f64() / cost.integrating.as_secs_f64().max(1e-9);
    streams::tell(&format!(
        "{name}: {} runs in {elapsed:.1} s on {threads}, {rate:.1} a second; reading and building took {:.1} % beside integrating\n",
        cost.runs,
        100.0 * preparing
    ));
}

fn judge(result: &StudyResult) -> Status {
    if !result.rows.is_empty() && result.outcomes().all(|outcome| outcome.failure.is_some()) {
        let reason = result.outcomes().find_map(|outcome| outcome.failure.as_deref());
        let message =
            format!("no run of `{}` came to a result: {}", result.name, reason.unwrap_or_default());
        streams::complain(Severity::Error, message, None);
        return Status::GaveUp;
    }
    match result.answer.verdict() {
        None | Some(Some(true)) => Status::Done,
        Some(_) => Status::NotMet,
    }
}

fn not_written(fault: &FolderFault) -> Status {
    streams::complain(Severity::Error, &fault.message, fault.hint.as_deref());
    Status::NotWritten
}

/// Makes the runs of a study that are not known yet; each is kept when it is done.
pub(super) fn make(
    loaded: &Loaded,
    study: &Study,
    common: &Common,
    interrupt: &Interrupt,
    begun: &mut Begun,
    progress: &mut StudyProgress,
) -> Result<StudyResult, Stop> {
    let ended = study::run(
        loaded,
        study,
        StudyOptions {
            threads: common.threads.map(usize::from),
            interrupt: interrupt.flag(),
            known: std::mem::take(&mut begun.known),
            keep: &mut begun.journal,
            watch: progress,
        },
    );
    progress.end();
    ended
}
