//! Requirements on the continuous solution: extremes in a window, first time a value is reached.

use super::locate;
use super::sampling::{Sample, StepView};
use crate::component::requirement::{Requirement, Test};
use crate::results::{Event, EventKind, RequirementResult};

/// One requirement while the run goes on.
#[derive(Clone, Debug)]
pub struct Window {
    /// The requirement's place in the file; `None` for a watch of the program's own.
    pub requirement: Option<usize>,
    /// Channel by place.
    pub channel: usize,
    /// What is asked.
    pub test: Test,
    signed: bool,
    after: f64,
    before: f64,
    stated_before: bool,
    counts: bool,
    base: f64,
    /// True while the run is inside the window.
    pub active: bool,
    seen: bool,
    ended: bool,
    extreme: f64,
    extreme_time: f64,
    crossed: bool,
    last: Option<(f64, f64)>,
    reached: Option<f64>,
}

impl Window {
    /// A watch of a requirement.
    pub fn new(place: Option<usize>, requirement: &Requirement, channel: usize) -> Self {
        let worst = match requirement.test {
            Test::AtLeast(_) => f64::INFINITY,
            _ => f64::NEG_INFINITY,
        };
        let counts = requirement.of.ends_with(".slips") || requirement.of.ends_with(".net_slips");
        Self {
            requirement: place,
            channel,
            test: requirement.test,
            signed: requirement.signed,
            after: requirement.after.unwrap_or(0.0),
            before: requirement.before.unwrap_or(f64::INFINITY),
            stated_before: requirement.before.is_some(),
            counts,
            base: 0.0,
            active: false,
            seen: false,
            ended: false,
            extreme: worst,
            extreme_time: 0.0,
            crossed: false,
            last: None,
            reached: None,
        }
    }

    /// Times at which the run must stop so that the window begins and ends on a segment.
    pub fn borders(&self) -> [f64; 2] {
        [self.after, self.before]
    }

    /// The compared value of a channel's value.
    pub fn value(&self, channel: f64) -> f64 {
        let value = channel - self.base;
        if self.signed { value } else { value.abs() }
    }

    /// The values whose crossing matters: limit, reached value and edges of its band.
    pub fn marks(&self) -> Vec<f64> {
        match self.test {
            Test::AtMost(limit) | Test::AtLeast(limit) => vec![limit],
            Test::Reaches { value, band, .. } => match band {
                Some(band) => vec![value - band, value + band],
                None => vec![value],
            },
        }
    }

    /// True when nothing can change the answer any more.
    pub fn settled(&self) -> bool {
        matches!(self.test, Test::Reaches { band: None, .. }) && self.reached.is_some()
    }

    /// The extreme so far and whether larger values are sought.
    pub fn bound(&self) -> Option<(f64, bool)> {
        match self.test {
            Test::AtMost(_) => Some((self.extreme, true)),
            Test::AtLeast(_) => Some((self.extreme, false)),
            Test::Reaches { .. } => None,
        }
    }

    /// Opens or closes the window at a segment's start; `channel` is the value from the right.
    pub fn begin(&mut self, time: f64, channel: f64) -> bool {
        if time >= self.before {
            // At a jump both sides count, at the window's end too.
            if self.active && time <= self.before {
                self.note(time, channel);
            }
            self.active = false;
            self.ended = true;
        } else if !self.active && time >= self.after {
            self.active = true;
            if self.counts {
                self.base = channel;
            }
        }
        self.active
    }

    /// The instant at which the window has no length.
    pub fn touches(&self, time: f64) -> bool {
        !self.seen && self.after <= time && time <= self.before
    }

    /// Takes one value at an instant.
    pub fn note(&mut self, time: f64, channel: f64) {
        self.seen = true;
        let value = self.value(channel);
        match self.test {
            Test::AtMost(_) => self.larger(value, time),
            Test::AtLeast(_) => self.smaller(value, time),
            Test::Reaches { value: target, band, .. } => self.reach(time, value, target, band),
        }
        self.last = Some((time, value));
    }

