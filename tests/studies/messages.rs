//! What is wrong with a study is told before anything runs, with its place in the file.

use super::helper::{Folder, train};
use lodeshaft::analysis::study;
use lodeshaft::scenario::load_text;
use std::path::Path;

/// What a file with this study is told; the study stands on line 13.
fn told(study: &str) -> String {
    told_of(&train(60.0, 100.0, &format!("  it: {study}\n")))
}

fn told_of(scenario: &str) -> String {
    match study::plan(load_text("case.yaml", Path::new("."), scenario, &[])) {
        Ok(plan) => plan.loaded.source.render(&plan.loaded.warnings),
        Err(failure) => failure.render(),
    }
}

/// Each study with what is told of it: a line of the study, then the words, then an empty line.
const MESSAGES: &str = include_str!("messages.txt");

#[test]
fn each_fault_of_a_study_is_told_in_the_words_beside_it() {
    let blocks: Vec<(&str, &str)> = MESSAGES
        .trim_end()
        .split("\n\n")
        .filter(|block| !block.starts_with("# "))
        .map(|block| block.split_once('\n').expect("words follow the study"))
        .collect();
    assert!(blocks.len() > 50, "only {} studies were found", blocks.len());
    let mut wrong = String::new();
    for (study, expected) in blocks {
        let found = told(study);
        if found.trim_end() != expected {
            wrong.push_str(&format!("{study}\n{found}\n"));
        }
    }
    assert!(wrong.is_empty(), "told instead of what is expected:\n{wrong}");
}

#[test]
fn a_margin_without_requirements() {
    let scenario =
        train(60.0, 100.0, "  it: { margin: { vary: bodies.rotor.inertia, between: [1, 2] } }\n")
            .replace("  no_slip: { of: coupling.slips, at_most: 0 }\n", "");
    assert_eq!(
        told_of(&scenario),
        concat!(
            "error: a margin needs a requirement that can fail\n",
            "  --> case.yaml:12:9  (studies.it.margin)\n",
            "  hint: for example requirements: { no_slip: { of: gear.slips, at_most: 0 } }\n",
        )
    );
}

#[test]
fn faults_of_the_file_and_its_studies_are_told_together() {
    let scenario = train(
        60.0,
        100.0,
        "  it: { margin: { vary: bodies.rotor.inertia, between: [1 kg*m2, 1 kg*m2] } }\n",
    )
    .replace("pole_pairs: 4", "pole_pairs: 0");
    assert_eq!(
        told_of(&scenario),
        concat!(
            "error: `pole_pairs` must be a whole number from 1 to 10000\n",
            "  --> case.yaml:7:53  (magnetic_couplings.coupling.pole_pairs)\n",
            "error: the range is empty: both ends are 1 kg*m2\n",
            "  --> case.yaml:13:47  (studies.it.margin.between)\n",
        )
    );
}

#[test]
fn every_command_refuses_a_file_with_a_faulty_study() {
    let scenario = train(60.0, 100.0, "  it: { margin: { vary: nowhere, between: [1, 2] } }\n");
    let folder = Folder::new(&scenario);
    for command in ["check", "run", "study"] {
        let output = folder.call(&[command, "case.yaml", "--out", "out"]);
        let told = String::from_utf8_lossy(&output.stderr).into_owned();
        assert_eq!(output.status.code(), Some(2), "{command}: {told}");
        assert!(told.contains("case.yaml:13:25  (studies.it.margin.vary)"), "{command}: {told}");
        assert!(!folder.has("out"), "{command}");
    }
}

#[test]
fn unknown_studies_and_files_without_studies_are_told() {
    let folder = Folder::new(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: bodies.rotor.inertia, between: [1, 2] } }\n",
    ));
    let output = folder.call(&["study", "case.yaml", "rom", "--out", "out"]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(
        String::from_utf8_lossy(&output.stderr),
        "error: `case.yaml` has no study `rom`\n  hint: did you mean `room`?\n"
    );
    let folder = Folder::new(&train(60.0, 100.0, ""));
    let output = folder.call(&["study", "case.yaml"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        String::from_utf8_lossy(&output.stderr).starts_with("error: `case.yaml` has no studies\n")
    );
}

#[test]
fn keys_of_studies_are_set_from_the_command_line() {
    let folder = Folder::new(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 70 N*m] } }\n",
    ));
    // `points` is absent in the file.
    let (status, answers, told) = folder.study(&["--set", "studies.room.margin.points=3"]);
    assert_eq!(status, Some(0), "{told}");
    assert_eq!(answers["studies"]["room"]["runs"], 3);
    let set = "studies.room.margin.pionts=3";
    let output = folder.call(&["study", "case.yaml", "--set", set]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(
        String::from_utf8_lossy(&output.stderr),
        concat!(
            "error: `pionts` is not a key of this map\n",
            "  --> --set studies.room.margin.pionts=3  (studies.room.margin.pionts)\n",
            "  hint: did you mean `points`?\n",
        )
    );
    let output = folder.call(&["study", "case.yaml", "--set", "studies.rom.margin.points=3"]);
    assert_eq!(
        String::from_utf8_lossy(&output.stderr),
        concat!(
            "error: `studies` has no `rom`\n",
            "  --> --set studies.rom.margin.points=3  (studies.rom.margin.points)\n",
            "  hint: did you mean `room`?\n",
        )
    );
}
