//! The torque law of magnets: harmonics, damper, cogging, drag, softening under load.
//!
//! Expected: the laws as the scenario reference states them, worked out here by hand at the
//! first instant of a run, where angles and speeds are the given ones.

use super::helper::{Folder, call, head, near, run, run_well, same};
use super::swing::Swing;
use std::f64::consts::{PI, TAU};

/// A rotor on a coupling to ground with six pole pairs and 60 N*m, so that K is 10 J.
fn rotor(field: &str, speed: f64, more: &str) -> String {
    format!(
        "{}bodies:\n  rotor: {{ inertia: 0.5 kg*m2, speed: {speed} rad/s }}\n\
         magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: 6, pull_out: 60 N*m{field} }}\n{more}",
        head(0.2, 0.01, 1e-9),
    )
}

/// `sin x + sum a sin(m x + p)` and its larger and smaller peak, by a fine scan and bisection of the slope.
fn peaks(harmonics: &[(f64, f64, f64)]) -> (f64, f64) {
    let raw =
        |x: f64| x.sin() + harmonics.iter().map(|(m, a, p)| a * (m * x + p).sin()).sum::<f64>();
    let slope =
        |x: f64| x.cos() + harmonics.iter().map(|(m, a, p)| a * m * (m * x + p).cos()).sum::<f64>();
    let (mut top, mut bottom) = (0.0_f64, 0.0_f64);
    for step in 0..3600 {
        let (mut low, mut high) =
            (f64::from(step) * TAU / 3600.0 - PI, f64::from(step + 1) * TAU / 3600.0 - PI);
        if slope(low) * slope(high) > 0.0 {
            continue;
        }
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if slope(low) * slope(middle) > 0.0 { low = middle } else { high = middle }
        }
        top = top.max(raw(low));
        bottom = bottom.min(raw(low));
    }
    (top, bottom)
}

#[test]
fn harmonics_are_normed_to_the_smaller_peak() {
    for harmonics in
        [vec![(3.0, 0.04, 0.0)], vec![(3.0, -0.1, 0.3)], vec![(2.0, 0.12, 0.7), (5.0, 0.03, -0.4)]]
    {
        let listed: Vec<String> = harmonics
            .iter()
            .map(|(order, amplitude, phase)| {
                format!("{{ order: {order}, amplitude: {amplitude}, phase: {phase} rad }}")
            })
            .collect();
        let field = format!(", harmonics: [{}]", listed.join(", "));
        let raw =
            |x: f64| x.sin() + harmonics.iter().map(|(m, a, p)| a * (m * x + p).sin()).sum::<f64>();
        let (top, bottom) = peaks(&harmonics);
        let norm = top.min(-bottom);
        for angle in [-2.5, -1.0, 0.4, 1.3, 3.0] {
            let scenario = rotor(&format!("{field}, initial_load_angle: {angle} rad"), 0.0, "");
            let series = run_well(&scenario).series();
            near(series.at("coupling.torque_b", 0.0), 60.0 * raw(angle) / norm, 1e-8);
            let side = if raw(angle) > 0.0 { top } else { -bottom };
            near(series.at("coupling.pull_out_share", 0.0), raw(angle).abs() / side, 1e-9);
        }
        // The pull-out torque is the smaller peak: a steady load just below it is held on both
        // sides, one just above it on neither unless the other peak is higher.
        for (share, sign) in [(0.9999, 1.0), (0.9999, -1.0), (1.0001, 1.0), (1.0001, -1.0)] {
            let torque = 60.0 * share * sign;
            let load = format!(
                "start: steady\nmotors:\n  push: {{ body: rotor, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}\n"
            );
            let limit = if sign > 0.0 { top / norm } else { -bottom / norm };
            let status = if share < limit { 0 } else { 2 };
            assert_eq!(
                run(&rotor(&field, 0.0, &load)).status,
                Some(status),
                "{torque} N*m with {field}"
            );
        }
    }
}

