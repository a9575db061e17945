//! Watches the accepted steps of one segment: guards first, then the observer and the audit.

use super::audit::Powers;
use super::brief::Brief;
use super::calm::{Calm, Quiet};
use super::conditions::Conditions;
use super::dense::{DenseStep, add_sums};
use super::guards::{self, Guard, TRIP};
use super::integrate::{WINDOW, Watch};
use super::locate;
use super::observer::Observer;
use super::rhs::Rhs;
use super::sampling::{Sample, StepView};
use super::tableau::{self, Tableau};
use super::watcher_steps::{Rest, bracket};
use crate::equations::frame::{Evaluator, Frame};
use crate::equations::mode::Mode;
use crate::scenario::Method;
use std::sync::atomic::AtomicBool;

/// Where a step was cut by a guard.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cut {
    /// The guard that tripped first.
    pub guard: Guard,
    /// Share of the step, as located on the interpolant.
    pub share: f64,
}

/// The watch of one segment.
pub struct Watcher<'w, 'a> {
    /// Records everything.
    pub observer: &'w mut Observer<'a>,
    /// The mode in force.
    pub mode: &'w Mode,
    /// Protections.
    pub conditions: &'w Conditions,
    /// Guards in force.
    pub guards: Vec<Guard>,
    /// Method.
    pub method: Method,
    /// Tolerance on the scaled state.
    pub tolerance: f64,
    /// Time reached, s.
    pub time: f64,
    /// State reached.
    pub state: Vec<f64>,
    /// Rate there.
    pub rate: Vec<f64>,
    /// The last two accepted step lengths, s.
    pub last_steps: [f64; 2],
    /// Accepted steps.
    pub steps: u64,
    /// Set when a guard cut a step; the step is not taken.
    pub cut: Option<Cut>,
    /// Set when a magnet runs away; the step is not taken.
    pub runaway: Option<String>,
    /// Set when the outside asked to end.
    pub interrupted: bool,
    pub(super) interrupt: Option<&'w AtomicBool>,
    pub(super) progress: Option<&'w mut dyn FnMut(f64)>,
    pub(super) window_steps: u32,
    /// Record of the evaluation at the time reached.
    pub(super) record: Vec<f64>,
    pub(super) tableau: Tableau,
    pub(super) state_weights: Vec<f64>,
    pub(super) step: DenseStep,
    pub(super) inner_sums: Vec<f64>,
    pub(super) stages: Vec<Vec<f64>>,
    pub(super) new_record: Vec<f64>,
    pub(super) step_energy: Powers,
    pub(super) step_heats: Vec<f64>,
    pub(super) calm: Calm,
    pub(super) scratch: Sample,
    pub(super) rest: Rest,
    pub(super) brief: Brief,
}

