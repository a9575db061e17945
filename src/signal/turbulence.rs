//! Turbulence of a given spectrum: the longitudinal wind at one point, by Kaimal.
//!
//! ```text
//! S(f) = sigma^2 (4 L/V)/(1 + 6 f L/V)^(5/3)         one-sided spectrum, (m/s)^2/Hz
//! variance below f: sigma^2 (1 - (1 + 6 f L/V)^(-2/3))
//! v(t) = V + sum_k a_k cos(2 pi k t/T + phase_k)      k = 1 ... K,  K/T the highest frequency
//! ```
//!
//! Kaimal's spectrum as IEC 61400-1 states it (from memory); `L` is its integral length scale,
//! 8.1 times the turbulence scale parameter: 340.2 m for hubs above 60 m. Each line carries the
//! variance of its own band, the first one all below it, so that the variance over the period
//! `T` is exactly that of the spectrum up to the highest frequency. The phases are drawn; the
//! course repeats after `T`.
//!
//! Only operations that IEEE 754 rounds correctly are used (no library sines or powers), so a seed
//! gives the same wind to the last bit on every machine. Between samples a quintic through
//! value, slope and curvature is smooth to the second derivative.

use rand_chacha::ChaCha12Rng;
use rand_chacha::rand_core::{RngCore, SeedableRng};

/// Samples of a period, a power of two.
const SAMPLES: usize = 1 << 16;

/// Samples in a period of the highest frequency.
const SAMPLES_A_WAVE: f64 = 4.0;

/// The integral length scale of the longitudinal wind for hubs above 60 m, m.
pub const LENGTH_SCALE: f64 = 340.2;

/// The figures of a turbulent wind.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spectrum {
    /// Mean wind, m/s.
    pub mean: f64,
    /// Standard deviation of the whole spectrum, m/s.
    pub deviation: f64,
    /// Integral length scale, m.
    pub length_scale: f64,
    /// Highest frequency, Hz.
    pub highest_frequency: f64,
    /// Seed of the phases.
    pub seed: u64,
}

impl Spectrum {
    /// Share of the variance below a frequency in Hz.
    pub fn share_below(&self, frequency: f64) -> f64 {
        let root = cube_root(1.0 + 6.0 * frequency * self.length_scale / self.mean);
        1.0 - 1.0 / (root * root)
    }

    /// Time after which the course repeats, s.
    pub fn period(&self) -> f64 {
        SAMPLES as f64 / (SAMPLES_A_WAVE * self.highest_frequency)
    }
}

/// One period of a turbulent wind about its mean.
#[derive(Clone, Debug, PartialEq)]
pub struct Turbulence {
    /// Time between two samples, s.
    step: f64,
    /// Value, slope times step, curvature times step squared.
    samples: Vec<[f64; 3]>,
}

impl Turbulence {
    /// Draws the wind of a spectrum.
    pub fn new(spectrum: &Spectrum) -> Self {
        let step = spectrum.period() / SAMPLES as f64;
        let lines = (SAMPLES as f64 / SAMPLES_A_WAVE) as usize;
        let width = 1.0 / spectrum.period();
        let mut source = ChaCha12Rng::seed_from_u64(spectrum.seed);
        let mut waves = vec![[0.0; 2]; SAMPLES];
        let mut below = 0.0;
        for (line, wave) in waves.iter_mut().enumerate().skip(1).take(lines) {
            let edge = if line == lines { line as f64 } else { line as f64 + 0.5 };
            let share = spectrum.share_below(edge * width);
            let amplitude = spectrum.deviation * (2.0 * (share - below).max(0.0)).sqrt();
            below = share;
            let [re, im] = direction(&mut source);
            *wave = [amplitude * re, amplitude * im];
        }
        // Derivatives by the number of the wave, in samples: i 2 pi k/SAMPLES.
        let turn = std::f64::consts::TAU / SAMPLES as f64;
        let times = |waves: &[[f64; 2]]| -> Vec<[f64; 2]> {
            let rate = |k: usize| turn * k as f64;
            waves.iter().enumerate().map(|(k, [re, im])| [-im * rate(k), re * rate(k)]).collect()
        };
        let first = times(&waves);
        let second = times(&first);
        let twiddles = twiddles();
        let [value, slope, curvature] = [waves, first, second].map(|mut list| {
            transform(&mut list, &twiddles);
            list
        });
        let samples = value
            .iter()
            .zip(&slope)
            .zip(&curvature)
            .map(|((value, slope), curvature)| [value[0], slope[0], curvature[0]])
            .collect();
        Self { step, samples }
    }

