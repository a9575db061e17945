//! Friction elements at rest: which hold and which give way.
//!
//! All elements whose members stand still to each other are tried as stuck together. When the
//! set cannot hold, the one loaded most in relation to its limit gives way (ties by order in the
//! file): its sliding torque keeps the sense of its holding torque, so it slides the other way.
//! It must then accelerate the way it slides.

use crate::equations::assembly::assemble;
use crate::equations::frame::{Evaluator, Frame};
use crate::equations::mode::{FrictionMode, Mode};
use crate::equations::{Equations, Owner, dot};
use crate::results::{Event, EventKind};
use crate::signal::course::Overrides;

/// Residual speeds up to this share of the working speed are taken out when elements stick.
const RESIDUE: f64 = 1e-6;

/// Accelerations up to this share of what the limit could cause are rounding.
const ROUNDING: f64 = 1e-9;

/// Marks elements whose limit is zero all along as absent, and brings back those that act again.
pub fn presence(
    equations: &Equations,
    mode: &mut Mode,
    time: f64,
    end: f64,
    state: &[f64],
    overrides: &Overrides,
) {
    for (index, friction) in equations.frictions.iter().enumerate() {
        let absent = friction.breakaway.largest() == 0.0
            || friction.factor.slots.iter().any(|(slot, _)| {
                equations.bank.constant_on(*slot, time, end, overrides) == Some(0.0)
            });
        let speed = dot(&friction.speed, state);
        let friction = match (absent, mode.frictions[index]) {
            (true, _) => FrictionMode::Absent,
            (false, FrictionMode::Absent) => friction.judge(speed),
            (false, other) => other,
        };
        mode.set_friction(equations, index, friction, state);
    }
}

/// Decides what the elements at rest do; the state's residual speeds along stuck rows are taken out.
///
/// `tripped` says that the holding guard has just tripped: at least one element gives way.
pub fn resolve(
    equations: &Equations,
    mode: &mut Mode,
    time: f64,
    end: f64,
    state: &mut [f64],
    overrides: &Overrides,
    tripped: bool,
    events: Option<&mut Vec<Event>>,
) {
    let before = mode.frictions.clone();
    for (index, friction) in equations.frictions.iter().enumerate() {
        if mode.frictions[index] != FrictionMode::Absent {
            let judged = friction.judge(dot(&friction.speed, state));
            mode.set_friction(equations, index, judged, state);
        }
    }
    let mut refused: Vec<usize> = Vec::new();
    let mut frame = Frame::default();
    for _ in 0..=2 * equations.frictions.len() {
        let assembly = assemble(equations, mode, time, end, overrides);
        let evaluator = Evaluator { equations, assembly: &assembly, overrides };
        evaluator.laws(time, state, &mut frame);
        let Some(holding) = frame.holding.clone() else { break };
        // A guard that has just tripped stands within rounding of the limit: it counts as passed.
        if holding.holds && !(tripped && holding.margin < 1e-8) {
            project(equations, &assembly.projection, state);
            break;
        }
        let Some(line) = weakest(&evaluator, time, &assembly.stuck, &holding.torque, &refused)
        else {
            break;
        };
        let index = assembly.stuck[line];
        // What the element's own limit could do to its members: the size of a real acceleration.
        let size = assembly.stuck_compliance[(line, line)] * evaluator.limit(index, time).largest();
        let mut released = false;
        for torque in [holding.torque[line], -holding.torque[line]] {
            let slides = FrictionMode::sliding(-torque);
            if equations.frictions[index].never_slides(slides) {
                continue;
            }
            mode.set_friction(equations, index, slides, state);
            if accelerates(equations, mode, index, size, time, end, state, overrides) {
                released = true;
                break;
            }
        }
        if !released {
            mode.set_friction(equations, index, FrictionMode::Stuck, state);
            refused.push(index);
        }
    }
    if let Some(events) = events {
        tell(equations, &before, mode, time, events);
    }
}

