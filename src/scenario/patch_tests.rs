//! Tests of values by path.

use super::*;
use crate::scenario::{Loaded, load_text};
use std::path::Path;

const FILE: &str = "
lodeshaft: 1
duration: 2 s
bodies:
  rotor: { inertia: 0.2 kg*m2, speed: 60 rpm }
  wheel: { inertia: 300 g*m2 }
shafts:
  main: { between: [rotor, wheel], stiffness: { diameter: 60 mm, length: 1 m, shear_modulus: 80 GPa } }
magnetic_couplings:
  hub: { between: [wheel, ground], pole_pairs: 6, pull_out: 80 N*m }
motors:
  drive: { body: rotor, law: { speed_loop: { speed: demand, torque_limit: 30 N*m, gain: 1 } } }
  other: { body: rotor, law: { prescribed: { torque: { sine: { mean: 1 N*m, amplitude: 2 N*m, frequency: 3 Hz } } } } }
brakes:
  holding: { body: wheel, torque: 9 N*m, applied: 0 }
signals:
  demand: { points: [[0 s, 0 rpm], [1 s, 30 rpm], [5 s, 60 rpm]] }
requirements:
  share: { of: hub.pull_out_share, at_most: 85 % }
  torque: { of: hub.torque_a, at_most: 60 }
protections:
  stop: { when: { time: 1 s }, then: [{ set: motors.other.law.prescribed.torque, to: 3 }] }
studies:
  map: { sweep: { vary: { bodies.rotor.inertia: { from: 1, to: 2, count: 5 } } } }
";

fn loaded(sets: &[(&str, &str)]) -> Result<Loaded, String> {
    let sets: Vec<_> =
        sets.iter().map(|(path, value)| ((*path).to_owned(), (*value).to_owned())).collect();
    load_text("case.yaml", Path::new("."), FILE, &sets).map_err(|failure| failure.render())
}

fn value(path: &str) -> Value {
    value_at(&loaded(&[]).unwrap().node, path).unwrap()
}

#[test]
fn stated_values_come_in_si_with_their_dimension() {
    let turn = std::f64::consts::TAU;
    for (path, design, dimension) in [
        ("bodies.wheel.inertia", 0.3, Dimension::Inertia),
        ("bodies.rotor.speed", turn, Dimension::Speed),
        ("shafts.main.stiffness.diameter", 0.06, Dimension::Length),
        ("signals.demand.points.2.0", 5.0, Dimension::Time),
        ("signals.demand.points.2.1", turn, Dimension::Speed),
        ("motors.other.law.prescribed.torque.sine.amplitude", 2.0, Dimension::Torque),
        ("requirements.share.at_most", 0.85, Dimension::One),
        ("requirements.torque.at_most", 60.0, Dimension::Torque),
        ("protections.stop.then.0.to", 3.0, Dimension::Torque),
        ("duration", 2.0, Dimension::Time),
        ("studies.map.sweep.vary.bodies.rotor.inertia.to", 2.0, Dimension::One),
    ] {
        let found = value(path);
        let typed = found.design.unwrap();
        assert!((typed - design).abs() < 1e-12, "{path}: {typed}");
        assert_eq!(found.dimension, dimension, "{path}");
        assert!(found.stated && !found.whole, "{path}");
    }
    let pairs = value("magnetic_couplings.hub.pole_pairs");
    assert!(pairs.whole && pairs.design == Some(6.0));
}

#[test]
fn an_absent_key_has_its_default_as_design_value() {
    for (path, design) in [
        ("motors.drive.scale", Some(1.0)),
        ("brakes.holding.breakaway", Some(9.0)),
        ("solver.tolerance", Some(1e-7)),
        ("output_step", Some(1e-3)),
        ("shafts.main.backlash", Some(0.0)),
        ("shafts.main.stiffness.bore", Some(0.0)),
        ("shafts.main.damping", Some(0.0)),
        ("magnetic_couplings.hub.damping", Some(0.0)),
        ("magnetic_couplings.hub.initial_load_angle", Some(0.0)),
        ("motors.drive.law.speed_loop.lag", Some(0.0)),
        ("motors.other.law.prescribed.torque.sine.phase", Some(0.0)),
        ("bodies.wheel.speed", None),
    ] {
        let found = value(path);
        assert_eq!(found.design, design, "{path}");
        assert!(!found.stated, "{path}");
    }
}

