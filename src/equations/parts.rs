//! What an assembly is made of: forces on the bodies, accelerations, stuck rows.

use super::mode::{Contact, FrictionMode, Mode};
use super::{Equations, StateRow, Target};
use crate::model::BodyRow;
use nalgebra::{DMatrix, DVector};

/// Pieces of an assembly that several of its parts need.
pub struct Parts {
    /// Generalised torque over the physical state, `speeds x size`.
    pub force: DMatrix<f64>,
    /// Torque on each body over the physical state, `bodies x size`.
    pub body_force: DMatrix<f64>,
    /// Constant torque on each body (contact offsets of free play).
    pub body_constant: DVector<f64>,
    /// From generalised torque to acceleration, projection included.
    pub accelerate: DMatrix<f64>,
    /// Stuck friction elements.
    pub stuck: Vec<usize>,
    /// Their rows over the independent speeds (physical), `stuck x speeds`.
    pub rows: DMatrix<f64>,
    /// Projection of speeds onto the stuck rows' kernel.
    pub projection: Option<DMatrix<f64>>,
    /// True when a contact offset acts.
    pub has_constant: bool,
    equations_scale: Vec<f64>,
    dense_rows: Vec<Vec<(usize, f64)>>,
    directions: Vec<(usize, BodyRow)>,
}

impl Parts {
    pub(super) fn new(equations: &Equations, mode: &Mode) -> Self {
        let model = &equations.model;
        let reduction = &model.reduction;
        let bodies = model.scenario.bodies.len();
        let mut body_force = DMatrix::zeros(bodies, equations.size);
        let mut body_constant = DVector::zeros(bodies);
        // Torque along a row: minus the row's transpose times (coefficient times a form).
        let mut resist = |row: &BodyRow, form: &[(usize, f64)], constant: f64| {
            for &(body, factor) in row {
                for &(state, value) in form {
                    body_force[(body, state)] -= factor * value;
                }
                body_constant[body] -= factor * constant;
            }
        };
        let rate_form = |row: &BodyRow, coefficient: f64| -> StateRow {
            let dense = reduction.dense(row);
            dense
                .iter()
                .enumerate()
                .filter(|(_, value)| **value != 0.0)
                .map(|(place, value)| (place, value * coefficient))
                .collect()
        };
        for (index, (shaft, place)) in model.shafts.iter().zip(&equations.twist_state).enumerate() {
            let Some(place) = *place else { continue };
            let offset = match mode.contacts[index] {
                Contact::Gap => continue,
                Contact::Always => 0.0,
                Contact::Forward => -shaft.stiffness * shaft.backlash / 2.0,
                Contact::Backward => shaft.stiffness * shaft.backlash / 2.0,
            };
            let row = shaft.row();
            resist(&row, &[(place, shaft.stiffness)], offset);
            if shaft.damping > 0.0 {
                resist(&row, &rate_form(&row, shaft.damping), 0.0);
            }
        }
        for damper in &equations.dampers {
            resist(&damper.row, &rate_form(&damper.row, damper.coefficient), 0.0);
        }
        let transfer = transfer(equations);
        let force = &transfer * &body_force;
        let stuck: Vec<usize> = (0..mode.frictions.len())
            .filter(|index| mode.frictions[*index] == FrictionMode::Stuck)
            .collect();
        let mut rows = DMatrix::zeros(stuck.len(), equations.speeds);
        for (line, index) in stuck.iter().enumerate() {
            rows.set_row(line, &reduction.dense(&equations.frictions[*index].row).transpose());
        }
        let inverse = &reduction.inverse_mass;
        let (accelerate, projection) = if stuck.is_empty() {
            (inverse.clone(), None)
        } else {
            let compliance = &rows * inverse * rows.transpose();
            let pseudo = super::holding::pseudo_inverse(&compliance);
            let keep = DMatrix::identity(equations.speeds, equations.speeds)
                - inverse * rows.transpose() * pseudo * &rows;
            (&keep * inverse, Some(keep))
        };
        let directions =
            equations
                .terms
                .iter()
                .enumerate()
                .filter_map(|(place, term)| match &term.target {
                    Target::Torque(direction) => Some((place, direction.clone())),
                    Target::State(..) => None,
                })
                .chain(
                    equations.frictions.iter().enumerate().map(|(index, friction)| {
                        (equations.terms.len() + index, friction.row.clone())
                    }),
                )
                .chain(std::iter::once((
                    equations.terms.len() + equations.frictions.len(),
                    body_constant
                        .iter()
                        .copied()
                        .enumerate()
                        .filter(|(_, torque)| *torque != 0.0)
                        .collect(),
                )))
                .collect();
        Self {
            has_constant: body_constant.iter().any(|torque| *torque != 0.0),
            force,
            body_force,
            body_constant,
            accelerate,
            stuck,
            rows,
            projection,
            equations_scale: equations.scale.clone(),
            dense_rows: reduction.speeds.clone(),
            directions,
        }
    }

