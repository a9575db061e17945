//! Magnets warm and cold: what is left of the pull-out torque, and what they stand.
//!
//! Remanence falls by 0.12 %/K (N42 by a maker's table) or 0.11 %/K; the torque goes with the
//! product of the two fields. The factors are worked out by hand: 0.928^2, 0.934^2 and so on.

use super::helper::{check, head, run_through, run_with, same};

/// A coupling under half its rated pull-out torque, in steady running; `magnets` are its keys.
pub fn loaded(magnets: &str) -> String {
    format!(
        "{}start: steady\nbodies:\n  a: {{ inertia: 0.1 kg*m2, speed: 100 rad/s }}\n  b: {{ inertia: 0.1 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [a, b], pole_pairs: 4, pull_out: 80 N*m, damping: 0.1 N*m*s/rad, {magnets} }}\n\
         motors:\n  drive: {{ body: a, law: {{ prescribed: {{ torque: 40 N*m }} }} }}\n\
         loads:\n  brake: {{ body: b, law: {{ prescribed: {{ torque: -40 N*m }} }} }}\n",
        head(0.1, 0.01, 1e-9),
    )
}

/// Keys of the magnets and the factor on the pull-out torque.
pub const FACTORS: [(&str, f64); 7] = [
    (
        "magnet_temperature: 80 degC, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K",
        0.861184,
    ),
    (
        "magnet_temperature: 80 degC, rated_temperature: 20 degC, remanence_coefficient: -0.11 %/K",
        0.872356,
    ),
    (
        "magnet_temperature: 100 degC, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K",
        0.817216,
    ),
    (
        "magnet_temperature: -20 degC, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K",
        1.098304,
    ),
    // One half at 100 degC, the other at 60 degC: 0.904 * 0.952.
    (
        "magnet_temperature: { a: 100 degC, b: 60 degC }, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K",
        0.904 * 0.952,
    ),
    // Two materials, both at 100 degC: 0.904 * 0.972.
    (
        "magnet_temperature: 100 degC, rated_temperature: 20 degC, remanence_coefficient: { a: -0.12 %/K, b: -0.035 %/K }",
        0.904 * 0.972,
    ),
    (
        "magnet_temperature: { a: 100 degC, b: -20 degC }, rated_temperature: 20 degC, remanence_coefficient: { a: -0.12 %/K, b: -0.035 %/K }",
        0.904 * 1.014,
    ),
];

#[test]
fn pull_out_follows_both_remanences() {
    for (magnets, factor) in FACTORS {
        let outcome = run_through(&loaded(magnets));
        // Half the rated torque is 0.5/factor of what is left.
        same(outcome.channel("coupling.pull_out_share", "final"), 0.5 / factor, 1e-9);
        same(outcome.channel("coupling.load_angle", "final"), (0.5 / factor).asin(), 1e-9);
        let left = outcome.number(&["gears", "coupling", "members", "a", "pull_out_torque"]);
        same(left, 80.0 * factor, 1e-12);
    }
}

#[test]
fn the_rotors_of_a_gear_have_temperatures_of_their_own() {
    let scenario = format!(
        "{}bodies:\n  fast: {{ inertia: 0.1 kg*m2 }}\n  slow: {{ inertia: 1 kg*m2 }}\nmagnetic_gears:\n  gear:\n    \
         inner: fast\n    modulator: ground\n    outer: slow\n    pole_pairs: {{ inner: 4, outer: 22 }}\n    \
         pull_out: {{ at: outer, torque: 1500 N*m }}\n    magnet_temperature: {{ inner: 120 degC, outer: 70 degC }}\n    \
         rated_temperature: 20 degC\n    remanence_coefficient: {{ inner: -0.035 %/K, outer: -0.12 %/K }}\n",
        head(0.1, 0.01, 1e-8)
    );
    let outcome = run_through(&scenario);
    let left = outcome.number(&["gears", "gear", "members", "outer", "pull_out_torque"]);
    same(left, 1500.0 * 0.965 * 0.94, 1e-12);
    // A dotted path reaches each of them.
    let path = "magnetic_gears.gear.magnet_temperature.inner=20 degC";
    let outcome = run_with(&scenario, &["--set", path]);
    let left = outcome.number(&["gears", "gear", "members", "outer", "pull_out_torque"]);
    same(left, 1500.0 * 0.94, 1e-12);
}

#[test]
fn magnets_above_what_they_stand_are_warned() {
    let keys = |temperature: &str, limit: &str| {
        loaded(&format!(
            "magnet_temperature: {temperature}, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K, maximum_temperature: {limit}"
        ))
    };
    assert!(!check(&keys("80 degC", "80 degC")).stderr.contains("warning"));
    let outcome = check(&keys("95 degC", "80 degC"));
    assert_eq!(outcome.status, Some(0));
    let told = "the magnets stand at 95 degC, 15 K above their maximum_temperature";
    assert!(outcome.stderr.contains(told), "{}", outcome.stderr);
    // With a limit each, only the half that is too hot is named.
    let outcome = check(&keys("95 degC", "{ a: 80 degC, b: 120 degC }"));
    let told = "the magnets of `a` stand at 95 degC, 15 K above";
    assert!(outcome.stderr.contains(told), "{}", outcome.stderr);
    assert!(!outcome.stderr.contains("of `b`"), "{}", outcome.stderr);
}
