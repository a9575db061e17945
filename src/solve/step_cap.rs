//! The largest step that keeps the fastest mode of the linearised train stable.
//!
//! In steady running an explicit method's step is limited by stability, and the step controller
//! lets the fastest mode jitter there. A cap just below the limit costs fewer evaluations and
//! leaves no jitter.

use super::tableau;
use crate::equations::frame::Evaluator;
use crate::equations::linearise::{MagnetSlope, eigenvalues, jacobian};
use crate::scenario::Method;

/// Share of the stable step that is used.
const SHARE: f64 = 0.97;

/// Beyond this many states the eigenvalues cost more than they save.
const LARGEST: usize = 64;

/// The cap, s; infinite when stability sets none.
pub fn stable_step(evaluator: &Evaluator<'_>, method: Method, time: f64, state: &[f64]) -> f64 {
    if state.len() > LARGEST || method == Method::Rk4 {
        return f64::INFINITY;
    }
    let matrix = jacobian(evaluator, time, state, MagnetSlope::Steepest);
    let Some(values) = eigenvalues(&matrix) else { return f64::INFINITY };
    let tableau = tableau::of(method);
    let mut cap = f64::INFINITY;
    for (re, im) in values {
        let size = re.hypot(im);
        // Undamped and growing modes have no stability limit of this kind: accuracy rules them.
        if size == 0.0 || re >= -1e-6 * size {
            continue;
        }
        let (unit_re, unit_im) = (re / size, im / size);
        let mut low = 0.0;
        let mut high = 0.05;
        while high < 12.0 && tableau.growth(high * unit_re, high * unit_im) <= 1.0 {
            low = high;
            high += 0.05;
        }
        for _ in 0..30 {
            let middle = 0.5 * (low + high);
            if tableau.growth(middle * unit_re, middle * unit_im) <= 1.0 {
                low = middle;
            } else {
                high = middle;
            }
        }
        cap = f64::min(cap, SHARE * low / size);
    }
    if cap > 0.0 { cap } else { f64::INFINITY }
}
