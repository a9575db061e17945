//! The engine beside a hand-written loop of the same train: same method, same tolerance.
//!
//! `cargo bench --bench single_run` prints ratios measured in one run on one machine. Both run
//! the pump train of `pump_train.yaml` from 0 to 610 s and from 0 to 10 s; the difference is the
//! steady part, the ratio of the differences is the figure. The engine has everything on but
//! files: slips, extremes of all channels, verdicts, energy audit, output samples.

mod hand;

use hand::Hand;
use lodeshaft::analysis::transient::{prepare, run_prepared};
use lodeshaft::equations::Equations;
use lodeshaft::scenario::load;
use lodeshaft::solve::{RowSink, RunOptions};
use std::hint::black_box;
use std::path::Path;
use std::time::Instant;

/// Takes rows as a file would.
struct Sum(f64);

impl RowSink for Sum {
    fn row(&mut self, _time: f64, values: &[f64]) {
        self.0 += values.iter().sum::<f64>();
    }
}

fn engine(equations: &Equations, duration: f64) -> (u64, f64) {
    let mut equations = equations.clone();
    equations.model.scenario.duration = duration;
    let mut rows = Sum(0.0);
    let options = RunOptions { rows: Some(&mut rows), ..RunOptions::default() };
    match run_prepared(&equations, options) {
        Ok(result) => (result.solver.steps, result.gears[0].final_load_angle),
        Err(_) => (0, f64::NAN),
    }
}

fn seconds<T>(work: impl FnOnce() -> T) -> f64 {
    let clock = Instant::now();
    black_box(work());
    clock.elapsed().as_secs_f64()
}

fn main() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("benches/pump_train.yaml");
    let Ok(loaded) = load(&path, &[]) else { return };
    let Ok(equations) = prepare(&loaded.scenario) else { return };
    let hand = Hand::of(&equations);
    // For a profiler: one side alone.
    if let Some(only) = std::env::args().nth(1).filter(|name| name == "engine" || name == "hand") {
        for _ in 0..std::env::args().nth(2).and_then(|count| count.parse().ok()).unwrap_or(10) {
            let _ = if only == "hand" { hand.run(610.0, 1e-8) } else { engine(&equations, 610.0) };
        }
        return;
    }
    let (hand_steps, hand_angle) = hand.run(610.0, 1e-8);
    let (steps, angle) = engine(&equations, 610.0);
    let mut ratios: Vec<f64> = (0..7)
        .map(|_| {
            let by_hand = seconds(|| hand.run(610.0, 1e-8)) - seconds(|| hand.run(10.0, 1e-8));
            let by_engine =
                seconds(|| engine(&equations, 610.0)) - seconds(|| engine(&equations, 10.0));
            by_engine / by_hand
        })
        .collect();
    ratios.sort_by(f64::total_cmp);
    let mut out = String::new();
    out += &format!("steps: by hand {hand_steps}, engine {steps}\n");
    out += &format!("final load angle: by hand {hand_angle:.12}, engine {angle:.12}\n");
    out += &format!(
        "10 s to 610 s at 1e-8, engine over hand: median {:.2} ({:.2} to {:.2})\n",
        ratios[3], ratios[0], ratios[6]
    );
    let ten = seconds(|| engine(&equations, 10.0));
    out += &format!("10 s start: {:.2} ms a run\n", 1e3 * ten);
    let _ = std::io::Write::write_all(&mut std::io::stdout(), out.as_bytes());
}
