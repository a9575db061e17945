//! What excites a train in torsion, as frequencies over the speed of one body.
//!
//! All speeds follow that body in synchronism. A magnetic gear ripples `lcm(2p, pieces)` times in
//! each turn of a rotor against the modulator (Zhu and Howe, IEEE Trans. Energy Conversion 15(4),
//! 2000, 407-412, from memory); inner and outer rotor give the same frequency, because
//! `p_i (w_i - w_m) = -p_o (w_o - w_m)` in step. A gear that slips adds a line at its slip frequency.

use super::spec::{Follows, ModesSpec};
use crate::analysis::linear_point::LinearPoint;
use crate::component::motor::MotorLaw;
use crate::equations::Equations;
use crate::model::magnet::Magnet;
use crate::solve::steady;
use nalgebra::DMatrix;
use std::f64::consts::TAU;

/// Mains frequencies in use, Hz.
const MAINS: [f64; 2] = [50.0, 60.0];

/// An excitation over the speed of the body across the diagram.
#[derive(Clone, Debug, PartialEq)]
pub struct Excitation {
    /// For example `1 x motor_rotor`.
    pub label: String,
    /// Hz for each rad/s of the body across.
    pub per_speed: f64,
    /// Hz at any speed.
    pub fixed: f64,
}

impl Excitation {
    /// Its frequency at a speed, Hz.
    pub fn at(&self, speed: f64) -> f64 {
        self.per_speed * speed.abs() + self.fixed
    }
}

/// All excitations of a train, and what must be said about them.
///
/// # Errors
/// In words, when speeds do not follow the body.
pub fn list(
    equations: &Equations,
    point: &LinearPoint,
    spec: &ModesSpec,
    of: usize,
) -> Result<(Vec<Excitation>, Vec<String>), String> {
    let ratios = ratios(equations, point, of)?;
    let mut notes = Vec::new();
    let mut found = body_orders(equations, &ratios);
    for (index, magnet) in equations.model.magnets.iter().enumerate() {
        found.extend(ripple(equations, index, magnet, &ratios));
    }
    found.extend(line_frequency(equations, &mut notes));
    for excitation in &spec.excitations {
        let (per_speed, fixed) = match &excitation.follows {
            Follows::Frequency(frequency) => (0.0, *frequency),
            Follows::Turns { body, against, order } => {
                let ratio =
                    |name: &str| equations.model.body(name).map_or(0.0, |place| ratios[place]);
                let other = against.as_deref().map_or(0.0, ratio);
                (order * (ratio(body) - other).abs() / TAU, 0.0)
            }
        };
        found.push(Excitation { label: excitation.name.clone(), per_speed, fixed });
    }
    for (index, magnet) in equations.model.magnets.iter().enumerate() {
        found.extend(slip_frequency(equations, index, magnet, &ratios, of));
    }
    Ok((found, notes))
}

/// Speed of each body for a unit speed of `of` in synchronism.
fn ratios(equations: &Equations, point: &LinearPoint, of: usize) -> Result<Vec<f64>, String> {
    let name = &equations.model.scenario.bodies[of].name;
    let motions: DMatrix<f64> = steady::motions(equations);
    let reduction = &equations.model.reduction;
    let speeds = if motions.ncols() == 1 {
        reduction.body_speeds(motions.column(0).as_slice())
    } else {
        // More than one motion in synchronism: the proportions of the point hold.
        super::body_speeds(equations, &point.state).into_iter().map(|(_, speed)| speed).collect()
    };
    let largest = speeds.iter().fold(0.0_f64, |size, speed| size.max(speed.abs()));
    let own = speeds.get(of).copied().unwrap_or(0.0);
    if own.abs() <= 1e-9 * largest || largest == 0.0 {
        return Err(match motions.ncols() {
            0 => format!("`{name}` cannot turn in synchronism: the train is held"),
            1 => format!("`{name}` stands still in synchronism: name a body that turns"),
            _ => format!(
                "the speeds of this train do not follow `{name}` alone, and it stands still at the point"
            ),
        });
    }
    Ok(speeds.iter().map(|speed| speed / own).collect())
}

