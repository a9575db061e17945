//! The run: cut into segments at kinks of signals and at events that change the equations.

use super::conditions::Conditions;
use super::guards::{self, Guard, TRIP};
use super::integrate::{self, Stop, Window};
use super::limits::{Breach, Limits};
use super::observer::Observer;
use super::rhs::Rhs;
use super::steady::{self, SteadyError};
use super::watcher::Watcher;
use super::{RunOptions, outcome, rest};
use crate::equations::assembly::{Assembly, assemble};
use crate::equations::frame::{Evaluator, Frame};
use crate::equations::mode::{FrictionMode, Mode};
use crate::equations::{Equations, energy};
use crate::results::{RunResult, SolverWork};
use crate::scenario::{Method, Start};
use crate::signal::course::Overrides;
use std::collections::BTreeMap;
use std::sync::atomic::Ordering;

/// Changes of the equations at one instant before the run is given up.
const CHATTER_LIMIT: u32 = 40;

/// Where a run stands.
pub struct Run<'e, 'a> {
    /// The equations.
    pub equations: &'e Equations,
    /// Time reached, s.
    pub time: f64,
    /// State reached.
    pub state: Vec<f64>,
    /// Mode in force.
    pub mode: Mode,
    /// Signals taken over by protections.
    pub overrides: Overrides,
    /// Protections.
    pub conditions: Conditions,
    /// The recorder.
    pub observer: Observer<'a>,
    /// Work so far.
    pub work: SolverWork,
    /// Why the run ended early, if it did.
    pub failure: Option<String>,
    /// Warnings of the run.
    pub warnings: Vec<(String, String)>,
    pub(super) last_steps: [f64; 2],
    pub(super) caps: BTreeMap<Mode, f64>,
    pub(super) changed: bool,
    pub(super) judge_rest: bool,
    /// The guards that have tripped at the present instant.
    pub(super) tripped: Vec<Guard>,
    limits: Limits,
    pub(super) breach: Option<Breach>,
}

/// Why no run took place.
#[derive(Clone, Debug, PartialEq)]
pub enum RunError {
    /// There is no steady start.
    Steady(SteadyError),
}

/// Runs a train from its start to the end of its duration.
///
/// # Errors
/// [`RunError::Steady`] when a steady start is asked for and there is none. Trouble of the
/// numerics is no error here: the result then says `completed: false` and why.
pub fn run(equations: &Equations, options: RunOptions<'_>) -> Result<RunResult, RunError> {
    run_to_end(equations, options).map(|(result, _)| result)
}

/// Where a run stands at its end: what linearisation needs.
#[derive(Clone, Debug)]
pub struct Reached {
    /// s.
    pub time: f64,
    /// Scaled state.
    pub state: Vec<f64>,
    /// Mode in force from there on.
    pub mode: Mode,
    /// Signals taken over by protections.
    pub overrides: Overrides,
}

/// Runs a train as [`run`] does and also returns where it stands at the end.
///
/// # Errors
/// As [`run`].
pub fn run_to_end(
    equations: &Equations,
    mut options: RunOptions<'_>,
) -> Result<(RunResult, Reached), RunError> {
    let overrides = equations.bank.no_overrides();
    let (state, mode) = match equations.model.scenario.start {
        Start::AsGiven => {
            let state = equations.start_state();
            let mode = Mode::of_state(equations, 0.0, &state, &overrides);
            (state, mode)
        }
        Start::Steady => {
            let point = steady::find(equations, 0.0, &overrides).map_err(RunError::Steady)?;
            (point.state, point.mode)
        }
    };
    let conditions = Conditions::new(equations);
    let mut observer = Observer::new(equations, &mut options, &state);
    observer.wanted.extend(&conditions.channels);
    observer.wanted.sort_unstable();
    observer.wanted.dedup();
    let stored = energy::stored(equations, &mode.contacts, &state);
    let mut run = Run {
        equations,
        time: 0.0,
        state,
        mode,
        overrides,
        conditions,
        observer,
        work: SolverWork {
            method: method_name(equations.model.scenario.solver.method),
            ..SolverWork::default()
        },
        failure: None,
        warnings: equations.warnings.clone(),
        last_steps: [0.0; 2],
        caps: BTreeMap::new(),
        changed: true,
        judge_rest: true,
        tripped: Vec::new(),
        limits: Limits::new(equations),
        breach: None,
    };
    run.go(&mut options);
    if let Some(turning) = &mut run.observer.turning {
        turning.finish();
    }
    let reached = Reached {
        time: run.time,
        state: run.state.clone(),
        mode: run.mode.clone(),
        overrides: run.overrides.clone(),
    };
    Ok((outcome::collect(run, stored), reached))
}

