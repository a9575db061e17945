//! The wind against its spectrum and closed forms.

use super::*;
use std::f64::consts::TAU;

/// Kaimal, IEC 61400-1: L 340.2 m, 12 m/s, sigma of class A.
fn wind(seed: u64) -> Spectrum {
    Spectrum { mean: 12.0, deviation: 2.336, length_scale: 340.2, highest_frequency: 1.0, seed }
}

// Closed forms: the variance below 1 Hz is 0.967553589359 of the whole, below 0.1 Hz
// 0.854457155645; the spectrum at 0.1 and 0.01 Hz is 5.00075844158 and 118.127521294 (m/s)^2/Hz.
#[test]
fn the_shares_are_the_integral_of_the_spectrum() {
    let spectrum = wind(1);
    assert!((spectrum.share_below(1.0) - 0.967553589359).abs() < 1e-12);
    assert!((spectrum.share_below(0.1) - 0.854457155645).abs() < 1e-12);
    for (frequency, density) in [(0.1, 5.00075844158), (0.01, 118.127521294)] {
        let h = 1e-5 * frequency;
        let slope = spectrum.share_below(frequency + h) - spectrum.share_below(frequency - h);
        let found = 2.336 * 2.336 * slope / (2.0 * h);
        assert!((found / density - 1.0).abs() < 1e-8, "{found}");
    }
}

// A series that is cut at a frequency has the variance below it, not the whole.
#[test]
fn the_series_has_the_variance_of_its_band() {
    for seed in [1, 2, 77] {
        let turbulence = Turbulence::new(&wind(seed));
        let count = turbulence.samples.len() as f64;
        let mean = turbulence.samples.iter().map(|sample| sample[0]).sum::<f64>() / count;
        let square = turbulence.samples.iter().map(|sample| sample[0].powi(2)).sum::<f64>() / count;
        assert!(mean.abs() < 1e-12);
        assert!((square / (2.336 * 2.336) - 0.967553589359).abs() < 1e-11, "{square}");
        // Close to Gaussian: the fourth moment is three times the square of the second.
        let fourth = turbulence.samples.iter().map(|sample| sample[0].powi(4)).sum::<f64>() / count;
        assert!((fourth / (square * square) - 3.0).abs() < 0.6, "{fourth}");
    }
}

// The lines of the series themselves, by a plain Fourier sum, against the spectrum's closed form.
#[test]
fn the_lines_of_the_series_carry_the_spectrum() {
    let spectrum = wind(5);
    let turbulence = Turbulence::new(&spectrum);
    let period = spectrum.period();
    for line in [40_usize, 300, 2000, 9000] {
        let (mut re, mut im) = (0.0, 0.0);
        for (place, sample) in turbulence.samples.iter().enumerate() {
            let angle = TAU * ((line * place) % SAMPLES) as f64 / SAMPLES as f64;
            re += sample[0] * angle.cos();
            im += sample[0] * angle.sin();
        }
        let half = SAMPLES as f64 / 2.0;
        let variance = (re * re + im * im) / (half * half) / 2.0;
        let frequency = line as f64 / period;
        let scale = 340.2 / 12.0;
        let density = 2.336 * 2.336 * 4.0 * scale / (1.0 + 6.0 * frequency * scale).powf(5.0 / 3.0);
        assert!((variance * period / density - 1.0).abs() < 1e-4, "{line}: {variance} {density}");
    }
}

#[test]
fn the_course_is_smooth_repeats_and_hangs_on_its_seed() {
    let turbulence = Turbulence::new(&wind(3));
    let h = 1e-4;
    for time in [0.1, 1.0, 17.33, 900.0, -4.0] {
        let difference = (turbulence.value(time + h) - turbulence.value(time - h)) / (2.0 * h);
        assert!((turbulence.slope(time) - difference).abs() < 1e-5, "{time}");
        let later = turbulence.value(time + wind(3).period());
        assert!((turbulence.value(time) - later).abs() < 1e-9);
    }
    // At a sample both neighbours meet in value, slope and curvature.
    let (at, step) = (10.0 * turbulence.step, 1e-9);
    assert!((turbulence.value(at - step) - turbulence.value(at + step)).abs() < 1e-8);
    assert!((turbulence.slope(at - step) - turbulence.slope(at + step)).abs() < 1e-7);
    assert_eq!(turbulence, Turbulence::new(&wind(3)));
    assert_ne!(turbulence, Turbulence::new(&wind(4)));
}

#[test]
fn turning_by_roots_is_turning_by_sines() {
    let table = twiddles();
    for (place, [cosine, sine]) in table.iter().enumerate().step_by(97) {
        let angle = TAU * place as f64 / SAMPLES as f64;
        assert!((cosine - angle.cos()).abs() < 1e-14 && (sine - angle.sin()).abs() < 1e-14);
    }
    for number in [1.0, 1.5, 27.0, 3.3e4_f64] {
        assert!((cube_root(number) / number.cbrt() - 1.0).abs() < 1e-15);
    }
}
