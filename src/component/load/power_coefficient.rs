//! Power coefficient of a wind or water rotor over tip speed ratio and pitch.
//!
//! ```text
//! formula    Cp = c1 (c2 z - c3 b - c4 b^c5 - c6) exp(-c7 z) + c10 lambda
//!            z  = 1/(lambda + c8 b) - c9/(b^3 + 1)                    b pitch in degrees
//! constant   Cp at every tip speed ratio and pitch
//! points     straight lines through points of lambda and Cp, whatever the pitch
//! table      straight lines over lambda, cubics over pitch (slopes from the neighbours); inline or
//!            from a file
//! ```
//!
//! The formula is that of Heier, Grid Integration of Wind Energy Conversion Systems, and of many
//! after him; the default constants are those of Slootweg, Polinder and Kling, IEEE Trans. Power
//! Systems 18(1) (2003) 144-151. At `lambda + c8 b <= 0` the formula's own limit from above, zero,
//! is taken, and a negative pitch is read as zero: the formula has a pole there.
//!
//! Points and tables hold their last values above their last tip speed ratio; below the first one
//! Cp goes straight to zero at `lambda = 0`, so that the torque holds. Outside its pitches a table
//! holds its end columns.

use super::coefficient_file::CoefficientFile;

/// Constants c1 to c10 of the default formula.
pub const DEFAULT: [f64; 10] = [0.73, 151.0, 0.58, 0.002, 2.14, 13.2, 18.4, -0.02, 0.003, 0.0];

/// How a power coefficient is given.
#[derive(Clone, Debug, PartialEq)]
pub enum PowerCoefficient {
    /// The formula with its constants c1 to c10.
    Formula([f64; 10]),
    /// The same everywhere.
    Constant(f64),
    /// By rows over the tip speed ratio.
    Rows(Rows),
}

/// Rows of power coefficients, one column for each pitch.
#[derive(Clone, Debug, PartialEq)]
pub struct Rows {
    ratios: Vec<f64>,
    pitches: Vec<f64>,
    values: Vec<Vec<f64>>,
    file: Option<CoefficientFile>,
}

impl Rows {
    /// From rising tip speed ratios, rising pitches (rad) and one row of values for each ratio.
    pub fn new(ratios: Vec<f64>, pitches: Vec<f64>, values: Vec<Vec<f64>>) -> Self {
        Self { ratios, pitches, values, file: None }
    }

    /// Rows that stand in a file: empty until it has been read.
    pub fn of_file(file: CoefficientFile) -> Self {
        Self { file: Some(file), ..Self::new(Vec::new(), Vec::new(), Vec::new()) }
    }

    /// The same rows, with the file that they come from.
    pub fn from_file(self, file: CoefficientFile) -> Self {
        Self { file: Some(file), ..self }
    }

    /// The file that they stand in, if they stand in one.
    pub fn file(&self) -> Option<&CoefficientFile> {
        self.file.as_ref()
    }

    /// Shows every number, in pairs with its tip speed ratio; pitches first.
    pub fn each(&self, take: &mut dyn FnMut(&[f64; 2])) {
        self.pitches.iter().for_each(|pitch| take(&[0.0, *pitch]));
        for (ratio, values) in self.ratios.iter().zip(&self.values) {
            values.iter().for_each(|value| take(&[*ratio, *value]));
        }
    }

    /// First and last tip speed ratio.
    pub fn range(&self) -> Option<[f64; 2]> {
        Some([*self.ratios.first()?, *self.ratios.last()?])
    }

    /// Value of one row at a pitch.
    fn row(&self, row: usize, weights: &Weights) -> f64 {
        let Some(values) = self.values.get(row) else { return 0.0 };
        weights.iter().map(|(column, weight)| weight * values.get(*column).unwrap_or(&0.0)).sum()
    }

    /// Columns and their weights at a pitch: a cubic through its neighbours' values and slopes.
    fn weights(&self, pitch: f64) -> Weights {
        let count = self.pitches.len();
        let above = self.pitches.partition_point(|known| *known <= pitch);
        if above == 0 || count < 2 {
            return [(0, 1.0), (0, 0.0), (0, 0.0), (0, 0.0)];
        }
        if above == count {
            return [(count - 1, 1.0), (0, 0.0), (0, 0.0), (0, 0.0)];
        }
        let (low, high) = (above - 1, above);
        let (before, after) = (low.saturating_sub(1), (high + 1).min(count - 1));
        let at = |column: usize| self.pitches[column];
        let width = at(high) - at(low);
        let u = (pitch - at(low)) / width;
        let (first, second) = (u * u * (3.0 - 2.0 * u), u * (1.0 - u) * (1.0 - u) * width);
        let third = -u * u * (1.0 - u) * width;
        // Slopes by the chord over both neighbours.
        let left = second / (at(high) - at(before));
        let right = third / (at(after) - at(low));
        [(before, -left), (low, 1.0 - first - right), (high, first + left), (after, right)]
    }

