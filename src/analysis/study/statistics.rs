//! Shares with their intervals, quantiles, and rank correlation.

/// Quantile of the normal distribution for an interval of 95 %.
pub const Z95: f64 = 1.959_963_984_540_054;

/// The interval of 95 % for a share of `count` in `total` (Wilson 1927).
///
/// ```text
/// (p + z^2/2n +- z sqrt(p(1-p)/n + z^2/4n^2)) / (1 + z^2/n)
/// ```
pub fn wilson(count: usize, total: usize) -> Option<[f64; 2]> {
    (total > 0).then(|| wilson_of(count as f64 / total as f64, total as f64))
}

fn wilson_of(share: f64, total: f64) -> [f64; 2] {
    let square = Z95 * Z95 / total;
    let middle = (share + 0.5 * square) / (1.0 + square);
    let half = Z95 / (1.0 + square)
        * (share * (1.0 - share) / total + 0.25 * Z95 * Z95 / (total * total)).sqrt();
    // At the ends the formula is exact but for rounding.
    let low = if share <= 0.0 { 0.0 } else { (middle - half).max(0.0) };
    let high = if share >= 1.0 { 1.0 } else { (middle + half).min(1.0) };
    [low, high]
}

/// How many draws the interval of a share needs to be at most `width` wide.
pub fn draws_for_width(share: f64, width: f64) -> Option<u64> {
    draws_until(|total| {
        let [low, high] = wilson_of(share, total);
        high - low <= width
    })
}

/// How many draws tell a share from a limit: until the interval leaves the limit out.
pub fn draws_to_tell(share: f64, limit: f64) -> Option<u64> {
    let differs = (share - limit).abs() > 1e-12;
    if !differs {
        return None;
    }
    draws_until(|total| {
        let [low, high] = wilson_of(share, total);
        high <= limit || low > limit
    })
}

/// The smallest number of draws for which a condition holds that keeps holding.
fn draws_until(holds: impl Fn(f64) -> bool) -> Option<u64> {
    let mut high = 1_u64;
    while !holds(high as f64) {
        high = high.checked_mul(2).filter(|draws| *draws < 1 << 50)?;
    }
    let mut low = high / 2;
    while high - low > 1 {
        let middle = low + (high - low) / 2;
        if holds(middle as f64) {
            high = middle;
        } else {
            low = middle;
        }
    }
    Some(high)
}

/// The value below which a share of a sorted list lies, straight between its entries.
///
/// Hyndman and Fan's definition 7 (The American Statistician 50, 1996): entry `(n - 1) share`.
pub fn quantile(sorted: &[f64], share: f64) -> Option<f64> {
    let last = sorted.len().checked_sub(1)?;
    let place = share.clamp(0.0, 1.0) * last as f64;
    let below = place.floor() as usize;
    let (low, high) = (*sorted.get(below)?, *sorted.get((below + 1).min(last))?);
    let part = place - below as f64;
    // A value that was never reached counts as infinitely large.
    Some(if part == 0.0 || low == high { low } else { low + part * (high - low) })
}

/// Ranks from 1; equal values share the mean of theirs.
fn ranks(values: &[f64]) -> Vec<f64> {
    let mut order: Vec<usize> = (0..values.len()).collect();
    let at = |place: &usize| values.get(*place).copied().unwrap_or(f64::NAN);
    order.sort_by(|a, b| at(a).total_cmp(&at(b)));
    let mut ranks = vec![0.0; values.len()];
    for tied in order.chunk_by(|a, b| at(a) == at(b)) {
        let first = tied
            .first()
            .map_or(0.0, |first| order.partition_point(|place| at(place) < at(first)) as f64);
        let shared = first + 0.5 * (tied.len() as f64 + 1.0);
        for place in tied {
            if let Some(rank) = ranks.get_mut(*place) {
                *rank = shared;
            }
        }
    }
    ranks
}

