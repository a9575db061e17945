//! The right-hand side as the library calls it, with what the observer needs of each call.

use super::audit::Audit;
use super::flat::Flat;
use crate::equations::assembly::Matrix;
use crate::equations::dot;
use crate::equations::frame::Evaluator;
use std::cell::RefCell;

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
}

impl<'a> Rhs<'a> {
    /// The right-hand side of an evaluator's assembly.
    pub fn new(evaluator: Evaluator<'a>) -> Self {
        let flat = Flat::new(&evaluator);
        let audit = Audit::new(&evaluator, flat.width);
        let ring = RefCell::new(Ring::new(flat.width, evaluator.assembly.active.len()));
        Self { evaluator, audit, flat, ring }
    }

    /// The last calls.
    pub fn ring(&self) -> std::cell::Ref<'_, Ring> {
        self.ring.borrow()
    }

    /// The state whose rate is no number at the time and state reached, or was the first such
    /// among the last calls.
    ///
    /// Asked when the steps have become too small, so that the right-hand side need not look at
    /// what it returns: a rate that is no number makes the library shrink its step to nothing, and
    /// the calls of the last attempt are still there.
    pub fn fault(&self, time: f64, state: &[f64]) -> Option<usize> {
        let ring = self.ring();
        let mut reached = vec![0.0; ring.length];
        self.fill(time, state, &mut reached);
        let kept = usize::try_from(ring.calls).map_or(RING, |calls| calls.min(RING));
        let records = std::iter::once(reached.as_slice())
            .chain((0..kept).rev().map(|back| ring.record(back)));
        let lost = |values: &[f64]| values.iter().position(|value| !value.is_finite());
        let parts = |record: &'_ [f64]| {
            let (state, rest) = record.split_at(ring.width);
            let (rates, values) = rest.split_at(ring.width);
            (lost(state), lost(rates), lost(values))
        };
        let (_, rate, law) = records.map(parts).find(|(state, rate, _)| {
            // A state that is none comes of an earlier rate.
            state.is_none() && rate.is_some()
        })?;
        // A value that is no number spoils every rate of the dense matrix: its own comes first.
        let own = law.and_then(|law| self.evaluator.assembly.active.get(law)?.column.first());
        own.map(|(row, _)| *row).or(rate)
    }

    /// The values of the laws in a record.
    pub fn law_values<'r>(&self, record: &'r [f64]) -> &'r [f64] {
        &record[2 * self.flat.width..]
    }

    /// Fills a record as a call would, without remembering it.
    pub fn fill(&self, time: f64, state: &[f64], record: &mut [f64]) {
        let width = self.flat.width;
        let (kept_state, rest) = record.split_at_mut(width);
        let (rates, values) = rest.split_at_mut(width);
        kept_state[..state.len()].copy_from_slice(state);
        self.evaluate(time, kept_state, rates, values);
    }

    /// Values of the laws and rates of the state.
    #[inline(always)]
    fn evaluate(&self, time: f64, state: &[f64], rates: &mut [f64], values: &mut [f64]) {
        let assembly = self.evaluator.assembly;
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
    }

    /// Rates of the scaled state; the call is remembered. Both may be padded with zeros.
    #[inline(always)]
    pub fn system(&self, time: f64, state: &[f64], rates: &mut [f64]) {
        let ring = &mut *self.ring.borrow_mut();
        let record = &mut ring.records[ring.next * ring.length..(ring.next + 1) * ring.length];
        let (kept_state, rest) = record.split_at_mut(ring.width);
        let (kept_rates, values) = rest.split_at_mut(ring.width);
        self.evaluate(time, state, rates, values);
        if kept_rates.len() == rates.len() && state.len() == rates.len() {
            kept_state.copy_from_slice(state);
            kept_rates.copy_from_slice(rates);
        } else {
            kept_state.iter_mut().zip(state).for_each(|(kept, value)| *kept = *value);
            kept_rates.iter_mut().zip(&*rates).for_each(|(kept, rate)| *kept = *rate);
        }
        ring.next = (ring.next + 1) % RING;
        ring.calls += 1;
    }
}
