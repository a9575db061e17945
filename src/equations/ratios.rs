//! Channels that are worked out anew from a law: currents of circuits, ratios of rotors.

use super::channels::RotorChannel;
use super::frame::Evaluator;
use super::{Owner, Shape, dot};
use crate::component::law::Law;
use crate::component::load::LoadLaw;
use crate::component::motor::circuit::CONNECTED;
use std::f64::consts::PI;

/// Near standstill an advance ratio grows without bound and says no more.
const LARGEST_ADVANCE_RATIO: f64 = 100.0;

impl Evaluator<'_> {
    /// Current of a line of a motor by its circuit, A, root mean square; 0 while it is open.
    pub(super) fn circuit_current(&self, place: usize, time: f64, state: &[f64]) -> f64 {
        let term = &self.equations.terms[place];
        let signal =
            |slot| self.equations.bank.value_in(slot, time, self.assembly.start, self.overrides);
        let parameters = super::parameters_at(term.parameters, &term.by_state, state, signal);
        let Shape::Law(Law::Circuit(circuit)) = &term.shape else { return 0.0 };
        if parameters[0] < CONNECTED[0] {
            return 0.0;
        }
        let voltage = term.factor.slots.first().map_or(1.0, |(slot, _)| signal(*slot));
        voltage * circuit.stator_current(circuit.slip(dot(&term.input, state))).norm()
    }

    /// Flow, ratios and coefficients of rotors and propellers.
    pub(super) fn rotor(&self, place: usize, what: RotorChannel, time: f64, state: &[f64]) -> f64 {
        let term = &self.equations.terms[place];
        let signal =
            |slot| self.equations.bank.value_in(slot, time, self.assembly.start, self.overrides);
        if what == RotorChannel::AdvanceRatio {
            let (Shape::Law(Law::Propeller(propeller)), [Some(advance), _]) =
                (&term.shape, term.parameters)
            else {
                return 0.0;
            };
            let ratio = propeller.advance_ratio(dot(&term.input, state), signal(advance));
            return ratio.clamp(-LARGEST_ADVANCE_RATIO, LARGEST_ADVANCE_RATIO);
        }
        let [flow, pitch] = super::parameters_at(term.parameters, &term.by_state, state, signal);
        let Owner::Load(load) = term.owner else { return 0.0 };
        let LoadLaw::AxialRotor { radius, density, .. } =
            &self.equations.model.scenario.loads[load].law
        else {
            return 0.0;
        };
        if what == RotorChannel::Flow {
            return flow;
        }
        if flow <= 0.0 {
            return 0.0;
        }
        let speed = dot(&term.input, state);
        if what == RotorChannel::TipSpeedRatio {
            return speed * radius / flow;
        }
        let Shape::Law(law) = &term.shape else { return 0.0 };
        let torque = law.value(speed, [flow, pitch], law.piece(speed, [flow, pitch]));
        let flow_power = 0.5 * density * PI * radius * radius * flow.powi(3);
        torque * speed / flow_power
    }
}
