//! Motors as terms of the equations, speed loops with their states.

use super::build::{factor_of, slot};
use super::{
    Controller, Equations, Factor, Owner, PowerKind, Shape, StateRow, Target, Term, speed_row,
};
use crate::component::law::Law;
use crate::component::motor::circuit::Circuit;
use crate::component::motor::{Motor, MotorLaw};
use crate::model::{BodyRow, body_index};
use crate::signal::Signal;

/// Adds the terms of a motor.
pub(super) fn add_motor(equations: &mut Equations, index: usize, motor: &Motor) {
    let Some(body) = body_index(&equations.model.scenario, &motor.body) else { return };
    let sign = if motor.reversed { -1.0 } else { 1.0 };
    let direction: BodyRow = vec![(body, sign)];
    let speed = speed_row(&equations.model, &equations.scale, &direction);
    let size = equations.model.scales.body_speed[body];
    if matches!(motor.law, MotorLaw::InductionCircuit { transient: true, .. }) {
        super::build_machine::add_machine(equations, index, motor, &direction, size);
        return;
    }
    let mut factor = match motor.law {
        // It has no scale, and none can be set.
        MotorLaw::InductionCircuit { .. } => Factor::default(),
        _ => factor_of(equations, "motors", &motor.name, &motor.scale),
    };
    let mut parameters = [None; 2];
    let law_path = |law: &str, key: &str| format!("motors.{}.law.{law}.{key}", motor.name);
    let mut with_voltage = |equations: &mut Equations, law: &str, voltage: &Signal| {
        let place = slot(equations, law_path(law, "voltage"), voltage);
        factor.slots.push((place, 2));
    };
    let law = match &motor.law {
        MotorLaw::RatingPlate { voltage, .. } => {
            with_voltage(equations, "rating_plate", voltage);
            motor.law.scalar()
        }
        MotorLaw::Induction { voltage, .. } => {
            with_voltage(equations, "induction", voltage);
            motor.law.scalar()
        }
        MotorLaw::Curve { voltage, .. } => {
            with_voltage(equations, "curve", voltage);
            motor.law.scalar()
        }
        MotorLaw::InductionCircuit { voltage, connected, .. } => {
            with_voltage(equations, "induction_circuit", voltage);
            let path = law_path("induction_circuit", "connected");
            parameters[0] = Some(slot(equations, path, connected));
            motor.law.scalar()
        }
        MotorLaw::OptimalPower { .. } => motor.law.scalar(),
        MotorLaw::Prescribed { torque } => {
            let place = slot(equations, law_path("prescribed", "torque"), torque);
            factor.slots.push((place, 1));
            Some(Law::Unit)
        }
        MotorLaw::SpeedLoop { .. } => {
            add_speed_loop(equations, index, motor, body, sign, factor);
            return;
        }
    };
    let Some(law) = law else { return };
    let synchronous_speed = match &motor.law {
        MotorLaw::RatingPlate { synchronous_speed, .. }
        | MotorLaw::Induction { synchronous_speed, .. } => Some(*synchronous_speed),
        MotorLaw::InductionCircuit { figures, .. } => {
            Some(Circuit::new(*figures).synchronous_speed())
        }
        _ => None,
    };
    let heat = synchronous_speed.map(|speed| {
        equations.heats.push((index, speed));
        (equations.heats.len() - 1, speed)
    });
    equations.terms.push(Term {
        owner: Owner::Motor(index),
        speed: matches!(law, Law::Unit).then(|| speed.clone()),
        input: if matches!(law, Law::Unit) { Vec::new() } else { speed },
        shape: Shape::Law(law),
        offset: None,
        parameters,
        factor,
        target: Target::Torque(direction),
        power: PowerKind::Drive,
        input_size: size,
        heat,
    });
}

/// Command, integral and lag of a speed loop, as three terms at the most.
///
/// ```text
/// e = ref - w;  command = clamp(gain*e + I);  dI/dt = gain*e/Ti unless held;  lag*dT/dt = command - T
/// ```
fn add_speed_loop(
    equations: &mut Equations,
    index: usize,
    motor: &Motor,
    body: usize,
    sign: f64,
    factor: Factor,
) {
    let MotorLaw::SpeedLoop { speed, torque_limit, gain, integral_time, lag } = &motor.law else {
        return;
    };
    let direction: BodyRow = vec![(body, sign)];
    let own_speed = speed_row(&equations.model, &equations.scale, &direction);
    let reference = slot(equations, format!("motors.{}.law.speed_loop.speed", motor.name), speed);
    let new_state = |equations: &mut Equations| {
        equations.scale.push(*torque_limit);
        equations.scale.len() - 1
    };
    let integral_state = integral_time.map(|_| new_state(equations));
    let torque_state = (*lag > 0.0).then(|| new_state(equations));
    let error: StateRow = own_speed.iter().map(|(place, value)| (*place, -value)).collect();
    let mut input: StateRow = error.iter().map(|(place, value)| (*place, gain * value)).collect();
    if let Some(place) = integral_state {
        input.push((place, *torque_limit));
    }
    let command = equations.terms.len();
    let owner = Owner::Motor(index);
    let size = equations.model.scales.body_speed[body];
    equations.terms.push(Term {
        owner,
        shape: Shape::Law(Law::saturation(*torque_limit)),
        input,
        offset: Some((*gain, reference)),
        parameters: [None; 2],
        factor: if torque_state.is_none() { factor.clone() } else { Factor::default() },
        target: match torque_state {
            Some(place) => Target::State(place, 1.0 / lag),
            None => Target::Torque(direction.clone()),
        },
        power: if torque_state.is_none() { PowerKind::Drive } else { PowerKind::None },
        speed: Some(own_speed.clone()),
        input_size: *torque_limit,
        heat: None,
    });
    let integral = integral_state.zip(*integral_time).map(|(place, time)| {
        equations.terms.push(Term {
            owner,
            shape: Shape::Linear,
            input: error,
            offset: Some((1.0, reference)),
            parameters: [None; 2],
            factor: Factor::default(),
            target: Target::State(place, gain / time),
            power: PowerKind::None,
            speed: None,
            input_size: size,
            heat: None,
        });
        equations.terms.len() - 1
    });
    let scale = factor.slots.first().map(|(slot, _)| *slot);
    if let Some(place) = torque_state {
        equations.terms.push(Term {
            owner,
            shape: Shape::Linear,
            input: vec![(place, *torque_limit)],
            offset: None,
            parameters: [None; 2],
            factor,
            target: Target::Torque(direction),
            power: PowerKind::Drive,
            speed: Some(own_speed),
            input_size: *torque_limit,
            heat: None,
        });
    }
    equations.controllers.push(Controller {
        motor: index,
        command,
        integral,
        integral_state,
        torque_state,
        scale,
        limit: *torque_limit,
        gain: *gain,
        lag: *lag,
    });
}
