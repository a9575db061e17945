//! The elementary courses of a signal: straight lines with jumps, sines, gusts.
//!
//! A course is cut into branches at its kinks; on a branch it is smooth and may be evaluated
//! beyond the branch's ends. Which branch is live is told by a [`Moment`]: a time, and whether
//! just after or just before it is meant. So the same code gives the value, both limits at a
//! jump, and the branch an integrator needs within a segment.

use super::gust;
use super::turbulence::{Spectrum, Turbulence};
use std::f64::consts::TAU;
use std::sync::Arc;

/// A time, from the right (`after`) or from the left.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Moment {
    pub(super) time: f64,
    pub(super) after: bool,
}

impl Moment {
    pub(super) fn after(time: f64) -> Self {
        Self { time, after: true }
    }

    pub(super) fn before(time: f64) -> Self {
        Self { time, after: false }
    }

    /// Whether a branch that starts at `start` has begun.
    #[inline]
    pub(super) fn is_past(self, start: f64) -> bool {
        start < self.time || (self.after && start <= self.time)
    }
}

/// One straight branch, exact at both of its ends.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Line {
    from: [f64; 2],
    to: [f64; 2],
    middle: f64,
    slope: f64,
}

impl Line {
    pub(super) fn new(from: [f64; 2], to: [f64; 2]) -> Self {
        let slope = (to[1] - from[1]) / (to[0] - from[0]);
        Self { from, to, middle: 0.5 * (from[0] + to[0]), slope }
    }

    pub(super) fn flat(value: f64) -> Self {
        Self { from: [0.0, value], to: [0.0, value], middle: 0.0, slope: 0.0 }
    }

    #[inline]
    pub(super) fn value(&self, time: f64) -> f64 {
        let anchor = if time > self.middle { self.to } else { self.from };
        anchor[1] + self.slope * (time - anchor[0])
    }

    pub(super) fn slope(&self) -> f64 {
        self.slope
    }
}

/// Straight lines with corners and jumps: line `k` is live from `starts[k-1]` on.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Lines {
    starts: Vec<f64>,
    lines: Vec<Line>,
}

impl Lines {
    /// Through points whose times do not fall; two equal times are a jump, end values are held.
    pub(super) fn through(points: &[[f64; 2]]) -> Self {
        let first = points.first().map_or(f64::NAN, |point| point[1]);
        let mut course = Self { starts: Vec::new(), lines: vec![Line::flat(first)] };
        for pair in points.windows(2) {
            if pair[1][0] > pair[0][0] {
                course.append(pair[0][0], Line::new(pair[0], pair[1]));
            }
        }
        if let Some([time, value]) = points.last() {
            course.append(*time, Line::flat(*value));
        }
        course
    }

    /// Adds a line, unless it only goes on with the one before.
    fn append(&mut self, start: f64, line: Line) {
        let goes_on = self.lines.last().is_some_and(|last| {
            last.slope.to_bits() == line.slope.to_bits()
                && last.value(start).to_bits() == line.value(start).to_bits()
        });
        if goes_on && line.slope == 0.0 {
            return;
        }
        self.starts.push(start);
        self.lines.push(line);
    }

    #[inline]
    fn live(&self, at: Moment) -> usize {
        self.starts.partition_point(|start| at.is_past(*start))
    }

    #[inline]
    fn line(&self, at: Moment) -> Line {
        self.lines.get(self.live(at)).copied().unwrap_or(Line::flat(f64::NAN))
    }

    fn next_start(&self, time: f64) -> Option<f64> {
        self.starts.get(self.live(Moment::after(time))).copied()
    }
}

/// A course without members.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Shape {
    Constant(f64),
    Lines(Lines),
    Sine { mean: f64, amplitude: f64, omega: f64, phase: f64 },
    Gust { start: f64, end: f64, hub_wind: f64, magnitude: f64 },
    CoherentGust { start: f64, end: f64, hub_wind: f64, rise: f64 },
    Turbulence { mean: f64, course: Arc<Turbulence> },
}

impl Shape {
    pub(super) fn sine(mean: f64, amplitude: f64, frequency: f64, phase: f64) -> Self {
        if amplitude == 0.0 {
            return Self::Constant(mean);
        }
        Self::Sine { mean, amplitude, omega: TAU * frequency, phase }
    }

