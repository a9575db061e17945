//! Free swings of an undamped magnetic coupling: it is a pendulum, with exact solutions.
//!
//! Closed forms: Jacobi's elliptic functions, DLMF chapters 19 and 22 (dlmf.nist.gov), worked
//! out with 40 digits; modulus k = sin(amplitude/2).

use super::helper::{near, run_well, same};
use super::swing::Swing;
use std::f64::consts::{PI, TAU};

/// Period over the period of small swings, (2/pi) K(k), DLMF 22.19(i): amplitude in degrees, ratio.
pub const PERIODS: [(f64, f64); 8] = [
    (10.0, 1.001907188143217),
    (30.0, 1.017408797595956),
    (60.0, 1.073182007149364),
    (90.0, 1.180340599016096),
    (120.0, 1.37288050061835),
    (150.0, 1.762203729503756),
    (170.0, 2.439362719673884),
    (179.0, 3.901065160389086),
];

/// A swing from rest, with its passages through zero and its turning point as requirements.
pub fn released(degrees: f64, ratio: f64, train: Swing) -> Swing {
    let period = ratio * TAU;
    let quarter = train.seconds(0.25 * period);
    let half = train.seconds(0.5 * period);
    Swing {
        phase: degrees.to_radians(),
        duration: 0.9 * period,
        tolerance: 1e-11,
        more: format!(
            "requirements:\n  first: {{ of: coupling.load_angle, reaches: 0, signed: true }}\n  \
             half: {{ of: rotor.speed, reaches: 0 rad/s, after: {}, signed: true }}\n  \
             second: {{ of: coupling.load_angle, reaches: 0, after: {half}, signed: true }}",
            0.5 * quarter,
        ),
        ..train
    }
}

#[test]
fn period_grows_with_the_amplitude() {
    for (degrees, ratio) in PERIODS {
        for train in [Swing::default(), Swing::workshop()] {
            let quarter = train.seconds(0.25 * ratio * TAU);
            let swing = released(degrees, ratio, train);
            let outcome = run_well(&swing.yaml());
            // 179 degrees starts 1 degree from the unstable point, which multiplies errors.
            same(outcome.found("first").unwrap(), quarter, 1e-7);
            same(outcome.found("half").unwrap(), 2.0 * quarter, 1e-7);
            same(outcome.found("second").unwrap(), 3.0 * quarter, 1e-7);
            same(outcome.channel("coupling.load_angle", "min"), -degrees.to_radians(), 1e-7);
        }
    }
}

/// The swing from 2 rad, undamped.
pub fn from_two_radians(method: &'static str, tolerance: f64) -> Swing {
    Swing { phase: 2.0, duration: 100.0, rows: 100, method, tolerance, ..Swing::default() }
}

/// d = 2 asin(k sn(K - t)), d' = -2 k cn(K - t) from rest at 2 rad: time, phase, rate.
pub const FROM_TWO_RADIANS: [(f64, f64, f64); 5] = [
    (1.0, 1.532727506038253, -0.9531069854513636),
    (5.0, -1.684124436566809, 0.7785385729469985),
    (10.0, 0.7131481806013794, -1.531308504135835),
    (50.0, 1.995585828898159, 0.08964190620764684),
    (100.0, 1.982325653157031, 0.1796407425909402),
];

#[test]
fn swing_follows_the_elliptic_functions() {
    for (method, tolerance) in [("dop853", 1e-11), ("dopri5", 1e-11)] {
        let swing = from_two_radians(method, tolerance);
        let series = run_well(&swing.yaml()).series();
        for (time, phase, rate) in FROM_TWO_RADIANS {
            same(series.at("coupling.phase", time), phase, 1e-7);
            same(series.at("rotor.speed", time), rate, 1e-7);
            same(series.at("coupling.slip_speed", time), rate, 1e-7);
            near(series.at("coupling.load_angle", time), phase, 1e-7);
            // The rotor's angle counts from zero, the phase from the load angle at the start.
            near(series.at("rotor.angle", time), phase - 2.0, 1e-7);
            near(series.at("coupling.torque_a", time), -phase.sin(), 1e-7);
            near(series.at("coupling.torque_b", time), phase.sin(), 1e-7);
        }
    }
}

#[test]
fn error_falls_with_the_tolerance() {
    for method in ["dopri5", "dop853"] {
        let mut errors = Vec::new();
        for tolerance in [1e-5, 1e-7, 1e-9] {
            let swing = Swing { phase: 2.0, method, tolerance, ..Swing::default() };
            let outcome = run_well(&swing.yaml());
            let phase = outcome.channel("coupling.phase", "final");
            errors.push((phase - FROM_TWO_RADIANS[2].1).abs());
        }
        assert!(errors[1] < 0.1 * errors[0] && errors[2] < 0.1 * errors[1], "{method}: {errors:?}");
        assert!(errors[2] < 1e-6, "{method}: {errors:?}");
    }
}

