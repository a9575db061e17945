//! The exact linearisation agrees with differences of the right-hand side.
//!
//! Expected: central differences of the rates in the mode in force, at the middle and at the end
//! of each run; with a step h the error is of order h^2 and rounding/h.

use super::program::none;
use super::trees::{folder, trains};
use lodeshaft::equations::assembly::assemble;
use lodeshaft::equations::build::build;
use lodeshaft::equations::frame::Evaluator;
use lodeshaft::equations::linearise::{MagnetSlope, jacobian};
use lodeshaft::scenario::load;
use lodeshaft::solve::rhs::Rhs;
use lodeshaft::solve::run::run_to_end;
use lodeshaft::solve::{RunOptions, Wanted};

/// Step of the differences on the scaled state.
const STEP: f64 = 1e-5;

/// Agreement asked for, as a share of the largest entry of the row.
const ALIKE: f64 = 1e-6;

#[test]
fn every_linearisation_is_the_slope_of_the_rates() {
    let mut wrong = Vec::new();
    for train in trains() {
        let path = folder().join(format!("{}.yaml", train.name));
        for share in [0.5, 1.0] {
            let mut loaded = load(&path, &[]).unwrap();
            loaded.scenario.duration *= share;
            let model = lodeshaft::model::build(&loaded.scenario).unwrap();
            let equations = build(&model);
            let options = RunOptions { wanted: Wanted::Asked(Vec::new()), ..RunOptions::default() };
            let (_, reached) = run_to_end(&equations, options)
                .unwrap_or_else(|_| panic!("{} has no start", train.name));
            let assembly = assemble(
                &equations,
                &reached.mode,
                reached.time,
                f64::INFINITY,
                &reached.overrides,
            );
            let evaluator = Evaluator {
                equations: &equations,
                assembly: &assembly,
                overrides: &reached.overrides,
            };
            let exact = jacobian(&evaluator, reached.time, &reached.state, MagnetSlope::AtState);
            let rhs = Rhs::new(evaluator);
            let rates = |state: &[f64]| {
                let mut rates = vec![0.0; state.len()];
                rhs.system(reached.time, state, &mut rates);
                rates
            };
            let size = reached.state.len();
            for column in 0..size {
                let shifted = |by: f64| {
                    let mut state = reached.state.clone();
                    state[column] += by;
                    rates(&state)
                };
                let (above, below) = (shifted(STEP), shifted(-STEP));
                for row in 0..size {
                    let found = (above[row] - below[row]) / (2.0 * STEP);
                    let scale = (0..size).map(|at| exact[(row, at)].abs()).fold(1.0, f64::max);
                    let off = (found - exact[(row, column)]).abs();
                    if off > ALIKE * scale {
                        wrong.push(format!(
                            "{} at {} s: row {row}, column {column}: {found} by differences, {} exact",
                            train.name, reached.time, exact[(row, column)]
                        ));
                    }
                }
            }
        }
    }
    none(&wrong);
}
