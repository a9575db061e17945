//! How a requirement takes a step: crossings and extremes between the samples.

use super::locate;
use super::sampling::{Sample, StepView};
use super::windows::Window;
use crate::component::requirement::Test;
use crate::results::{Event, EventKind};

impl Window {
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
        if self.counts {
            self.count(view, scratch, events, name);
        }
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

    /// Takes the counts of a step at the slips themselves.
    fn count(
        &mut self,
        view: &StepView<'_>,
        scratch: &mut Sample,
        events: &mut Vec<Event>,
        name: &str,
    ) {
        for crossing in view.crossings.iter().filter(|crossing| crossing.is_slip) {
            let time = view.step.time(crossing.share);
            let count = view.channel(self.channel, crossing.share, scratch);
            self.note(time, count);
            if self.is_over() && !self.crossed && self.requirement.is_some() {
                self.crossed = true;
                events.push(self.event(time, name));
            }
        }
    }

    /// True once the extreme has passed the limit.
    pub(super) fn is_over(&self) -> bool {
        match self.test {
            Test::AtMost(limit) => self.extreme > limit,
            Test::AtLeast(limit) => self.extreme < limit,
            Test::Reaches { .. } => false,
        }
    }

    /// The event of passing the limit.
    fn event(&self, time: f64, name: &str) -> Event {
        let value = match self.test {
            Test::AtMost(limit) | Test::AtLeast(limit) => limit,
            Test::Reaches { value, .. } => value,
        };
        Event {
            time,
            kind: EventKind::Requirement,
            of: name.to_owned(),
            value,
            unit: "",
            text: format!("`{name}` passes its limit"),
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
        let limit = match self.test {
            Test::AtMost(limit) | Test::AtLeast(limit) => limit,
            Test::Reaches { .. } => return,
        };
        if was || self.crossed || !self.is_over() || self.requirement.is_none() {
            return;
        }
        self.crossed = true;
        let (before, after) = (&samples[index - 1], &samples[index]);
        let start = self.value(before.frame.channels[self.channel]);
        let sign = if matches!(self.test, Test::AtMost(_)) { 1.0 } else { -1.0 };
        let time = if sign * (start - limit) >= 0.0 {
            before.time
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
        events.push(self.event(time, name));
    }
}
