//! The brief look at a step finds what the full look finds, on every shipped scenario.
//!
//! A run that is asked for turning points looks at each step in full: six samples, every channel
//! refined. The expected values are those of that run of the same program, so this is no check
//! of the physics: it holds the shortcut to what it shortens.

use lodeshaft::analysis::transient::transient;
use lodeshaft::results::RunResult;
use lodeshaft::scenario::load;
use lodeshaft::solve::turning::TurningRequest;
use lodeshaft::solve::{RunOptions, Wanted};
use std::path::{Path, PathBuf};

fn scenarios() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let mut files: Vec<PathBuf> = std::fs::read_dir(folder)
        .expect("the folder is there")
        .map(|entry| entry.expect("can be read").path())
        .filter(|path| path.extension().is_some_and(|end| end == "yaml"))
        .collect();
    files.sort();
    files
}

fn run(path: &Path, tolerance: f64, wanted: Wanted, in_full: bool) -> RunResult {
    let loaded = load(path, &[]).unwrap_or_else(|failure| panic!("{}", failure.render()));
    let mut ignore = |_: f64, _: f64| {};
    let turning = TurningRequest {
        channel: 0,
        window: [0.0, loaded.scenario.duration],
        gate: f64::MAX,
        told: &mut ignore,
    };
    let options = RunOptions {
        wanted,
        tolerance: Some(tolerance),
        turning: in_full.then_some(turning),
        ..RunOptions::default()
    };
    transient(&loaded.scenario, options).expect("a shipped scenario is in order")
}

#[track_caller]
fn alike(path: &Path, tolerance: f64, brief: &RunResult, full: &RunResult) {
    let name = path.display();
    for (brief, full) in brief.channels.iter().zip(&full.channels) {
        let size = full.max.abs().max(full.min.abs());
        // What rounding and the slack of a thousandth of the tolerance may hide.
        let room = (2e-3 * tolerance + 1e-13) * size;
        for (which, one, other) in [
            ("min", brief.min, full.min),
            ("max", brief.max, full.max),
            ("last", brief.last, full.last),
        ] {
            assert!(
                (one - other).abs() <= room || one == other,
                "{name} at {tolerance:e}: {} of {}: {one} against {other}",
                which,
                full.name
            );
        }
    }
    assert_eq!(brief.events, full.events, "{name} at {tolerance:e}");
    for (brief, full) in brief.requirements.iter().zip(&full.requirements) {
        assert_eq!(brief.met, full.met, "{name} at {tolerance:e}: {}", full.name);
        let (one, other) = (brief.value.unwrap_or(-1.0), full.value.unwrap_or(-1.0));
        let room = (2e-3 * tolerance + 1e-12) * other.abs();
        assert!((one - other).abs() <= room, "{name}: {}: {one} against {other}", full.name);
    }
    for (brief, full) in brief.gears.iter().zip(&full.gears) {
        assert_eq!((brief.slips, brief.net_slips), (full.slips, full.net_slips), "{name}");
        assert_eq!(brief.state_at_end, full.state_at_end, "{name}");
        assert_eq!(brief.resynchronised_at, full.resynchronised_at, "{name}");
        let room = 2e-3 * tolerance + 1e-12;
        let off = (brief.peak_load_angle - full.peak_load_angle).abs();
        assert!(off <= room, "{name} at {tolerance:e}: peak load angle off by {off:e}");
    }
    assert_eq!(brief.solver, full.solver, "the look changes no step: {name}");
}

#[test]
fn all_channels_events_and_verdicts_are_those_of_the_full_look() {
    for path in scenarios() {
        for tolerance in [1e-8, 1e-5] {
            let brief = run(&path, tolerance, Wanted::All, false);
            let full = run(&path, tolerance, Wanted::All, true);
            alike(&path, tolerance, &brief, &full);
        }
    }
}
