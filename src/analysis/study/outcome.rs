//! What one run of a study found: only what the study's table and answer need.

use crate::component::requirement::{Requirement, Test};
use crate::results::{ChannelResult, EventKind, GearResult, GearState, RunResult};
use crate::scenario::Scenario;

/// What the runs of a study are asked for, and in which order it stands in the table.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// Requirements by name with the unit of their values; empty where cases differ in it.
    pub requirements: Vec<(String, &'static str)>,
    /// Magnetic gears, then couplings.
    pub gears: Vec<String>,
    /// Channels by name with their units.
    pub channels: Vec<(String, &'static str)>,
}

impl Layout {
    /// What all these scenarios together are asked for.
    pub fn of<'s>(scenarios: impl Iterator<Item = &'s Scenario>, asked: &[String]) -> Self {
        let mut layout = Self { requirements: Vec::new(), gears: Vec::new(), channels: Vec::new() };
        for scenario in scenarios {
            for requirement in &scenario.requirements {
                let unit = unit_of(requirement, scenario);
                match layout.requirements.iter_mut().find(|(name, _)| *name == requirement.name) {
                    Some((_, known)) if *known != unit => *known = "",
                    Some(_) => {}
                    None => layout.requirements.push((requirement.name.clone(), unit)),
                }
            }
            let gears = scenario.magnetic_gears.iter().map(|gear| &gear.name);
            let couplings = scenario.magnetic_couplings.iter().map(|coupling| &coupling.name);
            for name in gears.chain(couplings) {
                if !layout.gears.contains(name) {
                    layout.gears.push(name.clone());
                }
            }
            for name in asked {
                let Some(channel) = scenario.channels.iter().find(|one| one.name == *name) else {
                    continue;
                };
                if !layout.channels.iter().any(|(known, _)| known == name) {
                    layout.channels.push((name.clone(), channel.unit));
                }
            }
        }
        layout
    }
}

/// The unit in which a requirement's value is given.
fn unit_of(requirement: &Requirement, scenario: &Scenario) -> &'static str {
    if matches!(requirement.test, Test::Reaches { .. }) {
        return "s";
    }
    let channel = scenario.channels.iter().find(|channel| channel.name == requirement.of);
    channel.map_or("1", |channel| channel.unit)
}

/// What one run found; `None` where a case has no such thing.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Outcome {
    /// Why there is no result, in words.
    pub failure: Option<String>,
    /// Last time reached, s.
    pub end_time: f64,
    /// Verdicts in the order of the layout.
    pub requirements: Vec<Option<Verdict>>,
    /// Magnetic gears and couplings in the order of the layout.
    pub gears: Vec<Option<GearFound>>,
    /// Extremes in the order of the layout.
    pub channels: Vec<Option<Extremes>>,
}

/// How a requirement fared.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Verdict {
    /// `None`: cannot be told.
    pub met: Option<bool>,
    /// Extreme found, or the time for `reaches`.
    pub value: Option<f64>,
    /// When the extreme stood, s.
    pub time: Option<f64>,
    /// When the limit was passed, s.
    pub passed: Option<f64>,
}

/// How a magnetic gear or coupling fared.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GearFound {
    /// All slips.
    pub slips: u32,
    /// Forward minus backward.
    pub net_slips: i32,
    /// State at the end.
    pub state_at_end: GearState,
    /// Time after which it stayed in step, s.
    pub resynchronised_at: Option<f64>,
    /// Largest share of the pull-out torque.
    pub peak_pull_out_share: f64,
    /// When, s.
    pub peak_pull_out_share_time: f64,
    /// Load angle of the largest magnitude, with its sign, electrical rad.
    pub peak_load_angle: f64,
    /// When, s.
    pub peak_load_angle_time: f64,
    /// Load angle at the end, electrical rad.
    pub final_load_angle: f64,
}

/// Extremes of a channel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremes {
    /// Smallest value.
    pub min: f64,
    /// When, s.
    pub min_time: f64,
    /// Largest value.
    pub max: f64,
    /// When, s.
    pub max_time: f64,
    /// Value at the end.
    pub last: f64,
}

