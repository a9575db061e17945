//! From the model to states, terms, frictions and dampers.

use super::build_joints::{add_clutches, add_fluid_couplings, add_gear_drag, add_shafts};
use super::build_magnet::add_magnet;
use super::build_motor::add_motor;
use super::build_pitch::add_pitch;
use super::holding::Limits;
use super::{
    Equations, Factor, Friction, Owner, PowerKind, Shape, Sliding, Target, Term, speed_row,
};
use crate::component::law::Law;
use crate::component::load::curve::LoadCurve;
use crate::component::load::reciprocating::Reciprocating;
use crate::component::load::{Load, LoadLaw};
use crate::component::pair_law::PairLaw;
use crate::model::{BodyRow, Model, body_index, difference};
use crate::signal::Signal;
use crate::signal::course::{SignalBank, SlotId};

/// Mean inertia of a reciprocating mass over that of its train from which it is warned of.
const HEAVY_PISTON: f64 = 0.1;

/// Builds the equations of a model.
pub fn build(model: &Model) -> Equations {
    let mut scale: Vec<f64> =
        model.reduction.independent.iter().map(|body| model.scales.body_speed[*body]).collect();
    let speeds = scale.len();
    let mut twist_state = Vec::new();
    for (index, shaft) in model.shafts.iter().enumerate() {
        twist_state.push((!shaft.rigid).then(|| {
            scale.push(model.scales.twist[index]);
            scale.len() - 1
        }));
    }
    let phase_state = model
        .magnets
        .iter()
        .map(|_| {
            scale.push(1.0);
            scale.len() - 1
        })
        .collect();
    let mut equations = Equations {
        model: model.clone(),
        size: 0,
        speeds,
        scale,
        twist_state,
        phase_state,
        phase_rows: Vec::new(),
        angle_states: Vec::new(),
        terms: Vec::new(),
        frictions: Vec::new(),
        dampers: Vec::new(),
        controllers: Vec::new(),
        followers: Vec::new(),
        pitches: Vec::new(),
        machines: Vec::new(),
        heats: Vec::new(),
        thermal: Vec::new(),
        friction_heats: 0,
        bank: SignalBank::new(&model.scenario.signals),
        warnings: Vec::new(),
    };
    for index in 0..model.magnets.len() {
        add_magnet(&mut equations, index);
    }
    add_shafts(&mut equations);
    add_fluid_couplings(&mut equations);
    let scenario = &model.scenario;
    for (index, motor) in scenario.motors.iter().enumerate() {
        add_motor(&mut equations, index, motor);
    }
    for (index, load) in scenario.loads.iter().enumerate() {
        add_load(&mut equations, index, load);
    }
    for (index, brake) in scenario.brakes.iter().enumerate() {
        let row = difference(
            body_index(scenario, &brake.body),
            brake.against.as_deref().and_then(|name| body_index(scenario, name)),
        );
        let slot = equations.bank.add(&format!("brakes.{}.applied", brake.name), &brake.applied);
        let factor = Factor { slots: vec![(slot, 1)] };
        add_friction(
            &mut equations,
            Owner::Brake(index),
            &brake.name,
            row,
            Sliding::Constant(brake.torque),
            Limits::both(brake.breakaway),
            factor,
        );
    }
    add_gear_drag(&mut equations);
    add_clutches(&mut equations);
    equations.size = equations.scale.len();
    let rows = model.magnets.iter().map(|magnet| equations.speed_row(&magnet.row()));
    equations.phase_rows = rows.collect();
    equations
}

/// The state of an angle that a law needs, made once for each row.
pub(super) fn angle_state(equations: &mut Equations, row: BodyRow) -> usize {
    if let Some((place, _)) = equations.angle_states.iter().find(|(_, known)| *known == row) {
        return *place;
    }
    equations.scale.push(1.0);
    let place = equations.scale.len() - 1;
    equations.angle_states.push((place, row));
    place
}

pub(super) fn slot(equations: &mut Equations, path: String, signal: &Signal) -> SlotId {
    equations.bank.add(&path, signal)
}

/// A factor of a signal to a power; a plain 1 in the file still gets its slot, since a protection may set it.
pub(super) fn factor_of(
    equations: &mut Equations,
    section: &str,
    name: &str,
    scale: &Option<Signal>,
) -> Factor {
    let signal = scale.clone().unwrap_or(Signal::Constant(1.0));
    Factor { slots: vec![(slot(equations, format!("{section}.{name}.scale"), &signal), 1)] }
}

