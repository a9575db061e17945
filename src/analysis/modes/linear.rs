//! The train linearised at a point, reduced to the states that take part in its motion.
//!
//! ```text
//! x' = J x      J = A + sum D_j q_j' row_j
//! ```
//! Rows that friction at rest holds are taken out with the speeds they hold; states that act on
//! nothing (an angle no law reads, the twist within a free play) are left out; ripple over an
//! angle counts by its mean while its members turn against each other, which is no stiffness.

use crate::analysis::linear_point::LinearPoint;
use crate::component::law::Law;
use crate::component::pair_law::PairLaw;
use crate::equations::assembly::{Active, Assembly, Function, assemble};
use crate::equations::frame::Evaluator;
use crate::equations::linearise::{MagnetSlope, jacobian};
use crate::equations::{Equations, Owner, dot, thermal};
use nalgebra::{DMatrix, DVector};

/// Which stiffness the magnets have.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MagnetLoad {
    /// That of the point.
    AtPoint,
    /// That without load, at the law's stable point.
    None,
}

/// The linearised train.
#[derive(Clone, Debug)]
pub struct LinearTrain {
    /// Rates of change over the reduced state.
    pub matrix: DMatrix<f64>,
    /// Physical full state from the reduced state.
    pub expand: DMatrix<f64>,
    /// Independent speeds (physical) of motions at a constant rate that nothing resists, one a column.
    pub free: DMatrix<f64>,
    /// Stiffness of each magnet over its phase, N*m/rad.
    pub magnet_stiffness: Vec<f64>,
    /// Stiffness of each shaft at its twist, N*m/rad.
    pub shaft_stiffness: Vec<f64>,
}

/// Linearises a train at a point.
pub fn linearise(equations: &Equations, point: &LinearPoint, load: MagnetLoad) -> LinearTrain {
    let next = equations.bank.next_kink(point.time, &point.overrides);
    let end = next.unwrap_or(f64::INFINITY);
    let assembly = assemble(equations, &point.mode, point.time, end, &point.overrides);
    let evaluator = Evaluator { equations, assembly: &assembly, overrides: &point.overrides };
    let mut full = jacobian(&evaluator, point.time, &point.state, MagnetSlope::AtState);
    thermal::hold(equations, &mut full);
    let mut magnet_stiffness = vec![0.0; equations.model.magnets.len()];
    for active in &assembly.active {
        let input = active.input_at(&point.state);
        match &active.function {
            Function::Law(Law::Magnet(law), _) | Function::Warm(Law::Magnet(law), _) => {
                let warm = match &active.function {
                    Function::Warm(_, gains) => thermal::product(gains, &point.state),
                    _ => 1.0,
                };
                let here = warm * law.slope(input);
                let wanted = match load {
                    MagnetLoad::AtPoint => here,
                    MagnetLoad::None => warm * law.slope(law.stable_point()),
                };
                add(&mut full, active, wanted - here);
                let index = equations.terms.get(active.place).map(|term| term.owner);
                if let Some(Owner::Magnet(index)) = index {
                    magnet_stiffness[index] = wanted;
                }
            }
            Function::Law(law @ (Law::Cogging { .. } | Law::Periodic(_)), piece)
                if turns(equations, active, &point.state) =>
            {
                add(&mut full, active, -law.slope(input, [0.0; 2], *piece));
            }
            // A crank that turns passes all angles: what hangs on the angle counts by its mean.
            Function::Pair(PairLaw::Reciprocating(law), second)
                if turns(equations, active, &point.state) =>
            {
                add(&mut full, active, -law.slopes(input, dot(second, &point.state))[0]);
            }
            _ => {}
        }
    }
    let shafts = equations.model.shafts.iter().zip(&equations.twist_state);
    let shaft_stiffness = shafts
        .map(|(shaft, place)| match (&shaft.curve, place) {
            (Some(curve), Some(place)) => curve.at(point.state[*place] * equations.scale[*place]).1,
            _ => shaft.stiffness,
        })
        .collect();
    reduce(equations, &assembly, &full, [magnet_stiffness, shaft_stiffness])
}

