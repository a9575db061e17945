//! How the cost grows with the train: `cargo bench --bench scaling`.
//!
//! Chains of bodies and shafts, cost of one evaluation (with its share of observer and audit)
//! beside that of the smallest; the further cost of one more component of each kind, active or
//! there but idle, with everything and of the bare right-hand side; many frictions on wheels that
//! turn as one. Only ratios of one run on one machine are printed: single times say little.

use lodeshaft::analysis::transient::{prepare, run_prepared};
use lodeshaft::equations::Equations;
use lodeshaft::equations::assembly::assemble;
use lodeshaft::equations::frame::Evaluator;
use lodeshaft::equations::mode::Mode;
use lodeshaft::scenario::load_text;
use lodeshaft::solve::RunOptions;
use lodeshaft::solve::rhs::Rhs;
use std::fmt::Write as _;
use std::io::Write as _;
use std::path::Path;
use std::time::Instant;

/// Pairs of runs of which the median is taken.
const ROUNDS: usize = 7;

/// Calls of a bare right-hand side that are timed together.
const CALLS: u32 = 200_000;

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

/// Seconds of one evaluation: what more of the train's time costs, without the making ready. A
/// small train runs for longer, so that the clock has something to see.
fn per_evaluation(equations: &Equations) -> f64 {
    let more = 400.0 / equations.model.scenario.bodies.len() as f64;
    let (short, long) = (run(equations, 1.0), run(equations, 1.0 + more));
    (long.0 - short.0) / (long.1 - short.1)
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

/// Further components on a chain of ten: active, and there but idle.
const FURTHER: [(&str, &str); 18] = [
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
        "load over the angle",
        "loads:\n  more: { body: body_5, law: { periodic: { mean: 0 N*m, harmonics: [{ order: 2, amplitude: 1 N*m }] } } }\n",
    ),
    (
        "axial rotor by its formula",
        "loads:\n  more: { body: body_5, law: { axial_rotor: { radius: 1 m, density: 1.2 kg/m3, flow: 3 m/s } } }\n",
    ),
    (
        "propeller by its series",
        "loads:\n  more: { body: body_5, law: { propeller: { diameter: 0.2 m, advance: 1 m/s, torque_coefficient: { b_series: { blades: 4, pitch_ratio: 1, area_ratio: 0.7 } } } } }\n",
    ),
    (
        "prescribed torque of zero (idle)",
        "loads:\n  more: { body: body_5, law: { prescribed: { torque: 0 N*m } } }\n",
    ),
    (
        "prescribed torque that is a sine",
        "loads:\n  more: { body: body_5, law: { prescribed: { torque: { sine: { mean: 0 N*m, amplitude: 1 N*m, frequency: 1 Hz } } } } }\n",
    ),
    (
        "power-law load scaled by zero (idle)",
        "loads:\n  more: { body: body_5, scale: 0, law: { power_law: { torque: 1 N*m, speed: 10 rad/s, exponent: 2 } } }\n",
    ),
    (
        "brake that is open (idle)",
        "brakes:\n  more: { body: body_5, torque: 100 N*m, applied: 0 }\n",
    ),
    ("brake that slides", "brakes:\n  more: { body: body_5, torque: 0.01 N*m, applied: 1 }\n"),
    (
        "friction that slides or sticks",
        "loads:\n  more: { body: body_5, law: { friction: { sliding: 0.5 N*m } } }\n",
    ),
    (
        "cage motor by Kloss",
        "motors:\n  more: { body: body_5, law: { induction: { synchronous_speed: 100 rad/s, breakdown_torque: 1 N*m, breakdown_slip: 20 % } } }\n",
    ),
    (
        "cage motor by its plate",
        "motors:\n  more: { body: body_5, law: { rating_plate: { power: 50 W, speed: 97 rad/s, synchronous_speed: 100 rad/s, starting_torque: 220 %, pull_up_torque: 180 %, breakdown_torque: 290 % } } }\n",
    ),
    (
        "speed controller with integral and lag",
        "motors:\n  more: { body: body_5, law: { speed_loop: { speed: 0 rad/s, torque_limit: 5 N*m, gain: 0.1 N*m*s/rad, integral_time: 1 s, lag: 10 ms } } }\n",
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
        "rigid disc (no state of its own)",
        "gear_pairs:\n  more: { between: [body_5, disc], ratio: 2 }\n",
    ),
];

/// The chain of ten with one more component.
fn with_one_more(what: &str, more: &str) -> Option<Equations> {
    let mut text = chain(10, "");
    if more.contains("disc") {
        text = text.replace("shafts:\n", "  disc: { inertia: 0.01 kg*m2 }\nshafts:\n");
    }
    // A second motor stands in the section that is already there.
    match more.strip_prefix("motors:\n") {
        Some(motor) => text.push_str(motor),
        None => text.push_str(more),
    }
    let found = equations(&text);
    if found.is_none() {
        let _ = writeln!(std::io::stderr(), "{what}: the train is refused");
    }
    found
}

