//! The interference diagram and the reading of the study.

use super::*;
use crate::analysis::testing::equations;
use crate::component::channel::Known;
use crate::tree::Fields;
use std::cell::RefCell;

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} against {expected}");
}

const GEAR: &str = "
bodies: { fast: { inertia: 0.05 }, slow: { inertia: 20 } }
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 5000 } }";

fn spec(yaml: &str, equations: &Equations) -> (ModesSpec, String) {
    let node = crate::analysis::testing::node(yaml);
    let faults = RefCell::new(crate::diagnostic::Diagnostics::new());
    let known = Known::all(&equations.model.channels);
    let spec =
        Fields::read("studies.m.modes", &node, &faults, |fields| ModesSpec::read(fields, known));
    let told: Vec<String> =
        faults.borrow().iter().map(|fault| format!("{}: {}", fault.path, fault.message)).collect();
    (spec, told.join("\n"))
}

// The diagram of the gear above at 1500 rpm of the fast side: 1x and 2x of both rotors, ripple of
// lcm(8, 26) = 104 a turn of inner to modulator, and 4/60 Hz of slip for each rpm with the outer
// rotor at rest (0.366667 Hz per rpm seen from the outer side, 22 pole pairs).
#[test]
fn the_interference_diagram_has_the_orders_of_the_train() {
    let equations = equations(&GEAR.replace("inertia: 0.05", "inertia: 0.05, speed: 1500 rpm"));
    let (spec, faults) = spec(
        "{ separation: 10 %, speed_range: [0 rpm, 3000 rpm], of: fast, excitations: { pump: { body: slow, order: 6 }, mains: { frequency: 50 Hz } } }",
        &equations,
    );
    assert_eq!(faults, "");
    let found = run(&spec, &equations).unwrap();
    let diagram = found.interference.as_ref().unwrap();
    let per_rpm = |label: &str| {
        let line = diagram.excitations.iter().find(|line| line.label.starts_with(label)).unwrap();
        line.per_speed * std::f64::consts::PI / 30.0
    };
    for (label, expected) in [
        ("1 x fast", 1.0 / 60.0),
        ("2 x fast", 2.0 / 60.0),
        ("1 x slow", 1.0 / 330.0),
        ("ripple of gear (104", 104.0 / 60.0),
        ("pump", 6.0 / 330.0),
        ("slip of gear with outer at rest", 4.0 / 60.0),
    ] {
        close(per_rpm(label), expected, 1e-12);
    }
    let crossing = |label: &str| {
        diagram.crossings.iter().find(|crossing| crossing.order.starts_with(label)).unwrap()
    };
    // 2 x 1500 rpm = 50 Hz against 44.514 Hz.
    close(crossing("2 x fast").separation.unwrap(), 1.0 - 44.514266999 / 50.0, 1e-9);
    close(
        crossing("2 x fast").speed.unwrap() * 30.0 / std::f64::consts::PI,
        44.514266999 * 30.0,
        1e-10,
    );
    close(crossing("mains").separation.unwrap(), 1.0 - 44.514266999 / 50.0, 1e-9);
    assert_eq!(crossing("mains").speed, None);
    assert_eq!(found.met, Some(true));
    let tight = ModesSpec { separation: Some(0.12), ..spec.clone() };
    assert_eq!(run(&tight, &equations).unwrap().met, Some(false));
}

#[test]
fn faults_of_the_study_are_told_where_they_stand() {
    let equations = equations(GEAR);
    for (yaml, message) in [
        (
            "{ of: fats, speed_range: [0 rpm, 9 rpm] }",
            "studies.m.modes.of: no body is named `fats`",
        ),
        ("{ of: fast }", "`speed_range` is missing"),
        ("{ speed_range: [9 rpm, 0 rpm], of: fast }", "must go from a lower to a higher value"),
        ("{ point: start }", "`point` is `steady` or a time of the run, not `start`"),
        ("{ point: { time: 2 kg } }", "studies.m.modes.point.time"),
        ("{ excitations: { x: { body: fast } } }", "follows a body or has a frequency"),
        ("{ separation: 10 % }", "`separation` needs the interference diagram"),
        ("{ sepparation: 10 % }", "is not a key of this map"),
    ] {
        let (_, faults) = spec(yaml, &equations);
        assert!(faults.contains(message), "{yaml}: {faults}");
    }
}
