//! Induction motors by their equivalent circuit, at once and with flux equations.
//!
//! The machine is that of Chapman, Electric Machinery Fundamentals, example 7-5: 460 V, 60 Hz, four
//! poles, star, R1 0.641, X1 1.106, R2 0.332, X2 0.464, Xm 26.3 ohm (data read in a public exercise).
//! Its exact circuit was evaluated apart from this program. The recorded transients come from an
//! integration with `SciPy` (DOP853, relative tolerance 1e-12) of the textbook's flux linkages of
//! stator and rotor in a frame at rest, sinusoidal phase voltages and all: other states and another
//! frame than the program's.

use super::helper::{Outcome, head, near, run, run_well, same};
use std::f64::consts::PI;

/// Speed without load, rad/s.
pub const SYNCHRONOUS: f64 = 60.0 * PI;

/// The textbook's machine on a body of its own.
pub fn machine(
    duration: f64,
    step: f64,
    inertia: f64,
    speed: f64,
    law: &str,
    more: &str,
) -> String {
    format!(
        "{}bodies:\n  rotor: {{ inertia: {inertia} kg*m2, speed: {speed} rad/s }}\n\
         motors:\n  motor: {{ body: rotor, law: {{ induction_circuit: {{ line_voltage: 460 V, frequency: 60 Hz, pole_pairs: 2, \
         stator_resistance: 0.641 ohm, stator_reactance: 1.106 ohm, rotor_resistance: 0.332 ohm, rotor_reactance: 0.464 ohm, \
         magnetising_reactance: 26.3 ohm{law} }} }}{more} }}\n",
        head(duration, step, 1e-10),
    )
}

/// Torque at the start of a run at a slip.
pub fn torque(slip: f64, law: &str) -> f64 {
    let speed = SYNCHRONOUS * (1.0 - slip);
    run_well(&machine(1.0, 0.5, 1e12, speed, law, "")).series().at("motor.torque", 0.0)
}

#[test]
fn the_circuit_drives_generates_and_plugs() {
    for (slip, expected) in [
        (0.022, 62.8068215673),
        (0.05, 125.557029231),
        (0.5, 174.061595842),
        (1.0, 106.562104547),
        (-0.022, -73.3256173768),
        (1.5, 75.5428493112),
    ] {
        same(torque(slip, ""), expected, 5e-12);
    }
    near(torque(0.0, ""), 0.0, 1e-9);
    // Torque goes with the square of the voltage: 80 %.
    same(torque(1.0, ", voltage: 80 %"), 68.1997469101, 5e-12);
    // The book's own rounded figure, from memory: 104 N*m.
    same(torque(1.0, ""), 104.0, 0.03);
}

#[test]
fn a_contactor_opens_below_one_half() {
    let law = ", connected: { ramp: { start: 0.2 s, end: 1.2 s, from: 1, to: 0 } }";
    for transient in ["", ", transient: true"] {
        let law = format!("{law}{transient}");
        let series = run_well(&machine(2.0, 0.1, 1e12, 180.0, &law, "")).series();
        // The ramp passes 0.5 at 0.7 s.
        assert!(series.at("motor.torque", 0.6) > 50.0);
        for time in [0.8, 1.2, 2.0] {
            near(series.at("motor.torque", time), 0.0, 1e-300);
        }
    }
    near(torque(0.1, ", connected: 0"), 0.0, 1e-300);
    let closing = ", connected: { step: { at: 0.5 s, from: 0, to: 1 } }";
    let series = run_well(&machine(1.0, 0.5, 1e12, 0.0, closing, "")).series();
    near(series.at("motor.torque", 0.0), 0.0, 1e-300);
    same(series.at("motor.torque", 0.5), 106.562104547, 5e-12);
}

#[test]
fn a_mirrored_machine_turns_the_other_way() {
    for law in ["", ", transient: true"] {
        let forward = run_well(&machine(0.5, 0.01, 0.1, 0.0, law, "")).series();
        let mirrored = run_well(&machine(0.5, 0.01, 0.1, 0.0, law, ", reversed: true")).series();
        let pairs = forward.column("rotor.speed").into_iter().zip(mirrored.column("rotor.speed"));
        for (one, other) in pairs {
            near(one, -other, 1e-9);
        }
        assert!(forward.at("rotor.speed", 0.5) > 180.0);
    }
}

