//! Reading signals: every form in SI, and the faults of each.

use super::*;
use crate::quantity::Dimension::{One, Speed, Torque};
use std::f64::consts::PI;

fn text(value: &str) -> Node {
    Node::Text(value.to_owned())
}

fn list(items: Vec<Node>) -> Node {
    Node::List(items)
}

fn form(key: &str, inside: Node) -> Node {
    Node::Map(vec![(key.to_owned(), inside)])
}

fn map(entries: &[(&str, &str)]) -> Node {
    Node::Map(entries.iter().map(|(key, value)| ((*key).to_owned(), text(value))).collect())
}

fn points(rows: &[[&str; 2]]) -> Node {
    form("points", list(rows.iter().map(|row| list(row.map(text).to_vec())).collect()))
}

fn read(node: Node, dimension: Dimension) -> (Option<Signal>, Vec<String>) {
    let faults = RefCell::new(Diagnostics::new());
    let outer = form("demand", node);
    let signal = Fields::read("motors.m", &outer, &faults, |fields| {
        read_signal(fields, "demand", dimension, true, "Asked for.")
    });
    let list = faults.into_inner();
    (signal, list.iter().map(|entry| format!("{}: {}", entry.path, entry.message)).collect())
}

fn named(node: &Node) -> (NamedSignal, Vec<String>) {
    let faults = RefCell::new(Diagnostics::new());
    let signal = read_named_signal("s", "signals.s", node, &faults);
    let list = faults.into_inner();
    (signal, list.iter().map(|entry| format!("{}: {}", entry.path, entry.message)).collect())
}

fn sound(node: Node, dimension: Dimension) -> Signal {
    let (signal, faults) = read(node, dimension);
    assert!(faults.is_empty(), "{faults:?}");
    signal.unwrap()
}

#[test]
fn a_quantity_is_a_constant_and_a_word_a_name() {
    assert_eq!(sound(text("2 kN*m"), Torque), Signal::Constant(2000.0));
    assert_eq!(sound(Node::Number(0.5), One), Signal::Constant(0.5));
    assert_eq!(sound(text("demand_2"), Torque), Signal::Named("demand_2".to_owned()));
    let (_, faults) = read(text("nan"), Torque);
    assert!(faults[0].contains("not a finite number"), "{faults:?}");
}

#[test]
fn every_form_is_read_in_si() {
    let ramp = map(&[("start", "1 s"), ("end", "2 min"), ("from", "0 rpm"), ("to", "1500 rpm")]);
    assert_eq!(
        sound(form("ramp", ramp), Speed),
        Signal::Ramp { start: 1.0, end: 120.0, from: 0.0, to: 1500.0 * PI / 30.0 }
    );
    let step = map(&[("at", "-5 ms"), ("from", "1 N*m"), ("to", "2 N*m")]);
    assert_eq!(
        sound(form("step", step), Torque),
        Signal::Step { at: -0.005, from: 1.0, to: 2.0 },
        "corners may lie outside the run"
    );
    let pulse = map(&[("start", "1"), ("end", "2"), ("base", "0"), ("peak", "30 %")]);
    assert_eq!(
        sound(form("pulse", pulse), One),
        Signal::Pulse { start: 1.0, end: 2.0, base: 0.0, peak: 0.3 }
    );
    let sine = map(&[("amplitude", "3 N*m"), ("frequency", "5 Hz"), ("phase", "90 deg")]);
    assert_eq!(
        sound(form("sine", sine), Torque),
        Signal::Sine { mean: 0.0, amplitude: 3.0, frequency: 5.0, phase: PI / 2.0 }
    );
    assert_eq!(
        sound(points(&[["0 s", "1 N*m"], ["1 s", "2 N*m"], ["1 s", "4 N*m"]]), Torque),
        Signal::Points(vec![[0.0, 1.0], [1.0, 2.0], [1.0, 4.0]])
    );
}

