//! Loads over the angle, and propellers.

use super::helper::{head, near, run, run_well, same};
use std::f64::consts::{PI, TAU};

/// A wheel of 2 kg*m2 at 10 rad/s under a load by its angle and a torque of its own.
fn beat(mean: f64, harmonics: &str, push: f64, speed: f64, more: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 2 kg*m2, speed: {speed} rad/s }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {push} N*m }} }} }}\n\
         loads:\n  beat: {{ body: wheel, law: {{ periodic: {{ mean: {mean} N*m, harmonics: [{harmonics}] }} }}{more} }}\n",
        head(3.0, 0.1, 1e-10),
    )
}

#[test]
fn a_periodic_load_gives_back_over_a_turn_what_it_took() {
    // Closed form: with the mean balanced, 1/2 J (w^2 - w0^2) = sum a/m (cos(m x + p) - cos p).
    let waves = "{ order: 1, amplitude: 3 N*m, phase: 40 deg }, { order: 3, amplitude: 5 N*m, phase: -20 deg }";
    let outcome = run_well(&beat(8.0, waves, 8.0, 10.0, ""));
    let series = outcome.series();
    let (speed, angle) = (series.column("wheel.speed"), series.column("wheel.angle"));
    let given = |x: f64| {
        [(1.0, 3.0, 40.0_f64), (3.0, 5.0, -20.0)]
            .map(|(m, a, p)| a / m * ((m * x + p.to_radians()).cos() - p.to_radians().cos()))
            .iter()
            .sum::<f64>()
    };
    assert!(angle.last().copied().unwrap() > 4.0 * TAU, "several turns");
    for (w, x) in speed.iter().zip(&angle) {
        near(0.5 * 2.0 * (w * w - 100.0), given(*x), 1e-6);
    }
    // The channel is what acts: mean and harmonics together, against the motion.
    let row = angle.len() - 1;
    let x = angle[row];
    let expected =
        -8.0 - 3.0 * (x + 40_f64.to_radians()).sin() - 5.0 * (3.0 * x - 20_f64.to_radians()).sin();
    near(series.column("beat.torque")[row], expected, 1e-6);
    near(series.column("beat.power")[row], expected * speed[row], 1e-4);
}

#[test]
fn the_mean_of_a_periodic_load_holds_at_rest() {
    let series = run_well(&beat(8.0, "", 7.9, 0.0, "")).series();
    assert!(series.column("wheel.speed").iter().all(|speed| speed.abs() < 1e-300));
    near(series.at("beat.torque", 1.0), -7.9, 1e-12);
    // Driven backwards it resists as well: Coulomb, 3 s at (10 - 8)/2 rad/s2.
    let series = run_well(&beat(8.0, "", -10.0, 0.0, "")).series();
    near(series.at("wheel.speed", 3.0), -3.0, 1e-9);
    // Mirrored and halved.
    let wave = "{ order: 2, amplitude: 1 N*m, phase: 90 deg }";
    let series = run_well(&beat(0.0, wave, 0.0, 0.0, ", reversed: true, scale: 0.5")).series();
    near(series.at("beat.torque", 0.0), 0.5, 1e-12);
}

#[test]
fn an_angle_at_rest_ends_where_the_harmonic_lets_it() {
    // A pendulum of order 2 under dry friction comes to rest with |a sin(2x)| below the mean.
    let wave = "{ order: 2, amplitude: 30 N*m, phase: 30 deg }";
    let series = run_well(&beat(4.0, wave, 0.0, 3.0, "")).series();
    near(series.at("wheel.speed", 3.0), 0.0, 1e-12);
    let angle = series.at("wheel.angle", 3.0);
    assert!(30.0 * (2.0 * angle + PI / 6.0).sin().abs() < 4.0, "{angle}");
    near(series.at("beat.torque", 3.0), 0.0, 1e-9);
}

/// A shaft too heavy to change its speed.
pub fn screw(duration: f64, step: f64, inertia: f64, speed: f64, law: &str) -> String {
    format!(
        "{}bodies:\n  shaft: {{ inertia: {inertia} kg*m2, speed: {speed} rad/s }}\n\
         loads:\n  screw: {{ body: shaft, law: {{ propeller: {{ diameter: 4 m, {law} }} }} }}\n",
        head(duration, step, 1e-9),
    )
}

#[test]
fn a_propeller_has_the_torque_of_its_coefficient() {
    // Definition: KQ 0.03, sea water, 2 turns a second, 4 m: 125952 N*m; then 1582759.51162 W.
    let law = "torque_coefficient: { constant: 0.03 }";
    let series = run_well(&screw(1.0, 0.5, 1e15, 2.0 * TAU, law)).series();
    same(series.at("screw.torque", 0.0), -125_952.0, 1e-12);
    same(series.at("screw.power", 0.0), -1_582_759.511_62, 1e-11);
    // Wageningen B4-70, pitch ratio 1 (Oosterveld and van Oossanen 1975, evaluated apart).
    for (ratio, coefficient) in
        [(0.0, 0.06753840264), (0.4, 0.049210131252), (0.7, 0.0307678303014), (1.0, 0.009692083648)]
    {
        let law = format!(
            "advance: {} m/s, density: 1000 kg/m3, \
             torque_coefficient: {{ b_series: {{ blades: 4, pitch_ratio: 1.0, area_ratio: 0.7 }} }}",
            ratio * 8.0
        );
        let series = run_well(&screw(1.0, 0.5, 1e15, 2.0 * TAU, &law)).series();
        same(series.at("screw.torque", 0.0), -coefficient * 1000.0 * 4.0 * 1024.0, 1e-11);
    }
}

