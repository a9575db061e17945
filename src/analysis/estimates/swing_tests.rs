//! The swing against closed forms and against values of independent integrations.

use super::*;
use crate::component::magnetic_gear::Harmonic;
use std::f64::consts::{FRAC_PI_2, PI};

fn sine() -> MagnetLaw {
    MagnetLaw::new(1.0, &[]).unwrap()
}

#[track_caller]
fn close(found: f64, expected: f64, tolerance: f64) {
    assert!((found - expected).abs() <= tolerance, "{found} against {expected}");
}

// Equal areas: T1 (pi - asin T1 - asin T0) = cos(asin T0) + sqrt(1 - T1^2), solved to 12 digits.
#[test]
fn critical_steps_without_damping_follow_equal_areas() {
    let law = sine();
    let swing = Swing::new(&law, 0.0, 0.0, false);
    for (preload, expected) in [
        (0.0, 0.724611353777),
        (0.1, 0.755208196427),
        (0.2, 0.784913552715),
        (0.3, 0.813833505467),
        (0.4, 0.842054292401),
        (0.5, 0.86964716755),
        (0.6, 0.896671828195),
        (0.7, 0.923178893501),
        (0.8, 0.949211737445),
        // From the reversed torque: 2/sqrt(pi^2 + 4).
        (-0.537029272146, 0.537029272146),
    ] {
        close(swing.critical_step(preload).unwrap(), expected, 2e-12);
    }
}

// A step from no load with damping: time-domain bisection of an independent integrator (SciPy).
#[test]
fn critical_steps_with_damping() {
    let law = sine();
    for (beta, expected) in [
        (0.02, 0.734857359062),
        (0.05, 0.750013310434),
        (0.1, 0.774659579485),
        (0.2, 0.821346721082),
        (0.5, 0.934639760989),
    ] {
        let swing = Swing::new(&law, beta, 0.0, false);
        close(swing.critical_step(0.0).unwrap(), expected, 1e-9);
    }
    // Strong damping creeps up to any load below the peak.
    close(Swing::new(&law, 3.0, 0.0, false).critical_step(0.0).unwrap(), 1.0, 1e-12);
}

// Weak damping must run into the closed form: the marched and the energy path are two codes.
#[test]
fn vanishing_damping_joins_equal_areas() {
    let law = sine();
    for preload in [-0.4, 0.0, 0.3, 0.7] {
        let marched = Swing::new(&law, 1e-9, 0.0, false);
        let closed = Swing::new(&law, 0.0, 0.0, false);
        let (a, b) = (marched.critical_step(preload), closed.critical_step(preload));
        close(a.unwrap(), b.unwrap(), 1e-8);
        let (a, b) = (marched.critical_kick(preload), closed.critical_kick(preload));
        close(a.unwrap(), b.unwrap(), 1e-8);
    }
}

// Critical speed: 1/2 w^2 = 2 sqrt(1 - T^2) - T (pi - 2 asin T).
#[test]
fn critical_kicks_follow_the_energy_of_the_well() {
    let law = sine();
    let swing = Swing::new(&law, 0.0, 0.0, false);
    for (load, expected) in
        [(0.0, 2.0), (0.2, 1.68036688364), (0.5, 1.17034461281), (0.8, 0.583777741835)]
    {
        close(swing.critical_kick(load).unwrap(), expected, 2e-11);
    }
}

// Critical pulses: the end angle follows from energies, the time from one quadrature of the way there.
#[test]
fn critical_pulses_follow_energy_and_quadrature() {
    let law = sine();
    let swing = Swing::new(&law, 0.0, 0.0, false);
    for (preload, overload, expected) in [
        (0.0, 1.0, 2.50061512762),
        (0.0, 1.5, 1.4482828734),
        (0.0, 3.0, 0.679451751592),
        (0.5, 1.0, 2.99264788163),
        (0.5, 1.5, 1.22988918469),
        (0.5, 2.0, 0.797287417845),
    ] {
        close(swing.critical_pulse(preload, overload).unwrap(), expected, 5e-11);
    }
    assert_eq!(swing.critical_pulse(0.0, 0.72), None);
}

