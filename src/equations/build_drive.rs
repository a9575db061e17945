//! Drives with a controller: command, limits, integral and lag as terms.

use super::build::slot;
use super::{
    Controller, Equations, Factor, Follower, Owner, PowerKind, Shape, StateRow, Target, Term,
    speed_row,
};
use crate::component::law::Law;
use crate::component::motor::torque_limit::TorqueLimit;
use crate::component::motor::{Drive, Motor, MotorLaw};
use crate::model::BodyRow;
use crate::signal::course::SlotId;

/// What a controller makes of its body's speed.
struct Asked {
    /// N*m*s/rad; 0 for a drive that is asked for a torque.
    gain: f64,
    integral_time: Option<f64>,
    reference: Option<SlotId>,
    feed_forward: SlotId,
}

/// Adds the terms of a drive; see [`super::controller`] for the equations.
pub(super) fn add_drive(
    equations: &mut Equations,
    index: usize,
    motor: &Motor,
    body: usize,
    sign: f64,
    factor: &Factor,
) {
    let path = |key: &str| format!("motors.{}.law.{key}", motor.name);
    let (asked, drive) = match &motor.law {
        MotorLaw::SpeedLoop { speed, gain, integral_time, feed_forward, drive } => {
            let reference = Some(slot(equations, path("speed_loop.speed"), speed));
            let feed_forward = slot(equations, path("speed_loop.feed_forward"), feed_forward);
            let integral_time = *integral_time;
            (Asked { gain: *gain, integral_time, reference, feed_forward }, drive)
        }
        MotorLaw::TorqueLoop { torque, drive } => {
            let feed_forward = slot(equations, path("torque_loop.torque"), torque);
            (Asked { gain: 0.0, integral_time: None, reference: None, feed_forward }, drive)
        }
        _ => return,
    };
    let limit = drive.limits.torque_limit;
    let direction: BodyRow = vec![(body, sign)];
    let own_speed = speed_row(&equations.model, &equations.scale, &direction);
    let size = equations.model.scales.body_speed[body];
    let new_state = |equations: &mut Equations| {
        equations.scale.push(limit);
        equations.scale.len() - 1
    };
    let integral_state = asked.integral_time.map(|_| new_state(equations));
    let torque_state = (drive.lag > 0.0).then(|| new_state(equations));
    let owner = Owner::Motor(index);
    let lagged = torque_state.map(|place| Target::State(place, 1.0 / drive.lag));
    let acts = |shape: Shape, input: StateRow, offsets: Vec<(f64, SlotId)>, size: f64| Term {
        owner,
        shape,
        input,
        offsets,
        parameters: [None; 2],
        by_state: [Vec::new(), Vec::new()],
        factor: if lagged.is_none() { factor.clone() } else { Factor::default() },
        target: lagged.clone().unwrap_or_else(|| Target::Torque(direction.clone())),
        power: if lagged.is_none() { PowerKind::Drive } else { PowerKind::None },
        speed: Some(own_speed.clone()),
        input_size: size,
        heat: None,
    };
    let error: StateRow = own_speed.iter().map(|(place, value)| (*place, -value)).collect();
    let mut input: StateRow = Vec::new();
    if asked.gain > 0.0 {
        input.extend(error.iter().map(|(place, value)| (*place, asked.gain * value)));
    }
    input.extend(integral_state.map(|place| (place, limit)));
    let mut offsets: Vec<(f64, SlotId)> =
        asked.reference.iter().map(|slot| (asked.gain, *slot)).collect();
    offsets.push((1.0, asked.feed_forward));
    let command = equations.terms.len();
    let follow_speed = drive.limits.follow_speed();
    let law = if follow_speed {
        Law::Between { limits: [-limit, limit] }
    } else {
        Law::saturation(limit)
    };
    equations.terms.push(acts(Shape::Law(law), input, offsets, limit));
    let moving_limits = follow_speed.then(|| {
        [-1.0, 1.0].map(|side| {
            let law = Law::TorqueLimit(TorqueLimit::new(&drive.limits, side));
            equations.terms.push(acts(Shape::Law(law), own_speed.clone(), Vec::new(), size));
            equations.terms.len() - 1
        })
    });
    let blank = |shape: Shape, input: StateRow, target: Target, size: f64| Term {
        owner,
        shape,
        input,
        offsets: Vec::new(),
        parameters: [None; 2],
        by_state: [Vec::new(), Vec::new()],
        factor: Factor::default(),
        target,
        power: PowerKind::None,
        speed: None,
        input_size: size,
        heat: None,
    };
    let integral = integral_state.zip(asked.integral_time).zip(asked.reference);
    let integral = integral.map(|((place, time), reference)| {
        let target = Target::State(place, asked.gain / time);
        let mut term = blank(Shape::Linear, error, target, size);
        term.offsets.push((1.0, reference));
        equations.terms.push(term);
        equations.terms.len() - 1
    });
    if let Some(place) = torque_state {
        let mut torque =
            blank(Shape::Linear, vec![(place, limit)], Target::Torque(direction.clone()), limit);
        torque.factor = factor.clone();
        torque.power = PowerKind::Drive;
        torque.speed = Some(own_speed.clone());
        equations.terms.push(torque);
        let commands = std::iter::once(command).chain(moving_limits.into_iter().flatten());
        add_follower(equations, owner, commands.collect(), place, drive);
    }
    equations.controllers.push(Controller {
        motor: index,
        command,
        integral,
        integral_state,
        torque_state,
        scale: factor.slots.first().map(|(slot, _)| *slot),
        limit,
        moving_limits,
        gain: asked.gain,
        speed: own_speed,
        reference: asked.reference,
        feed_forward: asked.feed_forward,
    });
}

/// The lag of a drive's torque, and the term that moves it at the limited rate.
fn add_follower(
    equations: &mut Equations,
    owner: Owner,
    commands: Vec<usize>,
    state: usize,
    drive: &Drive,
) {
    let slew = drive.torque_rate.map(|rate| {
        equations.terms.push(Term {
            owner,
            shape: Shape::Law(Law::Unit),
            input: Vec::new(),
            offsets: Vec::new(),
            parameters: [None; 2],
            by_state: [Vec::new(), Vec::new()],
            factor: Factor::default(),
            target: Target::State(state, rate),
            power: PowerKind::None,
            speed: None,
            input_size: 1.0,
            heat: None,
        });
        (equations.terms.len() - 1, rate)
    });
    equations.followers.push(Follower { owner, commands, state, lag: drive.lag, slew });
}
