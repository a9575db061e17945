//! Estimates of whole trains against closed forms and worked values.

#![expect(clippy::float_cmp, reason = "exact zeros and counts")]

use super::*;
use crate::analysis::testing::equations;
use crate::solve::{RunOptions, run};

fn estimate(yaml: &str) -> EstimatesResult {
    let equations = equations(yaml);
    let found = run::run(&equations, RunOptions::default()).unwrap();
    super::run(&EstimatesSpec::default(), &equations, &found)
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} against {expected}");
}

/// 4 and 22 pole pairs, 16 N m at the outer rotor, inertias 0.002 and 0.05 (0.08 for the modulator).
fn gear(modulator: &str, damping: f64) -> String {
    let body = if modulator == "ground" { "" } else { ", modulator: { inertia: 0.08 }" };
    format!(
        "bodies: {{ inner: {{ inertia: 0.002 }}, outer: {{ inertia: 0.05 }}{body} }}
magnetic_gears:
  gear: {{ inner: inner, modulator: {modulator}, outer: outer, pole_pairs: {{ inner: 4, outer: 22 }}, pull_out: {{ at: outer, torque: 16 }}, damping: {{ at: outer, coefficient: {damping} }} }}"
    )
}

// Closed forms of this gear: J_e = 1/(16/0.002 + 484/0.05), f0 18.0472 Hz, critical steps
// 21.1754 N m at the outer and 4.6586 N m at the inner rotor, jam below 2 sqrt(K/J_i) = 38.1385 rad/s.
#[test]
fn figures_of_a_gear_with_its_modulator_held() {
    let damping = 0.05 * 2.0 * (16.0 / 22.0 * 5.656_108_597_285_068e-5_f64).sqrt() * 484.0;
    let found = estimate(&gear("ground", damping));
    let gear = &found.gears[0];
    close(gear.phase_inertia, 1.0 / (16.0 / 0.002 + 484.0 / 0.05), 1e-13);
    assert!((gear.natural_frequency_hz - 18.0472).abs() < 5e-5);
    close(gear.damping_ratio, 0.05, 1e-12);
    let (inner, outer) = (&gear.members[0], &gear.members[1]);
    assert!((outer.critical_step_torque - 21.1754).abs() < 5e-5);
    assert!((inner.critical_step_torque - 4.6586).abs() < 5e-5);
    assert!((inner.jam_speed - 38.1385).abs() < 5e-5);
    close(inner.jam_speed, 2.0 * (16.0 / 22.0 / 0.002_f64).sqrt(), 1e-12);
    // The same side referred: J_o over the ratio squared.
    close(inner.other_side_inertia.unwrap(), 0.05 / 5.5 / 5.5, 1e-12);
    close(gear.jam_speed().unwrap(), inner.jam_speed, 1e-15);
    // With zeta 0.05 (beta 0.1): 0.774659579485 and 0.127008859805; without 0.724611353777 and 0.
    let [zero, given, double] = gear.variants.as_slice() else { panic!() };
    close(zero.critical_step_share, 0.724611353777, 1e-11);
    assert_eq!(zero.resynchronisation_share, 0.0);
    close(given.critical_step_share, 0.774659579485, 1e-9);
    close(given.resynchronisation_share, 0.127008859805, 1e-9);
    close(double.critical_step_share, 0.821346721082, 1e-9);
    close(double.resynchronisation_share, 0.252128244467, 1e-9);
    // The linearised train says the same frequency and damping.
    for comparison in &gear.comparisons[..2] {
        assert_eq!(comparison.agree, Some(true), "{comparison:?}");
    }
    close(gear.comparisons[0].found.unwrap(), gear.natural_frequency_hz, 1e-10);
}

#[test]
fn figures_of_a_gear_with_three_turning_members() {
    let found = estimate(&gear("modulator", 0.0));
    let gear = &found.gears[0];
    close(gear.phase_inertia, 3.827019e-5, 2e-7);
    assert!((gear.natural_frequency_hz - 21.9401).abs() < 5e-5);
    assert_eq!(gear.members.len(), 3);
    assert_eq!(gear.members[0].other_side_inertia, None);
    // Shares over all members sum to one: each is count^2 J_e/J.
    let sum: f64 = gear.members.iter().map(|member| member.acceleration_share).sum();
    close(sum, 1.0, 1e-12);
    assert!(found.gears[0].notes.iter().any(|note| note.contains("no damping is stated")));
}

