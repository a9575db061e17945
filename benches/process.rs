//! Where the time of a whole process goes.
//!
//! `cargo bench --bench process` runs the program itself: first the train of `pump_train.yaml`
//! with a row a second, beside the hand-written loop; then the pump start of `scenarios`, whole
//! and in its parts. Shares and ratios of one run on one machine.

mod hand;

use hand::Hand;
use lodeshaft::analysis::study;
use lodeshaft::analysis::transient::{prepare, run_prepared};
use lodeshaft::render::charts;
use lodeshaft::render::pictures::{Print, write};
use lodeshaft::scenario::load;
use lodeshaft::solve::{RunOptions, Wanted};
use std::hint::black_box;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::Instant;

/// Times of a figure; their median is shown.
const TIMES: usize = 9;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// A folder of this process for what the program writes.
fn out() -> PathBuf {
    std::env::temp_dir().join(format!("lodeshaft_bench_{}", std::process::id()))
}

/// Median of the seconds that some work takes.
fn seconds<T>(mut work: impl FnMut() -> T) -> f64 {
    let mut times: Vec<f64> = (0..TIMES)
        .map(|_| {
            let clock = Instant::now();
            black_box(work());
            clock.elapsed().as_secs_f64()
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times[TIMES / 2]
}

/// One run of the program.
fn program(arguments: &[&str]) {
    let done = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
        .current_dir(root())
        .args(arguments)
        .arg("--out")
        .arg(out())
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .status();
    black_box(done.is_ok());
}

/// The steady part of the bench train by the whole process, over the hand-written loop.
fn beside_the_hand(text: &mut String) {
    let file = "benches/pump_train.yaml";
    let Ok(loaded) = load(&root().join(file), &[]) else { return };
    let Ok(equations) = prepare(&loaded.scenario) else { return };
    let hand = Hand::of(&equations);
    let run = |duration: &str| {
        let set = format!("duration={duration}");
        seconds(|| program(&["run", file, "--no-charts", "--set", &set]))
    };
    let process = run("610 s") - run("10 s");
    let by_hand = seconds(|| hand.run(610.0, 1e-8)) - seconds(|| hand.run(10.0, 1e-8));
    *text += &format!(
        "10 s to 610 s at 1e-8 with a row a second, whole process over hand: {:.2}\n",
        process / by_hand
    );
}

/// The parts of `lodeshaft run scenarios/pump_start.yaml`.
fn parts(text: &mut String) {
    let file = root().join("scenarios/pump_start.yaml");
    let whole = seconds(|| program(&["run", "scenarios/pump_start.yaml"]));
    let bare = seconds(|| program(&["--version"]));
    let reading = seconds(|| study::load(&file, &[]).is_ok());
    let Ok(loaded) = load(&file, &[]) else { return };
    let building = seconds(|| prepare(&loaded.scenario).is_ok());
    let Ok(equations) = prepare(&loaded.scenario) else { return };
    let integrating = seconds(|| run_prepared(&equations, RunOptions::default()).is_ok());
    let traced = || {
        let traces = Some(charts::request(&equations));
        run_prepared(&equations, RunOptions { traces, ..RunOptions::default() })
    };
    let tracing = seconds(|| traced().is_ok()) - integrating;
    let Ok(result) = traced() else { return };
    let folder = out();
    if std::fs::create_dir_all(&folder).is_err() {
        return;
    }
    let charts = seconds(|| {
        let mut again = |request| {
            let traces = Some(request);
            let wanted = Wanted::Asked(Vec::new());
            let options = RunOptions { traces, wanted, ..RunOptions::default() };
            run_prepared(&equations, options).ok()?.traces
        };
        let print = Print::default();
        let pictures = charts::drawings(&equations, &result, &mut again, print.sheet);
        let drawings: Vec<_> = pictures.iter().map(|picture| &picture.drawing).collect();
        write(&folder, &drawings, print).is_ok()
    });
    let known = bare + reading + building + integrating + tracing + charts;
    *text += &format!("pump start, whole process {:.1} ms, of which\n", 1e3 * whole);
    for (part, time) in [
        ("starting and ending a process", bare),
        ("reading and checking the file", reading),
        ("building the equations", building),
        ("integrating, slips, extremes, verdicts, audit", integrating),
        ("traces for the charts", tracing),
        ("drawing and writing charts, SVG and PNG", charts),
        ("rows, events, summary, text and the rest", whole - known),
    ] {
        *text += &format!("  {:5.1} %  {part}\n", 100.0 * time / whole);
    }
}

fn main() {
    let mut text = String::new();
    beside_the_hand(&mut text);
    parts(&mut text);
    let _ = std::fs::remove_dir_all(out());
    let _ = std::io::Write::write_all(&mut std::io::stdout(), text.as_bytes());
}
