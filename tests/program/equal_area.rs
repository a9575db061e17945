//! Largest torque step, kick and pulse that a magnetic coupling survives.
//!
//! Energy (equal areas, the textbook criterion of power-system stability): an undamped swing
//! that starts at rest at d0 with torque share T turns back at d where
//! `T (d - d0) = cos d0 - cos d`; it slips when it passes the unstable point pi - asin T.
//! Each critical value is bracketed by one part in ten thousand: below it holds, above it slips.

use super::helper::{Outcome, run_through, same};
use super::swing::Swing;
use std::f64::consts::PI;

/// Just below and just above a critical value.
const BRACKET: [(f64, bool); 2] = [(0.9999, false), (1.0001, true)];

/// Runs and holds the outcome against the expectation.
#[track_caller]
fn slips(swing: &Swing, expected: bool, what: &str) -> Outcome {
    let outcome = run_through(&swing.yaml());
    assert_eq!(outcome.slips("coupling") > 0, expected, "{what}\n{}", swing.yaml());
    outcome
}

/// A step of torque from a steady preload; a reversal's preload moves with the step.
pub fn step(preload: f64, torque: f64) -> Swing {
    let preload = if preload < 0.0 { -torque } else { preload };
    Swing {
        steady: true,
        torque: (preload, vec![(1.0, torque)]),
        duration: 81.0,
        tolerance: 1e-10,
        ..Swing::default()
    }
}

