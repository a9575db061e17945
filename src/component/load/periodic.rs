//! Torque by the body's angle: compressors, crushers, looms, presses.
//!
//! ```text
//! torque = -sign(w)*mean - sum a_m*sin(m*angle + phase_m)          N*m on the body
//! m whole number of periods a turn, a_m N*m; angle rad, 0 at the start of the run
//! ```
//!
//! A torque diagram over one turn as its Fourier series (common practice for piston machines).
//! The mean resists whichever way the body turns and holds at rest like dry friction. The
//! harmonics belong to the angle alone: over a whole turn they give back what they took, and at
//! rest they may push the body to where it comes to lie.

/// One harmonic of a torque over the angle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TurnHarmonic {
    /// Periods a turn.
    pub order: u32,
    /// N*m.
    pub amplitude: f64,
    /// Phase at angle 0, rad.
    pub phase: f64,
}

/// The harmonics of a periodic load.
#[derive(Clone, Debug, PartialEq)]
pub struct Periodic {
    harmonics: Vec<TurnHarmonic>,
}

impl Periodic {
    /// From the harmonics of the resisting torque.
    pub fn new(harmonics: &[TurnHarmonic]) -> Self {
        Self { harmonics: harmonics.to_vec() }
    }

    /// Torque on the body at an angle in rad.
    #[inline]
    pub fn value(&self, angle: f64) -> f64 {
        self.sum(|wave, turn| -wave.amplitude * turn.sin(), angle)
    }

    /// Derivative of the torque with respect to the angle.
    #[inline]
    pub fn slope(&self, angle: f64) -> f64 {
        self.sum(|wave, turn| -wave.amplitude * f64::from(wave.order) * turn.cos(), angle)
    }

    /// The highest order.
    pub fn highest_order(&self) -> u32 {
        self.harmonics.iter().map(|wave| wave.order).max().unwrap_or(1)
    }

    #[inline]
    fn sum(&self, part: impl Fn(&TurnHarmonic, f64) -> f64, angle: f64) -> f64 {
        self.harmonics
            .iter()
            .map(|wave| part(wave, f64::from(wave.order) * angle + wave.phase))
            .sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::{FRAC_PI_2, TAU};

    // Inertia torque of a slider crank over m r^2 w^2 with r/L = 0.25 (Den Hartog's series, from
    // memory): sine terms l/4, -1/2, -3l/4, -l^2/4 of orders 1 to 4.
    #[test]
    fn the_inertia_torque_of_a_crank_is_a_sum_of_sines() {
        let ratio = 0.25_f64;
        let terms = [ratio / 4.0, -0.5, -0.75 * ratio, -0.25 * ratio * ratio];
        let waves: Vec<TurnHarmonic> = (1..=4)
            .zip(terms)
            .map(|(order, amplitude)| TurnHarmonic { order, amplitude, phase: 0.0 })
            .collect();
        let crank = Periodic::new(&waves);
        // At a quarter turn the sines of orders 1 to 4 are 1, 0, -1, 0.
        let expected = -(ratio / 4.0 + 0.75 * ratio);
        assert!((crank.value(FRAC_PI_2) - expected).abs() < 1e-14);
        assert_eq!(crank.highest_order(), 4);
        // Mean over a turn: zero.
        let mean: f64 = (0..64).map(|k| crank.value(TAU * f64::from(k) / 64.0)).sum();
        assert!(mean.abs() < 1e-13);
    }
}
