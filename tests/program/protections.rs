//! Protections: logic that acts once during the run.
//!
//! Expected: the contract of protections as the README documents it, worked out by hand.

use super::helper::{Folder, Outcome, call, head, near, run, run_through};

/// A wheel of 1 kg*m2 with a torque by a signal and protections; 10 s.
fn guarded(signal: &str, more: &str) -> Outcome {
    run_through(&format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {signal} }} }} }}\n{more}",
        head(10.0, 0.25, 1e-9),
    ))
}

#[test]
fn ends_the_run_at_a_time_and_after_its_delay() {
    let outcome = guarded(
        "1 N*m",
        "protections:\n  stop: { when: { time: 5 s }, then: [ { end_run: true } ] }\n",
    );
    near(outcome.number(&["end_time"]), 5.0, 1e-9);
    near(outcome.channel("wheel.speed", "final"), 5.0, 1e-9);
    assert_eq!(outcome.series().column("time").last().copied(), Some(5.0));
    let words = "protections:\n  stop: { when: { of: wheel.speed, at_least: 3 rad/s }, delay: 1.5 s, then: [ { end_run: true } ] }\n";
    let outcome = guarded("1 N*m", words);
    near(outcome.number(&["end_time"]), 4.5, 1e-7);
    near(outcome.times("protection", "stop").last().copied().unwrap(), 4.5, 1e-7);
}

#[test]
fn sets_a_signal_straight_to_a_value() {
    // At 3 rad/s (3 s) the scale runs from 1 to 0 in 2 s: 1 N*s more, in sum 4 rad/s.
    let words = "protections:\n  fade: { when: { of: wheel.speed, at_least: 3 rad/s }, then: [ { set: motors.push.scale, to: 0, over: 2 s } ] }\n";
    let outcome = guarded("1 N*m", words);
    let series = outcome.series();
    near(series.at("push.torque", 2.0), 1.0, 1e-12);
    near(series.at("push.torque", 4.0), 0.5, 1e-6);
    near(series.at("push.torque", 6.0), 0.0, 1e-12);
    near(outcome.channel("wheel.speed", "final"), 4.0, 1e-7);
    // A step at once, of the torque itself.
    let words = "protections:\n  turn: { when: { of: wheel.speed, at_least: 3 rad/s }, then: [ { set: motors.push.law.prescribed.torque, to: -2 N*m } ] }\n";
    let outcome = guarded("1 N*m", words);
    near(outcome.channel("wheel.speed", "max"), 3.0, 1e-8);
    near(outcome.channel("wheel.speed", "final"), 3.0 - 2.0 * 7.0, 1e-7);
    near(outcome.channel("push.torque", "max"), 1.0, 1e-12);
    near(outcome.channel("push.torque", "min"), -2.0, 1e-12);
}

#[test]
fn a_later_action_takes_over_from_the_present_value() {
    // From 2 s towards 0 in 4 s; at 4 s (value 0.5) back to 1 in 2 s.
    let words = "protections:\n  down: { when: { time: 2 s }, then: [ { set: motors.push.scale, to: 0, over: 4 s } ] }\n  \
                 up: { when: { time: 4 s }, then: [ { set: motors.push.scale, to: 1, over: 2 s } ] }\n";
    let series = guarded("1 N*m", words).series();
    for (time, torque) in [(2.0, 1.0), (3.0, 0.75), (4.0, 0.5), (5.0, 0.75), (6.0, 1.0), (8.0, 1.0)]
    {
        near(series.at("push.torque", time), torque, 1e-9);
    }
}

#[test]
fn a_condition_must_hold_without_a_break() {
    // Torque above 2 N*m for 1 s at 1 s, for 3 s at 4 s: `for: 2 s` is fulfilled at 6 s.
    let pulses = "{ points: [[0 s, 0 N*m], [1 s, 0 N*m], [1 s, 3 N*m], [2 s, 3 N*m], [2 s, 0 N*m], [4 s, 0 N*m], \
                  [4 s, 3 N*m], [7 s, 3 N*m], [7 s, 0 N*m]] }";
    let words = |hold: f64, delay: f64| {
        format!(
            "protections:\n  long: {{ when: {{ of: push.torque, at_least: 2 N*m, for: {hold} s }}, delay: {delay} s, then: [ {{ end_run: true }} ] }}\n"
        )
    };
    near(guarded(pulses, &words(2.0, 0.0)).number(&["end_time"]), 6.0, 1e-7);
    near(guarded(pulses, &words(0.0, 0.0)).number(&["end_time"]), 1.0, 1e-7);
    // The delay is not cancelled when the condition goes.
    near(guarded(pulses, &words(0.5, 2.0)).number(&["end_time"]), 3.5, 1e-7);
    near(guarded(pulses, &words(2.9, 2.0)).number(&["end_time"]), 8.9, 1e-7);
    near(guarded(pulses, &words(3.1, 0.0)).number(&["end_time"]), 10.0, 1e-9);
}

