//! The calm region: as long as a step stays inside it, nothing can happen.
//!
//! Around a reference state a box is found in which no channel can leave its recorded extremes,
//! no guard can trip, no requirement's mark and no magnet's peak or well edge can be crossed. A
//! step whose box of ends, widened by the most that its cubic can leave them by,
//! `4h/27 (|d0| + |d1|)`, lies inside needs no look. Slopes are secants to the edge of the largest
//! box, which bound any function that bends one way along each axis; a factor of two covers the rest.

use super::conditions::Conditions;
use super::guards::{self, Guard};
use super::observer::Observer;
use super::traces::Tracer;
use crate::component::channel::ChannelKind;
use crate::equations::frame::{Counters, Evaluator, Frame};
use crate::equations::mode::Mode;
use std::f64::consts::{PI, TAU};

/// A step must be this still, in scaled units, before a region is looked for.
const STILL: f64 = 1e-4;

/// Steps between two attempts after one that gained nothing.
const PATIENCE: u32 = 16;

/// Largest growth of an extreme that may be missed, as a share of the tolerance times the channel's size.
const SLACK: f64 = 1e-3;

/// A step that moves every state by less, in scaled units, has the powers of its end all along.
const REST: f64 = 1e-11;

/// How quiet a step is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quiet {
    /// Something may happen.
    No,
    /// It lies inside the region.
    Calm,
    /// It lies inside the region, and hardly moves.
    Rest,
}

/// A place inside the region where the train rests.
#[derive(Debug, Default)]
struct Near {
    centre: Vec<f64>,
    /// Distance of the nearest side of the region; 0 when there is no such place.
    room: f64,
    /// Largest rate at the end of the last step.
    fastest: f64,
}

/// The region, when there is one.
pub struct Calm {
    possible: bool,
    widest: f64,
    tolerance: f64,
    active: bool,
    low: Vec<f64>,
    high: Vec<f64>,
    wait: u32,
    values: Vec<f64>,
    near: Near,
}

impl Calm {
    /// No region yet; none is ever looked for while signals move.
    pub fn new(evaluator: &Evaluator<'_>, traced: bool, tolerance: f64) -> Self {
        Self {
            possible: !evaluator.assembly.varies,
            widest: if traced { 1e-4 } else { 1e-2 },
            tolerance,
            active: false,
            low: Vec::new(),
            high: Vec::new(),
            wait: PATIENCE,
            values: Vec::new(),
            near: Near::default(),
        }
    }

    /// Never looks for a region: every step is looked at.
    pub fn switch_off(&mut self) {
        self.possible = false;
        self.active = false;
    }

    /// Drops the region.
    pub fn forget(&mut self) {
        self.active = false;
        self.near.room = 0.0;
    }

    /// How quiet a step is.
    #[inline]
    pub fn look(
        &mut self,
        h: f64,
        first: &[f64],
        first_rate: &[f64],
        last: &[f64],
        last_rate: &[f64],
    ) -> Quiet {
        if !self.active {
            return Quiet::No;
        }
        let reach = 4.0 / 27.0 * h;
        if self.near.room > 0.0 {
            let (away, fastest) = farthest(last, &self.near.centre, last_rate);
            let beyond = reach * (self.near.fastest + fastest);
            self.near.fastest = fastest;
            if beyond < REST && away + beyond < self.near.room {
                return Quiet::Rest;
            }
            self.near.room = 0.0;
        }
        let ends = first.iter().zip(last).zip(first_rate.iter().zip(last_rate));
        let mut inside = true;
        let mut most = 0.0;
        for (((a, b), (first, last)), (low, high)) in ends.zip(self.low.iter().zip(&self.high)) {
            let beyond = reach * (first.abs() + last.abs());
            let (lower, upper) = if a < b { (a, b) } else { (b, a) };
            inside &= (lower - beyond >= *low) & (upper + beyond <= *high);
            most = if beyond > most { beyond } else { most };
        }
        match inside {
            false => Quiet::No,
            true if most < REST => {
                self.come_near(last, last_rate);
                Quiet::Rest
            }
            true => Quiet::Calm,
        }
    }

    /// Takes the end of a step at rest as the place that the next ones are held against.
    fn come_near(&mut self, last: &[f64], last_rate: &[f64]) {
        self.near.centre.clear();
        self.near.centre.extend_from_slice(last);
        self.near.fastest = farthest(last, last, last_rate).1;
        let room = last.iter().zip(self.low.iter().zip(&self.high));
        self.near.room = room.fold(f64::INFINITY, |room, (value, (low, high))| {
            room.min(value - low).min(high - value)
        });
    }

    /// Notes the channels of the reference in every column that a calm stretch passes.
    pub fn trace(&self, tracer: &mut Tracer, start: f64, end: f64) {
        if !tracer.touches(start, end) || tracer.column(start) == tracer.column(end) {
            return;
        }
        let width = tracer.column_width();
        let mut time = start;
        while time < end {
            tracer.note(time, &self.values);
            time += 0.5 * width;
        }
        tracer.note(end, &self.values);
    }