#[test]
fn a_path_that_leads_nowhere_says_where_it_ends() {
    let node = loaded(&[]).unwrap().node;
    for (path, words, hint) in [
        ("bodys.rotor.inertia", "`bodys` is not a key of the scenario", Some("`bodies`")),
        ("bodies.rotr.inertia", "`bodies` has no `rotr`", Some("`rotor`")),
        ("bodies.rotor.inertai", "`inertai` is not a key of `bodies.rotor`", Some("`inertia`")),
        ("bodies.rotor.inertia.x", "has nothing inside", None),
        ("signals.demand.points.3.0", "has no entry 3", Some("0 to 2")),
        ("motors.drive.law.curve.voltage", "is `speed_loop` here, not `curve`", None),
        (
            "motors.drive.law.speed_loop.speed",
            "is the named signal `demand`",
            Some("signals.demand"),
        ),
        ("motors.other.law.prescribed.torque", "varies in time", Some("one of its values")),
        ("bodies.rotor", "is a map, not a number", None),
        ("", "the path is empty", None),
    ] {
        let (message, said) = value_at(&node, path).unwrap_err();
        assert!(message.contains(words), "{path}: {message}");
        match hint {
            Some(hint) => {
                assert!(said.clone().unwrap_or_default().contains(hint), "{path}: {said:?}");
            }
            None => assert_eq!(said, None, "{path}"),
        }
    }
}

#[test]
fn values_are_set_from_the_command_line() {
    let loaded = loaded(&[
        ("bodies.rotor.inertia", "0.5 kg*m2"),
        ("solver.tolerance", "1e-9"),
        ("motors.drive.scale", "{ step: { at: 1 s, from: 0, to: 1 } }"),
        ("signals.demand.points.1.1", "45 rpm"),
        ("title", "A: b"),
        ("studies.map.sweep.vary.bodies.rotor.inertia.count", "7"),
    ])
    .unwrap();
    let scenario = &loaded.scenario;
    assert!((scenario.bodies[0].inertia - 0.5).abs() < 1e-15);
    assert!((scenario.solver.tolerance - 1e-9).abs() < 1e-20);
    assert!(scenario.motors[0].scale.is_some());
    assert_eq!(scenario.title, "A: b");
    let count = value_at(&loaded.node, "studies.map.sweep.vary.bodies.rotor.inertia.count");
    assert_eq!(count.unwrap().design, Some(7.0));
}

#[test]
fn a_fault_of_a_set_value_points_at_the_command_line() {
    let said = loaded(&[("bodies.rotor.inertia", "-2"), ("bodies.rotr.inertia", "1")]).unwrap_err();
    assert_eq!(
        said,
        "error: `bodies` has no `rotr`
  --> --set bodies.rotr.inertia=1  (bodies.rotr.inertia)
  hint: did you mean `rotor`?
error: `inertia` must not be negative
  --> --set bodies.rotor.inertia=-2  (bodies.rotor.inertia)
"
    );
}

#[test]
fn a_value_in_brackets_must_be_whole() {
    let said = loaded(&[("motors.drive.scale", "{ step: { at: 1 s")]).unwrap_err();
    assert!(said.starts_with("error: this is not YAML: a list or map in brackets is not closed"));
    assert!(said.contains("--set motors.drive.scale={ step: { at: 1 s"), "{said}");
    let said = loaded(&[("motors.drive.scale", "{ step: { at: 1, at: 2 } }")]).unwrap_err();
    assert!(said.contains("`at` stands twice in one map"), "{said}");
}

#[test]
fn a_number_set_by_a_study_is_read_back_to_the_last_bit() {
    let mut loaded = loaded(&[]).unwrap();
    let third = 1.0 / 3.0;
    assert!(set_number(&mut loaded.node, "bodies.rotor.speed", third, Dimension::Speed));
    assert!(set_number(&mut loaded.node, "bodies.rotor.inertia", third, Dimension::Inertia));
    assert!(set_number(&mut loaded.node, "shafts.main.backlash", third, Dimension::Angle));
    let (scenario, warnings) =
        crate::scenario::read_node(&loaded.node, &mut loaded.tables).unwrap();
    assert_eq!(scenario.bodies[0].speed, Some(third));
    assert_eq!(scenario.bodies[0].inertia.to_bits(), third.to_bits());
    assert_eq!(scenario.shafts[0].backlash.to_bits(), third.to_bits());
    assert!(warnings.is_empty(), "{warnings:?}");
    assert!(!set_number(&mut loaded.node, "bodies.rotor.inertia.x", 1.0, Dimension::One));
}
