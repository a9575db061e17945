//! The undamped coupling as a pendulum.

use super::sheet::Case;
use crate::helper::run_well;
use crate::pendulum::{
    FROM_TWO_RADIANS, LOADED, OVER_THE_TOP, PERIODS, POLE, from_two_radians, loaded, over_the_top,
    released, separatrix,
};
use crate::swing::Swing;
use std::f64::consts::TAU;

const CHAPTER: &str = "Swings of a magnetic coupling";
const ELLIPTIC: &str = "closed form, Jacobi's elliptic functions (DLMF 19, 22)";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (degrees, ratio) in PERIODS {
        cases.push(Case::new(CHAPTER, ELLIPTIC, move |sheet| {
            let train = Swing::workshop();
            let quarter = train.seconds(0.25 * ratio * TAU);
            let outcome = run_well(&released(degrees, ratio, train).yaml());
            let found = outcome.found("second").unwrap() / 3.0 * 4.0;
            sheet.relative(format!("period from {degrees} deg"), "s", [4.0 * quarter, found], 1e-7);
        }));
    }
    for method in ["dopri5", "dop853"] {
        cases.push(Case::new(CHAPTER, ELLIPTIC, move |sheet| {
            let series = run_well(&from_two_radians(method, 1e-11).yaml()).series();
            for (time, phase, rate) in FROM_TWO_RADIANS {
                let what = format!("swing from 2 rad after {time} s, {method}: phase");
                sheet.relative(what, "rad", [phase, series.at("coupling.phase", time)], 1e-7);
                let what = format!("swing from 2 rad after {time} s, {method}: speed");
                sheet.relative(what, "rad/s", [rate, series.at("rotor.speed", time)], 1e-7);
            }
        }));
    }
    cases.push(Case::new(CHAPTER, ELLIPTIC, |sheet| {
        let swing = over_the_top(Swing::default());
        let outcome = run_well(&swing.yaml());
        let series = outcome.series();
        for (time, phase) in OVER_THE_TOP {
            let found = series.at("coupling.phase", time);
            sheet.relative(format!("slipping on, phase at {time} s"), "rad", [phase, found], 1e-7);
        }
        for (number, time) in outcome.slip_times("coupling").into_iter().enumerate() {
            let expected = POLE * (0.5 + number as f64);
            sheet.absolute(format!("time of slip {}", number + 1), "s", [expected, time], 1e-6);
        }
    }));
    cases.push(Case::new(CHAPTER, "closed form, 4 atan(exp t) - pi", |sheet| {
        let series = run_well(&separatrix().yaml()).series();
        for (time, phase) in [(1.0, 1.731538966479317), (3.0, 2.942608682234385)] {
            let what = format!("creeping up to the top, phase at {time} s");
            sheet.relative(what, "rad", [phase, series.at("coupling.phase", time)], 1e-7);
        }
    }));
    cases.push(Case::new(CHAPTER, "quadrature of the energy integral, 40 digits", |sheet| {
        let outcome = run_well(&loaded().yaml());
        let found = outcome.found("whole").unwrap();
        sheet.relative("period at half load", "s", [LOADED.0, found], 1e-7);
        let found = outcome.channel("coupling.load_angle", "min");
        sheet.relative("turning point at half load", "rad", [LOADED.1, found], 1e-7);
    }));
    cases
}
