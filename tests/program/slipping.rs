//! Slipping, falling back into step and never falling back.
//!
//! In units of the zero-load frequency the coupling obeys `d'' + beta d' + sin d = T`, the
//! damped pendulum under constant torque (the same law as the resistively and capacitively
//! shunted junction; its strongly damped limit is Adler's equation).

use super::helper::{near, run_through, same};
use super::swing::Swing;
use std::f64::consts::TAU;

/// Mean slip speed between the last slips of a run, electrical rad/s.
pub fn mean_slip_speed(times: &[f64]) -> f64 {
    assert!(times.len() >= 22, "only {} slips", times.len());
    let last = times.len() - 1;
    20.0 * TAU / (times[last] - times[last - 20])
}

/// Torque share and damping, mean slip speed of the running state, by independent integration
/// (Dormand-Prince 8(5,3) at 1e-12, over 20 poles).
pub const RUNNING: [(f64, f64, f64); 9] = [
    (0.2, 0.1, 1.933634512),
    (0.5, 0.1, 4.995995591),
    (0.5, 0.2, 2.467417969),
    (0.9, 0.5, 1.7131387),
    (1.2, 0.5, 2.364378895),
    (1.2, 1.0, 0.9768790008),
    (2.0, 1.0, 1.947786349),
    (1.5, 2.0, 0.575196256),
    (0.3, 0.1, 2.981284274),
];

/// A coupling that slips on, until its transient is gone.
pub fn running(torque: f64, beta: f64, mean: f64) -> Swing {
    Swing {
        beta,
        rate: torque / beta + 1.0,
        torque: (torque, Vec::new()),
        duration: 24.0 / beta + 25.0 * TAU / mean,
        tolerance: 1e-10,
        ..Swing::workshop()
    }
}

#[test]
fn mean_slip_speed_of_the_running_state() {
    for (torque, beta, mean) in RUNNING {
        let swing = running(torque, beta, mean);
        let outcome = run_through(&swing.yaml());
        let found = mean_slip_speed(&outcome.slip_times("coupling")) / swing.frequency();
        same(found, mean, 1e-7);
        assert_eq!(outcome.state("coupling"), "slipping");
        // Far above the frequency the swing of the speed is small: T = beta w + beta/(2 w (w^2 + beta^2)).
        if mean > 4.0 {
            same(beta * mean + beta / (2.0 * mean * (mean * mean + beta * beta)), torque, 1e-5);
        }
    }
}

/// Torque at which the running state dies (homoclinic orbit, by shooting, 12 digits): beta, share.
pub const LOCKS_AGAIN: [(f64, f64); 5] = [
    (0.1, 0.127008859805),
    (0.2, 0.252128244467),
    (0.5, 0.597383200311),
    (0.8, 0.859111104979),
    (1.0, 0.964327124471),
];

/// A coupling that slips at first and has time to lock.
pub fn spinning(beta: f64, torque: f64) -> Swing {
    Swing {
        beta,
        rate: 2.5,
        torque: (torque, Vec::new()),
        duration: 40.0 / beta + 400.0,
        tolerance: 1e-8,
        ..Swing::workshop()
    }
}

#[test]
fn falls_back_into_step_only_below_the_resynchronisation_torque() {
    for (beta, torque) in LOCKS_AGAIN {
        for (factor, slipping) in [(0.9999, false), (1.0001, true)] {
            let swing = spinning(beta, torque * factor);
            let outcome = run_through(&swing.yaml());
            let state = if slipping { "slipping" } else { "synchronous" };
            assert_eq!(outcome.state("coupling"), state, "beta {beta}, torque x {factor}");
            let resynchronised = outcome.at(&["gears", "coupling", "resynchronised_at"]);
            assert_eq!(resynchronised.is_null(), slipping, "beta {beta}: {resynchronised}");
            if !slipping {
                let last = *outcome.slip_times("coupling").last().unwrap();
                assert!(resynchronised.as_f64().unwrap() >= last, "in step before the last slip");
                let rest = (torque * factor).asin();
                near(outcome.number(&["gears", "coupling", "final_load_angle"]), rest, 1e-5);
            }
        }
    }
}

#[test]
fn weakly_damped_gear_does_not_recover_above_a_fifth_of_its_pull_out() {
    // The same limit in a whole gear: 22 outer pole pairs, 5 kN*m, 60 N*m*s/rad, inertias
    // 0.05 and 20 kg*m2: beta 0.15255893911 and 965.627415 N*m, 19.3 % of the pull-out torque.
    for (factor, slipping) in [(0.9999, false), (1.0001, true)] {
        let outcome = run_through(&weakly_damped(965.627415 * factor));
        let state = if slipping { "slipping" } else { "synchronous" };
        assert_eq!(outcome.state("gear"), state, "limit x {factor}");
        assert!(outcome.slips("gear") > 5, "it slips at first");
    }
}

