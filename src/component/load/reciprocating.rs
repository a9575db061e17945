//! Inertia torque of a reciprocating mass on its crank.
//!
//! ```text
//! s  = r (1 - cos a) + r/l (1 - sqrt(1 - l^2 sin^2 a))      way of the piston from its dead centre
//! s' = ds/da,  s'' = d2s/da2,  l = r/L                      r crank radius, L rod length, a crank angle
//! torque = -m s' s'' w^2                                    N*m on the crank; m kg, w rad/s
//! ```
//!
//! Exact kinematics of crank and rod; the mass m takes in the reciprocating share of the rod. The
//! torque is that of a crank at the speed of the moment: m s'^2 is an inertia that changes with
//! the angle, and its part that follows the crank's acceleration, m s'^2 dw/dt, is left out. Its
//! mean, about m r^2/2, belongs into the body's inertia (common practice; harmonic tables as in Den
//! Hartog, Mechanical Vibrations, from memory). Where it is no small part of the train's inertia
//! the speed ripples within a turn and the true torque differs: the program then warns.

/// A reciprocating mass on a crank.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reciprocating {
    /// Mass times crank radius squared, kg*m2.
    size: f64,
    /// Crank radius over rod length.
    share: f64,
    /// Crank angle at the body's angle 0, rad, from the dead centre far from the crank.
    phase: f64,
}

impl Reciprocating {
    /// From crank radius, rod length, m, mass, kg, and the crank's angle at the start, rad.
    pub fn new(crank_radius: f64, rod_length: f64, mass: f64, phase: f64) -> Self {
        let size = mass * crank_radius * crank_radius;
        Self { size, share: crank_radius / rod_length, phase }
    }

    /// Derivatives of the way over the crank radius, first to third.
    fn ways(&self, angle: f64) -> [f64; 3] {
        let (sin, cos) = (angle + self.phase).sin_cos();
        let share = self.share;
        // g = sqrt(1 - l^2 sin^2); d(-g/l)/da = l sin cos/g, and so on.
        let square = 1.0 - share * share * sin * sin;
        let root = square.sqrt();
        let (twice_sin, twice_cos) = (2.0 * sin * cos, cos * cos - sin * sin);
        let u = 0.5 * share * twice_sin;
        let (u1, u2) = (share * twice_cos, -2.0 * share * twice_sin);
        // u/g with g' = -l^2 sin cos/g = -l u/g.
        let root1 = -share * u / root;
        let root2 = -share * (u1 / root - u * root1 / square);
        let first = u / root;
        let second = (u1 - first * root1) / root;
        let third = (u2 - 2.0 * second * root1 - first * root2) / root;
        [sin + first, cos + second, -sin + third]
    }

    /// Torque at an angle in rad and a speed in rad/s.
    #[inline]
    pub fn value(&self, angle: f64, speed: f64) -> f64 {
        let [first, second, _] = self.ways(angle);
        -self.size * first * second * speed * speed
    }

    /// Derivatives with respect to angle and speed.
    pub fn slopes(&self, angle: f64, speed: f64) -> [f64; 2] {
        let [first, second, third] = self.ways(angle);
        [
            -self.size * (second * second + first * third) * speed * speed,
            -2.0 * self.size * first * second * speed,
        ]
    }

    /// Mean over a turn of the inertia on the crank, kg*m2.
    pub fn mean_inertia(&self) -> f64 {
        let count = 64;
        let sum: f64 = (0..count)
            .map(|place| std::f64::consts::TAU * f64::from(place) / f64::from(count))
            .map(|angle| self.ways(angle)[0].powi(2))
            .sum();
        self.size * sum / f64::from(count)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::TAU;

    // Sine terms of the exact torque over m r^2 w^2 for l = 1/4, by numerical quadrature apart from
    // this program; the short series l/4, -1/2, -3 l/4, -l^2/4 of Den Hartog (from memory) is within
    // 3 % of them.
    #[test]
    fn harmonics_are_those_of_the_exact_crank() {
        let crank = Reciprocating::new(0.1, 0.4, 3.0, 0.0);
        let size = 3.0 * 0.1 * 0.1 * 50.0 * 50.0;
        let exact =
            [0.063_506_260_576_7, -0.500_130_140_561, -0.192_055_573_42, -0.016_129_031_165_4];
        let short = [0.0625, -0.5, -0.1875, -0.015_625];
        for (order, (exact, short)) in (1..).zip(exact.into_iter().zip(short)) {
            let count = 256;
            let sum: f64 = (0..count)
                .map(|place| TAU * f64::from(place) / f64::from(count))
                .map(|angle| crank.value(angle, 50.0) * (f64::from(order) * angle).sin())
                .sum();
            let found = 2.0 * sum / f64::from(count) / size;
            assert!((found - exact).abs() < 1e-10, "order {order}: {found}");
            assert!((found / short - 1.0).abs() < 0.033, "order {order}: {found}");
        }
    }

    // Closed form: the mean of (sin a + l/2 sin 2a)^2 is (1 + l^2/4)/2 to second order in l.
    #[test]
    fn the_mean_inertia_is_half_the_mass_on_the_crank() {
        let mean = Reciprocating::new(0.1, 0.4, 3.0, 1.0).mean_inertia();
        let series = 0.5 * 0.03 * (1.0 + 0.25 * 0.25 / 4.0);
        assert!((mean / series - 1.0).abs() < 1e-3, "{mean} {series}");
    }

    #[test]
    fn slopes_are_the_differences_of_the_values() {
        let crank = Reciprocating::new(0.1, 0.3, 2.0, 0.4);
        for place in 0..24 {
            let (angle, speed, step) = (0.3 * f64::from(place), 40.0, 1e-5);
            let by_angle = (crank.value(angle + step, speed) - crank.value(angle - step, speed))
                / (2.0 * step);
            let by_speed = (crank.value(angle, speed + step) - crank.value(angle, speed - step))
                / (2.0 * step);
            let found = crank.slopes(angle, speed);
            assert!((found[0] - by_angle).abs() < 1e-5, "{angle}: {found:?} {by_angle}");
            assert!((found[1] - by_speed).abs() < 1e-6, "{angle}: {found:?} {by_speed}");
        }
    }
}