/// Seconds of one bare right-hand side in the mode of a state that moves.
fn per_bare_call(equations: &Equations) -> f64 {
    let overrides = equations.bank.no_overrides();
    let state: Vec<f64> =
        (0..equations.size).map(|place| 0.1 + 0.01 * (place as f64 % 7.0)).collect();
    let mode = Mode::of_state(equations, 0.1, &state, &overrides);
    let assembly = assemble(equations, &mode, 0.1, 0.2, &overrides);
    let rhs = Rhs::new(Evaluator { equations, assembly: &assembly, overrides: &overrides });
    let mut rates = vec![0.0; equations.size];
    let clock = Instant::now();
    let begun = seconds(clock);
    for call in 0..CALLS {
        rhs.system(0.1 + 1e-7 * f64::from(call % 1000), &state, &mut rates);
        std::hint::black_box(&rates);
    }
    (seconds(clock) - begun) / f64::from(CALLS)
}

/// Median of the ratio of two trains by some measure, taken in turn.
fn ratio_by(measure: fn(&Equations) -> f64, one: &Equations, other: &Equations) -> f64 {
    let mut ratios: Vec<f64> = (0..ROUNDS).map(|_| measure(other) / measure(one)).collect();
    ratios.sort_by(f64::total_cmp);
    ratios[ROUNDS / 2]
}

/// Wheels that turn as one, each rubbed, pulled until they break away together.
fn rubbed(wheels: usize) -> String {
    let mut text = String::from(
        "lodeshaft: 1\ntitle: Rubbed wheels\nduration: 6 s\noutput_step: 0.5 s\nsolver: { tolerance: 1e-8 }\nbodies:\n",
    );
    for wheel in 0..wheels {
        let _ = writeln!(text, "  wheel_{wheel}: {{ inertia: 0.1 kg*m2 }}");
    }
    text.push_str("shafts:\n");
    for wheel in 1..wheels {
        let _ = writeln!(
            text,
            "  joint_{wheel}: {{ between: [wheel_{}, wheel_{wheel}], rigid: true }}",
            wheel - 1
        );
    }
    text.push_str("loads:\n");
    for wheel in 0..wheels {
        let _ = writeln!(
            text,
            "  gland_{wheel}: {{ body: wheel_{wheel}, law: {{ friction: {{ sliding: 0.5 N*m, breakaway: 1 N*m }} }} }}"
        );
    }
    let pull = 1.2 * wheels as f64;
    let _ = writeln!(
        text,
        "motors:\n  winch: {{ body: wheel_0, law: {{ prescribed: {{ torque: {{ ramp: {{ start: 0 s, end: 6 s, from: 0 N*m, to: {pull} N*m }} }} }} }} }}"
    );
    text
}

fn main() {
    let mut out = String::new();
    let Some(smallest) = equations(&chain(10, "")) else { return };
    let _ = writeln!(out, "chains, cost of an evaluation over that of ten bodies:");
    for bodies in [10, 50, 200] {
        let Some(train) = equations(&chain(bodies, "")) else { continue };
        let found = ratio_by(per_evaluation, &smallest, &train);
        let share = found / (bodies as f64 / 10.0);
        let _ = writeln!(out, "  {bodies:>3} bodies: {found:6.2} ({share:.2} of proportion)");
    }
    let _ = writeln!(
        out,
        "one more component on the chain of ten, further cost of an evaluation with observer and audit / of a bare right-hand side:"
    );
    for (what, more) in FURTHER {
        let Some(train) = with_one_more(what, more) else { continue };
        let whole = 100.0 * (ratio_by(per_evaluation, &smallest, &train) - 1.0);
        let bare = 100.0 * (ratio_by(per_bare_call, &smallest, &train) - 1.0);
        let _ = writeln!(out, "  {what}: {whole:+.0} / {bare:+.0} %");
    }
    let _ = writeln!(out, "wheels that turn as one, each rubbed: a run of 6 s over that of ten:");
    if let Some(ten) = equations(&rubbed(10)) {
        for wheels in [10, 100] {
            let Some(train) = equations(&rubbed(wheels)) else { continue };
            let whole = |equations: &Equations| run(equations, 6.0).0;
            let _ = writeln!(out, "  {wheels:>3} wheels: {:.1}", ratio_by(whole, &ten, &train));
        }
    }
    let _ = std::io::stdout().write_all(out.as_bytes());
}
