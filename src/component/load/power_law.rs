//! Load by a power of the speed, against the motion.
//!
//! ```text
//! torque = -sign(w)*T*|w/speed|^exponent        T torque at `speed`, N*m; exponent > 0
//! ```
//!
//! Exponent 2 is the affinity law of pumps, fans and propellers (torque with the square of the
//! speed, power with its cube), 1 a viscous load, 0 would be a hoist (use friction or a torque).

/// A load with a power of the speed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PowerLaw {
    torque: f64,
    per_speed: f64,
    exponent: Exponent,
}

/// `powf` costs as much as a sine, so the exponents of practice have forms of their own.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Exponent {
    One,
    Two,
    Three,
    Odd(i32),
    Even(i32),
    Real(f64),
}

/// Share of the reference speed below which the slope of a steep law is taken as it is there.
const STEEP: f64 = 1e-6;

impl PowerLaw {
    /// From the torque (N*m) at a speed (rad/s, not zero) and the exponent, above zero.
    pub fn new(torque: f64, speed: f64, exponent: f64) -> Self {
        let whole = exponent.fract() == 0.0 && (1.0..=64.0).contains(&exponent);
        let exponent = match whole.then_some(exponent as i32) {
            Some(1) => Exponent::One,
            Some(2) => Exponent::Two,
            Some(3) => Exponent::Three,
            Some(order) if order % 2 == 1 => Exponent::Odd(order),
            Some(order) => Exponent::Even(order),
            None => Exponent::Real(exponent),
        };
        Self { torque, per_speed: 1.0 / speed.abs(), exponent }
    }

    /// Torque at a speed in rad/s by the formula of `piece` (even exponents: 0 backward, 1 forward).
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        let share = speed * self.per_speed;
        match self.exponent {
            Exponent::One => -self.torque * share,
            Exponent::Two => -sense(piece) * self.torque * share * share,
            Exponent::Three => -self.torque * share * share * share,
            Exponent::Odd(order) => -self.torque * share.powi(order),
            Exponent::Even(order) => -sense(piece) * self.torque * share.powi(order),
            Exponent::Real(exponent) => -self.torque * share.abs().powf(exponent).copysign(share),
        }
    }

    /// Derivative of the torque with respect to the speed; finite at rest also for exponents below 1.
    #[inline]
    pub fn slope(&self, speed: f64, piece: usize) -> f64 {
        let share = speed * self.per_speed;
        let scale = -self.torque * self.per_speed;
        match self.exponent {
            Exponent::One => scale,
            Exponent::Two => scale * sense(piece) * 2.0 * share,
            Exponent::Three => scale * 3.0 * share * share,
            Exponent::Odd(order) => scale * f64::from(order) * share.powi(order - 1),
            Exponent::Even(order) => {
                scale * sense(piece) * f64::from(order) * share.powi(order - 1)
            }
            Exponent::Real(exponent) => {
                let magnitude = if exponent < 1.0 { share.abs().max(STEEP) } else { share.abs() };
                scale * exponent * magnitude.powf(exponent - 1.0)
            }
        }
    }

    /// Standstill, unless the law is smooth there (odd whole exponents).
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        match self.exponent {
            Exponent::One | Exponent::Three | Exponent::Odd(_) => &[],
            Exponent::Two | Exponent::Even(_) | Exponent::Real(_) => &[0.0],
        }
    }
}

/// Sense of the motion in a piece: backward in the first, forward in the second.
#[inline]
fn sense(piece: usize) -> f64 {
    if piece == 0 { -1.0 } else { 1.0 }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Affinity laws of pumps and fans (handbook practice): at 80 % speed the torque is 0.64 and
    // the power 0.512 of that at full speed.
    #[test]
    fn a_pump_follows_the_affinity_laws() {
        let pump = PowerLaw::new(700.0, 28.0, 2.0);
        let torque = -pump.value(0.8 * 28.0, 1);
        assert!((torque / 700.0 - 0.64).abs() < 1e-14);
        assert!((torque * 0.8 / 700.0 - 0.512).abs() < 1e-14);
        assert!((pump.value(-28.0, 0) - 700.0).abs() < 1e-11);
    }

    #[test]
    fn special_exponents_agree_with_the_general_power() {
        for exponent in [1.0, 2.0, 3.0, 4.0, 5.0, 1.7, 0.5] {
            let load = PowerLaw::new(30.0, -10.0, exponent);
            for speed in [-25.0, -3.0, 0.4, 17.0_f64] {
                let piece = load.boundaries().partition_point(|bound| *bound <= speed);
                let expected = -30.0 * (speed.abs() / 10.0).powf(exponent) * speed.signum();
                let found = load.value(speed, piece);
                assert!((found - expected).abs() < 1e-12 * expected.abs(), "{exponent} {speed}");
            }
        }
    }

    #[test]
    fn an_even_law_goes_on_smoothly_beyond_standstill() {
        let load = PowerLaw::new(1.0, 1.0, 2.0);
        assert!((load.value(-1e-3, 1) - load.value(1e-3, 1)).abs() < 1e-20);
        assert!(load.slope(0.0, 1).abs() < 1e-20);
        assert!(PowerLaw::new(1.0, 1.0, 0.5).slope(0.0, 1).is_finite());
    }
}