/// A slipping gear of 5 kN*m under a load, both sides of the torque in balance.
pub fn weakly_damped(load: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: Slipping gear under load\nduration: 2.5 s\noutput_step: 10 ms\n\
             solver: {{ tolerance: 1e-8 }}\n\
             bodies:\n  fast: {{ inertia: 0.05 kg*m2, speed: {speed} rad/s }}\n  slow: {{ inertia: 20 kg*m2, speed: 0 rad/s }}\n\
             magnetic_gears:\n  gear:\n    inner: fast\n    modulator: ground\n    outer: slow\n    \
             pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 5 kN*m }}\n    \
             damping: {{ at: outer, coefficient: 60 N*m*s/rad }}\n\
             motors:\n  drive: {{ body: fast, law: {{ prescribed: {{ torque: {drive} }} }} }}\n\
             loads:\n  mill: {{ body: slow, law: {{ prescribed: {{ torque: {load} }} }} }}\n",
        speed = 2.5 * 279.6913883681 / 4.0,
        drive = load * 4.0 / 22.0,
    )
}

/// From steady T0 the torque T1 for a time, then T0 again, by independent integration at 1e-12:
/// T0, T1, time, beta, poles lost, largest slip speed. The count is the same for times 2 % off.
pub const BURSTS: [(f64, f64, f64, f64, u64, f64); 4] = [
    (0.1, 1.5, 5.25, 0.15, 7, 5.049194064370),
    (0.05, 2.0, 4.1, 0.1, 11, 6.293735220878),
    (0.2, 1.2, 8.0, 0.3, 4, 3.562792928733),
    (0.5, 1.2, 10.0, 0.6, 2, 2.341447581152),
];

/// An overload for a time on a steady coupling.
pub fn burst(preload: f64, overload: f64, time: f64, beta: f64) -> Swing {
    Swing {
        beta,
        steady: true,
        torque: (preload, vec![(1.0, overload), (1.0 + time, preload)]),
        duration: 100.0 + 30.0 / beta,
        ..Swing::workshop()
    }
}

#[test]
fn counts_the_poles_lost_in_an_overload() {
    for (preload, overload, time, beta, poles, fastest) in BURSTS {
        for stretch in [0.98, 1.0, 1.02] {
            let swing = burst(preload, overload, time * stretch, beta);
            let outcome = run_through(&swing.yaml());
            let what = format!("{overload} for {time} x {stretch}");
            assert_eq!(outcome.slips("coupling"), poles, "{what}");
            assert_eq!(
                outcome.at(&["gears", "coupling", "net_slips"]).as_u64(),
                Some(poles),
                "{what}"
            );
            assert_eq!(outcome.state("coupling"), "synchronous", "{what}");
            near(outcome.number(&["gears", "coupling", "final_load_angle"]), preload.asin(), 1e-5);
            let net = TAU * f64::from(u32::try_from(poles).unwrap());
            near(outcome.channel("coupling.phase", "final"), preload.asin() + net, 1e-5);
            if (stretch - 1.0_f64).abs() < 1e-9 {
                let found = outcome.channel("coupling.slip_speed", "max") / swing.frequency();
                same(found, fastest, 1e-7);
            }
        }
    }
}

#[test]
fn never_locks_again_above_the_resynchronisation_torque() {
    // 0.3 of pull-out after a burst, beta 0.1: the limit is 0.127, so it runs on at the mean
    // speed of the running state.
    let swing = Swing {
        beta: 0.1,
        steady: true,
        torque: (0.3, vec![(1.0, 1.5), (6.0, 0.3)]),
        duration: 350.0,
        tolerance: 1e-10,
        ..Swing::workshop()
    };
    let outcome = run_through(&swing.yaml());
    assert_eq!(outcome.state("coupling"), "slipping");
    assert!(outcome.at(&["gears", "coupling", "resynchronised_at"]).is_null());
    let found = mean_slip_speed(&outcome.slip_times("coupling")) / swing.frequency();
    same(found, 2.981284274, 1e-7);
}