/// Where an undamped swing from rest at `start` under the share `torque` turns back.
pub fn turning_point(start: f64, torque: f64) -> f64 {
    // Energy left at d; positive from the start to the turning point, which lies before the
    // unstable point.
    let energy = |d: f64| torque * (d - start) + d.cos() - start.cos();
    let (mut low, mut high) = (torque.asin(), PI - torque.asin());
    assert!(energy(high) < 0.0, "no turning point: the swing goes over the top");
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if energy(middle) > 0.0 { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

/// Roots of T1 (pi - asin T1 - asin T0) = cos(asin T0) + sqrt(1 - T1^2), 40 digits: T0, T1.
pub const STEPS: [(f64, f64); 10] = [
    (0.0, 0.7246113537767085),
    (0.1, 0.7552081964271955),
    (0.2, 0.7849135527147918),
    (0.3, 0.8138335054673533),
    (0.4, 0.8420542924013978),
    (0.5, 0.8696471675501424),
    (0.6, 0.8966718281946062),
    (0.7, 0.9231788935010517),
    (0.8, 0.949211737444517),
    // Reversal from -T to +T: 2/sqrt(pi^2 + 4).
    (-0.5370292721463151, 0.5370292721463151),
];

#[test]
fn critical_step_from_each_preload() {
    for (preload, critical) in STEPS {
        for (factor, slips_above) in BRACKET {
            let swing = step(preload, critical * factor);
            let what = format!("step from {preload} to {critical} x {factor}");
            let outcome = slips(&swing, slips_above, &what);
            if !slips_above {
                let peak = turning_point(swing.torque.0.asin(), critical * factor);
                // The turning point of a nearly critical swing is the square root of a small
                // difference of energies: 100 times as sensitive as the outcome.
                same(outcome.number(&["gears", "coupling", "peak_load_angle"]), peak, 1e-7);
                same(outcome.number(&["gears", "coupling", "peak_pull_out_share"]), 1.0, 1e-12);
                assert_eq!(outcome.state("coupling"), "synchronous");
            }
        }
    }
}

#[test]
fn critical_step_does_not_depend_on_the_size_of_the_train() {
    for (factor, slips_above) in BRACKET {
        let swing = Swing {
            torque: (0.7246113537767085 * factor, Vec::new()),
            duration: 80.0,
            method: "dopri5",
            tolerance: 1e-8,
            ..Swing::workshop()
        };
        slips(&swing, slips_above, &format!("step x {factor}"));
    }
}

#[test]
fn critical_step_is_found_at_coarse_tolerance_too() {
    // The outcome is far less sensitive than the trajectory.
    for method in ["dopri5", "dop853"] {
        for (factor, slips_above) in BRACKET {
            let swing = Swing {
                torque: (0.7246113537767085 * factor, Vec::new()),
                duration: 80.0,
                method,
                tolerance: 1e-5,
                ..Swing::default()
            };
            slips(&swing, slips_above, &format!("{method}, step x {factor}"));
        }
    }
}

/// Critical step from rest with damping, by independent integration (Dormand-Prince 8(5,3) at
/// 1e-11, bisected): beta, share.
pub const DAMPED_STEPS: [(f64, f64); 5] = [
    (0.02, 0.734857359062),
    (0.05, 0.750013310434),
    (0.1, 0.774659579485),
    (0.2, 0.821346721082),
    (0.5, 0.934639760989),
];

/// A step of torque from rest in a damped train of workshop size.
pub fn damped_step(beta: f64, torque: f64) -> Swing {
    Swing { beta, torque: (torque, Vec::new()), duration: 120.0, ..Swing::workshop() }
}

#[test]
fn damping_raises_the_critical_step() {
    for (beta, critical) in DAMPED_STEPS {
        for (factor, slips_above) in [(1.0 - 1e-5, false), (1.0 + 1e-5, true)] {
            let swing = damped_step(beta, critical * factor);
            slips(&swing, slips_above, &format!("beta {beta}, step x {factor}"));
        }
    }
}

/// Two free bodies with a coupling between them, torque on the first only.
pub fn free_pair(torque: f64, tolerance: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: Two free bodies\nduration: 80 s\noutput_step: 1 s\n\
         solver: {{ method: dop853, tolerance: {tolerance} }}\n\
         bodies:\n  driver: {{ inertia: 1 kg*m2 }}\n  load: {{ inertia: 3 kg*m2 }}\n\
         magnetic_couplings:\n  coupling: {{ between: [driver, load], pole_pairs: 1, pull_out: 1 N*m }}\n\
         motors:\n  push: {{ body: driver, law: {{ prescribed: {{ torque: {torque} }} }} }}\n"
    )
}

#[test]
fn free_load_lets_a_larger_step_pass() {
    // The pair's relative angle is a pendulum with inertia J1 J2/(J1 + J2) and the torque's
    // share J2/(J1 + J2): critical step 0.72461135 (J1 + J2)/J2 of the pull-out torque.
    let critical = 0.7246113537767085 * 4.0 / 3.0;
    for (factor, slips_above) in BRACKET {
        let outcome = run_through(&free_pair(critical * factor, 1e-10));
        assert_eq!(outcome.slips("coupling") > 0, slips_above, "step x {factor}");
        if !slips_above {
            let peak = turning_point(0.0, 0.75 * critical * factor);
            same(peak, 2.30900062872, 2e-11);
            same(outcome.number(&["gears", "coupling", "peak_load_angle"]), peak, 1e-7);
            // The train as a whole is pushed by the torque alone.
            let sum = outcome.channel("driver.speed", "final")
                + 3.0 * outcome.channel("load.speed", "final");
            same(sum, critical * factor * 80.0, 1e-9);
        }
    }
}

/// w^2/2 = 2 sqrt(1 - T^2) - T (pi - 2 asin T): torque share, critical rate at the stable point.
pub const KICKS: [(f64, f64); 4] =
    [(0.0, 2.0), (0.2, 1.68036688364459), (0.5, 1.170344612814772), (0.8, 0.5837777418345872)];

/// A kick from the stable point under a torque.
pub fn kick(torque: f64, rate: f64, train: Swing) -> Swing {
    Swing { phase: torque.asin(), rate, torque: (torque, Vec::new()), duration: 80.0, ..train }
}

/// Load over pull-out, and the longest time for which the magnets may be without torque, in units
/// of the inverse frequency: cos dc = (pi - 2 d0) sin d0 - cos d0, t^2 = 2 (dc - d0)/load (critical
/// clearing by equal areas, textbooks of power-system stability; from memory, sure).
pub const CLEARINGS: [(f64, f64); 3] =
    [(0.3, 3.121563736), (0.5, 1.86012833888), (0.8, 0.706132728986)];

/// The rotor at the instant when the magnets take hold again: until then its load alone turned it.
pub fn clearing(torque: f64, time: f64, train: Swing) -> Swing {
    let phase = torque.asin() + 0.5 * torque * time * time;
    Swing { phase, rate: torque * time, ..kick(torque, 0.0, train) }
}

#[test]
fn critical_time_without_magnets_at_each_load() {
    for (torque, critical) in CLEARINGS {
        // The time itself, from its closed form.
        let start = torque.asin();
        let end = ((PI - 2.0 * start) * torque - start.cos()).acos();
        same((2.0 * (end - start) / torque).sqrt(), critical, 1e-9);
        for (factor, slips_above) in BRACKET {
            for train in [Swing::default(), Swing::workshop()] {
                let swing = clearing(torque, critical * factor, train);
                slips(&swing, slips_above, &format!("{critical} x {factor} without at {torque}"));
            }
        }
    }
}

#[test]
fn critical_kick_at_each_load() {
    for (torque, critical) in KICKS {
        for (factor, slips_above) in BRACKET {
            for train in [Swing::default(), Swing::workshop()] {
                let swing = kick(torque, critical * factor, train);
                slips(&swing, slips_above, &format!("kick {critical} x {factor} at {torque}"));
            }
        }
    }
}

/// Torque T0 -> T1 for a time -> T0: the pulse may last until the swing's energy just reaches
/// the top at T0; time by quadrature with 40 digits: T0, T1, time.
pub const PULSES: [(f64, f64, f64); 6] = [
    (0.0, 1.0, 2.500615127619551),
    (0.0, 1.5, 1.448282873403636),
    (0.0, 3.0, 0.6794517515915012),
    (0.5, 1.0, 2.992647881633703),
    (0.5, 1.5, 1.229889184687568),
    (0.5, 2.0, 0.797287417844984),
];

/// From a steady preload a higher torque for a time.
pub fn pulse(preload: f64, peak: f64, time: f64) -> Swing {
    Swing {
        steady: true,
        torque: (preload, vec![(1.0, peak), (1.0 + time, preload)]),
        duration: 81.0,
        ..Swing::workshop()
    }
}

#[test]
fn critical_length_of_each_pulse() {
    for (preload, peak, critical) in PULSES {
        for (factor, slips_above) in BRACKET {
            let swing = pulse(preload, peak, critical * factor);
            let what = format!("pulse {preload} to {peak} for {critical} x {factor}");
            slips(&swing, slips_above, &what);
        }
    }
}

#[test]
fn pulse_signal_does_the_same_as_points() {
    for (factor, slips_above) in BRACKET {
        let end = 1.0 + 1.229889184687568 * factor;
        let pulse =
            format!("torque: {{ pulse: {{ start: 1 s, end: {end} s, base: 0.5, peak: 1.5 }} }}");
        let swing =
            Swing { steady: true, torque: (0.5, Vec::new()), duration: 81.0, ..Swing::default() };
        let yaml = swing.yaml().replace("torque: 0.5", &pulse);
        assert!(yaml.contains("pulse"));
        let outcome = run_through(&yaml);
        assert_eq!(outcome.slips("coupling") > 0, slips_above, "pulse x {factor}");
    }
}

/// A magnetic gear whose inner rotor turns while modulator and outer rotor stand: a jam.
pub fn jam(speed_rpm: f64, load_angle_degrees: f64, torque: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: Jammed output\nduration: 0.6 s\noutput_step: 10 ms\n\
         solver: {{ tolerance: 1e-9 }}\n\
         bodies:\n  inner_rotor: {{ inertia: 0.05 kg*m2, speed: {speed_rpm} rpm }}\n\
         magnetic_gears:\n  gear:\n    inner: inner_rotor\n    modulator: ground\n    outer: ground\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 5 kN*m }}\n    \
         initial_load_angle: {load_angle_degrees} deg\n\
         motors:\n  drive: {{ body: inner_rotor, law: {{ prescribed: {{ torque: {torque} }} }} }}\n"
    )
}

#[test]
fn jam_at_speed_slips_above_the_kick_limit() {
    // Kick by the running speed: critical speed = kick * sqrt(pull_out/(p J)), with the inner
    // pull-out 5000 * 4/22 N*m, p = 4, J = 0.05 kg*m2; unloaded and at half load.
    for (critical_rpm, degrees, torque) in
        [(1287.6268889148, 0.0, 0.0), (753.48359637845, 30.0, 0.5 * 5000.0 * 4.0 / 22.0)]
    {
        for (factor, slips_above) in BRACKET {
            let outcome = run_through(&jam(critical_rpm * factor, degrees, torque));
            assert_eq!(outcome.slips("gear") > 0, slips_above, "{critical_rpm} rpm x {factor}");
        }
    }
}
