//! Critical steps, kicks and pulses: the outcome must differ just below and just above.

use super::sheet::Case;
use crate::equal_area::{
    CLEARINGS, DAMPED_STEPS, KICKS, PULSES, STEPS, clearing, damped_step, free_pair, jam, kick,
    pulse, step,
};
use crate::gears::{BENCHMARK_STEPS, benchmark, push};
use crate::helper::{run_through, run_well};
use crate::stops::hard_stop;
use crate::swing::Swing;

const CHAPTER: &str = "Critical steps, kicks, pulses and stops";
const EQUAL_AREAS: &str = "closed form, equal areas (textbooks of power-system stability)";
const INDEPENDENT: &str = "independent integration at 1e-11, bisected";

fn slips(swing: &Swing) -> bool {
    run_through(&swing.yaml()).slips("coupling") > 0
}

fn gear_slips(scenario: &str) -> bool {
    run_through(scenario).slips("gear") > 0
}

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (preload, critical) in STEPS {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let what = format!("step of torque from {preload:.3} of pull-out");
            let value = format!("{critical:.12} of pull-out");
            sheet.bracket(what, value, 1e-4, |factor| slips(&step(preload, critical * factor)));
        }));
    }
    for (beta, critical) in DAMPED_STEPS {
        cases.push(Case::new(CHAPTER, INDEPENDENT, move |sheet| {
            let what = format!("step from rest with damping {beta}");
            let value = format!("{critical:.12} of pull-out");
            sheet.bracket(what, value, 1e-5, |factor| slips(&damped_step(beta, critical * factor)));
        }));
    }
    cases.push(Case::new(CHAPTER, EQUAL_AREAS, |sheet| {
        let critical = 0.7246113537767085 * 4.0 / 3.0;
        let value = format!("{critical:.12} of pull-out");
        sheet.bracket("step on one of two free bodies", value, 1e-4, |factor| {
            run_through(&free_pair(critical * factor, 1e-10)).slips("coupling") > 0
        });
        let outcome = run_well(&free_pair(critical * 0.9999, 1e-10));
        let peak = outcome.number(&["gears", "coupling", "peak_load_angle"]);
        sheet.relative("its turning point just below", "rad", [2.30900062872, peak], 1e-7);
    }));
    for (torque, critical) in KICKS {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let value = format!("{critical:.12} of the frequency");
            sheet.bracket(format!("kick at {torque} of pull-out"), value, 1e-4, |factor| {
                slips(&kick(torque, critical * factor, Swing::workshop()))
            });
        }));
    }
    for (torque, critical) in CLEARINGS {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let what = format!("time without magnets at {torque} of pull-out");
            let value = format!("{critical:.12} over the frequency");
            sheet.bracket(what, value, 1e-4, |factor| {
                slips(&clearing(torque, critical * factor, Swing::workshop()))
            });
        }));
    }
    for (preload, peak, time) in PULSES {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let what = format!("length of a pulse from {preload} to {peak} of pull-out");
            let value = format!("{time:.12} over the frequency");
            sheet.bracket(what, value, 1e-4, |factor| slips(&pulse(preload, peak, time * factor)));
        }));
    }
    for (rpm, degrees, torque, load) in [
        (1287.6268889148, 0.0, 0.0, "unloaded"),
        (753.48359637845, 30.0, 0.5 * 5000.0 * 4.0 / 22.0, "at half load"),
    ] {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let value = format!("{rpm} rpm");
            sheet.bracket(format!("speed of a jam, {load}"), value, 1e-4, |factor| {
                gear_slips(&jam(rpm * factor, degrees, torque))
            });
        }));
    }
    for (inner, outer, modulator, driven, critical) in BENCHMARK_STEPS {
        cases.push(Case::new(CHAPTER, EQUAL_AREAS, move |sheet| {
            let free = [inner, outer, modulator].iter().filter(|name| **name != "ground").count();
            let what = format!("step on the {driven} rotor of a gear with {free} free members");
            sheet.bracket(what, format!("{critical:.10} N*m"), 1e-4, |factor| {
                gear_slips(&benchmark(inner, outer, modulator, &push(driven, critical * factor)))
            });
        }));
    }
    cases.push(Case::new(CHAPTER, EQUAL_AREAS, |sheet| {
        let critical = 646.7429053059282;
        let value = format!("{critical:.9} N*m");
        sheet.bracket("pull-out that survives a hard stop", value, 1e-4, |factor| {
            let joint = format!(
                "magnetic_couplings:\n  joint: {{ between: [brake_drum, machine], pole_pairs: 8, pull_out: {} N*m }}",
                critical * factor
            );
            run_through(&hard_stop(&joint, 3.0)).slips("joint") > 0
        });
    }));
    cases
}
