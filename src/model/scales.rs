//! Sizes of speeds and torques by which the state is scaled.
//!
//! The integrator takes one tolerance for all states. It means the same for each of them only
//! when a value of 1 is a plain working value: a phase of 1 rad, a body at its rated speed, a
//! shaft under the pull-out torque.

use super::elimination::{Constraint, Reduction};
use super::magnet::Magnet;
use super::{BodyRow, ShaftModel, body_index, difference};
use crate::component::load::LoadLaw;
use crate::component::motor::MotorLaw;
use crate::component::motor::circuit::Circuit;
use crate::scenario::Scenario;
use crate::signal::Signal;

/// Working sizes, all above zero.
#[derive(Clone, Debug, PartialEq)]
pub struct Scales {
    /// Speed of each body, rad/s.
    pub body_speed: Vec<f64>,
    /// Twist of each shaft, rad.
    pub twist: Vec<f64>,
    /// Torque at each body, N*m, where one is known.
    pub body_torque: Vec<Option<f64>>,
}

/// Finds the working sizes of a train.
pub fn find(
    scenario: &Scenario,
    shafts: &[ShaftModel],
    magnets: &[Magnet],
    constraints: &[Constraint],
    reduction: &Reduction,
    start: &[f64],
) -> Scales {
    let count = scenario.bodies.len();
    let mut speed: Vec<Option<f64>> = start.iter().map(|value| sized(value.abs())).collect();
    let mut torque: Vec<Option<f64>> = vec![None; count];
    let mut note = |body: &str, rated_speed: f64, rated_torque: f64| {
        if let Some(place) = body_index(scenario, body) {
            raise(&mut speed[place], rated_speed.abs());
            raise(&mut torque[place], rated_torque.abs());
        }
    };
    for motor in &scenario.motors {
        let (rated_speed, rated_torque) = motor_size(&motor.law);
        note(&motor.body, rated_speed, rated_torque);
    }
    for load in &scenario.loads {
        let (rated_speed, rated_torque) = load_size(&load.law);
        note(&load.body, rated_speed, rated_torque);
    }
    for clutch in &scenario.clutches {
        let (_, limits) = clutch.torques();
        let finite = limits.into_iter().filter(|limit| limit.is_finite()).fold(0.0, f64::max);
        for body in &clutch.between {
            note(body, 0.0, finite);
        }
    }
    for magnet in magnets {
        for member in &magnet.members {
            if let Some(body) = member.body {
                raise(&mut torque[body], magnet.pull_out_at(member.count));
            }
        }
    }
    let clutches: Vec<BodyRow> = scenario
        .clutches
        .iter()
        .map(|clutch| {
            let [a, b] = [0, 1].map(|end: usize| body_index(scenario, &clutch.between[end]));
            difference(a, b)
        })
        .chain(scenario.fluid_couplings.iter().map(|coupling| {
            let [a, b] = [0, 1].map(|end: usize| body_index(scenario, &coupling.between[end]));
            difference(a, b)
        }))
        .collect();
    spread(&mut speed, shafts, magnets, constraints, &clutches);
    for magnet in magnets {
        let frequency = magnet.natural_frequency();
        for member in &magnet.members {
            if let (Some(body), true) = (member.body, frequency > 0.0 && frequency.is_finite())
                && speed[body].is_none()
            {
                speed[body] = Some(frequency / member.count.abs());
            }
        }
    }
    spread(&mut speed, shafts, magnets, constraints, &clutches);
    for shaft in shafts.iter().filter(|shaft| !shaft.rigid) {
        for (here, there) in [(0, 1), (1, 0)] {
            if let (Some(here), Some(there)) = (shaft.ends[here], shaft.ends[there])
                && torque[there].is_none()
            {
                torque[there] = torque[here];
            }
        }
    }
    let body_speed: Vec<f64> = speed.iter().map(|value| value.unwrap_or(1.0)).collect();
    let twist = shafts
        .iter()
        .map(|shaft| {
            let known = shaft
                .ends
                .iter()
                .flatten()
                .filter_map(|body| torque[*body])
                .fold(0.0_f64, f64::max);
            let by_torque = sized(known / shaft.stiffness);
            by_torque.unwrap_or_else(|| {
                let inertia = reduction.inertia_along(&shaft.row());
                let fastest = shaft
                    .ends
                    .iter()
                    .flatten()
                    .map(|body| body_speed[*body])
                    .fold(0.0_f64, f64::max);
                sized(fastest * (inertia / shaft.stiffness).sqrt()).unwrap_or(1.0)
            })
        })
        .collect();
    Scales { body_speed, twist, body_torque: torque }
}

