//! Reading loads: values in SI, and one fault a broken rule.

use super::*;
use crate::diagnostic::Diagnostics;
use crate::tree::Node;
use std::cell::RefCell;

fn map(entries: &[(&str, &str)]) -> Node {
    let text = |value: &str| Node::Text(value.to_owned());
    Node::Map(entries.iter().map(|(key, value)| ((*key).to_owned(), text(value))).collect())
}

fn read(law: &str, inside: Node, more: &[(&str, &str)]) -> (Load, Vec<String>) {
    let mut entries = vec![
        ("body".to_owned(), Node::Text("impeller".to_owned())),
        ("law".to_owned(), Node::Map(vec![(law.to_owned(), inside)])),
    ];
    for (key, value) in more {
        entries.push(((*key).to_owned(), Node::Text((*value).to_owned())));
    }
    let faults = RefCell::new(Diagnostics::new());
    let node = Node::Map(entries);
    let load = Fields::read("loads.l", &node, &faults, |fields| Load::read("l", fields));
    let list = faults.into_inner();
    (load, list.iter().map(|entry| format!("{}: {}", entry.path, entry.message)).collect())
}

// 20 kW at 267 rpm is 20000/(267 pi/30) = 715.305 N*m (closed form P = T w).
#[test]
fn a_power_law_takes_torque_or_power_and_not_both() {
    let stated = |entries: &[(&str, &str)]| {
        let mut all = vec![("speed", "267 rpm"), ("exponent", "2")];
        all.extend_from_slice(entries);
        read("power_law", map(&all), &[])
    };
    let (load, faults) = stated(&[("power", "20 kW")]);
    assert!(faults.is_empty(), "{faults:?}");
    let LoadLaw::PowerLaw { torque, .. } = load.law else { panic!("{load:?}") };
    assert!((torque - 20e3 / (267.0 * std::f64::consts::PI / 30.0)).abs() < 1e-9);
    assert_eq!(stated(&[("torque", "7 N*m")]).1.len(), 0);
    assert!(stated(&[("torque", "7 N*m"), ("power", "1 W")]).1[0].contains("not both"));
    assert!(stated(&[]).1[0].contains("`torque` is missing (or `power`"));
}

#[test]
fn friction_breaks_away_no_earlier_than_it_slides() {
    let (load, faults) = read("friction", map(&[("sliding", "40 N*m")]), &[("against", "ground")]);
    assert!(faults.is_empty(), "{faults:?}");
    assert_eq!(load.law, LoadLaw::Friction { sliding: 40.0, breakaway: 40.0 });
    assert_eq!(load.against, None);
    let (_, faults) = read("friction", map(&[("sliding", "40 N*m"), ("breakaway", "39")]), &[]);
    assert_eq!(faults, ["loads.l.law.friction.breakaway: `breakaway` must not be below `sliding`"]);
}

#[test]
fn only_friction_and_viscous_loads_act_against_another_body() {
    let (load, faults) =
        read("viscous", map(&[("coefficient", "3 N*m*s/rad")]), &[("against", "rotor")]);
    assert!(faults.is_empty(), "{faults:?}");
    assert_eq!(load.against.as_deref(), Some("rotor"));
    let (_, faults) = read("prescribed", map(&[("torque", "3 N*m")]), &[("against", "rotor")]);
    assert_eq!(faults, ["loads.l.against: `against` is for friction and viscous loads only"]);
}

#[test]
fn a_load_curve_starts_at_or_above_zero() {
    let curve = |rows: &[[&str; 2]]| {
        let cells = |row: &[&str; 2]| row.map(|cell| Node::Text(cell.to_owned())).to_vec();
        let rows = rows.iter().map(|row| Node::List(cells(row))).collect();
        let points = Node::Map(vec![("points".to_owned(), Node::List(rows))]);
        read("curve", points, &[]).1
    };
    assert!(curve(&[["0 rpm", "50 N*m"], ["90 rpm", "20 N*m"]]).is_empty());
    assert!(curve(&[["-1 rpm", "50 N*m"], ["90 rpm", "20 N*m"]])[0].contains("none below zero"));
    assert!(curve(&[["0 rpm", "-5 N*m"], ["90 rpm", "20 N*m"]])[0].contains("standstill"));
}

#[test]
fn an_axial_rotor_has_a_flow_and_a_pitch_of_zero_by_default() {
    let inside = map(&[("radius", "40 m"), ("density", "1.225 kg/m3"), ("flow", "12 m/s")]);
    let (load, faults) = read("axial_rotor", inside, &[]);
    assert!(faults.is_empty(), "{faults:?}");
    let LoadLaw::AxialRotor { pitch, flow, .. } = load.law else { panic!("{load:?}") };
    assert_eq!((flow, pitch), (Signal::Constant(12.0), Signal::Constant(0.0)));
}

#[test]
fn a_periodic_load_and_a_propeller_are_read() {
    let (load, faults) = read("periodic", map(&[("mean", "80 N*m")]), &[]);
    assert!(faults.is_empty(), "{faults:?}");
    assert_eq!(load.law, LoadLaw::Periodic { mean: 80.0, harmonics: Vec::new() });
    let coefficient = map(&[("constant", "0.03")]);
    let inside = Node::Map(vec![
        ("diameter".to_owned(), Node::Text("4 m".to_owned())),
        ("torque_coefficient".to_owned(), coefficient),
    ]);
    let (load, faults) = read("propeller", inside, &[]);
    assert!(faults.is_empty(), "{faults:?}");
    let LoadLaw::Propeller { density, advance, coefficient, .. } = load.law else {
        panic!("{load:?}")
    };
    assert!((density - 1025.0).abs() < 1e-12 && advance == Signal::Constant(0.0));
    assert!((coefficient.at(0.5) - 0.03).abs() < 1e-15);
}
