//! How each channel follows from the state and the law values of one mode.

use super::build_magnet::{hysteresis_name, loss_drags};
use super::constraints::constraint_forms;
use super::mode::{Contact, Mode};
use super::parts::Parts;
use super::{Equations, Owner, Shape, StateRow, Target};
use crate::component::channel::{ChannelKind, ClutchChannel, MagneticChannel};
use crate::component::law::Law;
use crate::model::{BodyRow, body_index, difference};

/// A linear form over the scaled state and the law values.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LinearForm {
    /// Over the state.
    pub state: StateRow,
    /// Over law values by place.
    pub laws: Vec<(usize, f64)>,
    /// Added.
    pub constant: f64,
}

/// The way to a channel's value.
#[derive(Clone, Debug, PartialEq)]
pub enum ChannelForm {
    /// A linear form.
    Linear(LinearForm),
    /// A torque times a speed.
    Power(LinearForm, StateRow),
    /// Angle of a body: a form over the summed independent speeds (physical).
    Angle(Vec<(usize, f64)>),
    /// Something of a magnet that counts or wraps.
    Magnet(usize, MagneticChannel),
    /// Damping and drag of a magnet: squares of forms, and laws whose power is lost.
    Loss(Vec<(f64, StateRow)>, Vec<usize>),
    /// Flow, tip speed ratio or power coefficient of an axial rotor, advance ratio of a propeller:
    /// its term and which one.
    Rotor(usize, RotorChannel),
    /// Length of the stator current of a machine with flux equations: two states and their size.
    Vector([usize; 2], f64),
    /// Stator current of a circuit by its term.
    CircuitCurrent(usize),
}

/// Channels of an axial rotor or a propeller.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RotorChannel {
    /// m/s.
    Flow,
    /// Tip speed over flow.
    TipSpeedRatio,
    /// Power over the power of the flow.
    PowerCoefficient,
    /// Advance over what a turn of a propeller is wide.
    AdvanceRatio,
}

/// The forms of all channels in one mode.
pub fn forms(equations: &Equations, mode: &Mode, parts: &Parts) -> Vec<ChannelForm> {
    let constraint = constraint_forms(equations, parts);
    equations
        .model
        .channels
        .iter()
        .map(|channel| form(equations, mode, &constraint, channel.kind))
        .collect()
}

fn form(
    equations: &Equations,
    mode: &Mode,
    constraint: &[LinearForm],
    kind: ChannelKind,
) -> ChannelForm {
    let model = &equations.model;
    match kind {
        ChannelKind::BodySpeed(body) => linear(equations.speed_row(&[(body, 1.0)])),
        ChannelKind::BodyAngle(body) => ChannelForm::Angle(model.reduction.speeds[body].clone()),
        ChannelKind::ShaftTwist(shaft) => linear(
            equations.twist_state[shaft]
                .map(|place| (place, equations.scale[place]))
                .into_iter()
                .collect(),
        ),
        ChannelKind::ShaftTorque(shaft) => shaft_torque(equations, mode, constraint, shaft),
        ChannelKind::Magnetic(magnet, what) => magnetic(equations, magnet, what),
        ChannelKind::GearPairTorque(pair, member) => {
            let factor = if member == 0 { 1.0 } else { -model.scenario.gear_pairs[pair].ratio };
            ChannelForm::Linear(scaled(&constraint[pair], factor))
        }
        ChannelKind::GearPairLoss(pair) => {
            let (squares, laws) = drag(equations, Owner::GearPair(pair));
            ChannelForm::Loss(squares, laws)
        }
        ChannelKind::PlanetaryTorque(set, member) => {
            let teeth = &model.scenario.planetary_gears[set];
            let (sun, ring) = (f64::from(teeth.teeth_sun), f64::from(teeth.teeth_ring));
            let factor = [sun, -(sun + ring), ring][member.min(2)];
            ChannelForm::Linear(scaled(&constraint[model.scenario.gear_pairs.len() + set], factor))
        }
        ChannelKind::Clutch(index, what) => clutch(equations, Owner::Clutch(index), what),
        ChannelKind::FluidCoupling(index, what) => {
            clutch(equations, Owner::FluidCoupling(index), what)
        }
        ChannelKind::MotorTorque(index) => {
            ChannelForm::Linear(torque_of(equations, Owner::Motor(index)))
        }
        ChannelKind::LoadTorque(index) => {
            ChannelForm::Linear(torque_of(equations, Owner::Load(index)))
        }
        ChannelKind::BrakeTorque(index) => {
            ChannelForm::Linear(torque_of(equations, Owner::Brake(index)))
        }
        ChannelKind::MotorPower(index) => power_of(equations, Owner::Motor(index)),
        ChannelKind::MotorCurrent(index) => current(equations, index),
        ChannelKind::LoadPower(index) => power_of(equations, Owner::Load(index)),
        ChannelKind::BrakePower(index) => power_of(equations, Owner::Brake(index)),
        ChannelKind::LoadFlow(index) => rotor(equations, index, RotorChannel::Flow),
        ChannelKind::LoadTipSpeedRatio(index) => {
            rotor(equations, index, RotorChannel::TipSpeedRatio)
        }
        ChannelKind::LoadPowerCoefficient(index) => {
            rotor(equations, index, RotorChannel::PowerCoefficient)
        }
        ChannelKind::LoadPitch(index) => linear(
            equations
                .pitches
                .iter()
                .filter(|pitch| pitch.load == index)
                .map(|pitch| (pitch.state, equations.scale[pitch.state]))
                .collect(),
        ),
        ChannelKind::LoadAdvanceRatio(index) => rotor(equations, index, RotorChannel::AdvanceRatio),
    }
}

