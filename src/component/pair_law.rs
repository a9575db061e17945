//! Laws of two inputs: two speeds, or an angle and a speed.
//!
//! They have no pieces: value and slopes go on without a jump, so that no guard has to watch two
//! inputs at once. A law with corners belongs to [`crate::component::law::Law`].

use crate::component::fluid_coupling::FluidLaw;
use crate::component::load::reciprocating::Reciprocating;

/// A law of two inputs.
#[derive(Clone, Debug, PartialEq)]
pub enum PairLaw {
    /// Torque on the pump wheel of a fluid coupling; inputs: its speed against the turbine wheel
    /// and the turbine wheel's speed, rad/s.
    Fluid(FluidLaw),
    /// Inertia torque of a reciprocating mass; inputs: the crank's angle, rad, and its speed, rad/s.
    Reciprocating(Reciprocating),
}

impl PairLaw {
    /// Value at the two inputs.
    #[inline]
    pub fn value(&self, x: f64, y: f64) -> f64 {
        match self {
            Self::Fluid(law) => law.value(x, y),
            Self::Reciprocating(law) => law.value(x, y),
        }
    }

    /// Derivatives with respect to the two inputs.
    pub fn slopes(&self, x: f64, y: f64) -> [f64; 2] {
        match self {
            Self::Fluid(law) => law.slopes(x, y),
            Self::Reciprocating(law) => law.slopes(x, y),
        }
    }

    /// Periods a turn up to which the law changes with the angle that is its first input.
    pub fn turn_order(&self) -> Option<f64> {
        match self {
            Self::Fluid(_) => None,
            Self::Reciprocating(_) => Some(4.0),
        }
    }
}
