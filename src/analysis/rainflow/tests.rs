//! Rainflow through the engine, against the standard's example and closed forms.

#![expect(clippy::float_cmp, reason = "exact zeros and counts")]

use super::*;
use crate::analysis::testing::{equations, node};
use crate::component::channel::Known;
use crate::diagnostic::Diagnostics;
use crate::tree::Fields;
use std::cell::RefCell;

fn study(yaml: &str, equations: &Equations) -> (RainflowSpec, String) {
    let node = node(yaml);
    let faults = RefCell::new(Diagnostics::new());
    let known = Known::all(&equations.model.channels);
    let read = |fields: &mut Fields<'_>| RainflowSpec::read(fields, known);
    let spec = Fields::read("studies.c.rainflow", &node, &faults, read);
    let told: Vec<String> =
        faults.borrow().iter().map(|fault| format!("{}: {}", fault.path, fault.message)).collect();
    (spec, told.join("\n"))
}

fn counted(study_yaml: &str, train: &str) -> RainflowResult {
    let equations = equations(train);
    let (spec, faults) = study(study_yaml, &equations);
    assert_eq!(faults, "");
    run(&spec, &equations, None).unwrap()
}

const EXAMPLE: &str = "bodies: { a: { inertia: 1 } }
duration: 8 s
loads: { history: { body: a, law: { prescribed: { torque: { points: [[0, -2], [1, 1], [2, -3], [3, 5], [4, -1], [5, 3], [6, -4], [7, 4], [8, -2]] } } } } }";

// ASTM E1049-85, the example of figure 6: order, ranges, means and counts.
#[test]
fn the_example_of_the_standard_through_the_engine() {
    let found = counted("{ of: history.torque, slope: 4 }", EXAMPLE);
    let expected = [
        [3.0, -0.5, 0.5],
        [4.0, -1.0, 0.5],
        [4.0, 1.0, 1.0],
        [8.0, 1.0, 0.5],
        [9.0, 0.5, 0.5],
        [8.0, 0.0, 0.5],
        [6.0, 1.0, 0.5],
    ];
    assert_eq!(found.cycles.len(), expected.len());
    for (cycle, [range, mean, count]) in found.cycles.iter().zip(expected) {
        assert!((cycle.range - range).abs() < 1e-14 && (cycle.mean - mean).abs() < 1e-14);
        assert_eq!(cycle.count, count);
    }
    assert_eq!(found.turning_points, 9);
    assert_eq!(found.extremes, [-4.0, 5.0]);
}

// The damage-equivalent range (sum n S^m / N)^(1/m) of the same example, closed form.
#[test]
fn damage_equivalent_ranges_of_the_example() {
    for (slope, expected) in [
        (3.0, 10.3039981964),
        (4.0, 9.58741060508),
        (5.0, 9.25325663101),
        (8.0, 8.896493152),
        (10.0, 8.82000395759),
    ] {
        let found = counted(&format!("{{ of: history.torque, slope: {slope} }}"), EXAMPLE);
        assert!((found.damage_equivalent - expected).abs() < 1e-10, "{slope}");
    }
    let found = counted("{ of: history.torque, slope: 4, at_most: 9.5 N*m }", EXAMPLE);
    assert!((found.damage_sum - 8449.0).abs() < 1e-9);
    assert_eq!(found.met, Some(false));
    let many = counted("{ of: history.torque, slope: 4, equivalent_cycles: 1e6 }", EXAMPLE);
    assert!((many.damage_equivalent - (8449e-6_f64).powf(0.25)).abs() < 1e-12);
}

// A hundred turns of a unit sine from zero: 99 whole cycles of range 2 and two halves of range 2
// and 1 at the ends, so that sum n S^4 = 1593, and not 1600 (closed form).
#[test]
fn a_hundred_sines_of_unit_amplitude() {
    let found = counted(
        "{ of: history.torque, slope: 4, equivalent_cycles: 100 }",
        "bodies: { a: { inertia: 1 } }
duration: 100 s
loads: { history: { body: a, law: { prescribed: { torque: { sine: { mean: 0, amplitude: 1, frequency: 1 Hz, phase: 0 deg } } } } } }",
    );
    assert!((found.damage_equivalent - 15.93_f64.powf(0.25)).abs() < 1e-12);
    assert!((found.damage_equivalent - 1.9978089).abs() < 1e-7);
    assert_eq!(found.turning_points, 202);
    assert!((found.count - 100.5).abs() < 1e-12);
}

