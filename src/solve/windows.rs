//! Requirements on the continuous solution: extremes in a window, first time a value is reached.

use crate::component::requirement::{Requirement, Test};
use crate::results::RequirementResult;

/// One requirement while the run goes on.
#[derive(Clone, Debug)]
pub struct Window {
    /// The requirement's place in the file; `None` for a watch of the program's own.
    pub requirement: Option<usize>,
    /// Channel by place.
    pub channel: usize,
    /// What is asked.
    pub test: Test,
    pub(super) signed: bool,
    pub(super) after: f64,
    pub(super) before: f64,
    pub(super) stated_before: bool,
    pub(super) counts: bool,
    pub(super) base: f64,
    /// True while the run is inside the window.
    pub active: bool,
    pub(super) seen: bool,
    pub(super) extreme: f64,
    pub(super) extreme_time: f64,
    pub(super) crossed: bool,
    pub(super) last: Option<(f64, f64)>,
    pub(super) reached: Option<f64>,
    /// A watch of the program's own that began beyond its value: nothing is reached.
    pub(super) void: bool,
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
            extreme: worst,
            extreme_time: 0.0,
            crossed: false,
            last: None,
            reached: None,
            void: false,
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
        self.void || matches!(self.test, Test::Reaches { band: None, .. }) && self.reached.is_some()
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

    pub(super) fn larger(&mut self, value: f64, time: f64) {
        if value > self.extreme {
            self.extreme = value;
            self.extreme_time = time;
        }
    }

    pub(super) fn smaller(&mut self, value: f64, time: f64) {
        if value < self.extreme {
            self.extreme = value;
            self.extreme_time = time;
        }
    }

    fn reach(&mut self, time: f64, value: f64, target: f64, band: Option<f64>) {
        if self.requirement.is_none() && self.last.is_none() && value >= target {
            self.void = true;
        }
        match band {
            None if self.void => {}
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
