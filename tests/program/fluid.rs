//! Fluid couplings, drag of gear pairs, and reciprocating masses.
//!
//! Closed forms worked out beside each check; where a curve by points stands in the way of one, an
//! integration apart from this program with `SciPy` (DOP853 at 1e-12, `PchipInterpolator`).

use super::helper::{check, head, near, run_well, same};

/// A coupling whose factor falls in a straight line: torque = 0.01*pump*(pump - turbine).
fn straight(head: &str, bodies: &str, more: &str) -> String {
    format!(
        "{head}bodies:\n{bodies}\
         fluid_couplings:\n  coupling: {{ between: [pump, turbine], capacity: 0.01 N*m*s2/rad2, points: [[0, 1], [1, 0]] }}\n{more}",
    )
}

#[test]
fn a_turbine_wheel_is_taken_along_by_a_pump_wheel_at_constant_speed() {
    // 2 kg*m2 at 0.01*150*(150 - w): w = 150 (1 - exp(-0.75 t)), loss 0.01*150*(150 exp(-0.75 t))^2,
    // its integral J 150^2/2 (1 - exp(-1.5 t)): half the work is lost, however it runs up.
    let bodies =
        "  pump: { inertia: 1e10, speed: 150 rad/s }\n  turbine: { inertia: 2, speed: 0 rad/s }\n";
    let outcome = run_well(&straight(&head(4.0, 0.1, 1e-10), bodies, ""));
    let series = outcome.series();
    for time in [0.5_f64, 1.0, 3.0] {
        let left = (-0.75 * time).exp();
        near(series.at("turbine.speed", time), 150.0 * (1.0 - left), 1e-6);
        near(series.at("coupling.torque", time), 225.0 * left, 1e-6);
        near(series.at("coupling.slip_speed", time), 150.0 * left, 1e-6);
        near(series.at("coupling.loss", time), 225.0 * 150.0 * left * left, 1e-4);
    }
    same(outcome.number(&["energy", "lost"]), 22_500.0 * (1.0 - (-6.0_f64).exp()), 1e-7);
}

#[test]
fn a_coupling_by_points_runs_up_as_the_reference_integration_does() {
    let points = "[[0, 2], [0.5, 1.7], [0.8, 1.2], [0.95, 0.5], [1, 0]]";
    let scenario = format!(
        "{}bodies:\n  pump: {{ inertia: 0.5 }}\n  turbine: {{ inertia: 3 }}\n\
         fluid_couplings:\n  coupling: {{ between: [pump, turbine], capacity: 0.004 N*m*s2/rad2, points: {points} }}\n\
         motors: {{ drive: {{ body: pump, law: {{ prescribed: {{ torque: 60 N*m }} }} }} }}\n\
         loads: {{ fan: {{ body: turbine, law: {{ power_law: {{ torque: 20 N*m, speed: 100 rad/s, exponent: 2 }} }} }} }}\n",
        head(8.0, 0.1, 1e-10),
    );
    let outcome = run_well(&scenario);
    let series = outcome.series();
    for (time, pump, turbine) in RUN_UP {
        near(series.at("pump.speed", time), pump, 1e-6);
        near(series.at("turbine.speed", time), turbine, 1e-6);
    }
    assert!(outcome.number(&["energy", "residual_share"]) < 1e-8);
    // Overrun: a turbine wheel at 100 rad/s takes the idle pump wheel along.
    let overrun = scenario
        .replace("torque: 60 N*m", "torque: 0 N*m")
        .replace("torque: 20 N*m", "torque: 0 N*m")
        .replace("turbine: { inertia: 3 }", "turbine: { inertia: 3, speed: 100 rad/s }")
        .replace("pump: { inertia: 0.5 }", "pump: { inertia: 0.5, speed: 0 rad/s }")
        .replace("duration: 8 s", "duration: 2 s");
    let outcome = run_well(&overrun);
    near(outcome.channel("pump.speed", "final"), OVERRUN[0], 1e-6);
    near(outcome.channel("turbine.speed", "final"), OVERRUN[1], 1e-6);
    assert!(outcome.channel("coupling.torque", "max") <= 0.0);
}

/// Time, speed of pump and turbine wheel.
const RUN_UP: [(f64, f64, f64); 3] = [
    (1.0, 76.494_529_990_505, 7.244_635_348_576),
    (3.0, 91.716_543_920_785, 43.705_559_903_185),
    (8.0, 127.826_522_273_17, 113.779_693_312_311),
];

/// Speeds after 2 s.
const OVERRUN: [f64; 2] = [85.714_209_867_984, 85.714_298_355_336];

#[test]
fn a_steady_start_finds_the_slip_that_carries_the_load() {
    // 100 N*m at 150 rad/s: 0.01*150*(150 - w) = 100, w = 83.333 rad/s.
    let outcome = run_well(&straight(
        &format!("{}start: steady\n", head(1.0, 0.1, 1e-9)),
        "  pump: { inertia: 0.5, speed: 150 rad/s }\n  turbine: { inertia: 3, speed: 80 rad/s }\n",
        "motors: { drive: { body: pump, law: { speed_loop: { speed: 150 rad/s, torque_limit: 500 N*m, gain: 4, integral_time: 1 s } } } }\n\
         loads: { pull: { body: turbine, law: { prescribed: { torque: -100 N*m } } } }\n",
    ));
    near(outcome.channel("turbine.speed", "min"), 250.0 / 3.0, 1e-6);
    near(outcome.channel("turbine.speed", "max"), 250.0 / 3.0, 1e-6);
    near(outcome.channel("drive.torque", "final"), 100.0, 1e-6);
}

