//! The brief look at a moving step: three samples that show that nothing turns in it.
//!
//! Most steps of a transient neither turn a channel round beyond what it has been, nor cross a
//! mark or a guard. Three samples, at the start, the middle and the end, tell: a quantity whose
//! parabola has slopes of one sign at both ends, neither much smaller than the other, is taken as
//! monotone; one that keeps its whole range away from a mark is taken as not crossing it. A step
//! that does not pass is looked at in full. The long steps of `dop853` are always.

use super::conditions::Conditions;
use super::dense::DenseStep;
use super::guards::{self, Guard, TRIP};
use super::observer::Observer;
use super::sampling::{Sample, StepView};
use super::windows::Window;
use crate::component::requirement::Test;
use crate::equations::frame::{Evaluator, load_angle};
use crate::equations::mode::Mode;
use std::f64::consts::{PI, TAU};

/// The smaller end slope of a monotone quantity is at least this share of the larger one.
const SLOPE_SHARE: f64 = 0.4;

/// Largest change of a channel that counts as rounding, as a share of the tolerance times its size.
const SLACK: f64 = 1e-3;

/// The samples of the brief look.
#[derive(Default)]
pub struct Brief {
    start: Sample,
    middle: Sample,
    end: Sample,
    /// True when the last step was taken briefly: `start` then holds the values of its end.
    known: bool,
}

/// What the guards need beside the samples.
#[derive(Clone, Copy)]
pub struct Watched<'a> {
    /// Guards in force.
    pub guards: &'a [Guard],
    /// The mode in force.
    pub mode: &'a Mode,
    /// Protections.
    pub conditions: &'a Conditions,
    /// The run's tolerance.
    pub tolerance: f64,
}

/// A quantity at the start, the middle and the end of a step.
#[derive(Clone, Copy)]
struct Three([f64; 3]);

impl Three {
    fn low(self) -> f64 {
        let [a, b, c] = self.0;
        a.min(b).min(c)
    }

    fn high(self) -> f64 {
        let [a, b, c] = self.0;
        a.max(b).max(c)
    }

    /// Where it may be between the samples: their range, widened by itself on both sides.
    fn reach(self) -> (f64, f64) {
        let (low, high) = (self.low(), self.high());
        (low - (high - low), high + (high - low))
    }

    fn is_monotone(self) -> bool {
        let [a, b, c] = self.0;
        let first = -3.0 * a + 4.0 * b - c;
        let last = a - 4.0 * b + 3.0 * c;
        first * last > 0.0
            && first.abs().min(last.abs()) >= SLOPE_SHARE * first.abs().max(last.abs())
    }
}

impl Brief {
    fn channel(&self, channel: usize) -> Three {
        Three([&self.start, &self.middle, &self.end].map(|sample| sample.frame.channels[channel]))
    }
}

