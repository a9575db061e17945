//! How the cost grows with the train: `cargo bench --bench scaling`.
//!
//! Chains of bodies and shafts, cost of one evaluation (with its share of observer and audit) beside that of the smallest; the further
//! cost of one more component of each kind; a component that is there but idle. Only ratios of
//! one run on one machine are printed: single times say little.

use lodeshaft::analysis::transient::{prepare, run_prepared};
use lodeshaft::equations::Equations;
use lodeshaft::scenario::load_text;
use lodeshaft::solve::RunOptions;
use std::fmt::Write as _;
use std::io::Write as _;
use std::path::Path;
use std::time::Instant;

/// Pairs of runs of which the median is taken.
const ROUNDS: usize = 7;

fn equations(text: &str) -> Option<Equations> {
    let loaded = load_text("bench", Path::new("."), text, &[]).ok()?;
    prepare(&loaded.scenario).ok()
}

/// Seconds that this process has had of a processor; of the clock where that is not told.
fn seconds(begun: Instant) -> f64 {
    let told = std::fs::read_to_string("/proc/self/schedstat").unwrap_or_default();
    let own = told.split(' ').next().and_then(|text| text.parse::<f64>().ok());
    own.map_or_else(|| begun.elapsed().as_secs_f64(), |nanoseconds| 1e-9 * nanoseconds)
}

/// Seconds and evaluations of a run, everything on but files.
fn run(equations: &Equations, duration: f64) -> (f64, f64) {
    let mut equations = equations.clone();
    equations.model.scenario.duration = duration;
    let clock = Instant::now();
    let begun = seconds(clock);
    let result = run_prepared(&equations, RunOptions::default());
    let spent = seconds(clock) - begun;
    (spent, result.map_or(f64::NAN, |result| result.solver.evaluations as f64))
}

/// Seconds of one evaluation: what 2 s more of the train cost, without the making ready.
fn per_evaluation(equations: &Equations) -> f64 {
    let (short, long) = (run(equations, 1.0), run(equations, 3.0));
    (long.0 - short.0) / (long.1 - short.1)
}

/// Median of the ratio of two trains, measured in turn.
fn ratio(one: &Equations, other: &Equations) -> f64 {
    let mut ratios: Vec<f64> =
        (0..ROUNDS).map(|_| per_evaluation(other) / per_evaluation(one)).collect();
    ratios.sort_by(f64::total_cmp);
    ratios[ROUNDS / 2]
}

/// Bodies in a row on shafts, pushed to and fro.
fn chain(bodies: usize, more: &str) -> String {
    let mut text = String::from(
        "lodeshaft: 1\ntitle: A chain\nduration: 2 s\noutput_step: 0.1 s\nsolver: { tolerance: 1e-7 }\nbodies:\n",
    );
    for body in 0..bodies {
        let _ = writeln!(text, "  body_{body}: {{ inertia: 0.1 kg*m2 }}");
    }
    text.push_str("shafts:\n");
    for body in 1..bodies {
        let _ = writeln!(
            text,
            "  shaft_{body}: {{ between: [body_{}, body_{body}], stiffness: 1000 N*m/rad, damping: 0.5 N*m*s/rad }}",
            body - 1
        );
    }
    text.push_str("motors:\n  shaker: { body: body_0, law: { prescribed: { torque: { sine: { mean: 1 N*m, amplitude: 5 N*m, frequency: 3 Hz, phase: 0 deg } } } } }\n");
    text.push_str(more);
    text
}

/// Further components on a chain of ten, one of each kind.
const FURTHER: [(&str, &str); 8] = [
    (
        "viscous load",
        "loads:\n  more: { body: body_5, law: { viscous: { coefficient: 0.1 N*m*s/rad } } }\n",
    ),
    (
        "power-law load",
        "loads:\n  more: { body: body_5, law: { power_law: { torque: 1 N*m, speed: 10 rad/s, exponent: 2 } } }\n",
    ),
    (
        "load by points",
        "loads:\n  more: { body: body_5, law: { curve: { points: [[0 rad/s, 0 N*m], [10 rad/s, 1 N*m], [100 rad/s, 3 N*m]] } } }\n",
    ),
    (
        "prescribed torque of zero (idle)",
        "loads:\n  more: { body: body_5, law: { prescribed: { torque: 0 N*m } } }\n",
    ),
    (
        "brake that is open (idle)",
        "brakes:\n  more: { body: body_5, torque: 100 N*m, applied: 0 }\n",
    ),
    (
        "magnetic coupling to ground",
        "magnetic_couplings:\n  more: { between: [body_5, ground], pole_pairs: 4, pull_out: 5 N*m }\n",
    ),
    (
        "magnetic coupling with three harmonics",
        "magnetic_couplings:\n  more: { between: [body_5, ground], pole_pairs: 4, pull_out: 5 N*m, harmonics: [{ order: 3, amplitude: 0.05, phase: 0 deg }, { order: 5, amplitude: 0.03, phase: 0 deg }, { order: 7, amplitude: 0.01, phase: 0 deg }] }\n",
    ),
    (
        "friction that slides or sticks",
        "loads:\n  more: { body: body_5, law: { friction: { sliding: 0.5 N*m } } }\n",
    ),
];

fn main() {
    let mut out = String::new();
    let Some(smallest) = equations(&chain(10, "")) else { return };
    let _ = writeln!(out, "chains, cost of an evaluation over that of ten bodies:");
    for bodies in [10, 50, 200] {
        let Some(train) = equations(&chain(bodies, "")) else { continue };
        let found = ratio(&smallest, &train);
        let share = found / (bodies as f64 / 10.0);
        let _ = writeln!(out, "  {bodies:>3} bodies: {found:6.2} ({share:.2} of proportion)");
    }
    let _ = writeln!(out, "one more component on the chain of ten, further cost of an evaluation:");
    for (what, more) in FURTHER {
        let Some(train) = equations(&chain(10, more)) else {
            let _ = writeln!(out, "  {what}: refused");
            continue;
        };
        let found = 100.0 * (ratio(&smallest, &train) - 1.0);
        let _ = writeln!(out, "  {what}: {found:+.0} %");
    }
    let _ = std::io::stdout().write_all(out.as_bytes());
}