// Torque at which the way out of one saddle leads into the next: shooting by an independent
// integrator (SciPy), unchanged when section and start distance were; 4 beta/pi when weak.
#[test]
fn falling_into_step_again() {
    let law = sine();
    for (beta, expected) in [
        (0.02, 0.0254622697946),
        (0.05, 0.0636225862147),
        (0.1, 0.127008859805),
        (0.2, 0.252128244467),
        (0.3, 0.373474385843),
        (0.4, 0.489176022693),
        (0.5, 0.597383200311),
        (0.6, 0.696278576508),
        (0.7, 0.784091101625),
        (0.8, 0.859111104979),
        (1.0, 0.964327124471),
        (1.1, 0.991527203665),
    ] {
        let found = Swing::new(&law, beta, 0.0, false).resynchronisation().unwrap();
        close(found, expected, 1e-10);
    }
    let weak = Swing::new(&law, 1e-3, 0.0, false).resynchronisation().unwrap();
    close(weak * PI / 4e-3, 1.0, 1e-6);
    // No hysteresis from beta = 1.193 on (known limit, about 1.19).
    close(Swing::new(&law, 1.20, 0.0, false).resynchronisation().unwrap(), 1.0, 1e-12);
    assert!(Swing::new(&law, 1.19, 0.0, false).resynchronisation().unwrap() < 1.0 - 1e-7);
    assert_eq!(Swing::new(&law, 0.0, 0.0, false).resynchronisation(), Some(0.0));
}

// A damper that fades holds less at full slip, so a gear falls into step later; with its peak far
// away it is the straight line.
#[test]
fn a_fading_damper_helps_less() {
    let law = sine();
    let straight = Swing::new(&law, 0.2, 0.0, false).resynchronisation().unwrap();
    let far = Swing::new(&law, 0.2, 1e-7, false).resynchronisation().unwrap();
    let near = Swing::new(&law, 0.2, 1.0, false).resynchronisation().unwrap();
    close(far, straight, 1e-10);
    assert!(near < 0.7 * straight, "{near} {straight}");
}

// A law with a third harmonic in phase is odd: forward and backward are alike; with an even
// harmonic they are not, and mirrored twice is the same.
#[test]
fn backward_loads_use_the_other_side_of_the_law() {
    let odd = MagnetLaw::new(2.0, &[Harmonic { order: 3, amplitude: 0.05, phase: 0.0 }]).unwrap();
    let step =
        |law: &MagnetLaw, mirrored| Swing::new(law, 0.0, 0.0, mirrored).critical_step(0.2).unwrap();
    close(step(&odd, false), step(&odd, true), 1e-10);
    let even =
        MagnetLaw::new(2.0, &[Harmonic { order: 2, amplitude: 0.1, phase: FRAC_PI_2 }]).unwrap();
    let turned =
        MagnetLaw::new(2.0, &[Harmonic { order: 2, amplitude: 0.1, phase: -FRAC_PI_2 }]).unwrap();
    assert!((step(&even, false) - step(&even, true)).abs() > 1e-3);
    close(step(&even, true), step(&turned, false), 1e-10);
}

// Time-domain bisection of an independent integrator (SciPy DOP853, rtol 1e-12, outcome by
// events): damped kicks, steps from a preload and from the reversed torque, pulses.
#[test]
fn damped_figures_agree_with_an_independent_integrator() {
    let law = sine();
    let with = |beta, fade| Swing::new(&law, beta, fade, false);
    let close = |found: Option<f64>, expected: f64| close(found.unwrap(), expected, 2e-9);
    close(with(0.2, 0.0).critical_kick(0.0), 2.4149382176055267);
    close(with(0.1, 0.0).critical_kick(0.5), 1.3069243246671594);
    close(with(0.1, 0.0).critical_step(0.5), 0.8979057910083095);
    close(with(0.2, 0.0).critical_step(-0.4), 0.7217977496781365);
    close(with(0.15, 0.0).critical_pulse(0.3, 1.4), 1.7893847949244401);
    close(with(0.15, 0.5).critical_pulse(0.3, 1.4), 1.7395877182356125);
    close(with(0.2, 1.0).critical_step(0.0), 0.7978086836461695);
    close(with(0.2, 1.0).critical_kick(0.3), 1.6508361081581233);
    close(with(0.2, 1.0).resynchronisation(), 0.0821780036836828);
}

// The same integrator with a third harmonic of 4 % and a second one of 10 % a quarter turn ahead.
#[test]
fn laws_with_harmonics_agree_with_an_independent_integrator() {
    for (order, amplitude, phase, expected) in [
        (
            3,
            0.04,
            0.0,
            [0.7564631471068635, 0.9041432930347162, 1.5789806586849133, 0.2598582504061866],
        ),
        (
            2,
            0.1,
            FRAC_PI_2,
            [0.7527834210036892, 0.9014310986128331, 1.6203137230385032, 0.26484551618851937],
        ),
    ] {
        let law = MagnetLaw::new(7.0, &[Harmonic { order, amplitude, phase }]).unwrap();
        let with = |beta| Swing::new(&law, beta, 0.0, false);
        let found = [
            with(0.0).critical_step(0.0),
            with(0.2).critical_step(0.3),
            with(0.0).critical_kick(0.3),
            with(0.2).resynchronisation(),
        ];
        for (found, expected) in found.into_iter().zip(expected) {
            close(found.unwrap(), expected, 2e-9);
        }
    }
}