    /// Looks for a region around the end of a step, when the train has become still.
    #[expect(clippy::too_many_arguments, reason = "everything that could happen must be asked")]
    pub fn settle(
        &mut self,
        evaluator: &Evaluator<'_>,
        observer: &Observer<'_>,
        mode: &Mode,
        conditions: &Conditions,
        guards: &[Guard],
        time: f64,
        state: &[f64],
        rate: &[f64],
        step: f64,
    ) {
        self.active = false;
        self.near.room = 0.0;
        if !self.possible || rate.iter().any(|rate| (rate * step).abs() > STILL) {
            return;
        }
        self.wait += 1;
        if self.wait < PATIENCE {
            return;
        }
        let probe = Probe {
            evaluator,
            observer,
            mode,
            conditions,
            guards,
            time,
            tolerance: self.tolerance,
        };
        let mut frame = Frame::default();
        let (mut centre, mut slack) = (Vec::new(), Vec::new());
        probe.values(state, &mut frame, &mut centre, Some(&mut slack));
        self.values.clone_from(&frame.channels);
        let size = state.len();
        let mut slopes = vec![vec![0.0_f64; size]; centre.len()];
        let mut moved = state.to_vec();
        let mut values = Vec::new();
        for place in 0..size {
            for side in [1.0, -1.0] {
                moved[place] = state[place] + side * self.widest;
                probe.values(&moved, &mut frame, &mut values, None);
                for (index, value) in values.iter().enumerate() {
                    let slope = (value - centre[index]).abs() / self.widest;
                    slopes[index][place] = slopes[index][place].max(slope);
                }
            }
            moved[place] = state[place];
        }
        // Each state may use its share of the smallest slack: width = slack / (2 * states in use * slope).
        let mut width = vec![self.widest; size];
        for (index, slack) in slack.iter().enumerate() {
            let used = slopes[index].iter().filter(|slope| **slope > 0.0).count();
            for place in 0..size {
                if slopes[index][place] > 0.0 {
                    width[place] =
                        f64::min(width[place], slack / (2.0 * used as f64 * slopes[index][place]));
                }
            }
        }
        let still = rate.iter().zip(&width).all(|(rate, width)| (rate * step).abs() < 0.25 * width);
        if !still {
            self.wait = 0;
            return;
        }
        self.low = state.iter().zip(&width).map(|(value, width)| value - width).collect();
        self.high = state.iter().zip(&width).map(|(value, width)| value + width).collect();
        self.active = true;
        self.wait = PATIENCE;
    }
}

/// The largest distance of a state from a centre, and the largest rate.
///
/// In two lanes: the processor takes both at once.
#[inline(always)]
fn farthest(state: &[f64], centre: &[f64], rate: &[f64]) -> (f64, f64) {
    #[inline(always)]
    fn larger(most: &mut f64, value: f64) {
        *most = if value.abs() > *most { value.abs() } else { *most };
    }
    let size = state.len();
    let (centre, rate) = (&centre[..size], &rate[..size]);
    let (mut away, mut fastest) = ([0.0; 2], [0.0; 2]);
    let pairs = size / 2 * 2;
    for place in (0..pairs).step_by(2) {
        for lane in 0..2 {
            larger(&mut away[lane], state[place + lane] - centre[place + lane]);
            larger(&mut fastest[lane], rate[place + lane]);
        }
    }
    if pairs < size {
        larger(&mut away[0], state[pairs] - centre[pairs]);
        larger(&mut fastest[0], rate[pairs]);
    }
    (away[0].max(away[1]), fastest[0].max(fastest[1]))
}

struct Probe<'p, 'a> {
    evaluator: &'p Evaluator<'p>,
    observer: &'p Observer<'a>,
    mode: &'p Mode,
    conditions: &'p Conditions,
    guards: &'p [Guard],
    time: f64,
    tolerance: f64,
}

impl Probe<'_, '_> {
    /// Everything that must not move too far, and by how much it may.
    fn values(
        &self,
        state: &[f64],
        frame: &mut Frame,
        values: &mut Vec<f64>,
        slack: Option<&mut Vec<f64>>,
    ) {
        let counters: &Counters = &self.observer.counters;
        self.evaluator.evaluate(self.time, state, counters, Some(&self.observer.wanted), frame);
        values.clear();
        let mut room = Vec::new();
        let equations = self.evaluator.equations;
        for &channel in &self.observer.wanted {
            let kind = equations.model.channels[channel].kind;
            // Angles grow by themselves: they are monotone while no speed changes sign.
            if matches!(kind, ChannelKind::BodyAngle(_)) {
                continue;
            }
            let value = frame.channels[channel];
            let extreme = self.observer.extremes[channel];
            let size = extreme.max.abs().max(extreme.min.abs());
            let free = SLACK * self.tolerance * size;
            values.push(value);
            room.push((extreme.max - value).min(value - extreme.min).max(0.0) + free);
            if matches!(kind, ChannelKind::BodySpeed(_)) {
                values.push(value);
                room.push(value.abs() + free);
            }
        }
        for (index, &place) in equations.phase_state.iter().enumerate() {
            let phase = state[place] * equations.scale[place];
            let wrapped = phase - TAU * ((phase - PI) / TAU).ceil();
            let peaks = equations.model.magnets[index].law.peaks();
            let nearest = [PI, -PI, peaks[0], peaks[1]]
                .iter()
                .map(|mark| (wrapped - mark).abs())
                .fold(f64::INFINITY, f64::min);
            values.push(phase);
            room.push(nearest);
        }
        for window in
            self.observer.windows.iter().filter(|window| window.active && !window.settled())
        {
            let value = window.value(frame.channels[window.channel]);
            for mark in window.marks() {
                values.push(value);
                room.push((value - mark).abs());
            }
            if let Some((extreme, larger)) = window.bound() {
                let distance = if larger { extreme - value } else { value - extreme };
                values.push(value);
                room.push(distance.max(0.0) + SLACK * self.tolerance * extreme.abs());
            }
        }
        for guard in self.guards {
            let value =
                guards::value(*guard, self.evaluator, self.mode, self.conditions, state, frame);
            values.push(value);
            room.push(value.max(0.0));
        }
        if let Some(slack) = slack {
            *slack = room;
        }
    }
}
