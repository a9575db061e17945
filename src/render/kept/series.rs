//! From the rows of a series to the columns of a chart.

use crate::results::{Column, Trace, Traces};
use crate::solve::TraceRequest;
use std::io::Read;

/// Reads the rows and gathers them in the columns of a request.
///
/// Between two rows the value goes along a straight line, so that columns without a row of their
/// own are not empty.
pub fn traces(
    from: impl Read,
    channels: &[(&str, &'static str)],
    request: &TraceRequest,
) -> Result<Traces, String> {
    let mut reader = csv::ReaderBuilder::new().from_reader(from);
    let heads = reader.headers().map_err(|error| error.to_string())?.clone();
    let places: Vec<Option<usize>> = channels
        .iter()
        .map(|(name, unit)| {
            let wanted = format!("{name} [{unit}]");
            heads.iter().position(|head| head == wanted)
        })
        .collect();
    let mut grid = Grid::new(request);
    let mut columns = vec![vec![None; request.columns]; channels.len()];
    let mut before: Option<(f64, Vec<f64>)> = None;
    for record in reader.records() {
        let record = record.map_err(|error| error.to_string())?;
        let number = |place: usize| record.get(place).and_then(|text| text.parse::<f64>().ok());
        let Some(time) = number(0) else { continue };
        let values: Vec<f64> =
            places.iter().map(|place| place.and_then(number).unwrap_or(f64::NAN)).collect();
        if let Some((earlier, old)) = &before {
            for border in grid.borders(*earlier, time) {
                let share = (border.time - earlier) / (time - earlier);
                for ((columns, old), new) in columns.iter_mut().zip(old).zip(&values) {
                    let value = old + share * (new - old);
                    widen(columns.get_mut(border.left), value);
                    widen(columns.get_mut(border.left + 1), value);
                }
            }
        }
        if let Some(place) = grid.column(time) {
            for (columns, value) in columns.iter_mut().zip(&values) {
                widen(columns.get_mut(place), *value);
            }
        }
        before = Some((time, values));
    }
    let traces = channels
        .iter()
        .zip(columns)
        .map(|((name, unit), columns)| Trace { channel: (*name).to_owned(), unit, columns })
        .collect();
    Ok(Traces { start: request.start, end: request.end, traces, swings: Vec::new() })
}

/// The columns of a window.
struct Grid {
    start: f64,
    end: f64,
    width: f64,
    count: usize,
}

/// A border between two columns: its time and the column on its left.
struct Border {
    time: f64,
    left: usize,
}

impl Grid {
    fn new(request: &TraceRequest) -> Self {
        let count = request.columns.max(1);
        let width = (request.end - request.start) / count as f64;
        Self { start: request.start, end: request.end, width, count }
    }

    fn column(&self, time: f64) -> Option<usize> {
        if !(self.start..=self.end).contains(&time) || self.width <= 0.0 {
            return None;
        }
        Some((((time - self.start) / self.width) as usize).min(self.count - 1))
    }

    /// The borders strictly between two times.
    fn borders(&mut self, from: f64, to: f64) -> Vec<Border> {
        if self.width <= 0.0 || to <= from {
            return Vec::new();
        }
        let first = ((from - self.start) / self.width).floor().max(0.0) as usize;
        (first..self.count.saturating_sub(1))
            .map(|left| Border { time: self.start + self.width * (left + 1) as f64, left })
            .skip_while(|border| border.time <= from)
            .take_while(|border| border.time < to)
            .collect()
    }
}

fn widen(column: Option<&mut Option<Column>>, value: f64) {
    if let Some(column) = column
        && value.is_finite()
    {
        Column::take(column, value);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn request(columns: usize) -> TraceRequest {
        TraceRequest { start: 0.0, end: 1.0, columns, channels: Vec::new(), swings: false }
    }

    #[test]
    fn columns_between_rows_lie_on_a_straight_line() {
        let text = "time [s],a.speed [rad/s]\n0,0\n1,8\n";
        let found = traces(text.as_bytes(), &[("a.speed", "rad/s")], &request(4)).unwrap();
        let columns: Vec<Column> = found.traces[0].columns.iter().map(|it| it.unwrap()).collect();
        let ends: Vec<[f64; 2]> = columns.iter().map(|it| [it.first, it.last]).collect();
        assert_eq!(ends, [[0.0, 2.0], [2.0, 4.0], [4.0, 6.0], [6.0, 8.0]]);
    }

    #[test]
    fn a_peak_between_borders_is_kept() {
        let text = "time [s],a.speed [rad/s]\n0,0\n0.25,5\n0.5,-1\n1,0\n";
        let found = traces(text.as_bytes(), &[("a.speed", "rad/s")], &request(1)).unwrap();
        let column = found.traces[0].columns[0].unwrap();
        assert_eq!((column.max, column.min, column.min_first), (5.0, -1.0, false));
    }

    #[test]
    fn a_channel_that_is_not_there_is_empty() {
        let text = "time [s],a.speed [rad/s]\n0,0\n1,8\n";
        let found = traces(text.as_bytes(), &[("b.speed", "rad/s")], &request(2)).unwrap();
        assert!(found.traces[0].columns.iter().all(Option::is_none));
    }
}
