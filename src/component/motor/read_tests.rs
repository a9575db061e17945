//! Reading motors: values in SI, and one fault a broken rule.

use super::*;
use crate::diagnostic::Diagnostics;
use crate::tree::{Node, Shape};
use std::cell::RefCell;

/// A map of texts; a value that starts with `{` cannot be written here, use `nest`.
fn map(entries: &[(&str, &str)]) -> Node {
    let text = |value: &str| Node::Text(value.to_owned());
    Node::Map(entries.iter().map(|(key, value)| ((*key).to_owned(), text(value))).collect())
}

fn nest(key: &str, inside: Node) -> Node {
    Node::Map(vec![(key.to_owned(), inside)])
}

fn read(law: Node) -> (MotorLaw, Vec<String>) {
    let node = Node::Map(vec![
        ("body".to_owned(), Node::Text("rotor".to_owned())),
        ("law".to_owned(), law),
    ]);
    let faults = RefCell::new(Diagnostics::new());
    let motor = Fields::read("motors.m", &node, &faults, |fields| Motor::read("m", fields));
    let list = faults.into_inner();
    (motor.law, list.iter().map(|entry| format!("{}: {}", entry.path, entry.message)).collect())
}

fn plate(changes: &[(&str, &str)]) -> Node {
    let mut entries = vec![
        ("power", "22 kW"),
        ("speed", "1465 rpm"),
        ("synchronous_speed", "1500 rpm"),
        ("starting_torque", "220 %"),
        ("pull_up_torque", "180 %"),
        ("breakdown_torque", "290 %"),
    ];
    for (key, value) in changes {
        entries.retain(|(known, _)| known != key);
        entries.push((key, value));
    }
    nest("rating_plate", map(&entries))
}

#[test]
fn a_rating_plate_is_read_in_si() {
    let (law, faults) = read(plate(&[]));
    assert!(faults.is_empty(), "{faults:?}");
    let MotorLaw::RatingPlate { power, synchronous_speed, starting, voltage, .. } = law else {
        panic!("{law:?}")
    };
    assert!((power - 22e3).abs() < 1e-9 && (starting - 2.2).abs() < 1e-12);
    assert!((synchronous_speed - 50.0 * std::f64::consts::PI).abs() < 1e-12);
    assert_eq!(voltage, Signal::Constant(1.0));
}

#[test]
fn each_rule_of_the_rating_plate_has_its_message() {
    for (key, value, words) in [
        ("starting_torque", "150 %", "`starting_torque` must not be below `pull_up_torque`"),
        ("breakdown_torque", "170 %", "`pull_up_torque` must not exceed `breakdown_torque`"),
        ("speed", "1500 rpm", "the rated speed must lie below the synchronous speed"),
        ("speed", "-1465 rpm", "the rated speed must have the sign of the synchronous speed"),
        ("speed", "1000 rpm", "beyond standstill"),
        ("power", "0 kW", "`power` must be above zero"),
        ("power", "22 kg", "is a mass, but a power is needed here"),
    ] {
        let (_, faults) = read(plate(&[(key, value)]));
        assert_eq!(faults.len(), 1, "{key} {value}: {faults:?}");
        assert!(faults[0].contains(words), "{faults:?}");
        assert!(faults[0].starts_with("motors.m.law.rating_plate"), "{faults:?}");
    }
    let weak = plate(&[
        ("starting_torque", "90 %"),
        ("pull_up_torque", "80 %"),
        ("breakdown_torque", "100 %"),
    ]);
    assert!(read(weak).1[0].contains("must exceed the rated torque"));
}

#[test]
fn the_other_laws_are_read_and_what_is_missing_is_told() {
    let induction = nest(
        "induction",
        map(&[
            ("synchronous_speed", "-1500 rpm"),
            ("breakdown_torque", "0.45 kN*m"),
            ("breakdown_slip", "12 %"),
            ("voltage", "grid"),
        ]),
    );
    let (law, faults) = read(induction);
    assert!(faults.is_empty(), "{faults:?}");
    let MotorLaw::Induction { synchronous_speed, breakdown_torque, voltage, .. } = law else {
        panic!("{law:?}")
    };
    assert!(synchronous_speed < 0.0 && (breakdown_torque - 450.0).abs() < 1e-9);
    assert_eq!(voltage, Signal::Named("grid".to_owned()));

    let (_, faults) = read(nest("speed_loop", map(&[("speed", "0 rpm"), ("gain", "4 N*m*s/rad")])));
    assert_eq!(faults, ["motors.m.law.speed_loop: `torque_limit` is missing"]);
    let (_, faults) = read(nest("prescribed", map(&[])));
    assert_eq!(faults, ["motors.m.law.prescribed: `torque` is missing"]);
}