/// Once and twice a turn of each body; bodies that turn alike share their lines.
fn body_orders(equations: &Equations, ratios: &[f64]) -> Vec<Excitation> {
    let mut groups: Vec<(f64, Vec<&str>)> = Vec::new();
    for (body, ratio) in equations.model.scenario.bodies.iter().zip(ratios) {
        let speed = ratio.abs();
        if speed <= 1e-9 {
            continue;
        }
        match groups.iter_mut().find(|(known, _)| (known - speed).abs() <= 1e-9 * speed) {
            Some((_, names)) => names.push(&body.name),
            None => groups.push((speed, vec![&body.name])),
        }
    }
    let lines = groups.iter().flat_map(|(speed, names)| {
        [1.0, 2.0].map(|order| Excitation {
            label: format!("{order} x {}", names.join(", ")),
            per_speed: order * speed / TAU,
            fixed: 0.0,
        })
    });
    lines.collect()
}

/// The ripple of a gear, and of cogging that the file states at other orders.
fn ripple(equations: &Equations, index: usize, magnet: &Magnet, ratios: &[f64]) -> Vec<Excitation> {
    if magnet.coupling {
        // Equal pole pairs do not turn against each other in step.
        return Vec::new();
    }
    let Some(gear) = equations.model.scenario.magnetic_gears.get(index) else { return Vec::new() };
    let speed = |member: usize| {
        magnet.members.get(member).and_then(|member| member.body).map_or(0.0, |body| ratios[body])
    };
    let (inner, pieces) = (u64::from(gear.inner_pole_pairs), gear_pieces(gear));
    let order = least_common_multiple(2 * inner, pieces);
    let turns = (speed(0) - speed(1)).abs();
    let mut lines = Vec::new();
    let mut add = |label: String, per_turn: f64, turns: f64| {
        let per_speed = per_turn * turns / TAU;
        let known = lines
            .iter()
            .any(|line: &Excitation| (line.per_speed - per_speed).abs() <= 1e-9 * per_speed);
        if per_speed > 0.0 && !known {
            lines.push(Excitation { label, per_speed, fixed: 0.0 });
        }
    };
    add(
        format!("ripple of {} ({order} a turn of inner to modulator)", gear.name),
        order as f64,
        turns,
    );
    for cogging in &gear.cogging {
        let (name, member) = match cogging.at {
            crate::component::magnetic_gear::Member::Outer => ("outer", 2),
            _ => ("inner", 0),
        };
        let label =
            format!("ripple of {} ({} a turn of {name} to modulator)", gear.name, cogging.order);
        add(label, f64::from(cogging.order), (speed(member) - speed(1)).abs());
    }
    lines
}

fn gear_pieces(gear: &crate::component::magnetic_gear::MagneticGear) -> u64 {
    u64::from(gear.inner_pole_pairs) + u64::from(gear.outer_pole_pairs)
}

/// The least common multiple; 0 when one is 0.
pub fn least_common_multiple(a: u64, b: u64) -> u64 {
    let (mut x, mut y) = (a, b);
    while y != 0 {
        (x, y) = (y, x % y);
    }
    a.checked_div(x).map_or(0, |share| share.saturating_mul(b))
}

/// Once and twice the line frequency behind each induction motor, where its synchronous speed tells it.
fn line_frequency(equations: &Equations, notes: &mut Vec<String>) -> Vec<Excitation> {
    let mut found: Vec<f64> = Vec::new();
    for motor in &equations.model.scenario.motors {
        let synchronous_speed = match &motor.law {
            MotorLaw::RatingPlate { synchronous_speed, .. }
            | MotorLaw::Induction { synchronous_speed, .. } => synchronous_speed.abs(),
            MotorLaw::InductionCircuit { figures, .. } => {
                std::f64::consts::TAU * figures.frequency / f64::from(figures.pole_pairs)
            }
            _ => continue,
        };
        let turns = synchronous_speed / TAU;
        let fitting: Vec<f64> = MAINS.into_iter().filter(|mains| whole(mains / turns)).collect();
        match fitting.as_slice() {
            [mains] => {
                notes.push(format!(
                    "`{}`: the line is taken as {mains} Hz with {} pole pairs, which its synchronous speed fits",
                    motor.name,
                    (mains / turns).round()
                ));
                if !found.contains(mains) {
                    found.push(*mains);
                }
            }
            _ => notes.push(format!(
                "`{}`: its synchronous speed does not tell the line frequency; give it under `excitations`",
                motor.name
            )),
        }
    }
    let line = |mains: f64, times: f64| Excitation {
        label: format!("{times} x line, {} Hz", times * mains),
        per_speed: 0.0,
        fixed: times * mains,
    };
    found.into_iter().flat_map(|mains| [line(mains, 1.0), line(mains, 2.0)]).collect()
}

