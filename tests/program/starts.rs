//! Run-up times and rotor heat of motors on one inertia: closed forms and quadrature.
//!
//! Kloss's formula `T = 2 Tb/(s/sb + sb/s)` with Tb 100 N*m, sb 0.2, 1500 rpm and 1 kg*m2;
//! the run-up integrals are those of textbooks on drives (from memory), derived again.

use super::helper::{Outcome, head, near, run_through, run_well, same};

/// Synchronous speed, rad/s.
pub const SYNCHRONOUS: f64 = 157.07963267948966;

/// A cage motor by Kloss's formula on 1 kg*m2, with loads.
pub fn run_up(duration: f64, more: &str) -> String {
    format!(
        "{}bodies:\n  rotor: {{ inertia: 1 kg*m2 }}\n\
         motors:\n  cage: {{ body: rotor, law: {{ induction: {{ synchronous_speed: 1500 rpm, breakdown_torque: 100 N*m, \
         breakdown_slip: 20 %, voltage: 1 }} }} }}\n{more}",
        head(duration, 0.01, 1e-10),
    )
}

/// Ends the run at 95 % of synchronous speed.
pub const END_AT_95: &str = "protections:\n  there: { when: { of: rotor.speed, at_least: 1425 rpm }, then: [ { end_run: true } ] }\n";

#[track_caller]
fn run_up_time(outcome: &Outcome, seconds: f64) {
    same(outcome.number(&["motors", "cage", "run_up_time"]), seconds, 1e-7);
}

#[test]
fn unloaded_run_up_takes_the_closed_time() {
    // J ws/(2 Tb) ((1 - s^2)/(2 sb) + sb ln(1/s)) from standstill to s = 0.05.
    let outcome = run_well(&run_up(4.0, END_AT_95));
    run_up_time(&outcome, 2.4291551951083);
    same(outcome.number(&["end_time"]), 2.4291551951083, 1e-7);
    same(outcome.channel("rotor.speed", "final"), 0.95 * SYNCHRONOUS, 1e-9);
    // Rotor heat J ws^2 (1 - s^2)/2, whatever the motor's curve.
    same(outcome.number(&["motors", "cage", "rotor_heat"]), 12306.162987608, 1e-7);
}

#[test]
fn rotor_heat_of_a_whole_start_is_the_kinetic_energy() {
    let outcome = run_well(&run_up(40.0, ""));
    same(outcome.number(&["motors", "cage", "rotor_heat"]), 12337.005501362, 1e-7);
    same(outcome.number(&["energy", "stored_change"]), 12337.005501362, 1e-7);
    same(outcome.number(&["energy", "supplied"]), 12337.005501362, 1e-7);
}

#[test]
fn constant_load_stretches_the_run_up() {
    // Partial fractions of 1/(T(s) - 30), 5.84235369573 s; a friction load gives the same,
    // since the motor breaks it away at once.
    for load in ["prescribed: { torque: -30 N*m }", "friction: { sliding: 30 N*m }"] {
        let more = format!("loads:\n  hoist: {{ body: rotor, law: {{ {load} }} }}\n");
        run_up_time(&run_well(&run_up(7.0, &more)), 5.8423536957252);
    }
}

#[test]
fn load_above_the_starting_torque_never_starts() {
    // Kloss at standstill: 2 Tb/(1/sb + sb) = 38.4615384615 N*m.
    for (factor, starts) in [(0.9999, true), (1.0001, false)] {
        let friction = 38.461538461538 * factor;
        let more = format!(
            "loads:\n  hoist: {{ body: rotor, law: {{ friction: {{ sliding: {friction} N*m }} }} }}\n"
        );
        let outcome = run_well(&run_up(5.0, &more));
        assert_eq!(outcome.channel("rotor.speed", "final") > 0.0, starts, "{friction} N*m");
        let time = outcome.at(&["motors", "cage", "run_up_time"]);
        assert!(time.is_null(), "{time}");
    }
}

#[test]
fn quadratic_load_stretches_the_run_up() {
    // 30 ((1 - s)/0.98)^2 N*m, quadrature.
    let more = "loads:\n  fan: { body: rotor, law: { power_law: { torque: 30 N*m, speed: 1470 rpm, exponent: 2 } } }\n";
    run_up_time(&run_well(&run_up(4.0, more)), 2.7500349036476);
}

