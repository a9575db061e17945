//! Measured records against the run: how far apart, whose peak is higher, who comes first.

use crate::component::measured::Measured;
use crate::scenario::Scenario;
use crate::solve::RowSink;

/// Points of the even grid on which the lag is looked for.
const GRID: usize = 2001;

/// The lag is looked for up to this share of the common time to either side.
const FARTHEST: f64 = 0.2;

/// How a record and the run differ, in the channel's SI unit.
#[derive(Clone, Debug, PartialEq)]
pub struct RecordComparison {
    /// Name of the record.
    pub name: String,
    /// The channel.
    pub of: String,
    /// Its SI unit.
    pub unit: &'static str,
    /// Common time, s.
    pub window: [f64; 2],
    /// Rows compared.
    pub rows: usize,
    /// Root mean square of computed minus measured over these rows.
    pub rms: f64,
    /// The same as a share of the span of the measured values; `None` when these do not move.
    pub rms_share: Option<f64>,
    /// Mean of computed minus measured.
    pub bias: f64,
    /// Measured value of the largest magnitude, and when.
    pub peak_measured: f64,
    /// s.
    pub peak_measured_time: f64,
    /// Computed value of the largest magnitude in the common time, and when.
    pub peak_computed: f64,
    /// s.
    pub peak_computed_time: f64,
    /// How much the computed peak is above the measured one in magnitude, as a share of it.
    pub peak_error: Option<f64>,
    /// How much later the run does the same, s; `None` when one of them does not move.
    pub lag: Option<f64>,
    /// Root mean square that is left when the lag is taken out.
    pub rms_without_lag: Option<f64>,
}

/// Watches the rows of a run at the channels that were measured.
#[derive(Debug)]
pub struct Follower<'a> {
    records: Vec<(&'a Measured, usize, &'static str)>,
    computed: Vec<Vec<[f64; 2]>>,
}

impl<'a> Follower<'a> {
    /// For the records of a scenario.
    pub fn new(scenario: &'a Scenario) -> Self {
        let records: Vec<_> = scenario
            .measured
            .iter()
            .filter_map(|record| {
                let place = scenario.channels.iter().position(|it| it.name == record.of)?;
                let channel = scenario.channels.get(place)?;
                Some((record, place, channel.unit))
            })
            .collect();
        let computed = vec![Vec::new(); records.len()];
        Self { records, computed }
    }

    /// Takes one row of the run.
    pub fn take(&mut self, time: f64, values: &[f64]) {
        for ((_, place, _), computed) in self.records.iter().zip(&mut self.computed) {
            if let Some(value) = values.get(*place) {
                computed.push([time, *value]);
            }
        }
    }

    /// The comparisons, for those records of which the run came near enough.
    pub fn finish(self) -> Vec<RecordComparison> {
        self.records
            .into_iter()
            .zip(self.computed)
            .filter_map(|((record, _, unit), computed)| compare(record, unit, &computed))
            .collect()
    }
}

impl RowSink for Follower<'_> {
    fn row(&mut self, time: f64, values: &[f64]) {
        self.take(time, values);
    }
}

/// Rows of a run for two readers.
pub struct Shared<'a, 'b> {
    /// The one that writes them.
    pub rows: &'a mut dyn RowSink,
    /// The one that compares them.
    pub follower: &'a mut Follower<'b>,
}

impl RowSink for Shared<'_, '_> {
    fn row(&mut self, time: f64, values: &[f64]) {
        self.follower.take(time, values);
        self.rows.row(time, values);
    }
}

