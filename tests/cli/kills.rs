//! Runs, studies and reports killed at random moments.
//!
//! `LODESHAFT_KILLS=200 cargo test --release --test cli kills` kills that often; the usual tests
//! kill a few times only.
#![cfg(unix)]

use super::bench::{Bench, SMALL, json, names};
use rand::{Rng, SeedableRng};
use rand_chacha::ChaCha8Rng;
use std::path::Path;
use std::time::{Duration, Instant};

/// How often each command is killed.
fn rounds() -> usize {
    std::env::var("LODESHAFT_KILLS").ok().and_then(|text| text.parse().ok()).unwrap_or(8)
}

const DRAWS: usize = 60;

/// The small train with a study, made long enough to be caught in the middle.
fn train() -> String {
    SMALL.replace("duration: 0.2 s", "duration: 4 s")
        + &format!(
            "studies:\n  drawn: {{ monte_carlo: {{ draws: {DRAWS}, seed: 4, spread: {{ magnetic_couplings.coupling.pull_out: {{ normal: {{ relative: 5 % }} }} }} }} }}\n"
        )
}

/// Starts a command, kills it after a share of the time that it takes, and tells whether it was
/// still at work.
fn kill_at(bench: &Bench, arguments: &[&str], usual: Duration, share: f64) -> bool {
    let mut child = bench.command(arguments).spawn().unwrap();
    std::thread::sleep(usual.mul_f64(share));
    let working = child.try_wait().unwrap().is_none();
    // The signal KILL: no handler runs.
    child.kill().unwrap();
    child.wait().unwrap();
    working
}

fn usual(bench: &Bench, arguments: &[&str]) -> Duration {
    let begun = Instant::now();
    let told = bench.run(arguments);
    assert!(matches!(told.status, Some(0 | 1)), "{told:?}");
    begun.elapsed()
}

/// Every file of a result is whole, if the result is there at all.
fn is_whole(folder: &Path) {
    if !folder.exists() {
        return;
    }
    let read = |name: &str| std::fs::read_to_string(folder.join(name)).unwrap();
    let summary = json(&read("summary.json"));
    assert_eq!(summary["completed"], true);
    let series = read("series.csv");
    assert!(series.ends_with('\n'));
    let columns: Vec<usize> = series.lines().map(|line| line.split(',').count()).collect();
    assert_eq!(columns.len(), 4002, "4 s at 1 ms and a head");
    assert!(columns.iter().all(|count| *count == columns[0]), "a torn line");
    for name in names(folder).into_iter().filter(|name| folder.join(name).is_file()) {
        let bytes = std::fs::read(folder.join(&name)).unwrap();
        let text = String::from_utf8_lossy(&bytes);
        if name.ends_with(".svg") {
            assert!(text.trim_end().ends_with("</svg>"), "{name}");
        } else if name.ends_with(".html") {
            assert!(text.trim_end().ends_with("</html>"), "{name}");
        } else if name.ends_with(".png") {
            // The last chunk of a PNG (ISO/IEC 15948).
            assert!(bytes[bytes.len() - 8..].starts_with(b"IEND"), "{name}");
        }
    }
    let studies = folder.join("studies");
    for name in names(&studies) {
        let text = std::fs::read_to_string(studies.join(&name)).unwrap();
        if name.ends_with(".json") {
            json(&text);
        } else if name == "drawn.csv" {
            assert_eq!(text.lines().count(), DRAWS + 1, "{name}");
        }
    }
}

#[test]
fn a_killed_run_or_report_never_leaves_half_a_result() {
    let mut draw = ChaCha8Rng::seed_from_u64(1);
    for command in ["run", "report"] {
        let bench = Bench::new(&format!("kills_{command}"));
        bench.write("train.yaml", &train());
        let arguments = [command, "train.yaml", "--quiet"];
        let usual = usual(&bench, &arguments);
        let (mut caught, mut old) = (0, 0);
        for round in 0..rounds() {
            // Half of the time there is an old result to be replaced.
            if round % 2 == 0 {
                std::fs::remove_dir_all(bench.path("output")).unwrap();
            }
            caught += usize::from(kill_at(&bench, &arguments, usual, draw.random_range(0.0..1.1)));
            is_whole(&bench.path("output/train"));
            if round % 2 == 1 {
                // A kill between the two renames leaves the old result aside; it comes back.
                old += usize::from(!bench.path("output/train").exists());
            }
            let told = bench.run(&arguments);
            assert_eq!(told.status, Some(0), "{told:?}");
            is_whole(&bench.path("output/train"));
            assert_eq!(names(&bench.path("output")), ["train"], "no hidden rest");
        }
        println!("{command}: {} kills, {caught} at work, {old} between two results", rounds());
    }
}

/// Numbers of the finished runs in the journal, in order.
fn kept(bench: &Bench) -> Vec<String> {
    let path = bench.path("output/train/studies/drawn.unfinished.csv");
    let Ok(text) = std::fs::read_to_string(path) else { return Vec::new() };
    // A row cut short has no line break.
    let whole = text.rfind('\n').map_or("", |end| &text[..end]);
    let mut numbers: Vec<String> =
        whole.lines().skip(2).map(|line| line.split(',').next().unwrap().to_owned()).collect();
    numbers.sort();
    numbers
}

#[test]
fn a_study_killed_again_and_again_gives_the_bytes_of_an_unbroken_one() {
    let bench = Bench::new("kills_study");
    bench.write("train.yaml", &train());
    let begin = ["study", "train.yaml", "--quiet", "--out", "whole"];
    let usual = usual(&bench, &begin);
    let bytes = |out: &str, name: &str| bench.read(&format!("{out}/studies/{name}"));
    let mut draw = ChaCha8Rng::seed_from_u64(2);
    let resume = ["study", "train.yaml", "--quiet", "--resume"];
    let (mut kills, mut caught, mut whole) = (0, 0, 0);
    while kills < rounds() {
        let before = kept(&bench);
        caught += usize::from(kill_at(&bench, &resume, usual, draw.random_range(0.0..0.5)));
        kills += 1;
        let after = kept(&bench);
        if bench.path("output/train/studies/drawn.json").exists() && after.is_empty() {
            // Through: held against the unbroken one, then begun anew.
            for name in ["drawn.csv", "drawn.json"] {
                assert_eq!(bytes("output/train", name), bytes("whole", name), "{name}");
            }
            std::fs::remove_dir_all(bench.path("output")).unwrap();
            whole += 1;
            continue;
        }
        let mut unique = after.clone();
        unique.dedup();
        assert_eq!(unique, after, "a run stands twice in the journal");
        assert!(before.iter().all(|number| after.contains(number)), "a finished run is lost");
    }
    let told = bench.run(&resume);
    assert_eq!(told.status, Some(0), "{told:?}");
    for name in ["drawn.csv", "drawn.json"] {
        assert_eq!(bytes("output/train", name), bytes("whole", name), "{name}");
    }
    println!("study: {kills} kills, {caught} at work, {whole} times through on the way");
}
