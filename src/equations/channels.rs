//! How each channel follows from the state and the law values of one mode.

use super::holding::pseudo_inverse;
use super::mode::{Contact, Mode};
use super::parts::Parts;
use super::{Equations, Owner, StateRow, Target};
use crate::component::channel::{ChannelKind, MagneticChannel};
use crate::model::{BodyRow, body_index, difference};
use nalgebra::DMatrix;

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
        ChannelKind::PlanetaryTorque(set, member) => {
            let teeth = &model.scenario.planetary_gears[set];
            let (sun, ring) = (f64::from(teeth.teeth_sun), f64::from(teeth.teeth_ring));
            let factor = [sun, -(sun + ring), ring][member.min(2)];
            ChannelForm::Linear(scaled(&constraint[model.scenario.gear_pairs.len() + set], factor))
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
        ChannelKind::LoadPower(index) => power_of(equations, Owner::Load(index)),
        ChannelKind::BrakePower(index) => power_of(equations, Owner::Brake(index)),
        ChannelKind::LoadFlow(index) => rotor(equations, index, RotorChannel::Flow),
        ChannelKind::LoadTipSpeedRatio(index) => {
            rotor(equations, index, RotorChannel::TipSpeedRatio)
        }
        ChannelKind::LoadPowerCoefficient(index) => {
            rotor(equations, index, RotorChannel::PowerCoefficient)
        }
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
    match equations.terms.iter().position(|term| term.owner == Owner::Load(load)) {
        Some(term) => ChannelForm::Rotor(term, what),
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
    ChannelForm::Linear(LinearForm { state, laws: Vec::new(), constant: offset })
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
                (super::Shape::Law(crate::component::law::Law::Magnet(_)), _) => {
                    form.laws.push((place, -count));
                }
                (
                    super::Shape::Law(crate::component::law::Law::FadingDamper { .. }),
                    Some(fading),
                ) => {
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
            let squares = equations
                .dampers
                .iter()
                .filter(|damper| damper.owner == Owner::Magnet(index))
                .map(|damper| (damper.coefficient, equations.speed_row(&damper.row)))
                .collect();
            let fading = equations
                .terms
                .iter()
                .enumerate()
                .filter(|(_, term)| {
                    term.owner == Owner::Magnet(index) && term.power == super::PowerKind::Lost
                })
                .map(|(place, _)| place);
            let drag = equations
                .frictions
                .iter()
                .enumerate()
                .filter(|(_, friction)| friction.owner == Owner::Magnet(index))
                .map(|(place, _)| equations.terms.len() + place);
            ChannelForm::Loss(squares, fading.chain(drag).collect())
        }
        other => ChannelForm::Magnet(index, other),
    }
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
        Owner::Magnet(_) => (None, None),
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

/// What each rigid joint puts on its members, per unit factor of its row.
///
/// ```text
/// J w' = tau + C' mu   =>   mu = (C C')^+ C (J G u' - tau)
/// ```
fn constraint_forms(equations: &Equations, parts: &Parts) -> Vec<LinearForm> {
    let model = &equations.model;
    let count = model.constraints.len();
    if count == 0 {
        return Vec::new();
    }
    let bodies = model.scenario.bodies.len();
    let mut rows = DMatrix::zeros(count, bodies);
    for (line, joint) in model.constraints.iter().enumerate() {
        for &(body, factor) in &joint.row {
            rows[(line, body)] += factor;
        }
    }
    let solve = pseudo_inverse(&(&rows * rows.transpose())) * &rows;
    let inertia = |body: usize| model.scenario.bodies[body].inertia;
    // Over the scaled state: inertia times acceleration minus torque, body by body. Linear terms
    // that stand in the matrix are left to the law values, like all other terms.
    let own = &parts.accelerate * &parts.force;
    let mut over_state = DMatrix::zeros(bodies, equations.size);
    for body in 0..bodies {
        for state in 0..equations.size {
            let acceleration: f64 = model.reduction.speeds[body]
                .iter()
                .map(|&(place, share)| share * own[(place, state)] * equations.scale[state])
                .sum();
            let torque = parts.body_force[(body, state)] * equations.scale[state];
            over_state[(body, state)] = inertia(body) * acceleration - torque;
        }
    }
    let state_forms = &solve * over_state;
    let mut forms: Vec<LinearForm> = (0..count)
        .map(|line| LinearForm {
            state: (0..equations.size)
                .map(|place| (place, state_forms[(line, place)]))
                .filter(|(_, value)| value.abs() > 1e-14)
                .collect(),
            laws: Vec::new(),
            constant: 0.0,
        })
        .collect();
    for (place, direction) in parts.directions() {
        let stuck = parts.stuck.iter().any(|index| equations.terms.len() + index == *place);
        let acceleration = parts.acceleration(direction);
        let residual = nalgebra::DVector::from_fn(bodies, |body, _| {
            let torque: f64 =
                direction.iter().filter(|(b, _)| *b == body).map(|(_, factor)| factor).sum();
            let moved: f64 = if stuck {
                0.0
            } else {
                model.reduction.speeds[body]
                    .iter()
                    .map(|&(speed, share)| share * acceleration[speed])
                    .sum()
            };
            inertia(body) * moved - torque
        });
        let value = &solve * residual;
        for (line, form) in forms.iter_mut().enumerate() {
            if value[line].abs() > 1e-14 {
                form.laws.push((*place, value[line]));
            }
        }
    }
    forms
}
