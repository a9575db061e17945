//! Couplings and shafts whose stiffness changes with the twist: straight lines through points.
//!
//! ```text
//! torque(x) = y_i + k_i*(x - x_i)       between two points, x twist in rad, torque in N*m
//! energy(x) = integral of torque from 0 to x
//! ```
//! Beyond the last point its line goes on. The torque is zero at no twist and rises everywhere, so
//! every torque belongs to one twist. Rubber and steel couplings are given this way by their makers:
//! a soft first stage and stiffer ones behind it (common practice). The equations keep the line at no
//! twist in their linear part; the law here is what differs from it.

/// Torque over twist of an elastic element with stages.
#[derive(Clone, Debug, PartialEq)]
pub struct ElasticCurve {
    /// Twists at which one line ends and the next begins, rad.
    bounds: Vec<f64>,
    lines: Vec<Line>,
    /// Stiffness at no twist, N*m/rad.
    stiffness: f64,
    /// Twists between which there are points, rad.
    range: [f64; 2],
}

/// A straight line, with the energy at its point.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Line {
    x: f64,
    y: f64,
    slope: f64,
    energy: f64,
}

impl Line {
    fn energy_at(&self, twist: f64) -> f64 {
        let way = twist - self.x;
        self.energy + way * (self.y + 0.5 * self.slope * way)
    }
}

impl ElasticCurve {
    /// The curve through points of rising twist and torque, one of them at no twist and no torque.
    pub fn new(points: &[[f64; 2]]) -> Self {
        let mut lines: Vec<Line> = Vec::new();
        let mut energy = 0.0;
        for pair in points.windows(2) {
            let ([x, y], [next_x, next_y]) = (pair[0], pair[1]);
            let slope = (next_y - y) / (next_x - x);
            // A point on a straight line is no corner: the run need not stop there.
            let straight = |last: &Line| (last.slope - slope).abs() <= 1e-12 * slope.abs();
            if !lines.last().is_some_and(straight) {
                lines.push(Line { x, y, slope, energy });
            }
            energy += 0.5 * (y + next_y) * (next_x - x);
        }
        let bounds: Vec<f64> = lines.iter().skip(1).map(|line| line.x).collect();
        let middle = lines.get(bounds.partition_point(|bound| *bound <= 0.0)).copied();
        let stiffness = middle.map_or(0.0, |line| line.slope);
        // Energy counts from no twist.
        let none = middle.map_or(0.0, |line| line.energy_at(0.0));
        for line in &mut lines {
            line.energy -= none;
        }
        let twist = |point: Option<&[f64; 2]>| point.map_or(0.0, |point| point[0]);
        Self { bounds, lines, stiffness, range: [twist(points.first()), twist(points.last())] }
    }

    /// Stiffness at no twist, on the positive side, N*m/rad.
    pub fn stiffness(&self) -> f64 {
        self.stiffness
    }

    /// Torque beyond the line at no twist, on the line of `piece`.
    #[inline]
    pub fn beyond(&self, twist: f64, piece: usize) -> f64 {
        self.lines
            .get(piece)
            .map_or(0.0, |line| line.y + line.slope * (twist - line.x) - self.stiffness * twist)
    }

    /// Slope of [`ElasticCurve::beyond`].
    #[inline]
    pub fn beyond_slope(&self, piece: usize) -> f64 {
        self.lines.get(piece).map_or(0.0, |line| line.slope - self.stiffness)
    }

    /// Twists at which the lines meet.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.bounds
    }

    /// Twists between which there are points.
    pub fn range(&self) -> [f64; 2] {
        self.range
    }

    /// Torque and slope at a twist.
    pub fn at(&self, twist: f64) -> (f64, f64) {
        self.line(twist)
            .map_or((0.0, 0.0), |line| (line.y + line.slope * (twist - line.x), line.slope))
    }

    /// The twist under a torque.
    pub fn twist(&self, torque: f64) -> f64 {
        let place = self.lines.iter().skip(1).take_while(|line| line.y <= torque).count();
        self.lines.get(place).map_or(0.0, |line| line.x + (torque - line.y) / line.slope)
    }

    /// Energy beyond that of the line at no twist, J.
    pub fn energy_beyond(&self, twist: f64) -> f64 {
        self.line(twist)
            .map_or(0.0, |line| line.energy_at(twist) - 0.5 * self.stiffness * twist * twist)
    }

    fn line(&self, twist: f64) -> Option<&Line> {
        self.lines.get(self.bounds.partition_point(|bound| *bound <= twist))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Closed form: areas of triangles and trapezia. 100 N*m/rad to 0.1 rad, 500 beyond on the one
    // side; 200 and 400 from -0.2 rad on the other.
    #[test]
    fn torque_twist_and_energy_belong_together() {
        let points = [[-0.3, -80.0], [-0.2, -40.0], [0.0, 0.0], [0.1, 10.0], [0.2, 60.0]];
        let curve = ElasticCurve::new(&points);
        assert_eq!(curve.stiffness().to_bits(), 100.0_f64.to_bits());
        for (twist, torque, energy) in [
            (0.05, 5.0, 0.125),
            (0.2, 60.0, 0.5 + 3.5),
            (0.3, 110.0, 0.5 + 12.0),
            (-0.1, -20.0, 1.0),
            (-0.4, -120.0, 4.0 + 16.0),
        ] {
            let found = curve.at(twist).0;
            assert!((found - torque).abs() < 1e-12, "{twist}: {found}");
            assert!((curve.twist(torque) - twist).abs() < 1e-14, "{torque}");
            let stored = curve.energy_beyond(twist) + 0.5 * 100.0 * twist * twist;
            assert!((stored - energy).abs() < 1e-12, "{twist}: {stored}");
            let piece = curve.boundaries().partition_point(|bound| *bound <= twist);
            let beyond = curve.beyond(twist, piece) + 100.0 * twist;
            assert!((beyond - torque).abs() < 1e-12, "{twist}: {beyond}");
        }
    }
}
