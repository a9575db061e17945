//! Pitch controller of an axial rotor: it turns the blades to hold a speed.
//!
//! ```text
//! e       = speed of the body - speed asked for, in the sense in which it is asked for
//! g       = 1/(1 + pitch/gain_halves_at)                      1 without it
//! dI/dt   = g*gain*e/integral_time, I kept within the angles
//! command = clamp(g*gain*e + I, lowest_angle, highest_angle)
//! lag*d pitch/dt = command - pitch, the rate of the pitch never beyond `rate`
//! ```
//!
//! Proportional and integral with a gain that falls with the pitch, because the torque answers the
//! pitch ever more steeply; the integral kept within the angles so that it does not wind up: as in
//! Jonkman et al., NREL/TP-500-38060 (2009), section 7.

use crate::component::load::power_coefficient::PowerCoefficient;
use crate::quantity::Dimension;
use crate::signal::Signal;
use crate::signal::read::read_signal;
use crate::tree::{Fields, Range};
use std::f64::consts::{FRAC_PI_2, PI};

/// A pitch controller as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct PitchLoop {
    /// The body whose speed it holds; `None`: the rotor's own.
    pub body: Option<String>,
    /// Speed asked for, rad/s.
    pub speed: Signal,
    /// Angle per speed error, s.
    pub gain: f64,
    /// s.
    pub integral_time: f64,
    /// Lowest and highest angle, rad.
    pub angles: [f64; 2],
    /// Lag of the blades behind the command, s.
    pub lag: f64,
    /// Largest rate of the blades, rad/s.
    pub rate: Option<f64>,
    /// Pitch at which the gain is half, rad.
    pub gain_halves_at: Option<f64>,
}

impl PitchLoop {
    /// Reads the inside of `pitch_loop`.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let body = fields
            .name_optional("body", "The body whose speed it holds; the rotor's own when absent.");
        let speed = read_signal(
            fields,
            "speed",
            Dimension::Speed,
            true,
            "Speed asked for, with the sign with which that body turns.",
        );
        let gain = fields.quantity(
            "gain",
            Dimension::Time,
            Range::Positive,
            "Pitch per speed error, rad per rad/s, which is s.",
        );
        let integral_time = fields.quantity(
            "integral_time",
            Dimension::Time,
            Range::Positive,
            "Time in which the integral part doubles the proportional one.",
        );
        let lowest = fields.quantity_or(
            "lowest_angle",
            Dimension::Angle,
            Range::Any,
            0.0,
            "The pitch stays above this: fine pitch, most power.",
        );
        let highest = fields.quantity_or(
            "highest_angle",
            Dimension::Angle,
            Range::Any,
            FRAC_PI_2,
            "The pitch stays below this: feathered.",
        );
        let lag = fields.quantity(
            "lag",
            Dimension::Time,
            Range::Positive,
            "First-order lag of the blades behind the command; some 0.1 to 0.3 s.",
        );
        let rate = fields.quantity_optional(
            "rate",
            Dimension::Speed,
            Range::Positive,
            "The blades turn no faster than this, such as 8 deg/s; absent: no such limit.",
        );
        let gain_halves_at = fields.quantity_optional(
            "gain_halves_at",
            Dimension::Angle,
            Range::Positive,
            "The gain falls as 1/(1 + pitch/this); absent: it stays.",
        );
        if lowest >= highest {
            fields.fault("highest_angle", "`highest_angle` must lie above `lowest_angle`");
        }
        if lowest < -PI || highest > PI {
            let key = if lowest < -PI { "lowest_angle" } else { "highest_angle" };
            fields.fault(key, format!("`{key}` must lie between -180 and 180 deg"));
        }
        if gain_halves_at.is_some_and(|angle| lowest <= -0.5 * angle) {
            fields.fault(
                "gain_halves_at",
                "`gain_halves_at` must be more than twice as far from 0 as a negative `lowest_angle`",
            );
        }
        let speed = speed.unwrap_or(Signal::Constant(0.0));
        Self {
            body,
            speed,
            gain,
            integral_time,
            angles: [lowest, highest],
            lag,
            rate,
            gain_halves_at,
        }
    }

    /// Refuses a loop where the pitch changes nothing.
    pub fn check(&self, coefficient: &PowerCoefficient, fields: &Fields<'_>) {
        if !coefficient.follows_pitch() {
            fields.fault_hint(
                "pitch_loop",
                "this power coefficient does not follow the pitch, so a pitch loop has nothing to act on",
                "`table` or `exponential` in `power_coefficient`, or the built-in formula, follow it",
            );
        }
    }
}

/// The factor on a gain at a pitch, and its derivative.
#[inline]
pub fn schedule(pitch: f64, halves_at: f64) -> (f64, f64) {
    let factor = 1.0 / (1.0 + pitch / halves_at);
    (factor, -factor * factor / halves_at)
}

#[cfg(test)]
mod tests {
    use super::*;

    // Gain factor of the 5-MW reference turbine: half at 6.302336 deg (NREL/TP-500-38060, read in
    // data files that cite it), and its derivative against a difference.
    #[test]
    fn the_gain_falls_with_the_pitch() {
        let half = 6.302336_f64.to_radians();
        assert!((schedule(half, half).0 - 0.5).abs() < 1e-15);
        assert!((schedule(3.0 * half, half).0 - 0.25).abs() < 1e-15);
        assert!((schedule(0.2, f64::INFINITY).0 - 1.0).abs() < 1e-15);
        let difference = (schedule(0.2 + 1e-6, half).0 - schedule(0.2 - 1e-6, half).0) / 2e-6;
        assert!((schedule(0.2, half).1 - difference).abs() < 1e-8);
    }
}