fn sized(value: f64) -> Option<f64> {
    (value.is_finite() && value > 1e-300).then_some(value)
}

fn raise(slot: &mut Option<f64>, value: f64) {
    if let Some(value) = sized(value) {
        *slot = Some(slot.map_or(value, |old| old.max(value)));
    }
}

/// Passes known sizes across joints in synchronism, where two members turn.
fn spread(
    speed: &mut [Option<f64>],
    shafts: &[ShaftModel],
    magnets: &[Magnet],
    constraints: &[Constraint],
    clutches: &[BodyRow],
) {
    let rows: Vec<BodyRow> = constraints
        .iter()
        .map(|joint| joint.row.clone())
        .chain(shafts.iter().map(ShaftModel::row))
        .chain(magnets.iter().map(Magnet::row))
        .chain(clutches.iter().cloned())
        .collect();
    for _ in 0..speed.len() {
        for row in &rows {
            if let [(a, left), (b, right)] = row.as_slice() {
                match (speed[*a], speed[*b]) {
                    (Some(known), None) => speed[*b] = sized((known * left / right).abs()),
                    (None, Some(known)) => speed[*a] = sized((known * right / left).abs()),
                    _ => {}
                }
            }
        }
    }
}

/// The largest magnitude that a signal shows without being run; named ones count as unknown.
fn signal_size(signal: &Signal) -> f64 {
    match signal {
        Signal::Constant(value) => value.abs(),
        Signal::Step { from, to, .. } | Signal::Ramp { from, to, .. } => from.abs().max(to.abs()),
        Signal::Pulse { base, peak, .. } => base.abs().max(peak.abs()),
        Signal::Points(rows) | Signal::Table { rows, .. } => {
            rows.iter().fold(0.0, |size, row| f64::max(size, row[1].abs()))
        }
        Signal::Turbulence(spectrum) => spectrum.mean + 3.0 * spectrum.deviation,
        Signal::CoherentGust { hub_wind, rise, .. } => hub_wind + rise,
        Signal::Sine { mean, amplitude, .. } => mean.abs() + amplitude.abs(),
        _ => 0.0,
    }
}

fn motor_size(law: &MotorLaw) -> (f64, f64) {
    match law {
        MotorLaw::RatingPlate { power, speed, synchronous_speed, breakdown, .. } => {
            (*synchronous_speed, breakdown * power / speed)
        }
        MotorLaw::Induction { synchronous_speed, breakdown_torque, .. } => {
            (*synchronous_speed, *breakdown_torque)
        }
        MotorLaw::InductionCircuit { figures, .. } => {
            let circuit = Circuit::new(*figures);
            (circuit.synchronous_speed(), circuit.breakdown_torque())
        }
        MotorLaw::Curve { points, .. } => curve_size(points),
        MotorLaw::Prescribed { torque } => (0.0, signal_size(torque)),
        MotorLaw::SpeedLoop { speed, drive, .. } => (signal_size(speed), drive.limits.torque_limit),
        MotorLaw::TorqueLoop { drive, .. } => {
            (drive.limits.base_speed.unwrap_or(0.0), drive.limits.torque_limit)
        }
        MotorLaw::OptimalPower { figures } => (figures.square_law_ends(), figures.largest_torque()),
    }
}

fn load_size(law: &LoadLaw) -> (f64, f64) {
    match law {
        LoadLaw::PowerLaw { torque, speed, .. } => (*speed, *torque),
        LoadLaw::Friction { breakaway, .. } => (0.0, *breakaway),
        LoadLaw::Viscous { .. } | LoadLaw::Reciprocating { .. } => (0.0, 0.0),
        LoadLaw::Prescribed { torque } => (0.0, signal_size(torque)),
        LoadLaw::Curve { points } => curve_size(points),
        LoadLaw::Periodic { mean, harmonics } => {
            (0.0, mean + harmonics.iter().map(|wave| wave.amplitude.abs()).sum::<f64>())
        }
        // A plain working point: an advance ratio of 0.7.
        LoadLaw::Propeller { diameter, advance, .. } => {
            (std::f64::consts::TAU * signal_size(advance) / (0.7 * diameter), 0.0)
        }
        LoadLaw::AxialRotor { radius, flow, .. } => (8.0 * signal_size(flow) / radius, 0.0),
    }
}

fn curve_size(points: &[[f64; 2]]) -> (f64, f64) {
    points.iter().fold((0.0, 0.0), |(speed, torque), row| {
        (f64::max(speed, row[0].abs()), f64::max(torque, row[1].abs()))
    })
}
