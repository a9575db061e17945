//! Trains at the edge of arithmetic: the right answer or a clear stop, in bounded time.
//!
//! Closed forms stand beside each check. The bound on time is wide, since the machine may be
//! busy; it is there to catch a run that would never end.

use super::helper::{Folder, Outcome, call, head, near, same};
use std::fmt::Write as _;
use std::time::{Duration, Instant};

/// Longest time that any of these runs may take.
const BOUND: Duration = Duration::from_secs(240);

/// Runs within the bound; what it came to is for the test to judge.
fn bounded(scenario: &str) -> Outcome {
    let folder = Folder::new();
    folder.write("case.yaml", scenario);
    let begun = Instant::now();
    let arguments = ["run", "case.yaml", "--out", "out", "--no-charts", "--format", "json"];
    let outcome = call(folder, &arguments, "");
    let took = begun.elapsed();
    assert!(took < BOUND, "took {took:?}\n{scenario}");
    let status = outcome.status.expect("it ends by itself, not by a signal");
    assert!(!outcome.stderr.contains("panicked"), "{}", outcome.stderr);
    assert!(matches!(status, 0..=3), "status {status}\n{}\n{scenario}", outcome.stderr);
    if status == 3 {
        assert!(outcome.stderr.contains("error: "), "a stop has a reason: {}", outcome.stderr);
    }
    outcome
}

/// Runs to a result.
#[track_caller]
fn through(scenario: &str) -> Outcome {
    let outcome = bounded(scenario);
    assert!(matches!(outcome.status, Some(0 | 1)), "{}\n{scenario}", outcome.stderr);
    outcome
}

/// Bodies in a row of 1 kg*m2, shafts of growing stiffness between them.
fn chain(stiffness: &[f64], duration: f64, tolerance: f64) -> String {
    let mut text = head(duration, duration / 10.0, tolerance);
    text.push_str("bodies:\n");
    for body in 0..=stiffness.len() {
        let _ = writeln!(text, "  body_{body}: {{ inertia: 1 kg*m2 }}");
    }
    text.push_str("shafts:\n");
    for (place, value) in stiffness.iter().enumerate() {
        let _ = writeln!(
            text,
            "  shaft_{place}: {{ between: [body_{place}, body_{}], stiffness: {value} N*m/rad }}",
            place + 1
        );
    }
    text.push_str(
        "motors:\n  push: { body: body_0, law: { prescribed: { torque: { pulse: { start: 0 s, end: 0.01 s, base: 0 N*m, peak: 100 N*m } } } } }\n",
    );
    text
}

#[test]
fn stiffness_over_twelve_decades_keeps_the_momentum() {
    // 1 N*m*s on a free train: the sum of J w is 1 at all later times (closed form).
    let stiffness: Vec<f64> = (-3..=9).map(|power| 10.0_f64.powi(power)).collect();
    let outcome = bounded(&chain(&stiffness, 0.2, 1e-8));
    if outcome.status != Some(3) {
        let sum: f64 = (0..=stiffness.len())
            .map(|body| outcome.channel(&format!("body_{body}.speed"), "final"))
            .sum();
        near(sum, 1.0, 1e-6);
    }
    // A stiff pair alone, hard against soft: its two-body frequency sqrt(2 k) shows in the twist's
    // largest value, impulse/(2 w) for a kick much shorter than the period is not met here, so the
    // mean speed is looked at.
    let outcome = through(&chain(&[1e9], 0.05, 1e-8));
    let mean =
        0.5 * (outcome.channel("body_0.speed", "final") + outcome.channel("body_1.speed", "final"));
    near(mean, 0.5, 1e-7);
}

#[test]
fn inertias_a_thousand_million_apart_swing_at_the_light_one() {
    // w = sqrt(p P (1/J1 + 1/J2)) with p 4, P 25 N*m, J 1e-3 and 1e6: 316.22776601684 rad/s.
    let scenario = format!(
        "{}bodies:\n  light: {{ inertia: 1e-3 kg*m2 }}\n  heavy: {{ inertia: 1e6 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [light, heavy], pole_pairs: 4, pull_out: 25 N*m, initial_load_angle: 0.01 deg }}\n\
         requirements:\n  quarter: {{ of: coupling.load_angle, reaches: 0, signed: true }}\n",
        head(0.1, 0.001, 1e-11),
    );
    let outcome = through(&scenario);
    let quarter = 0.25 * std::f64::consts::TAU / 316.22776601684 * (1.0 - 0.5e-9);
    // Amplitude 1.7e-4 rad lengthens the period by its square over 16.
    same(outcome.found("quarter").unwrap(), quarter, 1e-7);
}