/// A coupling with almost no inertia behind it: `e d'' + d' + sin d = T`, time in s.
pub fn creeping(torque: f64, inertia: f64, duration: f64, rows: u32) -> Swing {
    // Units: damping 1 N*m*s/rad, pull-out 1 N*m. The frequency is 1/sqrt(e) and beta is it too.
    let frequency = inertia.sqrt().recip();
    Swing {
        inertia,
        beta: frequency,
        rate: torque / frequency,
        torque: (torque, Vec::new()),
        duration: duration * frequency,
        rows,
        method: "dopri5",
        tolerance: 1e-9,
        ..Swing::default()
    }
}

#[test]
fn strong_damping_slips_at_the_closed_mean_speed() {
    // Without inertia the mean speed is sqrt(T^2 - 1) (Adler; Strogatz 4.3 to 4.6, from
    // memory). A small inertia e leaves the period unchanged to first order, because
    // cos d/(T - sin d) has no mean; the error of order e^2 is 1e-8 here.
    for torque in [1.1_f64, 1.5, 2.0, 5.0] {
        let mean = (torque * torque - 1.0).sqrt();
        let period = TAU / mean;
        let swing = creeping(torque, 1e-4, 3.2 * period, 4);
        let times = run_through(&swing.yaml()).slip_times("coupling");
        assert!(times.len() >= 3, "{times:?}");
        same(times[2] - times[1], period, 2e-7);
    }
}

#[test]
fn inertia_vanishes_from_strongly_damped_slip() {
    // d(1) and d(2) without inertia at T = 1.5 from d = 0 (closed form by the half-angle
    // tangent); the error of the small inertia falls in proportion to it.
    let expected = [(1.0, 0.98743974438566), (2.0, 1.5419627386132)];
    let error = |inertia: f64| -> Vec<f64> {
        let swing = creeping(1.5, inertia, 2.0, 2);
        let series = run_through(&swing.yaml()).series();
        expected.iter().map(|(time, phase)| series.at("coupling.phase", *time) - phase).collect()
    };
    let (coarse, fine) = (error(4e-4), error(1e-4));
    for (coarse, fine) in coarse.iter().zip(&fine) {
        assert!(fine.abs() < 3e-4, "off by {fine}");
        // Richardson: what is left after the part in proportion to the inertia.
        near(fine - (coarse - fine) / 3.0, 0.0, 1e-6);
    }
}

/// End of twice the pull-out torque, and from the first slip to being back short of the peak for
/// good, both without dimension, at damping 2: by `SciPy` (DOP853, rtol 1e-12, events on the phase).
pub const SPELLS: [(f64, f64); 2] = [(8.0, 1.4185597613278667), (13.0, 9.109119127920877)];

/// A coupling pushed to slip; `limit` is the time it may slip, s.
pub fn pushed(torque: Vec<(f64, f64)>, duration: f64, limit: f64) -> String {
    let swing = Swing { beta: 2.0, torque: (2.0, torque), duration, ..Swing::workshop() };
    swing.yaml().replace("pull_out: 40,", &format!("pull_out: 40, slip_time_limit: {limit} s,"))
}

#[test]
fn the_time_it_slips_is_told_against_what_is_allowed() {
    let frequency = Swing::workshop().frequency();
    for (push, expected) in SPELLS {
        let length = expected / frequency;
        for (limit, warned) in [(0.99 * length, true), (1.01 * length, false)] {
            let outcome = run_through(&pushed(vec![(push, 0.0)], 60.0, limit));
            same(outcome.number(&["gears", "coupling", "longest_slipping"]), length, 1e-7);
            same(outcome.number(&["gears", "coupling", "slipping_time"]), length, 1e-7);
            let told = outcome.at(&["warnings"]).to_string().contains("at a stretch");
            assert_eq!(told, warned, "{limit} s, {length} s");
        }
    }
}

#[test]
fn two_stretches_of_slipping_are_told_apart() {
    let frequency = Swing::workshop().frequency();
    let twice = vec![(8.0, 0.0), (40.0, 2.0), (48.0, 0.0)];
    let outcome = run_through(&pushed(twice, 90.0, 0.01));
    let one = SPELLS[0].1 / frequency;
    same(outcome.number(&["gears", "coupling", "longest_slipping"]), one, 1e-7);
    same(outcome.number(&["gears", "coupling", "slipping_time"]), 2.0 * one, 1e-7);
    // Under a torque that goes on it slips to the end.
    let outcome = run_through(&pushed(Vec::new(), 60.0, 0.01));
    let first = outcome.slip_times("coupling")[0];
    let length = 60.0 / frequency - first;
    same(outcome.number(&["gears", "coupling", "longest_slipping"]), length, 1e-12);
    same(outcome.number(&["gears", "coupling", "longest_slipping_from"]), first, 1e-12);
}
