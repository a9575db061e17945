//! Modes: natural frequencies, damping, shapes, softening of the magnets, interference diagram.

pub mod eigen;
pub mod excitation;
pub mod interference;
pub mod linear;
pub mod shape;
mod spec;

pub use spec::{ExcitationSpec, ModesSpec};

use super::linear_point::{self, LinearPoint};
use crate::equations::{Equations, dot};
use crate::quantity::format_number;
use eigen::Root;
use interference::Interference;
use linear::{LinearTrain, MagnetLoad, linearise};
use nalgebra::{Complex, DVector};
use shape::{DampingSources, ModeShape, Named};
use std::f64::consts::TAU;

/// Roots up to this share of the fastest are rounding of zero.
const ZERO: f64 = 1e-10;

/// What the study found.
#[derive(Clone, Debug, PartialEq)]
pub struct ModesResult {
    /// The point in words.
    pub point: String,
    /// Time of the point, s.
    pub time: f64,
    /// Speed of each body there, rad/s.
    pub speeds: Vec<Named>,
    /// Oscillating modes, frequency rising.
    pub modes: Vec<Mode>,
    /// Real roots, rate rising in size.
    pub overdamped: Vec<RealRoot>,
    /// Motions that nothing resists: speeds of the bodies, the largest 1.
    pub free: Vec<Vec<Named>>,
    /// How each magnet's stiffness stands at the point.
    pub softening: Vec<Softening>,
    /// The interference diagram, when a speed range is given.
    pub interference: Option<Interference>,
    /// The separation asked for.
    pub separation: Option<f64>,
    /// Whether every excitation keeps it; `None` when nothing is asked or it cannot be told.
    pub met: Option<bool>,
    /// What a reader must know.
    pub notes: Vec<String>,
}

/// One oscillating mode.
#[derive(Clone, Debug, PartialEq)]
pub struct Mode {
    /// What moves on what, in words.
    pub label: String,
    /// `|lambda|/2 pi`, Hz.
    pub frequency_hz: f64,
    /// `|Im lambda|/2 pi`, Hz.
    pub damped_hz: f64,
    /// `-Re/|lambda|`; negative when the mode grows.
    pub damping_ratio: f64,
    /// Frequency of the same mode with all magnets unloaded, Hz, where it can be told.
    pub unloaded_hz: Option<f64>,
    /// How it moves.
    pub shape: ModeShape,
}

/// One root without oscillation.
#[derive(Clone, Debug, PartialEq)]
pub struct RealRoot {
    /// lambda, 1/s: negative when it decays.
    pub rate: f64,
    /// Amplitude of each body, the largest 1.
    pub shape: Vec<Named>,
}

/// Stiffness of a magnet at the point against that without load.
#[derive(Clone, Debug, PartialEq)]
pub struct Softening {
    /// The magnet.
    pub gear: String,
    /// Load angle at the point, electrical rad.
    pub load_angle: f64,
    /// Share of the pull-out torque at the point, signed.
    pub load_share: f64,
    /// Stiffness over the phase at the point, N*m/rad.
    pub stiffness: f64,
    /// The same without load.
    pub unloaded_stiffness: f64,
    /// Factor on the frequency of the magnet's own mode: the root of the ratio of stiffnesses.
    pub frequency_factor: f64,
    /// Stiffness on each turning member with the others held, N*m/rad.
    pub member_stiffness: Vec<Named>,
}

/// Runs the study.
///
/// # Errors
/// In words: no such point, or eigenvalues that do not converge.
pub fn run(spec: &ModesSpec, equations: &Equations) -> Result<ModesResult, String> {
    let point = linear_point::find(equations, spec.point)?;
    let mut result = at_point(equations, &point)?;
    result.point = spec.point.words();
    result.separation = spec.separation;
    if let Some(range) = &spec.range {
        let diagram = interference::draw(equations, &point, spec, range, &result.modes)?;
        result.met = spec.separation.and_then(|limit| diagram.verdict(limit));
        result.notes.extend(diagram.nearest_words());
        result.notes.extend(diagram.notes.iter().cloned());
        result.notes.extend(softening_words(&result.modes));
        result.interference = Some(diagram);
    }
    Ok(result)
}

/// What the level lines of the diagram leave out: magnets are softer the more they bear, and the
/// load changes along the diagram with the speed.
fn softening_words(modes: &[Mode]) -> Option<String> {
    let softened: Vec<String> = modes
        .iter()
        .filter_map(|mode| {
            let free = mode.unloaded_hz.filter(|free| *free > 1.01 * mode.frequency_hz)?;
            Some(format!("{} at up to {} Hz", mode.label, format_number(free, 4)))
        })
        .collect();
    (!softened.is_empty()).then(|| {
        format!(
            "the diagram draws the modes as the load at the point leaves them; where the magnets bear less, as \
             at lower speed, they lie higher: {} without load",
            softened.join(", ")
        )
    })
}

