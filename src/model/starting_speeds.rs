//! Starting speeds: given ones stand, the others follow the bodies they are joined to.

use super::elimination::{Constraint, Reduction};
use super::magnet::Magnet;
use super::{BodyRow, ShaftModel};
use crate::diagnostic::Diagnostics;
use crate::scenario::Scenario;
use nalgebra::{DMatrix, DVector};

/// Relative gap between given speeds and a rigid joint that is still taken as rounding.
const JOINT_TOLERANCE: f64 = 1e-9;

/// Finds the speed of each body at the start, rad/s.
pub fn find(
    scenario: &Scenario,
    constraints: &[Constraint],
    shafts: &[ShaftModel],
    magnets: &[Magnet],
    reduction: &Reduction,
    found: &mut Diagnostics,
) -> Vec<f64> {
    let mut speeds: Vec<Option<f64>> = scenario.bodies.iter().map(|body| body.speed).collect();
    let rigid: Vec<&BodyRow> = constraints.iter().map(|joint| &joint.row).collect();
    let elastic: Vec<BodyRow> =
        shafts.iter().filter(|shaft| !shaft.rigid).map(ShaftModel::row).collect();
    let magnetic: Vec<BodyRow> = magnets.iter().map(Magnet::row).collect();
    let body = |name: &str| super::body_index(scenario, name);
    let clutched: Vec<BodyRow> = scenario
        .clutches
        .iter()
        .map(|clutch| super::difference(body(&clutch.between[0]), body(&clutch.between[1])))
        .collect();
    // Rigid joints first: what they fix must not be overruled by a joint that may slip.
    loop {
        let changed = follow(&mut speeds, rigid.iter().copied())
            || follow(&mut speeds, elastic.iter())
            || follow(&mut speeds, magnetic.iter())
            || follow(&mut speeds, clutched.iter());
        if !changed {
            break;
        }
    }
    check(scenario, constraints, &speeds, found);
    settle(&speeds, constraints, reduction)
}

/// Gives a speed to every body that is the only unknown one of a row; true when any was found.
fn follow<'a>(speeds: &mut [Option<f64>], rows: impl Iterator<Item = &'a BodyRow>) -> bool {
    let mut changed = false;
    for row in rows {
        let mut unknown =
            row.iter().filter(|(body, factor)| speeds[*body].is_none() && *factor != 0.0);
        let (Some(&(body, factor)), None) = (unknown.next(), unknown.next()) else { continue };
        let known: f64 =
            row.iter().filter_map(|(other, share)| speeds[*other].map(|speed| share * speed)).sum();
        speeds[body] = Some(if known == 0.0 { 0.0 } else { -known / factor });
        changed = true;
    }
    changed
}

fn check(
    scenario: &Scenario,
    constraints: &[Constraint],
    speeds: &[Option<f64>],
    found: &mut Diagnostics,
) {
    for joint in constraints {
        let terms: Option<Vec<f64>> = joint
            .row
            .iter()
            .map(|(body, factor)| speeds[*body].map(|speed| factor * speed))
            .collect();
        let Some(terms) = terms else { continue };
        let gap: f64 = terms.iter().sum();
        let size = terms.iter().fold(0.0_f64, |size, term| size.max(term.abs()));
        if gap.abs() <= JOINT_TOLERANCE * size {
            continue;
        }
        let Some(&(body, factor)) =
            joint.row.iter().rev().find(|(body, _)| scenario.bodies[*body].speed.is_some())
        else {
            continue;
        };
        let (name, speed) = (&scenario.bodies[body].name, speeds[body].unwrap_or(0.0));
        let fits = speed - gap / factor;
        let to_rpm = 30.0 / std::f64::consts::PI;
        found.error_hint(
            format!("bodies.{name}.speed"),
            format!("the speed of `{name}` contradicts {}", joint.label),
            format!("{fits:.9} rad/s ({:.6} rpm) would fit", fits * to_rpm),
        );
    }
}

/// Fills what is still open with the smallest speeds that the rigid joints allow.
fn settle(speeds: &[Option<f64>], constraints: &[Constraint], reduction: &Reduction) -> Vec<f64> {
    let open: Vec<usize> = (0..speeds.len()).filter(|body| speeds[*body].is_none()).collect();
    let mut all: Vec<f64> = speeds.iter().map(|speed| speed.unwrap_or(0.0)).collect();
    let rows: Vec<&Constraint> = constraints
        .iter()
        .filter(|joint| joint.row.iter().any(|(body, _)| open.contains(body)))
        .collect();
    if !open.is_empty() && !rows.is_empty() {
        let mut matrix = DMatrix::zeros(rows.len(), open.len());
        let mut right = DVector::zeros(rows.len());
        for (index, joint) in rows.iter().enumerate() {
            for &(body, factor) in &joint.row {
                match open.iter().position(|other| *other == body) {
                    Some(column) => matrix[(index, column)] += factor,
                    None => right[index] -= factor * all[body],
                }
            }
        }
        if let Ok(solution) = matrix.svd(true, true).solve(&right, 1e-12) {
            for (column, body) in open.iter().enumerate() {
                all[*body] = solution[column];
            }
        }
    }
    let independent: Vec<f64> = reduction.independent.iter().map(|body| all[*body]).collect();
    reduction.body_speeds(&independent)
}
