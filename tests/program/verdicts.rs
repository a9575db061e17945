//! Requirements on a channel whose course is known: the torque of a prescribed signal.
//!
//! Expected: the contract of requirements as the README documents it, worked out by hand for
//! signals of straight lines.

use super::helper::{Outcome, head, near, run, run_through};

/// A heavy wheel with a torque by a signal, and requirements on it; 10 s.
fn course(signal: &str, requirements: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 1000 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {signal} }} }} }}\n\
         requirements:\n{requirements}",
        head(10.0, 1.0, 1e-8),
    )
}

/// Rises from 0 to 8 N*m at 4 s, falls to -4 N*m at 10 s.
const HILL: &str = "{ points: [[0 s, 0 N*m], [4 s, 8 N*m], [10 s, -4 N*m]] }";

/// One requirement by its words.
fn judge(signal: &str, words: &str) -> (Outcome, Option<bool>, Option<f64>) {
    let outcome =
        run_through(&course(signal, &format!("  asked: {{ of: push.torque, {words} }}\n")));
    let (met, value) = (outcome.met("asked"), outcome.found("asked"));
    let expected = if met == Some(true) { 0 } else { 1 };
    assert_eq!(outcome.status, Some(expected), "{words}");
    (outcome, met, value)
}

/// Holds a verdict and its value against what is expected.
#[track_caller]
fn expect(signal: &str, words: &str, met: Option<bool>, value: Option<f64>) {
    let (outcome, found_met, found) = judge(signal, words);
    assert_eq!(found_met, met, "{words}: {:#}", outcome.at(&["requirements", "asked"]));
    match (found, value) {
        (Some(found), Some(value)) => near(found, value, 1e-7),
        (None, None) => {}
        other => panic!("{words}: {other:?}"),
    }
}

#[test]
fn limits_look_at_the_whole_window() {
    expect(HILL, "at_most: 8 N*m", Some(true), Some(8.0));
    expect(HILL, "at_most: 7.999 N*m", Some(false), Some(8.0));
    expect(HILL, "at_most: 5 N*m, before: 2 s", Some(true), Some(4.0));
    expect(HILL, "at_most: 5 N*m, after: 6 s", Some(true), Some(4.0));
    expect(HILL, "at_least: 2 N*m, after: 1 s, before: 7 s", Some(true), Some(2.0));
    expect(HILL, "at_least: 2 N*m, after: 0.9 s, before: 7 s", Some(false), Some(1.8));
}

#[test]
fn limits_compare_magnitudes_unless_signed() {
    // Between 8 s and 10 s the torque runs from 0 to -4 N*m.
    expect(HILL, "at_most: 3 N*m, after: 8 s", Some(false), Some(4.0));
    expect(HILL, "at_most: 3 N*m, after: 8 s, signed: true", Some(true), Some(0.0));
    expect(HILL, "at_least: 1 N*m, after: 9 s", Some(true), Some(2.0));
    expect(HILL, "at_least: -4 N*m, after: 9 s, signed: true", Some(true), Some(-4.0));
    expect(HILL, "at_least: -3.9 N*m, signed: true", Some(false), Some(-4.0));
    let outcome = run(&course(HILL, "  asked: { of: push.torque, at_least: -3 N*m }\n"));
    assert_eq!(outcome.status, Some(2), "{}", outcome.stderr);
    assert!(outcome.stderr.contains("signed"), "{}", outcome.stderr);
}

#[test]
fn reaching_counts_from_either_side() {
    expect(HILL, "reaches: 6 N*m", Some(true), Some(3.0));
    expect(HILL, "reaches: 6 N*m, within: 3.001 s", Some(true), Some(3.0));
    expect(HILL, "reaches: 6 N*m, within: 2.99 s", Some(false), Some(3.0));
    // From above: it comes down through 6 N*m at 5 s; the time is that of the run.
    expect(HILL, "reaches: 6 N*m, after: 4 s, within: 1.001 s", Some(true), Some(5.0));
    expect(HILL, "reaches: 6 N*m, after: 4 s, within: 0.9 s", Some(false), Some(5.0));
    expect(HILL, "reaches: 8.5 N*m", Some(false), None);
    // Magnitude: -2 N*m counts as 2 N*m after 8 s.
    expect(HILL, "reaches: 2 N*m, after: 7.5 s", Some(true), Some(9.0));
    expect(HILL, "reaches: 2 N*m, after: 7.5 s, signed: true", Some(false), None);
    expect(HILL, "reaches: -2 N*m, signed: true", Some(true), Some(9.0));
    expect(HILL, "reaches: 6 N*m, before: 2.5 s", Some(false), None);
}

