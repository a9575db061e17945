//! Signals: what is typed is what acts, seen in the torque of a prescribed motor.
//!
//! Expected: the definitions of the scenario reference, worked out by hand.

use super::helper::{Folder, Outcome, call, head, near, run, run_well, same};

/// A heavy wheel with a torque by a signal.
fn course(signal: &str, more: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 1e6 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {signal} }} }} }}\n{more}",
        head(10.0, 0.5, 1e-8),
    )
}

/// Values of the torque at times that stand in rows.
#[track_caller]
fn expect(outcome: &Outcome, values: &[(f64, f64)]) {
    let series = outcome.series();
    for (time, value) in values {
        near(series.at("push.torque", *time), *value, 1e-9);
    }
}

#[test]
fn steps_ramps_and_pulses_hold_from_the_right() {
    let step = "{ step: { at: 3 s, from: 2 N*m, to: 5 N*m } }";
    expect(&run_well(&course(step, "")), &[(0.0, 2.0), (2.5, 2.0), (3.0, 5.0), (10.0, 5.0)]);
    let ramp = "{ ramp: { start: 2 s, end: 4 s, from: 1 N*m, to: -3 N*m } }";
    expect(
        &run_well(&course(ramp, "")),
        &[(0.0, 1.0), (2.0, 1.0), (3.0, -1.0), (4.0, -3.0), (9.0, -3.0)],
    );
    let pulse = "{ pulse: { start: 2 s, end: 4 s, base: 1 N*m, peak: 7 N*m } }";
    expect(
        &run_well(&course(pulse, "")),
        &[(1.5, 1.0), (2.0, 7.0), (3.5, 7.0), (4.0, 1.0), (10.0, 1.0)],
    );
    // Corners outside the run.
    let early = "{ ramp: { start: -2 s, end: 14 s, from: 0 N*m, to: 16 N*m } }";
    expect(&run_well(&course(early, "")), &[(0.0, 2.0), (5.0, 7.0), (10.0, 12.0)]);
}

#[test]
fn points_run_straight_and_hold_their_ends() {
    let points = "{ points: [[1 s, 2 N*m], [3 s, 6 N*m], [3 s, -1 N*m], [7 s, 3 N*m]] }";
    let outcome = run_well(&course(points, ""));
    expect(
        &outcome,
        &[
            (0.0, 2.0),
            (1.0, 2.0),
            (2.0, 4.0),
            (2.5, 5.0),
            (3.0, -1.0),
            (5.0, 1.0),
            (7.0, 3.0),
            (10.0, 3.0),
        ],
    );
    near(outcome.channel("push.torque", "max"), 6.0, 1e-12);
    near(outcome.channel("push.torque", "min"), -1.0, 1e-12);
    // The run goes beyond the last point.
    assert!(!outcome.at(&["warnings"]).as_array().unwrap().is_empty());
}

#[test]
fn sines_follow_their_formula() {
    let sine = "{ sine: { mean: 1 N*m, amplitude: 2 N*m, frequency: 0.3 Hz, phase: 40 deg } }";
    let value =
        |t: f64| 1.0 + 2.0 * (std::f64::consts::TAU * 0.3 * t + 40.0_f64.to_radians()).sin();
    expect(&run_well(&course(sine, "")), &[0.0, 1.5, 4.0, 9.5].map(|t| (t, value(t))));
}

#[test]
fn sums_and_products_of_named_signals() {
    let named = "signals:\n  base: { step: { at: 3 s, from: 2 N*m, to: 5 N*m } }\n  \
                 share: { ramp: { start: 0 s, end: 10 s, from: 0, to: 1 } }\n  \
                 both: { sum: [base, 4 N*m, { ramp: { start: 0 s, end: 10 s, from: 0 N*m, to: 10 N*m } }] }\n";
    expect(&run_well(&course("base", named)), &[(2.0, 2.0), (3.0, 5.0)]);
    expect(&run_well(&course("both", named)), &[(2.0, 8.0), (3.0, 12.0), (10.0, 19.0)]);
    expect(
        &run_well(&course("{ product: [share, base] }", named)),
        &[(2.0, 0.4), (3.0, 1.5), (10.0, 5.0)],
    );
    expect(&run_well(&course("{ product: [share, share, 3 N*m] }", named)), &[(5.0, 0.75)]);
    let scaled = course("base", named).replace("} } }\nsignals", "} }, scale: share }\nsignals");
    assert!(scaled.contains("scale: share"), "{scaled}");
    expect(&run_well(&scaled), &[(2.0, 0.4), (3.0, 1.5), (10.0, 5.0)]);
}

