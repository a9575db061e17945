//! From traces to curves: pixel columns become points in order of time.

use crate::results::Column;
use std::f64::consts::{PI, TAU};

/// Pieces of a curve, each `[time, value]` in order.
pub type Pieces = Vec<Vec<[f64; 2]>>;

/// The trace of a channel as a curve; value is multiplied by `factor`.
///
/// Each column gives its first value, its two extremes in their order, and its last value, so a
/// peak of the continuous solution is drawn even when no sample met it.
pub fn pieces(columns: &[Option<Column>], [start, end]: [f64; 2], factor: f64) -> Pieces {
    let step = (end - start) / columns.len().max(1) as f64;
    let mut pieces: Pieces = Vec::new();
    let mut piece: Vec<[f64; 2]> = Vec::new();
    for (place, column) in columns.iter().enumerate() {
        let Some(column) = column else {
            keep(&mut pieces, &mut piece);
            continue;
        };
        let left = start + step * place as f64;
        for (share, value) in in_order(column) {
            let point = [left + step * share, value * factor];
            if point[1].is_finite() && piece.last() != Some(&point) {
                piece.push(point);
            }
        }
    }
    keep(&mut pieces, &mut piece);
    pieces
}

fn keep(pieces: &mut Pieces, piece: &mut Vec<[f64; 2]>) {
    if piece.len() > 1 {
        pieces.push(std::mem::take(piece));
    }
    piece.clear();
}

/// The values of a column with their place in it, 0 to 1; extremes at the ends are not repeated.
fn in_order(column: &Column) -> Vec<(f64, f64)> {
    let extremes =
        if column.min_first { [column.min, column.max] } else { [column.max, column.min] };
    let inner = extremes.into_iter().filter(|value| {
        // Exact: an extreme at the end of a column is the very same number.
        value.total_cmp(&column.first).is_ne() && value.total_cmp(&column.last).is_ne()
    });
    let mut values = vec![(0.0, column.first)];
    let inner: Vec<f64> = inner.collect();
    let count = inner.len() as f64;
    values.extend(
        inner
            .iter()
            .enumerate()
            .map(|(place, value)| ((place as f64 + 1.0) / (count + 1.0), *value)),
    );
    values.push((1.0, column.last));
    values
}

/// The load angle in electrical degrees from the trace of the phase (rad, not wrapped): cut at
/// each slip, ending at exactly 180 degrees and beginning again at the other edge.
pub fn load_angle(phase: &[Option<Column>], window: [f64; 2]) -> Pieces {
    wrap(&pieces(phase, window, 1.0))
}

/// Cuts curves of a phase at odd multiples of pi and gives degrees.
pub fn wrap(phase: &Pieces) -> Pieces {
    let mut wrapped: Pieces = Vec::new();
    for curve in phase {
        if !curve.iter().flatten().all(|part| part.is_finite()) {
            continue;
        }
        let Some(first) = curve.first() else { continue };
        let mut well = (first[1] / TAU).round();
        let mut piece = vec![[first[0], degrees(first[1] - TAU * well)]];
        for pair in curve.windows(2) {
            let [from, to] = [pair[0], pair[1]];
            let target = (to[1] / TAU).round();
            let (count, up) = ((target - well).abs() as u64, target > well);
            let sign = if up { 1.0 } else { -1.0 };
            for number in drawn(count) {
                let edge = TAU * well + sign * (PI + TAU * number as f64);
                let share = ((edge - from[1]) / (to[1] - from[1])).clamp(0.0, 1.0);
                let time = from[0] + share * (to[0] - from[0]);
                piece.push([time, 180.0 * sign]);
                wrapped.push(std::mem::replace(&mut piece, vec![[time, -180.0 * sign]]));
            }
            well = target;
            piece.push([to[0], degrees(to[1] - TAU * well)]);
        }
        if piece.len() > 1 {
            wrapped.push(piece);
        }
    }
    wrapped
}

/// A column that runs through very many wells would be one block of ink: the first two lines and
/// the last two say it.
fn drawn(count: u64) -> impl Iterator<Item = u64> {
    let head = if count <= 4 { count } else { 2 };
    let tail = if count <= 4 { count } else { count - 2 };
    (0..head).chain(tail..count)
}

fn degrees(angle: f64) -> f64 {
    angle * 180.0 / PI
}

/// The law of a magnetic gear, its smaller peak scaled to 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Law<'a> {
    /// Order, relative amplitude, phase in rad.
    pub harmonics: &'a [[f64; 3]],
    /// Its peaks, electrical rad: backward and forward.
    pub peaks: [f64; 2],
}

