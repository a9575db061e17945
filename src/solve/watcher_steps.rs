//! The short way of a calm step, and where a guard trips within another.

use super::brief::Watched;
use super::gears;
use super::guards::TRIP;
use super::locate;
use super::rhs::Rhs;
use super::watcher::Watcher;
use crate::scenario::Method;
use std::sync::atomic::Ordering;

/// Steps between two looks at the outside world.
const LOOK_AROUND: u64 = 256;

/// Most steps at rest that are summed as one: none of them moves a state by more than 1e-11.
const REST_STEPS: u32 = 16;

/// Steps at rest whose angles and energies are not summed yet.
#[derive(Debug, Default)]
pub(super) struct Rest {
    steps: u32,
    start: f64,
    first: Vec<f64>,
}

/// The first pair of shares between which a guard trips; a dip between samples is looked into.
pub(super) fn bracket(
    shares: &[f64],
    value: impl Fn(usize) -> f64,
    mut at: impl FnMut(f64) -> f64,
) -> Option<(f64, f64)> {
    if value(0) < -TRIP {
        return Some((0.0, 0.0));
    }
    for index in 1..shares.len() {
        if value(index) < -TRIP {
            return Some((shares[index - 1], shares[index]));
        }
        if index + 1 < shares.len() {
            let places = [shares[index - 1], shares[index], shares[index + 1]];
            let heights = [value(index - 1), value(index), value(index + 1)];
            if let Some((_, low)) = locate::vertex(places, heights) {
                let near = low < 0.1 * heights[0].min(heights[2]);
                if near && low < heights[1].min(heights[0]).min(heights[2]) && heights[2] >= -TRIP {
                    let (place_low, depth) =
                        locate::maximum(places[0], places[2], |share| -at(share));
                    if -depth < -TRIP {
                        return Some((places[0], place_low));
                    }
                }
            }
        }
    }
    None
}

impl Watcher<'_, '_> {
    /// True when a magnet turns too far within a step; why is noted.
    pub(super) fn runs_away(
        &mut self,
        rhs: &Rhs<'_>,
        time: f64,
        state: &[f64],
        rates: &[f64],
    ) -> bool {
        self.runaway = gears::runaway(
            rhs.evaluator.equations,
            &self.observer.gears,
            time - self.time,
            [&self.state, &self.rate],
            [state, rates],
        );
        self.runaway.is_some()
    }

    /// The shortest way, for a step that hardly moves: its sums wait for those that follow.
    pub(super) fn load_rest(&mut self, rhs: &Rhs<'_>, time: f64, state: &[f64], rates: &[f64]) {
        if self.rest.steps == 0 {
            self.rest.start = self.time;
            self.rest.first.clone_from(&self.state);
        }
        self.move_on(time, state, rates);
        self.rest.steps += 1;
        if self.rest.steps >= REST_STEPS {
            self.record.copy_from_slice(rhs.ring().record(0));
            self.close_rest(rhs);
        }
    }

    /// Sums what has waited, before anything else looks at the record or at the sums.
    pub(super) fn sum_rest(&mut self, rhs: &Rhs<'_>) {
        if self.rest.steps > 0 {
            rhs.fill(self.time, &self.state, &mut self.record);
            self.close_rest(rhs);
        }
    }

    fn close_rest(&mut self, rhs: &Rhs<'_>) {
        let length = self.time - self.rest.start;
        let observer = &mut *self.observer;
        let angles = observer.counters.angles.iter_mut().zip(&observer.speed_scale);
        for (((sum, scale), before), after) in angles.zip(&self.rest.first).zip(&self.state) {
            *sum += 0.5 * scale * length * (before + after);
        }
        let energy = rhs.audit.end(length, &self.record, &mut observer.heats);
        observer.energy.add(&energy);
        if let Some(tracer) = &mut observer.tracer {
            self.calm.trace(tracer, self.rest.start, self.time);
        }
        self.rest.steps = 0;
    }

    fn move_on(&mut self, time: f64, state: &[f64], rates: &[f64]) {
        self.last_steps = [self.last_steps[1], time - self.time];
        self.time = time;
        self.state.copy_from_slice(state);
        self.rate.copy_from_slice(rates);
        self.steps += 1;
    }

    /// The short way for a step in which nothing can happen: audit and angles only.
    pub(super) fn load_calm(&mut self, rhs: &Rhs<'_>, time: f64, state: &[f64], rates: &[f64]) {
        let length = time - self.time;
        let ring = rhs.ring();
        let observer = &mut *self.observer;
        let angles = observer.counters.angles.iter_mut().zip(&observer.speed_scale);
        let count = self.tableau.stages();
        let speeds = observer.speed_scale.len();
        self.inner_sums.clear();
        let first = self.state_weights[0];
        self.inner_sums.extend(self.rate[..speeds].iter().map(|rate| first * rate));
        for stage in 1..count {
            let weight = self.state_weights[stage];
            if weight != 0.0 {
                let rates = &ring.rates(count - stage)[..speeds];
                for (inner, rate) in self.inner_sums.iter_mut().zip(rates) {
                    *inner += weight * rate;
                }
            }
        }
        for (((sum, scale), value), inner) in angles.zip(&self.state).zip(&self.inner_sums) {
            *sum += scale * length * (value + length * inner);
        }
        let energy =
            rhs.audit.step(length, self.tableau.b, &self.record, &ring, &mut observer.heats);
        observer.energy.add(&energy);
        self.record.copy_from_slice(ring.record(0));
        drop(ring);
        if let Some(tracer) = &mut self.observer.tracer {
            self.calm.trace(tracer, self.time, time);
        }
        self.move_on(time, state, rates);
    }

    /// True when a brief look at the loaded step was enough; it is prepared otherwise.
    pub(super) fn is_brief(&mut self, rhs: &Rhs<'_>, row_due: bool) -> bool {
        let (mode, conditions, tolerance) = (self.mode, self.conditions, self.tolerance);
        let brief = self.method != Method::Dop853;
        if brief && !row_due {
            let watched = Watched { guards: &self.guards, mode, conditions, tolerance };
            let known = rhs.law_values(&self.new_record);
            let step = &self.step;
            if self.observer.look_back(&mut self.brief, rhs.evaluator, step, known, watched) {
                return true;
            }
        } else {
            self.brief.forget_end();
        }
        self.prepare(rhs);
        let watched = Watched { guards: &self.guards, mode, conditions, tolerance };
        brief && self.observer.look_between(&mut self.brief, rhs.evaluator, &self.step, watched)
    }

    pub(super) fn look_around(&mut self) -> bool {
        if self.steps.is_multiple_of(LOOK_AROUND) {
            if let Some(progress) = &mut self.progress {
                progress(self.time);
            }
            if self.interrupt.is_some_and(|flag| flag.load(Ordering::Relaxed)) {
                self.interrupted = true;
                return true;
            }
        }
        false
    }
}
