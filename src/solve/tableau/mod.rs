//! The explicit Runge-Kutta methods as data: one step of each, and what follows from the stages.

pub mod dop853;
pub mod dopri5;

use crate::scenario::Method;

/// The step of a method: rows 2 and on of the matrix, weights and nodes.
#[derive(Clone, Copy, Debug)]
pub struct Tableau {
    /// Row `i` gives stage `i + 2`.
    pub a: &'static [&'static [f64]],
    /// Weights of the solution.
    pub b: &'static [f64],
    /// Nodes.
    pub c: &'static [f64],
}

const RK4_A: [&[f64]; 3] = [&[0.5], &[0.0, 0.5], &[0.0, 0.0, 1.0]];
const RK4_B: [f64; 4] = [1.0 / 6.0, 1.0 / 3.0, 1.0 / 3.0, 1.0 / 6.0];
const RK4_C: [f64; 4] = [0.0, 0.5, 0.5, 1.0];

/// The tableau of a method.
pub fn of(method: Method) -> Tableau {
    match method {
        Method::Dopri5 => Tableau { a: &dopri5::A, b: &dopri5::B, c: &dopri5::C },
        Method::Dop853 => Tableau { a: &dop853::A, b: &dop853::B, c: &dop853::C },
        Method::Rk4 => Tableau { a: &RK4_A, b: &RK4_B, c: &RK4_C },
    }
}

impl Tableau {
    /// Number of stages without the one at the step's end.
    pub fn stages(&self) -> usize {
        self.b.len()
    }

    /// Weights of the stages in the sum over the step of the state itself: `w_j = sum_i b_i a_ij`.
    ///
    /// `sum b_i y_i = y_0 + h sum_j w_j k_j`, so a sum over the state needs no stored stages.
    pub fn state_weights(&self) -> Vec<f64> {
        let mut weights = vec![0.0; self.stages()];
        for (row, weight) in self.a.iter().zip(&self.b[1..]) {
            for (share, value) in weights.iter_mut().zip(*row) {
                *share += weight * value;
            }
        }
        weights
    }

    /// One step from the first stage; returns the state at its end and leaves all stages in `stages`
    /// (the rate at the end is not evaluated).
    pub fn step(
        &self,
        rates: &mut dyn FnMut(f64, &[f64], &mut [f64]),
        start: f64,
        length: f64,
        state: &[f64],
        stages: &mut Vec<Vec<f64>>,
    ) -> Vec<f64> {
        let size = state.len();
        stages.resize(self.stages(), Vec::new());
        let mut trial = vec![0.0; size];
        for (row, node) in self.a.iter().zip(&self.c[1..]) {
            let index = row.len();
            trial.copy_from_slice(state);
            for (weight, stage) in row.iter().zip(stages.iter()) {
                for (value, rate) in trial.iter_mut().zip(stage) {
                    *value += length * weight * rate;
                }
            }
            let mut rate = std::mem::take(&mut stages[index]);
            rate.resize(size, 0.0);
            rates(start + node * length, &trial, &mut rate);
            stages[index] = rate;
        }
        trial.copy_from_slice(state);
        for (weight, stage) in self.b.iter().zip(stages.iter()) {
            for (value, rate) in trial.iter_mut().zip(stage) {
                *value += length * weight * rate;
            }
        }
        trial
    }

    /// The growth `|R(z)|` of the linear test equation over one step.
    pub fn growth(&self, re: f64, im: f64) -> f64 {
        let multiply =
            |a: (f64, f64), b: (f64, f64)| (a.0 * b.0 - a.1 * b.1, a.0 * b.1 + a.1 * b.0);
        let z = (re, im);
        // Stage values k_i/lambda of y' = lambda y from y = 1.
        let mut stages: Vec<(f64, f64)> = vec![(1.0, 0.0)];
        for row in self.a {
            let mut sum = (0.0, 0.0);
            for (weight, stage) in row.iter().zip(&stages) {
                sum = (sum.0 + weight * stage.0, sum.1 + weight * stage.1);
            }
            let moved = multiply(z, sum);
            stages.push((1.0 + moved.0, moved.1));
        }
        let mut sum = (0.0, 0.0);
        for (weight, stage) in self.b.iter().zip(&stages) {
            sum = (sum.0 + weight * stage.0, sum.1 + weight * stage.1);
        }
        let moved = multiply(z, sum);
        (1.0 + moved.0).hypot(moved.1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rows_sum_to_their_nodes_and_weights_to_one() {
        // Consistency conditions of any Runge-Kutta method (Butcher).
        for method in [Method::Dopri5, Method::Dop853, Method::Rk4] {
            let tableau = of(method);
            for (row, node) in tableau.a.iter().zip(&tableau.c[1..]) {
                assert!((row.iter().sum::<f64>() - node).abs() < 1e-14, "{method:?} {row:?}");
            }
            assert!((tableau.b.iter().sum::<f64>() - 1.0).abs() < 1e-14);
        }
    }

    #[test]
    fn growth_agrees_with_the_exponential_to_the_order() {
        let z = 0.01;
        assert!((of(Method::Dopri5).growth(z, 0.0) - z.exp()).abs() < 1e-14);
        assert!((of(Method::Dop853).growth(0.3, 0.0) - 0.3_f64.exp()).abs() < 1e-9);
    }

    #[test]
    fn each_method_steps_with_its_order() {
        // y' = y, halving the step: the error of one step falls by 2^(order + 1).
        for (method, order) in [(Method::Dopri5, 5), (Method::Dop853, 8), (Method::Rk4, 4)] {
            let error = |length: f64| {
                let mut stages = vec![vec![1.0]];
                let mut rates = |_: f64, state: &[f64], rate: &mut [f64]| rate[0] = state[0];
                let end = of(method).step(&mut rates, 0.0, length, &[1.0], &mut stages);
                (end[0] - length.exp()).abs()
            };
            let long = if order == 8 { 1.0 } else { 0.1 };
            let rate = (error(long) / error(0.5 * long)).log2();
            assert!((rate - f64::from(order + 1)).abs() < 0.6, "{method:?} {rate}");
        }
    }
}
