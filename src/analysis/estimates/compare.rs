//! By hand against the run, and why they differ where they do.

use super::figures::{Basis, GearEstimate};
use crate::analysis::linear_point::{self, Point};
use crate::analysis::modes::{self, Mode, shape::Named};
use crate::component::law::Law;
use crate::component::motor::MotorLaw;
use crate::equations::channels::ends_of;
use crate::equations::{Equations, Owner, Shape};
use crate::model::difference;
use crate::results::{ChannelResult, GearState, RunResult};

/// Relative difference of frequencies that rigid shafts explain.
const FREQUENCY_ROOM: f64 = 0.02;

/// Relative difference of damping ratios that is not worth a word.
const DAMPING_ROOM: f64 = 0.1;

/// Difference of shares of the pull-out that is not worth a word.
const SHARE_ROOM: f64 = 0.02;

/// Shares of energy and damping below this are no reason.
const REASON: f64 = 0.02;

/// One figure by hand and as found.
#[derive(Clone, Debug, PartialEq)]
pub struct Comparison {
    /// What it is, in words.
    pub figure: &'static str,
    /// By hand.
    pub hand: f64,
    /// As found; `None` when the run does not show it.
    pub found: Option<f64>,
    /// SI unit of both.
    pub unit: &'static str,
    /// Whether they agree as far as may be expected; `None` when nothing was found.
    pub agree: Option<bool>,
    /// Why they differ, or what stands in the way.
    pub why: Vec<String>,
}

/// All comparisons of one magnet.
pub(super) fn all(basis: &Basis<'_>, hand: &GearEstimate, found: &RunResult) -> Vec<Comparison> {
    let mut list = swing(basis, hand);
    list.extend(end_of_run(basis, found));
    list.extend(peak(basis, hand, found));
    list.extend(in_step_again(basis, hand, found));
    list
}

/// Frequency and damping of the swing against the whole train linearised.
fn swing(basis: &Basis<'_>, hand: &GearEstimate) -> Vec<Comparison> {
    let equations = basis.equations;
    let duration = equations.model.scenario.duration;
    let point = linear_point::find(equations, Point::Steady)
        .or_else(|_| linear_point::find(equations, Point::Time(duration)));
    let result = point.and_then(|point| modes::at_point(equations, &point));
    let mode = match &result {
        Ok(result) => own_mode(&result.modes, &hand.gear),
        Err(_) => None,
    };
    let Some(mode) = mode else {
        let reason = match result {
            Err(reason) => reason,
            Ok(_) => format!("no mode of the train swings on `{}`", hand.gear),
        };
        return vec![Comparison {
            figure: "natural frequency without load",
            hand: hand.natural_frequency_hz,
            found: None,
            unit: "Hz",
            agree: None,
            why: vec![reason],
        }];
    };
    let frequency = mode.unloaded_hz.unwrap_or(mode.frequency_hz);
    let near = |hand: f64, found: f64, room: f64| (found - hand).abs() <= room * hand.abs();
    let agree = near(hand.natural_frequency_hz, frequency, FREQUENCY_ROOM);
    let mut list = vec![Comparison {
        figure: "natural frequency without load",
        hand: hand.natural_frequency_hz,
        found: Some(frequency),
        unit: "Hz",
        agree: Some(agree),
        why: if agree { Vec::new() } else { other_springs(mode, &hand.gear) },
    }];
    let size = hand.damping_ratio.max(mode.damping_ratio.abs());
    let agree = (mode.damping_ratio - hand.damping_ratio).abs() <= (DAMPING_ROOM * size).max(1e-4);
    let mut why = Vec::new();
    if !agree {
        why.extend(other_dampers(equations, mode, &hand.gear));
        why.extend(other_springs(mode, &hand.gear));
    }
    list.push(Comparison {
        figure: "damping ratio",
        hand: hand.damping_ratio,
        found: Some(mode.damping_ratio),
        unit: "1",
        agree: Some(agree),
        why,
    });
    list
}

/// The mode with the largest share of its elastic energy in the magnet.
fn own_mode<'m>(modes: &'m [Mode], gear: &str) -> Option<&'m Mode> {
    let share = |mode: &Mode| share_of(&mode.shape.elastic, gear);
    modes.iter().filter(|mode| share(mode) > 0.0).max_by(|a, b| share(a).total_cmp(&share(b)))
}

fn share_of(list: &[Named], name: &str) -> f64 {
    list.iter().find(|(other, _)| other == name).map_or(0.0, |(_, share)| *share)
}