#[test]
fn fixed_steps_make_the_error_of_the_classical_method() {
    // Error of the classical Runge-Kutta method for this swing at t = 10, worked out
    // independently with a ten-line program: step, numerical minus exact phase.
    let errors = [(0.1, 2.0524891e-6), (0.05, 2.2922919e-7), (0.025, 1.7478362e-8)];
    for (step, error) in errors {
        let swing = Swing { phase: 2.0, ..Swing::default() };
        let yaml = swing.yaml().replace(
            "method: dop853, tolerance: 0.000000001",
            &format!("method: rk4, step: {step}"),
        );
        assert!(yaml.contains("rk4"), "{yaml}");
        let outcome = run_well(&yaml);
        let found = outcome.channel("coupling.phase", "final") - FROM_TWO_RADIANS[2].1;
        same(found, error, 1e-4);
    }
}

/// Time of one pole at rate 2.5 from zero: 2 K(0.8)/1.25.
pub const POLE: f64 = 3.192484444263567;

/// d = 2 am(1.25 t, k = 0.8): time, phase.
pub const OVER_THE_TOP: [(f64, f64); 3] =
    [(1.0, 2.195561464249909), (5.0, 9.744038901005756), (10.0, 19.87640094701566)];

/// An undamped rotor that slips for ever.
pub fn over_the_top(train: Swing) -> Swing {
    Swing { rate: 2.5, tolerance: 1e-11, rows: 20, ..train }
}

#[test]
fn slips_over_the_top_at_exact_times() {
    // d = 2 am(1.25 t, k = 0.8) from d = 0 at rate 2.5: 3.192484444263567 a pole, so odd
    // multiples of pi are crossed at half of it and then once a pole; there the rate is
    // sqrt(2.5^2 - 4) = 1.5 (energy).
    for train in [Swing::default(), Swing::workshop()] {
        let swing = over_the_top(train);
        let outcome = run_well(&swing.yaml());
        let series = outcome.series();
        for (time, phase) in OVER_THE_TOP {
            same(series.at("coupling.phase", swing.seconds(time)), phase, 1e-7);
        }
        same(
            series.at("coupling.slip_speed", swing.seconds(10.0)),
            2.298921936358899 * swing.frequency(),
            1e-7,
        );
        assert_eq!(outcome.slips("coupling"), 3);
        for (number, time) in outcome.slip_times("coupling").into_iter().enumerate() {
            let expected = POLE * (0.5 + f64::from(u32::try_from(number).unwrap()));
            near(time, swing.seconds(expected), 1e-6);
            same(time, swing.seconds(expected), 1e-7);
            let slip = &outcome.at(&["gears", "coupling", "slip_events"])[number];
            assert_eq!(slip["direction"], 1);
            same(slip["slip_speed"].as_f64().unwrap(), 1.5 * swing.frequency(), 1e-7);
        }
        assert_eq!(outcome.state("coupling"), "slipping");
        let counted = series.column("coupling.slips");
        let crossings = [0.0, 1.0, 2.0, 3.0];
        assert!(counted.iter().all(|count| crossings.contains(count)), "{counted:?}");
        near(outcome.number(&["gears", "coupling", "peak_load_angle"]), PI, 1e-9);
        near(outcome.number(&["gears", "coupling", "peak_pull_out_share"]), 1.0, 1e-9);
    }
}

/// A kick that just reaches the top.
pub fn separatrix() -> Swing {
    Swing { rate: 2.0, tolerance: 1e-12, duration: 4.0, rows: 4, ..Swing::default() }
}

#[test]
fn creeps_up_the_separatrix() {
    // d = 4 atan(exp t) - pi, d' = 2 sech t: the motion that just reaches the top.
    let swing = separatrix();
    let outcome = run_well(&swing.yaml());
    let series = outcome.series();
    same(series.at("coupling.phase", 1.0), 1.731538966479317, 1e-7);
    same(series.at("coupling.phase", 3.0), 2.942608682234385, 1e-7);
    same(series.at("rotor.speed", 3.0), 0.1986558548388664, 1e-7);
    assert_eq!(outcome.slips("coupling"), 0);
}

#[test]
fn loaded_swing_is_longer_and_lopsided() {
    // Half the pull-out torque, released 0.8 rad beyond the stable point asin 0.5:
    // period and other turning point by quadrature with 40 digits.
    let (period, turning) = LOADED;
    let outcome = run_well(&loaded().yaml());
    same(outcome.found("half").unwrap(), 0.5 * period, 1e-7);
    same(outcome.found("whole").unwrap(), period, 1e-7);
    same(outcome.channel("coupling.load_angle", "min"), turning, 1e-7);
    // A turning point is flat: its place in time is known to the root of the tolerance.
    near(outcome.channel("coupling.load_angle", "min_time"), 0.5 * period, 1e-5);
}

/// Period and other turning point of the loaded swing.
pub const LOADED: (f64, f64) = (7.155781877008632, -0.1611217809775707);

/// Half the pull-out torque, released 0.8 rad beyond the stable point.
pub fn loaded() -> Swing {
    Swing {
        phase: 0.5_f64.asin() + 0.8,
        torque: (0.5, Vec::new()),
        tolerance: 1e-11,
        more: "requirements:\n  half: { of: rotor.speed, reaches: 0 rad/s, after: 1, signed: true }\n  \
               whole: { of: rotor.speed, reaches: 0 rad/s, after: 5, signed: true }"
            .to_owned(),
        ..Swing::default()
    }
}