    fn larger(&mut self, value: f64, time: f64) {
        if value > self.extreme {
            self.extreme = value;
            self.extreme_time = time;
        }
    }

    fn smaller(&mut self, value: f64, time: f64) {
        if value < self.extreme {
            self.extreme = value;
            self.extreme_time = time;
        }
    }

    fn reach(&mut self, time: f64, value: f64, target: f64, band: Option<f64>) {
        match band {
            None => {
                let passed =
                    self.last.is_some_and(|(_, last)| (last - target) * (value - target) <= 0.0);
                if self.reached.is_none() && (passed || value == target) {
                    self.reached = Some(time);
                }
            }
            Some(band) => {
                if (value - target).abs() > band {
                    self.reached = None;
                } else if self.reached.is_none() {
                    self.reached = Some(time);
                }
            }
        }
    }

    /// Takes a step's samples, refining crossings and extremes between them.
    pub fn step(
        &mut self,
        view: &StepView<'_>,
        samples: &[Sample],
        scratch: &mut Sample,
        events: &mut Vec<Event>,
        name: &str,
    ) {
        let channel = self.channel;
        for (index, sample) in samples.iter().enumerate().skip(1) {
            let value = self.value(sample.frame.channels[channel]);
            if let Test::Reaches { value: target, band, .. } = self.test {
                if self.settled() {
                    return;
                }
                self.crossings(view, samples, index, target, band, scratch);
            }
            let was = self.crossed;
            self.note(sample.time, sample.frame.channels[channel]);
            if self.bound().is_some() {
                self.refine(view, samples, index, scratch);
            }
            self.tell_crossing(view, samples, index, was, value, scratch, events, name);
        }
    }

    fn crossings(
        &mut self,
        view: &StepView<'_>,
        samples: &[Sample],
        index: usize,
        target: f64,
        band: Option<f64>,
        scratch: &mut Sample,
    ) {
        let (before, after) = (&samples[index - 1], &samples[index]);
        let low = self.value(before.frame.channels[self.channel]);
        let high = self.value(after.frame.channels[self.channel]);
        let mut marks: Vec<f64> = match band {
            None => vec![target],
            Some(band) => vec![target - band, target + band],
        };
        if high < low {
            marks.reverse();
        }
        for mark in marks {
            if (low - mark) * (high - mark) >= 0.0 {
                continue;
            }
            let sign = (high - mark).signum();
            let share = locate::root(
                before.share,
                after.share,
                |share| sign * (mark - self.value(view.channel(self.channel, share, scratch))),
                1e-14,
            );
            let time = view.step.time(share);
            match band {
                None => {
                    if self.reached.is_none() {
                        self.reached = Some(time);
                    }
                }
                // Going in at one edge counts; going out at the other is seen by the samples.
                Some(_) => {
                    let inwards = (target - mark) * sign > 0.0;
                    if inwards && self.reached.is_none() {
                        self.reached = Some(time);
                    } else if !inwards {
                        self.reached = None;
                    }
                }
            }
        }
    }

