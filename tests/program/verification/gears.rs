//! Ratios, torques and temperature of magnetic gears.

use super::sheet::Case;
use crate::gears::{SIX_RATIOS, benchmark, push, small_gear};
use crate::helper::{Folder, call, run_through, run_well};

const CHAPTER: &str = "Magnetic gears and gearing";
const FIELD: &str = "field modulation (Atallah and Howe 2001, from memory)";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (held, driving, driven, ratio) in SIX_RATIOS {
        cases.push(Case::new(
            CHAPTER,
            "common practice: the six ways to use one gear",
            move |sheet| {
                let outcome = run_well(&small_gear(held, driving, "as_given", "0"));
                let series = outcome.series();
                let speed = |body: &str| series.at(&format!("{body}.speed"), 2.0);
                let what = format!("3 and 15 pole pairs, {held} held, {driving} to {driven}");
                sheet.relative(what, "", [ratio, speed(driving) / speed(driven)], 1e-10);
            },
        ));
    }
    cases.push(Case::new(
        CHAPTER,
        "common practice: pieces are the sum of the pole pairs",
        |sheet| {
            let arguments = ["poles", "--ratio", "5", "--format", "json"];
            let outcome = call(Folder::new(), &arguments, "");
            let choices = outcome.at(&["choices"]);
            let of = |inner: u64, outer: u64| {
                let choices = choices.as_array().unwrap();
                let fits = |choice: &&serde_json::Value| {
                    choice["inner_pole_pairs"] == inner && choice["outer_pole_pairs"] == outer
                };
                choices.iter().find(fits).map(|choice| choice["modulator_pieces"].clone())
            };
            let found =
                of(3, 15).map_or_else(|| "not offered".to_owned(), |pieces| pieces.to_string());
            sheet.exact("pieces of the gear 3/15", 18, found);
        },
    ));
    cases.push(Case::new(CHAPTER, FIELD, |sheet| {
        let scenario = benchmark("inner", "outer", "modulator", &push("inner", 20.0));
        let series = run_through(&scenario).series();
        let torque = |member: &str| series.column(&format!("gear.torque_{member}"));
        let (inner, outer, modulator) = (torque("inner"), torque("outer"), torque("modulator"));
        let mut worst = [0.0_f64; 2];
        for row in 0..inner.len() {
            worst[0] = worst[0].max((inner[row] + outer[row] + modulator[row]).abs());
            worst[1] = worst[1].max((inner[row] * 22.0 - outer[row] * 4.0).abs());
        }
        sheet.absolute("sum of the three torques while slipping", "N*m", [0.0, worst[0]], 1e-12);
        sheet.absolute("22 inner torques less 4 outer torques", "N*m", [0.0, worst[1]], 1e-11);
    }));
    for (celsius, coefficient, factor) in [
        (80.0, -0.12, 0.861184),
        (80.0, -0.11, 0.872356),
        (100.0, -0.12, 0.817216),
        (-20.0, -0.12, 1.098304),
    ] {
        cases.push(Case::new(
            CHAPTER,
            "pull-out as the square of remanence, grade tables of magnets",
            move |sheet| {
                let heat = format!(
                    "    magnet_temperature: {celsius} degC\n    rated_temperature: 20 degC\n    \
                 remanence_coefficient: {coefficient} %/K\n"
                );
                let more = format!("{heat}{}start: steady\n", push("outer", 8.0));
                let outcome = run_well(&benchmark("ground", "outer", "ground", &more));
                let share = outcome.number(&["gears", "gear", "peak_pull_out_share"]);
                let what = format!("pull-out at {celsius} degC with {coefficient} %/K");
                sheet.relative(what, "of rated", [factor, 0.5 / share], 1e-7);
            },
        ));
    }
    cases.push(Case::new(CHAPTER, "Willis's formula, teeth of a planetary set", |sheet| {
        let scenario = format!(
            "{}bodies:\n  sun: {{ inertia: 0.02 kg*m2 }}\n  carrier: {{ inertia: 3 kg*m2 }}\n\
             planetary_gears:\n  stage: {{ sun: sun, carrier: carrier, ring: ground, teeth: {{ sun: 21, ring: 78 }} }}\n\
             motors:\n  push: {{ body: sun, law: {{ prescribed: {{ torque: 10 N*m }} }} }}\n",
            crate::helper::head(1.0, 0.1, 1e-10),
        );
        let outcome = run_through(&scenario);
        let last = |channel: &str| outcome.channel(channel, "final");
        let ratio = 99.0 / 21.0;
        let speed = 10.0 / (0.02 + 3.0 / (ratio * ratio));
        sheet.relative("sun of a planetary set after 1 s", "rad/s", [speed, last("sun.speed")], 1e-9);
        let sum = last("stage.torque_sun") + last("stage.torque_carrier") + last("stage.torque_ring");
        sheet.absolute("sum of its torques", "N*m", [0.0, sum], 1e-9);
    }));
    cases
}