#[test]
fn staying_counts_from_the_last_entry() {
    // Swings into 4 +- 1 N*m at 0.5 s, leaves at 2 s, is back at 4 s and stays.
    let swing =
        "{ points: [[0 s, 2 N*m], [1 s, 4 N*m], [3 s, 6 N*m], [5 s, 4 N*m], [10 s, 4.5 N*m]] }";
    expect(swing, "reaches: 4 N*m, stays_within: 25 %", Some(true), Some(4.0));
    expect(swing, "reaches: 4 N*m, stays_within: 1 N*m", Some(true), Some(4.0));
    expect(swing, "reaches: 4 N*m, stays_within: 25 %, within: 3.9 s", Some(false), Some(4.0));
    expect(
        swing,
        "reaches: 4 N*m, stays_within: 25 %, within: 1 s, before: 1.9 s",
        Some(true),
        Some(0.5),
    );
    // Within the band from `after` on.
    expect(
        swing,
        "reaches: 4 N*m, stays_within: 25 %, after: 6 s, within: 1 ms",
        Some(true),
        Some(6.0),
    );
    // It leaves a band of 10 % before the end.
    expect(swing, "reaches: 4 N*m, stays_within: 10 %", Some(false), None);
    // The band is entered, the value itself never met.
    let near_miss = "{ points: [[0 s, 0 N*m], [2 s, 3.8 N*m], [10 s, 3.8 N*m]] }";
    expect(near_miss, "reaches: 4 N*m, stays_within: 10 %", Some(true), Some(2.0 * 3.6 / 3.8));
    expect(near_miss, "reaches: 4 N*m", Some(false), None);
}

#[test]
fn a_window_beyond_the_end_cannot_be_judged() {
    for words in [
        "at_most: 8 N*m, before: 11 s",
        "at_most: 8 N*m, after: 12 s",
        "reaches: 6 N*m, before: 11 s",
    ] {
        let (_, met, _) = judge(HILL, words);
        assert_eq!(met, None, "{words}");
    }
    expect(HILL, "at_most: 8 N*m, before: 10 s", Some(true), Some(8.0));
    // The end as it turned out: a run told to end at 3 s has seen 6 N*m only.
    let requirements = "  asked: { of: push.torque, at_most: 6 N*m }\n  later: { of: push.torque, at_most: 9 N*m, before: 5 s }\n\
                        protections:\n  enough: { when: { time: 3 s }, then: [ { end_run: true } ] }\n";
    let outcome = run_through(&course(HILL, requirements));
    assert_eq!(outcome.met("asked"), Some(true));
    assert_eq!(outcome.met("later"), None);
    assert_eq!(outcome.status, Some(1));
    assert_eq!(outcome.at(&["completed"]).as_bool(), Some(true));
    near(outcome.number(&["end_time"]), 3.0, 1e-12);
}