#[test]
fn a_table_keeps_its_columns_for_the_file_to_come() {
    let table = map(&[
        ("file", "gust.csv"),
        ("time", "t [s]"),
        ("value", "v"),
        ("unit", "rpm"),
        ("time_unit", "ms"),
    ]);
    let Signal::Table { file, columns, rows, .. } = sound(form("table", table), Speed) else {
        panic!()
    };
    assert_eq!((file.as_str(), columns.time.as_str()), ("gust.csv", "t [s]"));
    assert_eq!(columns.unit.as_deref(), Some("rpm"));
    assert!(rows.is_empty());
    let wrong =
        [("file", "g.csv"), ("time", "t"), ("value", "v"), ("unit", "kg"), ("time_unit", "m")];
    let (_, faults) = read(form("table", map(&wrong)), Speed);
    assert_eq!(faults.len(), 2, "{faults:?}");
    assert!(faults[0].contains("this is a mass, but a rotational speed is needed here"));
    assert!(faults[1].starts_with("motors.m.demand.table.time_unit: "), "{faults:?}");
}

fn gust(hub_wind: &str, class: &str) -> Node {
    form(
        "extreme_gust",
        map(&[
            ("start", "5 s"),
            ("hub_wind", hub_wind),
            ("rotor_diameter", "80 m"),
            ("hub_height", "80 m"),
            ("turbine_class", class),
            ("turbulence_class", "B"),
        ]),
    )
}

// IEC 61400-1, class II B at 12 m/s, rotor of 80 m at 80 m: magnitude 5.665968 m/s.
#[test]
fn an_extreme_gust_has_the_magnitude_of_the_standard() {
    let signal = sound(gust("12 m/s", "II"), Dimension::LinearSpeed);
    let Signal::ExtremeGust { start, hub_wind, magnitude } = signal else { panic!("{signal:?}") };
    assert!((start - 5.0).abs() < 1e-15 && (hub_wind - 12.0).abs() < 1e-15);
    assert!((magnitude - 5.665968).abs() < 1e-9);
    let (_, faults) = read(gust("48 m/s", "II"), Dimension::LinearSpeed);
    assert!(
        faults[0].contains("below the 1-year extreme wind of class II, 47.6 m/s"),
        "{faults:?}"
    );
    let (_, faults) = read(gust("12 m/s", "IV"), Dimension::LinearSpeed);
    assert!(faults[0].contains("turbine_class"), "{faults:?}");
    let (_, faults) = read(gust("12 m/s", "II"), Torque);
    assert!(faults[0].contains("this is a linear speed, but a torque is needed"), "{faults:?}");
}

#[test]
fn each_rule_has_one_fault_at_its_place() {
    for (node, at, words) in [
        (
            form("ramp", map(&[("start", "2 s"), ("end", "2 s"), ("from", "0"), ("to", "1")])),
            ".ramp.end",
            "must be later than `start`",
        ),
        (
            form("pulse", map(&[("start", "2 s"), ("end", "1 s"), ("base", "0"), ("peak", "1")])),
            ".pulse.end",
            "must be later than `start`",
        ),
        (points(&[["0 s", "1"], ["2 s", "2"], ["1 s", "3"]]), ".points.2.0", "times must rise"),
        (
            points(&[["0 s", "1"], ["0 s", "2"], ["0 s", "3"], ["1 s", "4"]]),
            ".points.2.0",
            "third time",
        ),
        (form("points", list(vec![])), ".points", "the list is empty"),
        (form("points", list(vec![list(vec![text("1")])])), ".points.0", "a row of [time, value]"),
        (form("sum", list(vec![])), ".sum", "the list is empty"),
        (form("sum", text("5")), ".sum", "a list of signals is needed"),
        (form("rmap", map(&[])), ".rmap", "not a form of signal"),
        (
            form("turbulence", map(&[("mean", "8 m/s"), ("intensity", "10 %")])),
            ".turbulence",
            "is a linear speed",
        ),
        (Node::Map(vec![]), "", "exactly one key, not 0"),
        (list(vec![]), "", "a signal is needed here, not a list"),
        (text("3 kg"), "", "is a mass, but a torque is needed here"),
        (
            form("sine", map(&[("amplitude", "1"), ("frequency", "0 Hz")])),
            ".sine.frequency",
            "must be above zero",
        ),
        (
            form("step", map(&[("at", "1 s"), ("from", "0"), ("to", "1"), ("too", "1")])),
            ".step.too",
            "not a key",
        ),
        (form("step", map(&[("at", "1 s"), ("from", "0")])), ".step", "`to` is missing"),
    ] {
        let (_, faults) = read(node, Torque);
        assert_eq!(faults.len(), 1, "{faults:?}");
        assert!(faults[0].starts_with(&format!("motors.m.demand{at}: ")), "{at}: {faults:?}");
        assert!(faults[0].contains(words), "{faults:?}");
    }
}

