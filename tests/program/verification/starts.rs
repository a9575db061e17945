//! Motors: their curves, run-up times and rotor heat.

use super::sheet::Case;
use crate::helper::{head, run_well};
use crate::starts::{END_AT_95, SYNCHRONOUS, fan, run_up};

const CHAPTER: &str = "Motors and starts";
const DRIVES: &str = "closed form, textbooks on drives (from memory), derived again";

/// Torque of a motor whose body is too heavy to leave its speed.
fn torque_at(law: &str, speed_rpm: f64) -> f64 {
    let scenario = format!(
        "{}bodies:\n  rotor: {{ inertia: 1e15 kg*m2, speed: {speed_rpm} rpm }}\n\
         motors:\n  motor: {{ body: rotor, law: {{ {law} }} }}\n",
        head(1.0, 0.5, 1e-8),
    );
    run_well(&scenario).series().at("motor.torque", 0.0)
}

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, "Kloss's formula (from memory)", |sheet| {
            // The cage motor of Chapman's example 7-5 at half of synchronous speed.
            let law = "induction: { synchronous_speed: 1800 rpm, breakdown_torque: 230.80171322 N*m, breakdown_slip: 0.201411534502, voltage: 1 }";
            let found = torque_at(law, 900.0);
            sheet.relative("cage motor at slip 0.5", "N*m", [159.984410557, found], 1e-11);
            let found = torque_at(law, 1800.0 * (1.0 - 0.201411534502));
            sheet.relative("cage motor at breakdown", "N*m", [230.80171322, found], 1e-12);
            sheet.absolute("at no slip", "N*m", [0.0, torque_at(law, 1800.0)], 1e-9);
        }),
        Case::new(CHAPTER, "Kloss's formula from the rating plate (from memory)", |sheet| {
            // Breakdown 2.5 times rated at slip 0.02: sb = 0.02 (2.5 + sqrt(2.5^2 - 1)).
            let law = "rating_plate: { power: 22 kW, speed: 1470 rpm, synchronous_speed: 1500 rpm, starting_torque: 200 %, pull_up_torque: 160 %, breakdown_torque: 250 %, voltage: 1 }";
            let rated = 22e3 / (0.98 * SYNCHRONOUS);
            for (what, slip, share) in [
                ("rated point", 0.02, 1.0),
                ("breakdown slip", 0.0958257569496, 2.5),
                ("pull-up", 0.8, 1.6),
                ("standstill", 1.0, 2.0),
            ] {
                let found = torque_at(law, 1500.0 * (1.0 - slip));
                sheet.relative(
                    format!("rating plate, {what}"),
                    "N*m",
                    [share * rated, found],
                    1e-9,
                );
            }
        }),
        Case::new(CHAPTER, DRIVES, |sheet| {
            let outcome = run_well(&run_up(4.0, END_AT_95));
            let found = outcome.number(&["motors", "cage", "run_up_time"]);
            sheet.relative("run-up time, unloaded", "s", [2.4291551951083, found], 1e-7);
            let found = outcome.number(&["motors", "cage", "rotor_heat"]);
            sheet.relative("rotor heat of it", "J", [12306.162987608, found], 1e-7);
            let more = "loads:\n  hoist: { body: rotor, law: { friction: { sliding: 30 N*m } } }\n";
            let outcome = run_well(&run_up(7.0, more));
            let found = outcome.number(&["motors", "cage", "run_up_time"]);
            sheet.relative("run-up time, constant load", "s", [5.8423536957252, found], 1e-7);
            let outcome = run_well(&run_up(5.0, "").replace("voltage: 1 ", "voltage: 80 % "));
            let found = outcome.number(&["motors", "cage", "run_up_time"]);
            sheet.relative(
                "run-up time at 80 % voltage",
                "s",
                [2.4291551951083 / 0.64, found],
                1e-7,
            );
            let outcome = run_well(&run_up(40.0, ""));
            let found = outcome.number(&["motors", "cage", "rotor_heat"]);
            sheet.relative("rotor heat of a whole start", "J", [12337.005501362, found], 1e-7);
        }),
        Case::new(CHAPTER, DRIVES, |sheet| {
            let what = "load that a cage motor cannot start";
            // 'slips' stands for standing still.
            sheet.bracket(what, "38.461538461538 N*m".to_owned(), 1e-4, |factor| {
                let friction = 38.461538461538 * factor;
                let more = format!(
                    "loads:\n  hoist: {{ body: rotor, law: {{ friction: {{ sliding: {friction} N*m }} }} }}\n"
                );
                run_well(&run_up(5.0, &more)).channel("rotor.speed", "final") <= 0.0
            });
        }),
        Case::new(CHAPTER, "quadrature", |sheet| {
            let more = "loads:\n  fan: { body: rotor, law: { power_law: { torque: 30 N*m, speed: 1470 rpm, exponent: 2 } } }\n";
            let outcome = run_well(&run_up(4.0, more));
            let found = outcome.number(&["motors", "cage", "run_up_time"]);
            sheet.relative("run-up time, fan", "s", [2.7500349036476, found], 1e-7);
        }),
        Case::new(CHAPTER, "closed form, hyperbolic tangent", |sheet| {
            let outcome = run_well(&fan("as_given", 4.0));
            let found = outcome.series().at("wheel.speed", 2.0);
            sheet.relative(
                "constant torque against a fan, 2 s",
                "rad/s",
                [106.52963247114, found],
                1e-7,
            );
            let found = outcome.found("rated").unwrap();
            sheet.relative("time to rated speed", "s", [3.6751973105667, found], 1e-7);
            let found =
                run_well(&fan("steady", 1.0).replace(
                    "requirements:\n  rated: { of: wheel.speed, reaches: 1500 rpm }\n",
                    "",
                ))
                .series()
                .at("wheel.speed", 1.0);
            sheet.relative("balance of the two", "rad/s", [192.38247452428, found], 1e-8);
        }),
        Case::new(CHAPTER, "affinity laws of fans and pumps (from memory)", |sheet| {
            let scenario = format!(
                "{}bodies:\n  wheel: {{ inertia: 1e12 kg*m2, speed: 1200 rpm }}\n\
                 loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ power: 20 kW, speed: 1500 rpm, exponent: 2 }} }} }}\n",
                head(1.0, 0.5, 1e-8),
            );
            let series = run_well(&scenario).series();
            let found = -series.at("fan.power", 0.0) / 20e3;
            sheet.relative("power of a fan at 80 % speed", "of rated", [0.512, found], 1e-12);
        }),
        Case::new(CHAPTER, "handbook, time = Wk2 dN/(307.239532 T), exact constant", |sheet| {
            // 100 lb.ft2 to 1750 rpm by 150 lbf.ft; handbooks print 307 or 308 for the constant.
            let scenario = format!(
                "{}bodies:\n  wheel: {{ inertia: 100 lb*ft2 }}\n\
                 motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 150 lbf*ft }} }} }}\n\
                 requirements:\n  there: {{ of: wheel.speed, reaches: 1750 rpm }}\n",
                head(5.0, 0.5, 1e-9),
            );
            let found = run_well(&scenario).found("there").unwrap();
            sheet.relative("time to accelerate, inch units", "s", [3.797254406, found], 1e-9);
        }),
    ]
}