// Rotor heat of an unloaded start is the kinetic energy at synchronous speed, whatever the curve
// (textbook result): 1/2 J ws^2.
#[test]
fn an_unloaded_start_heats_the_rotor_by_its_kinetic_energy() {
    let outcome = run_well(&machine(3.0, 0.1, 0.1, 0.0, "", ""));
    let expected = 0.5 * 0.1 * SYNCHRONOUS * SYNCHRONOUS;
    same(outcome.number(&["motors", "motor", "rotor_heat"]), expected, 1e-6);
    assert!(outcome.number(&["motors", "motor", "run_up_time"]) < 0.2);
}

#[test]
fn the_flux_equations_come_to_rest_on_the_circuit() {
    // At standstill the magnetising flux dies slowest, at (R1 R2/(R1 + R2))/Xm w = 3.1/s.
    for (slip, duration) in [(0.022, 2.0), (-0.022, 2.0), (0.2, 8.0), (1.0, 8.0), (1.5, 8.0)] {
        let speed = SYNCHRONOUS * (1.0 - slip);
        let outcome = run_well(&machine(duration, 0.5, 1e12, speed, ", transient: true", ""));
        let end = outcome.channel("motor.torque", "final");
        same(end, torque(slip, ""), 1e-7);
    }
}

/// Torque at its `n`-th extreme in a fine series, by a parabola through three rows.
pub fn extremes(outcome: &Outcome) -> Vec<(f64, f64)> {
    let series = outcome.series();
    let (times, torques) = (series.column("time"), series.column("motor.torque"));
    let mut found = Vec::new();
    for k in 1..times.len() - 1 {
        let [a, b, c] = [torques[k - 1], torques[k], torques[k + 1]];
        if (b - a) * (c - b) < 0.0 {
            let (bend, slope) = (0.5 * (c - 2.0 * b + a), 0.5 * (c - a));
            let shift = -0.5 * slope / bend;
            found.push((times[k] + shift * (times[k + 1] - times[k]), b + 0.5 * slope * shift));
        }
    }
    found
}

#[test]
fn a_start_on_line_has_the_torque_pulses_of_an_independent_integration() {
    let outcome = run_well(&machine(0.6, 1e-4, 0.1, 0.0, ", transient: true", ""));
    let recorded = [
        (0.0108939, 301.038703),
        (0.0202731, -67.350028),
        (0.0294166, 269.445429),
        (0.0392557, -24.176458),
        (0.0493876, 237.733482),
        (0.0601297, 48.935568),
    ];
    for ((time, torque), (at, expected)) in extremes(&outcome).into_iter().zip(recorded) {
        near(time, at, 2e-6);
        near(torque, expected, 2e-4);
    }
    same(outcome.channel("motor.torque", "max"), 301.038703482, 1e-7);
    let series = outcome.series();
    for (time, speed, torque) in [
        (0.05, 57.620523263, 235.830790733),
        (0.1, 136.199068003, 206.321800452),
        (0.2, 189.768843345, -5.503226199),
        (0.3, 188.511762540, 1.024332900),
        (0.6, 188.495600733, -0.000193891),
    ] {
        same(series.at("rotor.speed", time), speed, 1e-8);
        near(series.at("motor.torque", time), torque, 1e-5);
    }
    // Held at rest the first pulses are larger still.
    let locked = run_well(&machine(0.05, 1e-4, 1e12, 0.0, ", transient: true", ""));
    for ((time, torque), (at, expected)) in
        extremes(&locked).into_iter().zip([(0.0108063, 306.051375), (0.0193521, -84.404293)])
    {
        near(time, at, 2e-6);
        near(torque, expected, 2e-4);
    }
}