fn compare(
    record: &Measured,
    unit: &'static str,
    computed: &[[f64; 2]],
) -> Option<RecordComparison> {
    let (start, end) = (computed.first()?[0], computed.last()?[0]);
    let measured: Vec<[f64; 2]> =
        record.rows.iter().filter(|row| (start..=end).contains(&row[0])).copied().collect();
    let window = [measured.first()?[0], measured.last()?[0]];
    if measured.len() < 2 || window[1] <= window[0] {
        return None;
    }
    let mut walk = Line::new(computed);
    let differences: Vec<f64> =
        measured.iter().map(|row| walk.at(row[0]) - row[1]).filter(|it| it.is_finite()).collect();
    if differences.is_empty() {
        return None;
    }
    let rms = root_mean_square(&differences);
    let peak = |rows: &mut dyn Iterator<Item = [f64; 2]>| {
        rows.fold(None, |best: Option<[f64; 2]>, row| match best {
            Some(best) if best[1].abs() >= row[1].abs() => Some(best),
            _ => Some(row),
        })
    };
    let peak_measured = peak(&mut measured.iter().copied())?;
    let mut ends = Line::new(computed);
    let borders = window.map(|time| [time, ends.at(time)]);
    let inside = computed.iter().filter(|row| (window[0]..=window[1]).contains(&row[0])).copied();
    let peak_computed = peak(&mut borders.into_iter().chain(inside))?;
    let (low, high) =
        measured.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), row| {
            (low.min(row[1]), high.max(row[1]))
        });
    let share = |value: f64, of: f64| (of > 0.0).then(|| value / of);
    let shift = lag(&measured, computed, window);
    Some(RecordComparison {
        name: record.name.clone(),
        of: record.of.clone(),
        unit,
        window,
        rows: differences.len(),
        rms,
        rms_share: share(rms, high - low),
        bias: differences.iter().sum::<f64>() / differences.len() as f64,
        peak_measured: peak_measured[1],
        peak_measured_time: peak_measured[0],
        peak_computed: peak_computed[1],
        peak_computed_time: peak_computed[0],
        peak_error: share(peak_computed[1].abs() - peak_measured[1].abs(), peak_measured[1].abs()),
        lag: shift.map(|shift| shift.0),
        rms_without_lag: shift.map(|shift| shift.1),
    })
}

fn root_mean_square(values: &[f64]) -> f64 {
    (values.iter().map(|value| value * value).sum::<f64>() / values.len().max(1) as f64).sqrt()
}

/// The shift by which the computed curve fits the record best, and the root mean square then.
///
/// Both are read on an even grid; the mean square of their difference over the overlap is least
/// at the shift, and a parabola through the least and its neighbours places it between the grid.
fn lag(measured: &[[f64; 2]], computed: &[[f64; 2]], window: [f64; 2]) -> Option<(f64, f64)> {
    let step = (window[1] - window[0]) / (GRID - 1) as f64;
    let mut record = Line::new(measured);
    let mut run = Line::new(computed);
    let even = |line: &mut Line<'_>| -> Vec<f64> {
        (0..GRID).map(|place| line.at(window[0] + step * place as f64)).collect()
    };
    let (record, run) = (even(&mut record), even(&mut run));
    let moves = |values: &[f64]| {
        let mean = values.iter().sum::<f64>() / values.len() as f64;
        let size = values.iter().fold(0.0_f64, |size, value| size.max(value.abs()));
        values.iter().any(|value| (value - mean).abs() > 1e-6 * size)
    };
    if !(moves(&record) && moves(&run)) {
        return None;
    }
    let farthest = (FARTHEST * GRID as f64) as isize;
    let misfit = |shift: isize| -> f64 {
        let (early, late) = if shift >= 0 { (&record, &run) } else { (&run, &record) };
        let pairs = late.iter().skip(shift.unsigned_abs()).zip(early);
        let (sum, count) = pairs.fold((0.0, 0_usize), |(sum, count), (late, early)| {
            (sum + (late - early).powi(2), count + 1)
        });
        sum / count.max(1) as f64
    };
    let misfits: Vec<f64> = (-farthest..=farthest).map(misfit).collect();
    // What repeats fits at several shifts alike: the smallest of them counts.
    let least = misfits.iter().copied().fold(f64::INFINITY, f64::min);
    let most = misfits.iter().copied().fold(0.0, f64::max);
    let alike = least + 1e-3 * (most - least);
    let lies_low = |place: usize| {
        let around = place.saturating_sub(1)..(place + 2).min(misfits.len());
        misfits[place] <= alike && misfits[around].iter().all(|other| *other >= misfits[place])
    };
    let best = (0..misfits.len())
        .filter(|place| lies_low(*place))
        .min_by_key(|place| place.abs_diff(farthest as usize))?;
    // At the end of the range there is no least value, only a trend.
    let before = misfits.get(best.checked_sub(1)?)?;
    let (at, after) = (misfits.get(best)?, misfits.get(best + 1)?);
    let bend = before - 2.0 * at + after;
    let part = if bend > 0.0 { (0.5 * (before - after) / bend).clamp(-0.5, 0.5) } else { 0.0 };
    let shift = (best as f64 - farthest as f64 + part) * step;
    let least = (at - 0.25 * (before - after) * part).max(0.0);
    Some((shift, least.sqrt()))
}