#[test]
fn undamped_swings_neither_grow_nor_die() {
    // Energy of an undamped pendulum is kept: its largest swing is its first, 500 periods on.
    let scenario = format!(
        "{}bodies:\n  rotor: {{ inertia: 1 kg*m2, speed: 1.2 rad/s }}\n\
         magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: 1, pull_out: 1 N*m }}\n\
         requirements:\n  late: {{ of: coupling.load_angle, at_most: 2 rad, after: 3600 s }}\n",
        head(3660.0, 1.0, 1e-9),
    );
    let outcome = through(&scenario);
    // w^2/2 = 1 - cos of the turning point.
    let turning = (1.0_f64 - 0.72).acos();
    same(outcome.found("late").unwrap(), turning, 1e-5);
    assert_eq!(outcome.slips("coupling"), 0);
}

#[test]
fn a_coupling_of_next_to_no_torque_lets_its_rotor_run() {
    // 1e-12 N*m on 1 kg*m2 that is pushed by 1 N*m: w = t, angle t^2/2; slips at odd
    // multiples of pi.
    let scenario = format!(
        "{}bodies:\n  rotor: {{ inertia: 1 kg*m2, speed: 0 rad/s }}\n\
         magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: 3, pull_out: 1e-12 N*m }}\n\
         motors:\n  push: {{ body: rotor, law: {{ prescribed: {{ torque: 1 N*m }} }} }}\n",
        head(10.0, 1.0, 1e-9),
    );
    let outcome = through(&scenario);
    same(outcome.channel("rotor.speed", "final"), 10.0, 1e-9);
    let slips = (3.0 * 50.0 / std::f64::consts::PI + 1.0) / 2.0;
    assert_eq!(outcome.slips("coupling"), slips.floor() as u64);
    let first = (2.0 * std::f64::consts::PI / 3.0).sqrt();
    near(outcome.slip_times("coupling")[0], first, 1e-7);
}

#[test]
fn a_hundred_frictions_stop_together() {
    // A hundred glands of 0.5 N*m on one wheel: J w/(100 * 0.5) = 2 s; then thirty wheels that
    // turn as one, each rubbed and at rest until the pull of 30 N*m is exceeded at 5 s.
    let mut text = head(4.0, 0.5, 1e-8);
    text.push_str("bodies:\n  wheel: { inertia: 2 kg*m2, speed: 50 rad/s }\nloads:\n");
    for gland in 0..100 {
        let _ = writeln!(
            text,
            "  gland_{gland}: {{ body: wheel, law: {{ friction: {{ sliding: 0.5 N*m, breakaway: 1 N*m }} }} }}"
        );
    }
    let outcome = through(&text);
    let stuck = outcome.events();
    let stuck = stuck.iter().find(|event| event.kind == "stuck").expect("it comes to rest");
    near(stuck.time, 2.0, 1e-6);
    near(outcome.channel("wheel.speed", "final"), 0.0, 1e-12);
    same(outcome.number(&["energy", "lost"]), 2500.0, 1e-7);

    let mut text = head(6.0, 0.5, 1e-8);
    text.push_str("bodies:\n");
    for wheel in 0..30 {
        let _ = writeln!(text, "  wheel_{wheel}: {{ inertia: 0.1 kg*m2 }}");
    }
    text.push_str("shafts:\n");
    for wheel in 1..30 {
        let _ = writeln!(
            text,
            "  joint_{wheel}: {{ between: [wheel_{}, wheel_{wheel}], rigid: true }}",
            wheel - 1
        );
    }
    text.push_str("loads:\n");
    for wheel in 0..30 {
        let _ = writeln!(
            text,
            "  gland_{wheel}: {{ body: wheel_{wheel}, law: {{ friction: {{ sliding: 0.5 N*m, breakaway: 1 N*m }} }} }}"
        );
    }
    text.push_str("motors:\n  winch: { body: wheel_0, law: { prescribed: { torque: { ramp: { start: 0 s, end: 6 s, from: 0 N*m, to: 36 N*m } } } } }\n");
    let outcome = through(&text);
    let events = outcome.events();
    let first = events.iter().find(|event| event.kind == "sliding").expect("it breaks away");
    near(first.time, 5.0, 1e-5);
    // (6 t - 15)/3 rad/s2 from 5 s to 6 s.
    near(outcome.channel("wheel_29.speed", "final"), 6.0, 1e-4);
}