impl<'w, 'a> Watcher<'w, 'a> {
    /// A watch that starts at a time and state.
    #[expect(
        clippy::too_many_arguments,
        reason = "the pieces of one segment, each borrowed from the run"
    )]
    pub fn new(
        observer: &'w mut Observer<'a>,
        rhs: &Rhs<'_>,
        mode: &'w Mode,
        conditions: &'w Conditions,
        method: Method,
        tolerance: f64,
        time: f64,
        state: &[f64],
        interrupt: Option<&'w AtomicBool>,
        progress: Option<&'w mut dyn FnMut(f64)>,
    ) -> Self {
        let mut rate = vec![0.0; state.len()];
        rhs.system(time, state, &mut rate);
        let record = rhs.ring().record(0).to_vec();
        let heats = observer.heats.len();
        let tableau = tableau::of(method);
        let guards = guards::list(&rhs.evaluator, mode, conditions, state);
        let mut calm = Calm::new(&rhs.evaluator, observer.tracer.is_some(), tolerance);
        if observer.turning.is_some() {
            calm.switch_off();
        }
        Self {
            calm,
            observer,
            mode,
            conditions,
            guards,
            method,
            tolerance,
            time,
            state: state.to_vec(),
            rate,
            last_steps: [0.0; 2],
            steps: 0,
            cut: None,
            runaway: None,
            interrupted: false,
            interrupt,
            progress,
            window_steps: 0,
            new_record: record.clone(),
            record,
            step_heats: vec![0.0; heats],
            state_weights: tableau.state_weights(),
            tableau,
            step: DenseStep::default(),
            inner_sums: Vec::new(),
            stages: Vec::new(),
            step_energy: Powers::default(),
            scratch: Sample::default(),
            rest: Rest::default(),
            brief: Brief::default(),
        }
    }

    /// Begins another window of the same segment.
    pub fn next_window(&mut self, rhs: &Rhs<'_>) {
        self.window_steps = 0;
        let guards = guards::list(&rhs.evaluator, self.mode, self.conditions, &self.state);
        if guards != self.guards {
            self.guards = guards;
            self.calm.forget();
        }
    }

    fn inner(&self) -> usize {
        match self.method {
            Method::Dopri5 => 4,
            Method::Dop853 => 9,
            Method::Rk4 => 2,
        }
    }

    /// Reads the stages of the step that the last calls made, and sums the audit by the method's weights.
    fn load(&mut self, rhs: &Rhs<'_>, time: f64, state: &[f64], rates: &[f64]) {
        let length = time - self.time;
        let count = self.tableau.stages();
        let ring = rhs.ring();
        self.stages.resize(count, Vec::new());
        self.stages[0].clone_from(&self.rate);
        self.step_heats.fill(0.0);
        self.step_energy =
            rhs.audit.step(length, self.tableau.b, &self.record, &ring, &mut self.step_heats);
        for stage in 1..count {
            let back = count - stage;
            self.stages[stage].clear();
            self.stages[stage].extend_from_slice(&ring.rates(back)[..state.len()]);
        }
        self.new_record.copy_from_slice(ring.record(0));
        drop(ring);
        let speeds = self.observer.counters.angles.len();
        let step = &mut self.step;
        step.start = self.time;
        step.length = length;
        step.first.clone_from(&self.state);
        step.first_rate.clone_from(&self.rate);
        step.last.clear();
        step.last.extend_from_slice(state);
        step.last_rate.clear();
        step.last_rate.extend_from_slice(rates);
        step.first_sum.clear();
        let scale = &self.observer.speed_scale;
        step.first_sum.extend(
            self.observer.counters.angles.iter().zip(scale).map(|(sum, scale)| sum / scale),
        );
        step.last_sum.clone_from(&step.first_sum);
        add_sums(
            self.method,
            length,
            &step.first[..speeds],
            &self.stages,
            &self.state_weights,
            &mut step.last_sum,
        );
    }

    pub(super) fn prepare(&mut self, rhs: &Rhs<'_>) {
        self.step.prepare(self.method, &self.stages, &mut |time, state, rates| {
            rhs.system(time, state, rates);
        });
    }

    /// Moves on to the end of the loaded step.
    fn advance(&mut self) {
        self.observer.energy.add(&self.step_energy);
        for (sum, heat) in self.observer.heats.iter_mut().zip(&self.step_heats) {
            *sum += heat;
        }
        std::mem::swap(&mut self.record, &mut self.new_record);
        self.time = self.step.start + self.step.length;
        std::mem::swap(&mut self.state, &mut self.step.last);
        std::mem::swap(&mut self.rate, &mut self.step.last_rate);
        self.last_steps = [self.last_steps[1], self.step.length];
        self.steps += 1;
    }

    /// The earliest guard that trips within the prepared step.
    fn first_trip(&mut self, evaluator: Evaluator<'_>) -> Option<Cut> {
        if self.guards.is_empty() {
            return None;
        }
        let shares = self.observer.shares(&self.step, self.inner());
        let view = StepView {
            step: &self.step,
            evaluator,
            counters: &self.observer.counters,
            crossings: Vec::new(),
            scale: &self.observer.speed_scale,
        };
        let wanted = &self.conditions.channels;
        let mut scratch = std::mem::take(&mut self.scratch);
        let mut values: Vec<f64> = Vec::with_capacity(shares.len() * self.guards.len());
        for &share in &shares {
            view.sample(share, Some(wanted), &mut scratch);
            let Sample { state, frame, .. } = &scratch;
            values.extend(self.guards.iter().map(|guard| {
                guards::value(*guard, &evaluator, self.mode, self.conditions, state, frame)
            }));
        }
        let mut first: Option<Cut> = None;
        for (index, guard) in self.guards.iter().enumerate() {
            let at = |share: f64, scratch: &mut Sample| {
                view.sample(share, Some(wanted), scratch);
                guards::value(
                    *guard,
                    &evaluator,
                    self.mode,
                    self.conditions,
                    &scratch.state,
                    &scratch.frame,
                )
            };
            let of_guard = |place: usize| values[place * self.guards.len() + index];
            let Some((low, high)) = bracket(&shares, of_guard, |share| at(share, &mut scratch))
            else {
                continue;
            };
            if first.is_some_and(|cut| cut.share <= low) {
                continue;
            }
            let share = locate::root(low, high, |share| at(share, &mut scratch) + TRIP, 1e-15);
            if first.is_none_or(|cut| share < cut.share) {
                first = Some(Cut { guard: *guard, share });
            }
        }
        self.scratch = scratch;
        first
    }

    /// Takes the cut step up to the guard: integrated again from its start, never interpolated.
    pub fn take_cut(&mut self, rhs: &Rhs<'_>, cut: Cut) {
        let (start, first, full) = (self.time, self.state.clone(), self.step.length);
        let mut length = cut.share * full;
        let smallest = 1e-14 * start.abs().max(1.0);
        if length <= smallest {
            // A slip changes no equation: short of the crossing the guard would trip again for ever.
            if !matches!(cut.guard, guards::Guard::Slip(..)) {
                return;
            }
            length = 2.0 * smallest;
        }
        let mut stages = vec![self.rate.clone()];
        for _ in 0..4 {
            let mut rates =
                |time: f64, state: &[f64], rates: &mut [f64]| rhs.system(time, state, rates);
            let end = self.tableau.step(&mut rates, start, length, &first, &mut stages);
            let mut rate = vec![0.0; end.len()];
            rhs.system(start + length, &end, &mut rate);
            self.load(rhs, start + length, &end, &rate);
            self.prepare(rhs);
            let mut frame = Frame::default();
            let counters = self.observer.counters.clone();
            let mut value = |share: f64| {
                let mut state = Vec::new();
                self.step.state(share, &mut state);
                let time = self.step.time(share);
                rhs.evaluator.evaluate(
                    time,
                    &state,
                    &counters,
                    Some(&self.conditions.channels),
                    &mut frame,
                );
                guards::value(cut.guard, &rhs.evaluator, self.mode, self.conditions, &state, &frame)
            };
            let (here, before) = (value(1.0), value(1.0 - 1e-3));
            let slope = (here - before) / (1e-3 * length);
            // Beyond the guard by more than rounding of the time can take back.
            let beyond = 2.0 * TRIP - 2.0 * smallest * slope.min(0.0);
            if (-1e-9 - 2.0 * beyond..=-0.5 * TRIP).contains(&here) || slope >= 0.0 {
                break;
            }
            let change = (-(here + beyond) / slope).clamp(-0.1 * length, 0.1 * length);
            if change.abs() <= 0.5 * smallest {
                break;
            }
            length += change;
        }
        self.observer.step(rhs.evaluator, &self.step, self.inner());
        self.advance();
    }
}

