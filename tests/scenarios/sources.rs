//! Every scenario says whose figures it stands on.

use crate::runner::{all, path_of};
use lodeshaft::scenario::{Loaded, load};
use lodeshaft::tree::Node;

/// Sections whose things carry figures.
const WITH_FIGURES: [&str; 12] = [
    "bodies",
    "shafts",
    "magnetic_gears",
    "magnetic_couplings",
    "gear_pairs",
    "planetary_gears",
    "motors",
    "loads",
    "brakes",
    "overrunning_clutches",
    "torque_limiters",
    "fluid_couplings",
];

fn loaded(stem: &str) -> Loaded {
    load(&path_of(stem), &[]).unwrap_or_else(|fault| panic!("{}", fault.render()))
}

#[test]
fn there_are_at_least_ten() {
    assert!(all().len() >= 10, "{:?}", all());
}

#[test]
fn each_says_that_it_is_invented_and_asks_a_question() {
    for stem in all() {
        let about = loaded(&stem).scenario.about;
        for words in ["our own invention", "Question: ", "no real "] {
            assert!(about.contains(words), "{stem}: no `{words}` in\n{about}");
        }
    }
}

#[test]
fn each_figure_has_a_source() {
    for stem in all() {
        let loaded = loaded(&stem);
        for section in WITH_FIGURES {
            let Some(Node::Map(things)) = loaded.node.get(section) else { continue };
            for (name, thing) in things {
                assert!(thing.get("source").is_some(), "{stem}: {section}.{name} has no source");
            }
        }
    }
}

#[test]
fn each_is_judged_by_its_slips_and_its_speed_of_recovery() {
    for stem in all() {
        let scenario = loaded(&stem).scenario;
        assert!(scenario.requirements.len() >= 3, "{stem}");
        assert!(scenario.duration > 0.0 && !scenario.title.is_empty(), "{stem}");
    }
}