#[test]
fn an_equivalent_circuit_is_read_and_needs_leakage() {
    let circuit = |changes: &[(&str, &str)]| {
        let mut entries = vec![
            ("line_voltage", "0.4 kV"),
            ("frequency", "50 Hz"),
            ("pole_pairs", "2"),
            ("stator_resistance", "0.2 ohm"),
            ("stator_reactance", "0.6 ohm"),
            ("rotor_resistance", "0.25 ohm"),
            ("rotor_reactance", "0.6 ohm"),
            ("magnetising_reactance", "18 ohm"),
        ];
        for (key, value) in changes {
            entries.retain(|(known, _)| known != key);
            entries.push((key, value));
        }
        read(nest("induction_circuit", map(&entries)))
    };
    let (law, faults) = circuit(&[("line_voltage", "400 V"), ("connected", "contactor")]);
    assert!(faults.is_empty(), "{faults:?}");
    let MotorLaw::InductionCircuit { figures, voltage, connected, transient } = law else {
        panic!("{law:?}")
    };
    assert!((figures.line_voltage - 400.0).abs() < 1e-12 && figures.pole_pairs == 2);
    assert!((figures.rotor_resistance - 0.25).abs() < 1e-15 && !transient);
    assert_eq!(voltage, Signal::Constant(1.0));
    assert_eq!(connected, Signal::Named("contactor".to_owned()));
    for (changes, words) in [
        (&[("line_voltage", "0 V")][..], "`line_voltage` must be above zero"),
        (&[("line_voltage", "400 V"), ("pole_pairs", "1.5")], "`pole_pairs` must be a whole"),
        (&[("line_voltage", "400 V"), ("rotor_resistance", "0 ohm")], "must be above zero"),
        (
            &[
                ("line_voltage", "400 V"),
                ("rotor_reactance", "0 ohm"),
                ("stator_reactance", "0 ohm"),
            ],
            "without any leakage reactance",
        ),
    ] {
        let (_, faults) = circuit(changes);
        assert_eq!(faults.len(), 1, "{changes:?}: {faults:?}");
        assert!(faults[0].contains(words), "{faults:?}");
    }
}

#[test]
fn a_curve_needs_two_points_and_rising_speeds() {
    let points = |rows: &[[&str; 2]]| {
        let cells = |row: &[&str; 2]| row.map(|cell| Node::Text(cell.to_owned())).to_vec();
        let rows = rows.iter().map(|row| Node::List(cells(row))).collect();
        nest("curve", nest("points", Node::List(rows)))
    };
    let (law, faults) =
        read(points(&[["-10 rpm", "0 N*m"], ["0 rpm", "300 N*m"], ["1500 rpm", "0 N*m"]]));
    assert!(faults.is_empty(), "{faults:?}");
    assert!(matches!(law, MotorLaw::Curve { points, .. } if points.len() == 3));
    let (_, faults) = read(points(&[["0 rpm", "3 N*m"]]));
    assert!(faults[0].contains("at least two points"), "{faults:?}");
    let (_, faults) = read(points(&[["9 rpm", "3 N*m"], ["9 rpm", "4 N*m"]]));
    assert_eq!(
        faults,
        ["motors.m.law.curve.points.1.0: the speeds of a curve must rise from point to point"]
    );
}

#[test]
fn the_reference_lists_every_law() {
    let keys = Fields::describe(|fields| Motor::read("m", fields));
    let law = keys.iter().find(|field| field.key == "law").unwrap();
    let Shape::Choice(laws) = &law.shape else { panic!("{law:?}") };
    assert_eq!(laws.len(), LAWS.len());
}