#[test]
fn thirty_brakes_on_elastic_wheels_come_to_rest() {
    // Thirty wheels on shafts, each with a brake of its own: all energy ends as heat.
    let mut text = head(5.0, 0.5, 1e-7);
    text.push_str("bodies:\n");
    for wheel in 0..30 {
        let _ = writeln!(text, "  wheel_{wheel}: {{ inertia: 0.1 kg*m2, speed: 3 rad/s }}");
    }
    text.push_str("shafts:\n");
    for wheel in 1..30 {
        let _ = writeln!(
            text,
            "  joint_{wheel}: {{ between: [wheel_{}, wheel_{wheel}], stiffness: 500 N*m/rad, damping: 0.5 N*m*s/rad }}",
            wheel - 1
        );
    }
    text.push_str("brakes:\n");
    for wheel in 0..30 {
        let torque = 0.2 + 0.002 * f64::from(wheel);
        let _ = writeln!(
            text,
            "  brake_{wheel}: {{ body: wheel_{wheel}, torque: {torque} N*m, applied: 1 }}"
        );
    }
    let outcome = bounded(&text);
    if outcome.status != Some(3) {
        for wheel in [0, 15, 29] {
            near(outcome.channel(&format!("wheel_{wheel}.speed"), "final"), 0.0, 1e-9);
        }
        assert!(outcome.number(&["energy", "residual_share"]) < 1e-4);
    }
}

#[test]
fn chatter_ends_in_bounded_time() {
    // Breakaway of 10 N*m shaken by 10.5 N*m at 2 kHz: it breaks away and sticks in each half
    // period, 4000 times a second; between, an impulse each way, so that it stays where it is.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 0.01 kg*m2 }}\n\
         motors:\n  shaker: {{ body: wheel, law: {{ prescribed: {{ torque: {{ sine: {{ mean: 0 N*m, amplitude: 10.5 N*m, frequency: 2 kHz, phase: 0 deg }} }} }} }} }}\n\
         loads:\n  rub: {{ body: wheel, law: {{ friction: {{ sliding: 10 N*m }} }} }}\n",
        head(0.25, 0.01, 1e-7),
    )
    .replace("2 kHz", "2000 Hz");
    let outcome = through(&scenario);
    let sliding = outcome.times("sliding", "rub").len();
    assert!((990..=1010).contains(&sliding), "{sliding} breaks in 500 periods");
    assert!(outcome.channel("wheel.angle", "final").abs() < 1e-3);
    // A speed loop that is far too stiff bangs between its limits.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 0.01 kg*m2 }}\n\
         motors:\n  servo: {{ body: wheel, law: {{ speed_loop: {{ speed: 10 rad/s, torque_limit: 5 N*m, gain: 1e6 N*m*s/rad, integral_time: 1 ms, lag: 1 ms }} }} }}\n\
         loads:\n  rub: {{ body: wheel, law: {{ friction: {{ sliding: 1 N*m }} }} }}\n",
        head(1.0, 0.01, 1e-6),
    );
    let outcome = bounded(&scenario);
    if outcome.status != Some(3) {
        let last = outcome.channel("wheel.speed", "final");
        assert!((5.0..15.0).contains(&last), "{last}");
    }
}

#[test]
fn durations_from_an_instant_to_years() {
    // 1 N*m on 1 kg*m2 for a nanosecond; a coast against viscous drag of 1e-7 N*m*s/rad for a
    // year: 100 exp(-c t/J).
    for (duration, law, expected) in [
        (
            1e-9,
            "motors:\n  push: { body: wheel, law: { prescribed: { torque: 1 N*m } } }\n",
            100.0 + 1e-9,
        ),
        (
            3.15576e7,
            "loads:\n  oil: { body: wheel, law: { viscous: { coefficient: 1e-7 N*m*s/rad } } }\n",
            100.0 * (-3.15576_f64).exp(),
        ),
    ] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: 1 kg*m2, speed: 100 rad/s }}\n{law}",
            head(duration, duration / 10.0, 1e-9),
        );
        let outcome = through(&scenario);
        same(outcome.channel("wheel.speed", "final"), expected, 1e-7);
        same(outcome.number(&["end_time"]), duration, 1e-12);
    }
}

#[test]
fn a_run_that_stability_makes_long_names_its_stiffest_part() {
    // c/J_e = 1e5 N*m*s/rad / 0.5 kg*m2 = 2e5 1/s: the real axis of dopri5 ends at 3.307, so a step
    // of 16 us and 37 million steps in ten minutes (closed form); told although the run is cut short.
    let text = "lodeshaft: 1\nduration: 600 s\nbodies:\n  a: { inertia: 1 kg*m2, speed: 1 rad/s }\n  b: { inertia: 1 kg*m2, speed: 0 rad/s }\n\
                shafts:\n  dashpot: { between: [a, b], stiffness: 1 N*m/rad, damping: 1e5 N*m*s/rad }\n\
                protections:\n  stop: { when: { time: 1 ms }, then: [{ end_run: true }] }\n";
    let outcome = through(text);
    assert!(outcome.stderr.contains("`dashpot` is the stiffest"), "{}", outcome.stderr);
    assert!(
        outcome.stderr.contains("2e5 1/s") || outcome.stderr.contains("200000 1/s"),
        "{}",
        outcome.stderr
    );
    assert!(outcome.stderr.contains("(shafts.dashpot)"), "{}", outcome.stderr);
}
