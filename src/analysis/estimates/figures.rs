//! The figures of one magnet.

use super::EstimatesSpec;
use super::compare::{self, Comparison};
use super::rigid::RigidTrain;
use super::swing::Swing;
use crate::equations::Equations;
use crate::model::magnet::Magnet;
use crate::results::{GearState, RunResult};
use std::f64::consts::TAU;

/// Overloads over the pull-out for which critical pulses are worked out.
const OVERLOADS: [f64; 4] = [1.0, 1.5, 2.0, 3.0];

/// Factors on the damping of the file: it is the figure that nobody knows well.
const VARIANTS: [(&str, f64); 3] = [("zero", 0.0), ("given", 1.0), ("double", 2.0)];

/// The figures of one magnet, SI.
#[derive(Clone, Debug, PartialEq)]
pub struct GearEstimate {
    /// The magnet.
    pub gear: String,
    /// Inertia along the phase, kg*m2 per electrical rad squared.
    pub phase_inertia: f64,
    /// Turning members.
    pub members: Vec<MemberEstimate>,
    /// Without load, Hz.
    pub natural_frequency_hz: f64,
    /// Under the preload, Hz.
    pub loaded_frequency_hz: Option<f64>,
    /// Of that swing without load.
    pub damping_ratio: f64,
    /// Running load over the pull-out of its side, signed by direction; `None` when not known.
    pub preload: Option<f64>,
    /// Pull-out over running load.
    pub static_service_factor: Option<f64>,
    /// Share of the first motor's torque that crosses the gear.
    pub acceleration_share: Option<f64>,
    /// That motor.
    pub motor: Option<String>,
    /// Member whose side drives.
    pub drive: Option<&'static str>,
    /// The figures that depend on damping: with none, as given, and twice as much.
    pub variants: Vec<Variant>,
    /// By hand against the run.
    pub comparisons: Vec<Comparison>,
    /// What a reader must know.
    pub notes: Vec<String>,
}

/// Figures of one turning member.
#[derive(Clone, Debug, PartialEq)]
pub struct MemberEstimate {
    /// inner, modulator, outer, a or b.
    pub member: &'static str,
    /// Its body.
    pub body: String,
    /// N*m.
    pub pull_out_torque: f64,
    /// Inertia of its own side while the magnet gives way, kg*m2.
    pub side_inertia: f64,
    /// Inertia of the other side seen here in synchronism, kg*m2; `None` unless two members turn.
    pub other_side_inertia: Option<f64>,
    /// Share of a torque on this member that crosses the magnet.
    pub acceleration_share: f64,
    /// Torque step on this member, from rest without load and without damping, that is just survived, N*m.
    pub critical_step_torque: f64,
    /// Speed with which this member may arrive when all others are suddenly held, no load, rad/s.
    pub jam_speed: f64,
    /// The same under the preload.
    pub jam_speed_at_preload: Option<f64>,
}

/// The figures that depend on damping.
#[derive(Clone, Debug, PartialEq)]
pub struct Variant {
    /// zero, given or double.
    pub damping: &'static str,
    /// Of the zero-load swing.
    pub damping_ratio: f64,
    /// Largest load step from no load that is survived, over the pull-out.
    pub critical_step_share: f64,
    /// The same from the preload, as total.
    pub critical_step_share_from_preload: Option<f64>,
    /// Speed of the driving member that is survived when the others are suddenly held, no load, rad/s.
    pub jam_speed: Option<f64>,
    /// The same under the preload.
    pub jam_speed_at_preload: Option<f64>,
    /// Load over the pull-out below which a slipping gear falls into step again.
    pub resynchronisation_share: f64,
    /// How long overloads may act from the preload (from no load when it is not known).
    pub pulses: Vec<Pulse>,
}

/// How long an overload may act.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pulse {
    /// Load over the pull-out.
    pub overload: f64,
    /// s; `None`: for ever.
    pub duration: Option<f64>,
}

impl GearEstimate {
    /// The variant with the damping of the file.
    pub fn given(&self) -> Option<&Variant> {
        self.variants.iter().find(|variant| variant.damping == "given")
    }

    /// The jam speed of the driving member without damping and load, rad/s.
    pub fn jam_speed(&self) -> Option<f64> {
        let drive = self.drive?;
        self.members.iter().find(|member| member.member == drive).map(|member| member.jam_speed)
    }
}

/// Everything one magnet's figures are worked out from.
pub(super) struct Basis<'a> {
    pub equations: &'a Equations,
    pub index: usize,
    pub magnet: &'a Magnet,
    pub train: RigidTrain,
    /// Signed share of the pull-out on its side.
    pub preload: Option<f64>,
}