#[test]
fn damper_is_straight_or_fades() {
    let outcome = run_well(&rotor(", damping: 3 N*m*s/rad", 7.0, ""));
    near(outcome.series().at("coupling.torque_b", 0.0), 21.0, 1e-9);
    near(outcome.series().at("coupling.loss", 0.0), 21.0 * 7.0, 1e-8);
    near(outcome.series().at("coupling.slip_speed", 0.0), 42.0, 1e-9);
    // In a gear: c x/(1 + (x/peak)^2) with x the slip speed seen at the named member.
    for (speed, peak) in [(3.0_f64, 12.0), (12.0, 12.0), (-40.0, 12.0)] {
        let scenario = format!(
            "{}bodies:\n  outer: {{ inertia: 1 kg*m2, speed: {speed} rad/s }}\n\
             magnetic_gears:\n  gear:\n    inner: ground\n    modulator: ground\n    outer: outer\n    \
             pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 50 N*m }}\n    \
             damping: {{ at: outer, coefficient: 2 N*m*s/rad, peak_at: {peak} rad/s }}\n",
            head(0.1, 0.01, 1e-8),
        );
        let series = run_well(&scenario).series();
        let torque = 2.0 * speed / (1.0 + (speed / peak).powi(2));
        near(series.at("gear.torque_outer", 0.0), -torque, 1e-9);
        near(series.at("gear.torque_inner", 0.0), -torque * 4.0 / 22.0, 1e-9);
        near(series.at("gear.torque_modulator", 0.0), torque * 26.0 / 22.0, 1e-9);
        near(series.at("gear.loss", 0.0), torque * speed, 1e-8);
    }
}

/// An inner rotor in a gear with ripple and drag; modulator free or held.
fn rippled(speed: f64, extras: &str) -> String {
    format!(
        "{}bodies:\n  inner: {{ inertia: 0.1 kg*m2, speed: {speed} rad/s }}\n  pieces: {{ inertia: 0.4 kg*m2, speed: 0 rad/s }}\n\
         magnetic_gears:\n  gear:\n    inner: inner\n    modulator: pieces\n    outer: ground\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: inner, torque: 1e-9 N*m }}\n{extras}",
        head(0.5, 0.05, 1e-10),
    )
}

#[test]
fn cogging_acts_between_rotor_and_modulator() {
    // Momentum is kept, and the energy J w^2/2 - (T/order) cos(order x + phase).
    let cogging = "    cogging: [{ at: inner, order: 104, torque: 2 N*m, phase: 30 deg }]\n";
    let outcome = run_well(&rippled(1.5, cogging));
    let series = outcome.series();
    let potential = |x: f64| -2.0 / 104.0 * (104.0 * x + PI / 6.0).cos();
    let start = 0.5 * 0.1 * 1.5_f64.powi(2) + potential(0.0);
    for row in 0..series.rows.len() {
        let at = |channel: &str| series.column(channel)[row];
        near(0.1 * at("inner.speed") + 0.4 * at("pieces.speed"), 0.15, 1e-8);
        let kinetic = 0.05 * at("inner.speed").powi(2) + 0.2 * at("pieces.speed").powi(2);
        near(kinetic + potential(at("inner.angle") - at("pieces.angle")), start, 1e-8);
    }
    assert!(outcome.channel("inner.speed", "max") - outcome.channel("inner.speed", "min") > 0.1);
}

#[test]
fn drag_acts_against_modulator_or_ground() {
    // 1 + 0.02 x N*m at x = 30 rad/s on 0.1 kg*m2: against the modulator it turns that too.
    let drag = |against: &str| {
        format!(
            "    drag: [{{ at: inner, against: {against}, constant: 1 N*m, per_speed: 0.02 N*m*s/rad }}]\n"
        )
    };
    let mechanical = |outcome: &super::helper::Outcome| {
        0.1 * outcome.channel("inner.speed", "final")
            + 0.4 * outcome.channel("pieces.speed", "final")
    };
    let outcome = run_well(&rippled(30.0, &drag("modulator")));
    near(mechanical(&outcome), 3.0, 1e-7);
    // Relative speed x: dx/dt = -(1 + 0.02 x)(1/0.1 + 1/0.4).
    let x = |inverse: f64, t: f64| (30.0 + 50.0) * (-0.02 * inverse * t).exp() - 50.0;
    let relative =
        outcome.channel("inner.speed", "final") - outcome.channel("pieces.speed", "final");
    same(relative, x(12.5, 0.5), 1e-7);
    let outcome = run_well(&rippled(30.0, &drag("ground")));
    near(outcome.channel("pieces.speed", "final"), 0.0, 1e-6);
    same(outcome.channel("inner.speed", "final"), x(10.0, 0.5), 1e-7);
    assert!(outcome.number(&["energy", "lost"]) > 0.0);
}

