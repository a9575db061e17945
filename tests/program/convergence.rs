//! Errors against exact solutions fall at the rate of the method.
//!
//! A method of order p makes an error of about `steps^-p`; with steps chosen by the tolerance the
//! error is about in proportion to it (Hairer, Norsett and Wanner, Solving Ordinary Differential
//! Equations I, II.4; from memory). The exponents are fitted over several decades and held in
//! bands: a method, an interpolant or a search for events that loses an order falls out of them.
//! `cargo test --release --test program convergence -- --nocapture` prints what was found.

use super::friction::{SLIP, belt, clutch, rubbed};
use super::helper::{Outcome, run_well};
use super::oscillator::oscillator;
use super::pendulum::{FROM_TWO_RADIANS, OVER_THE_TOP, POLE, from_two_radians, over_the_top};
use super::slipping::creeping;
use super::swing::Swing;
use std::f64::consts::{PI, TAU};

/// Slope of a straight line through the logarithms, by least squares.
fn exponent(points: &[(f64, f64)]) -> f64 {
    let count = points.len() as f64;
    let logs: Vec<(f64, f64)> = points.iter().map(|(x, y)| (x.ln(), y.ln())).collect();
    let mean_x = logs.iter().map(|(x, _)| x).sum::<f64>() / count;
    let mean_y = logs.iter().map(|(_, y)| y).sum::<f64>() / count;
    let product: f64 = logs.iter().map(|(x, y)| (x - mean_x) * (y - mean_y)).sum();
    let square: f64 = logs.iter().map(|(x, _)| (x - mean_x).powi(2)).sum();
    product / square
}

/// A run's accepted steps and its errors in two figures.
struct Found {
    steps: f64,
    errors: [f64; 2],
}

fn found(outcome: &Outcome, errors: [f64; 2]) -> Found {
    Found { steps: outcome.number(&["solver", "steps"]), errors: errors.map(f64::abs) }
}

/// The swing from 2 rad: error of the phase after 100 and of the speed after 50.
fn swing(method: &'static str, tolerance: f64) -> Found {
    let outcome = run_well(&from_two_radians(method, tolerance).yaml());
    let series = outcome.series();
    let [.., half, whole] = FROM_TWO_RADIANS;
    let phase = series.at("coupling.phase", whole.0) - whole.1;
    found(&outcome, [phase, series.at("rotor.speed", half.0) - half.2])
}

/// Slipping for ever: error of the phase after 10 and of the third slip's time.
fn slips(method: &'static str, tolerance: f64) -> Found {
    let swing = Swing { method, tolerance, ..over_the_top(Swing::default()) };
    let outcome = run_well(&swing.yaml());
    let (time, phase) = OVER_THE_TOP[2];
    let phase = outcome.series().at("coupling.phase", time) - phase;
    found(&outcome, [phase, outcome.slip_times("coupling")[2] - 2.5 * POLE])
}

/// The head of a scenario for a method.
fn head(duration: f64, method: &str, tolerance: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: Convergence\nduration: {duration} s\noutput_step: 0.1 s\n\
         solver: {{ method: {method}, tolerance: {tolerance} }}\n"
    )
}

/// A spring shaken off its own frequency: `-0.8 (sin 3t - 1.5 sin 2t)`; errors of twist and speed.
fn shaken(method: &'static str, tolerance: f64) -> Found {
    let torque = format!(
        "{{ sine: {{ mean: 0 N*m, amplitude: 4 N*m, frequency: {} Hz, phase: 0 deg }} }}",
        3.0 / TAU
    );
    let yaml = oscillator(20.0, "as_given", 0.0, 0.0, &torque);
    let words = format!("method: {method}, tolerance: {tolerance}");
    let yaml = with_solver(&yaml, &words);
    let outcome = run_well(&yaml);
    let (three, two) = (60.0_f64, 40.0_f64);
    let twist = -0.8 * (three.sin() - 1.5 * two.sin());
    let speed = -2.4 * (three.cos() - two.cos());
    found(
        &outcome,
        [
            outcome.channel("spring.twist", "final") - twist,
            outcome.channel("rotor.speed", "final") - speed,
        ],
    )
}

/// Dry friction on a spring: error of the time and the place of rest.
fn rest(method: &'static str, tolerance: f64) -> Found {
    let outcome = run_well(&rubbed(&head(40.0, method, tolerance), ""));
    let first = PI / 2.0 - (0.06_f64 / 1.06).asin();
    let time = outcome.times("stuck", "rub").last().unwrap() - (first + 8.0 * PI);
    found(&outcome, [time, outcome.channel("spring.twist", "final") - 0.04])
}

/// Stick and slip on a belt: errors of the sixth and the twelfth break.
fn breaks(method: &'static str, tolerance: f64) -> Found {
    // A belt so heavy that nothing slows it down to the last digit.
    let scenario = belt(&head(12.0, method, tolerance)).replace("1e10 kg", "1e15 kg");
    let outcome = run_well(&scenario);
    let sliding = outcome.times("sliding", "pad");
    let error = |number: usize| sliding[number] - (1.0 + number as f64 * (SLIP + 0.6));
    found(&outcome, [error(5), error(11)])
}

