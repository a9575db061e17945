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

/// Checks each study against what is told of it.
fn check(cases: &[(&str, &str)]) {
    let mut wrong = String::new();
    for (study, expected) in cases {
        let found = told(study);
        if found != *expected {
            wrong.push_str(&format!("{study}\n{found}--- not\n{expected}\n"));
        }
    }
    assert!(wrong.is_empty(), "\n{wrong}");
}

#[test]
fn kinds_of_studies() {
    check(&[("{ margn: {} }", ""), ("{}", ""), ("5", ""), ("{ margin: {}, sweep: {} }", "")]);
}

#[test]
fn margins() {
    check(&[
        ("{ margin: {} }", ""),
        ("{ margin: { vary: motors.drive.law.prescribed.torqe, between: [50 N*m, 100 N*m] } }", ""),
        ("{ margin: { vary: motors.drve.law.prescribed.torque, between: [50 N*m, 100 N*m] } }", ""),
        ("{ margin: { vary: bodies.rotor, between: [50, 100] } }", ""),
        ("{ margin: { vary: title, between: [50, 100] } }", ""),
        ("{ margin: { vary: start, between: [50, 100] } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1 kg*m2, 1 kg*m2] } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1 N*m, 2] } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1, 2, 3] } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: 3 } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [-1 kg*m2, 2 kg*m2] } }", ""),
        ("{ margin: { vary: magnetic_couplings.coupling.pole_pairs, between: [1, 4.5] } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1, 2], points: 1 } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1, 2], accuracy: 0 } }", ""),
        ("{ margin: { vary: bodies.rotor.inertia, between: [1, 2], acuracy: 1 % } }", ""),
        (
            "{ margin: { vary: bodies.rotor.inertia, between: [0.1, 0.2], channels: [rotor.sped] } }",
            "",
        ),
        ("{ margin: { vary: bodies.rotor.inertia, between: [0.05, 0.06], at_least: 50 % } }", ""),
    ]);
}

#[test]
fn a_margin_without_requirements() {
    let scenario =
        train(60.0, 100.0, "  it: { margin: { vary: bodies.rotor.inertia, between: [1, 2] } }\n")
            .replace("  no_slip: { of: coupling.slips, at_most: 0 }\n", "");
    assert_eq!(told_of(&scenario), "");
}

#[test]
fn sweeps() {
    check(&[
        ("{ sweep: {} }", ""),
        ("{ sweep: { vary: } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertai: { values: [1] } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { values: [] } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { values: [1, 1] } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { values: [1, -1] } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { from: 1, to: 1, count: 3 } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { from: 1, to: 2 } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: { from: 1, to: 2, count: 1 } } } }", ""),
        ("{ sweep: { vary: { bodies.rotor.inertia: 3 } } }", ""),
        (
            "{ sweep: { vary: { bodies.rotor.inertia: { values: [1] }, duration: { values: [1] }, output_step: { values: [1] } } } }",
            "",
        ),
    ]);
}

#[test]
fn scatter() {
    check(&[
        (
            "{ monte_carlo: { draws: 0, spread: { bodies.rotor.inertia: { normal: { relative: 1 % } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { spread: { bodies.rotor.inertia: { normal: { relative: 1 % } } } } }",
            "",
        ),
        ("{ monte_carlo: { draws: 10 } }", ""),
        ("{ monte_carlo: { draws: 10, spread: {} } }", ""),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { normal: { relative: 30 % } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { uniform: { absolute: 0.06 kg*m2 } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { gaussian: { relative: 3 % } } } } }",
            "",
        ),
        ("{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { normal: {} } } } }", ""),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { normal: { relative: 1 %, absolute: 1 } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: { lognormal: { absolute: 1 } } } } }",
            "",
        ),
        ("{ monte_carlo: { draws: 10, spread: { bodies.rotor.inertia: {} } } }", ""),
        (
            "{ monte_carlo: { draws: 10, spread: { bodies.rotor.speed: { normal: { relative: 1 % } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, spread: { solver.max_step: { normal: { relative: 1 % } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, spread: { magnetic_couplings.coupling.pole_pairs: { uniform: { absolute: 1 } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10.5, seed: -1, spread: { bodies.rotor.inertia: { normal: { relative: -1 % } } } } }",
            "",
        ),
        (
            "{ monte_carlo: { draws: 10, slipping_at_most: 3, spread: { bodies.rotor.inertia: { normal: { relative: 1 % } } } } }",
            "",
        ),
    ]);
}

#[test]
fn load_cases() {
    check(&[
        ("{ load_cases: {} }", ""),
        ("{ load_cases: { cases: {} } }", ""),
        ("{ load_cases: { cases: { Hot: {} } } }", ""),
        ("{ load_cases: { cases: { hot: { changes: { bodies.roter.inertia: 1 } } } } }", ""),
        ("{ load_cases: { cases: { hot: { changes: { bodies.rotor.inertia: -1 } } } } }", ""),
        (
            "{ load_cases: { cases: { hot: { changes: { bodies.rotor.inertia: 3 N*m, studies: 3 } } } } }",
            "",
        ),
        (
            "{ load_cases: { cases: { hot: { requirements: { slow: { of: rotor.sped, at_most: 3 rpm } } } } } }",
            "",
        ),
        ("{ load_cases: { cases: { hot: { requirements: { slow: { of: rotor.speed } } } } } }", ""),
        ("{ load_cases: { cases: { hot: { change: {} } } } }", ""),
    ]);
}

#[test]
fn faults_of_the_file_and_its_studies_are_told_together() {
    let scenario = train(
        60.0,
        100.0,
        "  it: { margin: { vary: bodies.rotor.inertia, between: [1 kg*m2, 1 kg*m2] } }\n",
    )
    .replace("pole_pairs: 4", "pole_pairs: 0");
    assert_eq!(told_of(&scenario), "");
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
