//! Turning points of one channel on the continuous solution, handed on as they are found.
//!
//! Within each interval between two looks at a step the slopes at both ends are compared; where
//! they differ in sign the extreme is located on the interpolant. Wiggles smaller than a gate are
//! no turning points, so that rounding in steady running makes no cycles.

use super::locate;
use super::sampling::{Sample, StepView};

/// Share of the span so far below which a swing is rounding.
const ROUNDING: f64 = 1e-9;

/// Share of an interval over which a slope is taken.
const NEAR: f64 = 1e-3;

/// Which channel is watched, when, and who is told.
pub struct TurningRequest<'a> {
    /// Channel by place.
    pub channel: usize,
    /// Start and end of the window, s.
    pub window: [f64; 2],
    /// Swings smaller than this are no turning points, SI.
    pub gate: f64,
    /// Told each turning point (time, value) in order, the first and the last value included.
    pub told: &'a mut dyn FnMut(f64, f64),
}

/// Finds turning points while the run goes on.
pub struct TurningWatch<'a> {
    request: TurningRequest<'a>,
    filter: Filter,
}

impl<'a> TurningWatch<'a> {
    /// A watch that has seen nothing yet.
    pub fn new(request: TurningRequest<'a>) -> Self {
        let filter = Filter::new(request.gate);
        Self { request, filter }
    }

    /// Takes the value at the start or end of a segment.
    pub fn note(&mut self, time: f64, channels: &[f64]) {
        let [start, end] = self.request.window;
        if (start..=end).contains(&time) {
            let value = channels.get(self.request.channel).copied().unwrap_or(f64::NAN);
            self.take(time, value);
        }
    }

    /// Takes one step, looked at in `samples`.
    pub fn step(&mut self, view: &StepView<'_>, samples: &[Sample], scratch: &mut Sample) {
        let [start, end] = self.request.window;
        let (from, length) = (view.step.start, view.step.length);
        if from + length < start || from > end {
            return;
        }
        let share = |time: f64| ((time - from) / length).clamp(0.0, 1.0);
        let (first, last) = (share(start), share(end));
        let channel = self.request.channel;
        for pair in samples.windows(2) {
            let (low, high) = (pair[0].share.max(first), pair[1].share.min(last));
            if high <= low {
                continue;
            }
            let mut at = |share: f64| view.channel(channel, share, scratch);
            let near = NEAR * (high - low);
            let (left, right) = (at(low), at(high));
            let (rise, fall) = (at(low + near) - left, right - at(high - near));
            let turn = (rise > 0.0 && fall < 0.0 || rise < 0.0 && fall > 0.0).then(|| {
                let sign = rise.signum();
                let (place, best) = locate::maximum(low, high, |share| sign * at(share));
                (place, sign * best)
            });
            self.take(view.step.time(low), left);
            if let Some((place, value)) = turn {
                self.take(view.step.time(place), value);
            }
            self.take(view.step.time(high), right);
        }
    }

    fn take(&mut self, time: f64, value: f64) {
        if let Some((time, value)) = self.filter.take(time, value) {
            (self.request.told)(time, value);
        }
    }

    /// Hands on the last value.
    pub fn finish(&mut self) {
        if let Some((time, value)) = self.filter.candidate.take() {
            (self.request.told)(time, value);
        }
    }
}

/// Turns a stream of values into its reversals.
#[derive(Clone, Copy, Debug)]
struct Filter {
    gate: f64,
    low: f64,
    high: f64,
    rising: Option<bool>,
    candidate: Option<(f64, f64)>,
}

impl Filter {
    fn new(gate: f64) -> Self {
        let (low, high) = (f64::INFINITY, f64::NEG_INFINITY);
        Self { gate, low, high, rising: None, candidate: None }
    }

    /// Takes a value; returns the turning point that it proves.
    fn take(&mut self, time: f64, value: f64) -> Option<(f64, f64)> {
        if value.is_nan() {
            return None;
        }
        self.low = self.low.min(value);
        self.high = self.high.max(value);
        let Some(held) = self.candidate else {
            self.candidate = Some((time, value));
            return None;
        };
        let size = self.low.abs().max(self.high.abs());
        let gate = self.gate.max(ROUNDING * (self.high - self.low)).max(1e-14 * size);
        let change = value - held.1;
        match self.rising {
            None => {
                if change.abs() > gate {
                    self.rising = Some(change > 0.0);
                    self.candidate = Some((time, value));
                    return Some(held);
                }
                None
            }
            Some(rising) => {
                let onward = if rising { change } else { -change };
                if onward >= 0.0 {
                    self.candidate = Some((time, value));
                    None
                } else if -onward > gate {
                    self.rising = Some(!rising);
                    self.candidate = Some((time, value));
                    Some(held)
                } else {
                    None
                }
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn reversals(values: &[f64], gate: f64) -> Vec<f64> {
        let mut filter = Filter::new(gate);
        let mut found: Vec<f64> =
            values.iter().filter_map(|value| filter.take(0.0, *value).map(|(_, v)| v)).collect();
        found.extend(filter.candidate.map(|(_, value)| value));
        found
    }

    #[test]
    fn values_on_the_way_are_left_out() {
        let values = [-2.0, -1.0, 1.0, 1.0, 0.0, -3.0, 5.0];
        assert_eq!(reversals(&values, 0.0), [-2.0, 1.0, -3.0, 5.0]);
    }

    #[test]
    fn swings_below_the_gate_are_no_turning_points() {
        let values = [0.0, 10.0, 9.5, 11.0, 0.0, 0.4, -1.0];
        assert_eq!(reversals(&values, 1.0), [0.0, 11.0, -1.0]);
    }

    #[test]
    fn a_channel_that_rests_has_one_value() {
        assert_eq!(reversals(&[4.0, 4.0, 4.0 + 1e-15, 4.0], 0.0), [4.0]);
    }
}