fn add(matrix: &mut DMatrix<f64>, active: &Active, slope: f64) {
    for &(row, share) in &active.column {
        for &(column, weight) in &active.input {
            matrix[(row, column)] += share * slope * weight;
        }
    }
}

/// True when the members of an angle law turn against each other.
fn turns(equations: &Equations, active: &Active, state: &[f64]) -> bool {
    equations
        .angle_states
        .iter()
        .filter(|(place, _)| active.input.iter().any(|(input, _)| input == place))
        .any(|(_, row)| {
            let speed = dot(&equations.speed_row(row), state);
            let size = row
                .iter()
                .map(|(body, share)| share.abs() * equations.model.scales.body_speed[*body])
                .fold(0.0, f64::max);
            speed.abs() > 1e-6 * size
        })
}

fn reduce(
    equations: &Equations,
    assembly: &Assembly,
    full: &DMatrix<f64>,
    [magnet_stiffness, shaft_stiffness]: [Vec<f64>; 2],
) -> LinearTrain {
    let (size, speeds) = (equations.size, equations.speeds);
    // States beyond the speeds that act on nothing, again and again until none is left.
    let mut kept: Vec<usize> = (0..size).collect();
    loop {
        let before = kept.len();
        let acts =
            |state: usize| state < speeds || kept.iter().any(|row| full[(*row, state)] != 0.0);
        let left: Vec<usize> = kept.iter().copied().filter(|state| acts(*state)).collect();
        kept = left;
        if kept.len() == before {
            break;
        }
    }
    let moving = moving_speeds(equations, assembly);
    let others = &kept[speeds..];
    let count = moving.ncols() + others.len();
    // Scaled full state from the reduced one, and back (the columns of `moving` are orthonormal).
    let mut basis = DMatrix::zeros(size, count);
    basis.view_mut((0, 0), (speeds, moving.ncols())).copy_from(&moving);
    for (column, state) in others.iter().enumerate() {
        basis[(*state, moving.ncols() + column)] = 1.0;
    }
    let matrix = basis.transpose() * full * &basis;
    let scale = DVector::from_column_slice(&equations.scale);
    let expand = DMatrix::from_fn(size, count, |row, column| scale[row] * basis[(row, column)]);
    let at_rate = full * basis.columns(0, moving.ncols());
    let free_scaled = &moving * kernel(&at_rate);
    let free = DMatrix::from_fn(speeds, free_scaled.ncols(), |row, column| {
        scale[row] * free_scaled[(row, column)]
    });
    LinearTrain { matrix, expand, free, magnet_stiffness, shaft_stiffness }
}

/// Orthonormal scaled speeds that friction at rest leaves free.
fn moving_speeds(equations: &Equations, assembly: &Assembly) -> DMatrix<f64> {
    let speeds = equations.speeds;
    if assembly.stuck.is_empty() {
        return DMatrix::identity(speeds, speeds);
    }
    let rows = DMatrix::from_fn(assembly.stuck.len(), speeds, |line, column| {
        let friction = &equations.frictions[assembly.stuck[line]];
        let row = equations.model.reduction.dense(&friction.row);
        row[column] * equations.scale[column] / friction.speed_size
    });
    kernel(&rows)
}

/// An orthonormal basis of the vectors that a matrix takes to zero.
fn kernel(matrix: &DMatrix<f64>) -> DMatrix<f64> {
    let columns = matrix.ncols();
    if columns == 0 {
        return DMatrix::zeros(0, 0);
    }
    // More rows than columns, so that all right vectors are returned.
    let rows = matrix.nrows().max(columns);
    let mut tall = DMatrix::zeros(rows, columns);
    tall.view_mut((0, 0), (matrix.nrows(), columns)).copy_from(matrix);
    let svd = tall.svd(false, true);
    let largest = svd.singular_values.amax();
    let Some(right) = svd.v_t else { return DMatrix::zeros(columns, 0) };
    let free: Vec<usize> = (0..columns)
        .filter(|place| svd.singular_values[*place] <= 1e-10 * largest || largest == 0.0)
        .collect();
    DMatrix::from_fn(columns, free.len(), |row, column| right[(free[column], row)])
}
