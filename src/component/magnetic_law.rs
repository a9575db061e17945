//! The torque law of a magnetic gear or coupling over its phase.
//!
//! ```text
//! law(x)    = (sin x + sum a_m sin(m x + phase_m))/N        N: the lower of law's two peaks is 1
//! torque    = K*law(x)                                      K = pull-out torque at a member over its count
//! energy(x) = K*integral of law, zero at the stable point   J
//! ```
//!
//! One co-energy `W(x)` couples all members, each member's torque being its count times
//! `-dW/dx`; for a sinusoidal field W is a cosine. Field modulation: Atallah and Howe, A novel
//! high-performance magnetic gear, IEEE Trans. Magnetics 37 (2001) 2844-2846 (from memory).
//! The energy form and the bounds are closed-form; stability holds between the peaks next to
//! the stable point, in the sense of the pendulum: beyond them the torque falls as the angle grows.
//!
//! Validity: quasi-static. The law must have one stable point a turn; where strong harmonics
//! split a peak in two, the peak nearer to the stable point counts, on the safe side.

use crate::component::magnetic_gear::Harmonic;
use std::f64::consts::{FRAC_PI_2, PI, TAU};

/// `K*law(x)` with its peaks, found once.
#[derive(Clone, Debug, PartialEq)]
pub struct MagnetLaw {
    /// K, N*m.
    amplitude: f64,
    /// K/N.
    scale: f64,
    /// 1/N.
    norm: f64,
    harmonics: Vec<Term>,
    peaks: [f64; 2],
    peak_values: [f64; 2],
    stable: f64,
    /// The raw integral at the stable point.
    energy_base: f64,
    steepest: f64,
    split_peaks: bool,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct Term {
    order: f64,
    amplitude: f64,
    phase: f64,
}

/// Samples a period of the highest order for the search of peaks and zeros.
const SAMPLES: usize = 48;

impl MagnetLaw {
    /// The law with amplitude K (N*m) and harmonics; the message says why there is none.
    pub fn new(amplitude: f64, harmonics: &[Harmonic]) -> Result<Self, String> {
        let terms: Vec<Term> = harmonics
            .iter()
            .filter(|entry| entry.amplitude != 0.0)
            .map(|entry| Term {
                order: f64::from(entry.order),
                amplitude: entry.amplitude,
                phase: entry.phase,
            })
            .collect();
        let mut law = Self {
            amplitude,
            scale: amplitude,
            norm: 1.0,
            harmonics: terms,
            peaks: [-FRAC_PI_2, FRAC_PI_2],
            peak_values: [-1.0, 1.0],
            stable: 0.0,
            energy_base: -1.0,
            steepest: 1.0,
            split_peaks: false,
        };
        if !law.harmonics.is_empty() {
            law.search()?;
        }
        Ok(law)
    }

    /// Finds the stable point, the peaks, the norm and the steepest slope.
    fn search(&mut self) -> Result<(), String> {
        let highest = self.harmonics.iter().fold(1.0, |most: f64, term| most.max(term.order));
        let count = SAMPLES * highest.min(1000.0) as usize;
        // Half a step off, so that no sample falls on the zeros and peaks of odd laws.
        let grid: Vec<f64> =
            (0..=count).map(|index| -PI + (index as f64 + 0.5) * TAU / count as f64).collect();
        let rising: Vec<f64> = crossings(&grid, |x| self.raw(x));
        let stable = match rising.as_slice() {
            [one] => wrap(*one),
            [] => {
                return Err("the harmonics leave the torque law without a stable point".to_owned());
            }
            many => {
                return Err(format!(
                    "the harmonics give the torque law {} stable points a pole pitch; it must have one",
                    many.len()
                ));
            }
        };
        let tops: Vec<f64> = crossings(&grid, |x| -self.raw_slope(x));
        let bottoms: Vec<f64> = crossings(&grid, |x| self.raw_slope(x));
        let ahead = |list: &[f64]| {
            list.iter().map(|x| stable + (x - stable).rem_euclid(TAU)).reduce(f64::min)
        };
        let behind = |list: &[f64]| {
            list.iter().map(|x| stable - (stable - x).rem_euclid(TAU)).reduce(f64::max)
        };
        let (Some(forward), Some(backward)) = (ahead(&tops), behind(&bottoms)) else {
            return Err("the harmonics leave the torque law without a peak".to_owned());
        };
        let raw_peaks = [self.raw(backward), self.raw(forward)];
        let lower = raw_peaks[1].min(-raw_peaks[0]);
        if lower <= 0.0 {
            return Err("the harmonics leave the torque law without a peak on one side".to_owned());
        }
        self.norm = 1.0 / lower;
        self.scale = self.amplitude / lower;
        self.peaks = [backward, forward];
        self.peak_values = raw_peaks.map(|value| value / lower);
        self.stable = stable;
        self.energy_base = self.raw_integral(stable);
        self.split_peaks = tops.len() + bottoms.len() > 2;
        let steep = crossings(&grid, |x| self.raw_curvature(x))
            .into_iter()
            .chain(crossings(&grid, |x| -self.raw_curvature(x)))
            .fold(0.0, |most: f64, x| most.max(self.raw_slope(x).abs()));
        self.steepest = steep / lower;
        Ok(())
    }