    /// Acceleration (physical) from a unit torque along a form over bodies.
    pub fn acceleration(&self, direction: &[(usize, f64)]) -> DVector<f64> {
        let mut generalised = DVector::zeros(self.accelerate.ncols());
        for &(body, factor) in direction {
            for &(place, share) in &self.dense_rows[body] {
                generalised[place] += factor * share;
            }
        }
        &self.accelerate * generalised
    }

    /// The scaled column of a unit torque along a form over bodies.
    pub(super) fn column(&self, direction: &[(usize, f64)]) -> StateRow {
        self.acceleration(direction)
            .iter()
            .enumerate()
            .filter(|(_, value)| value.abs() > 1e-300)
            .map(|(place, value)| (place, value / self.equations_scale[place]))
            .collect()
    }

    pub(super) fn constant_row(&self) -> BodyRow {
        self.body_constant
            .iter()
            .copied()
            .enumerate()
            .filter(|(_, torque)| *torque != 0.0)
            .collect()
    }

    /// Torque directions of all laws by place in the frame: terms, then frictions.
    pub fn directions(&self) -> &[(usize, BodyRow)] {
        &self.directions
    }

    /// Accelerations along the stuck rows without holding torques, and their compliance.
    pub(super) fn stuck_forms(
        &self,
        equations: &Equations,
    ) -> (Vec<(StateRow, Vec<(usize, f64)>)>, DMatrix<f64>) {
        let inverse = &equations.model.reduction.inverse_mass;
        let free = inverse * &self.force;
        let forms = (0..self.stuck.len())
            .map(|line| {
                let row = self.rows.row(line);
                let over_state = row * &free;
                let state = over_state
                    .iter()
                    .enumerate()
                    .filter(|(_, value)| **value != 0.0)
                    .map(|(place, value)| (place, value * equations.scale[place]))
                    .collect();
                let by_torque = row * inverse;
                let laws = self
                    .directions
                    .iter()
                    .filter(|(place, _)| {
                        !self.stuck.iter().any(|index| equations.terms.len() + index == *place)
                    })
                    .map(|(place, direction)| {
                        let dense = equations.model.reduction.dense(direction);
                        (*place, (by_torque.clone() * dense)[0])
                    })
                    .filter(|(_, value)| *value != 0.0)
                    .collect();
                (state, laws)
            })
            .collect();
        (forms, &self.rows * inverse * self.rows.transpose())
    }
}

/// `G'`: from torques on bodies to generalised torques.
fn transfer(equations: &Equations) -> DMatrix<f64> {
    let reduction = &equations.model.reduction;
    let mut matrix = DMatrix::zeros(equations.speeds, reduction.speeds.len());
    for (body, form) in reduction.speeds.iter().enumerate() {
        for &(place, share) in form {
            matrix[(place, body)] += share;
        }
    }
    matrix
}
