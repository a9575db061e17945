//! Straight lines between points, the end values held outside.

/// Straight lines between points, one piece a line, with the end values held outside.
#[derive(Clone, Debug, PartialEq)]
pub struct Polyline {
    bounds: Vec<f64>,
    lines: Vec<Line>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct Line {
    x: f64,
    y: f64,
    slope: f64,
}

impl Polyline {
    /// The curve through `points`, whose first members rise; no points at all give zero.
    pub fn new(points: &[[f64; 2]]) -> Self {
        let bounds = points.iter().map(|point| point[0]).collect();
        let held = |point: Option<&[f64; 2]>| {
            let [x, y] = point.copied().unwrap_or([0.0, 0.0]);
            Line { x, y, slope: 0.0 }
        };
        let mut lines = vec![held(points.first())];
        lines.extend(points.windows(2).map(|pair| {
            let ([x, y], [next_x, next_y]) = (pair[0], pair[1]);
            Line { x, y, slope: (next_y - y) / (next_x - x) }
        }));
        if !points.is_empty() {
            lines.push(held(points.last()));
        }
        Self { bounds, lines }
    }

    /// The odd function that is minus the curve for positive inputs: a torque against the motion
    /// read at |speed|. Its lines have a boundary at zero unless the curve starts from zero.
    pub fn against(points: &[[f64; 2]]) -> Self {
        let curve = Self::new(points);
        let skipped = usize::from(points.first().is_some_and(|point| point[0] <= 0.0));
        let bounds = curve.bounds.get(skipped..).unwrap_or_default();
        let forward: Vec<Line> = curve
            .lines
            .iter()
            .skip(skipped)
            .map(|line| Line { x: line.x, y: -line.y, slope: -line.slope })
            .collect();
        let backward = forward.iter().rev().map(|line| Line { x: -line.x, y: -line.y, ..*line });
        let smooth = usize::from(curve.at(0.0) == 0.0);
        Self {
            bounds: (bounds.iter().rev().map(|bound| -bound))
                .chain((smooth == 0).then_some(0.0))
                .chain(bounds.iter().copied())
                .collect(),
            lines: backward.chain(forward.iter().skip(smooth).copied()).collect(),
        }
    }

    /// The value at `x` on the line of `piece`.
    #[inline]
    pub fn value(&self, x: f64, piece: usize) -> f64 {
        self.lines.get(piece).map_or(0.0, |line| line.y + line.slope * (x - line.x))
    }

    /// The slope of the line of `piece`.
    #[inline]
    pub fn slope(&self, piece: usize) -> f64 {
        self.lines.get(piece).map_or(0.0, |line| line.slope)
    }

    /// The points' abscissas.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.bounds
    }

    /// The value at `x` on the line that holds it.
    pub fn at(&self, x: f64) -> f64 {
        self.value(x, self.bounds.partition_point(|bound| *bound <= x))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Closed form: straight lines.
    #[test]
    fn values_lie_on_the_lines_and_are_held_outside() {
        let curve = Polyline::new(&[[0.0, 1.0], [2.0, 5.0], [4.0, 3.0]]);
        for (x, y) in [(-1.0, 1.0), (0.0, 1.0), (1.0, 3.0), (2.0, 5.0), (3.0, 4.0), (9.0, 3.0)] {
            assert_eq!(curve.at(x).to_bits(), f64::to_bits(y), "at {x}");
        }
        assert_eq!(curve.slope(1).to_bits(), 2.0_f64.to_bits());
        assert_eq!(curve.value(2.5, 1).to_bits(), 6.0_f64.to_bits(), "a line goes on past its end");
    }
}
