//! Coast-downs and braking: closed forms, and the hard stop that slips a gear.
//!
//! Closed forms of J dw/dt = -(Tc + b w + Tq (w/w0)^2), derived; J 4 kg*m2, 150 rad/s.

use super::helper::{head, near, run_through, run_well, same};

/// A wheel that coasts down against loads.
pub fn coast(duration: f64, loads: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 4 kg*m2, speed: 150 rad/s }}\nloads:\n{loads}",
        head(duration, 0.5, 1e-10),
    )
}

/// Dry friction of 20 N*m.
pub const RUB: &str = "  rub: { body: wheel, law: { friction: { sliding: 20 N*m } } }\n";
/// Viscous drag.
pub const OIL: &str = "  oil: { body: wheel, law: { viscous: { coefficient: 0.5 N*m*s/rad } } }\n";
/// A fan of 80 N*m at the first speed.
pub const FAN: &str = "  fan: { body: wheel, law: { power_law: { torque: 80 N*m, speed: 150 rad/s, exponent: 2 } } }\n";

#[test]
fn dry_friction_stops_in_a_straight_line() {
    // J w0/T = 30 s, J w0^2/(2 T) = 2250 rad.
    let outcome = run_well(&coast(35.0, RUB));
    near(outcome.times("stuck", "rub")[0], 30.0, 1e-6);
    same(outcome.channel("wheel.angle", "final"), 2250.0, 1e-7);
    near(outcome.channel("wheel.speed", "final"), 0.0, 1e-12);
    same(outcome.series().at("wheel.speed", 15.0), 75.0, 1e-9);
    same(outcome.number(&["energy", "lost"]), 0.5 * 4.0 * 150.0 * 150.0, 1e-9);
}

#[test]
fn dry_and_viscous_friction_stop_together() {
    // J/b ln(1 + b w0/Tc); w = (w0 + Tc/b) exp(-b t/J) - Tc/b.
    let outcome = run_well(&coast(14.0, &format!("{RUB}{OIL}")));
    near(outcome.times("stuck", "rub")[0], 12.465156944372, 1e-6);
    same(outcome.series().at("wheel.speed", 5.0), 61.699671418608, 1e-7);
}

#[test]
fn quadratic_drag_alone_never_stops() {
    // w0/(1 + Tq t/(J w0)): 90 rad/s after 5 s.
    let outcome = run_well(&coast(14.0, FAN));
    same(outcome.series().at("wheel.speed", 5.0), 90.0, 1e-8);
    assert!(outcome.channel("wheel.speed", "min") > 0.0);
}

#[test]
fn quadratic_drag_and_dry_friction_stop() {
    // J w0/sqrt(Tq Tc) atan(sqrt(Tq/Tc)) and (J w0^2/(2 Tq)) ln(1 + Tq/Tc).
    let outcome = run_well(&coast(18.0, &format!("{RUB}{FAN}")));
    near(outcome.times("stuck", "rub")[0], 16.607230766911, 1e-6);
    same(outcome.channel("wheel.angle", "final"), 905.30882574418, 1e-7);
}

#[test]
fn a_curve_of_friction_is_the_same_as_its_law() {
    // 20 N*m at all speeds, as a curve: sticks at rest like friction.
    let curve = "  rub: { body: wheel, law: { curve: { points: [[0 rpm, 20 N*m], [2000 rpm, 20 N*m]] } } }\n";
    let outcome = run_well(&coast(35.0, curve));
    same(outcome.channel("wheel.angle", "final"), 2250.0, 1e-7);
    near(outcome.channel("wheel.speed", "final"), 0.0, 1e-12);
}

#[test]
fn brake_and_load_stop_a_drum() {
    // J 50 from 1500 rpm against 800 + 150 N*m: J w0/950 s, J w0^2/1900 rad = 103.34186360493
    // turns; the brake takes 800/950 of the energy. Then the brake holds the load.
    let outcome = run_well(&drum());
    near(outcome.times("stuck", "stop")[0], 8.2673490883942, 1e-6);
    let turns = 103.34186360493 * std::f64::consts::TAU;
    same(outcome.channel("drum.angle", "final"), turns, 1e-7);
    same(outcome.number(&["energy", "lost"]), 519452.86321523, 1e-7);
    same(outcome.number(&["energy", "absorbed"]), 150.0 * turns, 1e-7);
    near(outcome.channel("stop.torque", "final"), 150.0, 1e-9);
    near(outcome.channel("drum.speed", "final"), 0.0, 1e-12);
}

