//! Every place of a scenario where a signal holds a table.

use super::Scenario;
use crate::component::load::LoadLaw;
use crate::component::motor::MotorLaw;
use crate::signal::Signal;

/// Hands every signal that holds a table to `look`, with its path.
pub(super) fn each_with_table(scenario: &mut Scenario, look: &mut dyn FnMut(&str, &mut Signal)) {
    let mut visit = |path: String, signal: &mut Signal| {
        let mut holds = false;
        signal.visit("", &mut |_, inside| holds |= matches!(inside, Signal::Table { .. }));
        if holds {
            look(&path, signal);
        }
    };
    for named in &mut scenario.signals {
        visit(format!("signals.{}", named.name), &mut named.signal);
    }
    for motor in &mut scenario.motors {
        let path = format!("motors.{}", motor.name);
        if let Some(scale) = &mut motor.scale {
            visit(format!("{path}.scale"), scale);
        }
        let (key, signal) = match &mut motor.law {
            MotorLaw::RatingPlate { voltage, .. } => ("rating_plate.voltage", voltage),
            MotorLaw::Induction { voltage, .. } => ("induction.voltage", voltage),
            MotorLaw::Curve { voltage, .. } => ("curve.voltage", voltage),
            MotorLaw::Prescribed { torque } => ("prescribed.torque", torque),
            MotorLaw::SpeedLoop { speed, feed_forward, .. } => {
                visit(format!("{path}.law.speed_loop.feed_forward"), feed_forward);
                ("speed_loop.speed", speed)
            }
            MotorLaw::TorqueLoop { torque, .. } => ("torque_loop.torque", torque),
            MotorLaw::InductionCircuit { voltage, connected, .. } => {
                visit(format!("{path}.law.induction_circuit.connected"), connected);
                ("induction_circuit.voltage", voltage)
            }
            MotorLaw::OptimalPower { .. } => continue,
        };
        visit(format!("{path}.law.{key}"), signal);
    }
    for load in &mut scenario.loads {
        let path = format!("loads.{}", load.name);
        if let Some(scale) = &mut load.scale {
            visit(format!("{path}.scale"), scale);
        }
        match &mut load.law {
            LoadLaw::Prescribed { torque } => {
                visit(format!("{path}.law.prescribed.torque"), torque);
            }
            LoadLaw::AxialRotor { flow, pitch, pitch_loop, .. } => {
                visit(format!("{path}.law.axial_rotor.flow"), flow);
                visit(format!("{path}.law.axial_rotor.pitch"), pitch);
                if let Some(pitch_loop) = pitch_loop {
                    visit(
                        format!("{path}.law.axial_rotor.pitch_loop.speed"),
                        &mut pitch_loop.speed,
                    );
                }
            }
            LoadLaw::Propeller { advance, .. } => {
                visit(format!("{path}.law.propeller.advance"), advance);
            }
            LoadLaw::PowerLaw { .. }
            | LoadLaw::Friction { .. }
            | LoadLaw::Viscous { .. }
            | LoadLaw::Curve { .. }
            | LoadLaw::Periodic { .. }
            | LoadLaw::Reciprocating { .. } => {}
        }
    }
    for brake in &mut scenario.brakes {
        visit(format!("brakes.{}.applied", brake.name), &mut brake.applied);
    }
}