impl Basis<'_> {
    /// sqrt(K/J) for an inertia along the phase, rad/s.
    fn rate(&self, phase_inertia: f64) -> f64 {
        (self.magnet.amplitude / phase_inertia).sqrt()
    }

    /// The swing with an inertia along the phase and a factor on the damping.
    fn swing(&self, phase_inertia: f64, factor: f64) -> Swing<'_> {
        let rate = self.rate(phase_inertia);
        let (damping, peak) = damping(self.magnet);
        let fade = peak.map_or(0.0, |peak| rate / peak);
        let mirrored = self.preload.is_some_and(|share| share < 0.0);
        Swing::new(&self.magnet.law, factor * damping / (phase_inertia * rate), fade, mirrored)
    }

    /// Inertia along the phase when only one member turns.
    fn alone(&self, side_inertia: f64, count: f64) -> f64 {
        side_inertia / (count * count)
    }
}

/// Slope of the damper over the phase rate, and the phase rate of its largest torque when it fades.
fn damping(magnet: &Magnet) -> (f64, Option<f64>) {
    match magnet.fading {
        Some(fading) => (
            magnet.damping + fading.coefficient / (fading.count * fading.count),
            Some(fading.peak_at * fading.count.abs()),
        ),
        None => (magnet.damping, None),
    }
}

pub(super) fn gear(
    spec: &EstimatesSpec,
    equations: &Equations,
    index: usize,
    found: Option<&RunResult>,
) -> GearEstimate {
    let magnet = &equations.model.magnets[index];
    let mut notes = Vec::new();
    let preload = spec.preload.or_else(|| running_share(magnet, index, found, &mut notes));
    let train = RigidTrain::new(equations, index);
    let basis = Basis { equations, index, magnet, train, preload };
    let whole = basis.swing(basis.train.phase_inertia, 1.0);
    let load = preload.map(|share| share.abs() * whole.peak());
    let members = members(&basis, load);
    let (motor, drive) = drive(&basis);
    let variants: Vec<Variant> =
        VARIANTS.iter().map(|(name, factor)| variant(&basis, name, *factor, load, drive)).collect();
    let natural = magnet.natural_frequency() / TAU;
    let softened = load.and_then(|load| {
        let rest = magnet.law.stable_angle_for(load.copysign(preload.unwrap_or(1.0)))?;
        let free = magnet.law.slope(magnet.law.stable_point());
        Some(natural * (magnet.law.slope(rest).max(0.0) / free).sqrt())
    });
    tell(&basis, &variants, &mut notes);
    let mut estimate = GearEstimate {
        gear: magnet.name.clone(),
        phase_inertia: basis.train.phase_inertia,
        members,
        natural_frequency_hz: natural,
        loaded_frequency_hz: softened,
        damping_ratio: damping_ratio(&basis),
        preload,
        static_service_factor: preload.filter(|share| *share != 0.0).map(|share| 1.0 / share.abs()),
        acceleration_share: motor
            .map(|(_, body)| basis.train.share_of(body))
            .or_else(|| drive.and_then(|drive| share_of_member(&basis, drive))),
        motor: motor.map(|(motor, _)| equations.model.scenario.motors[motor].name.clone()),
        drive,
        variants,
        comparisons: Vec::new(),
        notes,
    };
    if let Some(found) = found {
        estimate.comparisons = compare::all(&basis, &estimate, found);
    }
    estimate
}

/// Damping ratio of the zero-load swing.
fn damping_ratio(basis: &Basis<'_>) -> f64 {
    let frequency = basis.magnet.natural_frequency();
    let ratio = damping(basis.magnet).0 / (2.0 * basis.train.phase_inertia * frequency);
    if ratio.is_finite() { ratio } else { 0.0 }
}

/// The share of the pull-out with which the run ends, when it ends in step.
fn running_share(
    magnet: &Magnet,
    index: usize,
    found: Option<&RunResult>,
    notes: &mut Vec<String>,
) -> Option<f64> {
    let gear = found?.gears.get(index)?;
    if gear.state_at_end != GearState::Synchronous {
        notes.push(
            "the run does not end in step: the running load is not known; `preload` states it"
                .to_owned(),
        );
        return None;
    }
    let torque = magnet.law.share(gear.final_load_angle);
    let [low, high] = magnet.law.peak_values();
    let share = if torque >= 0.0 { torque / high } else { -torque / low };
    (share.abs() < 1.0 - 1e-9).then_some(if share.abs() < 1e-12 { 0.0 } else { share })
}

