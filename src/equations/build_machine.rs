//! The flux equations of an induction machine as terms.

use super::build::slot;
use super::machine::Machine;
use super::{Equations, Factor, Owner, PowerKind, Shape, StateRow, Target, Term, speed_row};
use crate::component::law::Law;
use crate::component::motor::circuit::Circuit;
use crate::component::motor::{Motor, MotorLaw};
use crate::model::BodyRow;

/// Adds the states and terms of a machine; see [`super::machine`] for the equations.
pub(super) fn add_machine(
    equations: &mut Equations,
    index: usize,
    motor: &Motor,
    direction: &BodyRow,
    input_size: f64,
) {
    let MotorLaw::InductionCircuit { figures, voltage, connected, .. } = &motor.law else { return };
    let path = |key: &str| format!("motors.{}.law.induction_circuit.{key}", motor.name);
    let voltage = slot(equations, path("voltage"), voltage);
    let connected = slot(equations, path("connected"), connected);
    let circuit = Circuit::new(*figures);
    let pairs = f64::from(figures.pole_pairs);
    let line = circuit.synchronous_speed() * pairs;
    let magnetising = figures.magnetising_reactance;
    let rotor = figures.rotor_reactance + magnetising;
    let stator = figures.stator_reactance + magnetising;
    let share = magnetising / rotor;
    let transient = stator - magnetising * share;
    let resistance = figures.stator_resistance + share * share * figures.rotor_resistance;
    let decay = figures.rotor_resistance / rotor;
    let rated = circuit.phase_voltage();
    let mut new_state = |size: f64| {
        equations.scale.push(size);
        equations.scale.len() - 1
    };
    let (current, flux) = (rated / transient, rated);
    let states @ [a, b, c, d] =
        [new_state(current), new_state(current), new_state(flux), new_state(flux)];
    let speed = speed_row(&equations.model, &equations.scale, direction);
    // Products of the electrical speed, as a share of the line's, with a flux component.
    let turning = |component: usize| -> Vec<(usize, usize, f64)> {
        speed
            .iter()
            .map(|(place, value)| (*place, component, value * pairs / line * flux))
            .collect()
    };
    let owner = Owner::Motor(index);
    let blank = |shape: Shape, input: StateRow, target: Target| Term {
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
        input_size: 1.0,
        heat: None,
    };
    let linear = |entries: &[(usize, f64)], place: usize, factor: f64| {
        blank(Shape::Linear, entries.to_vec(), Target::State(place, factor))
    };
    let product = |component: usize, place: usize, factor: f64| {
        blank(Shape::Products(turning(component)), Vec::new(), Target::State(place, factor))
    };
    let rate = line / transient;
    let first = equations.terms.len();
    let mut supply = blank(Shape::Law(Law::Contactor), Vec::new(), Target::State(a, rate * rated));
    supply.parameters = [Some(connected), Some(voltage)];
    let pull = share * decay * flux;
    equations.terms.extend([
        supply,
        linear(&[(a, -resistance * current), (b, transient * current), (c, pull)], a, rate),
        linear(&[(b, -resistance * current), (a, -transient * current), (d, pull)], b, rate),
        product(d, a, rate * share),
        product(c, b, -rate * share),
    ]);
    let feed = share * figures.rotor_resistance * current;
    equations.terms.extend([
        linear(&[(c, -decay * flux), (a, feed), (d, flux)], c, line),
        linear(&[(d, -decay * flux), (b, feed), (c, -flux)], d, line),
        product(d, c, -line),
        product(c, d, line),
    ]);
    let torque = 3.0 * share * pairs / line * current * flux;
    let synchronous_speed = circuit.synchronous_speed();
    equations.heats.push((index, synchronous_speed));
    equations.terms.push(Term {
        power: PowerKind::Drive,
        input_size,
        heat: Some((equations.heats.len() - 1, synchronous_speed)),
        ..blank(
            Shape::Products(vec![(c, b, torque), (d, a, -torque)]),
            speed.clone(),
            Target::Torque(direction.clone()),
        )
    });
    equations.machines.push(Machine {
        motor: index,
        circuit,
        states,
        speed,
        supply: first,
        stator: (first + 1..first + 5).collect(),
        voltage,
        connected,
    });
}
