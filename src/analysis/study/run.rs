//! Runs a study of any kind.

use super::outcome::Layout;
use super::results::{Answer, StudyResult};
use super::spec::{Kind, Study, Varied, without_studies};
use super::work::{Keep, Setting, Stop, Watch, Work};
use super::{fingerprint, load_cases, margin, monte_carlo, steady, sweep};
use crate::analysis::study::outcome::Outcome;
use crate::analysis::{estimates, modes, rainflow, transient};
use crate::diagnostic::Diagnostics;
use crate::equations::Equations;
use crate::scenario::Loaded;
use crate::solve::RunOptions;
use std::collections::BTreeMap;
use std::sync::atomic::{AtomicBool, Ordering};

/// How a study is run.
pub struct StudyOptions<'a> {
    /// Number of threads; `None`: one a processor.
    pub threads: Option<usize>,
    /// Set from outside to end the study.
    pub interrupt: &'a AtomicBool,
    /// Runs finished earlier, by number.
    pub known: BTreeMap<usize, Outcome>,
    /// Keeps finished runs.
    pub keep: &'a mut dyn Keep,
    /// Is told how far the study has come.
    pub watch: &'a mut dyn Watch,
}

/// Tells whether two studies are the same work: same file but for its texts, same tables, same
/// study, same version of the program.
pub fn mark(loaded: &Loaded, study: &Study) -> String {
    fingerprint::of_study(&loaded.node, &study.name, &loaded.tables)
}

/// The numbers that a study varies, in the order of its rows' values.
pub fn varied(study: &Study) -> Vec<Varied> {
    match &study.kind {
        Kind::Margin(margin) => vec![margin.varied.clone()],
        Kind::Sweep(sweep) => sweep.axes.iter().map(|axis| axis.varied.clone()).collect(),
        Kind::MonteCarlo(study) => {
            study.spreads.iter().map(|spread| spread.varied.clone()).collect()
        }
        Kind::LoadCases(_)
        | Kind::Modes(_)
        | Kind::Rainflow(_)
        | Kind::Estimates(_)
        | Kind::Steady(_) => Vec::new(),
    }
}

/// What stands in the rows of a study.
pub fn layout(loaded: &Loaded, study: &Study) -> Layout {
    let file = || std::iter::once(&loaded.scenario);
    match &study.kind {
        Kind::Margin(margin) => Layout::of(file(), &margin.channels),
        Kind::LoadCases(cases) => {
            Layout::of(cases.cases.iter().map(|case| &case.scenario), &cases.channels)
        }
        Kind::Sweep(sweep) => Layout::of(file(), &sweep.channels),
        Kind::MonteCarlo(study) => Layout::of(file(), &study.channels),
        Kind::Modes(_) | Kind::Rainflow(_) | Kind::Estimates(_) | Kind::Steady(_) => {
            Layout::of(file(), &[])
        }
    }
}

/// Runs a study.
///
/// # Errors
/// [`Stop`] when not all its runs could be made.
pub fn run(loaded: &Loaded, study: &Study, options: StudyOptions<'_>) -> Result<StudyResult, Stop> {
    let base = without_studies(&loaded.node);
    let mut setting = Setting {
        base: &base,
        tables: &loaded.tables,
        threads: options.threads,
        interrupt: options.interrupt,
        known: options.known,
        keep: options.keep,
        watch: options.watch,
    };
    let expected = match &study.kind {
        Kind::Margin(margin) => margin::expected(margin),
        Kind::LoadCases(cases) => cases.cases.len(),
        Kind::Sweep(sweep) => sweep::expected(sweep),
        Kind::MonteCarlo(study) => study.draws,
        Kind::Modes(_) | Kind::Rainflow(_) | Kind::Estimates(_) | Kind::Steady(_) => 1,
    };
    let interrupt = options.interrupt;
    let varied = varied(study);
    let mut work = Work::new(&mut setting, varied.clone(), layout(loaded, study), expected);
    let answer = match &study.kind {
        Kind::Margin(margin) => Answer::Margin(margin::run(margin, &mut work)?),
        Kind::LoadCases(cases) => Answer::LoadCases(load_cases::run(cases, &mut work)?),
        Kind::Sweep(sweep) => Answer::Sweep(sweep::run(sweep, &mut work)?),
        Kind::MonteCarlo(study) => Answer::MonteCarlo(monte_carlo::run(study, &mut work)?),
        Kind::Modes(_) | Kind::Rainflow(_) | Kind::Estimates(_) | Kind::Steady(_) => {
            of_one_run(loaded, study, interrupt)?
        }
    };
    Ok(StudyResult {
        name: study.name.clone(),
        answer,
        varied,
        layout: work.layout,
        rows: work.rows,
        cost: work.cost,
    })
}

/// Studies of the train as typed, or of its one run.
fn of_one_run(loaded: &Loaded, study: &Study, interrupt: &AtomicBool) -> Result<Answer, Stop> {
    let at_fault = |found: Diagnostics| {
        let first = found.iter().find(|entry| entry.severity.is_error());
        Stop::NoAnswer(first.map_or_else(String::new, |fault| fault.message.clone()))
    };
    let stopped = |reason: String| {
        if interrupt.load(Ordering::Relaxed) { Stop::Interrupted } else { Stop::NoAnswer(reason) }
    };
    let equations: Equations = transient::prepare(&loaded.scenario).map_err(at_fault)?;
    match &study.kind {
        Kind::Modes(spec) => modes::run(spec, &equations).map(Answer::Modes).map_err(stopped),
        Kind::Rainflow(spec) => {
            rainflow::run(spec, &equations, Some(interrupt)).map(Answer::Rainflow).map_err(stopped)
        }
        Kind::Estimates(spec) => {
            let options = RunOptions { interrupt: Some(interrupt), ..RunOptions::default() };
            let found = transient::run_prepared(&equations, options).map_err(at_fault)?;
            if interrupt.load(Ordering::Relaxed) {
                return Err(Stop::Interrupted);
            }
            Ok(Answer::Estimates(estimates::run(spec, &equations, &found)))
        }
        Kind::Steady(spec) => steady::run(spec, loaded, interrupt).map(Answer::Steady),
        Kind::Margin(_) | Kind::LoadCases(_) | Kind::Sweep(_) | Kind::MonteCarlo(_) => {
            Err(Stop::NoAnswer("this study stands on many runs".to_owned()))
        }
    }
}
