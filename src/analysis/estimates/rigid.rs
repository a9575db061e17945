//! The train as a reviewer takes it by hand: shafts rigid, one magnet cut, everything else left out.
//!
//! ```text
//! J_e   = 1/(r M^-1 r')                 inertia along the magnet's phase, r its row
//! J_k   = 1/(e_k M^-1 e_k')             inertia felt at member k while the magnet gives way
//! share = J_e (r m)^2/(e_b m),  m = M^-1 e_b'      share of a torque on body b that crosses the magnet
//! u     = J_e r M^-1 tau / K            equivalent load of all torques tau
//! ```
//! For two inertias the share is the practitioners' `J_load/(J_motor + J_load)`.

use crate::equations::Equations;
use crate::model::elimination::{self, Constraint, Reduction};
use nalgebra::DVector;

/// The rigid train around one magnet.
#[derive(Clone, Debug)]
pub struct RigidTrain {
    reduction: Reduction,
    row: DVector<f64>,
    /// Inertia along the phase, kg*m2 per electrical rad squared.
    pub phase_inertia: f64,
}

impl RigidTrain {
    /// The rigid train around a magnet.
    pub fn new(equations: &Equations, magnet: usize) -> Self {
        let model = &equations.model;
        let mut stiff = model.constraints.clone();
        stiff.extend(model.shafts.iter().filter(|shaft| !shaft.rigid).map(|shaft| Constraint {
            path: String::new(),
            label: String::new(),
            row: shaft.row(),
        }));
        let inertias: Vec<f64> = model.scenario.bodies.iter().map(|body| body.inertia).collect();
        let reduction = elimination::reduce_quietly(&stiff, &inertias);
        let row = reduction.dense(&model.magnets[magnet].row());
        let phase_inertia = reduction.inertia_along(&model.magnets[magnet].row());
        Self { reduction, row, phase_inertia }
    }

    /// Inertia felt at a body while the magnet gives way, kg*m2.
    pub fn inertia_at(&self, body: usize) -> f64 {
        self.reduction.inertia_along(&[(body, 1.0)])
    }

    /// Share of a torque on a body that crosses the magnet, 0 to 1.
    pub fn share_of(&self, body: usize) -> f64 {
        let at = self.reduction.dense(&[(body, 1.0)]);
        let moved = &self.reduction.inverse_mass * &at;
        let own = at.dot(&moved);
        let share = self.phase_inertia * self.row.dot(&moved).powi(2) / own;
        if share.is_finite() { share } else { 0.0 }
    }

    /// Equivalent load in N*m per unit count of torques along forms over bodies.
    pub fn equivalent(&self, torques: &[(Vec<(usize, f64)>, f64)]) -> f64 {
        let mut sum = DVector::zeros(self.row.len());
        for (form, value) in torques {
            sum.axpy(*value, &self.reduction.dense(form), 1.0);
        }
        self.phase_inertia * self.row.dot(&(&self.reduction.inverse_mass * sum))
    }

    /// True when a torque on the body moves the magnet's phase.
    pub fn reaches(&self, body: usize) -> bool {
        self.share_of(body) > 1e-12
    }

    /// True when two bodies turn as one or in a fixed ratio while the magnet gives way.
    pub fn joined(&self, a: usize, b: usize) -> bool {
        let (a, b) = (self.reduction.dense(&[(a, 1.0)]), self.reduction.dense(&[(b, 1.0)]));
        let inverse = &self.reduction.inverse_mass;
        let product = a.dot(&(inverse * &b));
        let size = a.dot(&(inverse * &a)) * b.dot(&(inverse * &b));
        product * product > 0.5 * size
    }
}
