//! Stored energy, and the powers that the audit sums.
//!
//! ```text
//! stored = 1/2 u' M u + sum 1/2 k e^2 + sum K * integral of law       (zero at each magnet's stable point)
//! ```
//! A flank that has opened with some overlap left carries nothing: its energy counts as lost at
//! that instant, not while it relaxes.

use super::Equations;
use super::Shape;
use super::mode::Contact;
use crate::component::law::Law;

/// Elastic energy of a shaft's twist beyond its free play, J.
pub fn elastic(equations: &Equations, shaft: usize, state: &[f64]) -> f64 {
    let Some(place) = equations.twist_state[shaft] else { return 0.0 };
    let twist = state[place] * equations.scale[place];
    let model = &equations.model.shafts[shaft];
    let beyond = (twist.abs() - model.backlash / 2.0).max(0.0);
    0.5 * model.stiffness * beyond * beyond
}

/// Kinetic, elastic and magnetic energy of a state, J.
pub fn stored(equations: &Equations, contacts: &[Contact], state: &[f64]) -> f64 {
    let reduction = &equations.model.reduction;
    let speeds: Vec<f64> =
        (0..equations.speeds).map(|place| state[place] * equations.scale[place]).collect();
    let mut energy = 0.0;
    for row in 0..equations.speeds {
        for column in 0..equations.speeds {
            energy += 0.5 * speeds[row] * reduction.mass[(row, column)] * speeds[column];
        }
    }
    for (index, contact) in contacts.iter().enumerate() {
        if *contact != Contact::Gap {
            energy += elastic(equations, index, state);
        }
    }
    for term in &equations.terms {
        let input = super::dot(&term.input, state);
        if let Shape::Warm(Law::Magnet(magnet), gains) = &term.shape {
            energy += magnet.energy(input) * super::thermal::product(gains, state);
        }
        let Shape::Law(law) = &term.shape else { continue };
        match law {
            Law::Magnet(magnet) => energy += magnet.energy(input),
            Law::Elastic(shaft) => energy += shaft.energy_beyond(input),
            // Torque -T sin(n x + phase) on the rotor: energy -(T/n) cos(n x + phase).
            Law::Cogging { order, torque, phase } => {
                energy -= torque / order * ((order * input + phase).cos() - phase.cos());
            }
            _ => {}
        }
    }
    energy
}