/// A case.
struct Case {
    name: &'static str,
    measure: fn(&'static str, f64) -> Found,
    /// Words for its two figures.
    figures: [&'static str; 2],
    /// No event cuts the steps short, so that their number tells the order.
    smooth: bool,
}

const CASES: [Case; 5] = [
    Case { name: "swing", measure: swing, figures: ["phase", "speed"], smooth: true },
    Case { name: "slips", measure: slips, figures: ["phase", "time of a slip"], smooth: true },
    Case { name: "shaken", measure: shaken, figures: ["twist", "speed"], smooth: true },
    Case {
        name: "dry friction",
        measure: rest,
        figures: ["time of rest", "place of rest"],
        smooth: false,
    },
    Case {
        name: "stick and slip",
        measure: breaks,
        figures: ["sixth break", "twelfth break"],
        smooth: false,
    },
];

#[test]
fn errors_fall_with_the_tolerance_and_the_steps() {
    // Method, its order, tolerances that neither the largest step nor rounding governs.
    for (method, order, tolerances) in [
        ("dopri5", 5.0, [1e-6, 1e-7, 1e-8, 1e-9, 1e-10]),
        ("dop853", 8.0, [1e-7, 1e-8, 1e-9, 1e-10, 1e-11]),
    ] {
        for Case { name: case, measure, figures, smooth } in CASES {
            let runs: Vec<(f64, Found)> =
                tolerances.iter().map(|t| (*t, measure(method, *t))).collect();
            for (place, figure) in figures.into_iter().enumerate() {
                let by_tolerance: Vec<(f64, f64)> =
                    runs.iter().map(|(t, run)| (*t, run.errors[place])).collect();
                let by_steps: Vec<(f64, f64)> =
                    runs.iter().map(|(_, run)| (run.steps, run.errors[place])).collect();
                let (rate, found) = (exponent(&by_tolerance), -exponent(&by_steps));
                println!(
                    "{method}, {case}, {figure}: tolerance^{rate:.2}, steps^-{found:.2}, {:.1e} at {:e}: {by_tolerance:?}",
                    by_tolerance[4].1, by_tolerance[4].0
                );
                // Events on the way make the few errors of a fit scatter.
                let least = if smooth { 0.75 } else { 0.4 };
                assert!(
                    (least..1.4).contains(&rate),
                    "{method}, {case}, {figure}: {by_tolerance:?}"
                );
                assert!(
                    !smooth || (0.8 * order..1.4 * order).contains(&found),
                    "{method}, {case}, {figure}: {by_steps:?}"
                );
            }
        }
    }
}

/// A scenario with other words for its solver.
fn with_solver(yaml: &str, words: &str) -> String {
    let begin = yaml.find("solver:").unwrap();
    let end = begin + yaml[begin..].find('\n').unwrap();
    format!("{}solver: {{ {words} }}{}", &yaml[..begin], &yaml[end..])
}

#[test]
fn fixed_steps_have_order_four() {
    let scenarios: [(&str, String); 2] = [
        ("swing", Swing { phase: 2.0, ..Swing::default() }.yaml()),
        ("slips", over_the_top(Swing::default()).yaml()),
    ];
    for (case, yaml) in scenarios {
        let errors = [0.02, 0.01, 0.005, 0.0025].map(|step| {
            let outcome = run_well(&with_solver(&yaml, &format!("method: rk4, step: {step}")));
            let phase = outcome.channel("coupling.phase", "final");
            if case == "swing" {
                (step, [(phase - FROM_TWO_RADIANS[2].1).abs(), f64::NAN])
            } else {
                let slip = outcome.slip_times("coupling")[2] - 2.5 * POLE;
                (step, [(phase - OVER_THE_TOP[2].1).abs(), slip.abs()])
            }
        });
        for (place, figure) in ["phase", "time of a slip"].into_iter().enumerate() {
            let points = errors.map(|(step, error)| (step, error[place]));
            if points[0].1.is_nan() {
                continue;
            }
            let order = exponent(&points);
            println!("rk4, {case}, {figure}: step^{order:.2}: {points:?}");
            assert!((3.7..4.4).contains(&order), "{case}, {figure}: {points:?}");
        }
    }
}

#[test]
fn straight_lines_are_exact_at_any_tolerance() {
    // Constant torques: every method integrates them exactly, so the lock is met to rounding.
    for method in ["dopri5", "dop853"] {
        for tolerance in [1e-4, 1e-6, 1e-9] {
            let outcome = run_well(&clutch(&head(3.0, method, tolerance)));
            let error = (outcome.times("stuck", "clutch")[0] - 2.0).abs();
            assert!(error < 1e-9, "{method} at {tolerance:e}: {error:e}");
        }
    }
}

#[test]
fn strongly_damped_slip_is_held_by_stability_not_by_the_tolerance() {
    // Inertia 1e-4: the largest stable step is far below what any of these tolerances asks for;
    // what is left is the inertia's own part, of the order of its square.
    let torque = 1.5_f64;
    let period = TAU / (torque * torque - 1.0).sqrt();
    for tolerance in [1e-4, 1e-6, 1e-8] {
        let swing = Swing { tolerance, ..creeping(torque, 1e-4, 3.2 * period, 4) };
        let times = run_well(&swing.yaml()).slip_times("coupling");
        let error = ((times[2] - times[1]) / period - 1.0).abs();
        println!("strongly damped slip at {tolerance:e}: {error:.1e}");
        assert!(error < 2e-7, "{tolerance:e}: {error:e}");
    }
}