fn add_load(equations: &mut Equations, index: usize, load: &Load) {
    let scenario = &equations.model.scenario;
    let Some(body) = body_index(scenario, &load.body) else { return };
    let against = load.against.as_deref().and_then(|name| body_index(scenario, name));
    let sign = if load.reversed { -1.0 } else { 1.0 };
    let direction: BodyRow = difference(Some(body), against)
        .into_iter()
        .map(|(place, factor)| (place, sign * factor))
        .collect();
    let speed = speed_row(&equations.model, &equations.scale, &direction);
    let size = equations.model.scales.body_speed[body];
    let owner = Owner::Load(index);
    let mut factor = factor_of(equations, "loads", &load.name, &load.scale);
    let mut parameters = [None; 2];
    let mut by_state = [Vec::new(), Vec::new()];
    let mut own_speed = None;
    let mut input = speed.clone();
    let (shape, target) = match &load.law {
        LoadLaw::Friction { sliding, breakaway } => {
            let sliding = Sliding::Constant(*sliding);
            let limits = Limits::both(*breakaway);
            add_friction(equations, owner, &load.name, direction, sliding, limits, factor);
            return;
        }
        LoadLaw::Viscous { coefficient } => {
            let against: BodyRow =
                direction.iter().map(|(place, share)| (*place, -share * coefficient)).collect();
            (Shape::Linear, against)
        }
        LoadLaw::Prescribed { torque } => {
            let place =
                slot(equations, format!("loads.{}.law.prescribed.torque", load.name), torque);
            factor.slots.push((place, 1));
            own_speed = Some(std::mem::take(&mut input));
            (Shape::Law(Law::Unit), direction.clone())
        }
        LoadLaw::AxialRotor { flow, pitch, pitch_loop, .. } => {
            let path = |key: &str| format!("loads.{}.law.axial_rotor.{key}", load.name);
            parameters[0] = Some(slot(equations, path("flow"), flow));
            match pitch_loop {
                Some(pitch_loop) => {
                    by_state[1] = add_pitch(equations, index, load, pitch_loop);
                }
                None => parameters[1] = Some(slot(equations, path("pitch"), pitch)),
            }
            let Some(law) = load.law.scalar() else { return };
            (Shape::Law(law), direction.clone())
        }
        LoadLaw::Propeller { advance, .. } => {
            let path = format!("loads.{}.law.propeller.advance", load.name);
            parameters[0] = Some(slot(equations, path, advance));
            let Some(law) = load.law.scalar() else { return };
            (Shape::Law(law), direction.clone())
        }
        LoadLaw::Periodic { mean, harmonics } => {
            if *mean > 0.0 {
                // A mean against the motion holds at rest; as a load it takes power out.
                let curve = LoadCurve::new(&[[0.0, *mean], [1e12, *mean]]);
                add_friction(
                    equations,
                    owner,
                    &load.name,
                    direction.clone(),
                    Sliding::Curve(Law::LoadCurve(curve)),
                    Limits::both(*mean),
                    factor.clone(),
                );
            }
            if harmonics.is_empty() {
                return;
            }
            let place = angle_state(equations, direction.clone());
            own_speed = Some(std::mem::replace(&mut input, vec![(place, equations.scale[place])]));
            let Some(law) = load.law.scalar() else { return };
            (Shape::Law(law), direction.clone())
        }
        LoadLaw::Reciprocating { crank_radius, rod_length, mass, phase } => {
            let law = Reciprocating::new(*crank_radius, *rod_length, *mass, *phase);
            warn_of_heavy_piston(equations, &load.name, &direction, law.mean_inertia());
            let place = angle_state(equations, direction.clone());
            own_speed = Some(std::mem::replace(&mut input, vec![(place, equations.scale[place])]));
            (Shape::Pair(PairLaw::Reciprocating(law), speed.clone()), direction.clone())
        }
        LoadLaw::PowerLaw { .. } | LoadLaw::Curve { .. } => {
            let Some(law) = load.law.scalar() else { return };
            if let Law::LoadCurve(curve) = &law {
                let breakaway = curve.breakaway();
                if breakaway > 0.0 {
                    add_friction(
                        equations,
                        owner,
                        &load.name,
                        direction,
                        Sliding::Curve(law),
                        Limits::both(breakaway),
                        factor,
                    );
                    return;
                }
            }
            (Shape::Law(law), direction.clone())
        }
    };
    if matches!(load.law, LoadLaw::Viscous { .. }) {
        own_speed = Some(
            speed.iter().map(|(place, value)| (*place, -value * viscous(&load.law))).collect(),
        );
    }
    equations.terms.push(Term {
        owner,
        shape,
        input,
        offsets: Vec::new(),
        parameters,
        by_state,
        factor,
        target: Target::Torque(target),
        power: PowerKind::Drive,
        speed: own_speed,
        input_size: size,
        heat: None,
    });
}

/// The law is that of a crank at constant speed: a piston that makes its own speed ripple is told.
fn warn_of_heavy_piston(equations: &mut Equations, name: &str, row: &BodyRow, inertia: f64) {
    let share = inertia / equations.model.reduction.inertia_along(row);
    if share > HEAVY_PISTON {
        equations.warnings.push((
            format!("loads.{name}.law.reciprocating"),
            format!(
                "the mass comes to {} % of the inertia that its crank feels: the speed ripples within \
                 a turn, and this law, exact at constant speed, is then an approximation",
                crate::quantity::format_number(100.0 * share, 3)
            ),
        ));
    }
}

fn viscous(law: &LoadLaw) -> f64 {
    match law {
        LoadLaw::Viscous { coefficient } => *coefficient,
        _ => 0.0,
    }
}

pub(super) fn add_friction(
    equations: &mut Equations,
    owner: Owner,
    name: &str,
    row: BodyRow,
    sliding: Sliding,
    breakaway: Limits,
    factor: Factor,
) {
    let speed = speed_row(&equations.model, &equations.scale, &row);
    let sizes = &equations.model.scales.body_speed;
    let speed_size = row.iter().map(|(body, share)| sizes[*body] * share.abs()).fold(0.0, f64::max);
    equations.frictions.push(Friction {
        owner,
        name: name.to_owned(),
        row,
        speed,
        sliding,
        breakaway,
        factor,
        speed_size: if speed_size > 0.0 { speed_size } else { 1.0 },
        heat: None,
    });
}
