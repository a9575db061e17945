//! Induction motor by Kloss's formula.
//!
//! ```text
//! s      = 1 - speed/synchronous_speed                               slip
//! torque = sign(synchronous_speed)*2*Tb/(s/sb + sb/s)                N*m
//!        = sign(synchronous_speed)*2*Tb*s*sb/(s^2 + sb^2)            the same, defined at s = 0
//! Tb breakdown torque, N*m; sb breakdown slip
//! ```
//!
//! Kloss, Drehmoment und Schlupf des Drehstrommotors, Archiv fuer Elektrotechnik 5 (1916)
//! (from memory). Valid near synchronous speed; at standstill a cage motor gives two to
//! five times the torque of this formula because its bars are not thin.

/// Kloss's formula at full voltage.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Induction {
    synchronous_speed: f64,
    per_synchronous_speed: f64,
    twice_breakdown: f64,
    breakdown_slip: f64,
}

impl Induction {
    /// From the synchronous speed (rad/s, signed, not zero), breakdown torque (N*m) and slip.
    pub fn new(synchronous_speed: f64, breakdown_torque: f64, breakdown_slip: f64) -> Self {
        Self {
            synchronous_speed,
            per_synchronous_speed: 1.0 / synchronous_speed,
            twice_breakdown: 2.0 * breakdown_torque * synchronous_speed.signum(),
            breakdown_slip,
        }
    }

    /// Torque at a speed in rad/s.
    #[inline]
    pub fn value(&self, speed: f64) -> f64 {
        let slip = 1.0 - speed * self.per_synchronous_speed;
        let square = slip * slip + self.breakdown_slip * self.breakdown_slip;
        self.twice_breakdown * slip * self.breakdown_slip / square
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64) -> f64 {
        let slip = 1.0 - speed * self.per_synchronous_speed;
        let (slip_square, breakdown_square) =
            (slip * slip, self.breakdown_slip * self.breakdown_slip);
        let square = slip_square + breakdown_square;
        -self.per_synchronous_speed
            * self.twice_breakdown
            * self.breakdown_slip
            * (breakdown_square - slip_square)
            / (square * square)
    }

    /// The speeds at which the slip is below three times the breakdown slip.
    pub fn warn_range(&self) -> [f64; 2] {
        let limit = self.synchronous_speed * (1.0 - 3.0 * self.breakdown_slip);
        if self.synchronous_speed > 0.0 {
            [limit, f64::INFINITY]
        } else {
            [f64::NEG_INFINITY, limit]
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::PI;

    // Closed form: the printed formula 2 Tb/(s/sb + sb/s), itself undefined at s = 0.
    #[test]
    fn the_torque_is_that_of_the_formula_in_its_usual_form() {
        let synchronous = 50.0 * PI;
        let motor = Induction::new(synchronous, 450.0, 0.12);
        for slip in [-1.5, -0.12, -0.01, 0.02, 0.12, 0.5, 1.0, 1.9] {
            let expected = 900.0 / (slip / 0.12 + 0.12 / slip);
            let found = motor.value(synchronous * (1.0 - slip));
            assert!((found - expected).abs() < 1e-10, "slip {slip}: {found} {expected}");
        }
        assert!(motor.value(synchronous).abs() < 1e-12);
        assert!((motor.value(synchronous * 0.88) - 450.0).abs() < 1e-10);
    }

    // Kloss's formula from a rating plate (closed form, sk = sN (m + sqrt(m^2 - 1))): with
    // m = 2.5 and sN = 2 % the breakdown slip is 0.0958257569496, and the starting torque
    // 0.474769180807 of the rated one.
    #[test]
    fn the_starting_torque_from_plate_values_is_understated_as_the_handbooks_say() {
        let breakdown_slip = 0.02 * (2.5 + 5.25_f64.sqrt());
        assert!((breakdown_slip - 0.0958257569496).abs() < 1e-12);
        let motor = Induction::new(100.0, 2.5, breakdown_slip);
        assert!((motor.value(0.0) - 0.474769180807).abs() < 1e-11);
        assert!((motor.value(98.0) - 1.0).abs() < 1e-12);
    }

    #[test]
    fn a_negative_synchronous_speed_mirrors_the_curve() {
        let forward = Induction::new(100.0, 30.0, 0.2);
        let backward = Induction::new(-100.0, 30.0, 0.2);
        for speed in [-150.0, -20.0, 0.0, 70.0, 130.0] {
            assert!((forward.value(speed) + backward.value(-speed)).abs() < 1e-12);
        }
        assert!(backward.value(0.0) < 0.0);
        assert!((backward.warn_range()[1] + 40.0).abs() < 1e-12);
    }
}
