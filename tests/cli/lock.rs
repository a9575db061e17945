//! Two processes in one folder of results.

use super::bench::{Bench, SMALL};
use std::process::Child;
use std::time::{Duration, Instant};

/// A study that no machine finishes before the test ends.
fn long() -> String {
    SMALL.replace("duration: 0.2 s", "duration: 20 s")
        + "studies:\n  drawn: { monte_carlo: { draws: 100000, seed: 4, spread: { magnetic_couplings.coupling.pull_out: { normal: { relative: 5 % } } } } }\n"
}

/// Starts the study and waits until its first runs are kept.
fn start(bench: &Bench) -> Child {
    let mut child = bench.command(&["study", "long.yaml", "--quiet"]).spawn().unwrap();
    let journal = bench.path("output/long/studies/drawn.unfinished.csv");
    let begun = Instant::now();
    let runs = || std::fs::read_to_string(&journal).map_or(0, |text| text.lines().count());
    while runs() < 4 {
        assert!(child.try_wait().unwrap().is_none(), "the study ended");
        assert!(begun.elapsed() < Duration::from_secs(120), "the study did not begin");
        std::thread::sleep(Duration::from_millis(10));
    }
    child
}

#[test]
fn a_second_process_is_refused_until_the_first_is_gone() {
    let bench = Bench::new("locked");
    bench.write("long.yaml", &long());
    let mut child = start(&bench);
    let journal = "output/long/studies/drawn.unfinished.csv";
    // Another study would write the same journal, a run or a report would sweep it away.
    for command in ["study", "run", "report"] {
        let told = bench.run(&[command, "long.yaml", "--set", "duration=0.1 s"]);
        assert_eq!(told.status, Some(4), "{command}: {told:?}");
        let process = format!("(process {})", child.id());
        assert!(told.err.contains("error: `output/long` is in use"), "{}", told.err);
        assert!(told.err.contains(&process), "{}", told.err);
        assert!(told.err.contains("hint: wait for its end"), "{}", told.err);
        assert!(bench.path(journal).exists(), "{command}");
        assert!(child.try_wait().unwrap().is_none(), "{command}");
    }
    // Elsewhere anything goes.
    let told = bench.run(&["run", "small.yaml", "--out", "output/other"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    // A kill frees the folder; a run then replaces what is in it but for studies that were begun.
    child.kill().unwrap();
    child.wait().unwrap();
    let told = bench.run(&["run", "small.yaml", "--out", "output/long"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    assert!(bench.path(journal).exists());
}

#[test]
fn a_folder_taken_during_a_run_is_seen_at_its_end() {
    // The run begins first and ends while the study is under way.
    let bench = Bench::new("locked_later");
    bench.write("long.yaml", &long());
    let arguments = [
        "run",
        "long.yaml",
        "--no-charts",
        "--set",
        "duration=3000 s",
        "--set",
        "output_step=10 ms",
    ];
    let run = bench.command(&arguments).spawn().unwrap();
    let mut study = start(&bench);
    let output = run.wait_with_output().unwrap();
    let told = String::from_utf8_lossy(&output.stderr).into_owned();
    study.kill().unwrap();
    study.wait().unwrap();
    assert_eq!(output.status.code(), Some(4), "{told}");
    assert!(told.contains("is in use"), "{told}");
    assert!(bench.path("output/long/studies/drawn.unfinished.csv").exists());
}

#[test]
fn a_finished_study_leaves_no_lock_behind() {
    let bench = Bench::new("unlocked");
    bench.write("long.yaml", &long().replace("100000", "20").replace("20 s", "0.2 s"));
    let told = bench.run(&["study", "long.yaml", "--quiet"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let left = super::bench::names(&bench.path("output/long/studies"));
    assert_eq!(left, ["drawn.csv", "drawn.json"]);
}