/// Modes of a train at a point, without diagram.
///
/// # Errors
/// When the eigenvalues do not converge.
pub fn at_point(equations: &Equations, point: &LinearPoint) -> Result<ModesResult, String> {
    let failed = || "the eigenvalues of the linearised train do not converge".to_owned();
    let train = linearise(equations, point, MagnetLoad::AtPoint);
    let unloaded = linearise(equations, point, MagnetLoad::None);
    let roots = eigen::roots(&train.matrix).ok_or_else(failed)?;
    let other = eigen::roots(&unloaded.matrix).ok_or_else(failed)?;
    let fastest = roots.iter().map(|root| root.value.norm()).fold(0.0, f64::max);
    let sources = DampingSources::new(equations, point);
    let full = |train: &LinearTrain, root: &Root| -> DVector<Complex<f64>> {
        train.expand.map(|value| Complex::new(value, 0.0)) * &root.vector
    };
    let vectors: Vec<_> = roots.iter().map(|root| full(&train, root)).collect();
    let others: Vec<_> = other.iter().map(|root| (root, full(&unloaded, root))).collect();
    let partner = pair_up(equations, &roots, &vectors, &others);
    let mut modes = Vec::new();
    let mut overdamped = Vec::new();
    for (index, root) in roots.iter().enumerate() {
        let size = root.value.norm();
        if size <= ZERO * fastest {
            continue;
        }
        let shape = ModeShape::new(equations, &train, &sources, &vectors[index]);
        if root.value.im == 0.0 {
            overdamped.push(RealRoot { rate: root.value.re, shape: shape.amplitude });
            continue;
        }
        let ratio = -root.value.re / size;
        modes.push(Mode {
            label: shape.label(),
            frequency_hz: size / TAU,
            damped_hz: root.value.im / TAU,
            damping_ratio: if ratio.abs() * size < 1e-13 * fastest { 0.0 } else { ratio },
            unloaded_hz: partner[index].map(|place| others[place].0.value.norm() / TAU),
            shape,
        });
    }
    modes.sort_by(|a, b| a.frequency_hz.total_cmp(&b.frequency_hz));
    overdamped.sort_by(|a, b| a.rate.abs().total_cmp(&b.rate.abs()));
    let mut notes = point.notes.clone();
    for mode in modes.iter().filter(|mode| mode.damping_ratio < -1e-9) {
        notes.push(format!("`{}` grows: its damping ratio is negative", mode.label));
    }
    if overdamped.iter().any(|root| root.rate > 0.0) {
        notes.push(
            "a deviation grows without oscillation, as on the rising part of a motor's curve: the point is unstable"
                .to_owned(),
        );
    }
    Ok(ModesResult {
        point: String::new(),
        time: point.time,
        speeds: body_speeds(equations, &point.state),
        modes,
        overdamped,
        free: (0..train.free.ncols())
            .map(|column| shape::free_shape(equations, train.free.column(column).as_slice()))
            .collect(),
        softening: softening(equations, point, &train, &unloaded),
        interference: None,
        separation: None,
        met: None,
        notes,
    })
}

/// Speeds of all bodies at a state, rad/s.
pub fn body_speeds(equations: &Equations, state: &[f64]) -> Vec<Named> {
    let bodies = equations.model.scenario.bodies.iter().enumerate();
    bodies
        .map(|(place, body)| (body.name.clone(), dot(&equations.speed_row(&[(place, 1.0)]), state)))
        .collect()
}

/// For each root the place of the unloaded root that moves alike, best pairs first.
fn pair_up(
    equations: &Equations,
    roots: &[Root],
    vectors: &[DVector<Complex<f64>>],
    others: &[(&Root, DVector<Complex<f64>>)],
) -> Vec<Option<usize>> {
    let mass = &equations.model.reduction.mass;
    let mut pairs = Vec::new();
    for (here, root) in roots.iter().enumerate().filter(|(_, root)| root.value.im > 0.0) {
        for (there, (other, vector)) in others.iter().enumerate() {
            if other.value.im > 0.0 {
                let alike = shape::overlap(mass, &vectors[here], vector);
                // Repeated modes overlap alike: nearness in frequency breaks the tie.
                let near = (root.value.norm() / other.value.norm()).ln().abs();
                pairs.push((alike - 1e-3 * near, alike, here, there));
            }
        }
    }
    pairs.sort_by(|a, b| b.0.total_cmp(&a.0));
    let mut partner = vec![None; roots.len()];
    let mut taken = vec![false; others.len()];
    for (_, alike, here, there) in pairs {
        if alike > 0.5 && partner[here].is_none() && !taken[there] {
            partner[here] = Some(there);
            taken[there] = true;
        }
    }
    partner
}

fn softening(
    equations: &Equations,
    point: &LinearPoint,
    train: &LinearTrain,
    unloaded: &LinearTrain,
) -> Vec<Softening> {
    let magnets = equations.model.magnets.iter().enumerate();
    magnets
        .map(|(index, magnet)| {
            let place = equations.phase_state[index];
            let phase = point.state[place] * equations.scale[place];
            let share = magnet.law.share(phase);
            let [low, high] = magnet.law.peak_values();
            let (here, free) = (train.magnet_stiffness[index], unloaded.magnet_stiffness[index]);
            Softening {
                gear: magnet.name.clone(),
                load_angle: crate::equations::frame::load_angle(phase),
                load_share: if share >= 0.0 { share / high } else { -share / low },
                stiffness: here,
                unloaded_stiffness: free,
                frequency_factor: if free > 0.0 { (here / free).max(0.0).sqrt() } else { 0.0 },
                member_stiffness: magnet
                    .members
                    .iter()
                    .filter(|member| member.body.is_some())
                    .map(|member| (member.name.to_owned(), here * member.count * member.count))
                    .collect(),
            }
        })
        .collect()
}

#[cfg(test)]
mod diagram_tests;
#[cfg(test)]
mod independent_tests;
#[cfg(test)]
mod tests;
