//! Units at the border: exact by definition.
//!
//! Factors: NIST SP 811 appendix B (from memory), exact from the inch, the pound and standard
//! gravity; P = T w. Checked through the program: what is typed comes out in SI.

use super::helper::{head, run, run_well, same};

/// A wheel with a torque on it.
pub fn wheel(inertia: &str, speed: &str, torque: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: {inertia}, speed: {speed} }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: {torque} }} }} }}\n",
        head(1.0, 0.5, 1e-10),
    )
}

#[test]
fn speeds() {
    let revolution = std::f64::consts::TAU;
    for (typed, expected) in [
        ("1500 rpm", 157.07963267948966),
        ("1 rpm", 0.10471975511966),
        ("1 r/min", 0.10471975511966),
        ("2 rev/s", 2.0 * revolution),
        ("90 deg/s", 0.25 * revolution),
        ("3 rad/s", 3.0),
        ("\"3 rad/s\"", 3.0),
        ("3", 3.0),
        ("\"3\"", 3.0),
    ] {
        let series = run_well(&wheel("1 kg*m2", typed, "0")).series();
        same(series.at("wheel.speed", 0.0), expected, 1e-12);
    }
}

#[test]
fn torques() {
    for (typed, expected) in [
        ("1 N*m", 1.0),
        ("1 Nm", 1.0),
        ("1 N·m", 1.0),
        ("1 kN*m", 1e3),
        ("1 MN*m", 1e6),
        ("1 mN*m", 1e-3),
        ("1 lbf*ft", 1.3558179483314),
        ("1 lbf*in", 0.11298482902762),
    ] {
        let series = run_well(&wheel("1e12 kg*m2", "0 rpm", typed)).series();
        same(series.at("push.torque", 0.0), expected, 1e-12);
    }
}

#[test]
fn inertias() {
    for (typed, expected) in [
        ("2 kg*m2", 2.0),
        ("2 kg·m²", 2.0),
        ("2 kg*m^2", 2.0),
        ("2 kg m2", 2.0),
        ("1 g*m2", 1e-3),
        ("1 t*m2", 1e3),
        ("1 kg*cm2", 1e-4),
        ("1 lb*ft2", 0.042140110093805),
    ] {
        // 1 N*m for 1 s: the speed is 1/J.
        let outcome = run_well(&wheel(typed, "0 rpm", "1 N*m"));
        same(outcome.channel("wheel.speed", "final"), 1.0 / expected, 1e-9);
    }
}

#[test]
fn powers() {
    // Torque of a rated power at a rated speed: 25 hp at 1755 rpm are 74.8164 lbf*ft.
    for (power, speed, torque) in [
        ("2 MW", "1500 rpm", 12732.395447352),
        ("25 hp", "1755 rpm", 101.43745352591),
        ("1 PS", "1 rad/s", 735.49875),
        ("1 hp", "1 rad/s", 745.69987158227),
        ("1 kW", "1 rad/s", 1000.0),
        ("1 W", "60 rpm", 1.0 / std::f64::consts::TAU),
    ] {
        let scenario = format!(
            "{}bodies:\n  wheel: {{ inertia: 1e12 kg*m2, speed: {speed} }}\n\
             loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ power: {power}, speed: {speed}, exponent: 2 }} }} }}\n",
            head(1.0, 0.5, 1e-8),
        );
        same(run_well(&scenario).series().at("fan.torque", 0.0), -torque, 1e-12);
    }
}

#[test]
fn stiffnesses_and_angles() {
    // A preload of 1 N*m twists the shaft by 1/k.
    for (typed, expected) in [
        ("500 N*m/rad", 500.0),
        ("0.5 kN*m/rad", 500.0),
        ("0.0005 MN*m/rad", 500.0),
        ("10 N*m/deg", 10.0 * 57.295779513082),
        ("1000 lbf*in/rad", 112.98482902762),
    ] {
        let scenario = format!(
            "{}start: steady\nshafts:\n  spring: {{ between: [wheel, ground], stiffness: {typed} }}\n",
            wheel("1 kg*m2", "0 rpm", "1 N*m")
        );
        same(run_well(&scenario).series().at("spring.twist", 0.0), 1.0 / expected, 1e-9);
    }
    for (typed, expected) in [
        ("36 deg", 0.1 * std::f64::consts::TAU),
        ("0.25 rev", 0.25 * std::f64::consts::TAU),
        ("1 rad", 1.0),
    ] {
        let scenario = format!(
            "{}magnetic_couplings:\n  coupling: {{ between: [wheel, ground], pole_pairs: 1, pull_out: 1 N*m, initial_load_angle: {typed} }}\n",
            wheel("1 kg*m2", "0 rpm", "0 N*m")
        );
        same(run_well(&scenario).series().at("coupling.load_angle", 0.0), expected, 1e-12);
    }
}

#[test]
fn times_and_shares() {
    for (typed, expected) in
        [("0.5 min", 30.0), ("30 s", 30.0), ("30000 ms", 30.0), ("0.01 h", 36.0)]
    {
        let scenario = wheel("1 kg*m2", "1 rad/s", "0")
            .replace("duration: 1 s", &format!("duration: {typed}"));
        same(run_well(&scenario).number(&["end_time"]), expected, 1e-12);
    }
    for (typed, expected) in [("50 %", 0.5), ("0.5", 0.5)] {
        let scenario = wheel("1 kg*m2", "1 rad/s", "1 N*m")
            .replace("torque: 1 N*m } }", &format!("torque: 1 N*m }} }}, scale: {typed}"));
        assert!(scenario.contains("scale"));
        same(run_well(&scenario).series().at("push.torque", 0.0), expected, 1e-12);
    }
}

#[test]
fn a_wrong_dimension_names_the_units_that_fit() {
    for (inertia, speed, torque, fits) in [
        ("1 N*m", "0 rpm", "0 N*m", "kg*m2"),
        ("1 kg*m2", "3 N*m", "0 N*m", "rpm"),
        ("1 kg*m2", "0 rpm", "3 rpm", "N*m"),
    ] {
        let outcome = run(&wheel(inertia, speed, torque));
        assert_eq!(outcome.status, Some(2), "{inertia}, {speed}, {torque}");
        assert!(outcome.stderr.contains(fits), "{}", outcome.stderr);
        assert!(!outcome.wrote_something());
    }
}

#[test]
fn a_bare_speed_is_read_with_a_warning() {
    let outcome = run_well(&wheel("1 kg*m2", "1500", "0"));
    let said = outcome.stderr.contains("rad/s") && outcome.stderr.contains("14324 rpm");
    assert!(said, "{}", outcome.stderr);
    assert!(!outcome.at(&["warnings"]).as_array().unwrap().is_empty());
}
