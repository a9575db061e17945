//! Slipping on, falling back into step, counting poles.

use super::sheet::Case;
use crate::helper::run_through;
use crate::slipping::{
    BURSTS, LOCKS_AGAIN, RUNNING, burst, creeping, mean_slip_speed, running, spinning,
    weakly_damped,
};
use std::f64::consts::TAU;

const CHAPTER: &str = "Slipping and falling back into step";
const ADLER: &str = "closed form, Adler's equation (Strogatz 4.3 to 4.6, from memory)";
const SHOOTING: &str = "homoclinic orbit by shooting, 12 digits";
const INDEPENDENT: &str = "independent integration at 1e-12";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for torque in [1.1_f64, 1.5, 2.0, 5.0] {
        cases.push(Case::new(CHAPTER, ADLER, move |sheet| {
            let mean = (torque * torque - 1.0).sqrt();
            let period = TAU / mean;
            let swing = creeping(torque, 1e-4, 3.2 * period, 4);
            let times = run_through(&swing.yaml()).slip_times("coupling");
            let what = format!("mean slip speed, damping only, {torque} of pull-out");
            sheet.relative(what, "rad/s", [mean, TAU / (times[2] - times[1])], 2e-7);
        }));
    }
    for (torque, beta, mean) in RUNNING {
        cases.push(Case::new(CHAPTER, INDEPENDENT, move |sheet| {
            let swing = running(torque, beta, mean);
            let times = run_through(&swing.yaml()).slip_times("coupling");
            let found = mean_slip_speed(&times) / swing.frequency();
            let what = format!("mean slip speed, torque {torque}, damping {beta}");
            sheet.relative(what, "of the frequency", [mean, found], 1e-7);
        }));
    }
    for (beta, torque) in LOCKS_AGAIN {
        cases.push(Case::new(CHAPTER, SHOOTING, move |sheet| {
            let what = format!("torque below which it locks again, damping {beta}");
            let value = format!("{torque:.12} of pull-out");
            sheet.bracket(what, value, 1e-4, |factor| {
                let outcome = run_through(&spinning(beta, torque * factor).yaml());
                outcome.state("coupling") == "slipping"
            });
        }));
    }
    cases.push(Case::new(CHAPTER, SHOOTING, |sheet| {
        let what = "load below which a gear of 5 kN*m locks again";
        sheet.bracket(what, "965.627415 N*m".to_owned(), 1e-4, |factor| {
            run_through(&weakly_damped(965.627415 * factor)).state("gear") == "slipping"
        });
    }));
    for (preload, overload, time, beta, poles, fastest) in BURSTS {
        cases.push(Case::new(CHAPTER, INDEPENDENT, move |sheet| {
            let swing = burst(preload, overload, time, beta);
            let outcome = run_through(&swing.yaml());
            let what = format!("overload {overload} of pull-out for {time}");
            sheet.exact(format!("{what}: poles lost"), poles, outcome.slips("coupling"));
            sheet.exact(format!("{what}: state"), "synchronous", outcome.state("coupling"));
            let found = outcome.channel("coupling.slip_speed", "max") / swing.frequency();
            let what = format!("{what}: largest slip speed");
            sheet.relative(what, "of the frequency", [fastest, found], 1e-7);
        }));
    }
    cases
}
