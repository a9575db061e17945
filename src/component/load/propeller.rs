//! Ship's propeller in open water: torque coefficient over advance ratio.
//!
//! ```text
//! n      = speed/(2 pi)                        turns a second
//! J      = advance/(n*diameter)                advance ratio
//! torque = -density*n*|n|*diameter^5*KQ(J)     N*m on the body, against the motion
//! ```
//!
//! `KQ` is constant, or straight lines through points, or the polynomial of a propeller series;
//! outside its data its end values hold. The open-water diagram is defined for ahead motion;
//! while the shaft turns astern its value at J = 0 holds, however the water moves, which is a
//! rough guess. Towards standstill the torque falls with the square of the speed.
//!
//! Definitions: International Towing Tank Conference, open water test (common practice).

use std::f64::consts::TAU;

/// Beyond this an advance ratio says no more.
const LARGEST_RATIO: f64 = 1e12;

/// One stretch of a torque coefficient: `c0 + c1 (J - from) + c2 (J - from)^2 + c3 (J - from)^3`.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Stretch {
    from: f64,
    coefficients: [f64; 4],
}

impl Stretch {
    fn held(value: f64) -> Self {
        Self { from: 0.0, coefficients: [value, 0.0, 0.0, 0.0] }
    }

    /// Value and derivative.
    #[inline]
    fn at(&self, ratio: f64) -> (f64, f64) {
        let [c0, c1, c2, c3] = self.coefficients;
        if c1 == 0.0 && c2 == 0.0 && c3 == 0.0 {
            return (c0, 0.0);
        }
        let x = ratio - self.from;
        (c0 + x * (c1 + x * (c2 + x * c3)), c1 + x * (2.0 * c2 + 3.0 * x * c3))
    }
}

/// A torque coefficient over the advance ratio.
#[derive(Clone, Debug, PartialEq)]
pub struct TorqueCoefficient {
    bounds: Vec<f64>,
    stretches: Vec<Stretch>,
}

impl TorqueCoefficient {
    /// The same at every advance ratio.
    pub fn constant(value: f64) -> Self {
        Self { bounds: Vec::new(), stretches: vec![Stretch::held(value)] }
    }

    /// Straight lines through points of advance ratio and coefficient, ratios rising.
    pub fn points(points: &[[f64; 2]]) -> Self {
        let end = |point: Option<&[f64; 2]>| Stretch::held(point.map_or(0.0, |point| point[1]));
        let mut stretches = vec![end(points.first())];
        stretches.extend(points.windows(2).map(|pair| {
            let slope = (pair[1][1] - pair[0][1]) / (pair[1][0] - pair[0][0]);
            Stretch { from: pair[0][0], coefficients: [pair[0][1], slope, 0.0, 0.0] }
        }));
        if !points.is_empty() {
            stretches.push(end(points.last()));
        }
        Self { bounds: points.iter().map(|point| point[0]).collect(), stretches }
    }

    /// A cubic in J from 0 to where it vanishes (at the latest `last`), held outside.
    pub fn cubic(coefficients: [f64; 4], last: f64) -> Self {
        let cubic = Stretch { from: 0.0, coefficients };
        let steps = 400;
        let place = |step: i32| last * f64::from(step) / f64::from(steps);
        let below = (1..=steps).find(|step| cubic.at(place(*step)).0 <= 0.0);
        let end = below.map_or(last, |step| {
            let (mut low, mut high) = (place(step - 1), place(step));
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                if cubic.at(middle).0 > 0.0 { low = middle } else { high = middle }
            }
            low
        });
        let held = |ratio: f64| Stretch::held(cubic.at(ratio).0);
        Self { bounds: vec![0.0, end], stretches: vec![held(0.0), cubic, held(end)] }
    }

    /// Value at an advance ratio.
    pub fn at(&self, ratio: f64) -> f64 {
        self.stretch(ratio, self.bounds.partition_point(|bound| *bound <= ratio)).0
    }

    /// First and last advance ratio of its data.
    pub fn range(&self) -> Option<[f64; 2]> {
        Some([*self.bounds.first()?, *self.bounds.last()?])
    }

    #[inline]
    fn stretch(&self, ratio: f64, piece: usize) -> (f64, f64) {
        self.stretches.get(piece).map_or((0.0, 0.0), |stretch| stretch.at(ratio))
    }
}