    pub(super) fn gust(start: f64, hub_wind: f64, magnitude: f64) -> Self {
        Self::Gust { start, end: start + gust::DURATION, hub_wind, magnitude }
    }

    pub(super) fn turbulence(spectrum: &Spectrum) -> Self {
        if spectrum.deviation == 0.0 {
            return Self::Constant(spectrum.mean);
        }
        Self::Turbulence { mean: spectrum.mean, course: Arc::new(Turbulence::new(spectrum)) }
    }

    /// The value at `time` of the branch that is live at `at`.
    #[inline]
    pub(super) fn value(&self, time: f64, at: Moment) -> f64 {
        match self {
            Self::Constant(value) => *value,
            Self::Lines(lines) => lines.line(at).value(time),
            Self::Sine { mean, amplitude, omega, phase } => {
                mean + amplitude * (omega * time + phase).sin()
            }
            Self::Turbulence { mean, course } => mean + course.value(time),
            Self::CoherentGust { start, end, hub_wind, rise } => {
                if !at.is_past(*start) {
                    *hub_wind
                } else if at.is_past(*end) {
                    hub_wind + rise
                } else {
                    hub_wind + rise * gust::coherent((time - start) / (end - start)).0
                }
            }
            Self::Gust { start, end, hub_wind, magnitude } => {
                if at.is_past(*start) && !at.is_past(*end) {
                    hub_wind + magnitude * gust::shape(time - start)
                } else {
                    *hub_wind
                }
            }
        }
    }

    /// The derivative at `time` of the branch that is live at `at`.
    pub(super) fn slope(&self, time: f64, at: Moment) -> f64 {
        match self {
            Self::Constant(_) => 0.0,
            Self::Lines(lines) => lines.line(at).slope,
            Self::Sine { amplitude, omega, phase, .. } => {
                amplitude * omega * (omega * time + phase).cos()
            }
            Self::Turbulence { course, .. } => course.slope(time),
            Self::CoherentGust { start, end, rise, .. } => {
                if at.is_past(*start) && !at.is_past(*end) {
                    rise / (end - start) * gust::coherent((time - start) / (end - start)).1
                } else {
                    0.0
                }
            }
            Self::Gust { start, end, magnitude, .. } => {
                if at.is_past(*start) && !at.is_past(*end) {
                    magnitude * gust::shape_slope(time - start)
                } else {
                    0.0
                }
            }
        }
    }

    /// The first corner or jump after `time`.
    pub(super) fn next_kink(&self, time: f64) -> Option<f64> {
        match self {
            Self::Constant(_) | Self::Sine { .. } | Self::Turbulence { .. } => None,
            Self::Lines(lines) => lines.next_start(time),
            Self::Gust { start, end, .. } | Self::CoherentGust { start, end, .. } => {
                [*start, *end].into_iter().find(|kink| *kink > time)
            }
        }
    }

    /// The value when it does not change between `from` and `to`.
    pub(super) fn constant_on(&self, from: f64, to: f64) -> Option<f64> {
        let at = Moment::after(from);
        let still = match self {
            Self::Constant(_) => true,
            Self::Sine { .. } | Self::Turbulence { .. } => false,
            Self::Lines(lines) => lines.line(at).slope == 0.0,
            Self::Gust { .. } | Self::CoherentGust { .. } => self.cap(from, to).is_none(),
        };
        let unbroken = match self {
            Self::Gust { .. } | Self::CoherentGust { .. } => true,
            _ => self.next_kink(from).is_none_or(|kink| kink >= to),
        };
        (still && unbroken).then(|| self.value(from, at))
    }

    /// The largest step that still sees its inner structure between `from` and `to`.
    pub(super) fn cap(&self, from: f64, to: f64) -> Option<f64> {
        match self {
            Self::Constant(_) | Self::Lines(_) => None,
            Self::Sine { omega, .. } => Some(TAU / omega / 6.0),
            Self::Turbulence { course, .. } => Some(course.step()),
            Self::Gust { start, end, .. } => {
                (from < *end && to > *start).then_some(gust::DURATION / 50.0)
            }
            Self::CoherentGust { start, end, .. } => {
                (from < *end && to > *start).then_some((end - start) / 50.0)
            }
        }
    }
}
