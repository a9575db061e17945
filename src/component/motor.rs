//! Motors and generators as typed, and their laws.

pub mod circuit;
pub mod curve;
pub mod induction;
pub mod optimal_power;
pub mod rating_plate;
mod read;
mod read_drive;
mod read_generator;
pub mod torque_limit;

use crate::component::law::Law;
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
        /// N*m*s/rad.
        gain: f64,
        /// s; `None`: no integral part.
        integral_time: Option<f64>,
        /// Torque added to the command before its limit, N*m.
        feed_forward: Signal,
        /// Limits and lag.
        drive: Drive,
    },
    /// Drive that gives the torque asked for within its limits.
    TorqueLoop {
        /// Torque asked for, N*m.
        torque: Signal,
        /// Limits and lag.
        drive: Drive,
    },
    /// Equivalent circuit of an induction motor.
    InductionCircuit {
        /// The circuit.
        figures: circuit::CircuitFigures,
        /// Share of rated voltage.
        voltage: Signal,
        /// 0.5 or more: on the line; below: no stator current.
        connected: Signal,
        /// With the flux equations instead of the circuit at each instant.
        transient: bool,
    },
    /// Generator of a variable-speed rotor.
    OptimalPower {
        /// Its regions.
        figures: optimal_power::GeneratorFigures,
    },
}

/// What limits the torque of a drive, and how it follows its command.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Drive {
    /// Limits of the command.
    pub limits: torque_limit::TorqueLimits,
    /// First-order lag of the torque, s; 0 for none.
    pub lag: f64,
    /// Largest rate of the torque, N*m/s; only with a lag.
    pub torque_rate: Option<f64>,
}

/// The figures of a cage motor's rating plate, checked.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plate {
    /// Rated power, W.
    pub power: f64,
    /// Rated speed, rad/s.
    pub speed: f64,
    /// Synchronous speed, rad/s, of the same sense and above it.
    pub synchronous_speed: f64,
    /// Starting over rated torque.
    pub starting: f64,
    /// Pull-up over rated torque.
    pub pull_up: f64,
    /// Breakdown over rated torque, above 1.
    pub breakdown: f64,
}

impl Plate {
    /// Rated torque, N*m, without its sense.
    pub fn rated_torque(&self) -> f64 {
        self.power / self.speed.abs()
    }

    /// Slip at the rated speed.
    pub fn rated_slip(&self) -> f64 {
        1.0 - self.speed / self.synchronous_speed
    }

    /// Slip at the breakdown torque: Kloss's formula through the rated point.
    pub fn breakdown_slip(&self) -> f64 {
        self.rated_slip() * (self.breakdown + (self.breakdown * self.breakdown - 1.0).sqrt())
    }
}

impl MotorLaw {
    /// The scalar law at full voltage; none for a drive with a controller, which has terms of its own. With
    /// `transient` a circuit has states too, and this is where they come to rest.
    /// A prescribed torque is the unit law times its signal.
    pub fn scalar(&self) -> Option<Law> {
        let law = match self {
            Self::RatingPlate {
                power,
                speed,
                synchronous_speed,
                starting,
                pull_up,
                breakdown,
                ..
            } => Law::RatingPlate(rating_plate::RatingPlate::new(&Plate {
                power: *power,
                speed: *speed,
                synchronous_speed: *synchronous_speed,
                starting: *starting,
                pull_up: *pull_up,
                breakdown: *breakdown,
            })),
            Self::Induction { synchronous_speed, breakdown_torque, breakdown_slip, .. } => {
                Law::Induction(induction::Induction::new(
                    *synchronous_speed,
                    *breakdown_torque,
                    *breakdown_slip,
                ))
            }
            Self::Curve { points, .. } => Law::MotorCurve(curve::MotorCurve::new(points)),
            Self::Prescribed { .. } => Law::Unit,
            Self::InductionCircuit { figures, .. } => Law::Circuit(circuit::Circuit::new(*figures)),
            Self::SpeedLoop { .. } | Self::TorqueLoop { .. } => return None,
            Self::OptimalPower { figures } => {
                Law::OptimalPower(optimal_power::OptimalPower::new(figures))
            }
        };
        Some(law)
    }
}
