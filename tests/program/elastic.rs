//! Couplings whose stiffness has stages, and their damping.
//!
//! Closed forms of a mass on a spring of straight lines (textbooks on vibration, from memory),
//! derived for the numbers used here.

use super::helper::{check, head, near, run_through, run_well, same};
use std::f64::consts::{PI, TAU};

/// A rotor of 2 kg*m2 on a spring of 800 N*m/rad up to 0.1 rad and 5000 N*m/rad beyond.
const STAGES: &str =
    "stiffness: { points: [[0 rad, 0 N*m], [0.1 rad, 80 N*m], [0.2 rad, 580 N*m]] }";

fn rotor(head: &str, spring: &str, more: &str) -> String {
    format!(
        "{head}bodies:\n  rotor: {{ inertia: 2 kg*m2, speed: 4 rad/s }}\n\
         shafts:\n  spring: {{ between: [rotor, ground], {spring} }}\n{more}",
    )
}

/// Quarter period and amplitude of that rotor thrown with 4 rad/s.
///
/// ```text
/// first stage   x = v0/w1 sin w1 t       to x1 in t1 = asin(x1 w1/v0)/w1, v1 = sqrt(v0^2 - w1^2 x1^2)
/// second stage  z = x - x1 + z0, z0 = T1/k2: at rest after t2 = atan(v1/(w2 z0))/w2
/// amplitude     x1 - z0 + sqrt(z0^2 + (v1/w2)^2)
/// ```
fn quarter() -> (f64, f64) {
    let (first, second, kink, speed) = (20.0_f64, 50.0_f64, 0.1, 4.0_f64);
    let t1 = (kink * first / speed).asin() / first;
    let v1 = (speed * speed - (first * kink).powi(2)).sqrt();
    let z0 = 80.0 / 5000.0;
    let t2 = (v1 / (second * z0)).atan() / second;
    (t1 + t2, kink - z0 + z0.hypot(v1 / second))
}

#[test]
fn the_frequency_of_a_spring_with_stages_follows_the_amplitude() {
    let (quarter, amplitude) = quarter();
    // After ten whole periods it passes the middle at its first speed.
    let duration = 40.0 * quarter;
    let outcome = run_well(&rotor(&head(duration, duration / 400.0, 1e-10), STAGES, ""));
    near(outcome.channel("spring.twist", "max_time") % (4.0 * quarter), quarter, 1e-4);
    near(outcome.channel("spring.twist", "max"), amplitude, 1e-9);
    near(outcome.channel("spring.twist", "min"), -amplitude, 1e-9);
    near(outcome.channel("spring.torque", "max"), 80.0 + 5000.0 * (amplitude - 0.1), 1e-5);
    near(outcome.channel("spring.twist", "final"), 0.0, 1e-8);
    near(outcome.channel("rotor.speed", "final"), 4.0, 1e-8);
    assert!(outcome.number(&["energy", "residual_share"]).is_finite());
    near(outcome.number(&["energy", "stored_change"]), 0.0, 1e-7);
}

#[test]
fn stages_on_one_side_only_are_taken_as_they_stand() {
    // 800 N*m/rad for positive twists, 5000 for negative ones: half periods pi/20 and pi/50, and
    // amplitudes 4/20 and 4/50.
    let signed = "stiffness: { points: [[-1 rad, -5000 N*m], [0 rad, 0 N*m], [1 rad, 800 N*m]] }";
    let duration = 5.0 * (PI / 20.0 + PI / 50.0);
    let outcome = run_well(&rotor(&head(duration, 0.01, 1e-10), signed, ""));
    near(outcome.channel("spring.twist", "max"), 0.2, 1e-9);
    near(outcome.channel("spring.twist", "min"), -0.08, 1e-9);
    near(outcome.channel("spring.twist", "final"), 0.0, 1e-8);
}

#[test]
fn a_steady_start_stands_on_the_right_stage() {
    // 330 N*m: 0.1 + 250/5000 rad. The mode there is that of the second stage: sqrt(5000/2) rad/s.
    let scenario = rotor(
        &head(1.0, 0.01, 1e-9),
        STAGES,
        "loads: { push: { body: rotor, law: { prescribed: { torque: 330 N*m } } } }\n",
    );
    let outcome = run_well(
        &scenario.replace("duration", "start: steady\nduration").replace(", speed: 4 rad/s", ""),
    );
    near(outcome.channel("spring.twist", "min"), 0.15, 1e-9);
    near(outcome.channel("spring.twist", "max"), 0.15, 1e-9);
    near(outcome.channel("spring.torque", "final"), 330.0, 1e-5);
}