    fn raw(&self, x: f64) -> f64 {
        self.harmonics
            .iter()
            .fold(x.sin(), |sum, term| sum + term.amplitude * (term.order * x + term.phase).sin())
    }

    fn raw_slope(&self, x: f64) -> f64 {
        self.harmonics.iter().fold(x.cos(), |sum, term| {
            sum + term.amplitude * term.order * (term.order * x + term.phase).cos()
        })
    }

    fn raw_curvature(&self, x: f64) -> f64 {
        self.harmonics.iter().fold(-x.sin(), |sum, term| {
            sum - term.amplitude * term.order * term.order * (term.order * x + term.phase).sin()
        })
    }

    fn raw_integral(&self, x: f64) -> f64 {
        self.harmonics.iter().fold(-x.cos(), |sum, term| {
            sum - term.amplitude / term.order * (term.order * x + term.phase).cos()
        })
    }

    /// `K*law(x)`, N*m.
    #[inline]
    pub fn value(&self, x: f64) -> f64 {
        if self.harmonics.is_empty() { self.amplitude * x.sin() } else { self.scale * self.raw(x) }
    }

    /// The amplitude of a law that is a plain sine, N*m.
    pub fn sine(&self) -> Option<f64> {
        self.harmonics.is_empty().then_some(self.amplitude)
    }

    /// Derivative of [`MagnetLaw::value`], N*m/rad.
    #[inline]
    pub fn slope(&self, x: f64) -> f64 {
        if self.harmonics.is_empty() {
            self.amplitude * x.cos()
        } else {
            self.scale * self.raw_slope(x)
        }
    }

    /// `law(x)` itself, without K.
    pub fn share(&self, x: f64) -> f64 {
        self.norm * self.raw(x)
    }

    /// Stored energy, J: K times the integral of law from the stable point.
    pub fn energy(&self, x: f64) -> f64 {
        self.scale * (self.raw_integral(x) - self.energy_base)
    }

    /// K, N*m: the pull-out torque at a member over that member's count.
    pub fn amplitude(&self) -> f64 {
        self.amplitude
    }

    /// The stable point without load, rad; 0 unless harmonics shift it.
    pub fn stable_point(&self) -> f64 {
        self.stable
    }

    /// The peaks next to the stable point, rad: backward (negative torque), forward.
    pub fn peaks(&self) -> [f64; 2] {
        self.peaks
    }

    /// `law` at [`MagnetLaw::peaks`]: at or below -1, and at or above 1.
    pub fn peak_values(&self) -> [f64; 2] {
        self.peak_values
    }

    /// Whether harmonics split a peak in two, so that a second, further one exists.
    pub fn split_peaks(&self) -> bool {
        self.split_peaks
    }

    /// Largest magnitude of law's slope, 1/rad.
    pub fn steepest(&self) -> f64 {
        self.steepest
    }

    /// The angle on the stable branch where `law` is `share`; none beyond the peaks.
    pub fn stable_angle_for(&self, share: f64) -> Option<f64> {
        let [low, high] = self.peak_values;
        if !(low..=high).contains(&share) {
            return None;
        }
        if self.harmonics.is_empty() {
            return Some(share.asin());
        }
        Some(bisect(self.peaks[0], self.peaks[1], |x| self.share(x) - share))
    }

    /// The angle beyond the peak, on the load's side, where `law` is `share` again: from there
    /// the load pulls the gear on to a slip. None beyond the peaks.
    pub fn unstable_angle_for(&self, share: f64) -> Option<f64> {
        let [low, high] = self.peak_values;
        if !(low..=high).contains(&share) {
            return None;
        }
        if self.harmonics.is_empty() {
            let beyond = PI - share.abs().asin();
            return Some(if share < 0.0 { -beyond } else { beyond });
        }
        let falling = |x: f64| share - self.share(x);
        let [backward, forward] = self.peaks;
        Some(if share < 0.0 {
            bisect(forward - TAU, backward, falling)
        } else {
            bisect(forward, backward + TAU, falling)
        })
    }
}

/// The roots of `function` between neighbours of `grid` where it rises through zero.
fn crossings(grid: &[f64], function: impl Fn(f64) -> f64) -> Vec<f64> {
    let mut roots = Vec::new();
    let values: Vec<f64> = grid.iter().map(|x| function(*x)).collect();
    for (ends, values) in grid.windows(2).zip(values.windows(2)) {
        if values[0] < 0.0 && values[1] >= 0.0 {
            roots.push(bisect(ends[0], ends[1], &function));
        }
    }
    roots
}

/// The place between `low` and `high` where `function` rises through zero, to the last digit.
fn bisect(low: f64, high: f64, function: impl Fn(f64) -> f64) -> f64 {
    let (mut low, mut high) = (low, high);
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if function(middle) < 0.0 { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

fn wrap(angle: f64) -> f64 {
    angle - TAU * (angle / TAU).round()
}

#[cfg(test)]
#[path = "magnetic_law_tests.rs"]
mod tests;
