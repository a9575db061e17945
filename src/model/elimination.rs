//! Rigid joints are eliminated: body speeds `w = G u`, reduced inertia `M = G' J G`.
//!
//! ```text
//! gear pair     w_a - ratio*w_b = 0
//! planetary     z_s*w_s + z_r*w_r - (z_s + z_r)*w_c = 0
//! rigid shaft   w_a - w_b = 0                            (ground: its term is left out)
//! ```
//! Pivoted elimination chooses which bodies keep a speed of their own. A stiff spring in place
//! of a joint would cost step length and invent a frequency; elimination costs neither.

use super::{BodyRow, ShaftModel, body_index, difference};
use crate::diagnostic::Diagnostics;
use crate::scenario::Scenario;
use nalgebra::{DMatrix, DVector};

/// One rigid joint as a row `sum factor*speed = 0`.
#[derive(Clone, Debug, PartialEq)]
pub struct Constraint {
    /// Path of the thing in the file, for messages.
    pub path: String,
    /// What it is and its name, for messages.
    pub label: String,
    /// The row over body speeds.
    pub row: BodyRow,
}

/// Body speeds from independent speeds.
#[derive(Clone, Debug, PartialEq)]
pub struct Reduction {
    /// The bodies whose speeds are the independent ones.
    pub independent: Vec<usize>,
    /// For each body its speed as a form over the independent speeds.
    pub speeds: Vec<Vec<(usize, f64)>>,
    /// Reduced inertia, kg*m2.
    pub mass: DMatrix<f64>,
    /// Its inverse.
    pub inverse_mass: DMatrix<f64>,
}

impl Reduction {
    /// A form over body speeds as a form over the independent speeds, dense.
    pub fn dense(&self, row: &[(usize, f64)]) -> DVector<f64> {
        let mut dense = DVector::zeros(self.independent.len());
        for &(body, factor) in row {
            for &(place, share) in &self.speeds[body] {
                dense[place] += factor * share;
            }
        }
        dense
    }

    /// Inertia felt along a form: `1/(r M^-1 r')`, infinite when nothing moves along it, kg*m2.
    pub fn inertia_along(&self, row: &[(usize, f64)]) -> f64 {
        let dense = self.dense(row);
        1.0 / (dense.transpose() * &self.inverse_mass * &dense)[0]
    }

    /// All body speeds from the independent ones.
    pub fn body_speeds(&self, independent: &[f64]) -> Vec<f64> {
        self.speeds
            .iter()
            .map(|form| form.iter().map(|&(place, share)| share * independent[place]).sum())
            .collect()
    }
}

/// The rigid joints of a scenario in file order: gear pairs, planetary sets, rigid shafts.
pub fn constraints(scenario: &Scenario, shafts: &[ShaftModel]) -> Vec<Constraint> {
    let mut list = Vec::new();
    let add = |list: &mut Vec<Constraint>,
               section: &str,
               kind: &str,
               name: &str,
               members: &[(&str, f64)]| {
        let row = members
            .iter()
            .filter_map(|(body, factor)| body_index(scenario, body).map(|place| (place, *factor)))
            .collect();
        list.push(Constraint {
            path: format!("{section}.{name}"),
            label: format!("{kind} `{name}`"),
            row,
        });
    };
    for pair in &scenario.gear_pairs {
        let members = [(pair.between[0].as_str(), 1.0), (pair.between[1].as_str(), -pair.ratio)];
        add(&mut list, "gear_pairs", "gear pair", &pair.name, &members);
    }
    for set in &scenario.planetary_gears {
        let (sun, ring) = (f64::from(set.teeth_sun), f64::from(set.teeth_ring));
        let members = [
            (set.sun.as_str(), sun),
            (set.carrier.as_str(), -(sun + ring)),
            (set.ring.as_str(), ring),
        ];
        add(&mut list, "planetary_gears", "planetary set", &set.name, &members);
    }
    for (shaft, typed) in shafts.iter().zip(&scenario.shafts) {
        if shaft.rigid {
            list.push(Constraint {
                path: format!("shafts.{}", typed.name),
                label: format!("rigid shaft `{}`", typed.name),
                row: difference(shaft.ends[0], shaft.ends[1]),
            });
        }
    }
    list
}

/// Eliminates the rigid joints; `None` (with errors) when the train cannot move or lacks inertia.
pub fn reduce(
    scenario: &Scenario,
    constraints: &[Constraint],
    inertias: &[f64],
    found: &mut Diagnostics,
) -> Option<Reduction> {
    let bodies = inertias.len();
    if bodies == 0 {
        found.error("bodies", "the train has no bodies: nothing can turn");
        return None;
    }
    let (independent, speeds, redundant) = eliminate(bodies, constraints);
    for index in redundant {
        found.warning(
            constraints[index].path.as_str(),
            format!(
                "{} repeats what other rigid joints already fix: how they share torque cannot be told, the least sum of squares is shown",
                constraints[index].label
            ),
        );
    }
    let mut held = false;
    for (body, form) in speeds.iter().enumerate() {
        if form.is_empty() {
            held = true;
            let name = &scenario.bodies[body].name;
            let joints: Vec<&str> = constraints
                .iter()
                .filter(|joint| joint.row.iter().any(|(member, _)| *member == body))
                .map(|joint| joint.label.as_str())
                .collect();
            found.error_hint(
                format!("bodies.{name}"),
                format!("`{name}` cannot turn: it is locked by {}", joints.join(" and ")),
                "ratios that contradict each other lock a train; a body that is held is `ground`",
            );
        }
    }
    if held {
        return None;
    }
    let reduction = with_mass(independent, speeds, inertias);
    for (place, &body) in reduction.independent.iter().enumerate() {
        if reduction.mass[(place, place)] <= 0.0 {
            let name = &scenario.bodies[body].name;
            found.error_hint(
                format!("bodies.{name}.inertia"),
                format!("`{name}` and what is rigidly joined to it have no inertia"),
                "give it an inertia above zero, or join it by a rigid shaft or gear to a body that has one",
            );
            held = true;
        }
    }
    if !held && reduction.inverse_mass.iter().any(|value| !value.is_finite()) {
        found.error("bodies", "a combination of speeds of this train has no inertia");
        held = true;
    }
    (!held).then_some(reduction)
}

