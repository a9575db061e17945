//! Studies below a folder of results when the scenario is run again into it.

use super::helper::{Folder, train};

const STUDIES: &str = "  grid: { sweep: { vary: { bodies.rotor.inertia: { values: [0.05, 0.06] } } } }\n  \
    hand: { estimates: {} }\n";

fn told(output: &std::process::Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

#[test]
fn a_run_of_the_same_scenario_keeps_its_studies() {
    let folder = Folder::new(&train(60.0, 100.0, STUDIES));
    folder.study(&[]);
    let before = folder.study_file("out", "grid.csv");
    let output = folder.call(&["run", "case.yaml", "--out", "out", "--no-charts"]);
    assert_eq!(output.status.code(), Some(0), "{}", told(&output));
    assert_eq!(folder.study_file("out", "grid.csv"), before);
    assert!(folder.has("out/studies/hand.json") && folder.has("out/series.csv"));
    assert!(!told(&output).contains("dropped"), "{}", told(&output));
    // A new title changes no result.
    let output =
        folder.call(&["run", "case.yaml", "--out", "out", "--no-charts", "--set", "title=Other"]);
    assert_eq!(folder.study_file("out", "grid.csv"), before, "{}", told(&output));
}

#[test]
fn studies_of_another_state_are_dropped_with_a_word_and_begun_ones_stay() {
    let folder = Folder::new(&train(60.0, 100.0, STUDIES));
    folder.study(&[]);
    let journal = "# unfinished study, to be continued with --resume: 0\nhead\n";
    folder.write("out/studies/grid.unfinished.csv", journal);
    folder.write("out/studies/long.unfinished.csv", journal);
    let set = "bodies.rotor.inertia=0.07";
    let output = folder.call(&["run", "case.yaml", "--out", "out", "--no-charts", "--set", set]);
    assert_eq!(output.status.code(), Some(0), "{}", told(&output));
    let wanted =
        "`grid`, `hand` in `out` answered for another state of the scenario and were dropped";
    assert!(told(&output).contains(wanted), "{}", told(&output));
    assert!(!folder.has("out/studies/grid.csv") && !folder.has("out/studies/hand.json"));
    for name in ["grid", "long"] {
        assert_eq!(folder.study_file("out", &format!("{name}.unfinished.csv")), journal);
    }
}