/// The name of a method as written in files.
pub fn method_name(method: Method) -> &'static str {
    match method {
        Method::Dopri5 => "dopri5",
        Method::Dop853 => "dop853",
        Method::Rk4 => "rk4",
    }
}

impl Run<'_, '_> {
    fn go(&mut self, options: &mut RunOptions<'_>) {
        let duration = self.equations.model.scenario.duration;
        let equations = self.equations;
        let mut at_instant = 0;
        let mut instant = -1.0;
        let mut first = true;
        let mut finished = false;
        let mut burst = (0_u32, self.time);
        while !finished {
            if (self.time - instant).abs() <= 1e-12 * self.time.abs().max(1.0) {
                at_instant += 1;
                if at_instant > CHATTER_LIMIT {
                    self.give_up_chatter();
                    return;
                }
            } else {
                instant = self.time;
                at_instant = 0;
                self.tripped.clear();
            }
            if self.goes_nowhere(&mut burst, duration) {
                self.give_up_chatter();
                return;
            }
            // Short segments never come to the watch's own look around.
            if options.interrupt.is_some_and(|flag| flag.load(Ordering::Relaxed)) {
                self.failure = Some(format!("interrupted at {} s", self.time));
                return;
            }
            let end = self.next_stop(duration);
            self.wrap_phases();
            rest::presence(equations, &mut self.mode, self.time, end, &self.state, &self.overrides);
            // An event has already judged its elements: judging them again could stick what has just let go.
            if std::mem::take(&mut self.judge_rest) {
                let events = if first { None } else { Some(&mut self.observer.events) };
                rest::resolve(
                    equations,
                    &mut self.mode,
                    self.time,
                    end,
                    &mut self.state,
                    &self.overrides,
                    false,
                    events,
                );
            }
            let assembly = assemble(equations, &self.mode, self.time, end, &self.overrides);
            let acted = {
                let evaluator =
                    Evaluator { equations, assembly: &assembly, overrides: &self.overrides };
                let mut frame = Frame::default();
                let wanted = self.conditions.channels.clone();
                evaluator.evaluate(
                    self.time,
                    &self.state,
                    &self.observer.counters,
                    Some(&wanted),
                    &mut frame,
                );
                let mut overrides = self.overrides.clone();
                let acted = self.conditions.update(
                    self.time,
                    &frame,
                    equations,
                    &mut overrides,
                    &mut self.observer.events,
                );
                self.overrides = overrides;
                acted
            };
            if acted.signals || acted.end_run {
                self.work.events += 1;
            }
            if acted.end_run || self.time >= duration {
                let evaluator =
                    Evaluator { equations, assembly: &assembly, overrides: &self.overrides };
                // A segment has already taken its end from the left: `final` is that value.
                if self.work.steps == 0 {
                    self.observer.end(&evaluator, self.time, &self.state);
                }
                self.observer.finish(&evaluator, self.time, &self.state);
                self.observer.final_row(&evaluator, self.time, &self.state);
                return;
            }
            if acted.signals {
                self.changed = true;
                self.judge_rest = true;
                self.breach = self.limits.breach(equations, self.time, duration, &self.overrides);
                continue;
            }
            if let Some(breach) = self.breach.as_ref().filter(|breach| breach.time <= self.time) {
                self.failure = Some(breach.text.clone());
                return;
            }
            // A protection that has begun to wait may be due before the next kink.
            let end = end.min(self.next_stop(duration));
            if let Some(guard) = self.tripped_at_start(&assembly) {
                self.apply(guard, end);
                continue;
            }
            if first {
                self.warn_of_jolt(&assembly);
                first = false;
            }
            finished = self.segment(&assembly, end, options);
        }
    }

    pub(super) fn any_at_rest(&self) -> bool {
        self.mode.frictions.contains(&FrictionMode::Stuck)
    }

