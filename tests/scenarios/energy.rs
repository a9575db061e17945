//! The energy audit of every shipped scenario.
//!
//! What motors and loads put in, less what they take out, what is lost and what is stored, must
//! leave nothing. It proves signs and bookkeeping, not accuracy.

use crate::runner::{all, run};

/// Trains with free play strike; their audit is held to less.
const WITH_IMPACTS: [&str; 1] = ["kiln_train"];

/// Below this the residual is rounding, and falls no further.
const ROUNDING: f64 = 1e-12;

fn residual(stem: &str, tolerance: &str) -> f64 {
    run(stem, &[&format!("solver.tolerance={tolerance}")]).number("energy/residual_share")
}

#[test]
fn residual_is_below_a_millionth() {
    for stem in all() {
        let residual = residual(&stem, "1e-8");
        assert!(residual < 1e-6, "{stem}: {residual:e}");
    }
}

#[test]
fn residual_falls_with_the_tolerance() {
    for stem in all().iter().filter(|stem| !WITH_IMPACTS.contains(&stem.as_str())) {
        let (loose, tight) = (residual(stem, "1e-5"), residual(stem, "1e-9"));
        // The tolerance falls by 10^4; a share of a tenth of that leaves room for events.
        assert!(tight < (1e-3 * loose).max(ROUNDING), "{stem}: {loose:e} to {tight:e}");
    }
}