// An undamped torsional oscillator swings between fixed ends: every turning point of the shaft's
// torque is the first one's (k x0, closed form), and the channel is a solution, not a signal.
#[test]
fn turning_points_of_a_swinging_shaft() {
    let found = counted(
        "{ of: s.torque, slope: 4, after: 0.1 s }",
        "bodies: { a: { inertia: 1, speed: 2 rad/s }, b: { inertia: 1, speed: -2 rad/s } }
duration: 3 s
solver: { tolerance: 1e-11 }
shafts: { s: { between: [a, b], stiffness: 200 } }",
    );
    // w = sqrt(2 k/J) = 20 rad/s, twist amplitude 4/20 rad, torque 40 N m: 9.2 periods in 2.9 s.
    let whole: Vec<f64> =
        found.cycles.iter().map(|cycle| cycle.range).filter(|range| *range > 79.0).collect();
    assert!(whole.len() >= 17, "{}", whole.len());
    for range in whole {
        assert!((range - 80.0).abs() < 1e-7, "{range}");
    }
    assert!((found.extremes[1] - 40.0).abs() < 1e-7);
}

// A gate takes out small swings: the example without ranges below 5 keeps 8, 9 and 8 and 6.
#[test]
fn a_gate_leaves_small_swings_out() {
    let found = counted("{ of: history.torque, slope: 4, gate: 5 N*m }", EXAMPLE);
    assert!(found.cycles.iter().all(|cycle| cycle.range > 5.0), "{:?}", found.cycles);
    assert!(found.cycles.iter().any(|cycle| cycle.range == 9.0));
}

#[test]
fn faults_are_told() {
    let equations = equations(EXAMPLE);
    for (yaml, message) in [
        ("{ of: history.torqe, slope: 4 }", "no quantity"),
        ("{ of: history.torque }", "`slope` is missing"),
        ("{ of: history.torque, slope: 0 }", "`slope` must lie between 1 and 30"),
        ("{ of: history.torque, slope: 4, at_most: 3 rpm }", "studies.c.rainflow.at_most"),
        ("{ of: history.torque, slope: 4, after: 2 s, before: 1 s }", "must lie after `after`"),
    ] {
        let (_, faults) = study(yaml, &equations);
        let told = faults.contains(message) || (message == "no quantity" && !faults.is_empty());
        assert!(told, "{yaml}: {faults}");
    }
}

// Narrow-band Gaussian: the amplitudes follow Rayleigh's distribution, so that ranges S = 2R have
// E[S^m] = (2 sqrt2 sigma)^m Gamma(1 + m/2): 30.0795392956 for m = 3, 128 for m = 4, sigma 1 (textbooks
// of fatigue under random loads, from memory). The amplitudes are the middles of equal shares of
// probability, in an order that mixes them as swings in a slow envelope do: rising and falling.
#[test]
fn ranges_of_a_narrow_band_follow_rayleigh() {
    const CYCLES: u32 = 200_000;
    let rayleigh = |share: f64| (-2.0 * (1.0 - share).ln()).sqrt();
    let amplitudes = (0..CYCLES).map(|index| {
        // Up over the even shares, down over the odd ones.
        let place = if index < CYCLES / 2 { 2 * index } else { 2 * (CYCLES - index) - 1 };
        rayleigh((f64::from(place) + 0.5) / f64::from(CYCLES))
    });
    let mut counter = count::Counter::default();
    let mut cycles = Vec::new();
    for amplitude in amplitudes {
        counter.take(amplitude, &mut |cycle| cycles.push(cycle));
        counter.take(-amplitude, &mut |cycle| cycles.push(cycle));
    }
    counter.finish(&mut |cycle| cycles.push(cycle));
    let number: f64 = cycles.iter().map(|cycle| cycle.count).sum();
    assert!((number / f64::from(CYCLES) - 1.0).abs() < 1e-4, "{number}");
    for (slope, expected) in [(3.0, 30.079_539_295_6), (4.0, 128.0)] {
        let found = damage_sum(&cycles, slope) / f64::from(CYCLES);
        // The largest amplitudes are cut off at one share in 400000.
        assert!((found / expected - 1.0).abs() < 1e-3, "m {slope}: {found}");
    }
}
