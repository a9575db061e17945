//! How the rows of a table are taken: gaps that are told, and even rows made from a fast record.
//!
//! ```text
//! value at t = mean of the record's straight lines over [t - every/2, t + every/2]
//! ```
//!
//! Near the record's ends the window shrinks to stay within it and symmetric about `t`, so that a
//! straight record stays what it is. A sine of angular frequency `w` keeps `sin(w every/2)/(w every/2)`
//! of its amplitude (closed form of the moving average).

use crate::quantity::format_number;

/// A gap of more than so many median steps is worth a warning.
const LONG: f64 = 10.0;

/// Rows made from a record beyond this are a mistake.
const MOST_ROWS: f64 = 1e7;

/// What is asked of the rows of a table.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Sampling {
    /// Longest time without a row, s; a longer one is a fault.
    pub largest_gap: Option<f64>,
    /// Step of the even rows that are made from it, s.
    pub every: Option<f64>,
}

/// What there is to tell of a table's rows.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Told {
    /// The key at fault, and why.
    Fault(&'static str, String),
    /// What a reader should know.
    Warning(String),
}

impl Sampling {
    /// The rows to follow, and what there is to tell of the file's own between 0 s and `until`.
    pub fn take(&self, rows: Vec<[f64; 2]>, until: f64) -> (Vec<[f64; 2]>, Option<Told>) {
        let told = self.gap(&rows, until);
        let Some(every) = self.every else { return (rows, told) };
        let span = match (rows.first(), rows.last()) {
            (Some(first), Some(last)) => last[0] - first[0],
            _ => 0.0,
        };
        if span / every > MOST_ROWS {
            let count = format_number(span / every, 4);
            let text = format!("it makes {count} rows of the file; 10 million are the limit");
            return (rows, Some(Told::Fault("every", text)));
        }
        (even(&rows, every), told)
    }

    /// The widest time without a row that the run meets, where that is worth telling.
    fn gap(&self, rows: &[[f64; 2]], until: f64) -> Option<Told> {
        let met = |pair: &&[[f64; 2]]| pair[1][0] > 0.0 && pair[0][0] < until;
        let width = |pair: &[[f64; 2]]| pair[1][0] - pair[0][0];
        let widest =
            rows.windows(2).filter(met).max_by(|one, two| width(one).total_cmp(&width(two)))?;
        let gap = width(widest);
        let shown = |value: f64| format_number(value, 6);
        let place = format!(
            "no row stands between {} s and {} s",
            shown(widest[0][0]),
            shown(widest[1][0])
        );
        if let Some(largest) = self.largest_gap {
            return (gap > largest * (1.0 + 1e-9)).then(|| {
                let text = format!("{place}: a gap of {} s, longer than this", shown(gap));
                Told::Fault("largest_gap", text)
            });
        }
        let mut steps: Vec<f64> = rows.windows(2).map(width).filter(|step| *step > 0.0).collect();
        steps.sort_by(f64::total_cmp);
        let median = *steps.get(steps.len() / 2)?;
        (steps.len() >= 3 && gap > LONG * median).then(|| {
            Told::Warning(format!(
                "{place}: {} times the median step of {} s; a straight line crosses it, and \
                 `largest_gap` says how long one may be",
                format_number(gap / median, 3),
                shown(median)
            ))
        })
    }
}

