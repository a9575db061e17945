//! Slips, past the peak and back, and whether a gear is in step at the end.

use super::dense::DenseStep;
use super::locate;
use super::spells::Spells;
use crate::equations::frame::load_angle;
use crate::equations::{Equations, dot};
use crate::results::{GearState, SlipEvent};
use std::f64::consts::{PI, TAU};

/// Most electrical turns of a phase within one step: beyond them the curve between its ends means nothing.
const MOST_TURNS: f64 = 1e5;

/// Most slips of one gear in a run; each is kept.
const MOST_SLIPS: usize = 10_000_000;

/// A place in a step where a phase crosses an odd multiple of pi or a peak.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GearCrossing {
    /// Share of the step.
    pub share: f64,
    /// The magnet by place.
    pub magnet: usize,
    /// +1 when the phase grows.
    pub direction: i32,
    /// A slip; else a peak.
    pub is_slip: bool,
    /// For a peak: the load angle is short of it afterwards.
    pub short: bool,
    /// Phase rate there, electrical rad/s.
    pub slip_speed: f64,
}

/// What is known of one gear so far.
#[derive(Clone, Debug, PartialEq)]
pub struct GearTrack {
    /// Each slip.
    pub slips: Vec<SlipEvent>,
    /// True while past the peak.
    pub past: bool,
    /// Since when, s.
    pub past_since: f64,
    /// Sum of the times past the peak, s.
    pub time_past: f64,
    /// Last time it came back short of the peak, s.
    pub last_return: Option<f64>,
    /// Load angle of the largest magnitude, signed, electrical rad, and when, s.
    pub peak_angle: f64,
    /// s.
    pub peak_angle_time: f64,
    /// How long it slips at a stretch.
    pub spells: Spells,
}

impl GearTrack {
    /// The track of a gear that starts at a phase; `period` is its natural one at no load, s.
    pub fn new(phase: f64, peaks: [f64; 2], period: f64) -> Self {
        let angle = load_angle(phase);
        Self {
            slips: Vec::new(),
            past: !(peaks[0]..=peaks[1]).contains(&angle),
            past_since: 0.0,
            time_past: 0.0,
            last_return: None,
            peak_angle: angle,
            peak_angle_time: 0.0,
            spells: Spells::new(period),
        }
    }

    /// Notes a load angle.
    pub fn note_angle(&mut self, angle: f64, time: f64) {
        if angle.abs() > self.peak_angle.abs() {
            self.peak_angle = angle;
            self.peak_angle_time = time;
        }
    }

    /// Notes a crossing.
    pub fn note(&mut self, crossing: &GearCrossing, time: f64) {
        if crossing.is_slip {
            self.slips.push(SlipEvent {
                time,
                direction: crossing.direction,
                slip_speed: crossing.slip_speed,
            });
            self.spells.slip(time);
            self.note_angle(PI * f64::from(crossing.direction), time);
            if self.peak_angle.abs() < PI {
                self.peak_angle = PI * f64::from(crossing.direction);
                self.peak_angle_time = time;
            }
        } else if crossing.short {
            if self.past {
                self.time_past += time - self.past_since;
            }
            self.past = false;
            self.last_return = Some(time);
            self.spells.short(time);
        } else {
            self.past = true;
            self.past_since = time;
            self.spells.past(time);
        }
    }

    /// State at the end, the time of being in step again, and how much longer to run when it cannot be told.
    pub fn judge(&self, end: f64, period: f64) -> (GearState, Option<f64>, Option<f64>) {
        let Some(last) = self.slips.last() else { return (GearState::Synchronous, None, None) };
        let interval = match self.slips.as_slice() {
            [.., before, last] => Some(last.time - before.time),
            _ => None,
        };
        let since =
            if self.past { None } else { self.last_return.filter(|time| *time >= last.time) };
        let period = if period.is_finite() { period } else { 0.0 };
        let needed = (2.0 * period).max(2.0 * interval.unwrap_or(0.0));
        if let Some(since) = since
            && end - since >= needed
        {
            return (GearState::Synchronous, Some(since), None);
        }
        let slipping = match interval {
            Some(interval) => end - last.time < 2.0 * interval,
            None => self.past,
        };
        if slipping {
            return (GearState::Slipping, None, None);
        }
        let longer = since.map_or(needed, |since| needed - (end - since));
        (GearState::Undecided, None, Some(longer))
    }
}