    /// Derivatives of the weights with respect to the pitch.
    fn weight_slopes(&self, pitch: f64) -> Weights {
        let count = self.pitches.len();
        let above = self.pitches.partition_point(|known| *known <= pitch);
        if above == 0 || above == count || count < 2 {
            return [(0, 0.0); 4];
        }
        let (low, high) = (above - 1, above);
        let (before, after) = (low.saturating_sub(1), (high + 1).min(count - 1));
        let at = |column: usize| self.pitches[column];
        let width = at(high) - at(low);
        let u = (pitch - at(low)) / width;
        let first = 6.0 * u * (1.0 - u) / width;
        let left = (1.0 - u) * (1.0 - 3.0 * u) / (at(high) - at(before));
        let right = -u * (2.0 - 3.0 * u) / (at(after) - at(low));
        [(before, -left), (low, -first - right), (high, first + left), (after, right)]
    }

    /// Value and derivative over the tip speed ratio on the line of `piece`.
    fn at(&self, ratio: f64, pitch: f64, piece: usize) -> (f64, f64) {
        self.by_weights(ratio, piece, &self.weights(pitch))
    }

    fn by_weights(&self, ratio: f64, piece: usize, weights: &Weights) -> (f64, f64) {
        let last = self.ratios.len().saturating_sub(1);
        if piece == 0 {
            let first = self.ratios.first().copied().unwrap_or(1.0);
            let slope = if first > 0.0 { self.row(0, weights) / first } else { 0.0 };
            return (slope * ratio, slope);
        }
        if piece > last {
            return (self.row(last, weights), 0.0);
        }
        let (from, to) = (self.ratios[piece - 1], self.ratios[piece]);
        let (low, high) = (self.row(piece - 1, weights), self.row(piece, weights));
        let slope = (high - low) / (to - from);
        (low + slope * (ratio - from), slope)
    }
}

/// Columns and weights; their sum is 1.
type Weights = [(usize, f64); 4];

impl PowerCoefficient {
    /// Value and derivative over the tip speed ratio, at a ratio above zero and a pitch in rad.
    #[inline]
    pub fn at(&self, ratio: f64, pitch: f64, piece: usize) -> (f64, f64) {
        match self {
            Self::Formula(constants) => formula(constants, ratio, pitch),
            Self::Constant(value) => (*value, 0.0),
            Self::Rows(rows) => rows.at(ratio, pitch, piece),
        }
    }

    /// Derivative with respect to the pitch, 1/rad.
    pub fn pitch_slope(&self, ratio: f64, pitch: f64, piece: usize) -> f64 {
        match self {
            Self::Formula(constants) => formula_over_pitch(constants, ratio, pitch),
            Self::Constant(_) => 0.0,
            Self::Rows(rows) => rows.by_weights(ratio, piece, &rows.weight_slopes(pitch)).0,
        }
    }

    /// True when the pitch changes anything.
    pub fn follows_pitch(&self) -> bool {
        match self {
            Self::Formula([_, _, c3, c4, _, _, _, c8, c9, _]) => {
                [c3, c4, c8, c9].iter().any(|constant| **constant != 0.0)
            }
            Self::Constant(_) => false,
            Self::Rows(rows) => rows.pitches.len() > 1,
        }
    }

    /// Tip speed ratios at which the line changes.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        match self {
            Self::Rows(rows) => &rows.ratios,
            _ => &[],
        }
    }
}

#[inline]
fn formula(constants: &[f64; 10], ratio: f64, pitch: f64) -> (f64, f64) {
    let [c1, c2, c3, c4, c5, c6, c7, c8, c9, c10] = *constants;
    let degrees = pitch.to_degrees().max(0.0);
    let power = if c4 != 0.0 && degrees > 0.0 { c4 * degrees.powf(c5) } else { 0.0 };
    let bias = c3 * degrees + power + c6;
    let reach = ratio + c8 * degrees;
    if reach <= 0.0 {
        return (0.0, 0.0);
    }
    let inverse = 1.0 / reach;
    let z = inverse - c9 / (degrees * degrees * degrees + 1.0);
    let decay = c1 * (-c7 * z).exp();
    if decay == 0.0 {
        // Also keeps an infinite `inverse` from making NaN of zero.
        return (c10 * ratio, c10);
    }
    let blade = c2 * z - bias;
    (decay * blade + c10 * ratio, decay * (c7 * blade - c2) * inverse * inverse + c10)
}