/// Spearman's rank correlation: Pearson's correlation of the ranks; `None` when one of the
/// lists does not vary.
pub fn rank_correlation(a: &[f64], b: &[f64]) -> Option<f64> {
    if a.len() != b.len() || a.len() < 3 {
        return None;
    }
    let (a, b) = (ranks(a), ranks(b));
    let middle = 0.5 * (a.len() as f64 + 1.0);
    let mut sums = [0.0; 3];
    for (x, y) in a.iter().zip(&b) {
        let (x, y) = (x - middle, y - middle);
        sums[0] += x * x;
        sums[1] += y * y;
        sums[2] += x * y;
    }
    let size = (sums[0] * sums[1]).sqrt();
    (size > 0.0).then(|| (sums[2] / size).clamp(-1.0, 1.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_interval_is_wilsons() {
        // Newcombe, Statistics in Medicine 17 (1998) 857, table I, method 3 (from memory):
        // 81 of 263: 0.2553 to 0.3662; 15 of 148: 0.0624 to 0.1605; 0 of 20: 0 to 0.1611;
        // 1 of 29: 0.0061 to 0.1718.
        for (count, total, low, high) in [
            (81, 263, 0.2553, 0.3662),
            (15, 148, 0.0624, 0.1605),
            (0, 20, 0.0, 0.1611),
            (1, 29, 0.0061, 0.1718),
        ] {
            let [a, b] = wilson(count, total).unwrap();
            assert!((a - low).abs() < 5e-5 && (b - high).abs() < 5e-5, "{count}: {a} {b}");
        }
        assert_eq!(wilson(0, 0), None);
        assert_eq!(wilson(5, 5).unwrap()[1], 1.0);
    }

    #[test]
    fn the_draws_asked_for_give_the_width_asked_for() {
        let draws = draws_for_width(0.02, 0.005).unwrap();
        let width = |draws: u64| {
            let [low, high] = wilson_of(0.02, draws as f64);
            high - low
        };
        assert!(width(draws) <= 0.005 && width(draws - 1) > 0.005, "{draws}");
        let draws = draws_to_tell(0.0, 0.01).unwrap();
        // Rule of Wilson for no event: high = z^2/(n + z^2).
        assert_eq!(draws, (Z95 * Z95 / 0.01 - Z95 * Z95).ceil() as u64);
        assert_eq!(draws_to_tell(0.01, 0.01), None);
    }

    #[test]
    fn quantiles_lie_straight_between_entries() {
        let list = [1.0, 2.0, 4.0];
        assert_eq!(quantile(&list, 0.0), Some(1.0));
        assert_eq!(quantile(&list, 0.5), Some(2.0));
        assert_eq!(quantile(&list, 0.75), Some(3.0));
        assert_eq!(quantile(&list, 1.0), Some(4.0));
        assert_eq!(quantile(&[], 0.5), None);
        assert_eq!(quantile(&[1.0, f64::INFINITY], 0.5), Some(f64::INFINITY));
    }

    #[test]
    fn rank_correlation_is_spearmans() {
        // Intelligence against hours of television, ten people: the usual textbook example,
        // rho = -29/165 (from memory).
        let iq = [106.0, 100.0, 86.0, 101.0, 99.0, 103.0, 97.0, 113.0, 112.0, 110.0];
        let hours = [7.0, 27.0, 2.0, 50.0, 28.0, 29.0, 20.0, 12.0, 6.0, 17.0];
        let found = rank_correlation(&iq, &hours).unwrap();
        assert!((found + 29.0 / 165.0).abs() < 1e-12, "{found}");
        assert_eq!(rank_correlation(&[1.0, 2.0, 3.0], &[5.0, 5.0, 5.0]), None);
        // Ties share the mean rank: 1, 2.5, 2.5, 4 against 1, 2, 3, 4 gives 4.5/sqrt(22.5).
        let tied = rank_correlation(&[1.0, 2.0, 2.0, 3.0], &[1.0, 2.0, 3.0, 4.0]).unwrap();
        assert!((tied - 4.5 / 22.5_f64.sqrt()).abs() < 1e-12, "{tied}");
    }
}
