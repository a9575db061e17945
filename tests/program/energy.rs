//! Conservation: the energy audit of known cases and of trains drawn at random.
//!
//! First law: what motors put in is taken out, lost or stored. The stored energy is worked out
//! here again from the last row: J w^2/2, k twist^2/2 and K (1 - cos phase).

use super::helper::{Outcome, head, near, run_through, same};
use rand::Rng;
use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use std::fmt::Write;

/// A pump train that slips in its start.
fn pump(tolerance: f64, method: &str) -> String {
    head(1.5, 0.05, tolerance).replace("solver: { ", &format!("solver: {{ method: {method}, "))
        + "bodies:\n  rotor: { inertia: 0.25 kg*m2 }\n  inner: { inertia: 0.02 kg*m2 }\n  outer: { inertia: 0.15 kg*m2 }\n  \
           impeller: { inertia: 2.5 kg*m2 }\n\
           shafts:\n  fast: { between: [rotor, inner], stiffness: 20 kN*m/rad, damping: 2 N*m*s/rad }\n  \
           slow: { between: [outer, impeller], stiffness: 50 kN*m/rad, damping: 5 N*m*s/rad }\n\
           magnetic_gears:\n  gear:\n    inner: inner\n    modulator: ground\n    outer: outer\n    \
           pole_pairs: { inner: 4, outer: 22 }\n    pull_out: { at: outer, torque: 600 N*m }\n    \
           damping: { at: outer, coefficient: 24.2 N*m*s/rad }\n\
           motors:\n  line: { body: rotor, law: { induction: { synchronous_speed: 1500 rpm, breakdown_torque: 450 N*m, breakdown_slip: 25 %, voltage: 1 } } }\n\
           loads:\n  pump: { body: impeller, law: { power_law: { torque: 600 N*m, speed: 267 rpm, exponent: 2 } } }\n  \
           gland: { body: impeller, law: { friction: { sliding: 20 N*m, breakaway: 40 N*m } } }\n"
}

/// Share of energy that the audit misses.
fn residual(outcome: &Outcome) -> f64 {
    outcome.number(&["energy", "residual_share"])
}

#[test]
fn missing_energy_falls_with_the_tolerance() {
    for method in ["dopri5", "dop853"] {
        let found: Vec<f64> =
            [1e-4, 1e-6, 1e-8].iter().map(|t| residual(&run_through(&pump(*t, method)))).collect();
        assert!(found[2] < 1e-6, "{method}: {found:?}");
        // Down to the rounding of sums of this length.
        assert!(
            found[1] < found[0].max(1e-12) && found[2] < found[1].max(1e-12),
            "{method}: {found:?}"
        );
    }
}

#[test]
fn audit_adds_up() {
    let outcome = run_through(&pump(1e-8, "dopri5"));
    let energy = |key: &str| outcome.number(&["energy", key]);
    let (supplied, absorbed, lost, stored) =
        (energy("supplied"), energy("absorbed"), energy("lost"), energy("stored_change"));
    assert!(supplied > 0.0 && absorbed > 0.0 && lost > 0.0 && stored > 0.0);
    let share = (supplied - absorbed - lost - stored).abs() / (supplied + absorbed + lost);
    near(share, energy("residual_share"), 1e-12);
    // Slips turn work to heat in the damper.
    assert!(outcome.slips("gear") > 0);
    assert!(
        outcome.channel("gear.loss", "min") >= 0.0 && outcome.channel("gear.loss", "max") > 100.0
    );
    let k = 600.0 / 22.0;
    let last = |channel: &str| outcome.channel(channel, "final");
    let kinetic: f64 = [("rotor", 0.25), ("inner", 0.02), ("outer", 0.15), ("impeller", 2.5)]
        .iter()
        .map(|(body, inertia)| 0.5 * inertia * last(&format!("{body}.speed")).powi(2))
        .sum();
    let elastic = 0.5 * 20e3 * last("fast.twist").powi(2) + 0.5 * 50e3 * last("slow.twist").powi(2);
    let magnetic = k * (1.0 - last("gear.load_angle").cos());
    same(stored, kinetic + elastic + magnetic, 1e-9);
}

