//! The train at rest: ratios, referred inertias, pull-out torques and zero-load frequencies.
//!
//! ```text
//! in synchronism every shaft, joint and magnetic row is zero: R w = 0, w = N q (N: null space)
//! body i turns at N_i/N_ref of the reference body, where those rows of N are parallel
//! zero-load frequency f = sqrt(K*law'(stable)/J_e)/(2 pi),  1/J_e = r M^-1 r',  shafts rigid
//! damping ratio D/(2*sqrt(K*law'(stable)*J_e))
//! ```

use crate::analysis::poles::PolePairs;
use crate::component::magnet_losses::Losses;
use crate::component::magnetic_gear::{MagneticGear, Member};
use crate::model::elimination::{self, Constraint, Reduction};
use crate::model::magnet::Magnet;
use crate::model::{Model, ShaftModel};
use nalgebra::DMatrix;
use std::f64::consts::TAU;

/// Figures of a train.
#[derive(Clone, Debug, PartialEq)]
pub struct Train {
    /// The body that ratios and inertias are referred to: the first motor's, else the first.
    pub reference: String,
    /// Bodies in file order.
    pub bodies: Vec<BodyFigures>,
    /// Shafts in file order.
    pub shafts: Vec<ShaftFigures>,
    /// Magnetic gears, then couplings.
    pub magnets: Vec<MagnetFigures>,
}

/// Figures of a body.
#[derive(Clone, Debug, PartialEq)]
pub struct BodyFigures {
    /// Its name.
    pub name: String,
    /// kg*m2.
    pub inertia: f64,
    /// Speed at the start, rad/s.
    pub start_speed: f64,
    /// Its speed over that of the reference body in synchronism; `None` when that is not fixed.
    pub ratio: Option<f64>,
    /// Its inertia referred to the reference body, kg*m2.
    pub referred_inertia: Option<f64>,
}

/// Figures of a shaft.
#[derive(Clone, Debug, PartialEq)]
pub struct ShaftFigures {
    /// Its name.
    pub name: String,
    /// Its ends.
    pub between: [String; 2],
    /// True when the ends turn as one.
    pub rigid: bool,
    /// N*m/rad.
    pub stiffness: f64,
    /// N*m*s/rad.
    pub damping: f64,
    /// Total free play, rad.
    pub backlash: f64,
    /// Frequency of its own mode between what is rigidly joined to its ends, Hz.
    pub own_frequency: f64,
}

/// Figures of a magnetic gear or coupling.
#[derive(Clone, Debug, PartialEq)]
pub struct MagnetFigures {
    /// Its name.
    pub name: String,
    /// True for a coupling.
    pub coupling: bool,
    /// Members in the order inner, modulator, outer or a, b.
    pub members: Vec<MemberFigures>,
    /// Speed of the faster over the slower turning member, signed; `None` unless two turn.
    pub ratio: Option<f64>,
    /// Pole pairs; `None` for a coupling.
    pub pole_pairs: Option<PolePairs>,
    /// Zero-load natural frequency, Hz.
    pub natural_frequency: f64,
    /// Share of critical damping of that swing.
    pub damping_ratio: f64,
    /// Inertia along the phase, kg*m2 per electrical rad squared.
    pub phase_inertia: f64,
    /// Factor on the pull-out torque from the magnets' temperature.
    pub temperature_factor: f64,
    /// The law's peaks, electrical rad.
    pub law_peaks: [f64; 2],
    /// Losses without load, when they are stated.
    pub losses: Option<LossFigures>,
    /// Time constants of its thermal nodes, each by itself, s.
    pub thermal_times: Vec<f64>,
}

/// Losses of a gear in step without load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LossFigures {
    /// The rotor whose speed is stated.
    pub rotor: &'static str,
    /// Its speed against the modulator, rad/s.
    pub speed: f64,
    /// W.
    pub hysteresis: f64,
    /// W.
    pub eddy: f64,
    /// Frequencies of the field in the inner rotor, the pieces and the outer rotor, Hz.
    pub frequencies: [f64; 3],
}

/// Figures of a member.
#[derive(Clone, Debug, PartialEq)]
pub struct MemberFigures {
    /// inner, modulator, outer, a or b.
    pub member: &'static str,
    /// Body; `None` is ground.
    pub body: Option<String>,
    /// Pole pairs, or pieces.
    pub count: f64,
    /// Pull-out torque there, N*m.
    pub pull_out_torque: f64,
    /// Stiffness of the magnetic spring seen there at no load, N*m/rad.
    pub stiffness: f64,
    /// Inertia of what is joined to it without a magnet between, referred to it, kg*m2.
    pub inertia: Option<f64>,
}

/// Works out the figures of a train.
pub fn figures(model: &Model) -> Train {
    let scenario = &model.scenario;
    let motor = scenario.motors.first().map(|motor| motor.body.as_str());
    let reference = motor.and_then(|body| model.body(body)).unwrap_or(0);
    let ratios = synchronous_ratios(model, reference);
    let bodies = scenario
        .bodies
        .iter()
        .zip(&ratios)
        .zip(&model.start_speeds)
        .map(|((body, ratio), speed)| BodyFigures {
            name: body.name.clone(),
            inertia: body.inertia,
            start_speed: *speed,
            ratio: *ratio,
            referred_inertia: ratio.map(|ratio| body.inertia * ratio * ratio),
        })
        .collect();
    let shafts = scenario
        .shafts
        .iter()
        .zip(&model.shafts)
        .map(|(typed, shaft)| ShaftFigures {
            name: typed.name.clone(),
            between: typed.between.clone(),
            rigid: shaft.rigid,
            stiffness: shaft.stiffness,
            damping: shaft.damping,
            backlash: shaft.backlash,
            own_frequency: (shaft.stiffness / model.reduction.inertia_along(&shaft.row())).sqrt()
                / TAU,
        })
        .collect();
    let rigid = rigid_train(model);
    let magnets = model.magnets.iter().map(|magnet| magnet_figures(model, magnet, &rigid));
    Train {
        reference: scenario.bodies.get(reference).map_or_else(String::new, |it| it.name.clone()),
        bodies,
        shafts,
        magnets: magnets.collect(),
    }
}