#[test]
fn sums_have_one_dimension_and_products_at_most_one_member_with_one() {
    let sum = |items: &[&str]| form("sum", list(items.iter().map(|item| text(item)).collect()));
    let product =
        |items: &[&str]| form("product", list(items.iter().map(|item| text(item)).collect()));
    assert!(
        matches!(sound(sum(&["1 N*m", "b"]), Torque), Signal::Sum(members) if members.len() == 2)
    );
    let (_, faults) = read(sum(&["1 N*m", "2 kg"]), Torque);
    assert!(faults[0].starts_with("motors.m.demand.sum.1: "), "{faults:?}");
    assert!(matches!(
        sound(product(&["50 %", "2 N*m", "c"]), Torque),
        Signal::Product { carrier: Some(1), .. }
    ));
    let (_, faults) = read(product(&["3 N*m", "2 N*m"]), Torque);
    assert!(faults[0].contains("at most one member with a dimension"), "{faults:?}");
    let (_, faults) = read(product(&["3 rpm", "2"]), Torque);
    assert!(faults[0].contains("this is a rotational speed, but a torque is needed"), "{faults:?}");
}

#[test]
fn a_named_signal_takes_its_dimension_from_its_units() {
    let ramp = |from: &str, to: &str| {
        form("ramp", map(&[("start", "1 s"), ("end", "2 s"), ("from", from), ("to", to)]))
    };
    let (signal, faults) = named(&ramp("0", "1450 rpm"));
    assert!(faults.is_empty(), "{faults:?}");
    assert_eq!(signal.dimension, Some(Speed));
    assert_eq!(named(&ramp("0", "1")).0.dimension, None);
    assert_eq!(named(&gust("12 m/s", "II")).0.dimension, Some(Dimension::LinearSpeed));
    assert_eq!(named(&text("80 %")).0.dimension, Some(One));
    let (_, faults) = named(&ramp("3 N*m", "1450 rpm"));
    assert_eq!(
        faults,
        [
            "signals.s.ramp.to: this is a rotational speed, but the signal's values before it are a torque"
        ]
    );
}

#[test]
fn a_named_signal_may_carry_its_source() {
    let mut entries = vec![("source".to_owned(), text("measured in May"))];
    if let Node::Map(more) = points(&[["0 s", "1"], ["1 s", "2"]]) {
        entries.extend(more);
    }
    let (signal, faults) = named(&Node::Map(entries));
    assert!(faults.is_empty(), "{faults:?}");
    assert_eq!(signal.source.as_deref(), Some("measured in May"));
    assert!(matches!(signal.signal, Signal::Points(_)));
}

#[test]
fn a_signal_that_may_be_absent_has_its_default() {
    let empty = Node::Map(vec![]);
    let faults = RefCell::new(Diagnostics::new());
    let signal = Fields::read("motors.m", &empty, &faults, |fields| {
        read_signal_or(fields, "voltage", One, 1.0, "Share.")
    });
    assert_eq!(signal, Signal::Constant(1.0));
    assert!(faults.into_inner().is_empty());
}

#[test]
fn the_reference_knows_every_form_that_can_be_read() {
    let keys: Vec<_> = describe_forms(Torque).iter().map(|field| field.key).collect();
    for form in &FORMS {
        assert!(keys.contains(form), "{form}: {keys:?}");
    }
    assert_eq!(keys.len(), FORMS.len());
}
