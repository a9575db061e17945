//! Runs over all values of one or two numbers.

use super::results::SweepAnswer;
use super::spec::Sweep;
use super::work::{Stop, Task, Work};

/// Every combination of values, the last number fastest.
fn combinations(study: &Sweep) -> Vec<Vec<f64>> {
    let mut all = vec![Vec::new()];
    for axis in &study.axes {
        all = all
            .into_iter()
            .flat_map(|before: Vec<f64>| {
                axis.values.iter().map(move |value| {
                    let mut values = before.clone();
                    values.push(*value);
                    values
                })
            })
            .collect();
    }
    all
}

/// How many runs the study makes.
pub fn expected(study: &Sweep) -> usize {
    study.axes.iter().map(|axis| axis.values.len()).product()
}

/// Runs the study.
///
/// # Errors
/// [`Stop`] when not all runs could be made.
pub fn run(study: &Sweep, work: &mut Work<'_, '_>) -> Result<SweepAnswer, Stop> {
    let tasks: Vec<Task<'_>> =
        combinations(study).into_iter().map(|values| Task::at("", values)).collect();
    let first = work.batch(&tasks)?;
    let rows = work.rows.get(first..).unwrap_or_default();
    let outcomes = || rows.iter().map(|row| &row.outcome);
    let met = outcomes().filter(|outcome| outcome.met() == Some(true)).count();
    Ok(SweepAnswer {
        axes: study.axes.clone(),
        met: (!work.layout.requirements.is_empty()).then_some(met),
        slipped: outcomes().filter(|outcome| outcome.slips() > 0).count(),
        failed: outcomes().filter(|outcome| outcome.failure.is_some()).count(),
    })
}
