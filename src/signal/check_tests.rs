//! Rules between signals, one fault each.

use super::*;

fn name(name: &str) -> Signal {
    Signal::Named(name.to_owned())
}

fn entry(name: &str, dimension: Option<Dimension>, signal: Signal) -> NamedSignal {
    NamedSignal { name: name.to_owned(), dimension, signal, source: None }
}

fn product(members: Vec<Signal>, carrier: Option<usize>) -> Signal {
    Signal::Product { members, carrier }
}

fn among(named: &[NamedSignal]) -> Vec<String> {
    let mut faults = Diagnostics::new();
    check_named_signals(named, &mut faults);
    faults.iter().map(|fault| format!("{}: {}", fault.path, fault.message)).collect()
}

fn used(signal: Signal, dimension: Dimension, named: &[NamedSignal]) -> Vec<String> {
    let mut faults = Diagnostics::new();
    check_use("motors.m.scale", &signal, dimension, named, &mut faults);
    faults.iter().map(|fault| format!("{}: {}", fault.path, fault.message)).collect()
}

fn library() -> Vec<NamedSignal> {
    vec![
        entry("torque", Some(Dimension::Torque), Signal::Constant(5.0)),
        entry("speed", Some(Dimension::Speed), Signal::Constant(5.0)),
        entry("share", Some(Dimension::One), Signal::Constant(0.5)),
        entry("bare", None, Signal::Constant(5.0)),
        entry("scaled", None, product(vec![name("torque"), name("share")], None)),
        entry("alias", None, name("speed")),
    ]
}

#[test]
fn a_sound_library_has_no_faults() {
    assert_eq!(among(&library()), Vec::<String>::new());
}

#[test]
fn a_dimension_fault_is_told_at_the_use_and_points_at_the_definition() {
    assert_eq!(
        used(name("torque"), Dimension::Speed, &library()),
        [
            "motors.m.scale: `torque` is a torque (signals.torque), but a rotational speed is needed here"
        ]
    );
    assert!(used(name("scaled"), Dimension::Torque, &library()).is_empty());
    assert!(used(name("alias"), Dimension::Torque, &library())[0].contains("rotational speed"));
    let sum = Signal::Sum(vec![Signal::Constant(1.0), name("speed")]);
    assert!(used(sum, Dimension::Torque, &library())[0].starts_with("motors.m.scale.sum.1: "));
}

#[test]
fn a_bare_signal_fits_everywhere_but_a_speed_is_warned_of() {
    assert!(used(name("bare"), Dimension::Torque, &library()).is_empty());
    let warned = used(name("bare"), Dimension::Speed, &library());
    assert_eq!(
        warned,
        ["motors.m.scale: `bare` (signals.bare) has no unit and is read in rad/s here"]
    );
}

#[test]
fn an_unknown_name_offers_the_nearest() {
    let mut faults = Diagnostics::new();
    check_use("a.b", &name("torqe"), Dimension::Torque, &library(), &mut faults);
    let fault = faults.iter().next().unwrap();
    assert_eq!(fault.message, "no signal is named `torqe`");
    assert_eq!(fault.hint.as_deref(), Some("did you mean `torque`?"));
    let inside = vec![entry("a", None, Signal::Sum(vec![name("nowhere")]))];
    assert_eq!(among(&inside), ["signals.a.sum.0: no signal is named `nowhere`"]);
}

#[test]
fn products_may_have_one_member_with_a_dimension_names_included() {
    let both = product(vec![name("torque"), name("speed")], None);
    let found = used(both.clone(), Dimension::Torque, &library());
    assert_eq!(found.len(), 1, "{found:?}");
    assert!(found[0].starts_with("motors.m.scale.product.1: a product has at most one"));
    let mut named = library();
    named.push(entry("wrong", None, both));
    assert_eq!(among(&named).len(), 1);
    let literal = product(vec![Signal::Constant(3.0), name("torque")], Some(0));
    assert_eq!(used(literal, Dimension::Torque, &library()).len(), 1);
    let other = used(product(vec![name("speed")], None), Dimension::Torque, &library());
    assert!(other[0].contains("this product is a rotational speed"), "{other:?}");
}

#[test]
fn a_sum_of_names_has_one_dimension() {
    let mut named = library();
    named.push(entry(
        "mixed",
        None,
        Signal::Sum(vec![name("torque"), name("bare"), name("speed")]),
    ));
    let found = among(&named);
    assert_eq!(found.len(), 1, "{found:?}");
    assert!(found[0].starts_with("signals.mixed.sum.2: `speed` is a rotational speed"));
}

#[test]
fn a_circle_is_told_once_with_its_way_round() {
    let named = [
        entry("a", None, Signal::Sum(vec![Signal::Constant(1.0), name("b")])),
        entry("b", None, name("c")),
        entry("c", None, name("a")),
        entry("outside", None, name("a")),
    ];
    assert_eq!(among(&named), ["signals.a: the signal refers to itself: a -> b -> c -> a"]);
}
