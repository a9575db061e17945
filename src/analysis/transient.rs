//! One run in time: from a checked scenario to its results, without any input or output.

use crate::diagnostic::Diagnostics;
use crate::equations::{self, Equations};
use crate::model;
use crate::results::RunResult;
use crate::scenario::Scenario;
use crate::solve::RunOptions;
use crate::solve::run::{self, RunError};

/// Builds the equations of a scenario.
///
/// # Errors
/// The faults of the train: the file is at fault.
pub fn prepare(scenario: &Scenario) -> Result<Equations, Diagnostics> {
    let model = model::build(scenario)?;
    Ok(equations::build::build(&model))
}

/// Runs a train from its start to its end.
///
/// # Errors
/// The reason why there is no steady start: the file is at fault. Trouble of the numerics is
/// no error here: the result then says `completed: false` and why.
pub fn run_prepared(
    equations: &Equations,
    options: RunOptions<'_>,
) -> Result<RunResult, Diagnostics> {
    run::run(equations, options).map_err(|RunError::Steady(steady)| {
        let mut found = equations.model.warnings.clone();
        found.error("start", steady.message);
        found
    })
}

/// Builds and runs a scenario.
///
/// # Errors
/// Those of [`prepare`] and [`run_prepared`].
pub fn transient(scenario: &Scenario, options: RunOptions<'_>) -> Result<RunResult, Diagnostics> {
    run_prepared(&prepare(scenario)?, options)
}