#[test]
fn conditions_compare_magnitudes_unless_signed() {
    let fall = "{ ramp: { start: 0 s, end: 10 s, from: 5 N*m, to: -5 N*m } }";
    let end = |words: &str| {
        let more = format!(
            "protections:\n  stop: {{ when: {{ of: push.torque, {words} }}, then: [ {{ end_run: true }} ] }}\n"
        );
        guarded(fall, &more).number(&["end_time"])
    };
    near(end("at_most: 2 N*m"), 3.0, 1e-7);
    near(end("at_most: -2 N*m, signed: true"), 7.0, 1e-7);
    near(end("at_least: 6 N*m"), 10.0, 1e-9);
    // True at the start counts at the start.
    assert!(end("at_least: 4 N*m") < 1e-6);
}

#[test]
fn each_acts_once() {
    let swing = "{ sine: { mean: 0 N*m, amplitude: 3 N*m, frequency: 1 Hz, phase: 0 deg } }";
    let words = "protections:\n  once: { when: { of: push.torque, at_least: 2 N*m }, then: [ { set: motors.push.scale, to: 0.9 } ] }\n";
    let outcome = guarded(swing, words);
    assert_eq!(outcome.times("protection", "once").len(), 1);
    near(
        outcome.times("protection", "once")[0],
        (2.0_f64 / 3.0).asin() / std::f64::consts::TAU,
        1e-7,
    );
}

#[test]
fn trips_on_the_first_slip() {
    // Twice the pull-out torque on a coupling: the drive is cut and the brake falls in 0.2 s
    // after the first slip; the wheel comes to rest and holds.
    let more = "magnetic_couplings:\n  coupling: { between: [wheel, ground], pole_pairs: 4, pull_out: 0.5 N*m, damping: 0.01 N*m*s/rad }\n\
                brakes:\n  holding: { body: wheel, torque: 20 N*m, applied: 0 }\n\
                protections:\n  trip: { when: { of: coupling.slips, at_least: 1 }, delay: 0.2 s, then: [ \
                { set: motors.push.scale, to: 0, over: 0 s }, { set: brakes.holding.applied, to: 1, over: 0.1 s } ] }\n";
    let outcome = guarded("1 N*m", more);
    let slip = outcome.slip_times("coupling")[0];
    near(outcome.times("protection", "trip").last().copied().unwrap(), slip + 0.2, 1e-7);
    near(outcome.channel("wheel.speed", "final"), 0.0, 1e-12);
    near(outcome.channel("push.torque", "final"), 0.0, 1e-12);
    assert!(outcome.times("stuck", "holding").last().copied().unwrap() > slip + 0.2);
}

#[test]
fn a_wrong_path_is_a_fault() {
    for path in ["motors.pusher.scale", "motors.push.inertia", "bodies.wheel.inertia"] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
             motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 1 N*m }} }} }}\n\
             protections:\n  stop: {{ when: {{ time: 1 s }}, then: [ {{ set: {path}, to: 0 }} ] }}\n",
            head(2.0, 0.5, 1e-8),
        );
        let outcome = run(&scenario);
        assert_eq!(outcome.status, Some(2), "{path}\n{}", outcome.stderr);
        assert!(outcome.stderr.contains("protections.stop"), "{}", outcome.stderr);
    }
}

/// A brake of 5 N*m that a protection lets fall while it cuts the drive.
const STOP: &str =
    "then: [ { set: motors.push.scale, to: 0 }, { set: brakes.holding.applied, to: 1 } ]";
const BRAKE: &str = "brakes:\n  holding: { body: wheel, torque: 5 N*m, applied: 0 }\n";

