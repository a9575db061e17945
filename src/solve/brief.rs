//! The brief look at a moving step: three samples that show that nothing turns in it.
//!
//! Most steps of a transient neither turn a channel round beyond what it has been, nor cross a
//! mark or a guard. Three samples tell: a quantity whose parabola has slopes of one sign at both
//! ends, neither much smaller than the other, is taken as monotone; one that keeps its whole range
//! away from a mark is taken as not crossing it. The samples are first the ends of this step and
//! the start of the one before, which cost one evaluation; where they do not tell, the ends and
//! the middle. A step that does not pass is looked at in full. The long steps of `dop853` are always.

use super::conditions::Conditions;
use super::dense::DenseStep;
use super::extremes::Extreme;
use super::guards::{self, Guard, TRIP};
use super::observer::Observer;
use super::sampling::{Sample, StepView};
use super::windows::Window;
use crate::component::requirement::Test;
use crate::equations::frame::{Evaluator, load_angle};
use crate::equations::mode::Mode;
use std::f64::consts::{PI, TAU};

/// The smaller end slope of a monotone quantity is at least this share of the larger one: with
/// the middle of the step, and with the step before.
const SLOPE_SHARES: [f64; 2] = [0.4, 0.6];

/// Largest change of a channel that counts as rounding, as a share of the tolerance times its size.
const SLACK: f64 = 1e-3;

/// The samples of the brief look.
#[derive(Default)]
pub struct Brief {
    before: Sample,
    start: Sample,
    middle: Sample,
    end: Sample,
    /// Steps in a row that were taken briefly, up to 2: `start` holds the values of the end of
    /// the last one, and `before` those of its start.
    known: u8,
    /// True while `end` holds the values of the end of the step in hand.
    ended: bool,
    /// Channels that go beyond what they have been.
    growing: Vec<usize>,
}

impl Brief {
    /// The values kept for the end of a step belong to another one.
    pub fn forget_end(&mut self) {
        self.ended = false;
    }
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

/// Three samples and the stretch that they are to tell of.
#[derive(Clone, Copy)]
struct Look<'s> {
    samples: [&'s Sample; 3],
    /// Slopes of the parabola at both ends of the stretch, as factors of the three values.
    slopes: [[f64; 3]; 2],
    slope_share: f64,
}

/// A quantity in the three samples.
#[derive(Clone, Copy)]
struct Three([f64; 3]);

impl Three {
    /// Lowest and highest of the samples; a last one that is no number stays.
    #[inline(always)]
    fn span(self) -> (f64, f64) {
        let [a, b, c] = self.0;
        let (low, high) = if a < b { (a, b) } else { (b, a) };
        (if low < c { low } else { c }, if high > c { high } else { c })
    }