#[test]
fn a_contactor_that_closes_on_a_turning_flux_gives_the_recorded_pulse() {
    // Settled at a slip of 0.022, open from 1.5 s to 1.56 s, closed again; the rotor too heavy to slow down.
    let law =
        ", transient: true, connected: { pulse: { start: 1.5 s, end: 1.56 s, base: 1, peak: 0 } }";
    let speed = SYNCHRONOUS * (1.0 - 0.022);
    let outcome = run_well(&machine(1.7, 5e-3, 1e12, speed, law, ""));
    let series = outcome.series();
    near(series.at("motor.torque", 1.55), 0.0, 1e-300);
    for (time, torque) in [
        (1.565, 228.03200464831014),
        (1.58, 61.91840584937676),
        (1.6, 50.382701289896545),
        (1.65, 62.664362764159094),
        (1.7, 62.8179731702555),
    ] {
        near(series.at("motor.torque", time), torque, 1e-5);
    }
}

#[test]
fn a_steady_start_begins_with_settled_fluxes() {
    let load = "start: steady\nloads:\n  load: { body: rotor, law: { prescribed: { torque: -60 N*m } } }\n";
    let scenario = format!("{}{load}", machine(0.5, 0.05, 0.1, 185.0, ", transient: true", ""));
    let series = run_well(&scenario).series();
    let at_once = format!("{}{load}", machine(0.5, 0.05, 0.1, 185.0, "", ""));
    let speed = run_well(&at_once).series().at("rotor.speed", 0.0);
    for time in [0.0, 0.1, 0.5] {
        same(series.at("rotor.speed", time), speed, 1e-9);
        same(series.at("motor.torque", time), 60.0, 1e-7);
    }
}

#[test]
fn a_scale_is_refused() {
    let outcome = run(&machine(1.0, 0.5, 1.0, 0.0, "", ", scale: 0.5"));
    assert_eq!(outcome.status, Some(2));
    assert!(outcome.stderr.contains("`scale` has no meaning"), "{}", outcome.stderr);
    let protection = "protections:\n  trip: { when: { time: 0.5 s }, then: [{ set: motors.motor.scale, to: 0 }] }\n";
    let outcome = run(&format!("{}{protection}", machine(1.0, 0.5, 1.0, 0.0, "", "")));
    assert_eq!(outcome.status, Some(2), "{}", outcome.stderr);
    assert!(outcome.stderr.contains("`scale` has no meaning"), "{}", outcome.stderr);
    // The contactor is what a protection opens.
    let protection = "protections:\n  trip: { when: { time: 0.5 s }, then: [{ set: motors.motor.law.induction_circuit.connected, to: 0 }] }\n";
    for law in ["", ", transient: true"] {
        let outcome = run_well(&format!("{}{protection}", machine(1.0, 0.25, 1e9, 0.0, law, "")));
        let series = outcome.series();
        assert!(series.at("motor.torque", 0.25).abs() > 1.0);
        near(series.at("motor.torque", 0.75), 0.0, 1e-300);
    }
}

// Chapman, Electric Machinery Fundamentals, example 7-5 (inputs read, figures by the exact circuit):
// 144.52765992 A at standstill, 18.8919485451 A at a slip of 2.2 %; in proportion to the voltage.
#[test]
fn the_current_is_that_of_the_circuit_and_of_the_fluxes_at_rest() {
    for (slip, current) in [(1.0, 144.52765992), (0.022, 18.8919485451)] {
        let speed = SYNCHRONOUS * (1.0 - slip);
        let scenario = machine(1.0, 0.5, 1e12, speed, ", voltage: 80 %", "");
        same(run_well(&scenario).series().at("motor.current", 0.5), 0.8 * current, 1e-10);
        // The direct current in the fluxes is gone after three seconds; opened, no current is left.
        let law = ", transient: true, connected: { step: { at: 4 s, from: 1, to: 0 } }";
        let series = run_well(&machine(5.0, 0.5, 1e12, speed, law, "")).series();
        same(series.at("motor.current", 3.5), current, 1e-6);
        near(series.at("motor.current", 4.5), 0.0, 1e-300);
        let law = ", connected: { step: { at: 0.5 s, from: 1, to: 0 } }";
        let series = run_well(&machine(1.0, 0.25, 1e12, speed, law, "")).series();
        same(series.at("motor.current", 0.25), current, 1e-10);
        near(series.at("motor.current", 0.75), 0.0, 1e-300);
    }
}
