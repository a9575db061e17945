//! Temperature, losses and heat of magnets.

use super::sheet::Case;
use crate::helper::{head, run_through};
use crate::magnets_heat::{
    LOSSES, ONE_NODE, SLIPS_WARM, TWO_NODES, WARM, heated, locked, slipping,
};
use crate::magnets_temperature::{FACTORS, loaded};
use crate::slipping::{SPELLS, pushed};
use crate::swing::Swing;

const CHAPTER: &str = "Magnets: temperature, losses, heat";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (magnets, factor) in FACTORS {
        let source = "product of the two fields, each with its remanence; grade tables of magnets";
        cases.push(Case::new(CHAPTER, source, move |sheet| {
            let share = run_through(&loaded(magnets)).channel("coupling.pull_out_share", "final");
            sheet.relative(magnets, "of rated", [factor, 0.5 / share], 1e-9);
        }));
    }
    cases.push(Case::new(
        CHAPTER,
        "separation of iron losses after Steinmetz (from memory); closed form",
        |sheet| {
            let outcome = run_through(&locked(&head(0.1, 0.05, 1e-9), 150.0, 0.0, LOSSES));
            let series = outcome.series();
            let at_start = |channel: &str| series.at(channel, 0.0);
            let (dry, eddy) = (at_start("gear.hysteresis_loss"), at_start("gear.eddy_loss"));
            sheet.relative("hysteresis loss at half the speed", "W", [6.5, dry], 1e-10);
            sheet.relative("eddy current loss at half the speed", "W", [5.75, eddy], 1e-10);
        },
    ));
    cases.push(Case::new(CHAPTER, "one thermal node, closed form", |sheet| {
        let outcome = heated(1800.0, 100.0, ONE_NODE);
        let found = outcome.channel("gear.magnet_temperature", "final");
        sheet.absolute("one node after 0.9 time constants", "degC", [43.7372136104, found], 1e-6);
    }));
    cases.push(Case::new(CHAPTER, "two thermal nodes, SciPy's matrix exponential", |sheet| {
        let outcome = heated(600.0, 100.0, TWO_NODES);
        let found =
            |node: &str| outcome.channel(&format!("gear.magnet_temperature_{node}"), "final");
        sheet.absolute("inner of two nodes", "degC", [34.8315375672, found("inner")], 1e-6);
        sheet.absolute("outer of two nodes", "degC", [33.2507186598, found("outer")], 1e-6);
    }));
    cases.push(Case::new(CHAPTER, "SciPy, DOP853 at 1e-12", |sheet| {
        let outcome = slipping(WARM, &head(1.0, 0.1, 1e-10));
        let last = |channel: &str| outcome.channel(channel, "final");
        let [speed, phase, celsius] = SLIPS_WARM;
        let what = "a coupling that slips and weakens itself";
        sheet.relative(format!("{what}: speed"), "rad/s", [speed, last("rotor.speed")], 1e-6);
        sheet.relative(format!("{what}: phase"), "rad", [phase, last("coupling.phase")], 1e-8);
        let found = last("coupling.magnet_temperature");
        sheet.absolute(format!("{what}: temperature"), "degC", [celsius, found], 1e-5);
        let frequency = Swing::workshop().frequency();
        for (push, length) in SPELLS {
            let outcome = run_through(&pushed(vec![(push, 0.0)], 60.0, 1.0));
            let found = outcome.number(&["gears", "coupling", "longest_slipping"]) * frequency;
            let what = format!("time of slipping under a push of {push} periods/2pi");
            sheet.relative(what, "periods/2pi", [length, found], 1e-7);
        }
    }));
    cases
}