// Two inertias 0.02 and 0.05 behind a coupling of 4 pole pairs, 10 N m: a motor step is just
// survived at 0.72461135 * 10 * (0.02 + 0.05)/0.05 = 10.14456 N m; its acceleration share is 5/7.
#[test]
fn a_motor_behind_a_coupling() {
    let found = estimate(
        "bodies: { motor: { inertia: 0.02 }, load: { inertia: 0.05 } }
duration: 2 s
magnetic_couplings: { coupling: { between: [motor, load], pole_pairs: 4, pull_out: 10 } }
motors: { drive: { body: motor, law: { prescribed: { torque: 3 } } } }",
    );
    let gear = &found.gears[0];
    assert!((gear.members[0].critical_step_torque - 10.14456).abs() < 5e-6);
    close(gear.acceleration_share.unwrap(), 5.0 / 7.0, 1e-12);
    assert_eq!(gear.motor.as_deref(), Some("drive"));
    assert_eq!(gear.drive, Some("a"));
    // A step of 3 N m: slowly 3*5/7/10 = 0.2143 of the pull-out; the run swings to twice that, within
    // the softening of the law.
    let peak = gear.comparisons.iter().find(|item| item.figure.starts_with("largest")).unwrap();
    close(peak.hand, 0.3 * 5.0 / 7.0, 1e-9);
    assert_eq!(peak.agree, Some(true));
    assert!(peak.found.unwrap() > 1.9 * peak.hand);
}

// Worked example: 22 pole pairs, 5000 N m, slow side 20 kg m2, fast side 1.5125 referred (0.05
// behind 5.5), damping 60 N m s/rad at the outer rotor: wp 279.691388368 rad/s, beta
// 0.15255893911, locks again only below 965.627415 N m. Jam of the slow side: 1287.62688891 rpm
// unloaded and 753.483596378 rpm at half load.
#[test]
fn recovery_and_jam_of_a_gear_of_5_kilonewton_metres() {
    let yaml = "
bodies: { fast: { inertia: 0.05 }, slow: { inertia: 20 } }
duration: 1 s
start: steady
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 5000 }, damping: { at: outer, coefficient: 60 } }
motors: { drive: { body: fast, law: { prescribed: { torque: 454.5454545454545 } } } }
loads: { work: { body: slow, law: { prescribed: { torque: 2500 } } } }";
    let found = estimate(yaml);
    let gear = &found.gears[0];
    close(2.0 * gear.damping_ratio, 0.15255893911, 1e-10);
    let given = gear.given().unwrap();
    close(5000.0 * given.resynchronisation_share, 965.627415, 1e-9);
    let rpm = |speed: f64| speed * 30.0 / std::f64::consts::PI;
    close(rpm(gear.members[0].jam_speed), 1287.62688891, 1e-11);
    close(rpm(gear.members[0].jam_speed_at_preload.unwrap()), 753.483596378, 1e-8);
    close(gear.static_service_factor.unwrap(), 2.0, 1e-8);
    close(gear.loaded_frequency_hz.unwrap(), 41.4251931687, 1e-8);
    assert!(gear.notes.iter().any(|note| note.contains("does not fall into step")));
    // From half load the equal-area limit is 0.86964716755 in all (no damping).
    close(gear.variants[0].critical_step_share_from_preload.unwrap(), 0.86964716755, 1e-8);
    // A pulse of 1.5 times the pull-out from half load may last 1.22988918469/wp.
    let pulse = gear.variants[0].pulses[1];
    close(pulse.duration.unwrap(), 1.22988918469 / 279.691388368, 1e-7);
    assert_eq!(gear.comparisons.iter().filter(|item| item.agree == Some(false)).count(), 0);
}

// A shaft as soft as the gear: two springs in a row; hand and train differ, and the shaft is named.
#[test]
fn a_soft_shaft_is_named_as_the_reason() {
    let found = estimate(
        "bodies: { motor: { inertia: 1, speed: 10 rad/s }, hub: { inertia: 1e-3 }, load: { inertia: 1 } }
shafts: { soft: { between: [motor, hub], stiffness: 400 } }
magnetic_couplings: { coupling: { between: [hub, load], pole_pairs: 4, pull_out: 100, damping: 0.2 } }
loads: { bearing: { body: load, law: { viscous: { coefficient: 3 } } } }
motors: { drive: { body: motor, law: { speed_loop: { speed: 10 rad/s, torque_limit: 500, gain: 30 } } } }",
    );
    let comparisons = &found.gears[0].comparisons;
    // By hand sqrt(400*2)/2 pi = 4.50 Hz; two springs of 400 in a row: 200, a factor sqrt(2) less.
    close(comparisons[0].hand, 800.0_f64.sqrt() / std::f64::consts::TAU, 1e-3);
    assert_eq!(comparisons[0].agree, Some(false));
    assert!(comparisons[0].why[0].contains("`soft` bends with it"), "{:?}", comparisons[0].why);
    assert_eq!(comparisons[1].agree, Some(false));
    assert!(comparisons[1].why.iter().any(|why| why.contains("drive `drive`")));
}
