//! A study that is killed or interrupted goes on where it stopped.

use super::helper::{Folder, train};
use std::process::Child;
use std::time::{Duration, Instant};

const DRAWS: usize = 100;

fn scenario() -> String {
    train(
        70.0,
        100.0,
        &format!(
            "  drawn: {{ monte_carlo: {{ draws: {DRAWS}, seed: 4, spread: {{ magnetic_couplings.coupling.pull_out: {{ normal: {{ relative: 5 % }} }} }} }} }}\n"
        ),
    )
    // Long enough to be caught in the middle.
    .replace("duration: 0.8 s", "duration: 6 s")
}

const ARGUMENTS: [&str; 7] = ["study", "case.yaml", "--out", "out", "--threads", "2", "drawn"];

/// Finished runs in the journal.
fn kept(folder: &Folder) -> usize {
    if !folder.has("out/studies/drawn.unfinished.csv") {
        return 0;
    }
    folder.study_file("out", "drawn.unfinished.csv").lines().count().saturating_sub(2)
}

/// Waits until some runs are finished.
fn wait_for(folder: &Folder, runs: usize, child: &mut Child) {
    let start = Instant::now();
    while kept(folder) < runs {
        assert!(start.elapsed() < Duration::from_secs(300), "{} runs", kept(folder));
        assert!(child.try_wait().unwrap().is_none(), "the study ended before it was stopped");
        std::thread::sleep(Duration::from_millis(5));
    }
}

/// Number of runs that a call made, from what it told of their cost; 0 when it made none.
fn made(stderr: &[u8]) -> usize {
    let text = String::from_utf8_lossy(stderr);
    text.lines()
        .find_map(|line| line.strip_prefix("drawn: ")?.split_once(" runs in ")?.0.parse().ok())
        .unwrap_or(0)
}

#[test]
fn a_killed_study_goes_on_without_losing_or_repeating_a_run() {
    let folder = Folder::new(&scenario());
    let mut child = folder.start(&ARGUMENTS);
    wait_for(&folder, 10, &mut child);
    child.kill().unwrap();
    child.wait().unwrap();
    let kept = kept(&folder);
    assert!((10..DRAWS).contains(&kept), "{kept}");
    assert!(!folder.has("out/studies/drawn.csv"));

    let mut arguments = ARGUMENTS.to_vec();
    arguments.push("--resume");
    let output = folder.call(&arguments);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    assert_eq!(made(&output.stderr), DRAWS - kept);
    assert!(!folder.has("out/studies/drawn.unfinished.csv"));

    // The same bytes as without the kill.
    let whole = folder.call(&["study", "case.yaml", "--out", "whole"]);
    assert_eq!(made(&whole.stderr), DRAWS);
    for name in ["drawn.csv", "drawn.json"] {
        assert_eq!(folder.study_file("out", name), folder.study_file("whole", name), "{name}");
    }
    // A finished study is not run again, and gives the same answer.
    let again = folder.call(&arguments);
    assert_eq!(made(&again.stderr), 0);
    assert_eq!(folder.study_file("out", "drawn.csv"), folder.study_file("whole", "drawn.csv"));
}

#[test]
fn a_changed_scenario_is_refused() {
    let folder = Folder::new(&scenario());
    let mut child = folder.start(&ARGUMENTS);
    wait_for(&folder, 3, &mut child);
    child.kill().unwrap();
    child.wait().unwrap();
    let before = kept(&folder);
    let mut arguments = ARGUMENTS.to_vec();
    arguments.extend(["--resume", "--set", "bodies.rotor.inertia=0.06"]);
    let output = folder.call(&arguments);
    let told = String::from_utf8_lossy(&output.stderr).into_owned();
    assert_eq!(output.status.code(), Some(2), "{told}");
    assert!(told.contains("error: `drawn` cannot go on: the scenario"), "{told}");
    assert!(told.contains("hint: without --resume it begins anew"), "{told}");
    assert_eq!(kept(&folder), before);
    // A new title changes no result.
    arguments.pop();
    arguments.extend(["title=Another name", "--set", "studies.drawn.monte_carlo.draws=100"]);
    let output = folder.call(&arguments);
    assert_eq!(made(&output.stderr), DRAWS - before);
}

#[cfg(unix)]
#[test]
fn an_interrupted_study_keeps_its_runs() {
    let folder = Folder::new(&scenario());
    let mut child = folder.start(&ARGUMENTS);
    wait_for(&folder, 5, &mut child);
    let id = child.id().to_string();
    let signal = std::process::Command::new("kill").args(["-INT", &id]).status().unwrap();
    assert!(signal.success());
    assert_eq!(child.wait().unwrap().code(), Some(130));
    let kept = kept(&folder);
    assert!(kept >= 5);
    let mut arguments = ARGUMENTS.to_vec();
    arguments.push("--resume");
    assert_eq!(made(&folder.call(&arguments).stderr), DRAWS - kept);
}

#[test]
fn other_folders_are_left_alone() {
    let folder = Folder::new(&scenario());
    std::fs::create_dir(folder.path().join("mine")).unwrap();
    folder.write("mine/notes.txt", "keep");
    let output = folder.call(&["study", "case.yaml", "--out", "mine"]);
    assert_eq!(output.status.code(), Some(4));
    assert!(!folder.has("mine/studies"));
}
