//! Motors and generators as typed.

use crate::signal::Signal;

/// A motor as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct Motor {
    /// Its name.
    pub name: String,
    /// The body it drives.
    pub body: String,
    /// Its law.
    pub law: MotorLaw,
    /// Factor on what the law delivers; absent is 1.
    pub scale: Option<Signal>,
    /// Mirrored: forward is negative.
    pub reversed: bool,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// How a motor's torque comes about.
#[derive(Clone, Debug, PartialEq)]
pub enum MotorLaw {
    /// Cage motor from its rating plate; torques in N*m, worked out from the percentages.
    RatingPlate {
        /// Rated power, W.
        power: f64,
        /// Rated speed, rad/s.
        speed: f64,
        /// Synchronous speed, rad/s.
        synchronous_speed: f64,
        /// Starting over rated torque.
        starting: f64,
        /// Pull-up over rated torque.
        pull_up: f64,
        /// Breakdown over rated torque.
        breakdown: f64,
        /// Share of rated voltage.
        voltage: Signal,
    },
    /// Kloss's formula.
    Induction {
        /// rad/s, signed.
        synchronous_speed: f64,
        /// N*m.
        breakdown_torque: f64,
        /// Slip at the breakdown torque.
        breakdown_slip: f64,
        /// Share of rated voltage.
        voltage: Signal,
    },
    /// `[speed, torque]` points read at the signed speed, times voltage squared.
    Curve {
        /// Rows of rad/s and N*m, speeds rising.
        points: Vec<[f64; 2]>,
        /// Share of rated voltage.
        voltage: Signal,
    },
    /// Torque as a signal, N*m.
    Prescribed {
        /// N*m.
        torque: Signal,
    },
    /// PI speed controller.
    SpeedLoop {
        /// Speed asked for, rad/s.
        speed: Signal,
        /// Limit of the command, N*m.
        torque_limit: f64,
        /// N*m*s/rad.
        gain: f64,
        /// s; `None`: no integral part.
        integral_time: Option<f64>,
        /// First-order lag of the torque, s; 0 for none.
        lag: f64,
    },
    /// Generator: torque = -min(coefficient*speed^2, limit) while turning forward.
    OptimalPower {
        /// N*m*s2/rad2.
        coefficient: f64,
        /// N*m.
        torque_limit: f64,
    },
}