/// The same elimination without checks, for trains made rigid further (natural frequencies).
pub fn reduce_quietly(constraints: &[Constraint], inertias: &[f64]) -> Reduction {
    let (independent, speeds, _) = eliminate(inertias.len(), constraints);
    with_mass(independent, speeds, inertias)
}

fn with_mass(
    independent: Vec<usize>,
    speeds: Vec<Vec<(usize, f64)>>,
    inertias: &[f64],
) -> Reduction {
    let count = independent.len();
    let mut mass = DMatrix::zeros(count, count);
    for (form, inertia) in speeds.iter().zip(inertias) {
        for &(row, left) in form {
            for &(column, right) in form {
                mass[(row, column)] += left * inertia * right;
            }
        }
    }
    let inverse_mass = invert(&mass);
    Reduction { independent, speeds, mass, inverse_mass }
}

/// Inverts a mass matrix; a diagonal one (no rigid joints across bodies) exactly and in linear time.
fn invert(mass: &DMatrix<f64>) -> DMatrix<f64> {
    let count = mass.nrows();
    let diagonal =
        (0..count).all(|row| (0..count).all(|column| row == column || mass[(row, column)] == 0.0));
    if diagonal {
        return DMatrix::from_diagonal(&mass.diagonal().map(|value| 1.0 / value));
    }
    match mass.clone().cholesky() {
        Some(factor) => {
            let inverse = factor.inverse();
            (&inverse + inverse.transpose()) * 0.5
        }
        None => DMatrix::from_element(count, count, f64::NAN),
    }
}

type Elimination = (Vec<usize>, Vec<Vec<(usize, f64)>>, Vec<usize>);

/// Gauss-Jordan with the largest pivot of each row; later bodies are eliminated first among equals.
fn eliminate(bodies: usize, constraints: &[Constraint]) -> Elimination {
    let mut rows: Vec<(usize, DVector<f64>, f64)> = Vec::new();
    let mut pivots: Vec<usize> = Vec::new();
    let mut redundant = Vec::new();
    for (index, constraint) in constraints.iter().enumerate() {
        let mut dense: DVector<f64> = DVector::zeros(bodies);
        for &(body, factor) in &constraint.row {
            dense[body] += factor;
        }
        let size = dense.amax();
        for ((_, row, _), &pivot) in rows.iter().zip(&pivots) {
            let factor = dense[pivot];
            if factor != 0.0 {
                dense.axpy(-factor, row, 1.0);
                dense[pivot] = 0.0;
            }
        }
        let mut pivot = None;
        let mut largest = 1e-12 * size;
        for body in 0..bodies {
            if dense[body].abs() >= largest && dense[body] != 0.0 {
                largest = dense[body].abs();
                pivot = Some(body);
            }
        }
        let Some(pivot) = pivot else {
            redundant.push(index);
            continue;
        };
        dense /= dense[pivot];
        for (_, row, _) in &mut rows {
            let factor = row[pivot];
            if factor != 0.0 {
                row.axpy(-factor, &dense, 1.0);
                row[pivot] = 0.0;
            }
        }
        rows.push((index, dense, size));
        pivots.push(pivot);
    }
    let independent: Vec<usize> = (0..bodies).filter(|body| !pivots.contains(body)).collect();
    let speeds = (0..bodies)
        .map(|body| match pivots.iter().position(|pivot| *pivot == body) {
            None => independent
                .iter()
                .position(|free| *free == body)
                .map(|place| (place, 1.0))
                .into_iter()
                .collect(),
            Some(row) => independent
                .iter()
                .enumerate()
                .filter(|(_, free)| rows[row].1[**free].abs() > 1e-14)
                .map(|(place, free)| (place, -rows[row].1[*free]))
                .collect(),
        })
        .collect();
    (independent, speeds, redundant)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn joint(row: &[(usize, f64)]) -> Constraint {
        Constraint { path: String::new(), label: String::new(), row: row.to_vec() }
    }

    #[test]
    fn a_gear_pair_refers_inertia_by_the_ratio_squared() {
        // Closed form: J_a*i^2 + J_b on the slow side.
        let reduction = reduce_quietly(&[joint(&[(0, 1.0), (1, -4.0)])], &[0.5, 3.0]);
        let slow = reduction.inertia_along(&[(1, 1.0)]);
        assert!((slow - (0.5 * 16.0 + 3.0)).abs() < 1e-12);
    }

    #[test]
    fn contradicting_ratios_lock_both_bodies() {
        let reduction = reduce_quietly(
            &[joint(&[(0, 1.0), (1, -4.0)]), joint(&[(0, 1.0), (1, -5.0)])],
            &[1.0, 1.0],
        );
        assert!(reduction.independent.is_empty());
    }
}