#[test]
fn both_sides_of_a_jump_count() {
    let jump = "{ step: { at: 5 s, from: 7 N*m, to: 1 N*m } }";
    expect(jump, "at_most: 6 N*m, after: 5 s", Some(false), Some(7.0));
    expect(jump, "at_least: 2 N*m, before: 5 s", Some(false), Some(1.0));
    expect(jump, "at_least: 2 N*m, before: 4.999 s", Some(true), Some(7.0));
    // 4 N*m lies inside the jump and is passed there.
    let outcome = run_through(&course(jump, "  asked: { of: push.torque, at_most: 9 N*m }\n"));
    let series = outcome.series();
    near(series.at("push.torque", 4.0), 7.0, 1e-12);
    near(series.at("push.torque", 5.0), 1.0, 1e-12);
    near(outcome.channel("push.torque", "max"), 7.0, 1e-12);
    near(outcome.channel("push.torque", "final"), 1.0, 1e-12);
    // At the end of the run the value from the left is the final one.
    let last = "{ step: { at: 10 s, from: 7 N*m, to: 1 N*m } }";
    let outcome = run_through(&course(last, "  asked: { of: push.torque, at_most: 9 N*m }\n"));
    near(outcome.channel("push.torque", "final"), 7.0, 1e-12);
}

#[test]
fn extremes_are_those_of_the_continuous_course() {
    // The peak at 4.3 s lies between two rows.
    let peak = "{ points: [[0 s, 0 N*m], [4.3 s, 8 N*m], [4.4 s, 0 N*m]] }";
    let outcome = run_through(&course(peak, "  asked: { of: push.torque, at_most: 9 N*m }\n"));
    near(outcome.channel("push.torque", "max"), 8.0, 1e-9);
    near(outcome.channel("push.torque", "max_time"), 4.3, 1e-9);
    // A sine: mean + amplitude sin(2 pi f t + phase), many peaks between the rows.
    let sine = "{ sine: { mean: 3 N*m, amplitude: 2 N*m, frequency: 2.3 Hz, phase: 30 deg } }";
    let outcome = run_through(&course(
        sine,
        "  asked: { of: push.torque, at_most: 4.9 N*m, before: 0.05 s }\n",
    ));
    near(outcome.channel("push.torque", "max"), 5.0, 1e-9);
    near(outcome.channel("push.torque", "min"), 1.0, 1e-9);
    let turn = std::f64::consts::TAU * 2.3 * 0.05 + std::f64::consts::FRAC_PI_6;
    near(outcome.found("asked").unwrap(), 3.0 + 2.0 * turn.sin(), 1e-9);
    let first_peak = (60.0_f64 / 360.0) / 2.3;
    near(outcome.channel("push.torque", "max_time") % (1.0 / 2.3), first_peak, 1e-5);
}

#[test]
fn exactly_one_comparison_is_asked_for() {
    for words in [
        "after: 1 s",
        "at_most: 3 N*m, at_least: 1 N*m",
        "within: 3 s",
        "at_most: 3 N*m, within: 1 s",
    ] {
        let outcome = run(&course(HILL, &format!("  asked: {{ of: push.torque, {words} }}\n")));
        assert_eq!(outcome.status, Some(2), "{words}");
        assert!(outcome.stderr.contains("requirements.asked"), "{}", outcome.stderr);
    }
}

#[test]
fn slips_count_inside_the_window_only() {
    // A coupling under twice its pull-out torque from rest slips on and on.
    let scenario = |words: &str| {
        format!(
            "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
             magnetic_couplings:\n  coupling: {{ between: [wheel, ground], pole_pairs: 1, pull_out: 1 N*m, damping: 0.5 N*m*s/rad }}\n\
             motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 2 N*m }} }} }}\n\
             requirements:\n  asked: {{ of: coupling.slips, {words} }}\n  net: {{ of: coupling.net_slips, at_most: 100 }}\n",
            head(20.0, 1.0, 1e-9),
        )
    };
    let all = run_through(&scenario("at_most: 100"));
    let times = all.slip_times("coupling");
    assert!(times.len() > 6, "{times:?}");
    near(all.found("asked").unwrap(), times.len() as f64, 1e-12);
    let late = times.iter().filter(|time| **time >= 10.0).count();
    let outcome = run_through(&scenario(&format!("at_most: {late}, after: 10 s")));
    assert_eq!(outcome.met("asked"), Some(true));
    near(outcome.found("asked").unwrap(), late as f64, 1e-12);
    let outcome = run_through(&scenario(&format!("at_most: {}, after: 10 s", late - 1)));
    assert_eq!(outcome.met("asked"), Some(false));
}