    /// Where it may be between the samples: their range, widened by itself on both sides.
    #[inline(always)]
    fn reach(self) -> (f64, f64) {
        let (low, high) = self.span();
        (low - (high - low), high + (high - low))
    }
}

impl<'s> Look<'s> {
    /// Start, middle and end of a step.
    fn between(samples: [&'s Sample; 3]) -> Self {
        let slopes = [[-3.0, 4.0, -1.0], [1.0, -4.0, 3.0]];
        Self { samples, slopes, slope_share: SLOPE_SHARES[0] }
    }

    /// The start of the step before and the ends of this one: the parabola by divided differences.
    fn back(samples: [&'s Sample; 3]) -> Self {
        let [first, last] = [samples[1].time - samples[0].time, samples[2].time - samples[1].time];
        let both = first + last;
        let bend = [1.0 / (first * both), -1.0 / (first * last), 1.0 / (last * both)];
        let at_start =
            [-1.0 / first + bend[0] * first, 1.0 / first + bend[1] * first, bend[2] * first];
        let at_end = [bend[0] * last, -1.0 / last + bend[1] * last, 1.0 / last + bend[2] * last];
        Self { samples, slopes: [at_start, at_end], slope_share: SLOPE_SHARES[1] }
    }

    #[inline]
    fn channel(&self, channel: usize) -> Three {
        Three(self.samples.map(|sample| sample.frame.channels[channel]))
    }

    #[inline]
    fn is_monotone(&self, values: Three) -> bool {
        let [first, last] = self
            .slopes
            .map(|slope| slope.iter().zip(values.0).map(|(factor, value)| factor * value).sum());
        let (first, last): (f64, f64) = (first, last);
        first * last > 0.0
            && first.abs().min(last.abs()) >= self.slope_share * first.abs().max(last.abs())
    }

    /// No guard comes near its trip.
    fn guards_pass(&self, evaluator: Evaluator<'_>, watched: Watched<'_>) -> bool {
        let Watched { guards, mode, conditions, .. } = watched;
        guards.iter().all(|&guard| {
            let values = Three(self.samples.map(|sample| {
                guards::value(guard, &evaluator, mode, conditions, &sample.state, &sample.frame)
            }));
            let (low, high) = values.span();
            let range = high - low;
            // What is at rest on its mark (a law of a body that is held) does not move off it.
            low - range > TRIP || range < 0.1 * TRIP && low > -0.5 * TRIP
        })
    }

    /// No mark of a requirement comes near, and its extreme grows at the end if at all.
    fn window_passes(&self, window: &Window) -> bool {
        if window.settled() {
            return true;
        }
        // A limit passed at the window's very start is still to be told.
        if window.is_over() && !window.crossed && window.requirement.is_some() {
            return false;
        }
        let channel = self.channel(window.channel);
        let values = Three(channel.0.map(|value| window.value(value)));
        let (low, high) = values.reach();
        let near = |mark: f64| low <= mark && mark <= high;
        let grows = |limit: f64| self.is_monotone(values) && (window.crossed || !near(limit));
        match window.test {
            Test::Reaches { value, band: None, .. } => !near(value),
            Test::Reaches { value, band: Some(band), .. } => {
                !near(value - band) && !near(value + band)
            }
            Test::AtMost(limit) => high <= window.extreme || grows(limit),
            Test::AtLeast(limit) => {
                // The magnitude of a value that changes sign has a corner there.
                let (least, most) = channel.reach();
                let corner = !window.signed && least <= 0.0 && most >= 0.0;
                let low = if window.signed { low } else { low.max(0.0) };
                low >= window.extreme || grows(limit) && !corner
            }
        }
    }
}

/// The look at the step in hand, and what is kept for the next.
impl Observer<'_> {
    /// Takes a step if its ends and the step before show that nothing turns in it; false leaves
    /// it untouched. `known` are the values of the laws at its end; no row may be due.
    pub fn look_back(
        &mut self,
        brief: &mut Brief,
        evaluator: Evaluator<'_>,
        step: &DenseStep,
        known: &[f64],
        watched: Watched<'_>,
    ) -> bool {
        brief.ended = false;
        if brief.known < 2 || brief.start.time != step.start || !self.may_be_brief(step, 4.0) {
            return false;
        }
        let ratio = step.length / (brief.start.time - brief.before.time);
        if !(0.5..=2.0).contains(&ratio) {
            return false;
        }
        let scale = std::mem::take(&mut self.speed_scale);
        let counters = std::mem::take(&mut self.counters);
        let view =
            StepView { step, evaluator, counters: &counters, crossings: Vec::new(), scale: &scale };
        view.sample_end(known, &self.wanted, &mut brief.end);
        brief.ended = true;
        let look = Look::back([&brief.before, &brief.start, &brief.end]);
        let passes = self.passes(look, &mut brief.growing, evaluator, watched);
        if passes {
            self.take(&[&brief.end], &brief.growing, &view);
        }
        self.counters = counters;
        self.speed_scale = scale;
        if passes {
            self.go_on(brief, step);
        }
        passes
    }

    /// Takes a step if its ends and its middle show that nothing turns in it; false leaves it untouched.
    pub fn look_between(
        &mut self,
        brief: &mut Brief,
        evaluator: Evaluator<'_>,
        step: &DenseStep,
        watched: Watched<'_>,
    ) -> bool {
        if !self.may_be_brief(step, 2.0) {
            brief.known = 0;
            return false;
        }
        let scale = std::mem::take(&mut self.speed_scale);
        let counters = std::mem::take(&mut self.counters);
        let view =
            StepView { step, evaluator, counters: &counters, crossings: Vec::new(), scale: &scale };
        if brief.known == 0 || brief.start.time != step.start {
            brief.known = 0;
            view.sample(0.0, Some(&self.wanted), &mut brief.start);
        }
        view.sample(0.5, Some(&self.wanted), &mut brief.middle);
        if !brief.ended {
            view.sample(1.0, Some(&self.wanted), &mut brief.end);
        }
        let look = Look::between([&brief.start, &brief.middle, &brief.end]);
        let passes = self.passes(look, &mut brief.growing, evaluator, watched);
        if passes {
            self.take(&[&brief.middle, &brief.end], &brief.growing, &view);
            let mut scratch = std::mem::take(&mut self.scratch);
            self.rows_in(&view, &mut scratch);
            self.scratch = scratch;
        }
        self.counters = counters;
        self.speed_scale = scale;
        if passes {
            self.go_on(brief, step);
        } else {
            brief.known = 0;
        }
        passes
    }

    /// True where turning points are not asked for and each column of a chart has `looks` steps.
    fn may_be_brief(&self, step: &DenseStep, looks: f64) -> bool {
        let end = step.start + step.length;
        let traced = self.tracer.as_ref().filter(|tracer| tracer.touches(step.start, end));
        self.turning.is_none()
            && traced.is_none_or(|tracer| looks * step.length <= tracer.column_width())
    }

    fn passes(
        &self,
        look: Look<'_>,
        growing: &mut Vec<usize>,
        evaluator: Evaluator<'_>,
        watched: Watched<'_>,
    ) -> bool {
        self.phases_pass(look, evaluator)
            && look.guards_pass(evaluator, watched)
            && self.windows.iter().all(|window| !window.active || look.window_passes(window))
            && self.channels_pass(look, growing, watched.tolerance)
    }

    /// Of all that is counted only the angles go on.
    fn go_on(&mut self, brief: &mut Brief, step: &DenseStep) {
        self.counters.angles.clear();
        let sums = step.last_sum.iter().zip(&self.speed_scale);
        self.counters.angles.extend(sums.map(|(sum, scale)| sum * scale));
        std::mem::swap(&mut brief.before, &mut brief.start);
        std::mem::swap(&mut brief.start, &mut brief.end);
        brief.known = (brief.known + 1).min(2);
        brief.ended = false;
    }

    /// No phase comes near a peak or the edge of its well, nor turns beyond its largest angle.
    fn phases_pass(&self, look: Look<'_>, evaluator: Evaluator<'_>) -> bool {
        let equations = evaluator.equations;
        let places = equations.phase_state.iter().zip(&equations.model.magnets);
        places.zip(&self.gears).all(|((&place, magnet), track)| {
            let scale = equations.scale[place];
            let phase = Three(look.samples.map(|sample| sample.state[place] * scale));
            let (low, high) = phase.reach();
            let [lower, upper] = magnet.law.peaks();
            let well = |phase: f64, mark: f64| ((phase - mark) / TAU).floor();
            // Written so that a phase that is no number does not pass.
            let clear = [PI, lower, upper].iter().all(|&mark| well(low, mark) == well(high, mark));
            let widest = load_angle(low).abs().max(load_angle(high).abs());
            clear && (widest < track.peak_angle.abs() || look.is_monotone(phase))
        })
    }

    /// No channel turns round beyond what it has been. Those that grow are listed.
    fn channels_pass(&self, look: Look<'_>, growing: &mut Vec<usize>, tolerance: f64) -> bool {
        growing.clear();
        let mut judge = |channel: usize, values: Three, known: &Extreme, magnitude: bool| {
            let (mut low, high) = values.reach();
            // A magnitude has a corner at zero, which three samples do not show.
            let corner = magnitude && low <= 0.0;
            if magnitude {
                low = low.max(0.0);
            }
            if high <= known.max && low >= known.min {
                return true;
            }
            growing.push(channel);
            if look.is_monotone(values) && !corner {
                return true;
            }
            let size = known.max.abs().max(known.min.abs());
            let (low, high) = values.span();
            high - low <= SLACK * tolerance * size
        };
        let [first, second, third] = look.samples.map(|sample| sample.frame.channels.as_slice());
        if self.wanted.len() < self.extremes.len() {
            return self.wanted.iter().all(|&channel| {
                let values = Three([first[channel], second[channel], third[channel]]);
                judge(channel, values, &self.extremes[channel], self.magnitudes[channel])
            });
        }
        // All of them: in step, which spares looking each up.
        let values = first.iter().zip(second).zip(third);
        let known = self.extremes.iter().zip(&self.magnitudes);
        values.zip(known).enumerate().all(|(channel, (((a, b), c), (known, magnitude)))| {
            judge(channel, Three([*a, *b, *c]), known, *magnitude)
        })
    }

    fn take(&mut self, samples: &[&Sample], growing: &[usize], view: &StepView<'_>) {
        let equations = view.evaluator.equations;
        for sample in samples {
            for &channel in growing {
                self.extremes[channel].note(sample.frame.channels[channel], sample.time);
            }
            for (track, &place) in self.gears.iter_mut().zip(&equations.phase_state) {
                let angle = load_angle(sample.state[place] * equations.scale[place]);
                track.note_angle(angle, sample.time);
            }
            self.trace(view, sample);
        }
        let Some(end) = samples.last() else { return };
        for window in self.windows.iter_mut().filter(|window| window.active && !window.settled()) {
            window.note(end.time, end.frame.channels[window.channel]);
        }
    }
}