    /// Deviation from the mean at a time, m/s.
    #[inline]
    pub fn value(&self, time: f64) -> f64 {
        let (u, [c0, c1, c2, c3, c4, c5]) = self.quintic(time);
        c0 + u * (c1 + u * (c2 + u * (c3 + u * (c4 + u * c5))))
    }

    /// Derivative of the wind with respect to time, m/s2.
    pub fn slope(&self, time: f64) -> f64 {
        let (u, [_, c1, c2, c3, c4, c5]) = self.quintic(time);
        (c1 + u * (2.0 * c2 + u * (3.0 * c3 + u * (4.0 * c4 + u * 5.0 * c5)))) / self.step
    }

    /// Time between two samples, s.
    pub fn step(&self) -> f64 {
        self.step
    }

    /// Place in a step, and the coefficients of its quintic.
    #[inline]
    fn quintic(&self, time: f64) -> (f64, [f64; 6]) {
        let whole = (time / self.step).floor();
        let u = time / self.step - whole;
        let place = whole.rem_euclid(SAMPLES as f64) as usize;
        let at = |place: usize| self.samples.get(place % SAMPLES).copied().unwrap_or([0.0; 3]);
        let ([p, d, a], [q, e, b]) = (at(place), at(place + 1));
        let rise = q - p - d - 0.5 * a;
        let tilt = e - d - a;
        let bend = b - a;
        (
            u,
            [
                p,
                d,
                0.5 * a,
                10.0 * rise - 4.0 * tilt + 0.5 * bend,
                -15.0 * rise + 7.0 * tilt - bend,
                6.0 * rise - 3.0 * tilt + 0.5 * bend,
            ],
        )
    }
}

/// A direction in the plane, all alike: a point of the unit disc that is not near its centre.
fn direction(source: &mut ChaCha12Rng) -> [f64; 2] {
    // 53 bits make an exact number below one.
    let mut draw = || 2.0 * ((source.next_u64() >> 11) as f64 / (1_u64 << 53) as f64) - 1.0;
    loop {
        let (x, y) = (draw(), draw());
        let square = x * x + y * y;
        if square <= 1.0 && square > 1e-6 {
            let size = square.sqrt();
            return [x / size, y / size];
        }
    }
}

/// The cube root of a number of 1 or more, by Newton's method.
fn cube_root(number: f64) -> f64 {
    let mut root = number;
    for _ in 0..200 {
        let next = (2.0 * root + number / (root * root)) / 3.0;
        if next >= root {
            break;
        }
        root = next;
    }
    root
}

/// `exp(2 pi i k/SAMPLES)` for the first half of the turn, from half angles and square roots.
fn twiddles() -> Vec<[f64; 2]> {
    let product = |[a, b]: [f64; 2], [c, d]: [f64; 2]| [a * c - b * d, a * d + b * c];
    let levels = SAMPLES.trailing_zeros() as usize;
    // roots[b] turns by 2^b steps; the largest is half a turn.
    let mut roots = vec![[-1.0_f64, 0.0]; levels];
    if levels >= 2 {
        roots[levels - 2] = [0.0, 1.0];
    }
    for level in (0..levels.saturating_sub(2)).rev() {
        let [cosine, sine] = roots[level + 1];
        let half = (0.5 * (1.0 + cosine)).sqrt();
        roots[level] = [half, 0.5 * sine / half];
    }
    let mut table = vec![[1.0, 0.0]; SAMPLES / 2];
    for place in 1..SAMPLES / 2 {
        let top = usize::BITS as usize - 1 - place.leading_zeros() as usize;
        table[place] = product(table[place - (1 << top)], roots[top]);
    }
    table
}

/// Sums waves: `x_n = sum_k X_k exp(2 pi i k n/SAMPLES)`, in place (Cooley and Tukey 1965).
fn transform(list: &mut [[f64; 2]], twiddles: &[[f64; 2]]) {
    let count = list.len();
    let bits = count.trailing_zeros();
    for place in 0..count {
        let mirrored = place.reverse_bits() >> (usize::BITS - bits);
        if mirrored > place {
            list.swap(place, mirrored);
        }
    }
    let mut half = 1;
    while half < count {
        let stride = count / (2 * half);
        for start in (0..count).step_by(2 * half) {
            for offset in 0..half {
                let [c, s] = twiddles[offset * stride];
                let [x, y] = list[start + offset + half];
                let turned = [x * c - y * s, x * s + y * c];
                let [a, b] = list[start + offset];
                list[start + offset] = [a + turned[0], b + turned[1]];
                list[start + offset + half] = [a - turned[0], b - turned[1]];
            }
        }
        half *= 2;
    }
}

#[cfg(test)]
#[path = "turbulence_tests.rs"]
mod tests;
