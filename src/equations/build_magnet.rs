//! From magnetic gears and couplings to terms, dampers, frictions and thermal nodes.

use super::build::{add_friction, angle_state};
use super::holding::Limits;
use super::thermal::{self, Source};
use super::{Damper, Equations, Factor, Owner, PowerKind, Shape, Sliding, Target, Term, speed_row};
use crate::component::law::Law;
use crate::component::magnet_losses::LossDrag;
use crate::component::magnetic_gear::Member;
use crate::model::{BodyRow, difference};

/// Adds everything that a magnet by place brings with it.
pub(super) fn add_magnet(equations: &mut Equations, index: usize) {
    let magnet = equations.model.magnets[index].clone();
    let row = magnet.row();
    let against: BodyRow = row.iter().map(|(body, count)| (*body, -count)).collect();
    let place = equations.phase_state[index];
    let gains = thermal::add_states(equations, index);
    let law = Law::Magnet(magnet.law.clone());
    let mut sources = Vec::new();
    let shape = if gains.is_empty() { Shape::Law(law) } else { Shape::Warm(law, gains.clone()) };
    equations.terms.push(term(
        index,
        shape,
        vec![(place, equations.scale[place])],
        Target::Torque(against),
        PowerKind::None,
        1.0,
    ));
    if let Some(fading) = magnet.fading {
        let scaled: BodyRow =
            row.iter().map(|(body, count)| (*body, count / fading.count)).collect();
        let (coefficient, peak_at) = (fading.coefficient, fading.peak_at);
        equations.terms.push(term(
            index,
            Shape::Law(Law::FadingDamper { coefficient, peak_at }),
            speed_row(&equations.model, &equations.scale, &scaled),
            Target::Torque(scaled.iter().map(|(body, factor)| (*body, -factor)).collect()),
            PowerKind::Lost,
            peak_at,
        ));
        sources.push(Source { row: scaled, constant: 0.0, coefficient, peak_at });
    }
    if magnet.damping > 0.0 {
        let (owner, coefficient) = (Owner::Magnet(index), magnet.damping);
        sources.push(Source {
            row: row.clone(),
            constant: 0.0,
            coefficient,
            peak_at: f64::INFINITY,
        });
        equations.dampers.push(Damper { owner, row, coefficient, is_load: false });
    }
    add_cogging(equations, index);
    sources.extend(add_drags(equations, index));
    thermal::add_heat(equations, index, &sources, &gains);
}

fn term(
    index: usize,
    shape: Shape,
    input: Vec<(usize, f64)>,
    target: Target,
    power: PowerKind,
    input_size: f64,
) -> Term {
    Term {
        owner: Owner::Magnet(index),
        shape,
        input,
        offsets: Vec::new(),
        parameters: [None; 2],
        by_state: [Vec::new(), Vec::new()],
        factor: Factor::default(),
        target,
        power,
        speed: None,
        input_size,
        heat: None,
    }
}

/// The body at a member of a gear.
fn body_of(equations: &Equations, index: usize, member: Member) -> Option<usize> {
    let members = &equations.model.magnets[index].members;
    let place = match member {
        Member::Inner => 0,
        Member::Modulator => 1,
        Member::Outer => 2,
    };
    members.get(place).and_then(|member| member.body)
}

fn add_cogging(equations: &mut Equations, index: usize) {
    let Some(gear) = equations.model.scenario.magnetic_gears.get(index).cloned() else { return };
    for cogging in &gear.cogging {
        let row = difference(
            body_of(equations, index, cogging.at),
            body_of(equations, index, Member::Modulator),
        );
        let place = angle_state(equations, row.clone());
        let law = Law::Cogging {
            order: f64::from(cogging.order),
            torque: cogging.torque,
            phase: cogging.phase,
        };
        let input = vec![(place, equations.scale[place])];
        let target = Target::Torque(row);
        equations.terms.push(term(index, Shape::Law(law), input, target, PowerKind::None, 1.0));
    }
}

/// Drags and losses; returns where they make heat.
fn add_drags(equations: &mut Equations, index: usize) -> Vec<Source> {
    let Some(gear) = equations.model.scenario.magnetic_gears.get(index).cloned() else {
        return Vec::new();
    };
    let modulator = body_of(equations, index, Member::Modulator);
    let drags = gear.drag.iter().enumerate().map(|(number, drag)| {
        let against = if drag.against_modulator { modulator } else { None };
        let row = difference(body_of(equations, index, drag.at), against);
        (format!("{}.drag.{number}", gear.name), row, drag.constant, drag.per_speed)
    });
    let losses = loss_drags(equations, index).into_iter().zip(["inner", "outer"]);
    let losses = losses.map(|((row, drag), rotor)| {
        (hysteresis_name(&gear.name) + rotor, row, drag.hysteresis, drag.eddy)
    });
    let all: Vec<_> = drags.chain(losses).filter(|(_, row, ..)| !row.is_empty()).collect();
    let owner = Owner::Magnet(index);
    all.into_iter()
        .map(|(name, row, constant, coefficient)| {
            if coefficient > 0.0 {
                let row = row.clone();
                equations.dampers.push(Damper { owner, row, coefficient, is_load: false });
            }
            if constant > 0.0 {
                let (row, sliding) = (row.clone(), Sliding::Constant(constant));
                let limits = Limits::both(constant);
                add_friction(equations, owner, &name, row, sliding, limits, Factor::default());
            }
            Source { row, constant, coefficient, peak_at: f64::INFINITY }
        })
        .collect()
}

/// How the names of the friction elements begin that stand for hysteresis in a gear.
pub(super) fn hysteresis_name(gear: &str) -> String {
    format!("{gear}.hysteresis.")
}

/// Rows of the inner and outer rotor against the modulator, with the drags of a gear's losses.
pub(super) fn loss_drags(equations: &Equations, index: usize) -> Vec<(BodyRow, LossDrag)> {
    let gear = equations.model.scenario.magnetic_gears.get(index);
    let Some((gear, losses)) = gear.and_then(|gear| Some((gear, gear.losses?))) else {
        return Vec::new();
    };
    let drags = losses.drags([f64::from(gear.inner_pole_pairs), f64::from(gear.outer_pole_pairs)]);
    [Member::Inner, Member::Outer]
        .into_iter()
        .zip(drags)
        .map(|(rotor, drag)| {
            let modulator = body_of(equations, index, Member::Modulator);
            (difference(body_of(equations, index, rotor), modulator), drag)
        })
        .collect()
}
