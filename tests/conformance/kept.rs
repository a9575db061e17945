//! The same file gives the same bytes, run after run, and for studies on one thread or more.

use super::program::{call, none, run};
use super::trees::trains;

#[test]
fn every_train_gives_the_same_bytes_twice() {
    let mut wrong = Vec::new();
    for train in trains() {
        let (first, second) = (run(&train.tree), run(&train.tree));
        if first.stdout != second.stdout || first.files() != second.files() {
            wrong.push(format!("{}: two runs differ", train.name));
        }
    }
    none(&wrong);
}

#[test]
fn every_study_answers_and_does_not_depend_on_the_threads() {
    let mut wrong = Vec::new();
    for train in trains().iter().filter(|train| train.is_study()) {
        let ask = |threads: &str| {
            let arguments =
                ["study", "case.yaml", "--out", "out", "--no-charts", "--format", "json"];
            call(&train.tree, &[&arguments[..], &["--threads", threads]].concat())
        };
        let (one, two) = (ask("1"), ask("2"));
        if !matches!(one.status, Some(0 | 1)) {
            wrong.push(format!("{}: status {:?}\n{}", train.name, one.status, one.stderr));
            continue;
        }
        let answer: serde_json::Value = serde_json::from_str(&one.stdout).unwrap();
        let studies = answer["studies"].as_object().unwrap();
        if studies.len() != 1 || studies.values().any(|study| study["completed"] != true) {
            wrong.push(format!("{}: no whole answer\n{}", train.name, one.stdout));
        }
        if one.stdout != two.stdout {
            wrong.push(format!("{}: one and two threads differ", train.name));
        }
    }
    none(&wrong);
}
