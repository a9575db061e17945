//! Steady starts: the operating point, and the reason when there is none.
//!
//! Expected: balance of torques by hand (statics).

use super::helper::{Outcome, head, near, run, run_well, same};

/// Motor, magnetic gear 4/22 with the modulator held, and a load; all free to turn.
fn drive(motor: &str, load: &str) -> String {
    format!(
        "{}start: steady\n\
         bodies:\n  rotor: {{ inertia: 0.25 kg*m2, speed: 1490 rpm }}\n  inner: {{ inertia: 0.02 kg*m2 }}\n  \
         outer: {{ inertia: 0.15 kg*m2 }}\n  fan: {{ inertia: 2.5 kg*m2 }}\n\
         shafts:\n  fast: {{ between: [rotor, inner], stiffness: 20 kN*m/rad, damping: 2 N*m*s/rad }}\n  \
         slow: {{ between: [outer, fan], stiffness: 50 kN*m/rad, damping: 5 N*m*s/rad }}\n\
         magnetic_gears:\n  gear:\n    inner: inner\n    modulator: ground\n    outer: outer\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 1500 N*m }}\n    \
         damping: {{ at: outer, coefficient: 24 N*m*s/rad }}\n\
         motors:\n  line: {{ body: rotor, law: {{ {motor} }} }}\n\
         loads:\n  work: {{ body: fan, law: {{ {load} }} }}\n",
        head(1.0, 0.1, 1e-9),
    )
}

/// A straight motor line: 400 N*m at rest, nothing at 1500 rpm.
const LINE: &str = "curve: { points: [[0 rpm, 400 N*m], [1500 rpm, 0 N*m]], voltage: 1 }";

#[test]
fn speeds_and_torques_balance() {
    // Viscous load c at the slow side: T = 400 (1 - w/w0) and T = c w/5.5^2.
    let outcome = run_well(&drive(LINE, "viscous: { coefficient: 30 N*m*s/rad }"));
    let w0 = 1500.0 * std::f64::consts::PI / 30.0;
    let speed = 400.0 / (400.0 / w0 + 30.0 / 30.25);
    let torque = speed * 30.0 / 30.25;
    let series = outcome.series();
    for time in [0.0, 0.5, 1.0] {
        same(series.at("rotor.speed", time), speed, 1e-8);
        same(series.at("fan.speed", time), -speed / 5.5, 1e-8);
        same(series.at("line.torque", time), torque, 1e-7);
        same(series.at("fast.torque", time), torque, 1e-7);
        same(series.at("gear.torque_inner", time), -torque, 1e-7);
        same(series.at("gear.torque_outer", time), -5.5 * torque, 1e-7);
        same(series.at("gear.torque_modulator", time), 6.5 * torque, 1e-7);
        same(series.at("fast.twist", time), torque / 20e3, 1e-7);
        same(series.at("slow.torque", time), -5.5 * torque, 1e-7);
        same(series.at("gear.load_angle", time), (5.5 * torque / 1500.0).asin(), 1e-7);
        near(series.at("gear.slip_speed", time), 0.0, 1e-7);
    }
    same(outcome.number(&["gears", "gear", "peak_pull_out_share"]), 5.5 * torque / 1500.0, 1e-7);
}

#[test]
fn nothing_moves_from_a_steady_start() {
    let outcome =
        run_well(&drive(LINE, "power_law: { torque: 700 N*m, speed: 267 rpm, exponent: 2 }"));
    for channel in
        ["rotor.speed", "fan.speed", "fast.torque", "slow.torque", "gear.load_angle", "line.torque"]
    {
        let (min, max) = (outcome.channel(channel, "min"), outcome.channel(channel, "max"));
        assert!((max - min).abs() <= 1e-6 * max.abs().max(min.abs()), "{channel}: {min} to {max}");
    }
}

#[test]
fn speed_loop_starts_in_equilibrium() {
    // With an integral part the speed is the one asked for, whatever the load.
    let motor = "speed_loop: { speed: 1450 rpm, torque_limit: 300 N*m, gain: 10 N*m*s/rad, integral_time: 0.4 s }";
    let outcome = run_well(&drive(motor, "viscous: { coefficient: 30 N*m*s/rad }"));
    let speed = 1450.0 * std::f64::consts::PI / 30.0;
    for time in [0.0, 1.0] {
        same(outcome.series().at("rotor.speed", time), speed, 1e-8);
    }
    // Without it the speed falls by torque/gain: gain (w* - w) = c w/5.5^2.
    let motor = "speed_loop: { speed: 1450 rpm, torque_limit: 300 N*m, gain: 10 N*m*s/rad }";
    let outcome = run_well(&drive(motor, "viscous: { coefficient: 30 N*m*s/rad }"));
    for time in [0.0, 1.0] {
        same(outcome.series().at("rotor.speed", time), speed * 10.0 / (10.0 + 30.0 / 30.25), 1e-8);
    }
}

