//! Losses of magnetic gears, and magnets that warm up by them.
//!
//! Thermal nodes: the usual network of capacities and resistances, `T = T_end - (T_end - T_0)
//! exp(-t/RC)` for one node, for two the matrix exponential. Losses: hysteresis with the
//! frequency, eddy currents with its square, so that a drag torque `T + c w` brakes the train;
//! such a train stops after `J/c ln(1 + c w/T)`.

use super::helper::{Outcome, head, near, run_through, run_well, same};

/// A gear 4/22 whose rotors a rigid pair holds in step, so that nothing swings; `gear` are its
/// further keys, `torque` drives the inner rotor.
pub fn locked(top: &str, speed: f64, torque: f64, gear: &str) -> String {
    format!(
        "{top}bodies:\n  fast: {{ inertia: 0.4 kg*m2, speed: {speed} rad/s }}\n  slow: {{ inertia: 3 kg*m2 }}\n\
         gear_pairs:\n  lock: {{ between: [fast, slow], ratio: -5.5 }}\n\
         magnetic_gears:\n  gear:\n    inner: fast\n    modulator: ground\n    outer: slow\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 1500 N*m }}\n    {gear}\n\
         motors:\n  drive: {{ body: fast, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}\n",
    )
}

/// Losses of the parts of that gear.
pub const LOSSES: &str = "losses: { speed: 300 rad/s, hysteresis: { inner: 1 W, modulator: 10 W, outer: 2 W }, \
                      eddy: { inner: 8 W, modulator: 9 W, outer: 6 W } }";

#[test]
fn losses_follow_the_frequency_and_its_square() {
    for (speed, share) in [(300.0, 1.0), (150.0, 0.5), (-75.0, 0.25)] {
        let outcome = run_through(&locked(&head(0.1, 0.05, 1e-9), speed, 0.0, LOSSES));
        let series = outcome.series();
        near(series.at("gear.hysteresis_loss", 0.0), 13.0 * share, 1e-9);
        near(series.at("gear.eddy_loss", 0.0), 23.0 * share * share, 1e-9);
        near(series.at("gear.loss", 0.0), 13.0 * share + 23.0 * share * share, 1e-9);
    }
    // Stated at the outer rotor, the same gear.
    let outer = LOSSES.replace("speed: 300 rad/s", "at: outer, speed: 54.54545454545454 rad/s");
    let outcome = run_through(&locked(&head(0.1, 0.05, 1e-9), 150.0, 0.0, &outer));
    near(outcome.series().at("gear.loss", 0.0), 6.5 + 5.75, 1e-9);
    // A plain figure is that of the pieces.
    let pieces = "losses: { speed: 300 rad/s, hysteresis: 13 W, eddy: 23 W }";
    let outcome = run_through(&locked(&head(0.1, 0.05, 1e-9), 150.0, 0.0, pieces));
    near(outcome.series().at("gear.loss", 0.0), 6.5 + 5.75, 1e-9);
}

#[test]
fn a_train_with_losses_stops_when_its_drag_says() {
    let outcome = run_through(&locked(&head(1300.0, 1.0, 1e-10), 150.0, 0.0, LOSSES));
    let inertia = 0.4 + 3.0 / 5.5 / 5.5;
    let (dry, viscous): (f64, f64) = (13.0 / 300.0, 23.0 / 300.0 / 300.0);
    let stop = inertia / viscous * (1.0_f64 + viscous * 150.0 / dry).ln();
    let stuck = outcome.times("stuck", "gear.hysteresis.inner");
    near(*stuck.last().unwrap(), stop, 1e-4);
    near(outcome.channel("fast.speed", "final"), 0.0, 1e-12);
    same(outcome.number(&["energy", "lost"]), 0.5 * inertia * 150.0 * 150.0, 1e-9);
}

#[test]
fn the_check_tells_the_loss_without_load() {
    let outcome = super::helper::check(&locked(&head(1.0, 0.1, 1e-8), 150.0, 0.0, LOSSES));
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    // 300 rad/s: 4/2pi of it in the pieces, 26/2pi in the inner rotor, over 5.5 in the outer one.
    let text: String = outcome.stdout.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(text.contains("loss without load 36 W"), "{}", outcome.stdout);
    assert!(text.contains("191 Hz in the pieces"), "{}", outcome.stdout);
    assert!(
        text.contains("1241 Hz in the inner rotor, 225.7 Hz in the outer"),
        "{}",
        outcome.stdout
    );
}

