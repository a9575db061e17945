//! An induction machine with states of its own: its place in the equations.
//!
//! ```text
//! complex quantities turn with the line: (d + jq), voltage along d, root mean square values
//! k = Xm/Xr,  X' = Xs - Xm^2/Xr,  Xs = X1 + Xm,  Xr = X2 + Xm,  R' = R1 + k^2 R2,  w = 2 pi f
//! X' di/dt   = w [ v - (R' + jX') i + k (R2/Xr - j W) psi ]     i stator current, A; W = p speed/w
//!    dpsi/dt = w [ k R2 i - (R2/Xr + j (1 - W)) psi ]           psi rotor flux linkage times w, V
//! torque     = 3 k p/w Im(conj(psi) i)                          N*m
//! open: i = 0, the rotor flux decays by R2/Xr
//! ```
//!
//! The flux equations of the textbooks (Krause, Analysis of Electric Machinery; from memory) with
//! the stator current in place of its flux: so the current is what the contactor cuts, and what
//! is zero when it closes. At a constant speed they come to rest on the equivalent circuit.

use super::mode::Mode;
use crate::component::motor::circuit::Circuit;
use crate::signal::course::SlotId;

/// States and terms of a machine.
#[derive(Clone, Debug, PartialEq)]
pub struct Machine {
    /// The motor by place.
    pub motor: usize,
    /// Its circuit.
    pub circuit: Circuit,
    /// States of the stator current and the rotor flux: two components each.
    pub states: [usize; 4],
    /// Body's speed in the machine's sense as a form over the scaled state.
    pub speed: Vec<(usize, f64)>,
    /// Term of the contactor and the voltage behind it.
    pub supply: usize,
    /// Terms that act on the stator current; none of them does while the contactor is open.
    pub stator: Vec<usize>,
    /// Share of the rated voltage.
    pub voltage: SlotId,
    /// Whether it is on the line.
    pub connected: SlotId,
}

impl Machine {
    /// True for a term that is out of force because the contactor is open.
    pub fn is_off(&self, mode: &Mode, term: usize) -> bool {
        self.is_open(mode) && self.stator.contains(&term)
    }

    fn is_open(&self, mode: &Mode) -> bool {
        mode.pieces.get(self.supply) == Some(&0)
    }

    /// Cuts the stator current while the contactor is open.
    pub fn open(&self, mode: &Mode, state: &mut [f64]) {
        if self.is_open(mode) {
            state[self.states[0]] = 0.0;
            state[self.states[1]] = 0.0;
        }
    }

    /// Sets current and flux to where they rest at the speed of a state, at a share of the voltage.
    pub fn settle(&self, state: &mut [f64], scale: &[f64], voltage: f64) {
        let slip = self.circuit.slip(super::dot(&self.speed, state));
        let current = self.circuit.stator_current(slip) * voltage;
        let flux = self.circuit.rotor_flux(slip) * voltage;
        for (place, value) in self.states.iter().zip([current.re, current.im, flux.re, flux.im]) {
            state[*place] = value / scale[*place];
        }
    }
}
