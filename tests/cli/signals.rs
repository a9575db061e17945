//! Runs that are interrupted or killed.
#![cfg(unix)]
#![allow(clippy::zombie_processes, reason = "the child is waited for, or the test fails")]

use super::bench::{Bench, json, names};
use std::process::{Child, Command};
use std::time::{Duration, Instant};

/// Long enough that no machine finishes it before the test ends.
const LONG: [&str; 4] = ["--set", "duration=100 h", "--set", "output_step=0.1 s"];

fn start_long(bench: &Bench) -> Child {
    let child = bench.command(&[&["run", "small.yaml"], &LONG[..]].concat()).spawn().unwrap();
    // Under way once the hidden folder is there and has rows in it.
    let begun = Instant::now();
    while begun.elapsed() < Duration::from_secs(60) {
        let rows = names(&bench.path("output")).iter().any(|name| {
            let file = bench.path("output").join(name).join("series.csv");
            name.starts_with('.') && std::fs::metadata(file).is_ok_and(|data| data.len() > 0)
        });
        if rows {
            return child;
        }
        std::thread::sleep(Duration::from_millis(20));
    }
    panic!("the run did not begin to write");
}

fn send(signal: &str, child: &Child) {
    let kill = Command::new("kill").args([signal, &child.id().to_string()]).status().unwrap();
    assert!(kill.success());
}

#[test]
fn an_interrupted_run_ends_with_130_and_keeps_what_is_finished() {
    let bench = Bench::new("interrupted");
    let child = start_long(&bench);
    send("-INT", &child);
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(130), "{output:?}");
    let summary = json(&bench.read("output/small/summary.json"));
    assert_eq!(summary["completed"], false);
    assert!(summary["requirements"]["no_slip"]["met"].is_null());
    assert!(summary["failure"].as_str().unwrap().contains("interrupted"));
    let series = bench.read("output/small/series.csv");
    let columns: Vec<usize> = series.lines().map(|line| line.split(',').count()).collect();
    assert!(columns.iter().all(|count| *count == columns[0]), "no torn line");
    assert_eq!(names(&bench.path("output")), ["small"], "no hidden rest");
}

#[test]
fn a_killed_run_leaves_the_old_result_and_the_next_run_cleans_up() {
    let bench = Bench::new("killed");
    assert_eq!(bench.run(&["run", "small.yaml"]).status, Some(0));
    let old = bench.read("output/small/summary.json");
    let child = start_long(&bench);
    send("-KILL", &child);
    child.wait_with_output().unwrap();
    assert_eq!(bench.read("output/small/summary.json"), old, "the old result is whole");
    assert_eq!(names(&bench.path("output")).len(), 2, "a hidden rest");
    assert_eq!(bench.run(&["run", "small.yaml"]).status, Some(0));
    assert_eq!(names(&bench.path("output")), ["small"], "cleaned up");
}