fn other_springs(mode: &Mode, gear: &str) -> Vec<String> {
    let others = mode.shape.elastic.iter().filter(|(name, share)| name != gear && *share > REASON);
    others
        .map(|(name, share)| {
            format!(
                "`{name}` bends with it: {:.0} % of that mode's elastic energy is there",
                100.0 * share
            )
        })
        .collect()
}

fn other_dampers(equations: &Equations, mode: &Mode, gear: &str) -> Vec<String> {
    let scenario = &equations.model.scenario;
    let others = mode.shape.damping.iter().filter(|(name, share)| {
        name != gear && share.abs() > REASON && mode.damping_ratio.abs() > 1e-9
    });
    others
        .map(|(name, share)| {
            let percent = 100.0 * share;
            if scenario.motors.iter().any(|motor| motor.name == *name) {
                format!(
                    "the drive `{name}` follows the speed: {percent:.0} % of that mode's damping"
                )
            } else if scenario.loads.iter().any(|load| load.name == *name) {
                format!(
                    "the load `{name}` follows the speed: {percent:.0} % of that mode's damping"
                )
            } else {
                format!("`{name}` gives {percent:.0} % of that mode's damping")
            }
        })
        .collect()
}

fn channel<'r>(found: &'r RunResult, name: &str) -> Option<&'r ChannelResult> {
    found.channels.iter().find(|channel| channel.name == name)
}

/// Every motor, load, brake and clutch with its torque channel.
fn actors(equations: &Equations) -> Vec<(Owner, String)> {
    let scenario = &equations.model.scenario;
    let motors = scenario.motors.iter().enumerate();
    let loads = scenario.loads.iter().enumerate();
    let brakes = scenario.brakes.iter().enumerate();
    let clutches = scenario.clutches.iter().enumerate();
    let fluids = scenario.fluid_couplings.iter().enumerate();
    motors
        .map(|(place, motor)| (Owner::Motor(place), motor.name.clone()))
        .chain(loads.map(|(place, load)| (Owner::Load(place), load.name.clone())))
        .chain(brakes.map(|(place, brake)| (Owner::Brake(place), brake.name.clone())))
        .chain(clutches.map(|(place, clutch)| (Owner::Clutch(place), clutch.name.clone())))
        .chain(fluids.map(|(place, it)| (Owner::FluidCoupling(place), it.name.clone())))
        .collect()
}

/// Equivalent load over the pull-out of torques picked from the channels, signed.
fn equivalent(
    basis: &Basis<'_>,
    found: &RunResult,
    pick: impl Fn(Owner, &ChannelResult) -> f64,
) -> Option<f64> {
    let mut torques = Vec::new();
    for (owner, name) in actors(basis.equations) {
        let torque = channel(found, &format!("{name}.torque"))?;
        let (body, against) = ends_of(basis.equations, owner);
        torques.push((difference(body, against), pick(owner, torque)));
    }
    let share = basis.train.equivalent(&torques) / basis.magnet.amplitude;
    let [low, high] = basis.magnet.law.peak_values();
    Some(if share >= 0.0 { share / high } else { -share / low })
}

/// Load share at the end of the run from the torques that act then.
fn end_of_run(basis: &Basis<'_>, found: &RunResult) -> Option<Comparison> {
    let gear = found.gears.get(basis.index)?;
    let hand = equivalent(basis, found, |_, channel| channel.last)?.abs();
    let torque = basis.magnet.law.share(gear.final_load_angle);
    let [low, high] = basis.magnet.law.peak_values();
    let share = if torque >= 0.0 { torque / high } else { torque / low };
    if gear.state_at_end != GearState::Synchronous {
        return Some(Comparison {
            figure: "share of the pull-out at the end",
            hand,
            found: None,
            unit: "1",
            agree: None,
            why: vec![format!("`{}` does not end in step", gear.name)],
        });
    }
    let agree = (share - hand).abs() <= SHARE_ROOM;
    let mut why = Vec::new();
    if !agree {
        why.push("the train still swings at the end: a longer run settles".to_owned());
        if basis.magnet.damping > 0.0 || basis.equations.frictions.iter().any(own(basis.index)) {
            why.push("damping and drag of the gear carry a part of the load".to_owned());
        }
    }
    Some(Comparison {
        figure: "share of the pull-out at the end",
        hand,
        found: Some(share),
        unit: "1",
        agree: Some(agree),
        why,
    })
}

