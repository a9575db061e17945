//! Runs a study of any kind.

use super::outcome::Layout;
use super::results::{Answer, StudyResult};
use super::spec::{Kind, Study, Varied, without_studies};
use super::work::{Keep, Setting, Stop, Watch, Work};
use super::{fingerprint, load_cases, margin, monte_carlo, sweep};
use crate::analysis::study::outcome::Outcome;
use crate::scenario::Loaded;
use std::collections::BTreeMap;
use std::sync::atomic::AtomicBool;

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
        Kind::LoadCases(_) => Vec::new(),
        Kind::Sweep(sweep) => sweep.axes.iter().map(|axis| axis.varied.clone()).collect(),
        Kind::MonteCarlo(study) => {
            study.spreads.iter().map(|spread| spread.varied.clone()).collect()
        }
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
    };
    let varied = varied(study);
    let mut work = Work::new(&mut setting, varied.clone(), layout(loaded, study), expected);
    let answer = match &study.kind {
        Kind::Margin(margin) => Answer::Margin(margin::run(margin, &mut work)?),
        Kind::LoadCases(cases) => Answer::LoadCases(load_cases::run(cases, &mut work)?),
        Kind::Sweep(sweep) => Answer::Sweep(sweep::run(sweep, &mut work)?),
        Kind::MonteCarlo(study) => Answer::MonteCarlo(monte_carlo::run(study, &mut work)?),
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
