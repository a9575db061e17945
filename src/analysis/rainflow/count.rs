//! Rainflow counting by ASTM E1049-85, 5.4.4, one turning point at a time.
//!
//! ```text
//! X  range of the newest two points      Y  range of the two before
//! X < Y      wait for the next point
//! X >= Y     Y holds the starting point: half a cycle, drop the starting point; else a whole
//!            cycle, drop both points of Y
//! at the end every range that is left is half a cycle
//! ```
//! Only the ranges that are still open are kept, so the memory does not grow with the run.

/// A counted cycle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cycle {
    /// Largest minus smallest value.
    pub range: f64,
    /// Their mean.
    pub mean: f64,
    /// 1, or 0.5 for a half cycle.
    pub count: f64,
}

impl Cycle {
    fn between(a: f64, b: f64, count: f64) -> Self {
        Self { range: (b - a).abs(), mean: 0.5 * (a + b), count }
    }
}

/// Counts cycles of a stream of turning points.
#[derive(Clone, Debug, Default)]
pub struct Counter {
    open: Vec<f64>,
}

impl Counter {
    /// Takes a turning point; `told` hears every cycle that it closes.
    pub fn take(&mut self, value: f64, told: &mut dyn FnMut(Cycle)) {
        self.open.push(value);
        while let [.., a, b, c] = self.open.as_slice() {
            let (newest, before) = ((c - b).abs(), (b - a).abs());
            if newest < before {
                return;
            }
            if self.open.len() == 3 {
                told(Cycle::between(*a, *b, 0.5));
                self.open.remove(0);
            } else {
                told(Cycle::between(*a, *b, 1.0));
                let last = self.open.len() - 1;
                self.open.drain(last - 2..last);
            }
        }
    }

    /// Counts what is left as half cycles.
    pub fn finish(&mut self, told: &mut dyn FnMut(Cycle)) {
        for pair in self.open.windows(2) {
            told(Cycle::between(pair[0], pair[1], 0.5));
        }
        self.open.clear();
    }
}

#[cfg(test)]
#[expect(clippy::float_cmp, reason = "counts are exact")]
mod tests {
    use super::*;

    fn count(values: &[f64]) -> Vec<[f64; 3]> {
        let mut cycles = Vec::new();
        let mut counter = Counter::default();
        let mut told = |cycle: Cycle| cycles.push([cycle.range, cycle.mean, cycle.count]);
        for value in values {
            counter.take(*value, &mut told);
        }
        counter.finish(&mut told);
        cycles
    }

    // The example of ASTM E1049-85, figure 6 (published with the counts of an open-source
    // reference implementation), in the order in which its procedure counts them.
    #[test]
    fn example_of_the_standard() {
        assert_eq!(
            count(&[-2.0, 1.0, -3.0, 5.0, -1.0, 3.0, -4.0, 4.0, -2.0]),
            [
                [3.0, -0.5, 0.5],
                [4.0, -1.0, 0.5],
                [4.0, 1.0, 1.0],
                [8.0, 1.0, 0.5],
                [9.0, 0.5, 0.5],
                [8.0, 0.0, 0.5],
                [6.0, 1.0, 0.5],
            ]
        );
    }

    // ASTM E1049-85, 5.4.5, the same history repeating, begun at its peak (from memory):
    // ranges 3, 4, 7 and 9, one whole cycle each (the last as two halves).
    #[test]
    fn repeating_history_of_the_standard() {
        let cycles = count(&[5.0, -1.0, 3.0, -4.0, 4.0, -2.0, 1.0, -3.0, 5.0]);
        let total = |range: f64| -> f64 {
            cycles.iter().filter(|cycle| cycle[0] == range).map(|cycle| cycle[2]).sum()
        };
        for range in [3.0, 4.0, 7.0, 9.0] {
            assert_eq!(total(range), 1.0, "{range}");
        }
        assert_eq!(cycles.iter().map(|cycle| cycle[2]).sum::<f64>(), 4.0);
    }

    #[test]
    fn the_memory_holds_open_ranges_only() {
        let mut counter = Counter::default();
        for index in 0..100_000 {
            counter.take(f64::from(index % 2), &mut |_| {});
        }
        assert!(counter.open.len() <= 3);
    }
}
