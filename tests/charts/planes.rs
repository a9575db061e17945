//! Torque over speed, and swing.

use crate::gallery::show;
use crate::pendulum::Run;
use lodeshaft::render::chart::axes::Sheet;
use lodeshaft::render::chart::palette::Side;
use lodeshaft::render::chart::swing::{SwingChart, swing_chart};
use lodeshaft::render::chart::torque_speed::{Characteristic, TorqueSpeed, torque_speed_chart};
use lodeshaft::render::chart::units::Display;
use lodeshaft::results::{Separatrix, Swing};
use std::f64::consts::{FRAC_PI_2, PI, TAU};

/// The reduced pendulum of the test train: phase'' = 444.4 (-25 sin x - 0.094 x') + load.
fn acceleration(state: [f64; 2], pull_out: f64, rest: f64) -> f64 {
    let k = pull_out / 16.0;
    444.4 * (k * rest.sin() - k * state[0].sin() - 24.0 / 256.0 * state[1])
}

/// A branch of the stable manifold of the saddle, backwards in time.
fn branch(saddle: f64, side: f64, pull_out: f64, rest: f64) -> Vec<[f64; 2]> {
    let step = -2e-5;
    let mut state = [saddle + side * 1e-4, -side * 1e-2];
    let mut points = vec![[saddle, 0.0]];
    for turn in 0..40_000 {
        let half = [
            state[0] + step / 2.0 * state[1],
            state[1] + step / 2.0 * acceleration(state, pull_out, rest),
        ];
        state = [state[0] + step * half[1], state[1] + step * acceleration(half, pull_out, rest)];
        if turn % 20 == 0 {
            points.push(state);
        }
        if state[1].abs() > 1500.0 || (state[0] - saddle).abs() > TAU {
            break;
        }
    }
    points
}

fn separatrix(pull_out: f64, rest: f64) -> Separatrix {
    let saddle = PI - rest;
    let mut upper = branch(saddle, -1.0, pull_out, rest);
    upper.retain(|point| point[0] >= -PI);
    upper.reverse();
    let down = branch(saddle, 1.0, pull_out, rest);
    upper.extend(down.iter().filter(|point| point[0] <= PI));
    let lower =
        down.iter().map(|p| [p[0] - TAU, p[1]]).filter(|p| p[0] >= -PI && p[0] <= PI).collect();
    Separatrix { load: "load at the end of the run".to_owned(), saddle, rest, upper, lower }
}

fn swing_input(burst: f64) -> SwingChart {
    let run = Run::of(burst, 400.0);
    let result = run.result();
    let traces = run.traces([0.0, 2.5]);
    let rest = (52.0_f64 / 400.0).asin();
    let path = traces.swings[0].path.iter().copied().filter(|state| state[0] > 0.9).collect();
    SwingChart {
        id: "swing".to_owned(),
        title: "Slip speed over load angle".to_owned(),
        gear: String::new(),
        swing: Swing { gear: "mg".to_owned(), path, separatrix: Some(separatrix(400.0, rest)) },
        peaks: [-FRAC_PI_2, FRAC_PI_2],
        slips: result.gears[0].slip_events.iter().map(|slip| (slip.time, slip.direction)).collect(),
        in_step: true,
        sheet: Sheet::PAGE,
    }
}

#[test]
fn the_swing_has_a_pass_for_each_slip_and_the_last_one() {
    let input = swing_input(900.0);
    let drawing = swing_chart(&input);
    show(&drawing, "swing");
    let svg = drawing.to_inline_svg("figure-3");
    assert_eq!(svg.matches("data-name=\"pass\"").count(), input.slips.len());
    assert_eq!(svg.matches("data-name=\"last\"").count(), 1);
    assert!(drawing.texts().contains(&"tips over") && drawing.texts().contains(&"in step"));
    show(&swing_chart(&swing_input(240.0)), "swing-calm");
}

#[test]
fn torque_over_speed_names_the_operating_point() {
    let omega = PI / 30.0;
    let motor: Vec<[f64; 2]> = (0..=150)
        .map(|place| {
            let slip = 1.0 - f64::from(place) / 150.0;
            let torque = 2.0 * 416.0 / (slip / 0.12 + 0.12 / slip.max(1e-9)) + 215.0 * slip.powi(2);
            [f64::from(place) * 10.0 * omega, torque]
        })
        .collect();
    let load = (0..=150)
        .map(|place| [f64::from(place) * 10.0 * omega, 133.0 * (f64::from(place) / 150.0).powi(2)])
        .collect();
    let path = (0..=294)
        .map(|place| {
            let speed = f64::from(place) * 5.0;
            let wave = 34.0 * (speed / 62.0).sin() * (1.0 - speed / 1700.0);
            [speed * omega, 0.27 * (speed * omega) * 2.5 + wave * (speed / 300.0).min(1.0)]
        })
        .collect();
    let input = TorqueSpeed {
        id: "torque-speed".to_owned(),
        title: "Torque over speed".to_owned(),
        at: "motor shaft".to_owned(),
        motor: Characteristic { label: "Motor".to_owned(), side: Side::Inner, points: motor },
        load: Some(Characteristic {
            label: "Pump load".to_owned(),
            side: Side::Outer,
            points: load,
        }),
        pull_out: Some(272.7),
        operating_point: Some([1470.0 * omega, 128.0]),
        path: Some(Characteristic {
            label: "through the gear, this run".to_owned(),
            side: Side::Modulator,
            points: path,
        }),
        display: Display::default(),
        sheet: Sheet::PAGE,
    };
    let drawing = torque_speed_chart(&input);
    show(&drawing, "torque-speed");
    assert!(drawing.texts().contains(&"1470\u{a0}rpm, 128\u{a0}N·m"), "{:?}", drawing.texts());
    let flat = TorqueSpeed { pull_out: Some(1e6), load: None, path: None, ..input };
    assert!(torque_speed_chart(&flat).texts().iter().any(|text| text.ends_with("above")));
}