/// The train with its shafts rigid and its magnets left out.
fn rigid_train(model: &Model) -> Reduction {
    let mut rows = model.constraints.clone();
    rows.extend(model.shafts.iter().filter(|shaft| !shaft.rigid).map(|shaft| Constraint {
        path: String::new(),
        label: String::new(),
        row: shaft.row(),
    }));
    let inertias: Vec<f64> = model.scenario.bodies.iter().map(|body| body.inertia).collect();
    elimination::reduce_quietly(&rows, &inertias)
}

/// Speed of each body over that of the reference body when nothing twists and nothing slips.
fn synchronous_ratios(model: &Model, reference: usize) -> Vec<Option<f64>> {
    let bodies = model.scenario.bodies.len();
    let mut rows: Vec<_> = model.constraints.iter().map(|joint| joint.row.clone()).collect();
    rows.extend(model.shafts.iter().map(ShaftModel::row));
    rows.extend(model.magnets.iter().map(Magnet::row));
    // Square or taller, so that the decomposition gives every direction.
    let mut matrix = DMatrix::<f64>::zeros(rows.len().max(bodies), bodies);
    for (index, row) in rows.iter().enumerate() {
        let size = row.iter().fold(0.0_f64, |size, (_, factor)| size.max(factor.abs()));
        for (body, factor) in row.iter().filter(|_| size > 0.0) {
            matrix[(index, *body)] += factor / size;
        }
    }
    let parts = matrix.svd(false, true);
    let Some(directions) = parts.v_t else { return vec![None; bodies] };
    let free: Vec<usize> =
        (0..bodies).filter(|place| parts.singular_values[*place] < 1e-9).collect();
    let form =
        |body: usize| -> Vec<f64> { free.iter().map(|place| directions[(*place, body)]).collect() };
    let dot = |a: &[f64], b: &[f64]| -> f64 { a.iter().zip(b).map(|(a, b)| a * b).sum() };
    let base = form(reference);
    let length = dot(&base, &base);
    (0..bodies)
        .map(|body| {
            if length < 1e-18 {
                return None;
            }
            let own = form(body);
            let ratio = dot(&own, &base) / length;
            let rest: f64 =
                own.iter().zip(&base).map(|(own, base)| own - ratio * base).map(|x| x * x).sum();
            (rest <= 1e-18 * dot(&own, &own).max(length)).then_some(ratio)
        })
        .collect()
}

fn magnet_figures(model: &Model, magnet: &Magnet, rigid: &Reduction) -> MagnetFigures {
    let scenario = &model.scenario;
    let rest = magnet.law.stable_angle_for(0.0).unwrap_or(0.0);
    let stiffness = magnet.law.slope(rest).max(0.0);
    let fading = magnet.fading.map_or(0.0, |it| it.coefficient / (it.count * it.count));
    let damping = magnet.damping + fading;
    let gear = scenario.magnetic_gears.iter().find(|gear| gear.name == magnet.name);
    let coupling = scenario.magnetic_couplings.iter().find(|it| it.name == magnet.name);
    let field = gear.map(|gear| &gear.field).or(coupling.map(|coupling| &coupling.field));
    let members = magnet.members.iter().map(|member| MemberFigures {
        member: member.name,
        body: member.body.and_then(|body| scenario.bodies.get(body)).map(|body| body.name.clone()),
        count: member.count.abs(),
        pull_out_torque: magnet.pull_out_at(member.count),
        stiffness: member.count * member.count * stiffness,
        inertia: member
            .body
            .map(|body| rigid.inertia_along(&[(body, 1.0)]))
            .filter(|inertia| inertia.is_finite()),
    });
    MagnetFigures {
        name: magnet.name.clone(),
        coupling: magnet.coupling,
        members: members.collect(),
        ratio: magnet.ratio(),
        pole_pairs: gear
            .map(|gear| PolePairs { inner: gear.inner_pole_pairs, outer: gear.outer_pole_pairs }),
        natural_frequency: magnet.natural_frequency() / TAU,
        damping_ratio: damping / (2.0 * (stiffness * magnet.phase_inertia).sqrt()),
        phase_inertia: magnet.phase_inertia,
        temperature_factor: field.map_or(1.0, |field| field.warmth.factor()),
        law_peaks: magnet.law.peaks(),
        losses: gear.and_then(|gear| Some(loss_figures(gear, gear.losses?))),
        thermal_times: field
            .and_then(|field| field.warmth.thermal)
            .map(|thermal| thermal.nodes().map(|node| node.capacity * node.resistance).collect())
            .unwrap_or_default(),
    }
}

fn loss_figures(gear: &MagneticGear, losses: Losses) -> LossFigures {
    let pairs = [f64::from(gear.inner_pole_pairs), f64::from(gear.outer_pole_pairs)];
    let [hysteresis, eddy] = losses.whole();
    LossFigures {
        rotor: if losses.at == Member::Outer { "outer" } else { "inner" },
        speed: losses.speed,
        hysteresis,
        eddy,
        frequencies: losses.frequencies(pairs),
    }
}
