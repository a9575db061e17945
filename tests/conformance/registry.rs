//! The list of parts, taken from the program, against the trains.

use super::descriptions::{all_keys, walk_file};
use super::program::none;
use super::trees::trains;
use lodeshaft::analysis::study::spec;
use lodeshaft::quantity::Dimension;
use lodeshaft::scenario::describe::root;
use lodeshaft::signal::read::describe_forms;
use lodeshaft::tree::Shape;
use std::collections::BTreeSet;

/// Keys that stand in the description for a message of their own and cannot be used.
const NEVER_USED: [&str; 1] = ["studies.NAME.monte_carlo.spread.NAME.lognormal.absolute"];

/// Every section, law, form of signal and kind of study.
fn entries() -> BTreeSet<String> {
    let mut entries = BTreeSet::new();
    for section in root() {
        let Shape::Section(inside) = &section.shape else { continue };
        let laws = inside.iter().find_map(|field| match &field.shape {
            Shape::Choice(laws) if field.key == "law" => Some(laws),
            _ => None,
        });
        match laws {
            Some(laws) => {
                entries.extend(laws.iter().map(|law| format!("{}.{}", section.key, law.key)));
            }
            None => {
                entries.insert(section.key.to_owned());
            }
        }
    }
    let forms = describe_forms(Dimension::Torque);
    entries.extend(forms.iter().map(|form| format!("signals.{}", form.key)));
    entries.extend(spec::describe().iter().map(|study| format!("studies.{}", study.key)));
    entries
}

/// The key of the file that an entry stands for.
fn key_of(entry: &str) -> String {
    match entry.split_once('.') {
        Some(("signals", form)) => format!("SIGNAL.{form}"),
        Some(("studies", kind)) => format!("studies.NAME.{kind}"),
        Some((section, law)) => format!("{section}.NAME.law.{law}"),
        None => entry.to_owned(),
    }
}

#[test]
fn every_part_has_a_train_that_shows_it() {
    let entries = entries();
    let mut wrong = Vec::new();
    let trains = trains();
    for entry in &entries {
        if !trains.iter().any(|train| train.entry() == entry) {
            wrong
                .push(format!("{entry} has no train: write tests/conformance/trains/{entry}.yaml"));
        }
    }
    for train in &trains {
        let entry = train.entry();
        if !entries.contains(entry) {
            wrong.push(format!("{}.yaml is called after no part of the program", train.name));
            continue;
        }
        let mut shown = false;
        walk_file(&train.tree, &mut |met| shown |= met.generic == key_of(entry));
        if !shown {
            wrong.push(format!("{}.yaml does not hold {}", train.name, key_of(entry)));
        }
    }
    none(&wrong);
}

#[test]
fn every_key_stands_in_some_train() {
    let mut used = BTreeSet::new();
    for train in trains() {
        walk_file(&train.tree, &mut |met| {
            used.insert(met.generic.clone());
        });
    }
    let unused = all_keys()
        .into_iter()
        .filter(|key| !used.contains(key) && !NEVER_USED.contains(&key.as_str()))
        .map(|key| format!("{key} stands in no train of tests/conformance/trains"))
        .collect::<Vec<_>>();
    none(&unused);
}