/// A drum with a weight, stopped by its brake.
pub fn drum() -> String {
    format!(
        "{}bodies:\n  drum: {{ inertia: 50 kg*m2, speed: 1500 rpm }}\n\
         loads:\n  weight: {{ body: drum, law: {{ prescribed: {{ torque: -150 N*m }} }} }}\n\
         brakes:\n  stop: {{ body: drum, against: ground, torque: 800 N*m, applied: 1 }}\n",
        head(10.0, 0.5, 1e-10),
    )
}

/// A drive with a brake on one body and its load on the other: the motor is cut and the brake
/// falls in at 1 s.
pub fn hard_stop(joint: &str, duration: f64) -> String {
    format!(
        "{}start: steady\n\
         bodies:\n  brake_drum: {{ inertia: 20 kg*m2, speed: 1500 rpm }}\n  machine: {{ inertia: 30 kg*m2, speed: 1500 rpm }}\n\
         {joint}\n\
         motors:\n  drive: {{ body: brake_drum, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: 150 N*m, to: 0 N*m }} }} }} }} }}\n\
         loads:\n  work: {{ body: machine, law: {{ prescribed: {{ torque: -150 N*m }} }} }}\n\
         brakes:\n  stop: {{ body: brake_drum, torque: 800 N*m, applied: {{ step: {{ at: 1 s, from: 0, to: 1 }} }} }}\n",
        head(duration, 0.05, 1e-9),
    )
}

#[test]
fn hard_stop_reverses_the_torque_between_the_bodies() {
    // Rigid: the machine is slowed with 950/50 rad/s2, so the joint carries
    // 150 - 30 * 19 = -420 N*m; on an undamped spring the swing about it reaches -990 N*m.
    let joint = "shafts:\n  joint: { between: [brake_drum, machine], stiffness: 20 kN*m/rad }";
    let outcome = run_well(&hard_stop(joint, 3.0));
    near(outcome.series().at("joint.torque", 0.5), 150.0, 1e-6);
    same(outcome.channel("joint.torque", "min"), -990.0, 1e-7);
    near(outcome.channel("joint.torque", "max"), 150.0, 1e-3);
    let joint = "shafts:\n  joint: { between: [brake_drum, machine], rigid: true }";
    let series = run_well(&hard_stop(joint, 3.0)).series();
    near(series.at("joint.torque", 0.5), 150.0, 1e-9);
    near(series.at("joint.torque", 1.0), -420.0, 1e-9);
    near(series.at("joint.torque", 2.0), -420.0, 1e-9);
}

#[test]
fn a_stop_slips_the_coupling_that_never_slips_in_drive() {
    // Equal areas for a reversal from the preload a = 150/P to -T = -420/P:
    // T (pi - asin T + asin a) = cos(asin a) + sqrt(1 - T^2) has its root at P = 646.7429053 N*m,
    // more than four times the working torque.
    let joint = |pull_out: f64| {
        format!(
            "magnetic_couplings:\n  joint: {{ between: [brake_drum, machine], pole_pairs: 8, pull_out: {pull_out} N*m }}"
        )
    };
    for (factor, slips) in [(0.9999, true), (1.0001, false)] {
        let pull_out = 646.7429053059282 * factor;
        let outcome = run_through(&hard_stop(&joint(pull_out), 3.0));
        assert_eq!(outcome.slips("joint") > 0, slips, "{pull_out} N*m");
        let first = outcome.slip_times("joint").first().copied();
        assert!(first.is_none_or(|time| time > 1.0), "it slips in drive at {first:?}");
        if slips {
            // The machine runs ahead of its drive.
            let event = &outcome.at(&["gears", "joint", "slip_events"])[0];
            assert_eq!(event["direction"], -1);
        }
    }
}