#[test]
fn play_with_damping_keeps_the_audit_sharp() {
    // A flank opens with some overlap left, because it does not pull: what it still holds is
    // lost once, whatever the steps.
    let scenario = |tolerance: f64| {
        format!(
            "{}bodies:\n  shaker: {{ inertia: 0.3 kg*m2 }}\n  disc: {{ inertia: 1.5 kg*m2 }}\n\
             shafts:\n  loose: {{ between: [shaker, disc], stiffness: 3 kN*m/rad, damping: 5 N*m*s/rad, backlash: 2 deg }}\n\
             motors:\n  push: {{ body: shaker, law: {{ prescribed: {{ torque: {{ sine: {{ mean: 5 N*m, amplitude: 40 N*m, frequency: 4 Hz, phase: 0 deg }} }} }} }} }}\n\
             loads:\n  oil: {{ body: disc, law: {{ viscous: {{ coefficient: 2 N*m*s/rad }} }} }}\n",
            head(2.0, 0.05, tolerance),
        )
    };
    let (coarse, fine) = (run_through(&scenario(1e-6)), run_through(&scenario(1e-9)));
    assert!(coarse.times("contact", "loose").len() > 10);
    assert!(residual(&coarse) < 1e-6 && residual(&fine) < 1e-9, "{:e}", residual(&fine));
}

#[test]
fn work_of_constant_torques_is_torque_times_angle() {
    // 12 N*m drive and -5 N*m work on one wheel: supplied 12 a, absorbed 5 a, the rest stored.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 3 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 12 N*m }} }} }}\n\
         loads:\n  work: {{ body: wheel, law: {{ prescribed: {{ torque: -5 N*m }} }} }}\n  \
         oil: {{ body: wheel, law: {{ viscous: {{ coefficient: 0.5 N*m*s/rad }} }} }}\n",
        head(4.0, 0.5, 1e-10),
    );
    let outcome = run_through(&scenario);
    let angle = outcome.channel("wheel.angle", "final");
    same(outcome.number(&["energy", "supplied"]), 12.0 * angle, 1e-8);
    let stored = 0.5 * 3.0 * outcome.channel("wheel.speed", "final").powi(2);
    same(outcome.number(&["energy", "stored_change"]), stored, 1e-9);
    // A viscous load takes its power out like any load.
    same(outcome.number(&["energy", "absorbed"]), 12.0 * angle - stored, 1e-8);
    near(outcome.number(&["energy", "lost"]), 0.0, 1e-12);
}

/// How two neighbours of a random train are joined.
#[derive(Clone, Copy)]
enum Joint {
    Shaft,
    Rigid,
    Pair,
    Coupling,
    Gear,
}

