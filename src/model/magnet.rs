//! Magnetic gears and couplings with their members found and their law built.
//!
//! ```text
//! phase rate  = sum count_k * speed_k        counts: +p_i, +p_o, -(p_i + p_o); coupling: +p, -p
//! torque on k = -count_k * (K*law(phase) + D*phase rate)
//! K = pull-out torque at a member / |count|,  D = coefficient / count^2
//! ```

use super::elimination::{self, Constraint};
use super::{BodyRow, ShaftModel, body_index};
use crate::component::magnet_temperature::Warmth;
use crate::component::magnetic_gear::Member;
use crate::component::magnetic_law::MagnetLaw;
use crate::diagnostic::Diagnostics;
use crate::scenario::Scenario;
use std::f64::consts::TAU;

/// A magnetic gear or coupling.
#[derive(Clone, Debug)]
pub struct Magnet {
    /// Its name.
    pub name: String,
    /// Path of its section, for warnings.
    pub path: String,
    /// True for a coupling.
    pub coupling: bool,
    /// Members in the order inner, modulator, outer (coupling: a, b).
    pub members: Vec<MagnetMember>,
    /// Torque law over the phase, amplitude included.
    pub law: MagnetLaw,
    /// Amplitude K: peak of the synchronous torque per unit count, N*m.
    pub amplitude: f64,
    /// Linear damping on the phase rate, N*m*s/rad per count squared.
    pub damping: f64,
    /// A damper that fades: its member's count, coefficient and speed of the largest torque there.
    pub fading: Option<FadingDamping>,
    /// Temperature of the magnets.
    pub warmth: Warmth,
    /// Phase at the start, electrical rad.
    pub start_phase: f64,
    /// Inertia along the phase with shafts rigid and everything else left out, kg*m2 per electrical rad squared.
    pub phase_inertia: f64,
}

/// A member of a magnet.
#[derive(Clone, Debug, PartialEq)]
pub struct MagnetMember {
    /// inner, modulator, outer, a or b.
    pub name: &'static str,
    /// Body; `None` is ground.
    pub body: Option<usize>,
    /// Factor of its angle in the phase.
    pub count: f64,
}

/// A damper that is strongest at one slip speed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FadingDamping {
    /// Factor of the member's angle in the phase.
    pub count: f64,
    /// N*m*s/rad at that member.
    pub coefficient: f64,
    /// Mechanical slip speed of the largest torque, rad/s.
    pub peak_at: f64,
}

impl Magnet {
    /// The phase rate as a form over body speeds.
    pub fn row(&self) -> BodyRow {
        self.members
            .iter()
            .filter_map(|member| member.body.map(|body| (body, member.count)))
            .collect()
    }

    /// Pull-out torque at a member, N*m.
    pub fn pull_out_at(&self, count: f64) -> f64 {
        self.amplitude * count.abs()
    }

    /// Zero-load natural frequency, rad/s: `sqrt(K law'(stable) / J_e)`.
    pub fn natural_frequency(&self) -> f64 {
        let rest = self.law.stable_angle_for(0.0).unwrap_or(0.0);
        (self.law.slope(rest).max(0.0) / self.phase_inertia).sqrt()
    }

    /// Zero-load natural period, s; infinite when there is none.
    pub fn natural_period(&self) -> f64 {
        let frequency = self.natural_frequency();
        if frequency > 0.0 { TAU / frequency } else { f64::INFINITY }
    }

    /// Speed of the faster over the slower turning member in synchronism, signed; `None` unless two turn.
    pub fn ratio(&self) -> Option<f64> {
        if self.coupling {
            return Some(1.0);
        }
        let turning: Vec<f64> = self
            .members
            .iter()
            .filter(|member| member.body.is_some())
            .map(|member| member.count)
            .collect();
        match turning.as_slice() {
            [first, second] => {
                let ratio = -second / first;
                Some(if ratio.abs() >= 1.0 { ratio } else { 1.0 / ratio })
            }
            _ => None,
        }
    }
}

