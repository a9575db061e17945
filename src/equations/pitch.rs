//! Pitch controllers: their place in the equations.

use super::mode::Mode;
use super::{Equations, StateRow, dot};
use crate::signal::course::{Overrides, SlotId};

/// An integral this close to its end stands there, as a share of its working size.
const ROUNDING: f64 = 1e-12;

/// States and terms of a pitch loop; see [`crate::component::load::pitch`] for its law.
#[derive(Clone, Debug, PartialEq)]
pub struct Pitch {
    /// The load by place.
    pub load: usize,
    /// Term that feeds the integral.
    pub integral: usize,
    /// State of the integral.
    pub integral_state: usize,
    /// State of the blades' angle.
    pub state: usize,
    /// Lowest and highest angle, rad.
    pub angles: [f64; 2],
    /// Speed of the body in the sense asked for, as a form over the scaled state.
    pub error: StateRow,
    /// Factor on the speed asked for that makes it an error with [`Pitch::error`].
    pub asked_share: f64,
    /// Speed asked for.
    pub reference: SlotId,
    /// Typical speed, rad/s, for tolerances.
    pub speed_size: f64,
}

impl Pitch {
    /// Speed beyond the one asked for, rad/s.
    pub fn error(&self, asked: f64, state: &[f64]) -> f64 {
        dot(&self.error, state) + self.asked_share * asked
    }

    /// Room of the integral to the nearer angle, rad.
    pub fn room(&self, state: &[f64], scale: &[f64]) -> f64 {
        let value = state[self.integral_state] * scale[self.integral_state];
        (self.angles[1] - value).min(value - self.angles[0])
    }

    /// The angle (-1 lower, +1 upper) that an integral stands at or beyond, pushed by the error;
    /// 0 for none.
    fn pushed(&self, asked: f64, state: &[f64], scale: &[f64]) -> i8 {
        let value = state[self.integral_state] * scale[self.integral_state];
        let error = self.error(asked, state);
        let room = ROUNDING * scale[self.integral_state];
        if error > 0.0 && value >= self.angles[1] - room {
            1
        } else if error < 0.0 && value <= self.angles[0] + room {
            -1
        } else {
            0
        }
    }
}

impl Mode {
    /// Decides anew which integrals of pitch loops stand at the end of their way.
    pub fn judge_pitches(
        &mut self,
        equations: &Equations,
        time: f64,
        state: &[f64],
        overrides: &Overrides,
    ) {
        for (held, pitch) in self.pitch_held.iter_mut().zip(&equations.pitches) {
            let asked = equations.bank.value(pitch.reference, time, overrides);
            *held = pitch.pushed(asked, state, &equations.scale);
        }
    }
}