impl Observer<'_> {
    /// Takes a step if three samples show that nothing turns in it; false leaves it untouched.
    pub fn step_briefly(
        &mut self,
        brief: &mut Brief,
        evaluator: Evaluator<'_>,
        step: &DenseStep,
        watched: Watched<'_>,
    ) -> bool {
        let end = step.start + step.length;
        let columns = self.tracer.as_ref().filter(|tracer| tracer.touches(step.start, end));
        if self.turning.is_some()
            || columns.is_some_and(|tracer| step.length > 0.5 * tracer.column_width())
        {
            return false;
        }
        let scale = std::mem::take(&mut self.speed_scale);
        let counters = std::mem::take(&mut self.counters);
        let view =
            StepView { step, evaluator, counters: &counters, crossings: Vec::new(), scale: &scale };
        if !brief.known || brief.start.time != step.start {
            view.sample(0.0, Some(&self.wanted), &mut brief.start);
        }
        view.sample(0.5, Some(&self.wanted), &mut brief.middle);
        view.sample(1.0, Some(&self.wanted), &mut brief.end);
        let passes = self.phases_pass(brief, evaluator)
            && guards_pass(brief, evaluator, watched)
            && self.channels_pass(brief, watched.tolerance)
            && self.windows.iter().all(|window| !window.active || window_passes(window, brief));
        if passes {
            self.take(brief, &view);
            view.counters_at(1.0, &mut self.counters, &mut self.sums);
            std::mem::swap(&mut brief.start, &mut brief.end);
        } else {
            self.counters.clone_from(&counters);
        }
        brief.known = passes;
        self.speed_scale = scale;
        passes
    }

    /// No phase comes near a peak or the edge of its well, nor turns beyond its largest angle.
    fn phases_pass(&self, brief: &Brief, evaluator: Evaluator<'_>) -> bool {
        let equations = evaluator.equations;
        let places = equations.phase_state.iter().zip(&equations.model.magnets);
        places.zip(&self.gears).all(|((&place, magnet), track)| {
            let scale = equations.scale[place];
            let phase = Three(
                [&brief.start, &brief.middle, &brief.end].map(|sample| sample.state[place] * scale),
            );
            let (low, high) = phase.reach();
            let [lower, upper] = magnet.law.peaks();
            let well = |phase: f64, mark: f64| ((phase - mark) / TAU).floor();
            // Written so that a phase that is no number does not pass.
            let clear = [PI, lower, upper].iter().all(|&mark| well(low, mark) == well(high, mark));
            let widest = load_angle(low).abs().max(load_angle(high).abs());
            clear && (widest < track.peak_angle.abs() || phase.is_monotone())
        })
    }

    /// No channel turns round beyond what it has been.
    fn channels_pass(&self, brief: &Brief, tolerance: f64) -> bool {
        self.wanted.iter().all(|&channel| {
            let values = brief.channel(channel);
            let known = &self.extremes[channel];
            let (mut low, high) = values.reach();
            // A magnitude has a corner at zero, which three samples do not show.
            let corner = self.magnitudes[channel] && low <= 0.0;
            if self.magnitudes[channel] {
                low = low.max(0.0);
            }
            if (high <= known.max && low >= known.min) || values.is_monotone() && !corner {
                return true;
            }
            let size = known.max.abs().max(known.min.abs());
            values.high() - values.low() <= SLACK * tolerance * size
        })
    }

    fn take(&mut self, brief: &Brief, view: &StepView<'_>) {
        let equations = view.evaluator.equations;
        for sample in [&brief.middle, &brief.end] {
            for &channel in &self.wanted {
                self.extremes[channel].note(sample.frame.channels[channel], sample.time);
            }
            for (track, &place) in self.gears.iter_mut().zip(&equations.phase_state) {
                let angle = load_angle(sample.state[place] * equations.scale[place]);
                track.note_angle(angle, sample.time);
            }
            self.trace(view, sample);
        }
        for window in self.windows.iter_mut().filter(|window| window.active && !window.settled()) {
            window.note(brief.end.time, brief.end.frame.channels[window.channel]);
        }
        let mut scratch = std::mem::take(&mut self.scratch);
        self.rows_in(view, &mut scratch);
        self.scratch = scratch;
    }
}

/// No guard comes near its trip.
fn guards_pass(brief: &Brief, evaluator: Evaluator<'_>, watched: Watched<'_>) -> bool {
    let Watched { guards, mode, conditions, .. } = watched;
    guards.iter().all(|&guard| {
        let values = Three([&brief.start, &brief.middle, &brief.end].map(|sample| {
            guards::value(guard, &evaluator, mode, conditions, &sample.state, &sample.frame)
        }));
        values.reach().0 > TRIP
    })
}

/// No mark of a requirement comes near, and its extreme grows at the end of the step if at all.
fn window_passes(window: &Window, brief: &Brief) -> bool {
    if window.settled() {
        return true;
    }
    // A limit passed at the window's very start is still to be told.
    if window.is_over() && !window.crossed && window.requirement.is_some() {
        return false;
    }
    let channel = brief.channel(window.channel);
    let values = Three(channel.0.map(|value| window.value(value)));
    let (low, high) = values.reach();
    let near = |mark: f64| low <= mark && mark <= high;
    match window.test {
        Test::Reaches { .. } => !window.marks().into_iter().any(near),
        Test::AtMost(limit) => {
            high <= window.extreme || values.is_monotone() && (window.crossed || !near(limit))
        }
        Test::AtLeast(limit) => {
            // The magnitude of a value that changes sign has a corner there.
            let (least, most) = channel.reach();
            let corner = !window.signed && least <= 0.0 && most >= 0.0;
            let grows = values.is_monotone() && !corner && (window.crossed || !near(limit));
            low.max(if window.signed { low } else { 0.0 }) >= window.extreme || grows
        }
    }
}
