//! What protections have set during one run.

use super::course::{SignalBank, SlotId};
use super::shape::{Line, Moment};
use std::collections::BTreeMap;

/// What protections have set during one run.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Overrides {
    slots: BTreeMap<SlotId, Vec<Override>>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Override {
    start: f64,
    end: f64,
    way: Line,
    to: f64,
}

impl Override {
    /// The live branch: on the way, or arrived.
    #[inline]
    pub(super) fn line(&self, at: Moment) -> Line {
        if at.is_past(self.end) { Line::flat(self.to) } else { self.way }
    }
}

impl Overrides {
    /// From `now` on the slot runs straight from its present value to `to` in `over`, then holds.
    pub fn set(&mut self, bank: &SignalBank, id: SlotId, now: f64, to: f64, over: f64) {
        let end = now + over;
        let way = if end > now {
            Line::new([now, bank.value(id, now, self)], [end, to])
        } else {
            Line::flat(to)
        };
        self.slots.entry(id).or_default().push(Override { start: now, end, way, to });
    }

    #[inline]
    pub(super) fn live(&self, id: SlotId, at: Moment) -> Option<&Override> {
        if self.slots.is_empty() {
            return None;
        }
        self.slots.get(&id)?.iter().rev().find(|entry| at.is_past(entry.start))
    }

    pub(super) fn next_kink(&self, id: SlotId, time: f64) -> Option<f64> {
        let list = self.slots.get(&id)?;
        let end = self.live(id, Moment::after(time)).map(|entry| entry.end);
        list.iter().map(|entry| entry.start).chain(end).filter(|kink| *kink > time).reduce(f64::min)
    }
}
