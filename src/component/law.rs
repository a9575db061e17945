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

use crate::component::elastic_curve::ElasticCurve;
use crate::component::load::axial_rotor::AxialRotor;
use crate::component::load::curve::LoadCurve;
use crate::component::load::periodic::Periodic;
use crate::component::load::pitch::schedule;
use crate::component::load::power_law::PowerLaw;
use crate::component::load::propeller::Propeller;
use crate::component::magnetic_law::MagnetLaw;
use crate::component::motor::circuit::{CONNECTED, Circuit};
use crate::component::motor::curve::MotorCurve;
use crate::component::motor::induction::Induction;
use crate::component::motor::optimal_power::OptimalPower;
use crate::component::motor::rating_plate::RatingPlate;
use crate::component::motor::torque_limit::TorqueLimit;

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
    /// Power that a drag or a damper turns to heat, W, over its relative speed, rad/s.
    LossHeat {
        /// Torque against the motion at any speed, N*m.
        constant: f64,
        /// Torque over the speed, N*m*s/rad.
        coefficient: f64,
        /// Speed of the damper's largest torque, rad/s; infinite for a straight line.
        peak_at: f64,
    },
    /// Energy of a magnet's field over the phase, J, zero at the stable point.
    MagnetEnergy(MagnetLaw),
    /// Induction motor by Kloss's formula; the input is the body's speed, rad/s.
    Induction(Induction),
    /// Cage motor by its rating plate; the input is the body's speed, rad/s.
    RatingPlate(RatingPlate),
    /// Motor by points; the input is the body's speed, rad/s.
    MotorCurve(MotorCurve),
    /// Induction motor by its circuit; the input is the body's speed, rad/s, the parameter says
    /// whether it is connected; pieces 0 (open) and 1 (closed).
    Circuit(Circuit),
    /// The second parameter while the first is 0.5 or more, else 0: a voltage behind a contactor.
    Contactor,
    /// Generator on its optimal-power curve; the input is the body's speed, rad/s.
    OptimalPower(OptimalPower),
    /// Load by a power of the speed; the input is the body's speed, rad/s.
    PowerLaw(PowerLaw),
    /// Load by points; the input is the body's speed, rad/s.
    LoadCurve(LoadCurve),
    /// Wind or water rotor; the input is the body's speed, the parameters are flow (m/s) and pitch (rad).
    AxialRotor(AxialRotor),
    /// Load by the body's angle; the input is that angle, rad.
    Periodic(Periodic),
    /// Ship's propeller; the input is the body's speed, the parameter is the speed of advance (m/s).
    Propeller(Propeller),
    /// Torque of a shaft by points beyond that of its line at no twist; the input is the twist, rad.
    Elastic(ElasticCurve),
    /// `x` clamped to the limits; pieces 0 (at the lower), 1 (`x` itself), 2 (at the upper).
    Saturation {
        /// Lower and upper limit, in the input's unit.
        limits: [f64; 2],
    },
    /// `x` between limits that are laws of their own; pieces 0 (at the lower), 1 (`x`), 2 (at the upper).
    Between {
        /// The largest limits; where it stands at one its value is 0 and the limit's law speaks.
        limits: [f64; 2],
    },
    /// `x` times the factor of a gain that falls with the pitch, the first parameter, rad.
    Scheduled {
        /// Pitch at which the factor is half, rad.
        halves_at: f64,
    },
    /// The same and the second parameter added, clamped; pieces as for a saturation.
    PitchCommand {
        /// Lowest and highest angle, rad.
        limits: [f64; 2],
        /// As in [`Law::Scheduled`].
        halves_at: f64,
    },
    /// Torque limit of a drive; the input is the body's speed, rad/s.
    TorqueLimit(TorqueLimit),
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
            Self::LossHeat { constant, coefficient, peak_at } => {
                let share = x / peak_at;
                constant * x.abs() + coefficient * x * x / (1.0 + share * share)
            }
            Self::MagnetEnergy(magnet) => magnet.energy(x),
            Self::Induction(motor) => motor.value(x),
            Self::RatingPlate(motor) => motor.value(x, piece),
            Self::MotorCurve(motor) => motor.value(x, piece),
            Self::Circuit(_) if piece == 0 => 0.0,
            Self::Circuit(motor) => motor.torque(x),
            Self::Contactor => {
                if piece == 0 {
                    0.0
                } else {
                    p[1]
                }
            }
            Self::OptimalPower(generator) => generator.value(x, piece),
            Self::PowerLaw(load) => load.value(x, piece),
            Self::LoadCurve(load) => load.value(x, piece),
            Self::AxialRotor(rotor) => rotor.value(x, p, piece),
            Self::Periodic(load) => load.value(x),
            Self::Propeller(propeller) => propeller.value(x, p, piece),
            Self::Elastic(shaft) => shaft.beyond(x, piece),
            Self::Saturation { limits } => match piece {
                0 => limits[0],
                1 => x,
                _ => limits[1],
            },
            Self::Between { .. } => {
                if piece == 1 {
                    x
                } else {
                    0.0
                }
            }
            Self::TorqueLimit(limit) => limit.value(x, piece),
            Self::Scheduled { halves_at } => x * schedule(p[0], *halves_at).0,
            Self::PitchCommand { limits, halves_at } => match piece {
                0 => limits[0],
                1 => x * schedule(p[0], *halves_at).0 + p[1],
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
            Self::LossHeat { constant, coefficient, peak_at } => {
                let square = 1.0 + (x / peak_at) * (x / peak_at);
                let dry = if x == 0.0 { 0.0 } else { constant * x.signum() };
                dry + 2.0 * coefficient * x / (square * square)
            }
            Self::MagnetEnergy(magnet) => magnet.value(x),
            Self::Induction(motor) => motor.slope(x),
            Self::RatingPlate(motor) => motor.slope(x, piece),
            Self::MotorCurve(motor) => motor.slope(piece),
            Self::Circuit(_) if piece == 0 => 0.0,
            Self::Circuit(motor) => motor.slope(x),
            Self::Contactor => 0.0,
            Self::OptimalPower(generator) => generator.slope(x, piece),
            Self::PowerLaw(load) => load.slope(x, piece),
            Self::LoadCurve(load) => load.slope(piece),
            Self::AxialRotor(rotor) => rotor.slope(x, p, piece),
            Self::Periodic(load) => load.slope(x),
            Self::Propeller(propeller) => propeller.slope(x, p, piece),
            Self::Elastic(shaft) => shaft.beyond_slope(piece),
            Self::Saturation { .. } | Self::Between { .. } => f64::from(u8::from(piece == 1)),
            Self::TorqueLimit(limit) => limit.slope(x, piece),
            Self::PitchCommand { .. } if piece != 1 => 0.0,
            Self::Scheduled { halves_at } | Self::PitchCommand { halves_at, .. } => {
                schedule(p[0], *halves_at).0
            }
        }
    }

    /// The derivatives of [`Law::value`] with respect to the parameters that may follow the state.
    pub fn parameter_slopes(&self, x: f64, p: [f64; 2], piece: usize) -> [f64; 2] {
        match self {
            Self::AxialRotor(rotor) => [0.0, rotor.pitch_slope(x, p, piece)],
            Self::Scheduled { halves_at } => [x * schedule(p[0], *halves_at).1, 0.0],
            Self::PitchCommand { halves_at, .. } if piece == 1 => {
                [x * schedule(p[0], *halves_at).1, 1.0]
            }
            _ => [0.0; 2],
        }
    }

    /// What is compared with the boundaries: the input itself, or a figure that signals move too.
    #[inline]
    pub fn axis(&self, x: f64, p: [f64; 2]) -> f64 {
        match self {
            Self::AxialRotor(rotor) => rotor.tip_speed_ratio(x, p[0]),
            Self::Propeller(propeller) => propeller.advance_ratio(x, p[0]),
            Self::Circuit(_) | Self::Contactor => p[0],
            Self::PitchCommand { halves_at, .. } => x * schedule(p[0], *halves_at).0 + p[1],
            _ => x,
        }
    }

    /// True when the piece hangs on parameters, not on the input alone.
    #[inline]
    pub fn piece_follows_signals(&self) -> bool {
        matches!(
            self,
            Self::AxialRotor(_)
                | Self::Propeller(_)
                | Self::Circuit(_)
                | Self::Contactor
                | Self::PitchCommand { .. }
        )
    }

    /// The piece at an input and parameters.
    #[inline]
    pub fn piece(&self, x: f64, p: [f64; 2]) -> usize {
        self.piece_at(self.axis(x, p))
    }

    /// Periods a turn of a law over an angle, the highest where there are several.
    pub fn turn_order(&self) -> Option<f64> {
        match self {
            Self::Cogging { order, .. } => Some(*order),
            Self::Periodic(load) => Some(f64::from(load.highest_order())),
            _ => None,
        }
    }

    /// Places on the law's axis at which the formula changes, rising; piece `k` lies between entries `k-1` and `k`.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        match self {
            Self::Unit
            | Self::Magnet(_)
            | Self::FadingDamper { .. }
            | Self::LossHeat { .. }
            | Self::MagnetEnergy(_)
            | Self::Cogging { .. }
            | Self::Induction(_)
            | Self::Scheduled { .. }
            | Self::Periodic(_) => &[],
            Self::AxialRotor(rotor) => rotor.boundaries(),
            Self::RatingPlate(motor) => motor.boundaries(),
            Self::MotorCurve(motor) => motor.boundaries(),
            Self::Circuit(_) | Self::Contactor => &CONNECTED,
            Self::OptimalPower(generator) => generator.boundaries(),
            Self::PowerLaw(load) => load.boundaries(),
            Self::LoadCurve(load) => load.boundaries(),
            Self::Propeller(propeller) => propeller.boundaries(),
            Self::Elastic(shaft) => shaft.boundaries(),
            Self::Saturation { limits }
            | Self::Between { limits }
            | Self::PitchCommand { limits, .. } => limits,
            Self::TorqueLimit(limit) => limit.boundaries(),
        }
    }

    /// The piece that holds a place on the law's axis; on a boundary the upper one.
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
            Self::Elastic(shaft) => Some(shaft.range()),
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
            Self::Elastic(_) => {
                "the twist leaves the points of this stiffness; its last line goes on there"
            }
            _ => "",
        }
    }
}

#[cfg(test)]
mod tests;