fn members(basis: &Basis<'_>, load: Option<f64>) -> Vec<MemberEstimate> {
    let turning: Vec<_> = basis
        .magnet
        .members
        .iter()
        .filter_map(|member| member.body.map(|body| (member, body)))
        .collect();
    let whole = basis.swing(basis.train.phase_inertia, 0.0);
    let step = whole.critical_step(0.0).unwrap_or(0.0) * basis.magnet.amplitude;
    turning
        .iter()
        .map(|&(member, body)| {
            let side_inertia = basis.train.inertia_at(body);
            let phase_inertia = basis.alone(side_inertia, member.count);
            let swing = basis.swing(phase_inertia, 0.0);
            let speed = |load: f64| {
                swing.critical_kick(load).unwrap_or(0.0) * basis.rate(phase_inertia)
                    / member.count.abs()
            };
            let share = basis.train.share_of(body);
            let other = match turning.as_slice() {
                [a, b] => {
                    let other = if a.1 == body { b } else { a };
                    let ratio = member.count / other.0.count;
                    Some(basis.train.inertia_at(other.1) * ratio * ratio)
                }
                _ => None,
            };
            MemberEstimate {
                member: member.name,
                body: basis.equations.model.scenario.bodies[body].name.clone(),
                pull_out_torque: basis.magnet.pull_out_at(member.count),
                side_inertia,
                other_side_inertia: other,
                acceleration_share: share,
                critical_step_torque: step * member.count.abs() / share,
                jam_speed: speed(0.0),
                jam_speed_at_preload: load.map(speed),
            }
        })
        .collect()
}

fn share_of_member(basis: &Basis<'_>, name: &str) -> Option<f64> {
    let member = basis.magnet.members.iter().find(|member| member.name == name)?;
    member.body.map(|body| basis.train.share_of(body))
}

/// The first motor whose torque reaches the magnet (place and body), and the member on its side.
fn drive(basis: &Basis<'_>) -> (Option<(usize, usize)>, Option<&'static str>) {
    let model = &basis.equations.model;
    let motor = model.scenario.motors.iter().enumerate().find_map(|(place, motor)| {
        let body = model.body(&motor.body)?;
        basis.train.reaches(body).then_some((place, body))
    });
    let turning = basis
        .magnet
        .members
        .iter()
        .filter_map(|member| member.body.map(|body| (member.name, body)));
    let mut turning: Vec<_> = turning.collect();
    if let Some((_, driven)) = motor {
        turning.sort_by_key(|(_, body)| !basis.train.joined(*body, driven));
    }
    (motor, turning.first().map(|(name, _)| *name))
}

fn variant(
    basis: &Basis<'_>,
    name: &'static str,
    factor: f64,
    load: Option<f64>,
    drive: Option<&'static str>,
) -> Variant {
    let whole = basis.swing(basis.train.phase_inertia, factor);
    let peak = whole.peak();
    let member = basis.magnet.members.iter().find(|member| Some(member.name) == drive);
    let side = member.and_then(|member| member.body).map(|body| basis.train.inertia_at(body));
    let jam = |load: f64| -> Option<f64> {
        let (member, side) = (member?, side?);
        let phase_inertia = basis.alone(side, member.count);
        let kick = basis.swing(phase_inertia, factor).critical_kick(load)?;
        Some(kick * basis.rate(phase_inertia) / member.count.abs())
    };
    let start = load.unwrap_or(0.0);
    let rate = basis.rate(basis.train.phase_inertia);
    Variant {
        damping: name,
        damping_ratio: factor * damping_ratio(basis),
        critical_step_share: whole.critical_step(0.0).unwrap_or(0.0) / peak,
        critical_step_share_from_preload: load
            .and_then(|load| whole.critical_step(load))
            .map(|step| step / peak),
        jam_speed: jam(0.0),
        jam_speed_at_preload: load.and_then(jam),
        resynchronisation_share: whole.resynchronisation().unwrap_or(0.0) / peak,
        pulses: OVERLOADS
            .iter()
            .map(|overload| Pulse {
                overload: *overload,
                duration: whole.critical_pulse(start, overload * peak).map(|time| time / rate),
            })
            .collect(),
    }
}

/// What the figures mean for this gear.
fn tell(basis: &Basis<'_>, variants: &[Variant], notes: &mut Vec<String>) {
    let name = &basis.magnet.name;
    let given = variants.iter().find(|variant| variant.damping == "given");
    let Some(given) = given else { return };
    if given.damping_ratio == 0.0 {
        notes.push(format!(
            "no damping is stated for `{name}`: steps and jams are on the safe side, and once slipping it never falls into step by itself"
        ));
    } else if let Some(preload) = basis.preload
        && preload.abs() > given.resynchronisation_share
    {
        notes.push(format!(
            "once slipping, `{name}` does not fall into step at its running load: {:.1} % of the pull-out against {:.1} %",
            100.0 * preload.abs(),
            100.0 * given.resynchronisation_share
        ));
    }
    if let (Some(_), Some(fading)) = (basis.preload, basis.magnet.fading) {
        notes.push(format!(
            "the damper of `{name}` is strongest at {:.4} rad/s and fades beyond: double damping doubles it at every speed",
            fading.peak_at
        ));
    }
}
