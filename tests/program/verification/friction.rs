//! Dry friction, brakes, linear oscillator, free play.

use super::sheet::Case;
use crate::friction::{SLIP, belt, clutch, rubbed};
use crate::helper::{head, run_well};
use crate::oscillator::oscillator;
use crate::stops::{FAN, OIL, RUB, coast, drum, hard_stop};
use std::f64::consts::{PI, TAU};

const CHAPTER: &str = "Friction, brakes and springs";
const DYNAMICS: &str = "closed form, textbooks of machine dynamics (from memory)";
const VIBRATION: &str = "closed form, textbooks of vibration (from memory)";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, VIBRATION, |sheet| {
            let release = "{ step: { at: 1 s, from: 4 N*m, to: 0 N*m } }";
            let outcome = run_well(&oscillator(4.0, "steady", 0.0, 0.4, release));
            let found = outcome.channel("spring.twist", "final");
            sheet.relative("released oscillator", "rad", [0.50510555926627, found], 1e-7);
            let outcome = run_well(&oscillator(3.0, "as_given", 1.0, 0.4, "0"));
            let found = outcome.channel("spring.twist", "final");
            sheet.relative("struck oscillator", "rad", [-0.084987524716189, found], 1e-7);
            let outcome = run_well(&oscillator(10.0, "as_given", 0.0, 0.4, "4 N*m"));
            let found = outcome.channel("spring.twist", "max");
            sheet.relative("overshoot of a step", "rad", [1.72924761428767, found], 1e-7);
            let found = outcome.channel("spring.twist", "max_time");
            sheet.absolute("time of the overshoot", "s", [1.5787097084991, found], 1e-5);
            for (angle, factor) in [(PI, 1.6366197723676), (TAU, 1.0), (3.0 * PI, 1.2122065907892)]
            {
                let end = 0.5 + angle / 2.0;
                let ramp =
                    format!("{{ ramp: {{ start: 0.5 s, end: {end} s, from: 0 N*m, to: 4 N*m }} }}");
                let outcome = run_well(&oscillator(12.0, "as_given", 0.0, 0.0, &ramp));
                let found = outcome.channel("spring.twist", "max");
                let what = format!("overshoot of a ramp of {:.1} periods", angle / TAU);
                sheet.relative(what, "rad", [factor, found], 1e-7);
            }
        }),
        Case::new(CHAPTER, "closed form; the half swing of a spring", |sheet| {
            let scenario = oscillator(3.0, "as_given", 1.0, 0.0, "0")
                .replace("damping: 0 N*m*s/rad", "backlash: 0.2 rad");
            let outcome = run_well(&scenario);
            let contacts = outcome.times("contact", "spring");
            let gap = outcome.times("gap", "spring")[0];
            sheet.absolute("first contact across the play", "s", [0.1, contacts[0]], 1e-8);
            sheet.absolute("first gap", "s", [0.1 + 0.5 * PI, gap], 1e-8);
            sheet.absolute("second contact", "s", [0.3 + 0.5 * PI, contacts[1]], 1e-8);
        }),
        Case::new(CHAPTER, VIBRATION, |sheet| {
            let outcome = run_well(&rubbed(&head(40.0, 0.1, 1e-9), ""));
            let rest = *outcome.times("stuck", "rub").last().unwrap();
            sheet.absolute("rest of a rubbed oscillator", "s", [26.6469035120, rest], 1e-6);
            let found = outcome.channel("spring.twist", "final");
            sheet.absolute("where it rests", "rad", [0.04, found], 1e-7);
        }),
        Case::new(CHAPTER, VIBRATION, |sheet| {
            let outcome = run_well(&belt(&head(12.0, 0.01, 1e-9)));
            let sliding = outcome.times("sliding", "pad");
            for number in [0, 5, 11] {
                let expected = 1.0 + number as f64 * (SLIP + 0.6);
                let what = format!("stick-slip on a belt, break {}", number + 1);
                sheet.absolute(what, "s", [expected, sliding[number]], 1e-6);
            }
            let found = outcome.channel("spring.twist", "max");
            sheet.absolute("its highest point", "rad", [0.101622776602, found], 1e-8);
        }),
        Case::new(
            CHAPTER,
            "true stick; smoothed by tanh it would creep at vs*artanh(load)",
            |sheet| {
                // A brake that holds 0.5 and 0.9 of its torque for a hundred seconds: 0.55 and 1.47 of
                // the smoothing speed would be its creep.
                for share in [0.5, 0.9] {
                    let scenario = format!(
                        "{}bodies:\n  drum: {{ inertia: 2 kg*m2 }}\n\
                     motors:\n  weight: {{ body: drum, law: {{ prescribed: {{ torque: {} N*m }} }} }}\n\
                     brakes:\n  holding: {{ body: drum, torque: 100 N*m, applied: 1 }}\n",
                        head(100.0, 1.0, 1e-6),
                        100.0 * share,
                    );
                    let outcome = run_well(&scenario);
                    let what = format!("creep of a brake at {share} of its torque");
                    let moved = outcome.channel("drum.angle", "final");
                    sheet.exact(
                        format!("{what}: angle after 100 s"),
                        "0 rad",
                        format!("{} rad", moved.abs()),
                    );
                    let fastest = outcome.channel("drum.speed", "max");
                    sheet.exact(
                        format!("{what}: speed"),
                        "0 rad/s",
                        format!("{} rad/s", fastest.abs()),
                    );
                }
            },
        ),
        Case::new(CHAPTER, DYNAMICS, |sheet| {
            let outcome = run_well(&clutch(&head(3.0, 0.5, 1e-9)));
            let locked = outcome.times("stuck", "clutch")[0];
            sheet.absolute("clutch locks", "s", [2.0, locked], 1e-9);
            let found = outcome.channel("slow.speed", "final");
            sheet.absolute("speed after it", "rad/s", [60.0, found], 1e-8);
            let found = outcome.number(&["energy", "lost"]);
            sheet.relative("heat of the clutch", "J", [13500.0, found], 1e-9);
        }),
        Case::new(CHAPTER, DYNAMICS, |sheet| {
            for (loads, what, time) in [
                (RUB.to_owned(), "stop by dry friction", 30.0),
                (format!("{RUB}{OIL}"), "stop by dry and viscous friction", 12.465156944372),
                (format!("{RUB}{FAN}"), "stop by dry friction and a fan", 16.607230766911),
            ] {
                let outcome = run_well(&coast(35.0, &loads));
                sheet.absolute(what, "s", [time, outcome.times("stuck", "rub")[0]], 1e-6);
            }
            let outcome = run_well(&coast(18.0, &format!("{RUB}{FAN}")));
            let found = outcome.channel("wheel.angle", "final");
            sheet.relative("angle of that stop", "rad", [905.30882574418, found], 1e-7);
            let found = run_well(&coast(14.0, FAN)).series().at("wheel.speed", 5.0);
            sheet.relative("coast against a fan, 5 s", "rad/s", [90.0, found], 1e-8);
        }),
        Case::new(CHAPTER, DYNAMICS, |sheet| {
            let outcome = run_well(&drum());
            let found = outcome.times("stuck", "stop")[0];
            sheet.absolute("brake and weight stop a drum", "s", [8.2673490883942, found], 1e-6);
            let found = outcome.channel("drum.angle", "final") / TAU;
            sheet.relative("turns of that stop", "rev", [103.34186360493, found], 1e-7);
            let found = outcome.number(&["energy", "lost"]);
            sheet.relative("heat of the brake", "J", [519452.86321523, found], 1e-7);
        }),
        Case::new(CHAPTER, DYNAMICS, |sheet| {
            let spring =
                "shafts:\n  joint: { between: [brake_drum, machine], stiffness: 20 kN*m/rad }";
            let found = run_well(&hard_stop(spring, 3.0)).channel("joint.torque", "min");
            sheet.relative("reversal by a hard stop, spring", "N*m", [-990.0, found], 1e-7);
            let rigid = "shafts:\n  joint: { between: [brake_drum, machine], rigid: true }";
            let found = run_well(&hard_stop(rigid, 3.0)).series().at("joint.torque", 2.0);
            sheet.relative("reversal by a hard stop, rigid", "N*m", [-420.0, found], 1e-9);
        }),
    ]
}
