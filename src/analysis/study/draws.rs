//! Latin hypercube draws: each number covers its whole spread in equal shares.
//!
//! ```text
//! u_i = (p_i + r_i)/n        p a random order of 0..n-1, r uniform in [0, 1), one stream a number
//! x_i = F^-1(u_i)            F the distribution of the number
//! ```
//! `McKay`, Beckman and Conover (Technometrics 21, 1979). Each number has a stream of its own
//! from the seed and its path, so that the draws of one do not change when another is added.

use super::fingerprint::Fingerprint;
use super::normal;
use super::spec::{CUT, Distribution, Spread};
use rand_chacha::ChaCha12Rng;
use rand_chacha::rand_core::{RngCore, SeedableRng};

/// Draws of all numbers: one list a draw, numbers in the order of the spreads.
pub fn draw(spreads: &[Spread], draws: usize, seed: u64) -> Vec<Vec<f64>> {
    let columns: Vec<Vec<f64>> = spreads.iter().map(|spread| column(spread, draws, seed)).collect();
    (0..draws)
        .map(|place| columns.iter().filter_map(|column| column.get(place).copied()).collect())
        .collect()
}

fn column(spread: &Spread, draws: usize, seed: u64) -> Vec<f64> {
    let mut source = ChaCha12Rng::seed_from_u64(seed);
    let mut stream = Fingerprint::new();
    stream.bytes(spread.varied.path.as_bytes());
    source.set_stream(stream.short());
    let mut strata: Vec<usize> = (0..draws).collect();
    // Fisher and Yates, from the end.
    for last in (1..draws).rev() {
        strata.swap(last, below(&mut source, last as u64 + 1) as usize);
    }
    strata
        .into_iter()
        .map(|stratum| {
            let share = (stratum as f64 + uniform(&mut source)) / draws as f64;
            value(spread, share)
        })
        .collect()
}

/// A number in [0, 1) on a grid of 2^-53.
fn uniform(source: &mut ChaCha12Rng) -> f64 {
    (source.next_u64() >> 11) as f64 / (1_u64 << 53) as f64
}

/// A whole number below `limit`, all alike: the few that would favour small ones are drawn again.
fn below(source: &mut ChaCha12Rng, limit: u64) -> u64 {
    let fair = u64::MAX - u64::MAX % limit;
    loop {
        let number = source.next_u64();
        if number < fair {
            return number % limit;
        }
    }
}

/// The value below which a share of the spread lies.
pub fn value(spread: &Spread, share: f64) -> f64 {
    let Spread { middle, width, .. } = *spread;
    match spread.distribution {
        Distribution::Normal => middle + width * cut_normal(share),
        Distribution::Lognormal => middle * (width * cut_normal(share)).exp(),
        Distribution::Uniform => middle + width * (2.0 * share - 1.0),
        Distribution::Triangular => {
            let from_middle = if share < 0.5 {
                (2.0 * share).sqrt() - 1.0
            } else {
                1.0 - (2.0 * (1.0 - share)).sqrt()
            };
            middle + width * from_middle
        }
    }
}

/// A standard normal value whose tails beyond the cut are left out.
fn cut_normal(share: f64) -> f64 {
    let outside = normal::share_below(-CUT);
    normal::value_at(outside + share * (1.0 - 2.0 * outside)).clamp(-CUT, CUT)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::study::spec::Varied;
    use crate::quantity::Dimension;

    fn spread(path: &str, distribution: Distribution, middle: f64, width: f64) -> Spread {
        let varied = Varied {
            path: path.to_owned(),
            dimension: Dimension::One,
            design: Some(middle),
            whole: false,
            unit: "1",
        };
        Spread { varied, middle, distribution, width }
    }

    fn moments(values: impl Iterator<Item = f64>) -> (f64, f64) {
        let list: Vec<f64> = values.collect();
        let mean = list.iter().sum::<f64>() / list.len() as f64;
        let square = list.iter().map(|value| (value - mean).powi(2)).sum::<f64>();
        (mean, (square / list.len() as f64).sqrt())
    }

    #[test]
    fn each_distribution_has_its_mean_and_deviation() {
        // Textbook moments: uniform a/sqrt 3, triangular a/sqrt 6, lognormal mean exp(s^2/2);
        // cutting a normal at four deviations narrows it by 0.06 %.
        for (distribution, mean, deviation) in [
            (Distribution::Normal, 10.0, 0.5 * 0.999_464),
            (Distribution::Uniform, 10.0, 0.5 / 3.0_f64.sqrt()),
            (Distribution::Triangular, 10.0, 0.5 / 6.0_f64.sqrt()),
        ] {
            let all = draw(&[spread("a", distribution, 10.0, 0.5)], 20_000, 3);
            let (m, d) = moments(all.iter().map(|draw| draw[0]));
            assert!((m - mean).abs() < 1e-4, "{distribution:?} {m}");
            assert!((d / deviation - 1.0).abs() < 2e-4, "{distribution:?} {d}");
        }
        let all = draw(&[spread("a", Distribution::Lognormal, 10.0, 0.1)], 20_000, 3);
        let (m, _) = moments(all.iter().map(|draw| draw[0]));
        assert!((m / (10.0 * 0.005_f64.exp()) - 1.0).abs() < 1e-4, "{m}");
    }

    #[test]
    fn each_share_of_a_spread_is_drawn_once() {
        let all = draw(&[spread("a", Distribution::Uniform, 0.5, 0.5)], 1000, 11);
        let mut strata: Vec<usize> = all.iter().map(|draw| (draw[0] * 1000.0) as usize).collect();
        strata.sort_unstable();
        assert!(strata.iter().enumerate().all(|(place, stratum)| place == *stratum));
    }

    #[test]
    fn draws_of_one_number_do_not_depend_on_the_others() {
        let (a, b) = (
            spread("a", Distribution::Normal, 1.0, 0.1),
            spread("b", Distribution::Uniform, 2.0, 0.1),
        );
        let both = draw(&[b.clone(), a.clone()], 50, 7);
        let alone = draw(&[a], 50, 7);
        assert!(both.iter().zip(&alone).all(|(both, alone)| both[1] == alone[0]));
        // Two numbers are in different orders: their rank correlation is small.
        let (x, y): (Vec<f64>, Vec<f64>) = both.iter().map(|draw| (draw[0], draw[1])).unzip();
        let correlation = super::super::statistics::rank_correlation(&x, &y).unwrap_or(1.0);
        assert!(correlation.abs() < 0.4, "{correlation}");
    }
}