/// Derivative of the formula with respect to the pitch, 1/rad.
fn formula_over_pitch(constants: &[f64; 10], ratio: f64, pitch: f64) -> f64 {
    let [c1, c2, c3, c4, c5, c6, c7, c8, c9, _] = *constants;
    let degrees = pitch.to_degrees();
    let reach = ratio + c8 * degrees;
    if degrees <= 0.0 || reach <= 0.0 {
        return 0.0;
    }
    let (power, power_slope) = if c4 == 0.0 {
        (0.0, 0.0)
    } else {
        (c4 * degrees.powf(c5), c4 * c5 * degrees.powf(c5 - 1.0))
    };
    let below = degrees * degrees * degrees + 1.0;
    let z = 1.0 / reach - c9 / below;
    let decay = c1 * (-c7 * z).exp();
    if decay == 0.0 {
        return 0.0;
    }
    let z_slope = -c8 / (reach * reach) + 3.0 * c9 * degrees * degrees / (below * below);
    let blade = c2 * z - (c3 * degrees + power + c6);
    decay * (c2 * z_slope - c3 - power_slope - c7 * z_slope * blade) * 1.0_f64.to_degrees()
}

#[cfg(test)]
mod tests {
    use super::*;

    // Published sets of constants, values computed apart from the formula: (8, 0), (6, 5), (4, 0).
    #[test]
    fn published_sets_have_their_values() {
        let turbine = [0.5176, 116.0, 0.4, 0.0, 1.0, 5.0, 21.0, 0.08, 0.035, 0.0068];
        let heier = [0.5, 116.0, 0.4, 0.0, 1.0, 5.0, 21.0, 0.08, 0.035, 0.0];
        let earlier = [0.22, 116.0, 0.4, 0.0, 1.0, 5.0, 12.5, 0.08, 0.035, 0.0];
        for (constants, values) in [
            (turbine, [0.4797795393, 0.25783970788, 0.140148335672]),
            (heier, [0.410915320035, 0.209659686901, 0.109107743115]),
            (earlier, [0.388544072934, 0.34732780412, 0.298525486437]),
            (DEFAULT, [0.403882908061, 0.304422119869, 0.186854807643]),
        ] {
            let coefficient = PowerCoefficient::Formula(constants);
            for ((ratio, pitch), expected) in
                [(8.0, 0.0), (6.0, 5.0_f64), (4.0, 0.0)].into_iter().zip(values)
            {
                let (found, slope) = coefficient.at(ratio, pitch.to_radians(), 0);
                assert!((found - expected).abs() < 2e-11, "{ratio} {pitch}: {found} {expected}");
                let h = 1e-6;
                let near = |x| coefficient.at(x, pitch.to_radians(), 0).0;
                assert!(((near(ratio + h) - near(ratio - h)) / (2.0 * h) - slope).abs() < 1e-8);
            }
        }
    }

    #[test]
    fn rows_are_joined_by_lines_and_fall_to_zero_at_rest() {
        let rows = Rows::new(
            vec![2.0, 6.0, 10.0],
            vec![0.0, 0.1, 0.2],
            vec![vec![0.1, 0.08, 0.0], vec![0.45, 0.3, 0.1], vec![0.25, 0.1, -0.1]],
        );
        let coefficient = PowerCoefficient::Rows(rows);
        let at = |ratio: f64, pitch: f64| {
            let piece = coefficient.boundaries().partition_point(|bound| *bound <= ratio);
            coefficient.at(ratio, pitch, piece).0
        };
        for (ratio, pitch, expected) in [
            (1.0, 0.0, 0.05),
            (2.0, 0.0, 0.1),
            (4.0, 0.0, 0.275),
            (12.0, 0.0, 0.25),
            (6.0, 0.1, 0.3),
            (8.0, 0.2, 0.0),
            (6.0, 0.7, 0.1),
            (6.0, -0.3, 0.45),
            // Halfway between columns: (9 (p1 + p2) - p0 - p3)/16 where the spacing is even; here
            // the end slope is the chord of its own interval.
            (6.0, 0.15, 0.2 + 0.125 * (-0.35 / 2.0 + 0.2)),
        ] {
            assert!(
                (at(ratio, pitch) - expected).abs() < 1e-12,
                "{ratio} {pitch}: {}",
                at(ratio, pitch)
            );
        }
        // Smooth over the pitch at a column.
        let h = 1e-6;
        let slopes = [at(6.0, 0.1) - at(6.0, 0.1 - h), at(6.0, 0.1 + h) - at(6.0, 0.1)];
        assert!((slopes[0] - slopes[1]).abs() < 1e-10 && (slopes[0] / h + 1.75).abs() < 1e-4);
    }
}
