//! One accepted step as a continuous curve.
//!
//! The method's own dense output, rebuilt from the stages: order 4 for `dopri5`, order 7 for
//! `dop853` (three more evaluations), cubic Hermite for `rk4`. Sums of the state over time
//! (body angles) use value, rate and acceleration at both ends.

use super::tableau::{self, dop853, dopri5};
use crate::scenario::Method;

/// A step with everything needed to evaluate inside it.
#[derive(Clone, Debug, Default)]
pub struct DenseStep {
    /// Start, s.
    pub start: f64,
    /// Length, s.
    pub length: f64,
    /// State at the start.
    pub first: Vec<f64>,
    /// State at the end.
    pub last: Vec<f64>,
    /// Rate at the start.
    pub first_rate: Vec<f64>,
    /// Rate at the end.
    pub last_rate: Vec<f64>,
    /// Sum of the independent speeds up to the start, scaled.
    pub first_sum: Vec<f64>,
    /// The same up to the end.
    pub last_sum: Vec<f64>,
    coefficients: Vec<Vec<f64>>,
    kind: Kind,
}

#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
enum Kind {
    #[default]
    Cubic,
    Quartic,
    Septic,
}

impl DenseStep {
    /// Prepares the interpolant from all stages of the step (the first included).
    pub fn prepare(
        &mut self,
        method: Method,
        stages: &[Vec<f64>],
        rates: &mut dyn FnMut(f64, &[f64], &mut [f64]),
    ) {
        let size = self.first.len();
        let h = self.length;
        let count = match method {
            Method::Rk4 => 3,
            Method::Dopri5 => 4,
            Method::Dop853 => 7,
        };
        self.coefficients.resize(count, Vec::new());
        for row in &mut self.coefficients {
            row.clear();
        }
        for i in 0..size {
            let difference = self.last[i] - self.first[i];
            let bend = h * self.first_rate[i] - difference;
            self.coefficients[0].push(difference);
            self.coefficients[1].push(bend);
            self.coefficients[2].push(difference - h * self.last_rate[i] - bend);
        }
        match method {
            Method::Rk4 => self.kind = Kind::Cubic,
            Method::Dopri5 => {
                self.kind = Kind::Quartic;
                let last_rate = &self.last_rate;
                self.coefficients[3].extend((0..size).map(|i| {
                    let inner: f64 =
                        stages.iter().zip(&dopri5::D).map(|(stage, d)| d * stage[i]).sum();
                    h * (inner + dopri5::D[6] * last_rate[i])
                }));
            }
            Method::Dop853 => {
                self.kind = Kind::Septic;
                let more = self.more_stages(stages, rates);
                let last_rate = &self.last_rate;
                for (weights, row) in dop853::D.iter().zip(&mut self.coefficients[3..]) {
                    row.extend((0..size).map(|i| {
                        let own: f64 =
                            stages.iter().zip(weights).map(|(stage, d)| d * stage[i]).sum();
                        let end = weights[12] * last_rate[i];
                        let extra: f64 =
                            more.iter().zip(&weights[13..]).map(|(stage, d)| d * stage[i]).sum();
                        h * (own + end + extra)
                    }));
                }
            }
        }
    }

    fn more_stages(
        &self,
        stages: &[Vec<f64>],
        rates: &mut dyn FnMut(f64, &[f64], &mut [f64]),
    ) -> Vec<Vec<f64>> {
        let size = self.first.len();
        let mut more: Vec<Vec<f64>> = Vec::with_capacity(3);
        for (row, node) in dop853::A_DENSE.iter().zip(dop853::C_DENSE) {
            let trial: Vec<f64> = (0..size)
                .map(|i| {
                    let own: f64 = stages.iter().zip(*row).map(|(stage, a)| a * stage[i]).sum();
                    let end = row[12] * self.last_rate[i];
                    let extra: f64 =
                        more.iter().zip(&row[13..]).map(|(stage, a)| a * stage[i]).sum();
                    self.first[i] + self.length * (own + end + extra)
                })
                .collect();
            let mut rate = vec![0.0; size];
            rates(self.start + node * self.length, &trial, &mut rate);
            more.push(rate);
        }
        more
    }

    /// The time at a share of the step; 1 gives the end exactly.
    pub fn time(&self, share: f64) -> f64 {
        self.start + share * self.length
    }

    /// The state at a share of the step.
    pub fn state(&self, share: f64, state: &mut Vec<f64>) {
        state.clear();
        if share <= 0.0 || share >= 1.0 {
            state.extend_from_slice(if share <= 0.0 { &self.first } else { &self.last });
            return;
        }
        let rest = 1.0 - share;
        let rows = |first: usize| {
            let [a, b, c] = [first, first + 1, first + 2].map(|row| &self.coefficients[row]);
            a.iter().zip(b).zip(c)
        };
        let ends = self.first.iter().zip(rows(0));
        let at = |((first, ((a, b), c)), inner): ((&f64, ((&f64, &f64), &f64)), f64)| {
            first + share * (a + rest * (b + share * (c + inner)))
        };
        match self.kind {
            Kind::Cubic => state.extend(ends.map(|end| at((end, 0.0)))),
            Kind::Quartic => {
                state.extend(ends.zip(&self.coefficients[3]).map(|(end, d)| at((end, rest * d))));
            }
            Kind::Septic => {
                let inner = rows(4)
                    .zip(&self.coefficients[3])
                    .map(|(((e, f), g), d)| rest * (d + share * (e + rest * (f + share * g))));
                state.extend(ends.zip(inner).map(at));
            }
        }
    }

    /// The summed independent speeds at a share of the step (quintic Hermite), scaled.
    pub fn sums(&self, share: f64, sums: &mut Vec<f64>) {
        sums.clear();
        if share >= 1.0 {
            sums.extend_from_slice(&self.last_sum);
            return;
        }
        let h = self.length;
        let s = share;
        let s3 = s * s * s;
        let (s4, s5) = (s3 * s, s3 * s * s);
        let end = 10.0 * s3 - 15.0 * s4 + 6.0 * s5;
        let first_slope = s - 6.0 * s3 + 8.0 * s4 - 3.0 * s5;
        let last_slope = -4.0 * s3 + 7.0 * s4 - 3.0 * s5;
        let first_bend = 0.5 * (s * s - 3.0 * s3 + 3.0 * s4 - s5);
        let last_bend = 0.5 * (s3 - 2.0 * s4 + s5);
        sums.extend((0..self.first_sum.len()).map(|i| {
            self.first_sum[i]
                + end * (self.last_sum[i] - self.first_sum[i])
                + h * (first_slope * self.first[i] + last_slope * self.last[i])
                + h * h * (first_bend * self.first_rate[i] + last_bend * self.last_rate[i])
        }));
    }
}

/// Adds the sum of the independent speeds over one step, by the method's own weights.
pub fn add_sums(
    method: Method,
    length: f64,
    first: &[f64],
    stages: &[Vec<f64>],
    weights: &[f64],
    sums: &mut [f64],
) {
    debug_assert_eq!(weights.len(), tableau::of(method).stages());
    for (place, sum) in sums.iter_mut().enumerate() {
        let inner: f64 =
            stages.iter().zip(weights).map(|(stage, weight)| weight * stage[place]).sum();
        *sum += length * (first[place] + length * inner);
    }
}
