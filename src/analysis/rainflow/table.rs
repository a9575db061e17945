//! Counted cycles by range, and by range and mean.

use super::count::Cycle;

/// One bin of a histogram.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bin {
    /// Lower edge, included.
    pub from: f64,
    /// Upper edge, included in the last bin only.
    pub to: f64,
    /// Cycles, halves as halves.
    pub count: f64,
}

/// Cycles by range, from zero to the largest range.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Histogram {
    /// Bins of equal width, rising.
    pub bins: Vec<Bin>,
}

impl Histogram {
    /// The histogram of cycles in so many bins; empty without cycles.
    pub fn new(cycles: &[Cycle], bins: usize) -> Self {
        let largest = cycles.iter().map(|cycle| cycle.range).fold(0.0, f64::max);
        if largest <= 0.0 || bins == 0 {
            return Self::default();
        }
        let edge = |place: usize| largest * place as f64 / bins as f64;
        let mut list: Vec<Bin> = (0..bins)
            .map(|place| Bin { from: edge(place), to: edge(place + 1), count: 0.0 })
            .collect();
        for cycle in cycles {
            let place = place_of(cycle.range, 0.0, largest, bins);
            list[place].count += cycle.count;
        }
        Self { bins: list }
    }
}

/// Cycles by range and mean.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct RangeMean {
    /// Edges of the ranges, rising, one more than there are bins.
    pub ranges: Vec<f64>,
    /// Edges of the means, rising, one more than there are bins.
    pub means: Vec<f64>,
    /// Counts: one row a range, one column a mean.
    pub counts: Vec<Vec<f64>>,
}

impl RangeMean {
    /// The table of cycles in so many bins each way, the means between the extremes of the channel.
    pub fn new(cycles: &[Cycle], bins: usize, [low, high]: [f64; 2]) -> Self {
        let largest = cycles.iter().map(|cycle| cycle.range).fold(0.0, f64::max);
        if largest <= 0.0 || bins == 0 || high <= low {
            return Self::default();
        }
        let edges = |from: f64, to: f64| -> Vec<f64> {
            (0..=bins).map(|place| from + (to - from) * place as f64 / bins as f64).collect()
        };
        let mut counts = vec![vec![0.0; bins]; bins];
        for cycle in cycles {
            let row = place_of(cycle.range, 0.0, largest, bins);
            let column = place_of(cycle.mean, low, high, bins);
            counts[row][column] += cycle.count;
        }
        Self { ranges: edges(0.0, largest), means: edges(low, high), counts }
    }
}

fn place_of(value: f64, low: f64, high: f64, bins: usize) -> usize {
    let share = (value - low) / (high - low) * bins as f64;
    (share.max(0.0) as usize).min(bins - 1)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_cycle_falls_into_one_bin() {
        let cycles = [
            Cycle { range: 0.0, mean: 5.0, count: 0.5 },
            Cycle { range: 4.9, mean: -5.0, count: 1.0 },
            Cycle { range: 10.0, mean: 0.0, count: 2.0 },
        ];
        let histogram = Histogram::new(&cycles, 2);
        let counts: Vec<f64> = histogram.bins.iter().map(|bin| bin.count).collect();
        assert_eq!(counts, [1.5, 2.0]);
        let table = RangeMean::new(&cycles, 2, [-5.0, 5.0]);
        assert_eq!(table.counts, [[1.0, 0.5], [0.0, 2.0]]);
        assert_eq!(table.ranges, [0.0, 5.0, 10.0]);
    }
}
