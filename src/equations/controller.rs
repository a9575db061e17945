//! Controllers of drives, and states that follow a command.
//!
//! ```text
//! command = clamp(gain*e + I + feed_forward, lower, upper)      e = speed asked for - speed
//! dI/dt   = gain*e/integral_time, held while the limit acts and e pushes further
//! dT/dt   = clamp((command - T)/lag, -rate, rate)               T = command without a lag
//! ```
//! Limits that follow the speed are terms of their own, in force while the command stands there.

use super::{Equations, Owner, StateRow, dot};
use crate::signal::course::SlotId;

/// States and terms of a drive's controller.
#[derive(Clone, Debug, PartialEq)]
pub struct Controller {
    /// The motor by place.
    pub motor: usize,
    /// Term of the limited command.
    pub command: usize,
    /// Term that feeds the integral, if there is one.
    pub integral: Option<usize>,
    /// State of the integral.
    pub integral_state: Option<usize>,
    /// State of the lagging torque.
    pub torque_state: Option<usize>,
    /// Scale slot, when the motor has one.
    pub scale: Option<SlotId>,
    /// The largest limit of the command, N*m.
    pub limit: f64,
    /// Terms of the lower and the upper limit where they follow the speed; each is in force while
    /// the command stands at it.
    pub moving_limits: Option<[usize; 2]>,
    /// N*m*s/rad; 0 where there is no speed to hold.
    pub gain: f64,
    /// Speed of the body in the controller's sense as a form over the scaled state.
    pub speed: StateRow,
    /// Speed asked for.
    pub reference: Option<SlotId>,
    /// Torque added to the command.
    pub feed_forward: SlotId,
}

/// A state that follows a command with a first-order lag, its rate limited where that is stated.
///
/// ```text
/// dx/dt = clamp((command - x)/lag, -rate, rate)
/// ```
#[derive(Clone, Debug, PartialEq)]
pub struct Follower {
    /// What it belongs to.
    pub owner: Owner,
    /// Terms whose values together are the command.
    pub commands: Vec<usize>,
    /// The state.
    pub state: usize,
    /// s.
    pub lag: f64,
    /// The term that moves the state at the limited rate, and that rate.
    pub slew: Option<(usize, f64)>,
}

impl Controller {
    /// The lower (0) or upper (1) limit of the command at a state, N*m.
    pub fn edge(&self, equations: &Equations, side: usize, state: &[f64]) -> f64 {
        let fixed = if side == 0 { -self.limit } else { self.limit };
        self.moving(equations, side, state).map_or(fixed, |(value, _)| value)
    }

    /// How a limit changes with the speed at a state, N*m*s/rad.
    pub fn edge_slope(&self, equations: &Equations, side: usize, state: &[f64]) -> f64 {
        self.moving(equations, side, state).map_or(0.0, |(_, slope)| slope)
    }

    fn moving(&self, equations: &Equations, side: usize, state: &[f64]) -> Option<(f64, f64)> {
        let term = self.moving_limits?[side];
        let law = equations.law_at(term)?;
        let speed = dot(&self.speed, state);
        let piece = law.piece_at(speed);
        Some((law.value(speed, [0.0; 2], piece), law.slope(speed, [0.0; 2], piece)))
    }
}

impl Follower {
    /// How far the command is ahead of the state, in physical units.
    pub fn distance(&self, state: &[f64], scale: &[f64], laws: &[f64]) -> f64 {
        let command: f64 = self.commands.iter().map(|place| laws[*place]).sum();
        command - state[self.state] * scale[self.state]
    }
}
