//! The claims of the scenarios that switch a motor, against closed forms and the same run without
//! the cause that the story names.

use crate::runner::{run, same};

const SHARE: &str = "gears/gear/peak_pull_out_share";

/// Line current at standstill, A: |V/(Z1 + jXm Z2/(jXm + Z2))| of the two scenarios' machine in star,
/// V = 400/3 V, Z1 = 0.2 + 0.6j, Z2 = 0.25 + 0.6j, Xm = 18 ohm (closed form, evaluated apart).
const STAR_CURRENT: f64 = 105.747_013_333;

#[test]
fn the_change_to_delta_is_harder_than_the_start_that_it_spares() {
    let law = "motors.fan_motor.law.induction_circuit";
    let [voltage, connected] = ["voltage=1", "connected=1"].map(|set| format!("{law}.{set}"));
    let straight = run("star_delta", &[&voltage, &connected]);
    assert_eq!(straight.slips("gear"), 0);
    // By the curve of torque over speed the change is harmless: the pulses are what breaks the grip.
    let curve = run("star_delta", &[&format!("{law}.transient=false")]);
    assert_eq!(curve.slips("gear"), 0);
    // A change of 20 ms finds the rotor flux still in step.
    let times =
        [format!("{law}.connected.pulse.end=3.02 s"), format!("{law}.voltage.step.at=3.01 s")];
    let quick = run("star_delta", &[&times[0], &times[1]]);
    assert_eq!(quick.slips("gear"), 0);
    assert!(quick.number(SHARE) < 0.85);
    // All of them run up to the same speed.
    same(straight.last("impeller.speed"), curve.last("impeller.speed"), 1e-5);
    same(straight.last("impeller.speed"), quick.last("impeller.speed"), 1e-5);
}

#[test]
fn the_current_of_a_held_start_in_star_is_that_of_the_circuit() {
    let held = ["bodies.impeller.inertia=1e7 kg*m2", "duration=2 s"];
    same(run("star_delta", &held).last("fan_motor.current"), STAR_CURRENT, 2e-3);
    // At once by the circuit: the largest current is that of standstill.
    let law = "motors.fan_motor.law.induction_circuit.transient=false";
    let found = run("star_delta", &["duration=1 s", law]);
    same(found.number("channels/fan_motor.current/max"), STAR_CURRENT, 1e-9);
}

#[test]
fn a_longer_interruption_may_be_the_gentler_one() {
    let end = "motors.line_motor.law.induction_circuit.connected.pulse.end";
    let longer = run("voltage_dip", &[&format!("{end}=0.32 s")]);
    assert_eq!(longer.slips("gear"), 0);
    assert!(longer.number(SHARE) < 0.8);
    // While the line is away no current flows and the motor gives no torque.
    assert!(longer.number("channels/line_motor.current/min") < 1e-300);
    // At its end it rests on the circuit, fluxes and all.
    let curve = [
        format!("{end}=0.32 s"),
        "motors.line_motor.law.induction_circuit.transient=false".to_owned(),
    ];
    let curve = run("voltage_dip", &[&curve[0], &curve[1]]);
    for channel in ["line_motor.current", "line_motor.torque", "impeller.speed"] {
        same(longer.last(channel), curve.last(channel), 1e-6);
    }
}
