//! Losses of a magnetic gear at constant flux, split into hysteresis and eddy currents.
//!
//! ```text
//! frequencies in step       pieces p_i |w_i - w_m|/2pi = p_o |w_o - w_m|/2pi
//!                           magnets and yokes n |w_i - w_m|/2pi (inner), n |w_o - w_m|/2pi (outer)
//! loss of a part            P = k_h f + k_e f^2
//! drag between rotor and modulator, at relative speed w, from its losses P at the speed w_1:
//!                           hysteresis P_h/w_1 against the motion, at any speed;  eddy P_e w/w_1^2
//! ```
//! Each loss goes with the frequency of the field in its own part. That frequency is a fixed
//! multiple of the speed of one rotor against the modulator, so the loss is the power of a drag
//! torque between those two: constant for hysteresis, in proportion to the speed for eddy
//! currents. The pieces see the fields of both rotors; each drives half of their loss. Closed
//! form; loss per cycle constant (hysteresis) and in proportion to the frequency (eddy currents
//! in thin parts) are the usual separation of iron losses after Steinmetz (from memory).
//!
//! Validity: frequencies at which the parts are thin against the skin depth, and flux as at no
//! load. What slipping itself costs is the gear's `damping`.

use super::magnetic_gear::Member;
use crate::quantity::Dimension;
use crate::tree::{Fields, Range};
use std::f64::consts::TAU;

/// Losses as stated: W in the inner rotor, the modulator's pieces and the outer rotor.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Losses {
    /// The rotor whose speed is stated.
    pub at: Member,
    /// Its speed against the modulator for which the losses are stated, in step, rad/s.
    pub speed: f64,
    /// Hysteresis losses, W.
    pub hysteresis: [f64; 3],
    /// Eddy current losses, W.
    pub eddy: [f64; 3],
}

/// The drag between a rotor and the modulator that makes the losses.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct LossDrag {
    /// Torque of hysteresis, at any speed, N*m.
    pub hysteresis: f64,
    /// Torque of eddy currents over the relative speed, N*m*s/rad.
    pub eddy: f64,
}

impl Losses {
    /// Reads the losses of a gear.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let at = match fields.one_of(
            "at",
            &["inner", "outer"],
            false,
            "The rotor whose speed is stated; inner when absent.",
        ) {
            "outer" => Member::Outer,
            _ => Member::Inner,
        };
        let speed = fields.quantity(
            "speed",
            Dimension::Speed,
            Range::Positive,
            "Its speed against the modulator for which the losses are stated, in step.",
        );
        let hysteresis = parts(
            fields,
            "hysteresis",
            "Hysteresis losses there: those of the modulator's pieces, or a map with each part.",
        );
        let eddy = parts(
            fields,
            "eddy",
            "Eddy current losses there: those of the modulator's pieces, or a map with each part.",
        );
        if !fields.has("hysteresis") && !fields.has("eddy") && !fields.is_no_map() {
            fields.fault_here_hint(
                "the losses state neither `hysteresis` nor `eddy`",
                "for example { speed: 1500 rpm, hysteresis: 12 W, eddy: 23 W }",
            );
        }
        Self { at, speed, hysteresis, eddy }
    }

    /// Speeds of the inner and the outer rotor against the modulator at which the losses are stated, rad/s.
    pub fn speeds(&self, pole_pairs: [f64; 2]) -> [f64; 2] {
        let [inner, outer] = pole_pairs;
        match self.at {
            Member::Outer => [self.speed * outer / inner, self.speed],
            _ => [self.speed, self.speed * inner / outer],
        }
    }

    /// Frequencies there in the inner rotor, the pieces and the outer rotor, Hz.
    pub fn frequencies(&self, pole_pairs: [f64; 2]) -> [f64; 3] {
        let [inner, outer] = self.speeds(pole_pairs);
        let pieces = pole_pairs[0] + pole_pairs[1];
        [pieces * inner / TAU, pole_pairs[0] * inner / TAU, pieces * outer / TAU]
    }

    /// The drags of the inner and of the outer rotor.
    pub fn drags(&self, pole_pairs: [f64; 2]) -> [LossDrag; 2] {
        let speeds = self.speeds(pole_pairs);
        let drag = |place: usize, speed: f64| LossDrag {
            hysteresis: (self.hysteresis[place] + 0.5 * self.hysteresis[1]) / speed,
            eddy: (self.eddy[place] + 0.5 * self.eddy[1]) / (speed * speed),
        };
        [drag(0, speeds[0]), drag(2, speeds[1])]
    }

    /// All losses at the stated speed: hysteresis and eddy currents, W.
    pub fn whole(&self) -> [f64; 2] {
        [self.hysteresis.iter().sum(), self.eddy.iter().sum()]
    }
}

/// The losses of the parts: one figure is that of the pieces.
fn parts(fields: &mut Fields<'_>, key: &'static str, doc: &'static str) -> [f64; 3] {
    let power = (Dimension::Power, Range::NotNegative);
    let read = fields.quantity_or_group(
        key,
        power,
        doc,
        |pieces| [0.0, pieces, 0.0],
        |inside| {
            [
                ("inner", "In the magnets and yoke of the inner rotor."),
                ("modulator", "In the modulator's pieces."),
                ("outer", "In the magnets and yoke of the outer rotor."),
            ]
            .map(|(part, doc)| inside.quantity_or(part, power.0, power.1, 0.0, doc))
        },
    );
    read.unwrap_or([0.0; 3])
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Gear 4/22/26, 30 rev/s of the inner rotor: 120 Hz in the pieces from either side.
    #[test]
    fn the_pieces_see_one_frequency_from_both_rotors() {
        let pairs = [4.0, 22.0];
        let losses =
            Losses { at: Member::Inner, speed: 30.0 * TAU, hysteresis: [0.0; 3], eddy: [0.0; 3] };
        let [inner, pieces, outer] = losses.frequencies(pairs);
        let close = |found: f64, expected: f64| (found - expected).abs() < 1e-9 * expected;
        assert!(close(inner, 780.0) && close(pieces, 120.0) && close(outer, 26.0 * 30.0 / 5.5));
        assert!(close(pairs[1] * losses.speeds(pairs)[1] / TAU, pieces));
        let other = Losses { at: Member::Outer, speed: losses.speeds(pairs)[1], ..losses };
        assert!(close(other.speeds(pairs)[0], losses.speed));
    }

    #[test]
    fn the_drags_take_the_stated_power_at_the_stated_speed() {
        let pairs = [4.0, 22.0];
        let losses = Losses {
            at: Member::Inner,
            speed: 150.0,
            hysteresis: [1.0, 10.0, 2.0],
            eddy: [8.0, 9.0, 6.0],
        };
        let power: f64 = losses
            .drags(pairs)
            .iter()
            .zip(losses.speeds(pairs))
            .map(|(drag, speed)| drag.hysteresis * speed + drag.eddy * speed * speed)
            .sum();
        assert!((power - 36.0).abs() < 1e-12, "{power}");
        assert_eq!(losses.whole(), [13.0, 23.0]);
    }
}
