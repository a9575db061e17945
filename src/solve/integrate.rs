//! One window of steps by the library, or by the fixed-step method, under a watch.

use super::rhs::Rhs;
use super::tableau;
use crate::scenario::Method;
use nalgebra::allocator::Allocator;
use nalgebra::{Const, DVector, DefaultAllocator, Dim, OVector};
use ode_solvers::dop_shared::{IntegrationError, OutputType, System};
use ode_solvers::{Dop853, Dopri5};
use std::cell::Cell;

/// Steps of one call of the library: it keeps every step's state, so this bounds the memory.
pub const WINDOW: u32 = 1000;

/// The step controller's damping. In steady running the step sits at the stability limit, and the
/// usual 0.04 lets it bounce: twelve percent of the steps are then rejected, with 0.08 hardly any.
const CONTROLLER_BETA: f64 = 0.08;

/// Sees every accepted step.
pub trait Watch {
    /// Time, state and rate at the end of the step; true stops the window.
    fn accept(&mut self, rhs: &Rhs<'_>, time: f64, state: &[f64], rates: &[f64]) -> bool;
}

/// What to integrate.
#[derive(Clone, Copy, Debug)]
pub struct Window {
    /// Method.
    pub method: Method,
    /// Start, s.
    pub start: f64,
    /// End, s.
    pub end: f64,
    /// First step, s; 0 lets the library choose.
    pub first_step: f64,
    /// Largest step, s.
    pub step_cap: f64,
    /// Tolerance on the scaled state, or the fixed step of `rk4`.
    pub tolerance: f64,
}

/// Why a window ended.
#[derive(Clone, Debug, PartialEq)]
pub enum Stop {
    /// At its end, or because the watch asked for it, or after [`WINDOW`] steps.
    Fine,
    /// The step became too small to go on at this time.
    StepTooSmall(f64),
}

/// The library's view of the equations; its vectors may be longer than the state, with zeros behind.
struct Bridge<'a, 'b> {
    rhs: &'a Rhs<'b>,
    watch: &'a mut dyn Watch,
    clock: Option<Clock>,
    size: usize,
}

/// Mends the time of the twelfth stage of `dop853`.
///
/// The library has 0 for the node of that stage where the method has 1: it hands over the time
/// of the step's start. Laws that follow time were wrong by the first order of the step. Stages
/// are told by counting: eleven calls an attempt, one more at acceptance.
struct Clock {
    calls: Cell<i64>,
    eleventh: Cell<f64>,
}

impl Clock {
    /// Calls that the library makes before its first attempt: the rate at the start, and two
    /// more where it chooses the first step itself.
    fn new(first_step: f64) -> Self {
        let before = if first_step == 0.0 { 3 } else { 1 };
        Self { calls: Cell::new(-before), eleventh: Cell::new(0.0) }
    }

    fn accepted(&self) {
        self.calls.set(0);
    }

