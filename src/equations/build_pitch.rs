//! Pitch loops as terms: command, integral, and blades that follow.

use super::build::slot;
use super::pitch::Pitch;
use super::{
    Equations, Factor, Follower, Owner, PowerKind, Shape, StateRow, Target, Term, speed_row,
};
use crate::component::law::Law;
use crate::component::load::Load;
use crate::component::load::pitch::PitchLoop;
use crate::model::body_index;

/// Working size of an angle of the blades, rad.
const SIZE: f64 = 0.1;

/// Adds the terms of a pitch loop; returns the pitch as a form over the scaled state.
pub(super) fn add_pitch(
    equations: &mut Equations,
    index: usize,
    load: &Load,
    pitch: &PitchLoop,
) -> StateRow {
    let name = pitch.body.as_ref().unwrap_or(&load.body);
    let Some(body) = body_index(&equations.model.scenario, name) else { return Vec::new() };
    let path = format!("loads.{}.law.axial_rotor.pitch_loop.speed", load.name);
    let reference = slot(equations, path, &pitch.speed);
    let asked = equations.bank.value(reference, 0.0, &equations.bank.no_overrides());
    // A mirrored law counts the speed the other way round, whatever body it looks at.
    let mirror = if load.reversed { -1.0 } else { 1.0 };
    let sense = if asked < 0.0 { -1.0 } else { 1.0 };
    let error = speed_row(&equations.model, &equations.scale, &[(body, sense * mirror)]);
    let asked_share = -sense;
    let mut new_state = || {
        equations.scale.push(SIZE);
        equations.scale.len() - 1
    };
    let (integral_state, state) = (new_state(), new_state());
    let (own, integral_row) = (vec![(state, SIZE)], vec![(integral_state, SIZE)]);
    let owner = Owner::Load(index);
    let blank = |shape: Shape, target: Target| Term {
        owner,
        shape,
        input: Vec::new(),
        offsets: Vec::new(),
        parameters: [None; 2],
        by_state: [Vec::new(), Vec::new()],
        factor: Factor::default(),
        target,
        power: PowerKind::None,
        speed: None,
        input_size: SIZE,
        heat: None,
    };
    let scaled: StateRow =
        error.iter().map(|(place, share)| (*place, share * pitch.gain)).collect();
    let halves_at = pitch.gain_halves_at.unwrap_or(f64::INFINITY);
    let first = equations.terms.len();
    let law = Law::PitchCommand { limits: pitch.angles, halves_at };
    equations.terms.push(Term {
        input: scaled.clone(),
        offsets: vec![(asked_share * pitch.gain, reference)],
        by_state: [own.clone(), integral_row],
        ..blank(Shape::Law(law), Target::State(state, 1.0 / pitch.lag))
    });
    equations.terms.push(Term {
        input: scaled,
        offsets: vec![(asked_share * pitch.gain, reference)],
        by_state: [own.clone(), Vec::new()],
        ..blank(
            Shape::Law(Law::Scheduled { halves_at }),
            Target::State(integral_state, 1.0 / pitch.integral_time),
        )
    });
    let slew = pitch.rate.map(|rate| {
        equations.terms.push(blank(Shape::Law(Law::Unit), Target::State(state, rate)));
        (first + 2, rate)
    });
    equations.followers.push(Follower {
        owner,
        commands: vec![first],
        state,
        lag: pitch.lag,
        slew,
    });
    equations.pitches.push(Pitch {
        load: index,
        integral: first + 1,
        integral_state,
        state,
        angles: pitch.angles,
        error,
        asked_share,
        reference,
        speed_size: equations.model.scales.body_speed[body],
    });
    own
}
