//! Load by points of speed and torque, against the motion.
//!
//! Straight lines between the points, read at |speed|; the end values hold outside. A torque
//! other than zero at standstill is dry friction there: it sticks and slips, and
//! [`LoadCurve::sliding`] is what acts while it slides.

use crate::component::polyline::Polyline;

/// A load's torque over its speed by points.
#[derive(Clone, Debug, PartialEq)]
pub struct LoadCurve {
    /// Over |speed|, positive against the motion.
    magnitude: Polyline,
    /// Over the signed speed, the torque on the body.
    torque: Polyline,
}

impl LoadCurve {
    /// From rows of rad/s and N*m, speeds rising from 0 or above.
    pub fn new(points: &[[f64; 2]]) -> Self {
        Self { magnitude: Polyline::new(points), torque: Polyline::against(points) }
    }

    /// Torque on the body at a speed in rad/s on the line of `piece`.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        self.torque.value(speed, piece)
    }

    /// Slope of the line of `piece`.
    #[inline]
    pub fn slope(&self, piece: usize) -> f64 {
        self.torque.slope(piece)
    }

    /// Speeds at which the line changes, rad/s, rising; standstill among them when it sticks there.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        self.torque.boundaries()
    }

    /// Torque against the motion at a magnitude of the speed, N*m.
    pub fn sliding(&self, speed_abs: f64) -> f64 {
        self.magnitude.at(speed_abs)
    }

    /// Torque at standstill, N*m: above zero the load sticks.
    pub fn breakaway(&self) -> f64 {
        self.magnitude.at(0.0)
    }

    /// From minus to plus the last speed given.
    pub fn warn_range(&self) -> Option<[f64; 2]> {
        let last = *self.magnitude.boundaries().last()?;
        Some([-last, last])
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(load: &LoadCurve, speed: f64) -> f64 {
        load.value(speed, load.boundaries().partition_point(|bound| *bound <= speed))
    }

    // Closed form: straight lines, read at |speed| and against the motion.
    #[test]
    fn a_curve_from_zero_is_smooth_at_standstill() {
        let load = LoadCurve::new(&[[0.0, 0.0], [10.0, 20.0], [20.0, 30.0]]);
        assert_eq!(load.boundaries().len(), 4, "two speeds and their mirrors: {load:?}");
        for (speed, torque) in [(5.0, -10.0), (-5.0, 10.0), (15.0, -25.0), (-15.0, 25.0)] {
            assert!((at(&load, speed) - torque).abs() < 1e-12, "{speed}");
        }
        assert!((at(&load, -90.0) - 30.0).abs() < 1e-12);
        assert!((at(&load, 90.0) + 30.0).abs() < 1e-12);
        assert!(load.breakaway().abs() < 1e-300);
    }

    #[test]
    fn a_curve_with_a_torque_at_rest_jumps_there_and_says_what_it_takes_to_break_away() {
        for first in [0.0, 4.0] {
            let load = LoadCurve::new(&[[first, 50.0], [20.0, 30.0]]);
            assert!(load.boundaries().contains(&0.0));
            assert!((load.breakaway() - 50.0).abs() < 1e-12);
            assert!((at(&load, 0.0) + 50.0).abs() < 1e-12);
            assert!((at(&load, -1e-9) - 50.0).abs() < 1e-6);
            assert!((load.sliding(20.0) - 30.0).abs() < 1e-12);
            assert!((at(&load, -12.0) - load.sliding(12.0)).abs() < 1e-12);
            assert!((at(&load, 12.0) + load.sliding(12.0)).abs() < 1e-12);
        }
    }
}