/// Rows at even times, each the mean of the record about it; the last time of the record is kept.
fn even(rows: &[[f64; 2]], every: f64) -> Vec<[f64; 2]> {
    let (Some(first), Some(last)) = (rows.first(), rows.last()) else { return Vec::new() };
    let (first, last) = (first[0], last[0]);
    if last <= first {
        return rows.to_vec();
    }
    // Areas under the record up to each row.
    let mut areas = Vec::with_capacity(rows.len());
    let mut area = 0.0;
    areas.push(area);
    for pair in rows.windows(2) {
        area += 0.5 * (pair[0][1] + pair[1][1]) * (pair[1][0] - pair[0][0]);
        areas.push(area);
    }
    // The row at or before a time, and the value there.
    let at = |time: f64| {
        let after = rows.partition_point(|row| row[0] <= time).clamp(1, rows.len() - 1);
        let (before, next) = (rows[after - 1], rows[after]);
        let length = next[0] - before[0];
        let share = if length > 0.0 { (time - before[0]) / length } else { 1.0 };
        (after - 1, before[1] + share * (next[1] - before[1]))
    };
    let area_to = |time: f64| {
        let (row, value) = at(time);
        areas[row] + 0.5 * (rows[row][1] + value) * (time - rows[row][0])
    };
    let mean = |time: f64| {
        let half = (0.5 * every).min(time - first).min(last - time);
        if half <= 1e-9 * every {
            return at(time).1;
        }
        (area_to(time + half) - area_to(time - half)) / (2.0 * half)
    };
    let count = ((last - first) / every * (1.0 + 1e-12)).floor() as usize;
    let mut made: Vec<[f64; 2]> = (0..=count)
        .map(|place| (first + place as f64 * every).min(last))
        .map(|time| [time, mean(time)])
        .collect();
    if made.last().is_some_and(|row| last - row[0] > 1e-9 * every) {
        made.push([last, mean(last)]);
    }
    made
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::TAU;

    fn sampled(count: usize, step: f64, value: impl Fn(f64) -> f64) -> Vec<[f64; 2]> {
        (0..=count).map(|place| place as f64 * step).map(|time| [time, value(time)]).collect()
    }

    fn every(step: f64) -> Sampling {
        Sampling { every: Some(step), largest_gap: None }
    }

    #[test]
    fn a_straight_record_stays_what_it_is() {
        let (rows, told) = every(0.3).take(sampled(1000, 0.001, |t| 3.0 - 2.0 * t), 1.0);
        assert_eq!(told, None);
        let times: Vec<f64> = rows.iter().map(|row| row[0]).collect();
        assert_eq!(rows.len(), 5, "{times:?}");
        for row in rows {
            assert!((row[1] - (3.0 - 2.0 * row[0])).abs() < 1e-12, "{row:?}");
        }
    }

    // Closed form of the moving average: a sine keeps sin(w every/2)/(w every/2) of its amplitude.
    #[test]
    fn a_sine_loses_what_a_moving_average_takes() {
        let w = TAU * 3.0;
        let (rows, _) = every(0.1).take(sampled(20_000, 1e-4, |t| (w * t).sin()), 2.0);
        let half: f64 = 0.5 * w * 0.1;
        let kept = half.sin() / half;
        for row in rows.iter().filter(|row| (0.1..1.9).contains(&row[0])) {
            assert!((row[1] - kept * (w * row[0]).sin()).abs() < 1e-6, "{row:?}");
        }
    }

    #[test]
    fn jumps_count_by_their_area() {
        // 0 until 1 s, 4 from then on: the mean over 0.9 s to 1.1 s is 2.
        let record = vec![[0.0, 0.0], [1.0, 0.0], [1.0, 4.0], [2.0, 4.0]];
        let (rows, _) = every(0.2).take(record, 2.0);
        assert!((rows[5][1] - 2.0).abs() < 1e-12 && (rows[6][1] - 4.0).abs() < 1e-12, "{rows:?}");
        let (one, _) = every(0.2).take(vec![[3.0, 7.0]], 2.0);
        assert_eq!(one, [[3.0, 7.0]]);
    }

    #[test]
    fn gaps_are_told_where_the_run_meets_them() {
        let mut record = sampled(50, 0.1, |t| t);
        record.drain(20..41);
        let usual = Sampling::default();
        let (rows, told) = usual.take(record.clone(), 10.0);
        assert_eq!(rows.len(), 30);
        let Some(Told::Warning(text)) = told else { panic!("{told:?}") };
        assert!(
            text.contains("between 1.9 s and 4.1 s: 22 times the median step of 0.1 s"),
            "{text}"
        );
        assert_eq!(usual.take(record.clone(), 1.5).1, None, "the run ends before it");
        let strict = |gap| Sampling { largest_gap: Some(gap), every: None };
        assert_eq!(strict(2.5).take(record.clone(), 10.0).1, None);
        let told = strict(2.0).take(record.clone(), 10.0).1;
        assert!(matches!(told, Some(Told::Fault("largest_gap", _))), "{told:?}");
        let told = every(1e-9).take(record, 10.0).1;
        assert!(matches!(told, Some(Told::Fault("every", _))), "{told:?}");
    }
}
