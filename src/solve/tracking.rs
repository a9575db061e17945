//! A speed controller that slides along its limit.
//!
//! At the limit the integral is held while the error pushes further. When the error falls more
//! slowly than the integral would grow, neither holding it nor letting it run is right: held, the
//! command drops below the limit at once; let run, it rises above it at once. Between the two lies
//! the motion of Filippov (*Differential Equations with Discontinuous Righthand Sides*, 1988):
//! the command stays at the limit, `I = limit - gain*e - feed_forward`, where the limit may move
//! with the speed. The integral itself changes nothing meanwhile, so it is only set when the
//! sliding ends.

use super::guards::{self, Guard};
use super::run::Run;
use crate::equations::assembly::assemble;
use crate::equations::frame::{Evaluator, Frame};
use crate::equations::mode::Mode;
use crate::equations::{Controller, Target};

/// +1 at the upper limit, -1 at the lower one, 0 between.
fn side(mode: &Mode, controller: &Controller) -> f64 {
    match mode.pieces[controller.command] {
        0 => -1.0,
        2 => 1.0,
        _ => 0.0,
    }
}

/// How fast the command is pushed outwards with the integral running, and inwards with it held,
/// as shares of its rate by a whole error; sliding needs both above zero.
fn pushes(
    evaluator: &Evaluator<'_>,
    mode: &Mode,
    index: usize,
    state: &[f64],
    frame: &Frame,
) -> Option<[f64; 2]> {
    let (equations, assembly) = (evaluator.equations, evaluator.assembly);
    let controller = &equations.controllers[index];
    let integral = controller.integral?;
    let term = &equations.terms[integral];
    let Target::State(_, growth) = term.target else { return None };
    let error = guards::controller_error(evaluator, integral, state, frame);
    let drift =
        |slot| equations.bank.slope_in(slot, frame.time, assembly.start, evaluator.overrides);
    let reference = controller.reference.map_or(0.0, drift);
    let speed: f64 = term
        .input
        .iter()
        .map(|&(row, share)| {
            let linear: f64 =
                state.iter().enumerate().map(|(k, value)| assembly.full[(row, k)] * value).sum();
            let laws: f64 = assembly
                .active
                .iter()
                .flat_map(|active| {
                    let of_row = active.column.iter().filter(move |entry| entry.0 == row);
                    of_row.map(|entry| entry.1 * frame.laws[active.place])
                })
                .sum();
            share * (linear + laws)
        })
        .sum();
    let side = side(mode, controller);
    // `speed` is that of the error: the body's with the other sign.
    let edge = controller.edge_slope(equations, usize::from(side > 0.0), state) * -speed;
    let own = controller.gain * (reference + speed) + drift(controller.feed_forward);
    let held = side * (own - edge);
    let size = growth * term.input_size;
    Some([(held + side * growth * error) / size, -held / size])
}

/// The guard of a sliding controller: below zero when the sliding ends.
pub(super) fn guard(
    evaluator: &Evaluator<'_>,
    mode: &Mode,
    index: usize,
    state: &[f64],
    frame: &Frame,
) -> f64 {
    pushes(evaluator, mode, index, state, frame).map_or(1.0, |[out, back]| out.min(back))
}

impl Run<'_, '_> {
    /// The pushes at the present instant in the present mode.
    fn pushes_now(&self, index: usize, end: f64) -> Option<[f64; 2]> {
        let assembly = assemble(self.equations, &self.mode, self.time, end, &self.overrides);
        let evaluator = Evaluator {
            equations: self.equations,
            assembly: &assembly,
            overrides: &self.overrides,
        };
        let mut frame = Frame::default();
        evaluator.laws(self.time, &self.state, &mut frame);
        pushes(&evaluator, &self.mode, index, &self.state, &frame)
    }

    /// Lets a controller at its limit slide along it where that is its motion; true when it does.
    pub(super) fn slides_at_limit(&mut self, term: usize, end: f64) -> bool {
        let equations = self.equations;
        let found = equations.controllers.iter().position(|one| one.command == term);
        let Some(index) = found else { return false };
        let controller = &equations.controllers[index];
        let off = |slot| equations.bank.value(slot, self.time, &self.overrides) == 0.0;
        if side(&self.mode, controller) == 0.0
            || !self.mode.held[index]
            || controller.scale.is_some_and(off)
        {
            return false;
        }
        let slides = self
            .pushes_now(index, end)
            .is_some_and(|[out, back]| out > guards::TRIP && back > guards::TRIP);
        self.mode.tracking[index] = slides;
        slides
    }

    /// Ends the sliding of all controllers: each integral is set to where the command stands at its limit.
    pub(super) fn end_sliding(&mut self) {
        let equations = self.equations;
        for (index, controller) in equations.controllers.iter().enumerate() {
            if !std::mem::take(&mut self.mode.tracking[index]) {
                continue;
            }
            let Some(place) = controller.integral_state else { continue };
            let command = crate::equations::mode::input(
                equations,
                &equations.terms[controller.command],
                self.time,
                &self.state,
                &self.overrides,
            );
            let upper = side(&self.mode, controller) > 0.0;
            let limit = controller.edge(equations, usize::from(upper), &self.state);
            self.state[place] += (limit - command) / equations.scale[place];
        }
    }

    /// After the sliding of a controller has ended by itself: free when even the running integral
    /// does not keep the command up, held when the error pushes outwards again.
    pub(super) fn leave_limit(&mut self, index: usize, end: f64) {
        self.end_sliding();
        let command = self.equations.controllers[index].command;
        if self.pushes_now(index, end).is_some_and(|[out, back]| out < back) {
            self.mode.pieces[command] = 1;
            self.mode.held[index] = false;
        }
    }
}

/// True for a guard that a sliding controller does without.
pub(super) fn is_watched(mode: &Mode, controllers: &[Controller], guard: Guard) -> bool {
    let sliding = |index: usize| mode.tracking.get(index) == Some(&true);
    match guard {
        Guard::Lower(term) | Guard::Upper(term) => !controllers
            .iter()
            .enumerate()
            .any(|(index, one)| one.command == term && sliding(index)),
        Guard::Windup(index) => !sliding(index),
        _ => true,
    }
}
