//! Critical values found by bisection through the library, much closer than two runs can tell.
//!
//! Closed forms: equal areas (power-system stability texts), the kick from the energy, and the
//! free pair's share J2/(J1 + J2), as in the acceptance tests; the resynchronisation torque is
//! from shooting along the homoclinic orbit (independent, 12 digits).

use lodeshaft::analysis::transient::transient;
use lodeshaft::results::GearState;
use lodeshaft::scenario::load_text;
use lodeshaft::solve::{RunOptions, Wanted};
use std::path::Path;

/// Tolerance of all runs: the critical value is found to about its size.
const TOLERANCE: &str = "1e-12";

/// Slips of the coupling in a scenario, and its state at the end.
fn outcome(scenario: &str) -> (u32, GearState) {
    let loaded = load_text("case.yaml", Path::new("."), scenario, &[])
        .unwrap_or_else(|failure| panic!("{}", failure.render()));
    let options = RunOptions { wanted: Wanted::Asked(Vec::new()), ..RunOptions::default() };
    let result = transient(&loaded.scenario, options).expect("the train is in order");
    assert!(result.completed, "{:?}", result.failure);
    let gear = &result.gears[0];
    (gear.slips, gear.state_at_end)
}

/// The value between two outcomes, by bisection until the two are neighbours to one part in 1e12.
fn critical(mut holds: f64, mut fails: f64, fails_at: impl Fn(f64) -> bool) -> f64 {
    assert!(!fails_at(holds) && fails_at(fails), "no bracket between {holds} and {fails}");
    while (fails - holds).abs() > 1e-12 * fails.abs() {
        let middle = 0.5 * (holds + fails);
        if fails_at(middle) { fails = middle } else { holds = middle }
    }
    0.5 * (holds + fails)
}

/// One rotor on a coupling to ground, everything 1, with phase, rate and torque at the start.
fn rotor(phase: f64, rate: f64, torque: f64, damping: f64, duration: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: One rotor\nduration: {duration} s\noutput_step: {duration} s\n\
         solver: {{ method: dop853, tolerance: {TOLERANCE} }}\n\
         bodies:\n  rotor: {{ inertia: 1 kg*m2, speed: {rate} rad/s }}\n\
         magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: 1, pull_out: 1 N*m, \
         damping: {damping} N*m*s/rad, initial_load_angle: {phase} rad }}\n\
         motors:\n  push: {{ body: rotor, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}\n"
    )
}

#[track_caller]
fn same(found: f64, expected: f64, relative: f64) {
    let off = ((found - expected) / expected).abs();
    assert!(off <= relative, "found {found}, expected {expected}: off by {off:e} of it");
}

#[test]
fn critical_step_to_nine_digits() {
    // T1 (pi - asin T1 - asin T0) = cos(asin T0) + sqrt(1 - T1^2): T0, T1.
    for (preload, expected) in [
        (0.0, 0.7246113537767085),
        (0.3, 0.8138335054673533),
        (0.5, 0.8696471675501424),
        (0.8, 0.949211737444517),
    ] {
        let phase = f64::asin(preload);
        let found = critical(0.99 * expected, (1.01 * expected).min(0.999), |torque| {
            outcome(&rotor(phase, 0.0, torque, 0.0, 100.0)).0 > 0
        });
        same(found, expected, 1e-9);
    }
}

#[test]
fn critical_step_of_a_free_pair_to_nine_digits() {
    let expected = 0.7246113537767085 * 4.0 / 3.0;
    let found = critical(0.99 * expected, 1.01 * expected, |torque| {
        let scenario = format!(
            "lodeshaft: 1\ntitle: Two free bodies\nduration: 80 s\noutput_step: 80 s\n\
             solver: {{ method: dop853, tolerance: {TOLERANCE} }}\n\
             bodies:\n  driver: {{ inertia: 1 kg*m2 }}\n  load: {{ inertia: 3 kg*m2 }}\n\
             magnetic_couplings:\n  coupling: {{ between: [driver, load], pole_pairs: 1, pull_out: 1 N*m }}\n\
             motors:\n  push: {{ body: driver, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}\n"
        );
        outcome(&scenario).0 > 0
    });
    same(found, expected, 1e-9);
}

#[test]
fn critical_kick_to_nine_digits() {
    // w^2/2 = 2 sqrt(1 - T^2) - T (pi - 2 asin T).
    for (torque, expected) in [(0.0, 2.0), (0.5, 1.170344612814772)] {
        let found = critical(0.99 * expected, 1.01 * expected, |rate| {
            outcome(&rotor(f64::asin(torque), rate, torque, 0.0, 100.0)).0 > 0
        });
        same(found, expected, 1e-9);
    }
}

#[test]
fn resynchronisation_torque_to_eight_digits() {
    // Starts in the running state; below the limit it is caught at last.
    for (beta, expected) in [(0.5, 0.597383200311), (1.0, 0.964327124471)] {
        let found = critical(0.999 * expected, 1.001 * expected, |torque| {
            outcome(&rotor(0.0, 2.5, torque, beta, 400.0)).1 != GearState::Synchronous
        });
        same(found, expected, 1e-8);
    }
}
