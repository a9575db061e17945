//! Dry friction that sticks and slips, brakes and clutches.
//!
//! Closed forms of textbooks on vibration and machine dynamics (from memory), derived for the
//! numbers used here.

use super::helper::{head, near, run_through, run_well, same};
use std::f64::consts::PI;

/// A rotor on a spring with dry friction, thrown so that it first turns back at 1 rad.
pub fn rubbed(head: &str, more: &str) -> String {
    let speed = (1.06_f64 * 1.06 - 0.06 * 0.06).sqrt();
    format!(
        "{head}bodies:\n  rotor: {{ inertia: 1 kg*m2, speed: {speed} rad/s }}\n\
         shafts:\n  spring: {{ between: [rotor, ground], stiffness: 1 N*m/rad }}\n\
         loads:\n  rub: {{ body: rotor, law: {{ friction: {{ sliding: 0.06 N*m }} }} }}\n{more}",
    )
}

#[test]
fn dry_friction_takes_a_fixed_step_from_each_swing() {
    // J = k = 1, friction 0.06: each half swing is shorter by 2 F/k = 0.12 and lasts pi. The
    // start gives a first turning point of 1; it rests where the spring is within the
    // friction: at 0.04, after 8 half swings.
    let first = PI / 2.0 - (0.06_f64 / 1.06).asin();
    let mut requirements = String::from("requirements:\n");
    for swing in 0..=8 {
        let turn = first + PI * f64::from(swing);
        requirements.push_str(&format!(
            "  turn_{swing}: {{ of: spring.twist, at_most: 2 rad, after: {} s, before: {} s }}\n",
            turn - 1.0,
            turn + 1.0,
        ));
    }
    let scenario = rubbed(&head(40.0, 0.1, 1e-9), &requirements);
    let outcome = run_well(&scenario);
    for swing in 0..=8 {
        let turn = 1.0 - 0.12 * f64::from(swing);
        near(outcome.found(&format!("turn_{swing}")).unwrap(), turn, 1e-7);
    }
    let rest = *outcome.times("stuck", "rub").last().unwrap();
    near(rest, first + 8.0 * PI, 1e-6);
    near(rest, 26.6469035120, 1e-6);
    near(outcome.channel("spring.twist", "final"), 0.04, 1e-7);
    near(outcome.channel("rotor.speed", "final"), 0.0, 1e-12);
    // At rest the friction holds the spring.
    near(outcome.channel("rub.torque", "final"), 0.04, 1e-7);
    let way: f64 = (0..8).map(|swing| 2.0 - 0.12 * f64::from(2 * swing + 1)).sum::<f64>() + 1.0;
    same(outcome.number(&["energy", "lost"]), 0.06 * way, 1e-7);
}

/// (2/w)(pi - atan(D w/v)) for the belt below.
pub const SLIP: f64 = 0.37850937623831;

/// A slider on a spring, carried along by a belt.
pub fn belt(head: &str) -> String {
    format!(
        "{head}bodies:\n  slider: {{ inertia: 1 kg*m2, speed: 0.1 rad/s }}\n  \
         belt: {{ inertia: 1e10 kg*m2, speed: 0.1 rad/s }}\n\
         shafts:\n  spring: {{ between: [slider, ground], stiffness: 100 N*m/rad }}\n\
         loads:\n  pad: {{ body: slider, against: belt, law: {{ friction: {{ sliding: 7 N*m, breakaway: 10 N*m }} }} }}\n\
         requirements:\n  lowest: {{ of: spring.twist, at_least: 0 rad, after: 1.2 s }}\n",
    )
}

#[test]
fn sticks_and_slips_on_a_moving_belt() {
    // J 1, k 100, belt at 0.1, breakaway 10, sliding 7: slip lasts (2/w)(pi - atan(D w/v)) with
    // D = 3/100, stick lasts 2 D/v = 0.6. The belt is a wheel too heavy to be slowed.
    let outcome = run_well(&belt(&head(12.0, 0.01, 1e-9)));
    let (slip, stick) = (SLIP, 0.6);
    let sliding = outcome.times("sliding", "pad");
    let stuck: Vec<f64> =
        outcome.times("stuck", "pad").into_iter().filter(|time| *time > 0.5).collect();
    assert_eq!(sliding.len(), 12, "{sliding:?}");
    for (number, time) in sliding.iter().enumerate() {
        let cycles = f64::from(u32::try_from(number).unwrap());
        near(*time, 1.0 + cycles * (slip + stick), 1e-6);
        if let Some(end) = stuck.get(number) {
            near(*end, 1.0 + slip + cycles * (slip + stick), 1e-6);
        }
    }
    // Highest and lowest point: 0.07 +- hypot(D, v/w).
    near(outcome.channel("spring.twist", "max"), 0.07 + 0.03_f64.hypot(0.01), 1e-8);
    near(outcome.found("lowest").unwrap(), 0.07 - 0.03_f64.hypot(0.01), 1e-8);
}

/// Two wheels and a clutch between them.
pub fn clutch(head: &str) -> String {
    format!(
        "{head}bodies:\n  fast: {{ inertia: 2 kg*m2, speed: 150 rad/s }}\n  slow: {{ inertia: 3 kg*m2, speed: 0 rad/s }}\n\
         brakes:\n  clutch: {{ body: fast, against: slow, torque: 90 N*m, applied: 1 }}\n",
    )
}

