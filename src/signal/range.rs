//! The extremes that a signal takes on an interval.

use super::course::{Course, Overrides, SignalBank, SlotId};
use super::shape::Moment;

/// Samples between kinks where a product of straight lines bends.
const BENT_SAMPLES: f64 = 32.0;
/// Samples a sixth of a period, and the most of them between two kinks.
const SAMPLES_A_CAP: f64 = 8.0;
const MOST_SAMPLES: f64 = 20_000.0;

impl SignalBank {
    /// The smallest and the largest value between `from` and `to`, from the right at `from` and
    /// from the left at `to`. Both are values the signal takes: exact where it is made of
    /// straight lines, found by search where sines, gusts or products bend it.
    pub fn range_on(&self, id: SlotId, from: f64, to: f64, o: &Overrides) -> (f64, f64) {
        let mut range = (f64::INFINITY, f64::NEG_INFINITY);
        let mut start = from;
        loop {
            let end = self.next_kink_of(id, start, o).unwrap_or(to).min(to);
            self.widen(id, start, end, o, &mut range);
            if end >= to {
                return range;
            }
            start = end;
        }
    }

    /// The first time between `from` and `to` at which the value lies outside `low..=high`, and
    /// the value farthest outside before the next kink; `None` when it never does.
    ///
    /// Jumps are found exactly, crossings of smooth branches by bisection.
    pub fn first_outside(
        &self,
        id: SlotId,
        [from, to]: [f64; 2],
        [low, high]: [f64; 2],
        o: &Overrides,
    ) -> Option<(f64, f64)> {
        let is_outside = |value: f64| value < low || value > high;
        let mut start = from;
        loop {
            let end = self.next_kink_of(id, start, o).unwrap_or(to).min(to);
            let mut range = (f64::INFINITY, f64::NEG_INFINITY);
            self.widen(id, start, end, o, &mut range);
            let farthest = if range.0 < low { range.0 } else { range.1 };
            let value = |time: f64| self.value_in(id, time, start, o);
            if is_outside(value(start)) {
                return Some((start, farthest));
            }
            if is_outside(farthest) {
                let count = self.samples(id, start, end, o).max(1.0) * 4.0;
                let step = (end - start) / count;
                let mut inside = start;
                for index in 1..=count as usize {
                    let mut outside = (start + step * index as f64).min(end);
                    if is_outside(value(outside)) {
                        for _ in 0..60 {
                            let middle = 0.5 * (inside + outside);
                            if is_outside(value(middle)) {
                                outside = middle;
                            } else {
                                inside = middle;
                            }
                        }
                        return Some((outside, farthest));
                    }
                    inside = outside;
                }
                // It peeps out between two samples only: the branch is refused as a whole.
                return Some((start, farthest));
            }
            if end >= to {
                return None;
            }
            start = end;
        }
    }

    /// Samples that show how a branch between two kinks bends; 0 where it is straight.
    fn samples(&self, id: SlotId, start: f64, end: f64, o: &Overrides) -> f64 {
        match self.step_cap_of(id, start, end, o) {
            Some(cap) => ((end - start) / cap * SAMPLES_A_CAP).ceil().clamp(8.0, MOST_SAMPLES),
            None if self.bends(id, start, end, o) => BENT_SAMPLES,
            None => 0.0,
        }
    }

    /// Widens `range` by the values of the branch between two kinks.
    fn widen(&self, id: SlotId, start: f64, end: f64, o: &Overrides, range: &mut (f64, f64)) {
        let value = |t: f64| self.value_in(id, t, start, o);
        let mut include = |value: f64| *range = (range.0.min(value), range.1.max(value));
        include(value(start));
        include(value(end));
        let count = self.samples(id, start, end, o);
        if count == 0.0 {
            return;
        }
        let step = (end - start) / count;
        let place = |index: f64| (start + step * index).clamp(start, end);
        let samples = (0..=count as usize).map(|index| (index as f64, value(place(index as f64))));
        let (mut low, mut high) = ((0.0, f64::INFINITY), (0.0, f64::NEG_INFINITY));
        for (index, sample) in samples {
            if sample < low.1 {
                low = (index, sample);
            }
            if sample > high.1 {
                high = (index, sample);
            }
        }
        include(peak(place(high.0 - 1.0), place(high.0 + 1.0), value));
        include(-peak(place(low.0 - 1.0), place(low.0 + 1.0), |t| -value(t)));
    }

    /// Whether some product of two changing members bends the signal between its kinks.
    fn bends(&self, id: SlotId, from: f64, to: f64, o: &Overrides) -> bool {
        if o.live(id, Moment::after(from)).is_some() {
            return false;
        }
        self.course_of(id).is_some_and(|course| self.course_bends(course, from, to, o))
    }

    fn course_bends(&self, course: &Course, from: f64, to: f64, o: &Overrides) -> bool {
        let any = |list: &[Course]| list.iter().any(|one| self.course_bends(one, from, to, o));
        match course {
            Course::Plain(_) => false,
            Course::Reference(id) => self.bends(*id, from, to, o),
            Course::Sum(list) => any(list),
            Course::Product(list) => {
                let moving = list
                    .iter()
                    .filter(|member| self.course_constant(member, from, to, o).is_none())
                    .count();
                moving > 1 || any(list)
            }
        }
    }
}

/// The largest value of a function with one peak between `low` and `high`, by golden section.
fn peak(low: f64, high: f64, value: impl Fn(f64) -> f64) -> f64 {
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    let (mut low, mut high) = (low, high);
    for _ in 0..48 {
        let (left, right) = (high - golden * (high - low), low + golden * (high - low));
        if value(left) < value(right) { low = left } else { high = right }
    }
    value(0.5 * (low + high))
}