#[test]
fn over_speed_is_stopped() {
    // 1 rad/s2: 6 rad/s at 6 s, 0.2 s later the brake, which takes 5 rad/s2.
    let trip = format!(
        "{BRAKE}protections:\n  trip: {{ when: {{ of: wheel.speed, at_least: 6 rad/s }}, delay: 0.2 s, {STOP} }}\n"
    );
    let outcome = guarded("1 N*m", &trip);
    near(outcome.channel("wheel.speed", "max"), 6.2, 1e-7);
    near(outcome.channel("wheel.speed", "max_time"), 6.2, 1e-7);
    near(*outcome.times("stuck", "holding").last().unwrap(), 6.2 + 6.2 / 5.0, 1e-7);
}

#[test]
fn too_much_torque_for_too_long_is_stopped() {
    // A quarter of the torque stays in the first wheel: the shaft carries 0.75 N*m/s * t.
    let scenario = format!(
        "{}bodies:\n  first: {{ inertia: 1 kg*m2 }}\n  second: {{ inertia: 3 kg*m2 }}\n\
         shafts:\n  shaft: {{ between: [first, second], rigid: true }}\n\
         motors:\n  push: {{ body: first, law: {{ prescribed: {{ torque: {{ ramp: {{ start: 0 s, end: 8 s, from: 0 N*m, to: 8 N*m }} }} }} }} }}\n\
         protections:\n  trip: {{ when: {{ of: shaft.torque, at_least: 3 N*m, for: 1.5 s }}, delay: 0.5 s, then: [ {{ end_run: true }} ] }}\n",
        head(10.0, 0.25, 1e-9),
    );
    // 3 N*m at 4 s, held for 1.5 s, 0.5 s for the relay.
    near(run_through(&scenario).number(&["end_time"]), 6.0, 1e-7);
}

#[test]
fn slip_is_told_by_the_difference_of_speeds() {
    // A coupling far too weak: the wheel runs up as if free and its four pole pairs slip at 4 rad/s2.
    let weak = "magnetic_couplings:\n  coupling: { between: [wheel, ground], pole_pairs: 4, pull_out: 1e-7 N*m }\n";
    let trip = format!(
        "{weak}protections:\n  trip: {{ when: {{ of: coupling.slip_speed, at_least: 20 rad/s, for: 1 s }}, then: [ {{ end_run: true }} ] }}\n"
    );
    near(guarded("1 N*m", &trip).number(&["end_time"]), 6.0, 1e-6);
}

#[test]
fn loss_of_drive_lets_the_brake_fall() {
    // The torque is gone at 3 s; half a second later the brake stops 3 rad/s in 0.6 s.
    let gone = "{ step: { at: 3 s, from: 1 N*m, to: 0 N*m } }";
    let trip = format!(
        "{BRAKE}protections:\n  lost: {{ when: {{ of: push.torque, at_most: 0.1 N*m, for: 0.5 s }}, {STOP} }}\n"
    );
    let outcome = guarded(gone, &trip);
    near(*outcome.times("protection", "lost").last().unwrap(), 3.5, 1e-9);
    near(*outcome.times("stuck", "holding").last().unwrap(), 4.1, 1e-7);
}

#[test]
fn a_margin_says_how_late_the_trip_may_come() {
    // 6 rad/s at 6 s, at most 7.5 rad/s allowed, 1 rad/s2: 1.5 s.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 1 N*m }} }} }}\n{BRAKE}\
         protections:\n  trip: {{ when: {{ of: wheel.speed, at_least: 6 rad/s }}, delay: 0.5 s, {STOP} }}\n\
         requirements:\n  speed: {{ of: wheel.speed, at_most: 7.5 rad/s }}\n\
         studies:\n  how_late: {{ margin: {{ vary: protections.trip.delay, between: [0 s, 4 s] }} }}\n",
        head(10.0, 0.25, 1e-9),
    );
    let folder = Folder::new();
    folder.write("case.yaml", &scenario);
    let outcome =
        call(folder, &["study", "case.yaml", "how_late", "--out", "out", "--format", "json"], "");
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    near(outcome.number(&["studies", "how_late", "value"]), 1.5, 0.0021);
    near(outcome.number(&["studies", "how_late", "margin_share"]), 2.0, 0.0042);
}
