//! Motors as terms of the equations.

use super::build::{factor_of, slot};
use super::build_drive::add_drive;
use super::{Equations, Factor, Owner, PowerKind, Shape, Target, Term, speed_row};
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
        MotorLaw::SpeedLoop { .. } | MotorLaw::TorqueLoop { .. } => {
            add_drive(equations, index, motor, body, sign, &factor);
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
        offsets: Vec::new(),
        parameters,
        by_state: [Vec::new(), Vec::new()],
        factor,
        target: Target::Torque(direction),
        power: PowerKind::Drive,
        input_size: size,
        heat,
    });
}