fn own(index: usize) -> impl Fn(&crate::equations::Friction) -> bool {
    move |friction| friction.owner == Owner::Magnet(index)
}

/// Largest share: the motors' largest torque from rest, slowly; a step of it swings to twice that.
fn peak(basis: &Basis<'_>, hand: &GearEstimate, found: &RunResult) -> Option<Comparison> {
    let gear = found.gears.get(basis.index)?;
    basis.equations.model.scenario.motors.first()?;
    let largest = |owner: Owner, channel: &ChannelResult| match owner {
        Owner::Motor(_) if channel.max.abs() >= channel.min.abs() => channel.max,
        Owner::Motor(_) => channel.min,
        _ => 0.0,
    };
    let slow = equivalent(basis, found, largest)?.abs();
    let share = gear.peak_pull_out_share;
    let agree = (slow - SHARE_ROOM..=2.0 * slow + SHARE_ROOM).contains(&share);
    let mut why = Vec::new();
    if !agree {
        why.extend(peak_reasons(basis, hand, found, share > slow));
    }
    if gear.slips > 0 {
        why.push(format!("`{}` slips: its torque reaches the pull-out each time", gear.name));
    }
    Some(Comparison {
        figure: "largest share of the pull-out: once to twice",
        hand: slow,
        found: Some(share),
        unit: "1",
        agree: Some(agree),
        why,
    })
}

fn peak_reasons(
    basis: &Basis<'_>,
    hand: &GearEstimate,
    found: &RunResult,
    above: bool,
) -> Vec<String> {
    let equations = basis.equations;
    let scenario = &equations.model.scenario;
    let mut why = Vec::new();
    if above {
        for load in &scenario.loads {
            let share = channel(found, &format!("{}.torque", load.name))
                .map_or(0.0, |torque| torque.max.abs().max(torque.min.abs()));
            let pull_out = hand.members.first().map_or(f64::INFINITY, |m| m.pull_out_torque);
            if share > SHARE_ROOM * pull_out {
                why.push(format!("the load `{}` adds up to {share:.4} N*m", load.name));
            }
        }
        for brake in &scenario.brakes {
            why.push(format!("the brake `{}` acts on the train", brake.name));
        }
    } else {
        why.push(
            "the largest motor torque comes late, when the load side turns already".to_owned(),
        );
    }
    if !equations.frictions.is_empty() {
        why.push("friction holds and lets go".to_owned());
    }
    if scenario.motors.iter().any(|motor| matches!(motor.law, MotorLaw::SpeedLoop { .. })) {
        why.push("a speed controller answers the swing".to_owned());
    }
    let springs: Vec<&str> = scenario
        .shafts
        .iter()
        .filter(|shaft| !shaft.rigid)
        .map(|shaft| shaft.name.as_str())
        .collect();
    if !springs.is_empty() {
        why.push(format!("shafts swing too: {}", springs.join(", ")));
    }
    let ripple = |term: &crate::equations::Term| {
        term.owner == Owner::Magnet(basis.index)
            && matches!(term.shape, Shape::Law(Law::Cogging { .. }))
    };
    if equations.terms.iter().any(ripple) {
        why.push("ripple of the gear acts beside its synchronous torque".to_owned());
    }
    why
}

/// Whether a gear that slipped falls into step, against what the load at the end allows.
fn in_step_again(basis: &Basis<'_>, hand: &GearEstimate, found: &RunResult) -> Option<Comparison> {
    let gear = found.gears.get(basis.index)?;
    if gear.slips == 0 {
        return None;
    }
    let limit = hand.given()?.resynchronisation_share;
    let load = equivalent(basis, found, |_, channel| channel.last)?.abs();
    let in_step = gear.state_at_end == GearState::Synchronous;
    let agree = match gear.state_at_end {
        GearState::Undecided => None,
        _ => Some(in_step == (load < limit)),
    };
    let mut why = Vec::new();
    match agree {
        None => why.push("the run ends before it can be told".to_owned()),
        Some(false) if in_step => why.push(
            "it has fallen into step above the limit: the load was lower at that time, or the slip was caught before it ran free"
                .to_owned(),
        ),
        Some(false) => why.push(
            "it still slips below the limit: the drive follows the slipping side, or the run is too short"
                .to_owned(),
        ),
        Some(true) => {}
    }
    Some(Comparison {
        figure: "load at the end, against that for falling into step",
        hand: limit,
        found: Some(load),
        unit: "1",
        agree,
        why,
    })
}