#[test]
fn clutch_locks_two_wheels() {
    // J 2 at 150 rad/s and J 3 at rest, 90 N*m between them: final 60 rad/s, time
    // dw/(T (1/J1 + 1/J2)) = 2 s, heat J1 J2/(J1 + J2) dw^2/2 = 13500 J.
    let outcome = run_well(&clutch(&head(3.0, 0.5, 1e-9)));
    near(outcome.times("stuck", "clutch")[0], 2.0, 1e-9);
    near(outcome.channel("fast.speed", "final"), 60.0, 1e-8);
    near(outcome.channel("slow.speed", "final"), 60.0, 1e-8);
    same(outcome.number(&["energy", "lost"]), 13500.0, 1e-9);
    let series = outcome.series();
    near(series.at("clutch.torque", 1.0), -90.0, 1e-9);
    near(series.at("clutch.power", 1.0), -90.0 * 75.0, 1e-6);
    near(series.at("clutch.torque", 2.5), 0.0, 1e-9);
}

/// A body held by friction elements under a torque that rises by 10 N*m each second.
fn hold(bodies: &str, brakes: &str, driven: &str) -> f64 {
    let scenario = format!(
        "{}bodies:\n{bodies}\
         motors:\n  winch: {{ body: {driven}, law: {{ prescribed: {{ torque: {{ ramp: {{ start: 0 s, end: 20 s, from: 0 N*m, to: 200 N*m }} }} }} }} }}\n\
         {brakes}",
        head(15.0, 0.05, 1e-8),
    );
    let outcome = run_well(&scenario);
    let events = outcome.events();
    let first = events.iter().find(|event| event.kind == "sliding");
    10.0 * first.unwrap_or_else(|| panic!("nothing moves\n{scenario}")).time
}

#[test]
fn elements_on_one_body_hold_the_sum_of_their_limits() {
    let torque = hold(
        "  drum: { inertia: 2 kg*m2 }\n",
        "brakes:\n  first: { body: drum, torque: 60 N*m, applied: 1 }\n  \
         second: { body: drum, torque: 20 N*m, applied: 1 }\n",
        "drum",
    );
    near(torque, 80.0, 1e-5);
    let torque = hold(
        "  drum: { inertia: 2 kg*m2 }\n",
        "loads:\n  gland: { body: drum, law: { friction: { sliding: 10 N*m, breakaway: 25 N*m } } }\n\
         brakes:\n  holding: { body: drum, torque: 40 N*m, breakaway: 50 N*m, applied: 0.5 }\n",
        "drum",
    );
    near(torque, 50.0, 1e-5);
}

#[test]
fn elements_of_a_rigid_train_hold_through_its_ratio() {
    // Fast shaft three times as fast: 15 N*m there hold 45 N*m on the slow one.
    let torque = hold(
        "  slow: { inertia: 2 kg*m2 }\n  fast: { inertia: 0.1 kg*m2 }\n",
        "gear_pairs:\n  step_up: { between: [fast, slow], ratio: -3 }\n\
         brakes:\n  first: { body: fast, torque: 15 N*m, applied: 1 }\n  \
         second: { body: slow, torque: 30 N*m, applied: 1 }\n",
        "slow",
    );
    near(torque, 75.0, 1e-5);
}

#[test]
fn loops_of_brakes_hold_what_statics_allows() {
    // Brake on A, brake on B, clutch between them, torque on A: held up to A's limit plus the
    // smaller of the clutch's and B's.
    for (a, b, clutch, limit) in [
        (50.0, 50.0, 100.0, 100.0),
        (50.0, 50.0, 30.0, 80.0),
        (20.0, 100.0, 60.0, 80.0),
        (20.0, 20.0, 200.0, 40.0),
    ] {
        let torque = hold(
            "  a: { inertia: 2 kg*m2 }\n  b: { inertia: 3 kg*m2 }\n",
            &format!(
                "brakes:\n  on_a: {{ body: a, torque: {a} N*m, applied: 1 }}\n  \
                 on_b: {{ body: b, torque: {b} N*m, applied: 1 }}\n  \
                 clutch: {{ body: a, against: b, torque: {clutch} N*m, applied: 1 }}\n"
            ),
            "a",
        );
        near(torque, limit, 1e-5);
    }
}

#[test]
fn a_held_body_breaks_away_on_time() {
    // 40 + 20.5 sin(20 t) against a breakaway of 60.4: at the angle asin(20.4/20.5), and once
    // a period from then on; a train at rest gives the step control nothing to see.
    let scenario = format!(
        "{}bodies:\n  drum: {{ inertia: 5 kg*m2 }}\n\
         motors:\n  pull: {{ body: drum, law: {{ prescribed: {{ torque: {{ sine: {{ mean: 40 N*m, amplitude: 20.5 N*m, \
         frequency: {} Hz, phase: 0 deg }} }} }} }} }}\n\
         loads:\n  rub: {{ body: drum, law: {{ friction: {{ sliding: 60.4 N*m }} }} }}\n",
        head(6.0, 0.5, 1e-9),
        20.0 / (2.0 * PI),
    );
    let outcome = run_well(&scenario);
    let sliding = outcome.times("sliding", "rub");
    let first = (20.4_f64 / 20.5).asin() / 20.0;
    assert_eq!(sliding.len(), 19, "{sliding:?}");
    for (number, time) in sliding.iter().enumerate() {
        let turns = f64::from(u32::try_from(number).unwrap());
        near(*time, first + turns * PI / 10.0, 1e-6);
    }
}

#[test]
fn short_pulse_on_a_body_at_rest_is_not_overlooked() {
    // 20 ms of 100 N*m on 1 kg*m2: 2 rad/s.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  kick: {{ body: wheel, law: {{ prescribed: {{ torque: {{ pulse: {{ start: 7 s, end: 7.02 s, base: 0 N*m, peak: 100 N*m }} }} }} }} }}\n",
        head(10.0, 1.0, 1e-7),
    );
    let outcome = run_through(&scenario);
    near(outcome.channel("wheel.speed", "final"), 2.0, 1e-9);
}
