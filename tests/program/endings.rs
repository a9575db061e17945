//! Runs that cannot go on, and what they say; figures that belong to an instant.
//!
//! Expected: the contract as the README documents it, worked out by hand for each case.

use super::helper::{Outcome, check, head, near, run, run_through, run_well};

/// A wheel of 1 kg*m2 under a torque of 10 N*m for 2 s.
fn wheel(more: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 10 N*m }} }} }}\n{more}",
        head(2.0, 0.1, 1e-9),
    )
}

/// Fails unless the run was given up at a time for a reason that holds these words.
#[track_caller]
fn given_up(outcome: &Outcome, time: f64, words: &[&str]) {
    assert_eq!(outcome.status, Some(3), "{}", outcome.stderr);
    assert_eq!(outcome.at(&["completed"]), false);
    near(outcome.number(&["end_time"]), time, 1e-9);
    for word in words {
        assert!(outcome.stderr.contains(word), "no {word:?} in {}", outcome.stderr);
    }
    assert!(outcome.series().column("time").iter().all(|row| *row <= time + 1e-9));
}

/// A brake pressed by the product of two halves, one of which a protection sets.
fn pressed(to: f64, over: f64) -> Outcome {
    run(&wheel(&format!(
        "brakes:\n  stop: {{ body: wheel, torque: 20 N*m, applied: {{ product: [half, other] }} }}\n\
         protections:\n  trip: {{ when: {{ time: 0.5 s }}, then: [ {{ set: signals.half, to: {to}, over: {over} s }} ] }}\n\
         requirements:\n  slow: {{ of: wheel.speed, at_most: 100 rad/s }}\n\
         signals:\n  half: 0.5\n  other: 0.5\n",
    )))
}

#[test]
fn a_brake_pressed_by_more_than_all_ends_the_run() {
    // 4 times 0.5 at once; on a ramp from 0.5 to 4 in 1 s the product passes 1 at 0.5 + 1.5/3.5 s.
    let outcome = pressed(4.0, 0.0);
    given_up(&outcome, 0.5, &["`brakes.stop.applied`", "reaches 2 at 0.5 s", "from 0 to 1"]);
    assert!(outcome.met("slow").is_none());
    given_up(&pressed(4.0, 1.0), 0.5 + 1.5 / 3.5, &["`brakes.stop.applied`"]);
    given_up(&pressed(-1.0, 0.0), 0.5, &["`brakes.stop.applied`", "reaches -0.5"]);
    assert_eq!(pressed(2.0, 0.5).status, Some(0), "pressed to exactly 1");
}

#[test]
fn a_negative_scale_or_voltage_ends_the_run() {
    let set = |to: &str| {
        format!(
            "signals:\n  share: 1\n\
             protections:\n  trip: {{ when: {{ time: 0.5 s }}, then: [ {{ set: signals.share, to: {to} }} ] }}\n"
        )
    };
    let load = "loads:\n  oil: { body: wheel, law: { viscous: { coefficient: 1 N*m*s/rad } }, scale: share }\n";
    let outcome = run(&wheel(&format!("{load}{}", set("-1"))));
    given_up(&outcome, 0.5, &["`loads.oil.scale`", "reaches -1", "must not be negative"]);
    // A prescribed torque may be scaled below zero.
    let load =
        "loads:\n  pull: { body: wheel, law: { prescribed: { torque: 1 N*m } }, scale: share }\n";
    assert_eq!(run(&wheel(&format!("{load}{}", set("-1")))).status, Some(0));
    let motor = format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ induction: {{ synchronous_speed: 100 rad/s, \
         breakdown_torque: 10 N*m, breakdown_slip: 0.4, voltage: share }} }} }}\n{}",
        head(2.0, 0.1, 1e-9),
        set("-0.5"),
    );
    given_up(&run(&motor), 0.5, &["`motors.push.law.induction.voltage`", "reaches -0.5"]);
}

#[test]
fn a_magnet_that_runs_away_ends_the_run() {
    let outcome = run(&format!(
        "{}bodies:\n  a: {{ inertia: 1 kg*m2 }}\n  b: {{ inertia: 1 kg*m2 }}\n\
         magnetic_couplings:\n  joint: {{ between: [a, b], pole_pairs: 2, pull_out: 10 N*m }}\n\
         loads:\n  pull: {{ body: b, law: {{ prescribed: {{ torque: {{ ramp: {{ start: 0.5 s, end: 1 s, from: 0 N*m, to: 1e300 N*m }} }} }} }} }}\n",
        head(2.0, 0.1, 1e-9),
    ));
    assert_eq!(outcome.status, Some(3), "{}", outcome.stderr);
    assert!(outcome.stderr.contains("`joint`"), "{}", outcome.stderr);
    assert!(outcome.number(&["end_time"]) >= 0.5);
}

#[test]
fn friction_of_no_torque_is_absent() {
    let outcome = run_well(&wheel(
        "loads:\n  gland: { body: wheel, law: { friction: { sliding: 0 N*m } } }\n",
    ));
    assert!(outcome.events().is_empty(), "{}", outcome.file("events.csv"));
}

