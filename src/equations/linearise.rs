//! The exact linearisation `A + sum D_j q_j' row_j` of one mode at a state.

use super::assembly::{Active, Assembly, Function};
use super::frame::Evaluator;
use super::{StateRow, dot, parameters_at, thermal};
use crate::component::law::Law;
use nalgebra::DMatrix;
use nalgebra::linalg::Schur;

/// Which slope a magnet's law takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MagnetSlope {
    /// At the state itself.
    AtState,
    /// The steepest that the law has: bounds the fastest mode.
    Steepest,
}

/// Rates of change of the scaled state with respect to itself.
pub fn jacobian(
    evaluator: &Evaluator<'_>,
    time: f64,
    state: &[f64],
    magnets: MagnetSlope,
) -> DMatrix<f64> {
    let assembly: &Assembly = evaluator.assembly;
    let mut matrix = assembly.full.clone();
    for active in &assembly.active {
        let (input, _) = evaluator.law(active, time, state);
        let signal = |slot| {
            evaluator.equations.bank.value_in(slot, time, assembly.start, evaluator.overrides)
        };
        if let Function::Products(list) = &active.function {
            let strength = evaluator.strength(&active.factor, time);
            for &(row, share) in &active.column {
                for &(left, right, factor) in list {
                    matrix[(row, left)] += share * strength * factor * state[right];
                    matrix[(row, right)] += share * strength * factor * state[left];
                }
            }
            continue;
        }
        if let Function::Warm(law, gains) = &active.function {
            let strength = evaluator.strength(&active.factor, time);
            let value = strength * law.value(input, [0.0; 2], 0);
            for (index, gain) in gains.iter().enumerate() {
                let others = gains.iter().enumerate().filter(|(other, _)| *other != index);
                let slope =
                    others.map(|(_, other)| other.value(state)).product::<f64>() * gain.slope;
                for &(row, share) in &active.column {
                    matrix[(row, gain.place)] += share * slope * value;
                }
            }
        }
        if let Some(form) = pair_form(active, state) {
            let strength = evaluator.strength(&active.factor, time);
            for &(row, share) in &active.column {
                for &(column, slope) in &form {
                    matrix[(row, column)] += share * strength * slope;
                }
            }
            continue;
        }
        let slope = match &active.function {
            Function::Law(Law::Magnet(magnet), _) if magnets == MagnetSlope::Steepest => {
                magnet.amplitude() * magnet.steepest()
            }
            Function::Warm(Law::Magnet(magnet), gains) if magnets == MagnetSlope::Steepest => {
                magnet.amplitude() * magnet.steepest() * thermal::product(gains, state)
            }
            Function::Warm(law, gains) => {
                law.slope(input, [0.0; 2], 0) * thermal::product(gains, state)
            }
            Function::Law(law, piece) => {
                let parameters = parameters_at(active.parameters, &active.by_state, state, signal);
                let slopes = law.parameter_slopes(input, parameters, *piece);
                let strength = evaluator.strength(&active.factor, time);
                for (form, slope) in active.by_state.iter().zip(slopes) {
                    for &(row, share) in &active.column {
                        for &(column, weight) in form {
                            matrix[(row, column)] += share * slope * strength * weight;
                        }
                    }
                }
                law.slope(input, parameters, *piece)
            }
            Function::Linear => 1.0,
            Function::Products(_) | Function::Pair(..) => 0.0,
            // Sliding friction adds nothing: its torque does not follow small changes of speed.
            Function::Friction(..) => 0.0,
        };
        let slope = slope * evaluator.strength(&active.factor, time);
        for &(row, share) in &active.column {
            for &(column, weight) in &active.input {
                matrix[(row, column)] += share * slope * weight;
            }
        }
    }
    matrix
}

/// How the value of a law of two inputs changes with the state, before its factor; `None` for all
/// other laws.
pub fn pair_form(active: &Active, state: &[f64]) -> Option<StateRow> {
    let Function::Pair(law, second) = &active.function else { return None };
    let slopes = law.slopes(active.input_at(state), dot(second, state));
    let rows = active.input.iter().map(|entry| (entry, slopes[0]));
    let both = rows.chain(second.iter().map(|entry| (entry, slopes[1])));
    Some(both.map(|((place, share), slope)| (*place, share * slope)).collect())
}

/// Eigenvalues of a real matrix as (real, imaginary); `None` when the iteration does not converge.
pub fn eigenvalues(matrix: &DMatrix<f64>) -> Option<Vec<(f64, f64)>> {
    if matrix.iter().any(|value| !value.is_finite()) {
        return None;
    }
    let schur = Schur::try_new(matrix.clone(), f64::EPSILON, 10_000)?;
    Some(schur.complex_eigenvalues().iter().map(|value| (value.re, value.im)).collect())
}