fn weakest(
    evaluator: &Evaluator<'_>,
    time: f64,
    stuck: &[usize],
    torque: &[f64],
    refused: &[usize],
) -> Option<usize> {
    let mut best: Option<(usize, f64)> = None;
    for (line, index) in stuck.iter().enumerate() {
        if refused.contains(index) {
            continue;
        }
        let limit = evaluator.limit(*index, time);
        let share = limit.use_by(torque[line]);
        // Ties go to the first in the file: a later one must be clearly larger.
        if best.is_none_or(|(_, largest)| share > largest * (1.0 + 1e-12)) {
            best = Some((line, share));
        }
    }
    best.map(|(line, _)| line)
}

/// True when an element released in its mode's direction speeds up that way.
fn accelerates(
    equations: &Equations,
    mode: &Mode,
    index: usize,
    size: f64,
    time: f64,
    end: f64,
    state: &[f64],
    overrides: &Overrides,
) -> bool {
    let assembly = assemble(equations, mode, time, end, overrides);
    let evaluator = Evaluator { equations, assembly: &assembly, overrides };
    let rhs = super::rhs::Rhs::new(evaluator);
    let mut rates = vec![0.0; equations.size];
    rhs.system(time, state, &mut rates);
    let acceleration = dot(&equations.frictions[index].speed, &rates);
    // Others may still hold its members: then the acceleration is nothing but rounding.
    acceleration * mode.frictions[index].direction() >= -ROUNDING * size
}

/// Takes the tiny residual speeds along stuck rows out of the state.
fn project(equations: &Equations, projection: &Option<nalgebra::DMatrix<f64>>, state: &mut [f64]) {
    let Some(keep) = projection else { return };
    let speeds = nalgebra::DVector::from_fn(equations.speeds, |place, _| {
        state[place] * equations.scale[place]
    });
    let kept = keep * &speeds;
    for place in 0..equations.speeds {
        let scaled = kept[place] / equations.scale[place];
        if (scaled - state[place]).abs() <= RESIDUE {
            state[place] = scaled;
        }
    }
}

fn tell(
    equations: &Equations,
    before: &[FrictionMode],
    mode: &Mode,
    time: f64,
    events: &mut Vec<Event>,
) {
    for (index, (old, new)) in before.iter().zip(&mode.frictions).enumerate() {
        let name = &equations.frictions[index].name;
        let clutch = match equations.frictions[index].owner {
            Owner::Clutch(place) => equations.model.scenario.clutches.get(place),
            _ => None,
        };
        let (kind, text) = match (old, new) {
            (FrictionMode::Stuck, FrictionMode::Forward | FrictionMode::Backward)
            | (FrictionMode::Forward, FrictionMode::Backward)
            | (FrictionMode::Backward, FrictionMode::Forward)
                if clutch.is_some_and(|clutch| clutch.runs_free(new.direction())) =>
            {
                (EventKind::Sliding, format!("`{name}` runs free"))
            }
            (FrictionMode::Stuck, FrictionMode::Forward | FrictionMode::Backward)
                if clutch.is_some() =>
            {
                (EventKind::Sliding, format!("`{name}` begins to slip"))
            }
            (FrictionMode::Forward | FrictionMode::Backward, FrictionMode::Stuck)
                if clutch.is_some() =>
            {
                (EventKind::Stuck, format!("`{name}` locks"))
            }
            (FrictionMode::Stuck, FrictionMode::Forward | FrictionMode::Backward) => {
                (EventKind::Sliding, format!("`{name}` begins to slide"))
            }
            (FrictionMode::Forward | FrictionMode::Backward, FrictionMode::Stuck) => {
                (EventKind::Stuck, format!("`{name}` sticks"))
            }
            (FrictionMode::Forward, FrictionMode::Backward)
            | (FrictionMode::Backward, FrictionMode::Forward) => {
                (EventKind::Sliding, format!("`{name}` {}", Event::OTHER_WAY))
            }
            _ => continue,
        };
        events.push(Event {
            time,
            kind,
            of: name.clone(),
            value: new.direction(),
            unit: "1",
            text,
        });
    }
}
