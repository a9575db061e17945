//! Scalar laws: one smooth function of one input within each of its pieces.
//!
//! Everything of a train that is not linear is a scalar law `q = factor(t) * f(x, p, piece)`:
//! the magnet's torque over its phase, a motor's over its speed. `p` are up to two parameters
//! that follow signals (flow and pitch of a rotor). Where `f` has a corner, the input axis
//! is cut into pieces; within a piece `f` is smooth and may be evaluated a little beyond the
//! piece's ends, so that an integrator's trial steps see no corner. The piece is an explicit
//! argument, never hidden state; the integrator stops where the input crosses a boundary.
//!
//! Every law gives the torque on the body in N*m (loads against the motion are negative at
//! positive speed), at full voltage and scale 1, not mirrored: voltage, scale and mirroring
//! are factors that the equations apply.

use crate::component::load::axial_rotor::AxialRotor;
use crate::component::load::curve::LoadCurve;
use crate::component::load::power_law::PowerLaw;
use crate::component::magnetic_law::MagnetLaw;
use crate::component::motor::curve::MotorCurve;
use crate::component::motor::induction::Induction;
use crate::component::motor::optimal_power::OptimalPower;
use crate::component::motor::rating_plate::RatingPlate;

/// One scalar law.
#[derive(Clone, Debug, PartialEq)]
pub enum Law {
    /// 1: a prescribed torque; the factor carries the signal.
    Unit,
    /// `K*law(phase)` of a magnetic gear or coupling; the input is the phase, electrical rad.
    Magnet(MagnetLaw),
    /// `c*x/(1 + (x/peak_at)^2)`: the damper that is strongest at `peak_at` and fades beyond.
    FadingDamper {
        /// Slope at zero, N*m*s/rad.
        coefficient: f64,
        /// Input of the largest torque, rad/s, above zero.
        peak_at: f64,
    },
    /// `-torque*sin(order*x + phase)` over an angle in rad.
    Cogging {
        /// Periods per turn.
        order: f64,
        /// Amplitude, N*m.
        torque: f64,
        /// Phase, rad.
        phase: f64,
    },
    /// Induction motor by Kloss's formula; the input is the body's speed, rad/s.
    Induction(Induction),
    /// Cage motor by its rating plate; the input is the body's speed, rad/s.
    RatingPlate(RatingPlate),
    /// Motor by points; the input is the body's speed, rad/s.
    MotorCurve(MotorCurve),
    /// Generator on its optimal-power curve; the input is the body's speed, rad/s.
    OptimalPower(OptimalPower),
    /// Load by a power of the speed; the input is the body's speed, rad/s.
    PowerLaw(PowerLaw),
    /// Load by points; the input is the body's speed, rad/s.
    LoadCurve(LoadCurve),
    /// Wind or water rotor; the input is the body's speed, the parameters are flow (m/s) and pitch (rad).
    AxialRotor(AxialRotor),
    /// `x` clamped to the limits; pieces 0 (at the lower), 1 (`x` itself), 2 (at the upper).
    Saturation {
        /// Lower and upper limit, in the input's unit.
        limits: [f64; 2],
    },
}

impl Law {
    /// The law that clamps its input to `-limit` and `+limit`.
    pub fn saturation(limit: f64) -> Self {
        Self::Saturation { limits: [-limit, limit] }
    }

    /// The law's value at `x` with the formula of `piece`.
    #[inline]
    pub fn value(&self, x: f64, p: [f64; 2], piece: usize) -> f64 {
        match self {
            Self::Unit => 1.0,
            Self::Magnet(magnet) => magnet.value(x),
            Self::FadingDamper { coefficient, peak_at } => {
                let share = x / peak_at;
                coefficient * x / (1.0 + share * share)
            }
            Self::Cogging { order, torque, phase } => -torque * (order * x + phase).sin(),
            Self::Induction(motor) => motor.value(x),
            Self::RatingPlate(motor) => motor.value(x, piece),
            Self::MotorCurve(motor) => motor.value(x, piece),
            Self::OptimalPower(generator) => generator.value(x, piece),
            Self::PowerLaw(load) => load.value(x, piece),
            Self::LoadCurve(load) => load.value(x, piece),
            Self::AxialRotor(rotor) => rotor.value(x, p),
            Self::Saturation { limits } => match piece {
                0 => limits[0],
                1 => x,
                _ => limits[1],
            },
        }
    }

    /// The derivative of [`Law::value`] with respect to `x`.
    #[inline]
    pub fn slope(&self, x: f64, p: [f64; 2], piece: usize) -> f64 {
        match self {
            Self::Unit => 0.0,
            Self::Magnet(magnet) => magnet.slope(x),
            Self::FadingDamper { coefficient, peak_at } => {
                let square = (x / peak_at) * (x / peak_at);
                coefficient * (1.0 - square) / ((1.0 + square) * (1.0 + square))
            }
            Self::Cogging { order, torque, phase } => -torque * order * (order * x + phase).cos(),
            Self::Induction(motor) => motor.slope(x),
            Self::RatingPlate(motor) => motor.slope(x, piece),
            Self::MotorCurve(motor) => motor.slope(piece),
            Self::OptimalPower(generator) => generator.slope(x, piece),
            Self::PowerLaw(load) => load.slope(x, piece),
            Self::LoadCurve(load) => load.slope(piece),
            Self::AxialRotor(rotor) => rotor.slope(x, p),
            Self::Saturation { .. } => f64::from(u8::from(piece == 1)),
        }
    }

    /// The inputs at which the formula changes, rising; piece `k` lies between entries `k-1` and `k`.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        match self {
            Self::Unit
            | Self::Magnet(_)
            | Self::FadingDamper { .. }
            | Self::Cogging { .. }
            | Self::Induction(_)
            | Self::AxialRotor(_) => &[],
            Self::RatingPlate(motor) => motor.boundaries(),
            Self::MotorCurve(motor) => motor.boundaries(),
            Self::OptimalPower(generator) => generator.boundaries(),
            Self::PowerLaw(load) => load.boundaries(),
            Self::LoadCurve(load) => load.boundaries(),
            Self::Saturation { limits } => limits,
        }
    }

    /// The piece that holds `x`; on a boundary the upper one.
    #[inline]
    pub fn piece_at(&self, x: f64) -> usize {
        self.boundaries().partition_point(|boundary| *boundary <= x)
    }

    /// The inputs between which the law stands on its data; a run that leaves them is warned.
    pub fn warn_range(&self) -> Option<[f64; 2]> {
        match self {
            Self::Induction(motor) => Some(motor.warn_range()),
            Self::MotorCurve(motor) => motor.warn_range(),
            Self::LoadCurve(load) => load.warn_range(),
            _ => None,
        }
    }

    /// What to say of a run that left [`Law::warn_range`].
    pub fn warn_text(&self) -> &'static str {
        match self {
            Self::Induction(_) => {
                "the run passes three times the breakdown slip, where this formula gives half \
                 of a cage motor's torque or less; `rating_plate` follows the starting torque"
            }
            Self::MotorCurve(_) | Self::LoadCurve(_) => {
                "the run leaves the points of this curve; its end values are held there"
            }
            _ => "",
        }
    }
}

#[cfg(test)]
mod tests;