/// 800 W in a gear: 8 N*m of dry drag at 100 rad/s, driven by as much.
pub fn heated(duration: f64, step: f64, more: &str) -> Outcome {
    let gear = format!("drag: [ {{ at: inner, against: ground, constant: 8 N*m }} ]\n    {more}");
    run_through(&locked(&head(duration, step, 1e-9), 100.0, 8.0, &gear))
}

/// One node with RC = 2000 s.
pub const ONE_NODE: &str = "thermal: { capacity: 40 kJ/K, resistance: 0.05 K/W, ambient: 20 degC }";

#[test]
fn one_node_warms_up_exponentially() {
    // RC = 2000 s, 800 W * 0.05 K/W = 40 K.
    let outcome = heated(1800.0, 100.0, ONE_NODE);
    near(outcome.channel("gear.loss", "final"), 800.0, 1e-9);
    near(outcome.channel("gear.magnet_temperature", "final"), 43.7372136104, 1e-6);
    let series = outcome.series();
    for time in [0.0, 400.0, 1000.0] {
        let rise = 40.0 * (1.0 - f64::exp(-time / 2000.0));
        near(series.at("gear.magnet_temperature", time), 20.0 + rise, 1e-6);
    }
    let outcome = heated(40000.0, 4000.0, ONE_NODE);
    near(outcome.channel("gear.magnet_temperature", "final"), 60.0, 1e-5);
    // Started warm it cools; half the heat gives half the rise.
    let warm = "thermal: { capacity: 40 kJ/K, resistance: 0.05 K/W, ambient: 20 degC, share: 50 %, initial_temperature: 90 degC }";
    let found = heated(1800.0, 100.0, warm).channel("gear.magnet_temperature", "final");
    near(found, 40.0 + 50.0 * f64::exp(-0.9), 1e-6);
}

#[test]
fn magnets_that_get_too_hot_are_warned_with_the_time() {
    let limit = |celsius: f64| format!("maximum_temperature: {celsius} degC\n    {ONE_NODE}");
    let outcome = heated(3000.0, 100.0, &limit(50.0));
    // 2000 s * ln 4.
    let told = outcome.at(&["warnings"]).to_string();
    assert!(told.contains("maximum_temperature of 50 degC from 2772.59 s on"), "{told}");
    let told = heated(2700.0, 100.0, &limit(50.0)).at(&["warnings"]).to_string();
    assert!(!told.contains("maximum_temperature"), "{told}");
}

/// Two nodes that take 300 W and 500 W of 800 W.
pub const TWO_NODES: &str = "thermal:\n      ambient: 20 degC\n      between: 0.02 K/W\n      \
                             inner: { capacity: 5 kJ/K, resistance: 0.1 K/W, share: 37.5 % }\n      \
                             outer: { capacity: 20 kJ/K, resistance: 0.05 K/W, share: 62.5 % }";

#[test]
fn two_nodes_exchange_heat() {
    // 300 W and 500 W of 800 W; rises by the matrix exponential of the network (SciPy's expm).
    let outcome = heated(600.0, 100.0, TWO_NODES);
    near(outcome.channel("gear.magnet_temperature_inner", "final"), 34.8315375672, 1e-6);
    near(outcome.channel("gear.magnet_temperature_outer", "final"), 33.2507186598, 1e-6);
    let outcome = heated(20000.0, 1000.0, TWO_NODES);
    near(outcome.channel("gear.magnet_temperature_inner", "final"), 47.0588235294, 1e-5);
    near(outcome.channel("gear.magnet_temperature_outer", "final"), 46.4705882353, 1e-5);
}

#[test]
fn the_torque_falls_as_the_magnets_warm_up() {
    let warm = format!(
        "initial_load_angle: 30 deg\n    rated_temperature: 20 degC\n    remanence_coefficient: -0.12 %/K\n    {ONE_NODE}"
    );
    let outcome = heated(1800.0, 100.0, &warm);
    let left = (1.0 - 0.0012 * 23.7372136104_f64).powi(2);
    near(outcome.channel("gear.torque_outer", "max"), -750.0 * left, 1e-4);
    near(outcome.channel("gear.torque_outer", "min"), -750.0, 1e-9);
    // The share of what the magnets give at the moment stays that of the angle.
    near(outcome.channel("gear.pull_out_share", "final"), 0.5, 1e-12);
    // Warm at the start counts from the start.
    let start = warm.replace("ambient: 20 degC", "ambient: 20 degC, initial_temperature: 80 degC");
    let outcome = heated(0.1, 0.1, &start);
    near(outcome.series().at("gear.torque_outer", 0.0), -750.0 * 0.861184, 1e-9);
}