/// The torque of a propeller on its shaft.
#[derive(Clone, Debug, PartialEq)]
pub struct Propeller {
    diameter: f64,
    /// density*diameter^5.
    scale: f64,
    coefficient: TorqueCoefficient,
    /// KQ while the shaft turns astern.
    astern: f64,
}

impl Propeller {
    /// From diameter (m), density of the water (kg/m3) and torque coefficient.
    pub fn new(diameter: f64, density: f64, coefficient: TorqueCoefficient) -> Self {
        let astern = coefficient.at(0.0);
        Self { diameter, scale: density * diameter.powi(5), coefficient, astern }
    }

    /// Advance ratio at a speed in rad/s and a speed of advance in m/s, by the magnitude of the
    /// shaft's speed: so it has no jump at standstill.
    #[inline]
    pub fn advance_ratio(&self, speed: f64, advance: f64) -> f64 {
        if advance == 0.0 {
            return 0.0;
        }
        (TAU * advance / (speed.abs() * self.diameter)).clamp(-LARGEST_RATIO, LARGEST_RATIO)
    }

    /// Coefficient, its derivative and the ratio it was read at.
    #[inline]
    fn read(&self, speed: f64, advance: f64, piece: usize) -> (f64, f64, f64) {
        if speed < 0.0 {
            return (self.astern, 0.0, 0.0);
        }
        let ratio = self.advance_ratio(speed, advance);
        let (coefficient, slope) = self.coefficient.stretch(ratio, piece);
        (coefficient, slope, ratio)
    }

    /// Torque at a speed in rad/s, with the speed of advance (m/s) as parameter.
    #[inline]
    pub fn value(&self, speed: f64, [advance, _]: [f64; 2], piece: usize) -> f64 {
        let turns = speed / TAU;
        -self.scale * turns * turns.abs() * self.read(speed, advance, piece).0
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64, [advance, _]: [f64; 2], piece: usize) -> f64 {
        let (coefficient, slope, ratio) = self.read(speed, advance, piece);
        -self.scale * (speed / TAU).abs() / TAU * (2.0 * coefficient - ratio * slope)
    }

    /// Advance ratios at which the line changes.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.coefficient.bounds
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Definition of the torque coefficient: KQ 0.03 in sea water of 1025 kg/m3 at 2 turns a second
    // and 4 m gives 0.03*1025*2^2*4^5 = 125952 N*m.
    #[test]
    fn the_torque_is_that_of_the_definition() {
        let propeller = Propeller::new(4.0, 1025.0, TorqueCoefficient::constant(0.03));
        assert!((propeller.value(2.0 * TAU, [5.0, 0.0], 0) + 125_952.0).abs() < 1e-8);
        assert!((propeller.value(-2.0 * TAU, [5.0, 0.0], 0) - 125_952.0).abs() < 1e-8);
        assert!(propeller.value(0.0, [5.0, 0.0], 0).abs() < 1e-300);
        assert!((propeller.advance_ratio(2.0 * TAU, 5.6) - 0.7).abs() < 1e-15);
    }

    #[test]
    fn points_are_joined_by_lines_and_held_outside() {
        let coefficient = TorqueCoefficient::points(&[[0.0, 0.07], [0.5, 0.05], [1.0, 0.01]]);
        for (ratio, value) in [(-3.0, 0.07), (0.0, 0.07), (0.25, 0.06), (0.75, 0.03), (4.0, 0.01)] {
            assert!((coefficient.at(ratio) - value).abs() < 1e-15, "{ratio}");
        }
        assert_eq!(coefficient.range(), Some([0.0, 1.0]));
    }

    #[test]
    fn the_slope_is_the_derivative_on_every_line() {
        let coefficient = TorqueCoefficient::points(&[[0.0, 0.07], [0.5, 0.05], [1.0, 0.01]]);
        let propeller = Propeller::new(3.0, 1000.0, coefficient);
        for advance in [-4.0, 0.0, 6.0] {
            for speed in [-20.0, -3.0, 0.7, 9.0, 15.0, 60.0_f64] {
                let ratio = propeller.advance_ratio(speed, advance);
                let piece = propeller.boundaries().partition_point(|bound| *bound <= ratio);
                let h = 1e-5;
                let p = [advance, 0.0];
                let difference = (propeller.value(speed + h, p, piece)
                    - propeller.value(speed - h, p, piece))
                    / (2.0 * h);
                let slope = propeller.slope(speed, p, piece);
                assert!(
                    (difference - slope).abs() < 1e-5 * slope.abs().max(1.0),
                    "{advance} {speed}"
                );
            }
        }
    }
}