/// Says which magnet turns too far within a step, or has slipped too often, for the run to go on.
///
/// `first` and `last` are state and rate at the ends of the step.
pub fn runaway(
    equations: &Equations,
    tracks: &[GearTrack],
    length: f64,
    first: [&[f64]; 2],
    last: [&[f64]; 2],
) -> Option<String> {
    for ((magnet, &place), track) in
        equations.model.magnets.iter().zip(&equations.phase_state).zip(tracks)
    {
        let name = &magnet.name;
        let turns = equations.scale[place] / TAU;
        let moved = (last[0][place] - first[0][place]).abs();
        let swept = length * first[1][place].abs().max(last[1][place].abs());
        // Written so that a value that is no number counts as too far.
        let within = moved * turns <= MOST_TURNS && swept * turns <= MOST_TURNS;
        if !within {
            return Some(format!(
                "`{name}` runs away: it turns by more than {MOST_TURNS} poles within a step of {length:e} s; \
                 look at torques, inertias and their units"
            ));
        }
        if track.slips.len() >= MOST_SLIPS {
            return Some(format!(
                "`{name}` has slipped {MOST_SLIPS} times; end the run earlier (a protection with `end_run`)"
            ));
        }
    }
    None
}

/// All crossings of one step in order of time.
///
/// Each phase is cut at its turning points (where its rate changes sign between two of `shares`),
/// so that it is monotone between cuts and two crossings in one step are not lost.
pub fn crossings(equations: &Equations, step: &DenseStep, shares: &[f64]) -> Vec<GearCrossing> {
    let mut found = Vec::new();
    let mut state = Vec::new();
    for (index, (magnet, &place)) in
        equations.model.magnets.iter().zip(&equations.phase_state).enumerate()
    {
        let scale = equations.scale[place];
        let row = &equations.phase_rows[index];
        let mut knots: Vec<(f64, f64)> = Vec::with_capacity(shares.len() + 2);
        let mut before: Option<(f64, f64)> = None;
        for &share in shares {
            step.state(share, &mut state);
            let rate = dot(row, &state);
            let phase = state[place] * scale;
            if let Some((last_share, last_rate)) = before
                && last_rate * rate < 0.0
            {
                let turn = locate::root(
                    last_share,
                    share,
                    |place| {
                        step.state(place, &mut state);
                        dot(row, &state) * last_rate.signum()
                    },
                    1e-12,
                );
                step.state(turn, &mut state);
                knots.push((turn, state[place] * scale));
            }
            knots.push((share, phase));
            before = Some((share, rate));
        }
        let peaks = magnet.law.peaks();
        for pair in knots.windows(2) {
            let ((low_share, low), (high_share, high)) = (pair[0], pair[1]);
            if low == high {
                continue;
            }
            let direction = if high > low { 1 } else { -1 };
            let (bottom, top) = (low.min(high), low.max(high));
            // The curve between the ends of a step may still leave all reason.
            if !(top.abs().max(bottom.abs()) <= 1e15 && top - bottom <= 10.0 * TAU * MOST_TURNS) {
                continue;
            }
            let first_well = ((bottom - PI) / TAU).floor() as i64 - 1;
            let last_well = ((top + PI) / TAU).ceil() as i64 + 1;
            let peak_short = |is_upper: bool| (direction > 0) != is_upper;
            let targets = (first_well..=last_well).flat_map(|well| {
                let centre = TAU * well as f64;
                [
                    (centre + PI, true, false),
                    (centre + peaks[0], false, peak_short(false)),
                    (centre + peaks[1], false, peak_short(true)),
                ]
            });
            for (target, is_slip, short) in targets {
                // The load angle lies in (-pi, pi]: the target itself belongs to the side below it.
                let crossed = if direction > 0 {
                    low <= target && target < high
                } else {
                    high <= target && target < low
                };
                if !crossed {
                    continue;
                }
                let sign = f64::from(direction);
                let share = locate::root(
                    low_share,
                    high_share,
                    |place_share| {
                        step.state(place_share, &mut state);
                        sign * (target - state[place] * scale)
                    },
                    1e-15,
                );
                step.state(share, &mut state);
                let slip_speed = dot(row, &state);
                found.push(GearCrossing {
                    share,
                    magnet: index,
                    direction,
                    is_slip,
                    short,
                    slip_speed,
                });
            }
        }
    }
    found.sort_by(|a, b| a.share.total_cmp(&b.share));
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn slip(time: f64) -> SlipEvent {
        SlipEvent { time, direction: 1, slip_speed: 1.0 }
    }

    #[test]
    fn a_gear_is_in_step_again_only_after_two_periods_and_two_slip_intervals() {
        let mut track = GearTrack::new(0.0, [-PI / 2.0, PI / 2.0], 0.1);
        track.slips = vec![slip(1.0), slip(1.5)];
        track.last_return = Some(1.7);
        assert_eq!(track.judge(2.0, 0.1).0, GearState::Slipping);
        assert_eq!(track.judge(2.6, 0.1).0, GearState::Undecided);
        assert_eq!(track.judge(2.75, 0.1), (GearState::Synchronous, Some(1.7), None));
        assert_eq!(track.judge(2.75, 1.0).0, GearState::Undecided);
    }
}
