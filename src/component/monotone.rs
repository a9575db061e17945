//! Smooth curves through points that overshoot nowhere.
//!
//! ```text
//! y(x) = h00 y_i + h10 h d_i + h01 y_{i+1} + h11 h d_{i+1}       cubic Hermite, h = x_{i+1} - x_i
//! d_i  = (w1 + w2)/(w1/s_{i-1} + w2/s_i) where the secants s agree in sign, else 0
//! w1 = 2 h_i + h_{i-1},  w2 = h_i + 2 h_{i-1}
//! ```
//! Between two points the curve stays between their values; value and slope have no jump, so a run
//! need not stop at the points. End values are held outside (Fritsch and Butland, SIAM J. Sci. Stat.
//! Comput. 5(2), 1984; the ends by three points; from memory).

/// A smooth curve through points of rising abscissas.
#[derive(Clone, Debug, PartialEq)]
pub struct Monotone {
    points: Vec<[f64; 2]>,
    slopes: Vec<f64>,
}

impl Monotone {
    /// The curve through `points`; no points at all give zero.
    pub fn new(points: &[[f64; 2]]) -> Self {
        let steps: Vec<f64> = points.windows(2).map(|pair| pair[1][0] - pair[0][0]).collect();
        let secants: Vec<f64> = points
            .windows(2)
            .zip(&steps)
            .map(|(pair, step)| (pair[1][1] - pair[0][1]) / step)
            .collect();
        let inner = steps.windows(2).zip(secants.windows(2)).map(|(steps, secants)| {
            if secants[0] * secants[1] <= 0.0 {
                return 0.0;
            }
            let (first, second) = (2.0 * steps[1] + steps[0], steps[1] + 2.0 * steps[0]);
            (first + second) / (first / secants[0] + second / secants[1])
        });
        let slopes = match (steps.as_slice(), secants.as_slice()) {
            ([], _) | (_, []) => vec![0.0; points.len()],
            ([_], [secant]) => vec![*secant; 2],
            ([h0, h1, ..], [s0, s1, ..]) => {
                let (last, before) = (steps.len() - 1, steps.len() - 2);
                let [h2, h3] = [steps[before], steps[last]];
                let [s2, s3] = [secants[before], secants[last]];
                std::iter::once(end(*h0, *h1, *s0, *s1))
                    .chain(inner)
                    .chain(std::iter::once(end(h3, h2, s3, s2)))
                    .collect()
            }
            _ => vec![0.0; points.len()],
        };
        Self { points: points.to_vec(), slopes }
    }

    /// Value and slope at `x`.
    #[inline]
    pub fn at(&self, x: f64) -> (f64, f64) {
        let next = self.points.partition_point(|point| point[0] <= x);
        let Some(place) = next.checked_sub(1) else {
            return (self.points.first().map_or(0.0, |point| point[1]), 0.0);
        };
        let (Some([left, low]), Some([right, high])) =
            (self.points.get(place), self.points.get(next))
        else {
            return (self.points[place][1], 0.0);
        };
        let step = right - left;
        let t = (x - left) / step;
        let (d0, d1) = (self.slopes[place] * step, self.slopes[next] * step);
        let rise = high - low;
        // Horner form of the Hermite cubic.
        let (square, cube) = (3.0 * rise - 2.0 * d0 - d1, d0 + d1 - 2.0 * rise);
        let value = low + t * (d0 + t * (square + t * cube));
        (value, (d0 + t * (2.0 * square + 3.0 * t * cube)) / step)
    }
}

/// The slope at an end from its two steps and secants, kept from overshooting.
fn end(near: f64, far: f64, secant: f64, next: f64) -> f64 {
    let slope = ((2.0 * near + far) * secant - near * next) / (near + far);
    if slope * secant <= 0.0 {
        0.0
    } else if secant * next <= 0.0 && slope.abs() > 3.0 * secant.abs() {
        3.0 * secant
    } else {
        slope
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // SciPy 1.x, PchipInterpolator, through the same points.
    #[test]
    fn values_and_slopes_are_those_of_the_reference_library() {
        let curve = Monotone::new(&[[0.0, 2.0], [0.5, 1.7], [0.8, 1.2], [0.95, 0.5], [1.0, 0.0]]);
        for (x, value, slope) in REFERENCE {
            let found = curve.at(x);
            assert!((found.0 - value).abs() < 1e-12, "{x}: {found:?}");
            assert!((found.1 - slope).abs() < 1e-11, "{x}: {found:?}");
        }
        assert_eq!(curve.at(-1.0).0.to_bits(), 2.0_f64.to_bits());
        assert_eq!(curve.at(2.0).0.to_bits(), 0.0_f64.to_bits());
    }

    const REFERENCE: [(f64, f64, f64); 4] = [
        (0.1, 1.98349387755102, -0.318857142857143),
        (0.6, 1.58716721256404, -1.35802469135802),
        (0.9, 0.803212531527943, -5.35802469135803),
        (0.99, 0.113694623655914, -11.3298924731183),
    ];

    #[test]
    fn two_points_give_a_straight_line() {
        let line = Monotone::new(&[[0.0, 3.0], [1.0, 0.0]]);
        assert!((line.at(0.25).0 - 2.25).abs() < 1e-15);
        assert!((line.at(0.75).1 + 3.0).abs() < 1e-15);
    }
}