#[test]
fn coupling_softens_under_load() {
    // Small swings at the share T: frequency (1 - T^2)^(1/4) of that at no load.
    for (share, ratio) in [(0.0, 1.0), (0.5, 0.9306048591021), (0.8, 0.77459666924148)] {
        let period = TAU / ratio;
        let swing = Swing {
            phase: f64::asin(share),
            rate: 1e-4,
            torque: (share, Vec::new()),
            duration: 1.4 * period,
            tolerance: 1e-12,
            ..Swing::workshop()
        };
        let turn = |name: &str, after: f64| {
            format!(
                "  {name}: {{ of: coupling.slip_speed, reaches: 0 rad/s, signed: true, after: {} s }}\n",
                swing.seconds(after * period)
            )
        };
        let yaml =
            format!("{}requirements:\n{}{}", swing.yaml(), turn("first", 0.1), turn("second", 0.5));
        let outcome = run_well(&yaml);
        // Between turning points lies half a period, however lopsided the swing is.
        let half = outcome.found("second").unwrap() - outcome.found("first").unwrap();
        same(half, swing.seconds(0.5 * period), 1e-7);
    }
}

/// A table of `raw` over the coupling's own angle, one pole pitch from `from` electrical degrees on.
fn tabulated(from: f64, raw: impl Fn(f64) -> f64) -> String {
    let mut table = "angle,M\n".to_owned();
    for place in 0..=72 {
        let degrees = from + 5.0 * f64::from(place);
        table += &format!("{},{}\n", degrees / 6.0, 0.37 * raw(degrees.to_radians()));
    }
    table
}

// Closed form: the table of a sum of sines is that sum, so both files must give the same run.
#[test]
fn a_table_of_torques_is_its_harmonics() {
    let raw = |x: f64| x.sin() + 0.12 * (2.0 * x + 0.7).sin() + 0.03 * (5.0 * x - 0.4).sin();
    let listed = ", initial_load_angle: 2.4 rad, harmonics: [{ order: 2, amplitude: 0.12, phase: 0.7 }, \
                  { order: 5, amplitude: 0.03, phase: -0.4 }]";
    let named = ", initial_load_angle: 2.4 rad, torque_table: { file: map.csv, angle: angle, torque: M, \
                 angle_unit: deg, unit: kN*m, at: mechanical }";
    let by_hand = run_well(&rotor(listed, 3.0, "")).series();
    let folder = Folder::new();
    folder.write("map.csv", &tabulated(-180.0, raw));
    folder.write("case.yaml", &rotor(named, 3.0, ""));
    let outcome = call(folder, &["run", "case.yaml", "--out", "out", "--no-charts"], "");
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    for channel in ["rotor.speed", "coupling.torque_b", "coupling.pull_out_share"] {
        let (one, other) = (by_hand.column(channel), outcome.series().column(channel));
        for (one, other) in one.into_iter().zip(other) {
            near(one, other, 1e-7);
        }
    }
}

#[test]
fn a_table_that_is_no_periodic_torque_is_refused_at_its_place() {
    let named = ", torque_table: { file: map.csv, angle: angle, torque: M, angle_unit: deg, at: mechanical }";
    for (table, words) in [
        (tabulated(0.0, |x| x.sin() + 0.3), "a mean of 30 % of the fundamental"),
        (tabulated(0.0, |x| x.sin() + 0.2 * (x / 2.0).sin()), "mean"),
        ("angle,M\n0,1\n5,0\n3,2\n".to_owned(), "angles must rise"),
        ("angle,M\n0,1\n5,0\n".to_owned(), "the table has 2 rows"),
        ("angle,F\n0,1\n".to_owned(), "no column is headed `M`"),
    ] {
        let folder = Folder::new();
        folder.write("map.csv", &table);
        folder.write("case.yaml", &rotor(named, 0.0, ""));
        let outcome = call(folder, &["run", "case.yaml", "--out", "out"], "");
        assert_eq!(outcome.status, Some(2), "{}", outcome.stderr);
        assert!(outcome.stderr.contains(words), "{}", outcome.stderr);
        assert!(outcome.stderr.contains("(magnetic_couplings.coupling.torque_table.file)"));
        assert!(outcome.stderr.contains("case.yaml:"), "{}", outcome.stderr);
    }
}