#[test]
fn lowered_voltage_lowers_torque_by_its_square() {
    // All torques by 0.64: the unloaded time divided by it.
    let outcome = run_well(&run_up(5.0, "").replace("voltage: 1 ", "voltage: 80 % "));
    run_up_time(&outcome, 2.4291551951083 / 0.64);
}

#[test]
fn curve_through_zero_slip_ends_at_its_balance() {
    // A straight torque line a (n0 - n) on J: speed n0 (1 - exp(-a t/J)).
    let scenario = format!(
        "{}bodies:\n  rotor: {{ inertia: 2 kg*m2 }}\n\
         motors:\n  line: {{ body: rotor, law: {{ curve: {{ points: [[0 rad/s, 100 N*m], [50 rad/s, 0 N*m]], voltage: 1 }} }} }}\n",
        head(3.0, 0.5, 1e-10),
    );
    let series = run_well(&scenario).series();
    for time in [0.5_f64, 1.0, 3.0] {
        same(series.at("rotor.speed", time), 50.0 * (1.0 - (-time).exp()), 1e-8);
        same(series.at("line.torque", time), 100.0 * (-time).exp(), 1e-7);
    }
}

/// 150 N*m on 2.5 kg*m2 against a quadratic load of 100 N*m at 1500 rpm.
pub fn fan(start: &str, duration: f64) -> String {
    format!(
        "{}start: {start}\nbodies:\n  wheel: {{ inertia: 2.5 kg*m2, speed: 0 rad/s }}\n\
         motors:\n  drive: {{ body: wheel, law: {{ prescribed: {{ torque: 150 N*m }} }} }}\n\
         loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ torque: 100 N*m, speed: 1500 rpm, exponent: 2 }} }} }}\n\
         requirements:\n  rated: {{ of: wheel.speed, reaches: 1500 rpm }}\n",
        head(duration, 0.5, 1e-10),
    )
}

#[test]
fn quadratic_load_rises_as_a_hyperbolic_tangent() {
    // w = winf tanh(t/tau), winf = wr sqrt(150/100), tau = J wr/sqrt(150 * 100).
    let outcome = run_well(&fan("as_given", 4.0));
    same(outcome.series().at("wheel.speed", 2.0), 106.52963247114, 1e-7);
    same(outcome.found("rated").unwrap(), 3.6751973105667, 1e-7);
    let series = run_through(&fan("steady", 1.0)).series();
    for time in [0.0, 0.5, 1.0] {
        same(series.at("wheel.speed", time), 192.38247452428, 1e-8);
    }
}

#[test]
fn power_law_follows_the_affinity_laws() {
    // Torque ~ n^2: at 80 % speed 0.64 of it, the power 0.512 of it.
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 1e9 kg*m2, speed: 1200 rpm }}\n\
         loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ power: 20 kW, speed: 1500 rpm, exponent: 2 }} }} }}\n",
        head(1.0, 0.5, 1e-8),
    );
    let series = run_well(&scenario).series();
    same(series.at("fan.torque", 0.0), -0.64 * 20e3 / SYNCHRONOUS, 1e-12);
    same(series.at("fan.power", 0.0), -0.512 * 20e3, 1e-12);
}

#[test]
fn cubic_and_broken_exponents_are_exact_too() {
    // Coasting against T |w/w0|^n: w = w0 (1 + (n - 1) T t/(J w0))^(-1/(n - 1)).
    for exponent in [1.5_f64, 3.0, 2.7] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: 4 kg*m2, speed: -150 rad/s }}\n\
             loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ torque: 80 N*m, speed: 150 rad/s, exponent: {exponent} }} }} }}\n",
            head(5.0, 1.0, 1e-10),
        );
        let base = 1.0 + (exponent - 1.0) * 80.0 * 5.0 / (4.0 * 150.0);
        let expected = -150.0 * base.powf(-1.0 / (exponent - 1.0));
        near(run_well(&scenario).channel("wheel.speed", "final"), expected, 1e-6);
    }
}
