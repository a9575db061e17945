//! Extremes of channels between the samples of a step, and the words of a gear's events.

use super::gears::GearCrossing;
use super::locate;
use super::sampling::{Sample, StepView};
use crate::equations::Equations;
use crate::results::{Event, EventKind};

/// Extremes of one channel so far.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extreme {
    /// Smallest value.
    pub min: f64,
    /// When, s.
    pub min_time: f64,
    /// Largest value.
    pub max: f64,
    /// When, s.
    pub max_time: f64,
    /// Latest value.
    pub last: f64,
}

impl Extreme {
    /// Nothing seen yet.
    pub const NONE: Self = Self {
        min: f64::INFINITY,
        min_time: 0.0,
        max: f64::NEG_INFINITY,
        max_time: 0.0,
        last: 0.0,
    };

    /// Takes a value at an instant.
    pub fn note(&mut self, value: f64, time: f64) {
        if value < self.min {
            self.min = value;
            self.min_time = time;
        }
        if value > self.max {
            self.max = value;
            self.max_time = time;
        }
        self.last = value;
    }
}

/// Refines a channel's extremes where a parabola through three samples promises more than is known.
pub(super) fn refine(
    extreme: &mut Extreme,
    view: &StepView<'_>,
    samples: &[Sample],
    channel: usize,
    wraps: bool,
    scratch: &mut Sample,
) {
    for triple in samples.windows(3) {
        let places = [triple[0].share, triple[1].share, triple[2].share];
        let values = [0, 1, 2].map(|index: usize| triple[index].frame.channels[channel]);
        if wraps
            && (values[1] - values[0]).abs().max((values[2] - values[1]).abs())
                > std::f64::consts::PI
        {
            continue;
        }
        let Some((_, value)) = locate::vertex(places, values) else { continue };
        let sign = if value > extreme.max {
            1.0
        } else if value < extreme.min {
            -1.0
        } else {
            continue;
        };
        let (share, best) = locate::maximum(places[0], places[2], |share| {
            sign * view.channel(channel, share, scratch)
        });
        let last = extreme.last;
        extreme.note(sign * best, view.step.time(share));
        extreme.last = last;
    }
}

/// The event of a crossing, in words.
pub(super) fn gear_event(equations: &Equations, crossing: &GearCrossing, time: f64) -> Event {
    let name = &equations.model.magnets[crossing.magnet].name;
    let (kind, value, unit, text) = if crossing.is_slip {
        let sense = if crossing.direction > 0 { "forward" } else { "backward" };
        (
            EventKind::Slip,
            f64::from(crossing.direction),
            "1",
            format!("`{name}` slips one pole {sense}"),
        )
    } else if crossing.short {
        (
            EventKind::ShortOfPeak,
            crossing.slip_speed,
            "rad/s",
            format!("`{name}` is short of the peak again"),
        )
    } else {
        (EventKind::PastPeak, crossing.slip_speed, "rad/s", format!("`{name}` is past the peak"))
    };
    Event { time, kind, of: name.clone(), value, unit, text }
}