fn linear(state: StateRow) -> ChannelForm {
    ChannelForm::Linear(LinearForm { state, laws: Vec::new(), constant: 0.0 })
}

fn scaled(form: &LinearForm, factor: f64) -> LinearForm {
    LinearForm {
        state: form.state.iter().map(|(place, value)| (*place, value * factor)).collect(),
        laws: form.laws.iter().map(|(place, value)| (*place, value * factor)).collect(),
        constant: form.constant * factor,
    }
}

fn rotor(equations: &Equations, load: usize, what: RotorChannel) -> ChannelForm {
    let acts = |term: &super::Term| {
        term.owner == Owner::Load(load) && matches!(term.target, Target::Torque(_))
    };
    match equations.terms.iter().position(acts) {
        Some(term) => ChannelForm::Rotor(term, what),
        None => linear(Vec::new()),
    }
}

/// Root mean square of a line's current; with flux equations the length of the current's vector,
/// which is the same in steady running.
fn current(equations: &Equations, motor: usize) -> ChannelForm {
    let machine = equations.machines.iter().find(|machine| machine.motor == motor);
    if let Some(machine) = machine {
        let [a, b, ..] = machine.states;
        return ChannelForm::Vector([a, b], equations.scale[a]);
    }
    match equations.terms.iter().position(|term| term.owner == Owner::Motor(motor)) {
        Some(term) => ChannelForm::CircuitCurrent(term),
        None => linear(Vec::new()),
    }
}

fn shaft_torque(
    equations: &Equations,
    mode: &Mode,
    constraint: &[LinearForm],
    index: usize,
) -> ChannelForm {
    let model = &equations.model;
    let shaft = &model.shafts[index];
    let Some(place) = equations.twist_state[index] else {
        // The rigid shafts stand behind the gear pairs and planetary sets, in file order.
        let before = model.shafts[..index].iter().filter(|other| other.rigid).count();
        let row = model.scenario.gear_pairs.len() + model.scenario.planetary_gears.len() + before;
        return ChannelForm::Linear(scaled(&constraint[row], -1.0));
    };
    let offset = match mode.contacts[index] {
        Contact::Gap => return linear(Vec::new()),
        Contact::Always => 0.0,
        Contact::Forward => -shaft.stiffness * shaft.backlash / 2.0,
        Contact::Backward => shaft.stiffness * shaft.backlash / 2.0,
    };
    let mut state = vec![(place, shaft.stiffness * equations.scale[place])];
    if shaft.damping > 0.0 {
        let rate = equations.speed_row(&shaft.row());
        state.extend(rate.iter().map(|(speed, value)| (*speed, shaft.damping * value)));
    }
    let stages = equations.terms.iter().position(|term| term.owner == Owner::Shaft(index));
    let laws = stages.map(|place| (place, 1.0)).into_iter().collect();
    ChannelForm::Linear(LinearForm { state, laws, constant: offset })
}

fn magnetic(equations: &Equations, index: usize, what: MagneticChannel) -> ChannelForm {
    let magnet = &equations.model.magnets[index];
    let member = |place: usize| -> ChannelForm {
        let count = magnet.members.get(place).map_or(0.0, |member| member.count);
        let mut form = LinearForm::default();
        for (place, term) in equations.terms.iter().enumerate() {
            if term.owner != Owner::Magnet(index) {
                continue;
            }
            match (&term.shape, magnet.fading) {
                (Shape::Law(Law::Magnet(_)) | Shape::Warm(Law::Magnet(_), _), _) => {
                    form.laws.push((place, -count));
                }
                (Shape::Law(Law::FadingDamper { .. }), Some(fading)) => {
                    form.laws.push((place, -count / fading.count));
                }
                _ => {}
            }
        }
        if magnet.damping > 0.0 {
            let rate = equations.speed_row(&magnet.row());
            form.state = rate
                .iter()
                .map(|(place, value)| (*place, -count * magnet.damping * value))
                .collect();
        }
        ChannelForm::Linear(form)
    };
    match what {
        MagneticChannel::TorqueFirst => member(0),
        MagneticChannel::TorqueSecond => member(if magnet.coupling { 1 } else { 2 }),
        MagneticChannel::TorqueModulator => member(1),
        MagneticChannel::SlipSpeed => linear(equations.speed_row(&magnet.row())),
        MagneticChannel::Loss => {
            let (squares, drag) = drag(equations, Owner::Magnet(index));
            let fading = equations
                .terms
                .iter()
                .enumerate()
                .filter(|(_, term)| {
                    term.owner == Owner::Magnet(index) && term.power == super::PowerKind::Lost
                })
                .map(|(place, _)| place);
            ChannelForm::Loss(squares, fading.chain(drag).collect())
        }
        MagneticChannel::EddyLoss => {
            let drags = loss_drags(equations, index).into_iter();
            let squares = drags.filter(|(row, _)| !row.is_empty());
            let squares = squares.map(|(row, drag)| (drag.eddy, equations.speed_row(&row)));
            ChannelForm::Loss(squares.collect(), Vec::new())
        }
        MagneticChannel::HysteresisLoss => {
            let name = hysteresis_name(&magnet.name);
            let drag = equations.frictions.iter().enumerate();
            let drag = drag.filter(|(_, friction)| friction.name.starts_with(&name));
            let places = drag.map(|(place, _)| equations.terms.len() + place);
            ChannelForm::Loss(Vec::new(), places.collect())
        }
        MagneticChannel::Temperature(node) => {
            let found = equations.thermal.iter().find(|it| it.magnet == index && it.node == node);
            let Some(state) = found else { return linear(Vec::new()) };
            ChannelForm::Linear(LinearForm {
                state: vec![(state.place, equations.scale[state.place])],
                laws: Vec::new(),
                constant: state.ambient,
            })
        }
        other => ChannelForm::Magnet(index, other),
    }
}