/// Builds all magnets of a scenario, gears first.
pub fn build(
    scenario: &Scenario,
    shafts: &[ShaftModel],
    constraints: &[Constraint],
    inertias: &[f64],
    found: &mut Diagnostics,
) -> Vec<Magnet> {
    let mut stiff = constraints.to_vec();
    stiff.extend(shafts.iter().filter(|shaft| !shaft.rigid).map(|shaft| Constraint {
        path: String::new(),
        label: String::new(),
        row: shaft.row(),
    }));
    let rigid_train = elimination::reduce_quietly(&stiff, inertias);
    let mut magnets = Vec::new();
    for gear in &scenario.magnetic_gears {
        let (inner, outer) = (f64::from(gear.inner_pole_pairs), f64::from(gear.outer_pole_pairs));
        let pieces = inner + outer;
        let count_of = |member: Member| match member {
            Member::Inner => inner,
            Member::Modulator => pieces,
            Member::Outer => outer,
        };
        let amplitude =
            gear.pull_out_torque / count_of(gear.pull_out_at) * gear.field.warmth.factor();
        let path = format!("magnetic_gears.{}", gear.name);
        let Some(law) = law(&path, amplitude, &gear.field.harmonics, found) else { continue };
        let linear = gear.damping.filter(|damping| damping.peak_at.is_none());
        magnets.push(Magnet {
            name: gear.name.clone(),
            path,
            coupling: false,
            members: vec![
                MagnetMember {
                    name: "inner",
                    body: body_index(scenario, &gear.inner),
                    count: inner,
                },
                MagnetMember {
                    name: "modulator",
                    body: body_index(scenario, &gear.modulator),
                    count: -pieces,
                },
                MagnetMember {
                    name: "outer",
                    body: body_index(scenario, &gear.outer),
                    count: outer,
                },
            ],
            law,
            amplitude,
            damping: linear
                .map_or(0.0, |damping| damping.coefficient / count_of(damping.at).powi(2)),
            fading: gear.damping.and_then(|damping| {
                damping.peak_at.map(|peak_at| FadingDamping {
                    count: count_of(damping.at),
                    coefficient: damping.coefficient,
                    peak_at,
                })
            }),
            warmth: gear.field.warmth,
            start_phase: gear.field.initial_load_angle.unwrap_or(0.0),
            phase_inertia: f64::INFINITY,
        });
    }
    for coupling in &scenario.magnetic_couplings {
        let count = f64::from(coupling.pole_pairs);
        let amplitude = coupling.pull_out / count * coupling.field.warmth.factor();
        let path = format!("magnetic_couplings.{}", coupling.name);
        let Some(law) = law(&path, amplitude, &coupling.field.harmonics, found) else { continue };
        magnets.push(Magnet {
            name: coupling.name.clone(),
            path,
            coupling: true,
            members: vec![
                MagnetMember { name: "a", body: body_index(scenario, &coupling.between[0]), count },
                MagnetMember {
                    name: "b",
                    body: body_index(scenario, &coupling.between[1]),
                    count: -count,
                },
            ],
            law,
            amplitude,
            damping: if coupling.damping_peak_at.is_none() {
                coupling.damping / (count * count)
            } else {
                0.0
            },
            fading: coupling.damping_peak_at.map(|peak_at| FadingDamping {
                count,
                coefficient: coupling.damping,
                peak_at,
            }),
            warmth: coupling.field.warmth,
            start_phase: coupling.field.initial_load_angle.unwrap_or(0.0),
            phase_inertia: f64::INFINITY,
        });
    }
    for magnet in &mut magnets {
        magnet.phase_inertia = rigid_train.inertia_along(&magnet.row());
    }
    magnets
}

fn law(
    path: &str,
    amplitude: f64,
    harmonics: &[crate::component::magnetic_gear::Harmonic],
    found: &mut Diagnostics,
) -> Option<MagnetLaw> {
    match MagnetLaw::new(amplitude, harmonics) {
        Ok(law) => Some(law),
        Err(message) => {
            found.error(format!("{path}.harmonics"), message);
            None
        }
    }
}
