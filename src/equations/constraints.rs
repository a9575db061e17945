//! What rigid joints put on their members, as forms over states and laws.

use super::Equations;
use super::channels::LinearForm;
use super::holding::pseudo_inverse;
use super::parts::Parts;
use nalgebra::DMatrix;

/// What each rigid joint puts on its members, per unit factor of its row.
///
/// ```text
/// J w' = tau + C' mu   =>   mu = (C C')^+ C (J G u' - tau)
/// ```
pub(super) fn constraint_forms(equations: &Equations, parts: &Parts) -> Vec<LinearForm> {
    let model = &equations.model;
    let count = model.constraints.len();
    if count == 0 {
        return Vec::new();
    }
    let bodies = model.scenario.bodies.len();
    let mut rows = DMatrix::zeros(count, bodies);
    for (line, joint) in model.constraints.iter().enumerate() {
        for &(body, factor) in &joint.row {
            rows[(line, body)] += factor;
        }
    }
    let solve = pseudo_inverse(&(&rows * rows.transpose())) * &rows;
    let inertia = |body: usize| model.scenario.bodies[body].inertia;
    // Over the scaled state: inertia times acceleration minus torque, body by body. Linear terms
    // that stand in the matrix are left to the law values, like all other terms.
    let own = &parts.accelerate * &parts.force;
    let mut over_state = DMatrix::zeros(bodies, equations.size);
    for body in 0..bodies {
        for state in 0..equations.size {
            let acceleration: f64 = model.reduction.speeds[body]
                .iter()
                .map(|&(place, share)| share * own[(place, state)] * equations.scale[state])
                .sum();
            let torque = parts.body_force[(body, state)] * equations.scale[state];
            over_state[(body, state)] = inertia(body) * acceleration - torque;
        }
    }
    let state_forms = &solve * over_state;
    let mut forms: Vec<LinearForm> = (0..count)
        .map(|line| LinearForm {
            state: (0..equations.size)
                .map(|place| (place, state_forms[(line, place)]))
                .filter(|(_, value)| value.abs() > 1e-14)
                .collect(),
            laws: Vec::new(),
            constant: 0.0,
        })
        .collect();
    for (place, direction) in parts.directions() {
        let stuck = parts.stuck.iter().any(|index| equations.terms.len() + index == *place);
        let acceleration = parts.acceleration(direction);
        let residual = nalgebra::DVector::from_fn(bodies, |body, _| {
            let torque: f64 =
                direction.iter().filter(|(b, _)| *b == body).map(|(_, factor)| factor).sum();
            let moved: f64 = if stuck {
                0.0
            } else {
                model.reduction.speeds[body]
                    .iter()
                    .map(|&(speed, share)| share * acceleration[speed])
                    .sum()
            };
            inertia(body) * moved - torque
        });
        let value = &solve * residual;
        for (line, form) in forms.iter_mut().enumerate() {
            if value[line].abs() > 1e-14 {
                form.laws.push((*place, value[line]));
            }
        }
    }
    forms
}