#[test]
fn a_twist_beyond_the_points_is_told() {
    let outcome = run_through(&rotor(
        &head(0.2, 0.01, 1e-9),
        "stiffness: { points: [[0 rad, 0 N*m], [0.1 rad, 80 N*m]] }",
        "",
    ));
    near(outcome.channel("spring.twist", "max"), 0.2, 1e-8);
    assert!(outcome.stderr.contains("its last line goes on there"), "{}", outcome.stderr);
}

#[test]
fn relative_damping_is_the_loss_of_a_cycle_over_its_elastic_energy() {
    // psi 1.2: damping ratio psi/(4 pi), so each period of the damped swing leaves
    // exp(-2 pi D/sqrt(1 - D^2)) of it (relative damping as in DIN 740-2, from memory).
    let ratio: f64 = 1.2 / (4.0 * PI);
    let period = TAU / (20.0 * (1.0 - ratio * ratio).sqrt());
    let outcome = run_well(&rotor(
        &head(3.0 * period, 0.01, 1e-10),
        "stiffness: 800 N*m/rad, relative_damping: 1.2",
        "",
    ));
    let left = (-3.0 * TAU * ratio / (1.0 - ratio * ratio).sqrt()).exp();
    same(outcome.channel("rotor.speed", "final"), 4.0 * left, 1e-7);
    // By definition: shaken at its own frequency, the heat of one cycle is psi times the largest
    // elastic energy. 10 N*m at 20 rad/s on c = psi*k/(2 pi w): amplitude 10/(c w), elastic energy
    // k a^2/2; after long the heat of a second is the loss of 20/(2 pi) cycles.
    let coefficient = 1.2 * 800.0 / (TAU * 20.0);
    let amplitude = 10.0 / (coefficient * 20.0);
    let elastic = 0.5 * 800.0 * amplitude * amplitude;
    let shaken = |duration: f64| {
        let sine = "loads: { shaker: { body: rotor, law: { prescribed: { torque: { sine: { mean: 0 N*m, amplitude: 10 N*m, frequency: 3.183098861837907 Hz, phase: 0 rad } } } } } }\n";
        let scenario = rotor(
            &head(duration, 0.1, 1e-9),
            "stiffness: 800 N*m/rad, relative_damping: 1.2",
            sine,
        );
        run_well(&scenario.replace("4 rad/s", "0 rad/s")).number(&["energy", "lost"])
    };
    let cycle = TAU / 20.0;
    let loss = (shaken(60.0 * cycle) - shaken(40.0 * cycle)) / 20.0;
    same(loss / elastic, 1.2, 1e-6);
}

#[test]
fn stages_that_make_no_sense_are_refused() {
    let told = |spring: &str, words: &str| {
        let outcome = check(&rotor(&head(1.0, 0.1, 1e-7), spring, ""));
        assert_eq!(outcome.status, Some(2), "{spring}");
        assert!(outcome.stderr.contains(words), "{spring}\n{}", outcome.stderr);
    };
    told("stiffness: { points: [[0 rad, 0 N*m], [1 rad, 9 N*m], [2 rad, 9 N*m]] }", "must rise");
    told("stiffness: { points: [[1 rad, 1 N*m], [2 rad, 9 N*m]] }", "no twist");
    told("stiffness: { points: [[0 rad, 1 N*m], [2 rad, 9 N*m]] }", "must be zero");
    told("stiffness: { points: [[-1 rad, -1 N*m], [0 rad, 0 N*m]] }", "negative side");
    told("stiffness: { points: [[0 rad, 0 N*m], [2 rad, 9 N*m]], length: 1 m }", "exclude");
    told(
        "stiffness: { points: [[0 rad, 0 N*m], [2 rad, 9 N*m]] }, backlash: 1 deg",
        "no `backlash`",
    );
    told("stiffness: 9 N*m/rad, damping: 1, relative_damping: 1", "exclude each other");
    told("stiffness: { diameter: 60 mm, length: 1 m }", "shear_modulus");
}