    fn tripped_at_start(&self, assembly: &Assembly) -> Option<Guard> {
        let evaluator =
            Evaluator { equations: self.equations, assembly, overrides: &self.overrides };
        let list = guards::list(&evaluator, &self.mode, &self.conditions, &self.state);
        if list.is_empty() {
            return None;
        }
        let mut frame = Frame::default();
        let wanted = self.conditions.channels.clone();
        evaluator.evaluate(
            self.time,
            &self.state,
            &self.observer.counters,
            Some(&wanted),
            &mut frame,
        );
        list.into_iter().find(|guard| {
            let value = guards::value(
                *guard,
                &evaluator,
                &self.mode,
                &self.conditions,
                &self.state,
                &frame,
            );
            value < -1.5 * TRIP
                && !matches!(guard, Guard::Condition(_) | Guard::ConditionLost(_) | Guard::Slip(..))
        })
    }

    /// Integrates one segment; true when the run is over.
    fn segment(&mut self, assembly: &Assembly, end: f64, options: &mut RunOptions<'_>) -> bool {
        let equations = self.equations;
        let solver = equations.model.scenario.solver;
        let overrides = self.overrides.clone();
        let evaluator = Evaluator { equations, assembly, overrides: &overrides };
        self.observer.begin(&evaluator, self.time, &self.state);
        if end - self.time <= 1e-13 * self.time.abs().max(1.0) {
            self.time = end;
            return false;
        }
        let tolerance = options.tolerance.unwrap_or(solver.tolerance);
        let cap = self.step_cap(&evaluator, end);
        let rhs = Rhs::new(evaluator);
        let mut watcher = Watcher::new(
            &mut self.observer,
            &rhs,
            &self.mode,
            &self.conditions,
            solver.method,
            tolerance,
            self.time,
            &self.state,
            options.interrupt,
            options.progress.as_mut().map(|progress| &mut **progress as &mut dyn FnMut(f64)),
        );
        let largest = self.last_steps[0].max(self.last_steps[1]);
        let mut first_step = if self.changed { 0.0 } else { largest };
        let mut failure = None;
        loop {
            let window = Window {
                method: solver.method,
                start: watcher.time,
                end,
                first_step,
                step_cap: cap,
                tolerance: if solver.method == Method::Rk4 {
                    solver.step.unwrap_or(1e-3)
                } else {
                    tolerance
                },
            };
            let state = watcher.state.clone();
            let stop = integrate::run(&window, &rhs, &state, &mut watcher);
            watcher.sum_rest(&rhs);
            if let Stop::StepTooSmall(time) = stop {
                let fault = rhs.fault(watcher.time, &watcher.state);
                failure = Some((time, fault.map(|state| (time, state))));
                break;
            }
            if let Some(cut) = watcher.cut {
                watcher.take_cut(&rhs, cut);
                break;
            }
            if watcher.runaway.is_some()
                || watcher.interrupted
                || end - watcher.time <= 1e-13 * end.abs().max(1.0)
            {
                break;
            }
            first_step = watcher.last_steps[0].max(watcher.last_steps[1]);
            watcher.next_window(&rhs);
        }
        let (time, state, last_steps) = (watcher.time, watcher.state.clone(), watcher.last_steps);
        let (steps, cut, interrupted) = (watcher.steps, watcher.cut, watcher.interrupted);
        let runaway = watcher.runaway.take();
        self.work.steps += steps;
        self.work.evaluations += rhs.ring().calls;
        self.state = state;
        let whole = cut.is_none() && failure.is_none() && runaway.is_none() && !interrupted;
        self.time = if whole { end } else { time };
        if last_steps[1] > 0.0 {
            self.last_steps = last_steps;
        }
        self.changed = false;
        self.end_sliding();
        self.observer.end(&evaluator, self.time, &self.state);
        if let Some((time, fault)) = failure {
            self.give_up(time, fault);
            return true;
        }
        if let Some(runaway) = runaway {
            self.failure = Some(format!("at {} s {runaway}", self.time));
            return true;
        }
        if interrupted {
            self.failure = Some(format!("interrupted at {} s", self.time));
            return true;
        }
        match cut {
            Some(cut) => self.apply(cut.guard, end),
            None => self.judge_rest = true,
        }
        false
    }
}
