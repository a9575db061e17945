//! The figures behind charts in a plane, as columns.

use super::curve::wrap;
use super::swing::SwingChart;
use super::torque_speed::{Characteristic, TorqueSpeed};

/// Rows of a table.
const ROWS: usize = 25;

/// A table of figures: heads with units, then rows.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Columns {
    /// Heads.
    pub heads: Vec<String>,
    /// Rows, one cell a head; `None`: no value there.
    pub rows: Vec<Vec<Option<f64>>>,
}

/// Torques at even speeds, in display units.
pub fn torque_speed(input: &TorqueSpeed) -> Columns {
    let curves: Vec<&Characteristic> =
        [Some(&input.motor), input.load.as_ref()].into_iter().flatten().collect();
    let unit = &input.display.torque;
    let speed = &input.display.speed;
    let mut heads = vec![format!("Speed, {}", speed.text)];
    heads.extend(curves.iter().map(|curve| format!("{}, {}", curve.label, unit.text)));
    if curves.len() == 2 {
        heads.push(format!("Accelerating, {}", unit.text));
    }
    if input.pull_out.is_some() {
        heads.push(format!("Pull-out, {}", unit.text));
    }
    let speeds = curves.iter().flat_map(|curve| &curve.points).map(|point| point[0]);
    let (low, high) = speeds
        .filter(|speed| speed.is_finite())
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), it| (low.min(it), high.max(it)));
    if low >= high {
        return Columns { heads, rows: Vec::new() };
    }
    let rows = (0..ROWS)
        .map(|place| {
            let at = low + (high - low) * place as f64 / (ROWS - 1) as f64;
            let found: Vec<Option<f64>> =
                curves.iter().map(|curve| height(&curve.points, at)).collect();
            let mut row = vec![Some(speed.of(at))];
            row.extend(found.iter().map(|it| it.map(|torque| unit.of(torque))));
            if let [drive, load] = found.as_slice() {
                let left = drive.zip(*load).map(|(drive, load)| unit.of(drive - load));
                row.push(left);
            }
            row.extend(input.pull_out.map(|torque| Some(unit.of(torque))));
            row
        })
        .collect();
    Columns { heads, rows }
}

/// Load angle and slip speed at even times of the run.
pub fn swing(input: &SwingChart) -> Columns {
    let heads = ["Time, s", "Load angle, electrical degrees", "Slip speed, electrical rad/s"];
    let heads = heads.map(str::to_owned).to_vec();
    let path = &input.swing.path;
    let (Some(first), Some(last)) = (path.first(), path.last()) else {
        return Columns { heads, rows: Vec::new() };
    };
    let rows = (0..ROWS)
        .filter_map(|place| {
            let at = first[0] + (last[0] - first[0]) * place as f64 / (ROWS - 1) as f64;
            let after = path.partition_point(|point| point[0] < at);
            let point = path.get(after).or(path.last())?;
            let wrapped = wrap(&vec![vec![[0.0, point[1]], [1.0, point[1]]]]);
            let angle = wrapped.first().and_then(|piece| piece.first()).map(|pair| pair[1]);
            Some(vec![Some(point[0]), angle, Some(point[2])])
        })
        .collect();
    Columns { heads, rows }
}

/// Height of a polyline at a place across, by straight lines; `None` beyond its ends.
fn height(points: &[[f64; 2]], at: f64) -> Option<f64> {
    points.windows(2).find_map(|pair| {
        let ([x0, y0], [x1, y1]) = (pair[0], pair[1]);
        let inside = (x0.min(x1)..=x0.max(x1)).contains(&at);
        let share = if x1 == x0 { 0.0 } else { (at - x0) / (x1 - x0) };
        (inside && share.is_finite()).then_some(y0 + share * (y1 - y0))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_read_between_their_points_and_not_beyond() {
        let points = [[0.0, 0.0], [2.0, 4.0], [3.0, 4.0]];
        assert_eq!(height(&points, 1.0), Some(2.0));
        assert_eq!(height(&points, 3.0), Some(4.0));
        assert_eq!(height(&points, 3.1), None);
    }
}