    /// Looks for an extreme between samples when the parabola through three of them promises one.
    fn refine(
        &mut self,
        view: &StepView<'_>,
        samples: &[Sample],
        index: usize,
        scratch: &mut Sample,
    ) {
        if self.counts || samples.len() < 3 {
            return;
        }
        let Some((extreme, larger)) = self.bound() else { return };
        let sign = if larger { 1.0 } else { -1.0 };
        let middle = index.clamp(1, samples.len() - 2);
        let triple = [&samples[middle - 1], &samples[middle], &samples[middle + 1]];
        let places = triple.map(|sample| sample.share);
        let values = triple.map(|sample| sign * self.value(sample.frame.channels[self.channel]));
        // A magnitude has a corner at zero: the smallest one is zero itself where the sign changes.
        if !self.signed && !larger {
            let (low, high) = (&samples[index - 1], &samples[index]);
            let (a, b) = (low.frame.channels[self.channel], high.frame.channels[self.channel]);
            if a * b < 0.0 && extreme > 0.0 {
                let sign = b.signum();
                let share = locate::root(
                    low.share,
                    high.share,
                    |share| -sign * view.channel(self.channel, share, scratch),
                    1e-14,
                );
                self.smaller(0.0, view.step.time(share));
                return;
            }
        }
        let Some((place, value)) = locate::vertex(places, values) else { return };
        if place <= samples[index - 1].share
            || place > samples[index].share
            || value <= sign * extreme
        {
            return;
        }
        let (share, value) = locate::maximum(places[0], places[2], |share| {
            sign * self.value(view.channel(self.channel, share, scratch))
        });
        if value > sign * extreme {
            let time = view.step.time(share);
            if larger { self.larger(value, time) } else { self.smaller(-value, time) }
        }
    }

    /// Records the first time the limit is crossed.
    fn tell_crossing(
        &mut self,
        view: &StepView<'_>,
        samples: &[Sample],
        index: usize,
        was: bool,
        value: f64,
        scratch: &mut Sample,
        events: &mut Vec<Event>,
        name: &str,
    ) {
        let (limit, over) = match self.test {
            Test::AtMost(limit) => (limit, self.extreme > limit),
            Test::AtLeast(limit) => (limit, self.extreme < limit),
            Test::Reaches { .. } => return,
        };
        if was || !over || self.requirement.is_none() {
            return;
        }
        self.crossed = true;
        let (before, after) = (&samples[index - 1], &samples[index]);
        let start = self.value(before.frame.channels[self.channel]);
        let sign = if matches!(self.test, Test::AtMost(_)) { 1.0 } else { -1.0 };
        let time = if sign * (start - limit) >= 0.0 {
            before.time
        } else if self.counts {
            self.extreme_time
        } else {
            let end = if sign * (value - limit) > 0.0 {
                after.share
            } else {
                ((self.extreme_time - view.step.start) / view.step.length).clamp(before.share, 1.0)
            };
            let share = locate::root(
                before.share,
                end,
                |share| sign * (limit - self.value(view.channel(self.channel, share, scratch))),
                1e-14,
            );
            view.step.time(share)
        };
        events.push(Event {
            time,
            kind: EventKind::Requirement,
            of: name.to_owned(),
            value: limit,
            unit: "",
            text: format!("`{name}` passes its limit"),
        });
    }

    /// The time at which the value was reached, if it was.
    pub fn reached(&self) -> Option<f64> {
        self.reached
    }

    /// The verdict at the end of the run.
    pub fn verdict(
        &self,
        requirement: &Requirement,
        unit: &'static str,
        end: f64,
        completed: bool,
    ) -> RequirementResult {
        let judged = completed
            && self.seen
            && self.after <= end
            && (!self.stated_before || self.before <= end * (1.0 + 1e-12));
        let (value, limit, time, ok, unit) = match self.test {
            Test::AtMost(limit) => (
                Some(self.extreme),
                Some(limit),
                Some(self.extreme_time),
                self.extreme <= limit,
                unit,
            ),
            Test::AtLeast(limit) => (
                Some(self.extreme),
                Some(limit),
                Some(self.extreme_time),
                self.extreme >= limit,
                unit,
            ),
            Test::Reaches { within, .. } => {
                let limit = within.map(|within| self.after + within);
                let ok = self.reached.is_some_and(|time| limit.is_none_or(|limit| time <= limit));
                (self.reached, limit, self.reached, ok, "s")
            }
        };
        RequirementResult {
            name: requirement.name.clone(),
            text: requirement.text.clone(),
            of: requirement.of.clone(),
            met: judged.then_some(ok),
            value: value.filter(|value| value.is_finite() && self.seen),
            limit,
            unit,
            time: time.filter(|_| self.seen),
            at_least: matches!(self.test, Test::AtLeast(_)),
        }
    }
}
