//! What stands between two bodies: clutches as dry friction elements, stages of elastic
//! shafts, fluid couplings, drag of gear pairs.

use super::build::add_friction;
use super::holding::Limits;
use super::{Damper, Equations, Factor, Owner, PowerKind, Shape, Sliding, Target, Term, speed_row};
use crate::component::law::Law;
use crate::component::pair_law::PairLaw;
use crate::model::{body_index, difference};

/// Adds overrunning clutches and torque limiters; call it after everything else that rubs or heats.
pub(super) fn add_clutches(equations: &mut Equations) {
    let scenario = &equations.model.scenario;
    let torques = &equations.model.scales.body_torque;
    let largest = torques.iter().flatten().fold(0.0_f64, |size, torque| size.max(*torque));
    let at_work = if largest > 0.0 { largest } else { 1.0 };
    let clutches = scenario.clutches.clone();
    for (index, clutch) in clutches.iter().enumerate() {
        let scenario = &equations.model.scenario;
        let [a, b] = [0, 1].map(|end: usize| body_index(scenario, &clutch.between[end]));
        let (sliding, breakaway) = clutch.torques();
        let limits = if breakaway[0].to_bits() == breakaway[1].to_bits() {
            Limits::both(breakaway[0])
        } else {
            Limits::sides(breakaway, at_work)
        };
        add_friction(
            equations,
            Owner::Clutch(index),
            &clutch.name,
            difference(a, b),
            Sliding::Sides(sliding),
            limits,
            Factor::default(),
        );
        let heat = equations.heats.len() + equations.friction_heats;
        if let Some(friction) = equations.frictions.last_mut() {
            friction.heat = Some(heat);
            equations.friction_heats += 1;
        }
    }
}

/// Adds the laws of shafts by points: what differs from their line at no twist.
pub(super) fn add_shafts(equations: &mut Equations) {
    for (index, shaft) in equations.model.shafts.iter().enumerate() {
        let (Some(curve), Some(place)) = (&shaft.curve, equations.twist_state[index]) else {
            continue;
        };
        let against = shaft.row().iter().map(|(body, factor)| (*body, -factor)).collect();
        let size = equations.scale[place];
        equations.terms.push(Term {
            owner: Owner::Shaft(index),
            shape: Shape::Law(Law::Elastic(curve.clone())),
            input: vec![(place, size)],
            offsets: Vec::new(),
            parameters: [None; 2],
            by_state: Default::default(),
            factor: Factor::default(),
            target: Target::Torque(against),
            power: PowerKind::None,
            speed: None,
            input_size: size,
            heat: None,
        });
    }
}

/// Adds fluid couplings.
pub(super) fn add_fluid_couplings(equations: &mut Equations) {
    let scenario = &equations.model.scenario;
    for (index, coupling) in scenario.fluid_couplings.iter().enumerate() {
        let [pump, turbine] = [0, 1].map(|end: usize| body_index(scenario, &coupling.between[end]));
        let row = difference(pump, turbine);
        let sizes = &equations.model.scales.body_speed;
        let size = pump.into_iter().chain(turbine).map(|body| sizes[body]).fold(0.0, f64::max);
        let speed = |row: &[(usize, f64)]| speed_row(&equations.model, &equations.scale, row);
        let wheel = turbine.map(|body| speed(&[(body, 1.0)])).unwrap_or_default();
        equations.terms.push(Term {
            owner: Owner::FluidCoupling(index),
            shape: Shape::Pair(PairLaw::Fluid(coupling.law()), wheel),
            input: speed(&row),
            offsets: Vec::new(),
            parameters: [None; 2],
            by_state: Default::default(),
            factor: Factor::default(),
            target: Target::Torque(row),
            power: PowerKind::Lost,
            speed: None,
            input_size: size,
            heat: None,
        });
    }
}

/// Adds the drag of gear pairs.
pub(super) fn add_gear_drag(equations: &mut Equations) {
    let pairs = equations.model.scenario.gear_pairs.clone();
    for (index, pair) in pairs.iter().enumerate() {
        let owner = Owner::GearPair(index);
        for (number, drag) in pair.drag.iter().enumerate() {
            let name = pair.between.get(drag.member).map_or("", String::as_str);
            let row = difference(body_index(&equations.model.scenario, name), None);
            if drag.per_speed > 0.0 {
                let (row, coefficient) = (row.clone(), drag.per_speed);
                equations.dampers.push(Damper { owner, row, coefficient, is_load: false });
            }
            if drag.constant > 0.0 {
                add_friction(
                    equations,
                    owner,
                    &format!("{}.drag.{number}", pair.name),
                    row,
                    Sliding::Constant(drag.constant),
                    Limits::both(drag.constant),
                    Factor::default(),
                );
            }
        }
    }
}