impl Law<'_> {
    fn raw(&self, phase: f64) -> f64 {
        self.harmonics.iter().fold(phase.sin(), |sum, [order, amplitude, lead]| {
            sum + amplitude * (order * phase + lead).sin()
        })
    }

    /// Value at a phase.
    pub fn value(&self, phase: f64) -> f64 {
        let scale =
            self.peaks.iter().map(|peak| self.raw(*peak).abs()).fold(f64::INFINITY, f64::min);
        if scale > 0.0 && scale.is_finite() { self.raw(phase) / scale } else { self.raw(phase) }
    }

    /// The synchronous torque in each column of the phase's trace, `factor` times the law; its
    /// extremes count the peaks that the phase runs through inside a column.
    pub fn columns(&self, phase: &[Option<Column>], factor: f64) -> Vec<Option<Column>> {
        phase.iter().map(|column| column.map(|column| self.column(&column, factor))).collect()
    }

    fn column(&self, phase: &Column, factor: f64) -> Column {
        let torque = |angle: f64| factor * self.value(angle);
        let (at_min, at_max) = (torque(phase.min), torque(phase.max));
        let rising = phase.min_first;
        let mut inside: Vec<f64> = self
            .peaks
            .iter()
            .flat_map(|peak| {
                let first = ((phase.min - peak) / TAU).ceil();
                (0..2).map(move |turn| peak + TAU * (first + f64::from(turn)))
            })
            .filter(|angle| *angle <= phase.max)
            .collect();
        inside.sort_by(|one, two| if rising { one.total_cmp(two) } else { two.total_cmp(one) });
        let (first, last) = (torque(phase.first), torque(phase.last));
        let ends = if rising { [at_min, at_max] } else { [at_max, at_min] };
        let walk: Vec<f64> = [first, ends[0]]
            .into_iter()
            .chain(inside.iter().map(|angle| torque(*angle)))
            .chain([ends[1], last])
            .collect();
        let place_of = |better: fn(f64, f64) -> bool| {
            walk.iter().enumerate().fold((0, first), |best, (place, value)| {
                if better(*value, best.1) { (place, *value) } else { best }
            })
        };
        let low = place_of(|value, best| value < best);
        let high = place_of(|value, best| value > best);
        Column { first, min: low.1, max: high.1, last, min_first: low.0 <= high.0 }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn column(first: f64, last: f64) -> Option<Column> {
        Some(Column {
            first,
            min: first.min(last),
            max: first.max(last),
            last,
            min_first: first < last,
        })
    }

    #[test]
    fn a_monotone_column_gives_its_ends_only() {
        let curve = pieces(&[column(0.0, 1.0), column(1.0, 3.0)], [0.0, 2.0], 2.0);
        assert_eq!(curve, vec![vec![[0.0, 0.0], [1.0, 2.0], [2.0, 6.0]]]);
    }

    #[test]
    fn a_peak_inside_a_column_is_drawn() {
        let spike = Column { first: 0.0, min: -1.0, max: 5.0, last: 0.0, min_first: false };
        let curve = pieces(&[Some(spike)], [0.0, 3.0], 1.0);
        assert_eq!(curve, vec![vec![[0.0, 0.0], [1.0, 5.0], [2.0, -1.0], [3.0, 0.0]]]);
    }

    #[test]
    fn a_gap_in_the_trace_is_a_gap_in_the_curve() {
        let curve = pieces(&[column(0.0, 1.0), None, column(2.0, 3.0)], [0.0, 3.0], 1.0);
        assert_eq!(curve.len(), 2);
    }

    #[test]
    fn the_load_angle_ends_at_180_and_begins_at_the_other_edge() {
        let phase = [column(0.0, 2.0 * TAU)];
        let curve = load_angle(&phase, [0.0, 2.0]);
        assert_eq!(curve.len(), 3, "two slips cut twice");
        assert_eq!(curve[0].last(), Some(&[0.5, 180.0]));
        assert_eq!(curve[1].first(), Some(&[0.5, -180.0]));
        assert!(curve[2].last().unwrap()[1].abs() < 1e-9);
        let back = load_angle(&[column(0.0, -1.2 * PI)], [0.0, 1.2]);
        assert_eq!((back[0].last(), back[1].first()), (Some(&[1.0, -180.0]), Some(&[1.0, 180.0])));
    }

    #[test]
    fn a_storm_of_slips_in_one_column_stays_drawable() {
        let curve = load_angle(&[column(0.0, 4000.0 * TAU)], [0.0, 1.0]);
        assert!(curve.len() < 12, "{}", curve.len());
        assert!(curve.last().unwrap().last().unwrap()[1].abs() < 1e-6);
    }

    #[test]
    fn the_synchronous_torque_reaches_its_peak_inside_a_column() {
        // Closed form: the sine's peaks are at plus and minus pi/2 with value 1.
        let law = Law { harmonics: &[], peaks: [-PI / 2.0, PI / 2.0] };
        let torque = law.columns(&[column(0.5, 2.5)], -400.0);
        let torque = torque[0].unwrap();
        assert!((torque.min + 400.0).abs() < 1e-9, "{torque:?}");
        assert!((torque.first + 400.0 * 0.5_f64.sin()).abs() < 1e-9);
        let whole = law.columns(&[column(0.0, TAU)], 10.0)[0].unwrap();
        assert!((whole.min + 10.0).abs() < 1e-9 && (whole.max - 10.0).abs() < 1e-9);
        assert!(!whole.min_first);
    }
}