#[test]
fn takes_the_stable_point_of_an_induction_motor() {
    // Kloss has two speeds for a constant load; the one beyond the breakdown slip is unstable.
    // s/sb = a - sqrt(a^2 - 1), a = Tb/T.
    let motor = "induction: { synchronous_speed: 1500 rpm, breakdown_torque: 450 N*m, breakdown_slip: 12 %, voltage: 1 }";
    let outcome = run_well(&drive(motor, "prescribed: { torque: 825 N*m }"));
    let a = 450.0_f64 / 150.0;
    let slip = 0.12 * (a - (a * a - 1.0).sqrt());
    same(outcome.series().at("rotor.speed", 0.0), 50.0 * std::f64::consts::PI * (1.0 - slip), 1e-8);
}

#[test]
fn friction_at_rest_is_stuck() {
    // A hoist that hangs on its brake behind the gear: nothing turns, the gear carries nothing.
    let scenario = drive("prescribed: { torque: 0 N*m }", "prescribed: { torque: 200 N*m }")
        .replace("speed: 1490 rpm", "speed: 0 rpm")
        + "brakes:\n  holding: { body: fan, torque: 300 N*m, applied: 1 }\n";
    let outcome = run_well(&scenario);
    near(outcome.channel("holding.torque", "final"), -200.0, 1e-7);
    for channel in ["rotor.speed", "fan.speed"] {
        near(outcome.channel(channel, "max").abs(), 0.0, 1e-9);
    }
    near(outcome.channel("gear.load_angle", "final"), 0.0, 1e-7);
}

#[test]
fn free_rotation_is_no_fault() {
    // Nothing holds the speed: it stays the given one.
    let outcome =
        run_well(&drive("prescribed: { torque: 20 N*m }", "prescribed: { torque: 110 N*m }"));
    for time in [0.0, 1.0] {
        same(outcome.series().at("rotor.speed", time), 1490.0 * std::f64::consts::PI / 30.0, 1e-8);
        same(outcome.series().at("gear.load_angle", time), (110.0_f64 / 1500.0).asin(), 1e-7);
    }
}

/// A start that is refused, for a reason that is named.
#[track_caller]
fn refused(scenario: &str, words: &[&str]) -> Outcome {
    let outcome = run(scenario);
    assert_eq!(outcome.status, Some(2), "{}", outcome.stderr);
    for word in words {
        assert!(outcome.stderr.contains(word), "{word} is missing in\n{}", outcome.stderr);
    }
    assert!(!outcome.wrote_something());
    outcome
}

#[test]
fn names_what_is_missing_from_the_balance() {
    refused(&drive("prescribed: { torque: 30 N*m }", "prescribed: { torque: 110 N*m }"), &["N*m"]);
    // 1680 N*m at the outer rotor are 112 % of its pull-out torque.
    let share =
        drive("prescribed: { torque: 305.454545454545 N*m }", "prescribed: { torque: 1680 N*m }");
    refused(&share, &["112 %", "pull-out", "gear"]);
}

#[test]
fn names_an_unstable_point() {
    // A motor whose torque rises with speed faster than the load: the balance is unstable.
    let rising = "curve: { points: [[0 rpm, 0 N*m], [3000 rpm, 400 N*m]], voltage: 1 }";
    let scenario = drive(rising, "prescribed: { torque: 1100 N*m }");
    refused(&scenario, &["unstable"]);
}

#[test]
fn refuses_a_load_angle_beside_a_steady_start() {
    let scenario = drive(LINE, "viscous: { coefficient: 30 N*m*s/rad }").replace(
        "    damping: { at: outer, coefficient: 24 N*m*s/rad }\n",
        "    initial_load_angle: 20 deg\n",
    );
    refused(&scenario, &["initial_load_angle"]);
}

#[test]
fn an_abrupt_start_is_warned() {
    let jolt = format!(
        "{}bodies:\n  wheel: {{ inertia: 1 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [wheel, ground], pole_pairs: 1, pull_out: 1 N*m }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 0.5 N*m }} }} }}\n",
        head(1.0, 0.1, 1e-8),
    );
    assert!(run_well(&jolt).stderr.contains("jolt"));
    let smooth = jolt.replace("torque: 0.5 N*m", "torque: 0 N*m");
    assert!(!run_well(&smooth).stderr.contains("jolt"));
}

#[test]
fn speeds_against_a_rigid_joint_are_a_fault() {
    let scenario = |slow: &str| {
        format!(
            "{}bodies:\n  fast: {{ inertia: 1 kg*m2, speed: 42 rad/s }}\n  slow: {{ inertia: 1 kg*m2{slow} }}\n\
             gear_pairs:\n  reducer: {{ between: [fast, slow], ratio: -4.2 }}\n\
             loads:\n  oil: {{ body: slow, law: {{ viscous: {{ coefficient: 0 N*m*s/rad }} }} }}\n",
            head(1.0, 0.1, 1e-8),
        )
    };
    let outcome = run_well(&scenario(""));
    near(outcome.channel("slow.speed", "final"), -10.0, 1e-9);
    assert_eq!(run(&scenario(", speed: -10 rad/s")).status, Some(0));
    let outcome = run(&scenario(", speed: -10.1 rad/s"));
    assert_eq!(outcome.status, Some(2));
    assert!(outcome.stderr.contains("reducer"), "{}", outcome.stderr);
}