fn whole(value: f64) -> bool {
    (1.0 - 1e-3..=60.5).contains(&value) && (value - value.round()).abs() <= 1e-3 * value
}

/// The slip frequency while the side of `of` turns and the other side stands.
fn slip_frequency(
    equations: &Equations,
    index: usize,
    magnet: &Magnet,
    ratios: &[f64],
    of: usize,
) -> Option<Excitation> {
    let side = side_of(equations, index, of);
    let on_side = |body: usize| side.get(body).copied().unwrap_or(false);
    let turning = magnet.members.iter().filter_map(|member| member.body.map(|body| (member, body)));
    let (here, there): (Vec<_>, Vec<_>) = turning.partition(|(_, body)| on_side(*body));
    if here.is_empty() || there.is_empty() {
        return None;
    }
    let rate: f64 = here.iter().map(|(member, body)| member.count * ratios[*body]).sum();
    (rate != 0.0).then(|| {
        let names: Vec<&str> = there.iter().map(|(member, _)| member.name).collect();
        Excitation {
            label: format!("slip of {} with {} at rest", magnet.name, names.join(" and ")),
            per_speed: rate.abs() / TAU,
            fixed: 0.0,
        }
    })
}

/// The bodies that stay joined to `of` when one magnet is taken out.
fn side_of(equations: &Equations, magnet: usize, of: usize) -> Vec<bool> {
    let model = &equations.model;
    let mut links: Vec<Vec<usize>> =
        model.shafts.iter().map(|shaft| shaft.ends.iter().flatten().copied().collect()).collect();
    links.extend(
        model.constraints.iter().map(|joint| joint.row.iter().map(|(body, _)| *body).collect()),
    );
    for (index, other) in model.magnets.iter().enumerate() {
        if index != magnet {
            links.push(other.members.iter().filter_map(|member| member.body).collect());
        }
    }
    let mut side = vec![false; model.scenario.bodies.len()];
    if let Some(own) = side.get_mut(of) {
        *own = true;
    }
    loop {
        let before = side.iter().filter(|joined| **joined).count();
        for link in &links {
            if link.iter().any(|body| side[*body]) {
                for body in link {
                    side[*body] = true;
                }
            }
        }
        if side.iter().filter(|joined| **joined).count() == before {
            return side;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_ripple_order_is_the_least_common_multiple() {
        // Cogging factors of published pole-pair choices: order = 2 p n / gcd(2p, n).
        for (pairs, pieces, order) in [(4, 26, 104), (4, 27, 216), (2, 21, 84), (5, 30, 30)] {
            assert_eq!(least_common_multiple(2 * pairs, pieces), order);
        }
    }

    #[test]
    fn synchronous_speeds_of_two_poles_to_eight_tell_the_mains() {
        let fits = |rpm: f64, mains: f64| whole(mains / (rpm / 60.0));
        for (rpm, mains) in [(3000.0, 50.0), (1500.0, 50.0), (1000.0, 50.0), (1800.0, 60.0)] {
            let other = if mains == MAINS[0] { MAINS[1] } else { MAINS[0] };
            assert!(fits(rpm, mains) && !fits(rpm, other), "{rpm}");
        }
        // 600 rpm is both 50 Hz with five pole pairs and 60 Hz with six.
        assert!(fits(600.0, 50.0) && fits(600.0, 60.0));
    }
}