    fn mend(&self, time: f64) -> f64 {
        let call = self.calls.get();
        self.calls.set(call + 1);
        match call.rem_euclid(11) {
            9 if call >= 0 => self.eleventh.set(time),
            10 if call >= 0 => {
                return time + (self.eleventh.get() - time) / tableau::dop853::C[10];
            }
            _ => {}
        }
        time
    }
}

impl<D: Dim> System<f64, OVector<f64, D>> for Bridge<'_, '_>
where
    DefaultAllocator: Allocator<D>,
{
    #[inline(always)]
    fn system(&self, time: f64, state: &OVector<f64, D>, rates: &mut OVector<f64, D>) {
        let time = self.clock.as_ref().map_or(time, |clock| clock.mend(time));
        self.rhs.system(time, state.as_slice(), rates.as_mut_slice());
    }

    #[inline(never)]
    fn solout(&mut self, time: f64, state: &OVector<f64, D>, rates: &OVector<f64, D>) -> bool {
        if let Some(clock) = &self.clock {
            clock.accepted();
        }
        let size = self.size;
        self.watch.accept(self.rhs, time, &state.as_slice()[..size], &rates.as_slice()[..size])
    }
}

/// Integrates one window.
pub fn run(window: &Window, rhs: &Rhs<'_>, state: &[f64], watch: &mut dyn Watch) -> Stop {
    if window.method == Method::Rk4 {
        return fixed(window, rhs, state, watch);
    }
    // A state of a length known at compile time costs what a hand-written loop costs; a heap vector
    // costs four to five times as much. States are padded with zeros to the next length: even ones,
    // since copies of an odd length are read back across their seams, which stalls the processor.
    macro_rules! by_length {
        ($($length:literal)*) => {
            match state.len() {
                $(size if size <= $length => {
                    let mut padded = OVector::<f64, Const<$length>>::zeros();
                    padded.as_mut_slice()[..size].copy_from_slice(state);
                    library(window, rhs, size, padded, watch)
                })*
                size => library(window, rhs, size, DVector::from_column_slice(state), watch),
            }
        };
    }
    // A build for debugging goes without: each length costs seconds of compiling.
    #[cfg(debug_assertions)]
    {
        by_length!(8 32)
    }
    #[cfg(not(debug_assertions))]
    {
        by_length!(2 4 6 8 10 12 14 16 20 24 28 32)
    }
}

fn library<D: Dim>(
    window: &Window,
    rhs: &Rhs<'_>,
    size: usize,
    state: OVector<f64, D>,
    watch: &mut dyn Watch,
) -> Stop
where
    DefaultAllocator: Allocator<D>,
{
    // The library does not cap its first step, and its stiffness test stops ordinary trains: off.
    let first = window.first_step.min(window.step_cap);
    let clock = (window.method == Method::Dop853).then(|| Clock::new(first));
    // The library's norm divides by the vector's length: the padding must not loosen the tolerance.
    let tolerance = window.tolerance * (size as f64 / state.len() as f64).sqrt();
    let bridge = Bridge { rhs, watch, clock, size };
    let outcome = match window.method {
        Method::Dop853 => Dop853::from_param(
            bridge,
            window.start,
            window.end,
            window.end - window.start,
            state,
            tolerance,
            tolerance,
            0.9,
            0.0,
            0.333,
            6.0,
            window.step_cap,
            first,
            WINDOW,
            u32::MAX,
            OutputType::Sparse,
        )
        .integrate(),
        _ => Dopri5::from_param(
            bridge,
            window.start,
            window.end,
            window.end - window.start,
            state,
            tolerance,
            tolerance,
            0.9,
            CONTROLLER_BETA,
            0.2,
            10.0,
            window.step_cap,
            first,
            WINDOW,
            u32::MAX,
            OutputType::Sparse,
        )
        .integrate(),
    };
    match outcome {
        Ok(_) | Err(IntegrationError::MaxNumStepReached { .. }) => Stop::Fine,
        Err(
            IntegrationError::StepSizeUnderflow { x } | IntegrationError::StiffnessDetected { x },
        ) => Stop::StepTooSmall(x),
    }
}

/// Classical Runge-Kutta: equal steps that end exactly at the window's end.
fn fixed(window: &Window, rhs: &Rhs<'_>, state: &[f64], watch: &mut dyn Watch) -> Stop {
    let span = window.end - window.start;
    let step = window.tolerance.min(window.step_cap);
    let count = (span / step * (1.0 - 1e-12)).ceil().max(1.0);
    let length = span / count;
    let size = state.len();
    let mut now = state.to_vec();
    let mut k = vec![vec![0.0; size]; 4];
    let mut trial = vec![0.0; size];
    let mut first = vec![0.0; size];
    rhs.system(window.start, &now, &mut first);
    for index in 0..(count as u64).min(u64::from(WINDOW)) {
        let time = window.start + index as f64 * length;
        let end = if index + 1 == count as u64 {
            window.end
        } else {
            window.start + (index + 1) as f64 * length
        };
        k[0].copy_from_slice(&first);
        for (stage, node) in [(1, 0.5), (2, 0.5), (3, 1.0)] {
            for place in 0..size {
                trial[place] = now[place] + node * length * k[stage - 1][place];
            }
            let (_, rest) = k.split_at_mut(stage);
            rhs.system(time + node * length, &trial, &mut rest[0]);
        }
        for place in 0..size {
            now[place] +=
                length / 6.0 * (k[0][place] + 2.0 * k[1][place] + 2.0 * k[2][place] + k[3][place]);
        }
        rhs.system(end, &now, &mut first);
        if first.iter().any(|rate| !rate.is_finite()) {
            return Stop::StepTooSmall(end);
        }
        if watch.accept(rhs, end, &now, &first) {
            return Stop::Fine;
        }
    }
    Stop::Fine
}