#[test]
fn wrong_signals_are_faults() {
    for (signal, more) in [
        ("{ ramp: { start: 4 s, end: 4 s, from: 0 N*m, to: 1 N*m } }", ""),
        ("{ ramp: { start: 4 s, end: 3 s, from: 0 N*m, to: 1 N*m } }", ""),
        ("{ points: [[2 s, 0 N*m], [1 s, 3 N*m]] }", ""),
        ("{ sum: [1 N*m, 1 rad/s] }", ""),
        ("{ product: [1 N*m, 1 N*m] }", ""),
        ("speed", "signals:\n  speed: { step: { at: 1 s, from: 0 rad/s, to: 1 rad/s } }\n"),
        ("missing", ""),
        ("ring", "signals:\n  ring: { sum: [chain, 1 N*m] }\n  chain: { sum: [ring, 1 N*m] }\n"),
    ] {
        let outcome = run(&course(signal, more));
        assert_eq!(outcome.status, Some(2), "{signal}\n{}", outcome.stderr);
        assert!(outcome.stderr.contains("case.yaml:"), "{}", outcome.stderr);
    }
}

#[test]
fn tables_are_read_beside_the_scenario() {
    let folder = Folder::new();
    let table =
        "{ table: { file: course.csv, time: clock, value: pull, unit: \"kN*m\", time_unit: ms } }";
    folder.write("case.yaml", &course(table, ""));
    folder.write(
        "course.csv",
        "pull,clock,remark\n0.002,0,a\n0.004,2000,b\n0.004,4000,c\n-0.001,4000,d\n0,9000,e\n",
    );
    let arguments = ["run", "case.yaml", "--out", "out", "--no-charts", "--format", "json"];
    let outcome = call(folder, &arguments, "");
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    expect(&outcome, &[(0.0, 2.0), (1.0, 3.0), (3.0, 4.0), (4.0, -1.0), (9.0, 0.0), (10.0, 0.0)]);
    for bad in ["clock\n1\n2\n", "clock,pull\n1,2\n0,3\n", "clock,pull\n0,a\n", ""] {
        let folder = Folder::new();
        folder.write("case.yaml", &course(table, ""));
        folder.write("course.csv", bad);
        let outcome = call(folder, &arguments, "");
        assert_eq!(outcome.status, Some(2), "{bad:?}\n{}", outcome.stderr);
    }
}

#[test]
fn turbulence_has_its_mean_and_spread_and_repeats() {
    // Intensity 12 % of 10 m/s over ten minutes; a series has less variance than the whole
    // spectrum (part lies above its highest frequency) and scatters: within a third.
    let scenario = |seed: u32| {
        format!(
            "{}bodies:\n  hub: {{ inertia: 1e12 kg*m2, speed: 1 rad/s }}\n\
             loads:\n  blades: {{ body: hub, law: {{ axial_rotor: {{ radius: 10 m, density: 1.225 kg/m3, pitch: 0 deg, \
             flow: {{ turbulence: {{ mean: 10 m/s, intensity: 12 %, length_scale: 80 m, seed: {seed} }} }} }} }} }}\n",
            head(600.0, 0.5, 1e-6),
        )
    };
    let flow = |seed: u32| run_well(&scenario(seed)).series().column("blades.flow");
    let first = flow(1);
    assert_eq!(first, flow(1));
    assert_ne!(first, flow(2));
    let mean = first.iter().sum::<f64>() / first.len() as f64;
    let spread =
        (first.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / first.len() as f64).sqrt();
    near(mean, 10.0, 0.5);
    same(spread, 1.2, 0.33);
}
