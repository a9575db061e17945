//! One train and many cases: each is run and judged by its requirements.

use super::outcome::{Layout, Outcome};
use super::results::{CaseAnswer, LoadCasesAnswer};
use super::spec::{Case, LoadCases};
use super::work::{Stop, Task, Work};
use crate::component::requirement::{Requirement, Test};
use crate::results::RequirementResult;
use crate::scenario::Scenario;

/// Runs the study.
///
/// # Errors
/// [`Stop`] when not all runs could be made.
pub fn run(study: &LoadCases, work: &mut Work<'_, '_>) -> Result<LoadCasesAnswer, Stop> {
    let tasks: Vec<Task<'_>> = study
        .cases
        .iter()
        .map(|case| Task {
            label: case.name.clone(),
            values: Vec::new(),
            tree: Some(&case.tree),
            sharper: false,
        })
        .collect();
    let first = work.batch(&tasks)?;
    let cases: Vec<CaseAnswer> = study
        .cases
        .iter()
        .zip(work.rows.iter().skip(first))
        .map(|(case, row)| answer(case, &work.layout, &row.outcome))
        .collect();
    let met = cases.iter().all(|case| case.met == Some(true));
    Ok(LoadCasesAnswer { cases, met })
}

fn answer(case: &Case, layout: &Layout, outcome: &Outcome) -> CaseAnswer {
    let requirements: Vec<RequirementResult> = case
        .scenario
        .requirements
        .iter()
        .map(|requirement| judged(requirement, &case.scenario, layout, outcome))
        .collect();
    let use_of_limit = requirements
        .iter()
        .filter_map(|one| Some((use_of(one)?, one.name.clone())))
        .max_by(|(a, _), (b, _)| a.total_cmp(b));
    CaseAnswer {
        name: case.name.clone(),
        about: case.about.clone(),
        changes: case.changes.clone(),
        met: outcome.met(),
        requirements,
        use_of_limit,
    }
}

/// A requirement of a case with what the run found.
fn judged(
    requirement: &Requirement,
    scenario: &Scenario,
    layout: &Layout,
    outcome: &Outcome,
) -> RequirementResult {
    let place = layout.requirements.iter().position(|(name, _)| *name == requirement.name);
    let verdict = place
        .and_then(|place| outcome.requirements.get(place).copied())
        .flatten()
        .unwrap_or_default();
    let channel = scenario.channels.iter().find(|channel| channel.name == requirement.of);
    let (limit, unit) = match requirement.test {
        Test::AtMost(limit) | Test::AtLeast(limit) => {
            (Some(limit), channel.map_or("1", |channel| channel.unit))
        }
        Test::Reaches { within, .. } => {
            (within.map(|within| requirement.after.unwrap_or(0.0) + within), "s")
        }
    };
    RequirementResult {
        name: requirement.name.clone(),
        text: requirement.text.clone(),
        of: requirement.of.clone(),
        met: verdict.met,
        value: verdict.value,
        limit,
        unit,
        time: verdict.time,
        at_least: matches!(requirement.test, Test::AtLeast(_)),
    }
}

/// How much of its limit a requirement uses: 1 at the limit.
fn use_of(requirement: &RequirementResult) -> Option<f64> {
    let (value, limit) = (requirement.value?, requirement.limit?);
    let share = if requirement.at_least { limit / value } else { value / limit };
    share.is_finite().then_some(share)
}
