//! Functions whose sign change stops the run: the equations change there.

use super::conditions::Conditions;
use super::tracking;
use crate::equations::dot;
use crate::equations::frame::{Evaluator, Frame};
use crate::equations::mode::{Contact, FrictionMode, Mode};
use std::f64::consts::{PI, TAU};

/// A guard trips when it falls below minus this; guards are scaled to working values of about 1.
pub const TRIP: f64 = 1e-12;

/// One guard.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Guard {
    /// A law's input falls below the lower end of its piece.
    Lower(usize),
    /// A law's input rises above the upper end of its piece.
    Upper(usize),
    /// A sliding element comes to rest.
    Slide(usize),
    /// The stuck set can hold no longer.
    Hold,
    /// A shaft's flank opens.
    Open(usize),
    /// A shaft's flank closes.
    Close(usize),
    /// A controller's error changes sign while the limit acts.
    Windup(usize),
    /// A controller slides along its limit no longer.
    Track(usize),
    /// The integral of a pitch loop comes to the end of its way, or is drawn back.
    PitchEnd(usize),
    /// A follower comes to its limited rate, or leaves it.
    Slew(usize),
    /// A protection's condition becomes true.
    Condition(usize),
    /// A protection's condition ceases before its time.
    ConditionLost(usize),
    /// A magnet slips while a protection counts slips: the well it is in.
    Slip(usize, i64),
}

/// The guards in force in a mode.
pub fn list(
    evaluator: &Evaluator<'_>,
    mode: &Mode,
    conditions: &Conditions,
    state: &[f64],
) -> Vec<Guard> {
    let equations = evaluator.equations;
    let mut guards = Vec::new();
    for active in &evaluator.assembly.active {
        let Some(law) = equations.law_at(active.place) else { continue };
        let Some(&piece) = mode.pieces.get(active.place) else { continue };
        // At standstill a sliding element is watched by its own guard.
        let counts = |bound: &f64| active.place < equations.terms.len() || *bound != 0.0;
        let bounds = law.boundaries();
        if piece.checked_sub(1).and_then(|below| bounds.get(below)).is_some_and(counts) {
            guards.push(Guard::Lower(active.place));
        }
        if bounds.get(piece).is_some_and(counts) {
            guards.push(Guard::Upper(active.place));
        }
    }
    for (index, friction) in mode.frictions.iter().enumerate() {
        if matches!(friction, FrictionMode::Forward | FrictionMode::Backward) {
            guards.push(Guard::Slide(index));
        }
    }
    if !evaluator.assembly.stuck.is_empty() {
        guards.push(Guard::Hold);
    }
    for (index, contact) in mode.contacts.iter().enumerate() {
        match contact {
            Contact::Always => {}
            Contact::Gap => guards.push(Guard::Close(index)),
            Contact::Forward | Contact::Backward => guards.push(Guard::Open(index)),
        }
    }
    for (index, controller) in equations.controllers.iter().enumerate() {
        if controller.integral.is_some() && mode.pieces[controller.command] != 1 {
            guards.push(Guard::Windup(index));
        }
        if mode.tracking[index] {
            guards.push(Guard::Track(index));
        }
    }
    for (index, follower) in equations.followers.iter().enumerate() {
        if follower.slew.is_some() {
            guards.push(Guard::Slew(index));
        }
    }
    guards.extend((0..equations.pitches.len()).map(Guard::PitchEnd));
    guards.retain(|guard| tracking::is_watched(mode, &equations.controllers, *guard));
    conditions.guards(&mut guards);
    for &magnet in &conditions.slip_watched {
        let place = equations.phase_state[magnet];
        let phase = state[place] * equations.scale[place];
        // The load angle lies in (-pi, pi].
        let well = ((phase - PI) / TAU).ceil() as i64;
        guards.push(Guard::Slip(magnet, well));
    }
    guards
}