/// A train of bodies in a row, its joints and figures drawn from a seed.
pub fn random_train(seed: u64) -> (String, Vec<String>) {
    let mut draw = ChaCha8Rng::seed_from_u64(seed);
    let count = draw.random_range(2..=5_usize);
    let mut text = head(0.4, 0.02, 1e-8);
    let mut inertias = Vec::new();
    text.push_str("bodies:\n");
    for body in 0..count {
        let inertia: f64 = 10.0_f64.powf(draw.random_range(-1.5..0.5));
        inertias.push(inertia);
        writeln!(text, "  body_{body}: {{ inertia: {inertia} kg*m2 }}").unwrap();
    }
    let mut sections = [String::new(), String::new(), String::new(), String::new()];
    let mut gears = Vec::new();
    for joint in 1..count {
        let (a, b) = (format!("body_{}", joint - 1), format!("body_{joint}"));
        let kinds = [Joint::Shaft, Joint::Rigid, Joint::Pair, Joint::Coupling, Joint::Gear];
        // Every train has a magnetic part.
        let kind = if joint == 1 {
            kinds[draw.random_range(3..5_usize)]
        } else {
            kinds[draw.random_range(0..5_usize)]
        };
        let (section, line) = match kind {
            Joint::Shaft => {
                let k: f64 = draw.random_range(500.0..5000.0);
                let c: f64 = draw.random_range(0.0..2.0);
                let play = if draw.random_bool(0.3) { ", backlash: 1 deg" } else { "" };
                (
                    0,
                    format!(
                        "  joint_{joint}: {{ between: [{a}, {b}], stiffness: {k} N*m/rad, damping: {c} N*m*s/rad{play} }}\n"
                    ),
                )
            }
            Joint::Rigid => {
                (0, format!("  joint_{joint}: {{ between: [{a}, {b}], rigid: true }}\n"))
            }
            Joint::Pair => {
                let ratio: f64 = draw.random_range(0.5..4.0);
                let sign = if draw.random_bool(0.5) { "-" } else { "" };
                (1, format!("  joint_{joint}: {{ between: [{a}, {b}], ratio: {sign}{ratio} }}\n"))
            }
            Joint::Coupling => {
                let pull: f64 = draw.random_range(10.0..80.0);
                let c: f64 = draw.random_range(0.0..1.0);
                let pairs = draw.random_range(2..9);
                (
                    2,
                    format!(
                        "  joint_{joint}: {{ between: [{a}, {b}], pole_pairs: {pairs}, pull_out: {pull} N*m, damping: {c} N*m*s/rad }}\n"
                    ),
                )
            }
            Joint::Gear => {
                gears.push(format!("joint_{joint}"));
                let (pull, c): (f64, f64) =
                    (draw.random_range(20.0..200.0), draw.random_range(0.0..3.0));
                let (inner, outer) = (draw.random_range(2..6), draw.random_range(11..24));
                let third = draw.random_range(-0.08..0.08_f64);
                (
                    3,
                    format!(
                        "  joint_{joint}:\n    inner: {a}\n    modulator: ground\n    outer: {b}\n    pole_pairs: {{ inner: {inner}, outer: {outer} }}\n    \
                     pull_out: {{ at: outer, torque: {pull} N*m }}\n    damping: {{ at: outer, coefficient: {c} N*m*s/rad }}\n    \
                     harmonics: [{{ order: 3, amplitude: {third}, phase: 20 deg }}]\n"
                    ),
                )
            }
        };
        sections[section].push_str(&line);
    }
    for (name, section) in
        ["shafts", "gear_pairs", "magnetic_couplings", "magnetic_gears"].iter().zip(&sections)
    {
        if !section.is_empty() {
            write!(text, "{name}:\n{section}").unwrap();
        }
    }
    let (torque, share): (f64, f64) = (draw.random_range(5.0..60.0), draw.random_range(0.1..0.9));
    let laws = [
        format!(
            "prescribed: {{ torque: {{ ramp: {{ start: 0.05 s, end: 0.2 s, from: 0 N*m, to: {torque} N*m }} }} }}"
        ),
        format!(
            "induction: {{ synchronous_speed: 1500 rpm, breakdown_torque: {torque} N*m, breakdown_slip: 25 %, voltage: 1 }}"
        ),
        format!(
            "curve: {{ points: [[0 rpm, {torque} N*m], [900 rpm, {} N*m], [1500 rpm, 0 N*m]], voltage: 1 }}",
            1.3 * torque
        ),
        format!(
            "speed_loop: {{ speed: 400 rpm, torque_limit: {torque} N*m, gain: 2 N*m*s/rad, integral_time: 0.2 s, lag: 10 ms }}"
        ),
    ];
    let law = &laws[draw.random_range(0..laws.len())];
    write!(text, "motors:\n  drive: {{ body: body_0, law: {{ {law} }} }}\n").unwrap();
    let last = count - 1;
    let load = share * torque;
    write!(
        text,
        "loads:\n  fan: {{ body: body_{last}, law: {{ power_law: {{ torque: {load} N*m, speed: 600 rpm, exponent: 2 }} }} }}\n  \
         rub: {{ body: body_{last}, law: {{ friction: {{ sliding: {} N*m, breakaway: {} N*m }} }} }}\n",
        0.2 * load,
        0.3 * load
    )
    .unwrap();
    (text, gears)
}

#[test]
fn random_trains_keep_their_energy_and_their_torques() {
    for seed in 0..16 {
        let (scenario, gears) = random_train(seed);
        let outcome = run_through(&scenario);
        let energy = |key: &str| outcome.number(&["energy", key]);
        assert!(residual(&outcome) < 1e-6, "seed {seed}: {:e}\n{scenario}", residual(&outcome));
        for key in ["supplied", "absorbed", "lost"] {
            assert!(energy(key) >= 0.0, "seed {seed}: {key} is negative");
        }
        let series = outcome.series();
        assert!(series.rows.iter().flatten().all(|value| value.is_finite()), "seed {seed}");
        for gear in gears {
            let torque = |member: &str| series.column(&format!("{gear}.torque_{member}"));
            let (inner, outer, modulator) = (torque("inner"), torque("outer"), torque("modulator"));
            for row in 0..inner.len() {
                let sum = inner[row] + outer[row] + modulator[row];
                near(sum, 0.0, 1e-9 * modulator[row].abs().max(1.0));
            }
            assert!(outcome.number(&["gears", &gear, "peak_pull_out_share"]) <= 1.0 + 1e-9);
        }
    }
}

#[test]
fn random_trains_do_not_depend_on_the_method() {
    for seed in 0..6 {
        let (scenario, _) = random_train(seed);
        let other = scenario.replace(
            "solver: { tolerance: 0.00000001 }",
            "solver: { method: dop853, tolerance: 1e-9 }",
        );
        assert_ne!(scenario, other);
        let (a, b) = (run_through(&scenario).series(), run_through(&other).series());
        for body in ["body_0.speed", "body_1.speed"] {
            for (x, y) in a.column(body).iter().zip(b.column(body)) {
                let off = (x - y).abs();
                assert!(
                    off <= 1e-4 * x.abs().max(1.0),
                    "seed {seed}, {body}: {x} and {y}\n{scenario}"
                );
            }
        }
    }
}
