//! The right-hand side as the library calls it, with what the observer needs of each call.

use super::audit::Audit;
use super::flat::Flat;
use crate::equations::assembly::Matrix;
use crate::equations::dot;
use crate::equations::frame::Evaluator;
use std::cell::{Cell, RefCell};

/// Calls kept: the twelve stages of the longest method and its rate at the end.
const RING: usize = 16;

/// The last calls, each a record `[state | rates | law values]`, the first two padded.
pub struct Ring {
    width: usize,
    length: usize,
    next: usize,
    records: Vec<f64>,
    /// All calls so far.
    pub calls: u64,
}

impl Ring {
    fn new(width: usize, laws: usize) -> Self {
        let length = 2 * width + laws;
        Self { width, length, next: 0, records: vec![0.0; length * RING], calls: 0 }
    }

    /// The record of the call `back` calls ago; 0 is the last one.
    #[inline]
    pub fn record(&self, back: usize) -> &[f64] {
        let place = (self.next + RING - 1 - back) % RING;
        &self.records[place * self.length..(place + 1) * self.length]
    }

    /// Rates of the call `back` calls ago, zeros behind the state's length.
    #[inline]
    pub fn rates(&self, back: usize) -> &[f64] {
        &self.record(back)[self.width..2 * self.width]
    }
}

/// The right-hand side of one assembly.
pub struct Rhs<'a> {
    /// What it evaluates.
    pub evaluator: Evaluator<'a>,
    /// Which products of a record are powers.
    pub audit: Audit,
    flat: Flat,
    ring: RefCell<Ring>,
    fault: Cell<Option<(f64, usize)>>,
}

impl<'a> Rhs<'a> {
    /// The right-hand side of an evaluator's assembly.
    pub fn new(evaluator: Evaluator<'a>) -> Self {
        let flat = Flat::new(&evaluator);
        let audit = Audit::new(&evaluator, flat.width);
        let ring = RefCell::new(Ring::new(flat.width, evaluator.assembly.active.len()));
        Self { evaluator, audit, flat, ring, fault: Cell::new(None) }
    }

    /// The last calls.
    pub fn ring(&self) -> std::cell::Ref<'_, Ring> {
        self.ring.borrow()
    }

    /// Time and state of the first rate that was not a number, if there was one.
    pub fn fault(&self) -> Option<(f64, usize)> {
        self.fault.get()
    }

    /// Rates of the scaled state; the call is remembered. Both may be padded with zeros.
    #[inline(always)]
    pub fn system(&self, time: f64, state: &[f64], rates: &mut [f64]) {
        let ring = &mut *self.ring.borrow_mut();
        let assembly = self.evaluator.assembly;
        let record = &mut ring.records[ring.next * ring.length..(ring.next + 1) * ring.length];
        let (kept_state, rest) = record.split_at_mut(ring.width);
        let (kept_rates, values) = rest.split_at_mut(ring.width);
        self.flat.values(&self.evaluator, time, state, values);
        match &assembly.matrix {
            Matrix::Dense(_) => self.flat.rates(state, values, rates),
            Matrix::Sparse { starts, entries } => {
                rates.fill(0.0);
                for (rate, span) in rates.iter_mut().zip(starts.windows(2)) {
                    *rate = dot(&entries[span[0]..span[1]], state);
                }
                for (active, value) in assembly.active.iter().zip(values.iter()) {
                    for &(row, factor) in &active.column {
                        rates[row] += factor * value;
                    }
                }
            }
        }
        if kept_rates.len() == rates.len() && state.len() == rates.len() {
            kept_state.copy_from_slice(state);
            kept_rates.copy_from_slice(rates);
        } else {
            kept_state.iter_mut().zip(state).for_each(|(kept, value)| *kept = *value);
            kept_rates.iter_mut().zip(&*rates).for_each(|(kept, rate)| *kept = *rate);
        }
        // Two sums side by side: one after the other took as long as a law.
        let mut sums = [0.0; 2];
        let pairs = rates.chunks_exact(2);
        sums[0] += pairs.remainder().iter().sum::<f64>();
        for pair in pairs {
            sums[0] += pair[0];
            sums[1] += pair[1];
        }
        if !(sums[0] + sums[1]).is_finite() && self.fault.get().is_none() {
            // A value that is no number spoils every rate of the dense matrix: its own comes first.
            let lost = assembly.active.iter().zip(&*values).find(|(_, value)| !value.is_finite());
            let own = lost.and_then(|(active, _)| active.column.first()).map(|(row, _)| *row);
            let any = rates.iter().position(|rate| !rate.is_finite()).unwrap_or(0);
            self.fault.set(Some((time, own.unwrap_or(any))));
        }
        ring.next = (ring.next + 1) % RING;
        ring.calls += 1;
    }
}
