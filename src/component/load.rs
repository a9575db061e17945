//! Loads as typed, and their laws.

pub mod axial_rotor;
pub mod coefficient_file;
pub mod curve;
pub mod periodic;
pub mod pitch;
pub mod power_coefficient;
pub mod power_law;
pub mod propeller;
pub mod propeller_series;
mod read;
mod read_coefficients;
pub mod reciprocating;

use crate::component::law::Law;
use crate::signal::Signal;

/// A load as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct Load {
    /// Its name.
    pub name: String,
    /// The body it loads.
    pub body: String,
    /// The other body for friction and viscous loads; `None` is ground.
    pub against: Option<String>,
    /// Its law.
    pub law: LoadLaw,
    /// Factor on what the law delivers; absent is 1.
    pub scale: Option<Signal>,
    /// Mirrored.
    pub reversed: bool,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// How a load's torque comes about.
#[derive(Clone, Debug, PartialEq)]
pub enum LoadLaw {
    /// `torque*|w/speed|^exponent` against the motion; torque worked out from power where that is given.
    PowerLaw {
        /// N*m at `speed`.
        torque: f64,
        /// rad/s.
        speed: f64,
        /// Above zero.
        exponent: f64,
    },
    /// Dry friction that sticks and slips.
    Friction {
        /// N*m while sliding.
        sliding: f64,
        /// N*m that breaks it away, never below `sliding`.
        breakaway: f64,
    },
    /// Proportional to speed.
    Viscous {
        /// N*m*s/rad.
        coefficient: f64,
    },
    /// External torque, positive drives forward, N*m.
    Prescribed {
        /// N*m.
        torque: Signal,
    },
    /// Against the motion, read at |speed|.
    Curve {
        /// Rows of rad/s and N*m, speeds rising from 0 or above.
        points: Vec<[f64; 2]>,
    },
    /// Wind or water rotor.
    AxialRotor {
        /// m.
        radius: f64,
        /// kg/m3.
        density: f64,
        /// m/s.
        flow: Signal,
        /// rad; not in force beside a loop.
        pitch: Signal,
        /// A controller of the pitch.
        pitch_loop: Option<Box<pitch::PitchLoop>>,
        /// Power coefficient over tip speed ratio and pitch.
        coefficient: Box<power_coefficient::PowerCoefficient>,
    },
    /// By the body's angle: a mean against the motion, and harmonics of a turn.
    Periodic {
        /// N*m, against the motion.
        mean: f64,
        /// Harmonics of the resisting torque.
        harmonics: Vec<periodic::TurnHarmonic>,
    },
    /// Inertia of a reciprocating mass on the body as its crank.
    Reciprocating {
        /// m.
        crank_radius: f64,
        /// m.
        rod_length: f64,
        /// kg.
        mass: f64,
        /// Crank angle at the start, rad.
        phase: f64,
    },
    /// Ship's propeller.
    Propeller {
        /// m.
        diameter: f64,
        /// kg/m3.
        density: f64,
        /// Speed of advance, m/s.
        advance: Signal,
        /// Torque coefficient over the advance ratio.
        coefficient: propeller::TorqueCoefficient,
    },
}

impl LoadLaw {
    /// The scalar law; none for friction and viscous loads, which are dry friction and a linear
    /// part of the equations, and for reciprocating masses, whose law has two inputs. A prescribed torque is the unit law times its signal.
    pub fn scalar(&self) -> Option<Law> {
        match self {
            Self::PowerLaw { torque, speed, exponent } => {
                Some(Law::PowerLaw(power_law::PowerLaw::new(*torque, *speed, *exponent)))
            }
            Self::Curve { points } => Some(Law::LoadCurve(curve::LoadCurve::new(points))),
            Self::AxialRotor { radius, density, coefficient, .. } => Some(Law::AxialRotor(
                axial_rotor::AxialRotor::new(*radius, *density, (**coefficient).clone()),
            )),
            Self::Periodic { harmonics, .. } => {
                Some(Law::Periodic(periodic::Periodic::new(harmonics)))
            }
            Self::Propeller { diameter, density, coefficient, .. } => Some(Law::Propeller(
                propeller::Propeller::new(*diameter, *density, coefficient.clone()),
            )),
            Self::Prescribed { .. } => Some(Law::Unit),
            Self::Friction { .. } | Self::Viscous { .. } | Self::Reciprocating { .. } => None,
        }
    }
}