impl GearFound {
    /// What a run tells of a gear or coupling.
    pub fn of(gear: &GearResult) -> Self {
        Self {
            slips: gear.slips,
            net_slips: gear.net_slips,
            state_at_end: gear.state_at_end,
            resynchronised_at: gear.resynchronised_at,
            peak_pull_out_share: gear.peak_pull_out_share,
            peak_pull_out_share_time: gear.peak_pull_out_share_time,
            peak_load_angle: gear.peak_load_angle,
            peak_load_angle_time: gear.peak_load_angle_time,
            final_load_angle: gear.final_load_angle,
        }
    }
}

impl Extremes {
    /// What a run tells of a channel.
    pub fn of(channel: &ChannelResult) -> Self {
        Self {
            min: channel.min,
            min_time: channel.min_time,
            max: channel.max,
            max_time: channel.max_time,
            last: channel.last,
        }
    }
}

impl Outcome {
    /// A run that came to nothing.
    pub fn failed(layout: &Layout, end_time: f64, reason: String) -> Self {
        Self {
            failure: Some(reason),
            end_time,
            requirements: vec![None; layout.requirements.len()],
            gears: vec![None; layout.gears.len()],
            channels: vec![None; layout.channels.len()],
        }
    }

    /// What a finished run found.
    pub fn of(layout: &Layout, result: &RunResult) -> Self {
        if let Some(reason) = &result.failure {
            return Self::failed(layout, result.end_time, reason.clone());
        }
        let verdict = |name: &str| {
            let found = result.requirements.iter().find(|one| one.name == name)?;
            let passed = result
                .events
                .iter()
                .find(|event| event.kind == EventKind::Requirement && event.of == name);
            Some(Verdict {
                met: found.met,
                value: found.value,
                time: found.time,
                passed: passed.map(|event| event.time),
            })
        };
        let gear = |name: &str| result.gears.iter().find(|one| one.name == name).map(GearFound::of);
        let extremes =
            |name: &str| result.channels.iter().find(|one| one.name == name).map(Extremes::of);
        Self {
            failure: None,
            end_time: result.end_time,
            requirements: layout.requirements.iter().map(|(name, _)| verdict(name)).collect(),
            gears: layout.gears.iter().map(|name| gear(name)).collect(),
            channels: layout.channels.iter().map(|(name, _)| extremes(name)).collect(),
        }
    }

    /// True when the run is completed and meets every requirement it has.
    pub fn is_good(&self) -> bool {
        self.failure.is_none()
            && self.requirements.iter().flatten().all(|verdict| verdict.met == Some(true))
    }

    /// Whether all requirements are met; `None` when the run came to nothing or has none.
    pub fn met(&self) -> Option<bool> {
        let judged = self.failure.is_none() && self.requirements.iter().any(Option::is_some);
        judged.then(|| self.is_good())
    }

    /// Slips of all gears and couplings together.
    pub fn slips(&self) -> u32 {
        self.gears.iter().flatten().map(|gear| gear.slips).sum()
    }

    /// True when a gear or coupling is not known to be in step at the end.
    pub fn still_slipping(&self) -> bool {
        self.gears.iter().flatten().any(|gear| gear.state_at_end != GearState::Synchronous)
    }

    /// The largest share of a pull-out torque that any gear or coupling came to.
    pub fn peak_share(&self) -> Option<f64> {
        self.gears.iter().flatten().map(|gear| gear.peak_pull_out_share).reduce(f64::max)
    }

    /// The requirement that failed first in the run: by the time its limit was passed; those
    /// that only the end shows come last; ties in the order of the layout.
    pub fn first_to_fail(&self) -> Option<usize> {
        let failed = self.requirements.iter().enumerate().filter_map(|(place, verdict)| {
            let verdict = verdict.as_ref()?;
            (verdict.met != Some(true)).then(|| (place, verdict.passed.unwrap_or(f64::INFINITY)))
        });
        failed.min_by(|(_, a), (_, b)| a.total_cmp(b)).map(|(place, _)| place)
    }
}