/// Points joined by straight lines, read at rising times; the ends are held.
struct Line<'p> {
    points: &'p [[f64; 2]],
    place: usize,
}

impl<'p> Line<'p> {
    fn new(points: &'p [[f64; 2]]) -> Self {
        Self { points, place: 0 }
    }

    fn at(&mut self, time: f64) -> f64 {
        while self.points.get(self.place + 1).is_some_and(|next| next[0] < time) {
            self.place += 1;
        }
        let (Some(left), right) = (self.points.get(self.place), self.points.get(self.place + 1))
        else {
            return f64::NAN;
        };
        match right {
            Some(right) if right[0] > left[0] => {
                let share = ((time - left[0]) / (right[0] - left[0])).clamp(0.0, 1.0);
                left[1] + share * (right[1] - left[1])
            }
            _ => left[1],
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::signal::table::{Across, TableColumns};

    fn record(rows: Vec<[f64; 2]>) -> Measured {
        let text = String::new;
        let columns = TableColumns {
            time: text(),
            value: text(),
            time_unit: None,
            unit: None,
            across: Across::Time,
        };
        Measured {
            name: text(),
            of: text(),
            file: text(),
            columns,
            offset: 0.0,
            scale: 1.0,
            rows,
            source: None,
        }
    }

    fn sampled(count: usize, end: f64, of: impl Fn(f64) -> f64) -> Vec<[f64; 2]> {
        (0..=count).map(|place| end * place as f64 / count as f64).map(|t| [t, of(t)]).collect()
    }

    #[test]
    fn a_record_that_is_the_run_has_no_error() {
        let run = sampled(100, 1.0, |t| t * t);
        let found = compare(&record(run.clone()), "1", &run).unwrap();
        assert_eq!((found.rms, found.bias, found.peak_error), (0.0, 0.0, Some(0.0)));
        assert!(found.lag.unwrap().abs() < 1e-9 && found.rms_without_lag.unwrap() < 1e-9);
    }

    #[test]
    fn a_constant_error_is_its_own_root_mean_square() {
        let run = sampled(100, 1.0, |t| 3.0 * t);
        let found = compare(&record(sampled(37, 1.0, |t| 3.0 * t - 0.5)), "1", &run).unwrap();
        assert!((found.rms - 0.5).abs() < 1e-12 && (found.bias - 0.5).abs() < 1e-12);
        assert!((found.rms_share.unwrap() - 0.5 / 3.0).abs() < 1e-12);
    }

    #[test]
    fn a_late_sine_has_its_lag_and_peak() {
        // The difference of two sines a time d apart has the root mean square
        // sqrt(2) sin(w d / 2) over whole periods (closed form).
        let rate = 4.0 * std::f64::consts::TAU;
        let delay = 0.004;
        let run = sampled(4000, 2.0, |t| (rate * (t - delay)).sin());
        let measured = record(sampled(800, 2.0, |t| 0.8 * (rate * t).sin()));
        let found = compare(&measured, "1", &run).unwrap();
        // The even grid has a step of 1 ms.
        assert!((found.lag.unwrap() - delay).abs() < 5e-5, "{found:?}");
        assert!((found.peak_error.unwrap() - 0.25).abs() < 1e-4, "{found:?}");
        let same = record(sampled(800, 2.0, |t| (rate * t).sin()));
        let found = compare(&same, "1", &run).unwrap();
        let wanted = 2.0_f64.sqrt() * (rate * delay / 2.0).sin();
        assert!((found.rms - wanted).abs() < 2e-3 * wanted, "{} {wanted}", found.rms);
        assert!(found.rms_without_lag.unwrap() < 0.01 * wanted, "{found:?}");
    }

    #[test]
    fn what_does_not_move_has_no_lag() {
        let run = sampled(100, 1.0, |_| 2.0);
        let found = compare(&record(sampled(10, 1.0, |_| 1.5)), "1", &run).unwrap();
        assert_eq!(found.lag, None);
        assert!((found.peak_error.unwrap() - 1.0 / 3.0).abs() < 1e-12);
    }
}
