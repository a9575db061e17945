//! Wind or water rotor: the power coefficient over the tip speed ratio.
//!
//! ```text
//! lambda = speed*radius/flow                                          tip speed ratio
//! torque = 1/2 density pi radius^3 flow^2 Cp(lambda, pitch)/lambda    N*m
//! ```
//!
//! Below `lambda = 1e-6` (standstill, reverse) the value there holds; no flow gives no torque.
//! At high tip speed ratio, or with much pitch, the default Cp is negative and the rotor brakes;
//! at a feathered pitch by more than a real one does. A constant Cp means constant power: its
//! torque grows without bound towards standstill.

use super::power_coefficient::PowerCoefficient;
use std::f64::consts::PI;

/// The tip speed ratio below which the torque holds.
pub const SMALLEST_TIP_SPEED_RATIO: f64 = 1e-6;

/// Beyond this a tip speed ratio says no more.
const LARGEST_TIP_SPEED_RATIO: f64 = 1e12;

/// An axial-flow rotor.
#[derive(Clone, Debug, PartialEq)]
pub struct AxialRotor {
    radius: f64,
    /// 1/2 density pi radius^3.
    scale: f64,
    coefficient: PowerCoefficient,
}

impl AxialRotor {
    /// From the radius (m) and the density of the fluid (kg/m3), both above zero.
    pub fn new(radius: f64, density: f64, coefficient: PowerCoefficient) -> Self {
        Self { radius, scale: 0.5 * density * PI * radius * radius * radius, coefficient }
    }

    /// Torque at a speed in rad/s with the parameters flow (m/s) and pitch (rad).
    #[inline]
    pub fn value(&self, speed: f64, [flow, pitch]: [f64; 2], piece: usize) -> f64 {
        if flow <= 0.0 {
            return 0.0;
        }
        let ratio = (speed * self.radius / flow).max(SMALLEST_TIP_SPEED_RATIO);
        self.scale * flow * flow * self.coefficient.at(ratio, pitch, piece).0 / ratio
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64, [flow, pitch]: [f64; 2], piece: usize) -> f64 {
        if flow <= 0.0 {
            return 0.0;
        }
        let ratio = speed * self.radius / flow;
        if ratio < SMALLEST_TIP_SPEED_RATIO {
            return 0.0;
        }
        let (coefficient, slope) = self.coefficient.at(ratio, pitch, piece);
        self.scale * flow * self.radius * (slope - coefficient / ratio) / ratio
    }

    /// Derivative of the torque with respect to the pitch, N*m/rad.
    pub fn pitch_slope(&self, speed: f64, [flow, pitch]: [f64; 2], piece: usize) -> f64 {
        if flow <= 0.0 {
            return 0.0;
        }
        let ratio = (speed * self.radius / flow).max(SMALLEST_TIP_SPEED_RATIO);
        self.scale * flow * flow * self.coefficient.pitch_slope(ratio, pitch, piece) / ratio
    }

    /// Tip speed ratio at a speed in rad/s; very large without flow, where nothing hangs on it.
    #[inline]
    pub fn tip_speed_ratio(&self, speed: f64, flow: f64) -> f64 {
        if flow <= 0.0 {
            return LARGEST_TIP_SPEED_RATIO;
        }
        (speed * self.radius / flow).clamp(-LARGEST_TIP_SPEED_RATIO, LARGEST_TIP_SPEED_RATIO)
    }

    /// Tip speed ratios at which the line of the power coefficient changes.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        self.coefficient.boundaries()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::component::load::power_coefficient::DEFAULT;

    fn rotor() -> AxialRotor {
        AxialRotor::new(40.0, 1.225, PowerCoefficient::Formula(DEFAULT))
    }

    fn power_coefficient(ratio: f64, pitch: f64) -> f64 {
        PowerCoefficient::Formula(DEFAULT).at(ratio, pitch, 0).0
    }

    // Slootweg, Polinder and Kling (2003), set of constants of the file's head: best point in
    // closed form 1/li = 13.2/151 + 1/18.4, and values computed from the formula by hand.
    #[test]
    fn the_default_coefficient_has_the_published_values() {
        let best: f64 = 1.0 / (13.2 / 151.0 + 1.0 / 18.4 + 0.003);
        assert!((best - 6.9077449087).abs() < 1e-9);
        let degree = PI / 180.0;
        for (ratio, pitch, expected) in [
            (best, 0.0, 0.441199381337),
            (8.0, 0.0, 0.403882908061),
            (6.0, 5.0, 0.304422119869),
            (4.0, 0.0, 0.186854807643),
            (10.0, 10.0, -0.431980690429),
        ] {
            let found = power_coefficient(ratio, pitch * degree);
            assert!((found - expected).abs() < 1e-10, "{ratio} {pitch}: {found}");
        }
        assert!(power_coefficient(best, 0.0) < 16.0 / 27.0, "below the limit of Betz");
    }

    // P_wind = 1/2 density pi R^2 flow^3: 5320098.6633 W for a diameter of 80 m and 12 m/s.
    #[test]
    fn torque_times_speed_is_the_coefficient_times_the_power_of_the_wind() {
        let rotor = rotor();
        let speed = 7.0 * 12.0 / 40.0;
        let wind = 5320098.6633;
        let power = rotor.value(speed, [12.0, 0.0], 0) * speed;
        assert!((power / wind - power_coefficient(7.0, 0.0)).abs() < 1e-10);
        assert!((rotor.tip_speed_ratio(speed, 12.0) - 7.0).abs() < 1e-12);
    }

    #[test]
    fn the_torque_is_finite_at_rest_in_reverse_without_flow_and_at_any_pitch() {
        let rotor = rotor();
        for pitch in [-0.2, 0.0, 1e-9, 0.1, 0.5, 1.5] {
            for speed in [-3.0, 0.0, 1e-12, 1e-3, 0.05, 0.3, 30.0] {
                for flow in [-5.0, 0.0, 1e-9, 3.0, 50.0] {
                    let p = [flow, pitch];
                    assert!(rotor.value(speed, p, 0).is_finite(), "{speed} {p:?}");
                    assert!(rotor.slope(speed, p, 0).is_finite(), "{speed} {p:?}");
                }
            }
        }
        assert!(rotor.value(2.0, [0.0, 0.0], 0).abs() < 1e-300);
        assert_eq!(
            rotor.value(-2.0, [9.0, 0.0], 0).to_bits(),
            rotor.value(0.0, [9.0, 0.0], 0).to_bits(),
            "in reverse as at rest"
        );
    }
}