#[test]
fn a_propeller_follows_its_lines_as_the_ship_gathers_way_and_reverses() {
    // J from -0.75 to 1.5 at 2 turns a second: lines, held outside.
    let law = "advance: { ramp: { start: 0 s, end: 3 s, from: -6 m/s, to: 12 m/s } }, \
               torque_coefficient: { points: [[0, 0.06], [0.5, 0.05], [1, 0.01]] }";
    let outcome = run_well(&screw(3.0, 0.125, 1e15, 2.0 * TAU, law));
    // J = advance/(n D) by its definition, from -0.75 to 1.5; the data end at 0 and 1.
    let warnings = outcome.at(&["warnings"]).to_string();
    assert!(warnings.contains("runs from -0.75 to 1.5"), "{warnings}");
    assert!(warnings.contains("from 0 to 1"), "{warnings}");
    let series = outcome.series();
    for (time, ratio) in series.column("time").iter().zip(series.column("screw.advance_ratio")) {
        near(ratio, (-6.0 + 6.0 * time) / 8.0, 1e-10);
    }
    let value = |j: f64| match j {
        j if j < 0.0 => 0.06,
        j if j < 0.5 => 0.06 - 0.02 * j,
        j if j < 1.0 => 0.05 - 0.08 * (j - 0.5),
        _ => 0.01,
    };
    for (time, torque) in series.column("time").iter().zip(series.column("screw.torque")) {
        let ratio = (-6.0 + 6.0 * time) / 8.0;
        same(torque, -1025.0 * 4.0 * 1024.0 * value(ratio), 1e-9);
    }
    // Bollard pull from ahead to astern, Newton's quadratic drag: 1/w - 1/w0 = k t/J.
    let law = "torque_coefficient: { constant: 0.03 }";
    let series = run_well(&screw(20.0, 2.0, 1e4, 10.0, law)).series();
    let k = 0.03 * 1025.0 * 1024.0 / (TAU * TAU);
    for (time, speed) in series.column("time").iter().zip(series.column("shaft.speed")) {
        same(speed, 1.0 / (0.1 + k * time / 1e4), 1e-7);
    }
}

#[test]
fn a_propeller_driven_through_rest_under_way_passes_all_its_lines() {
    let law = "advance: 6 m/s, torque_coefficient: { points: [[0, 0.06], [0.5, 0.05], [1, 0.01]] }";
    let scenario = format!(
        "{}motors:\n  engine: {{ body: shaft, law: {{ prescribed: {{ torque: -200 kN*m }} }} }}\n",
        screw(4.0, 0.05, 2e4, 12.0, law)
    );
    let outcome = run_well(&scenario);
    let series = outcome.series();
    let speeds = series.column("shaft.speed");
    assert!(speeds.first().unwrap() > &0.0 && speeds.last().unwrap() < &-5.0);
    let warnings = outcome.at(&["warnings"]).to_string();
    assert!(warnings.contains("turns astern at times"), "{warnings}");
    // Near standstill the ratio grows beyond all bounds; the channel ends at 100.
    near(outcome.channel("screw.advance_ratio", "max"), 100.0, 1e-12);
    for (speed, torque) in speeds.iter().zip(series.column("screw.torque")) {
        let turns = speed / TAU;
        let ratio = 6.0 / (turns * 4.0);
        let coefficient = match ratio {
            // Astern the value at J = 0 holds.
            j if j < 0.0 => 0.06,
            j if j < 0.5 => 0.06 - 0.02 * j,
            j if j < 1.0 => 0.05 - 0.08 * (j - 0.5),
            _ => 0.01,
        };
        near(torque, -1025.0 * turns * turns.abs() * 1024.0 * coefficient, 1e-3);
    }
}

#[test]
fn faulty_loads_are_told_by_their_place() {
    for (load, part) in [
        ("periodic: { mean: -1 N*m }", "mean"),
        ("periodic: { mean: 1 N*m, harmonics: [{ order: 1.5, amplitude: 1 N*m }] }", "order"),
        ("propeller: { diameter: 4 m }", "torque_coefficient"),
        ("propeller: { diameter: 4 m, torque_coefficient: {} }", "one of"),
        (
            "propeller: { diameter: 4 m, torque_coefficient: { constant: 1, points: [[0, 1], [1, 0]] } }",
            "not both",
        ),
        (
            "propeller: { diameter: 4 m, torque_coefficient: { points: [[1, 1], [0, 0]] } }",
            "must rise",
        ),
        (
            "propeller: { diameter: 4 m, torque_coefficient: { b_series: { blades: 9, pitch_ratio: 1, area_ratio: 0.7 } } }",
            "blades",
        ),
    ] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: 2 kg*m2 }}\nloads:\n  load: {{ body: wheel, law: {{ {load} }} }}\n",
            head(1.0, 0.5, 1e-6)
        );
        let outcome = run(&scenario);
        assert_eq!(outcome.status, Some(2), "{load}\n{}", outcome.stderr);
        assert!(outcome.stderr.contains(part), "{load}\n{}", outcome.stderr);
    }
}