impl Watch for Watcher<'_, '_> {
    fn accept(&mut self, rhs: &Rhs<'_>, time: f64, state: &[f64], rates: &[f64]) -> bool {
        let row_due = self.observer.next_row_time() < time;
        self.window_steps += 1;
        let full = self.window_steps >= WINDOW;
        let quiet = self.calm.look(time - self.time, &self.state, &self.rate, state, rates);
        if quiet == Quiet::Rest && !row_due {
            self.load_rest(rhs, time, state, rates);
            return self.look_around() || full;
        }
        self.sum_rest(rhs);
        if quiet != Quiet::No && !row_due {
            self.load_calm(rhs, time, state, rates);
            return self.look_around() || full;
        }
        if self.runs_away(rhs, time, state, rates) {
            return true;
        }
        self.load(rhs, time, state, rates);
        if quiet != Quiet::No {
            self.prepare(rhs);
            self.observer.rows_only(rhs.evaluator, &self.step);
            if let Some(tracer) = &mut self.observer.tracer {
                self.calm.trace(tracer, self.time, time);
            }
            self.advance();
            return self.look_around() || full;
        }
        if !self.is_brief(rhs, row_due) {
            if let Some(cut) = self.first_trip(rhs.evaluator) {
                self.cut = Some(cut);
                return true;
            }
            self.observer.step(rhs.evaluator, &self.step, self.inner());
        }
        self.advance();
        self.calm.settle(
            &rhs.evaluator,
            self.observer,
            self.mode,
            self.conditions,
            &self.guards,
            self.time,
            &self.state,
            &self.rate,
            self.step.length,
        );
        self.look_around() || full
    }
}
