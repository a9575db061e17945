//! The studies of a report: finished ones are taken over, the others are run.

use super::interrupt::Interrupt;
use super::status::Status;
use super::study_progress::StudyProgress;
use super::{Common, streams};
use crate::analysis::study::results::StudyResult;
use crate::analysis::study::work::{Blind, Forget, Stop};
use crate::analysis::study::{self, Plan, Study, StudyOptions};
use crate::diagnostic::Severity;
use crate::render::folder::{Folder, FolderFault};
use crate::render::json;
use crate::render::report::carry;
use crate::render::study::folder::{Begun, StudyFolder};
use crate::render::study::rows::Columns;
use crate::render::study::{json as study_json, of_one_run as one_run, text};
use crate::scenario::Scenario;
use serde_json::{Map, Value};
use std::path::Path;

/// What the studies found.
#[derive(Default)]
pub struct Gathered {
    /// Finished studies in the order of the file.
    pub results: Vec<StudyResult>,
    /// Their answers as JSON.
    pub answers: Map<String, Value>,
    /// Studies without an answer, and why.
    pub unfinished: Vec<(String, String)>,
    /// The worst of them.
    pub status: Status,
}

impl Gathered {
    /// The studies for people.
    pub fn text(&self, scenario: &Scenario) -> String {
        self.results.iter().map(|result| format!("\n{}", text::summary(result, scenario))).collect()
    }
}

/// Runs all studies of a file into a folder in the making.
///
/// Runs that stand in the folder at its place already, for the same work, are not made again.
pub fn gather(
    plan: &Plan,
    folder: &Folder,
    shown: &Path,
    common: &Common,
    interrupt: &Interrupt,
) -> Result<Gathered, FolderFault> {
    let mut gathered = Gathered::default();
    carry::begun(shown, folder.path())?;
    if plan.studies.is_empty() {
        return Ok(gathered);
    }
    for study in &plan.studies {
        carry::study(shown, folder.path(), &study.name)?;
    }
    let place = StudyFolder::open(folder.path())?;
    for study in &plan.studies {
        if interrupt.is_asked() {
            gathered.unfinished.push((study.name.clone(), "it was interrupted".to_owned()));
            gathered.status = gathered.status.max(Status::Interrupted);
            continue;
        }
        one(plan, study, &place, common, interrupt, &mut gathered)?;
    }
    Ok(gathered)
}

fn one(
    plan: &Plan,
    study: &Study,
    place: &StudyFolder,
    common: &Common,
    interrupt: &Interrupt,
    gathered: &mut Gathered,
) -> Result<(), FolderFault> {
    let loaded = &plan.loaded;
    let work = study::mark(loaded, study);
    if !study.kind.has_runs() {
        return of_one_run(plan, study, place, &work, common, interrupt, gathered);
    }
    let label = study.kind.label();
    let columns = Columns::new(study::varied(study), study::layout(loaded, study), label);
    let mut begun = begin(place, &study.name, &work, &columns)?;
    let mut progress = StudyProgress::new(&study.name, common.quiet);
    let ended = super::study::make(loaded, study, common, interrupt, &mut begun, &mut progress);
    match ended {
        Ok(result) => {
            let answer = study_json::study(&result, &work);
            place.finish(&study.name, &columns, &result.rows, &json::pretty(&answer))?;
            gathered.status = gathered.status.max(judge(&result));
            gathered.answers.insert(study.name.clone(), answer);
            gathered.results.push(result);
        }
        Err(Stop::Interrupted) => {
            let message = format!("`{}` was interrupted", study.name);
            let hint = "`lodeshaft study` keeps finished runs, and a report takes them over";
            streams::complain(Severity::Warning, message, Some(hint));
            gathered.unfinished.push((study.name.clone(), "it was interrupted".to_owned()));
            gathered.status = gathered.status.max(Status::Interrupted);
        }
        Err(Stop::NoAnswer(reason)) => {
            gathered.unfinished.push((study.name.clone(), reason));
        }
        Err(Stop::NotKept(reason)) => {
            return Err(FolderFault { message: reason, hint: None });
        }
    }
    Ok(())
}

/// A study of the train as typed, or of its one run: nothing to keep on the way.
fn of_one_run(
    plan: &Plan,
    study: &Study,
    place: &StudyFolder,
    work: &str,
    common: &Common,
    interrupt: &Interrupt,
    gathered: &mut Gathered,
) -> Result<(), FolderFault> {
    let options = StudyOptions {
        threads: common.threads.map(usize::from),
        interrupt: interrupt.flag(),
        known: std::collections::BTreeMap::new(),
        keep: &mut Forget,
        watch: &mut Blind,
    };
    match study::run(&plan.loaded, study, options) {
        Ok(result) => {
            let answer = study_json::study(&result, work);
            let table = one_run::table(&result);
            place.write(&study.name, table.as_deref(), &json::pretty(&answer))?;
            gathered.status = gathered.status.max(judge(&result));
            gathered.answers.insert(study.name.clone(), answer);
            gathered.results.push(result);
        }
        Err(Stop::Interrupted) => {
            gathered.unfinished.push((study.name.clone(), "it was interrupted".to_owned()));
            gathered.status = gathered.status.max(Status::Interrupted);
        }
        Err(Stop::NoAnswer(reason) | Stop::NotKept(reason)) => {
            gathered.unfinished.push((study.name.clone(), reason));
        }
    }
    Ok(())
}

/// Goes on with what is there for the same work, else begins anew.
fn begin(
    place: &StudyFolder,
    name: &str,
    work: &str,
    columns: &Columns,
) -> Result<Begun, FolderFault> {
    if let Some(begun) = place.begin(name, work, columns, true)? {
        return Ok(begun);
    }
    place.begin(name, work, columns, false)?.ok_or_else(|| FolderFault {
        message: format!("the study `{name}` cannot begin"),
        hint: None,
    })
}

fn judge(result: &StudyResult) -> Status {
    if !result.rows.is_empty() && result.outcomes().all(|outcome| outcome.failure.is_some()) {
        return Status::GaveUp;
    }
    match result.answer.verdict() {
        None | Some(Some(true)) => Status::Done,
        Some(_) => Status::NotMet,
    }
}