/// The value of a guard; at or above zero while nothing happens.
pub fn value(
    guard: Guard,
    evaluator: &Evaluator<'_>,
    mode: &Mode,
    conditions: &Conditions,
    state: &[f64],
    frame: &Frame,
) -> f64 {
    let equations = evaluator.equations;
    let boundary = |term: usize, place: usize| -> f64 {
        if let Some(edge) = moving_edge(evaluator, term, place, state) {
            return edge;
        }
        equations.law_at(term).and_then(|law| law.boundaries().get(place)).copied().unwrap_or(0.0)
    };
    match guard {
        Guard::Lower(term) => {
            let edge = boundary(term, mode.pieces[term] - 1);
            let (place, size) = evaluator.place_on_axis(term, state, frame);
            (place - edge) / size
        }
        Guard::Upper(term) => {
            let edge = boundary(term, mode.pieces[term]);
            let (place, size) = evaluator.place_on_axis(term, state, frame);
            (edge - place) / size
        }
        Guard::Slide(index) => {
            let friction = &equations.frictions[index];
            mode.frictions[index].direction() * dot(&friction.speed, state) / friction.speed_size
        }
        Guard::Hold => frame.holding.as_ref().map_or(1.0, |holding| {
            if holding.holds { holding.margin.max(0.0) } else { holding.margin.min(-2.0 * TRIP) }
        }),
        Guard::Open(shaft) => match mode.contacts[shaft] {
            Contact::Backward => flank(evaluator, shaft, state, -1.0),
            _ => flank(evaluator, shaft, state, 1.0),
        },
        Guard::Close(shaft) => {
            -flank(evaluator, shaft, state, 1.0).max(flank(evaluator, shaft, state, -1.0))
        }
        Guard::Windup(index) => {
            let controller = &equations.controllers[index];
            let Some(integral) = controller.integral else { return 1.0 };
            let term = &equations.terms[integral];
            let error = controller_error(evaluator, integral, state, frame);
            let outwards = if mode.pieces[controller.command] == 2 { error } else { -error };
            let sign = if mode.held[index] { 1.0 } else { -1.0 };
            sign * outwards / term.input_size
        }
        Guard::Track(index) => tracking::guard(evaluator, mode, index, state, frame),
        Guard::PitchEnd(index) => {
            let pitch = &equations.pitches[index];
            match mode.pitch_held[index] {
                0 => pitch.room(state, &equations.scale) / equations.scale[pitch.integral_state],
                side => {
                    let asked = evaluator.equations.bank.value_in(
                        pitch.reference,
                        frame.time,
                        evaluator.assembly.start,
                        evaluator.overrides,
                    );
                    f64::from(side) * pitch.error(asked, state) / pitch.speed_size
                }
            }
        }
        Guard::Slew(index) => slew(evaluator, mode.slewing[index], index, state, frame),
        Guard::Condition(index) => conditions.guard(index, frame, false),
        Guard::ConditionLost(index) => conditions.guard(index, frame, true),
        Guard::Slip(magnet, well) => {
            let place = equations.phase_state[magnet];
            let phase = state[place] * equations.scale[place] - TAU * well as f64;
            PI - phase.abs()
        }
    }
}

/// The limit of a command where it follows the speed.
fn moving_edge(evaluator: &Evaluator<'_>, term: usize, side: usize, state: &[f64]) -> Option<f64> {
    let equations = evaluator.equations;
    let controller = equations.controllers.iter().find(|one| one.command == term)?;
    controller.moving_limits?;
    Some(controller.edge(equations, side, state))
}

/// Room to the limited rate while a follower keeps up, else how far its command is out of reach.
fn slew(evaluator: &Evaluator<'_>, slewing: i8, index: usize, state: &[f64], frame: &Frame) -> f64 {
    let equations = evaluator.equations;
    let follower = &equations.followers[index];
    let Some((_, rate)) = follower.slew else { return 1.0 };
    let distance = follower.distance(state, &equations.scale, &frame.laws);
    let reach = rate * follower.lag;
    let room = match slewing {
        0 => reach - distance.abs(),
        sign => f64::from(sign) * distance - reach,
    };
    room / equations.scale[follower.state]
}

/// Error of a controller; its integral term may be left out of the equations while it is held.
pub(super) fn controller_error(
    evaluator: &Evaluator<'_>,
    integral: usize,
    state: &[f64],
    frame: &Frame,
) -> f64 {
    if evaluator.assembly.active.iter().any(|active| active.place == integral) {
        return frame.inputs[integral];
    }
    let term = &evaluator.equations.terms[integral];
    let time = frame.time;
    let bank = &evaluator.equations.bank;
    let start = evaluator.assembly.start;
    let signal = |slot| bank.value_in(slot, time, start, evaluator.overrides);
    let offset: f64 = term.offsets.iter().map(|(factor, slot)| factor * signal(*slot)).sum();
    dot(&term.input, state) + offset
}

/// How far a flank is closed on one side: both the overlap and the torque must be positive.
pub fn flank(evaluator: &Evaluator<'_>, shaft: usize, state: &[f64], side: f64) -> f64 {
    let equations = evaluator.equations;
    let Some(place) = equations.twist_state[shaft] else { return -1.0 };
    let model = &equations.model.shafts[shaft];
    let scale = equations.scale[place];
    let overlap = side * state[place] * scale - model.backlash / 2.0;
    let row = equations.speed_row(&model.row());
    let torque = model.stiffness * overlap + model.damping * side * dot(&row, state);
    (overlap / scale).min(torque / (model.stiffness * scale))
}