/// A coupling under 1.25 of its pull-out torque, from rest; keys of its thermal node follow.
pub fn slipping(coupling: &str, top: &str) -> Outcome {
    run_well(&format!(
        "{top}bodies:\n  rotor: {{ inertia: 0.02 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: 5, pull_out: 40 N*m, {coupling} }}\n\
         motors:\n  drive: {{ body: rotor, law: {{ prescribed: {{ torque: 50 N*m }} }} }}\n",
    ))
}

/// A coupling whose magnets weaken as they warm up.
pub const WARM: &str = "damping: 0.8 N*m*s/rad, rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K, \
                        thermal: { capacity: 30 J/K, resistance: 0.2 K/W, ambient: 20 degC }";

/// Its speed, phase and temperature after 1 s by `SciPy`: DOP853 at 1e-12; Radau agrees.
pub const SLIPS_WARM: [f64; 3] = [59.56665408969994, 299.26402162918106, 110.80348930670995];

#[test]
fn a_slipping_coupling_heats_and_weakens_itself() {
    let outcome = slipping(WARM, &head(1.0, 0.1, 1e-10));
    let [speed, phase, celsius] = SLIPS_WARM;
    same(outcome.channel("rotor.speed", "final"), speed, 1e-6);
    same(outcome.channel("coupling.phase", "final"), phase, 1e-8);
    near(outcome.channel("coupling.magnet_temperature", "final"), celsius, 1e-5);
    // The energy that the weakening field gives up is in the books.
    assert!(outcome.number(&["energy", "residual_share"]) < 1e-9);
}

#[test]
fn all_that_is_lost_becomes_heat() {
    // Almost no heat gets out: the rise times the capacity is what was lost.
    let node = "thermal: { capacity: 30 J/K, resistance: 1e12 K/W, ambient: 20 degC }";
    for damping in ["0.8 N*m*s/rad", "{ coefficient: 0.8 N*m*s/rad, peak_at: 40 rad/s }"] {
        let outcome = slipping(&format!("damping: {damping}, {node}"), &head(0.5, 0.1, 1e-10));
        let rise = outcome.channel("coupling.magnet_temperature", "final") - 20.0;
        assert!(rise > 10.0, "{rise}");
        same(30.0 * rise, outcome.number(&["energy", "lost"]), 1e-7);
    }
    // Drag and losses of a gear that runs out, dry and viscous, on both rotors.
    let gear = format!(
        "drag: [ {{ at: inner, constant: 0.5 N*m, per_speed: 0.01 N*m*s/rad }}, {{ at: outer, against: ground, constant: 2 N*m }} ]\n    \
         damping: {{ at: outer, coefficient: 20 N*m*s/rad }}\n    {LOSSES}\n    {node}"
    );
    let outcome = run_through(&locked(&head(100.0, 1.0, 1e-10), 150.0, 0.0, &gear));
    let rise = outcome.channel("gear.magnet_temperature", "final") - 20.0;
    same(30.0 * rise, outcome.number(&["energy", "lost"]), 1e-7);
    near(outcome.channel("fast.speed", "final"), 0.0, 1e-9);
}

#[test]
fn a_steady_start_holds_the_temperature_of_the_start() {
    let scenario = format!(
        "{}start: steady\nbodies:\n  a: {{ inertia: 0.1 kg*m2, speed: 100 rad/s }}\n  b: {{ inertia: 0.1 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [a, b], pole_pairs: 4, pull_out: 80 N*m, damping: 0.1 N*m*s/rad, \
         rated_temperature: 20 degC, remanence_coefficient: -0.12 %/K, \
         thermal: {{ capacity: 1 kJ/K, resistance: 0.5 K/W, ambient: 20 degC, initial_temperature: 80 degC }} }}\n\
         motors:\n  drive: {{ body: a, law: {{ prescribed: {{ torque: 40 N*m }} }} }}\n\
         loads:\n  brake: {{ body: b, law: {{ prescribed: {{ torque: -40 N*m }} }} }}\n",
        head(100.0, 10.0, 1e-10),
    );
    let outcome = run_through(&scenario);
    let series = outcome.series();
    for time in [0.0, 50.0, 100.0] {
        // In step there is no loss: it cools with RC = 500 s, and the load angle follows.
        let celsius = 20.0 + 60.0 * f64::exp(-time / 500.0);
        let left = (1.0 - 0.0012 * (celsius - 20.0)).powi(2);
        near(series.at("coupling.magnet_temperature", time), celsius, 1e-5);
        near(series.at("coupling.load_angle", time), (0.5 / left).asin(), 1e-6);
    }
}