#[test]
fn a_size_and_a_performance_number_are_a_capacity() {
    // density*diameter^5*lambda = 860*0.4^5*0.001 = 0.0088064.
    let scenario = straight(
        &head(1.0, 0.1, 1e-9),
        "  pump: { inertia: 1e10, speed: 150 rad/s }\n  turbine: { inertia: 1e10, speed: 75 rad/s }\n",
        "",
    )
    .replace(
        "capacity: 0.01 N*m*s2/rad2, points: [[0, 1], [1, 0]]",
        "capacity: { density: 860 kg/m3, diameter: 0.4 m }, points: [[0, 0.002], [1, 0]]",
    );
    same(run_well(&scenario).channel("coupling.torque", "max"), 0.0088064 * 22_500.0, 1e-9);
    let refused = |from: &str, to: &str, words: &str| {
        let outcome = check(&scenario.replace(from, to));
        assert_eq!(outcome.status, Some(2), "{to}");
        assert!(outcome.stderr.contains(words), "{to}\n{}", outcome.stderr);
    };
    refused("[1, 0]]", "[0.9, 0.1]]", "the last point must be [1, 0]");
    refused("[0, 0.002]", "[-2, 0.002]", "between -1 and 1");
    refused("[0, 0.002]", "[0, -1]", "never negative");
    refused("[pump, turbine]", "[pump, pump]", "stands in it already");
}

#[test]
fn drag_of_a_gear_pair_stops_it_as_a_first_order_law_does() {
    // 0.1 kg*m2 and, through 4 : 1, 2 kg*m2: 0.225 at the fast side, w' = -(1 + 0.05 w)/0.225 from
    // 100 rad/s: at rest after 4.5 ln 6 s, all its 1125 J lost in the drag.
    let outcome = run_well(&format!(
        "{}bodies:\n  fast: {{ inertia: 0.1, speed: 100 rad/s }}\n  slow: {{ inertia: 2 }}\n\
         gear_pairs:\n  box: {{ between: [fast, slow], ratio: 4, drag: [{{ at: a, constant: 1 N*m, per_speed: 0.05 N*m*s/rad }}] }}\n",
        head(10.0, 0.1, 1e-10),
    ));
    near(outcome.times("stuck", "box.drag.0")[0], 4.5 * 6.0_f64.ln(), 1e-7);
    near(outcome.channel("box.loss", "max"), 100.0 * 6.0, 1e-6);
    same(outcome.number(&["energy", "lost"]), 1125.0, 1e-8);
    // The teeth carry what slows the wheel: 2*(6/0.225)/4 at the slow side.
    near(outcome.channel("box.torque_b", "min"), -2.0 * (6.0 / 0.225) / 4.0, 1e-6);
}

/// A crank of 0.1 m on a rod of 0.4 m with 3 kg.
fn crank(inertia: &str, turns: f64) -> String {
    format!(
        "{}bodies:\n  crank: {{ inertia: {inertia}, speed: 50 rad/s }}\n\
         loads: {{ piston: {{ body: crank, law: {{ reciprocating: {{ crank_radius: 100 mm, rod_length: 400 mm, reciprocating_mass: 3 kg }} }} }} }}\n",
        head(turns * std::f64::consts::PI / 25.0, 0.001, 1e-10),
    )
}

#[test]
fn a_piston_takes_and_gives_back_within_a_turn() {
    // One turn at 50 rad/s. With the crank square to the line of the piston s' = r and
    // s'' = -r l/sqrt(1 - l^2): torque m r^2 w^2 l/sqrt(1 - l^2). The largest kinetic energy of the
    // mass is what is taken up to there and given back.
    let size = 3.0 * 0.01 * 2500.0;
    let share = 0.25 / (1.0_f64 - 0.0625).sqrt();
    near(run_well(&crank("1e9", 0.25)).channel("piston.torque", "final"), size * share, 1e-6);
    // Fine steps, so that the powers' changes of sign within a step count for little.
    let fine = crank("1e9", 1.0).replace("solver: {", "solver: { max_step: 0.1 ms,");
    let outcome = run_well(&fine);
    let (supplied, absorbed) =
        (outcome.number(&["energy", "supplied"]), outcome.number(&["energy", "absorbed"]));
    same(supplied, absorbed, 1e-5);
    // Two strokes a turn: twice the energy m (s' w)^2/2 at the largest piston speed, found on a grid.
    let fastest = (0..200_000)
        .map(|place| f64::from(place) * std::f64::consts::PI / 200_000.0)
        .map(|a| a.sin() + 0.125 * (2.0 * a).sin() / (1.0 - (0.25 * a.sin()).powi(2)).sqrt())
        .fold(0.0, f64::max);
    same(absorbed, size * fastest * fastest, 1e-5);
    assert!(!outcome.stderr.contains("ripples"), "{}", outcome.stderr);
    // Beside a light flywheel the constant speed is no more than an approximation.
    assert!(run_well(&crank("0.1", 1.0)).stderr.contains("ripples within a turn"));
}
