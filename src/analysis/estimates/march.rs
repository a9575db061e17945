//! Curves of the swing plane by a method of order 8, with steps that shrink towards a saddle.

use crate::scenario::Method;
use crate::solve::tableau;

/// Largest step along a curve.
const STEP: f64 = 0.02;

/// Step as a share of the distance from a saddle.
const SHARE: f64 = 0.05;

/// A point of the plane of load angle and speed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Curve {
    /// Load angle, rad.
    pub x: f64,
    /// Its rate.
    pub v: f64,
}

/// Largest step as a multiple of the length over which neighbouring curves close in.
const STIFF: f64 = 1.0;

/// A curve to follow: its slope, and how fast neighbours close in on it, per unit of x.
pub struct Field<'f> {
    /// `dv/dx` at a point.
    pub rate: &'f dyn Fn(f64, f64) -> f64,
    /// Magnitude of its derivative over v.
    pub closing: &'f dyn Fn(f64, f64) -> f64,
}

/// Follows a curve to `end`; steps shrink with the distance from `saddle`.
pub fn march(start: Curve, end: f64, saddle: f64, field: &Field<'_>) -> Curve {
    let rate = field.rate;
    let tableau = tableau::of(Method::Dop853);
    let mut rates = |x: f64, state: &[f64], rates: &mut [f64]| rates[0] = rate(x, state[0]);
    let mut here = start;
    let mut stages: Vec<Vec<f64>> = Vec::new();
    for _ in 0..1_000_000 {
        let left = end - here.x;
        if left == 0.0 {
            break;
        }
        let stable = STIFF / (field.closing)(here.x, here.v);
        let cap = STEP.min(SHARE * (here.x - saddle).abs()).min(stable);
        let step = if left.abs() <= cap { left } else { cap.copysign(left) };
        stages.resize(1, Vec::new());
        stages[0] = vec![rate(here.x, here.v)];
        let state = tableau.step(&mut rates, here.x, step, &[here.v], &mut stages);
        here.v = state[0];
        here.x = if left.abs() <= cap { end } else { here.x + step };
        if here.v.is_nan() {
            break;
        }
    }
    here
}

/// Follows `x'' = push(x, x')` over a time.
pub fn swing(start: [f64; 2], duration: f64, push: &dyn Fn(f64, f64) -> f64) -> [f64; 2] {
    let tableau = tableau::of(Method::Dop853);
    let count = (duration / STEP).ceil().clamp(1.0, 1e6) as usize;
    let step = duration / count as f64;
    let mut rates = |_: f64, state: &[f64], rates: &mut [f64]| {
        rates[0] = state[1];
        rates[1] = push(state[0], state[1]);
    };
    let mut state = start.to_vec();
    let mut stages: Vec<Vec<f64>> = Vec::new();
    for _ in 0..count {
        stages.resize(1, Vec::new());
        stages[0] = vec![state[1], push(state[0], state[1])];
        state = tableau.step(&mut rates, 0.0, step, &state, &mut stages);
    }
    [state[0], state[1]]
}
