//! Protections while the run goes on: conditions, waiting times, actions.

use crate::component::protection::{Action, Condition, Protection};
use crate::equations::Equations;
use crate::equations::frame::Frame;
use crate::results::{Event, EventKind};
use crate::signal::course::Overrides;

use super::guards::{Guard, TRIP};

/// Where a protection stands.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Stage {
    /// Its condition is not true.
    Waiting,
    /// True since this time.
    Holding(f64),
    /// It acts at this time.
    Pending(f64),
    /// It has acted.
    Done,
}

/// All protections of a run.
#[derive(Clone, Debug)]
pub struct Conditions {
    list: Vec<Protection>,
    channel: Vec<Option<usize>>,
    size: Vec<f64>,
    stage: Vec<Stage>,
    /// Magnets whose slips some protection counts.
    pub slip_watched: Vec<usize>,
    /// Channels that must be evaluated for the conditions.
    pub channels: Vec<usize>,
}

/// What acting did.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Acted {
    /// Some signal was taken over.
    pub signals: bool,
    /// The run ends here.
    pub end_run: bool,
}

impl Conditions {
    /// The protections of a scenario, all waiting.
    pub fn new(equations: &Equations) -> Self {
        let list = equations.model.scenario.protections.clone();
        let channel: Vec<Option<usize>> = list
            .iter()
            .map(|protection| match &protection.when {
                Condition::Time(_) => None,
                Condition::AtLeast { of, .. } | Condition::AtMost { of, .. } => {
                    equations.model.channels.iter().position(|channel| channel.name == *of)
                }
            })
            .collect();
        let size = list
            .iter()
            .map(|protection| match &protection.when {
                Condition::AtLeast { limit, .. } | Condition::AtMost { limit, .. }
                    if *limit != 0.0 =>
                {
                    limit.abs()
                }
                _ => 1.0,
            })
            .collect();
        let mut slip_watched = Vec::new();
        for (magnet, name) in equations.model.magnets.iter().map(|magnet| &magnet.name).enumerate()
        {
            let watched = list.iter().any(|protection| match &protection.when {
                Condition::AtLeast { of, .. } | Condition::AtMost { of, .. } => {
                    of.strip_prefix(name.as_str()).is_some_and(|rest| {
                        matches!(rest, ".slips" | ".net_slips" | ".load_angle" | ".short_of_peak")
                    })
                }
                Condition::Time(_) => false,
            });
            if watched {
                slip_watched.push(magnet);
            }
        }
        let channels = channel.iter().flatten().copied().collect();
        let stage = vec![Stage::Waiting; list.len()];
        Self { list, channel, size, stage, slip_watched, channels }
    }

    /// Adds the guards of the conditions that are being waited for.
    pub fn guards(&self, guards: &mut Vec<Guard>) {
        for (index, stage) in self.stage.iter().enumerate() {
            if self.channel[index].is_none() {
                continue;
            }
            match stage {
                Stage::Waiting => guards.push(Guard::Condition(index)),
                Stage::Holding(_) => guards.push(Guard::ConditionLost(index)),
                Stage::Pending(_) | Stage::Done => {}
            }
        }
    }

    /// The guard of a condition: while waiting it trips when the condition becomes true, while
    /// holding when it ceases.
    pub fn guard(&self, index: usize, frame: &Frame, holding: bool) -> f64 {
        let Some(distance) = self.distance(index, frame) else { return 1.0 };
        if holding { distance } else { -distance }
    }

    /// How far a condition is true, relative to its limit; negative when it is not.
    fn distance(&self, index: usize, frame: &Frame) -> Option<f64> {
        let value = frame.channels.get(self.channel[index]?)?;
        let compared = |signed: bool| if signed { *value } else { value.abs() };
        let distance = match &self.list[index].when {
            Condition::Time(_) => return None,
            Condition::AtLeast { limit, signed, .. } => compared(*signed) - limit,
            Condition::AtMost { limit, signed, .. } => limit - compared(*signed),
        };
        Some(distance / self.size[index])
    }

    /// The next time at which something is due.
    pub fn next_time(&self, now: f64) -> Option<f64> {
        self.list
            .iter()
            .zip(&self.stage)
            .filter_map(|(protection, stage)| match stage {
                Stage::Waiting => match protection.when {
                    Condition::Time(time) if time > now => Some(time),
                    _ => None,
                },
                Stage::Holding(since) => Some(since + protection.hold),
                Stage::Pending(time) => Some(*time),
                Stage::Done => None,
            })
            .filter(|time| *time > now)
            .min_by(f64::total_cmp)
    }

    /// Brings every protection up to date at an instant and lets those that are due act.
    pub fn update(
        &mut self,
        time: f64,
        frame: &Frame,
        equations: &Equations,
        overrides: &mut Overrides,
        events: &mut Vec<Event>,
    ) -> Acted {
        let mut acted = Acted::default();
        for index in 0..self.list.len() {
            let is_true = match self.list[index].when {
                Condition::Time(at) => time >= at,
                _ => self.distance(index, frame).is_some_and(|distance| distance >= -TRIP),
            };
            match self.stage[index] {
                Stage::Waiting if is_true => self.stage[index] = Stage::Holding(time),
                Stage::Holding(_) if !is_true => self.stage[index] = Stage::Waiting,
                _ => {}
            }
            let hold = self.list[index].hold;
            if let Stage::Holding(since) = self.stage[index]
                && time >= since + hold
            {
                self.stage[index] = Stage::Pending(since + hold + self.list[index].delay);
            }
            if let Stage::Pending(due) = self.stage[index]
                && time >= due
            {
                self.stage[index] = Stage::Done;
                self.act(index, time, equations, overrides, events, &mut acted);
            }
        }
        acted
    }

    fn act(
        &self,
        index: usize,
        time: f64,
        equations: &Equations,
        overrides: &mut Overrides,
        events: &mut Vec<Event>,
        acted: &mut Acted,
    ) {
        let protection = &self.list[index];
        for action in &protection.then {
            match action {
                Action::Set { signal, to, over } => {
                    if let Some(slot) = equations.bank.find(signal) {
                        overrides.set(&equations.bank, slot, time, *to, *over);
                        acted.signals = true;
                    }
                }
                Action::EndRun => acted.end_run = true,
            }
        }
        events.push(Event {
            time,
            kind: EventKind::Protection,
            of: protection.name.clone(),
            value: time,
            unit: "s",
            text: format!("`{}` acts", protection.name),
        });
    }
}