#[test]
fn a_limit_on_slips_is_passed_at_the_slip() {
    let outcome = run_through(&format!(
        "{}bodies:\n  a: {{ inertia: 1 kg*m2 }}\n  b: {{ inertia: 1 kg*m2 }}\n\
         magnetic_couplings:\n  joint: {{ between: [a, b], pole_pairs: 2, pull_out: 10 N*m }}\n\
         motors:\n  push: {{ body: a, law: {{ prescribed: {{ torque: 40 N*m }} }} }}\n\
         requirements:\n  none: {{ of: joint.slips, at_most: 0 }}\n  \
         two: {{ of: joint.slips, at_most: 2 }}\n  third: {{ of: joint.slips, reaches: 3 }}\n",
        head(2.0, 0.01, 1e-8),
    ));
    let slips = outcome.slip_times("joint");
    assert_eq!(outcome.times("requirement", "none"), [slips[0]]);
    assert_eq!(outcome.times("requirement", "two"), [slips[2]]);
    assert_eq!(outcome.found("third"), Some(slips[2]));
    assert_eq!(outcome.channel("joint.slips", "max_time"), slips[slips.len() - 1]);
}

#[test]
fn a_least_number_of_slips_is_told_to_be_out_of_reach() {
    let outcome = check(&format!(
        "{}bodies:\n  a: {{ inertia: 1 kg*m2 }}\n  b: {{ inertia: 1 kg*m2 }}\n\
         magnetic_couplings:\n  joint: {{ between: [a, b], pole_pairs: 2, pull_out: 10 N*m }}\n\
         requirements:\n  slips: {{ of: joint.slips, at_least: 1 }}\n",
        head(2.0, 0.01, 1e-8),
    ));
    assert_eq!(outcome.status, Some(0));
    assert!(outcome.stderr.contains("`reaches: 1`"), "{}", outcome.stderr);
}

#[test]
fn a_motor_that_starts_at_its_speed_has_no_run_up() {
    for (speed, run_up) in [("99 rad/s", false), ("0 rad/s", true)] {
        let outcome = run_well(&format!(
            "{}bodies:\n  wheel: {{ inertia: 1 kg*m2, speed: {speed} }}\n\
             motors:\n  drive: {{ body: wheel, law: {{ induction: {{ synchronous_speed: 100 rad/s, \
             breakdown_torque: 100 N*m, breakdown_slip: 0.4 }} }} }}\n\
             loads:\n  late: {{ body: wheel, law: {{ prescribed: {{ torque: {{ step: {{ at: 5 s, from: 0 N*m, to: -60 N*m }} }} }} }} }}\n",
            head(8.0, 0.1, 1e-8),
        ));
        // The late load pulls it below 95 % in both cases: that is no run-up.
        assert!(outcome.channel("wheel.speed", "final") < 95.0);
        let found = outcome.at(&["motors", "drive", "run_up_time"]);
        assert_eq!(found.is_null(), !run_up, "{speed}: {found}");
    }
}

#[test]
fn the_last_row_at_a_jump_is_from_the_right_and_final_from_the_left() {
    let outcome = run_well(&format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {{ step: {{ at: 2 s, from: 1 N*m, to: 7 N*m }} }} }} }} }}\n",
        head(2.0, 0.5, 1e-9),
    ));
    near(outcome.channel("push.torque", "final"), 1.0, 1e-12);
    near(outcome.channel("push.torque", "max"), 7.0, 1e-12);
    let series = outcome.series();
    assert_eq!(series.rows.len(), 5);
    near(series.at("push.torque", 2.0), 7.0, 1e-12);
    near(series.at("wheel.speed", 2.0), 2.0, 1e-9);
}

#[test]
fn corners_of_a_load_that_sticks_at_rest_are_located() {
    // J = 1, 10 N*m up to 10 rad/s, then 2 N*m*s/rad more. From 20 rad/s: u = w - 5 falls from 15
    // to 5 as exp(-2t), ln(3)/2 s; then 1 s in a straight line. A fixed step of 10 ms that runs over the
    // corner is off by its square; the same case mirrored.
    for sign in [1, -1] {
        let outcome = run_well(&format!(
            "lodeshaft: 1\ntitle: A corner\nduration: 2 s\nsolver: {{ method: rk4, step: 10 ms }}\n\
             bodies:\n  wheel: {{ inertia: 1 kg*m2, speed: {} rad/s }}\n\
             loads:\n  drag: {{ body: wheel, law: {{ curve: {{ points: [[0 rad/s, 10 N*m], [10 rad/s, 10 N*m], [20 rad/s, 30 N*m]] }} }} }}\n",
            20 * sign,
        ));
        near(outcome.times("stuck", "drag")[0], 0.5 * 3.0_f64.ln() + 1.0, 1e-8);
        near(outcome.channel("wheel.speed", "final"), 0.0, 1e-12);
    }
}