/// Dampers and dry friction of a thing: squares of forms with weights, and places of laws.
fn drag(equations: &Equations, owner: Owner) -> (Vec<(f64, StateRow)>, Vec<usize>) {
    let dampers = equations.dampers.iter().filter(|damper| damper.owner == owner);
    let squares =
        dampers.map(|damper| (damper.coefficient, equations.speed_row(&damper.row))).collect();
    let frictions = equations.frictions.iter().enumerate();
    let laws = frictions
        .filter(|(_, friction)| friction.owner == owner)
        .map(|(place, _)| equations.terms.len() + place)
        .collect();
    (squares, laws)
}

/// The bodies that a motor, load or brake acts on: its own, and the one it acts against.
pub fn ends_of(equations: &Equations, owner: Owner) -> (Option<usize>, Option<usize>) {
    let scenario = &equations.model.scenario;
    let against =
        |name: &Option<String>| name.as_deref().and_then(|name| body_index(scenario, name));
    match owner {
        Owner::Motor(index) => (body_index(scenario, &scenario.motors[index].body), None),
        Owner::Load(index) => {
            let load = &scenario.loads[index];
            (body_index(scenario, &load.body), against(&load.against))
        }
        Owner::Brake(index) => {
            let brake = &scenario.brakes[index];
            (body_index(scenario, &brake.body), against(&brake.against))
        }
        Owner::Clutch(index) => {
            let [a, b] = &scenario.clutches[index].between;
            (body_index(scenario, b), body_index(scenario, a))
        }
        Owner::FluidCoupling(index) => {
            let [pump, turbine] = &scenario.fluid_couplings[index].between;
            (body_index(scenario, turbine), body_index(scenario, pump))
        }
        Owner::Magnet(_) | Owner::Shaft(_) | Owner::GearPair(_) => (None, None),
    }
}

/// The friction of a clutch and the law of a fluid coupling put their value on the first body and
/// the opposite on the second.
fn clutch(equations: &Equations, owner: Owner, what: ClutchChannel) -> ChannelForm {
    let terms = equations.terms.iter().position(|term| term.owner == owner);
    let (law, speed) = match terms {
        Some(place) => (place, &equations.terms[place].input),
        None => {
            let of = |friction: &super::Friction| friction.owner == owner;
            let Some(place) = equations.frictions.iter().position(of) else {
                return linear(Vec::new());
            };
            (equations.terms.len() + place, &equations.frictions[place].speed)
        }
    };
    match what {
        ClutchChannel::Torque => {
            ChannelForm::Linear(LinearForm { laws: vec![(law, -1.0)], ..LinearForm::default() })
        }
        ClutchChannel::SlipSpeed => linear(speed.clone()),
        ClutchChannel::Loss => ChannelForm::Loss(Vec::new(), vec![law]),
    }
}

fn torque_of(equations: &Equations, owner: Owner) -> LinearForm {
    let (body, _) = ends_of(equations, owner);
    let share = |direction: &BodyRow| -> f64 {
        direction.iter().filter(|(place, _)| Some(*place) == body).map(|(_, factor)| factor).sum()
    };
    let mut form = LinearForm::default();
    for (place, term) in equations.terms.iter().enumerate() {
        if let (true, Target::Torque(direction)) = (term.owner == owner, &term.target) {
            form.laws.push((place, share(direction)));
        }
    }
    for (place, friction) in equations.frictions.iter().enumerate() {
        if friction.owner == owner {
            form.laws.push((equations.terms.len() + place, share(&friction.row)));
        }
    }
    form
}

fn power_of(equations: &Equations, owner: Owner) -> ChannelForm {
    let (body, against) = ends_of(equations, owner);
    ChannelForm::Power(torque_of(equations, owner), equations.speed_row(&difference(body, against)))
}
