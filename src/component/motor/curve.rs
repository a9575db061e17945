//! Motor by points of speed and torque.
//!
//! Straight lines between the points, read at the signed speed; the end values hold outside.

use crate::component::polyline::Polyline;

/// A motor's torque over its speed by points, at full voltage.
#[derive(Clone, Debug, PartialEq)]
pub struct MotorCurve {
    curve: Polyline,
}

impl MotorCurve {
    /// From rows of rad/s and N*m, speeds rising.
    pub fn new(points: &[[f64; 2]]) -> Self {
        Self { curve: Polyline::new(points) }
    }

    /// Torque at a speed in rad/s on the line of `piece`.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        self.curve.value(speed, piece)
    }

    /// Slope of the line of `piece`.
    #[inline]
    pub fn slope(&self, piece: usize) -> f64 {
        self.curve.slope(piece)
    }

    /// The points' speeds, rad/s.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        self.curve.boundaries()
    }

    /// The first and the last speed given.
    pub fn warn_range(&self) -> Option<[f64; 2]> {
        let speeds = self.curve.boundaries();
        Some([*speeds.first()?, *speeds.last()?])
    }
}
