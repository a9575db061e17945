//! Holding torques of friction elements at rest, and which of them must give way.
//!
//! ```text
//! (R M^-1 R') lambda = -R M^-1 Q
//! ```
//! The system is singular when elements hold the same member. Of all solutions the one is taken
//! in which each element carries in proportion to its breakaway torque: `lambda = S (S A S)^+ S b`
//! with `S = sqrt(breakaway)`. Elements over their limit are then held at it as applied torques
//! and the rest is shared again; the set holds when the balance still closes.

use nalgebra::{DMatrix, DVector};

/// Torque that a side which should hold nothing still does, as a share of the torques at work:
/// rounding of the balance must not open a clutch that has just closed.
const SLIGHT: f64 = 1e-9;

/// Torques up to which an element holds, N*m.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Against sliding forward; infinite where it passes any torque.
    pub forward: f64,
    /// Against sliding backward.
    pub backward: f64,
    /// Size of a torque of the train: by it a side is judged that holds next to nothing. Zero for
    /// elements that hold both ways alike.
    pub at_work: f64,
}

impl Limits {
    /// The same both ways.
    pub fn both(limit: f64) -> Self {
        Self { forward: limit, backward: limit, at_work: 0.0 }
    }

    /// Each way its own.
    pub fn sides([forward, backward]: [f64; 2], at_work: f64) -> Self {
        let slight = SLIGHT * at_work;
        Self { forward: forward.max(slight), backward: backward.max(slight), at_work }
    }

    /// Times a factor.
    pub fn scaled(self, factor: f64) -> Self {
        Self { forward: self.forward * factor, backward: self.backward * factor, ..self }
    }

    /// The limit on the side of a holding torque.
    pub fn of(self, torque: f64) -> f64 {
        if torque >= 0.0 { self.backward } else { self.forward }
    }

    /// The larger of the two, where it is infinite the size of the train's torques.
    pub fn largest(self) -> f64 {
        let larger = self.forward.max(self.backward);
        if larger.is_finite() { larger } else { self.at_work }
    }

    /// Share of the limits that a holding torque takes: above 1 the element must give way.
    pub fn use_by(self, torque: f64) -> f64 {
        if self.at_work == 0.0 {
            return match (torque == 0.0, self.backward > 0.0) {
                (true, _) => 0.0,
                (false, true) => torque.abs() / self.backward,
                (false, false) => f64::INFINITY,
            };
        }
        let side = |held: f64, limit: f64| {
            let size = if limit > 1e-6 * self.at_work { limit } else { self.at_work };
            if limit.is_finite() { 1.0 - (limit - held) / size } else { 0.0 }
        };
        side(-torque, self.forward).max(side(torque, self.backward)).max(0.0)
    }
}

/// Share of the largest eigenvalue below which a direction counts as redundant.
const RANK_TOLERANCE: f64 = 1e-12;

/// Rows count as parallel when the square of their cosine is less than 1 by no more than this.
const PARALLEL: f64 = 1e-13;

/// Balance that counts as closed, relative to the drive.
const BALANCE_TOLERANCE: f64 = 1e-12;

/// What a set of elements at rest does.
#[derive(Clone, Debug, PartialEq)]
pub struct Holding {
    /// Torque of each element along its row, N*m.
    pub torque: Vec<f64>,
    /// Whether all of them hold.
    pub holds: bool,
    /// Smallest margin, relative to the limits: negative when some element must give way.
    pub margin: f64,
    /// The element that is loaded most, relative to its limit.
    pub weakest: Option<usize>,
}

/// The pseudo-inverse of a symmetric positive semidefinite matrix.
///
/// Elements that share no body do not feel each other: each group of coupled rows is inverted by
/// itself, since the cost grows with the cube of a group.
pub fn pseudo_inverse(matrix: &DMatrix<f64>) -> DMatrix<f64> {
    let size = matrix.nrows();
    let mut inverse = DMatrix::zeros(size, size);
    for group in groups(matrix) {
        let block = DMatrix::from_fn(group.len(), group.len(), |i, j| matrix[(group[i], group[j])]);
        let block = inverse_of_group(block);
        for (i, row) in group.iter().enumerate() {
            for (j, column) in group.iter().enumerate() {
                inverse[(*row, *column)] = block[(i, j)];
            }
        }
    }
    inverse
}

/// Rows that are coupled by entries other than zero, each group rising.
fn groups(matrix: &DMatrix<f64>) -> Vec<Vec<usize>> {
    let size = matrix.nrows();
    let mut seen = vec![false; size];
    let mut groups = Vec::new();
    for first in 0..size {
        if seen[first] {
            continue;
        }
        seen[first] = true;
        let mut group = vec![first];
        let mut next = 0;
        while let Some(&row) = group.get(next) {
            next += 1;
            for column in 0..size {
                if !seen[column] && matrix[(row, column)] != 0.0 {
                    seen[column] = true;
                    group.push(column);
                }
            }
        }
        group.sort_unstable();
        groups.push(group);
    }
    groups
}

fn inverse_of_group(matrix: DMatrix<f64>) -> DMatrix<f64> {
    let size = matrix.nrows();
    if size == 1 {
        let value = matrix[(0, 0)];
        return DMatrix::from_element(1, 1, if value > 0.0 { 1.0 / value } else { 0.0 });
    }
    let bundles = bundles(&matrix);
    if bundles.len() < size {
        return inverse_of_bundles(&matrix, &bundles);
    }
    let eigen = matrix.symmetric_eigen();
    let largest = eigen.eigenvalues.amax();
    let mut inverse = DMatrix::zeros(size, size);
    for (place, value) in eigen.eigenvalues.iter().enumerate() {
        if *value > RANK_TOLERANCE * largest {
            let vector = eigen.eigenvectors.column(place);
            inverse += vector * vector.transpose() / *value;
        }
    }
    inverse
}

/// Rows of a semidefinite matrix that are multiples of each other.
struct Bundle {
    /// The first of them.
    first: usize,
    /// Each with its multiple of the first.
    rows: Vec<(usize, f64)>,
}

impl Bundle {
    /// Length of the multiples as a vector.
    fn length(&self) -> f64 {
        self.rows.iter().map(|(_, share)| share * share).sum::<f64>().sqrt()
    }
}

/// Rows put together where they are parallel: there `m_ij^2 = m_ii m_jj`, else it is less.
fn bundles(matrix: &DMatrix<f64>) -> Vec<Bundle> {
    let mut bundles: Vec<Bundle> = Vec::new();
    for row in 0..matrix.nrows() {
        let parallel = |bundle: &&mut Bundle| {
            let (cross, own) = (matrix[(row, bundle.first)], matrix[(row, row)]);
            let product = own * matrix[(bundle.first, bundle.first)];
            product > 0.0 && cross * cross >= product * (1.0 - PARALLEL)
        };
        match bundles.iter_mut().find(parallel) {
            Some(bundle) => {
                let share = matrix[(row, bundle.first)] / matrix[(bundle.first, bundle.first)];
                bundle.rows.push((row, share));
            }
            None => bundles.push(Bundle { first: row, rows: vec![(row, 1.0)] }),
        }
    }
    bundles
}

/// The pseudo-inverse of a matrix with parallel rows, by the small matrix of one row a bundle.
///
/// `M = Q N Q'` with orthonormal columns of `Q`, so `M^+ = Q N^+ Q'`: a hundred frictions on
/// wheels that turn as one cost no more than one.
fn inverse_of_bundles(matrix: &DMatrix<f64>, bundles: &[Bundle]) -> DMatrix<f64> {
    let lengths: Vec<f64> = bundles.iter().map(Bundle::length).collect();
    let small = DMatrix::from_fn(bundles.len(), bundles.len(), |i, j| {
        lengths[i] * matrix[(bundles[i].first, bundles[j].first)] * lengths[j]
    });
    let small = inverse_of_group(small);
    let mut inverse = DMatrix::zeros(matrix.nrows(), matrix.nrows());
    for (i, one) in bundles.iter().enumerate() {
        for (j, other) in bundles.iter().enumerate() {
            let value = small[(i, j)] / (lengths[i] * lengths[j]);
            for &(row, left) in &one.rows {
                for &(column, right) in &other.rows {
                    inverse[(row, column)] = left * value * right;
                }
            }
        }
    }
    inverse
}

/// Holding torques for accelerations `drive` along the rows, with limits of the moment.
pub fn hold(compliance: &DMatrix<f64>, drive: &[f64], limits: &[Limits]) -> Holding {
    let count = drive.len();
    if count == 0 {
        return Holding { torque: Vec::new(), holds: true, margin: f64::INFINITY, weakest: None };
    }
    let mut torque = vec![0.0; count];
    let mut clamped = vec![false; count];
    let mut first: Option<(Vec<f64>, f64, usize)> = None;
    for _ in 0..=count {
        let open: Vec<usize> = (0..count).filter(|place| !clamped[*place]).collect();
        let applied: Vec<f64> = (0..count)
            .map(|row| {
                -drive[row]
                    - (0..count)
                        .filter(|column| clamped[*column])
                        .map(|column| compliance[(row, column)] * torque[column])
                        .sum::<f64>()
            })
            .collect();
        share(compliance, &applied, limits, &open, &mut torque);
        let (mut worst, mut weakest) = (0.0, 0);
        for &place in &open {
            let use_of_limit = limits[place].use_by(torque[place]);
            if use_of_limit > worst {
                worst = use_of_limit;
                weakest = place;
            }
        }
        first.get_or_insert_with(|| (torque.clone(), worst, weakest));
        if worst <= 1.0 {
            // Without a clamped element the least-norm solution closes by itself.
            if !clamped.contains(&true) || closes(compliance, drive, &torque) {
                // With every element at its limit there is nothing left to spare.
                let margin = if open.is_empty() { 0.0 } else { 1.0 - worst };
                return Holding { torque, holds: true, margin, weakest: Some(weakest) };
            }
            break;
        }
        for &place in &open {
            if limits[place].use_by(torque[place]) > 1.0 {
                clamped[place] = true;
                torque[place] = limits[place].of(torque[place]).copysign(torque[place]);
            }
        }
    }
    let (torque, worst, weakest) = first.unwrap_or((torque, f64::INFINITY, 0));
    let margin = if worst.is_finite() { 1.0 - worst } else { -1.0 };
    Holding { torque, holds: false, margin: margin.min(-f64::MIN_POSITIVE), weakest: Some(weakest) }
}

/// Least-norm share among `open`, in proportion to the limits.
fn share(
    compliance: &DMatrix<f64>,
    applied: &[f64],
    limits: &[Limits],
    open: &[usize],
    torque: &mut [f64],
) {
    if open.is_empty() {
        return;
    }
    let root = |place: usize| limits[place].largest().max(f64::MIN_POSITIVE).sqrt();
    let largest = open.iter().map(|place| root(*place)).fold(0.0, f64::max);
    let weight: Vec<f64> = open.iter().map(|place| (root(*place) / largest).max(1e-6)).collect();
    let matrix = DMatrix::from_fn(open.len(), open.len(), |row, column| {
        weight[row] * compliance[(open[row], open[column])] * weight[column]
    });
    let right = DVector::from_fn(open.len(), |row, _| weight[row] * applied[open[row]]);
    let solution = pseudo_inverse(&matrix) * right;
    for (line, &place) in open.iter().enumerate() {
        torque[place] = weight[line] * solution[line];
    }
}

fn closes(compliance: &DMatrix<f64>, drive: &[f64], torque: &[f64]) -> bool {
    (0..drive.len()).all(|row| {
        let terms = (0..torque.len()).map(|column| compliance[(row, column)] * torque[column]);
        let size = terms.clone().map(f64::abs).sum::<f64>().max(drive[row].abs());
        (terms.sum::<f64>() + drive[row]).abs() <= BALANCE_TOLERANCE * size
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn both(limits: &[f64]) -> Vec<Limits> {
        limits.iter().map(|limit| Limits::both(*limit)).collect()
    }

    #[test]
    fn two_brakes_on_one_body_carry_in_proportion_to_their_breakaway() {
        // Closed form: 60 + 20 hold 80; at 40 they carry 30 and 10.
        let compliance = DMatrix::from_element(2, 2, 0.5);
        let held = hold(&compliance, &[-20.0, -20.0], &both(&[60.0, 20.0]));
        assert!(held.holds);
        assert!((held.torque[0] - 30.0).abs() < 1e-9 && (held.torque[1] - 10.0).abs() < 1e-9);
        assert!(hold(&compliance, &[-39.999, -39.999], &both(&[60.0, 20.0])).holds);
        assert!(!hold(&compliance, &[-40.001, -40.001], &both(&[60.0, 20.0])).holds);
    }

    #[test]
    fn parallel_rows_have_the_inverse_of_the_definition() {
        // Penrose's four conditions (Proc. Cambridge Phil. Soc. 51, 1955) for rows of which some
        // are multiples of others, some in a loop.
        let rows = DMatrix::from_row_slice(
            7,
            3,
            &[
                1.0, 0.0, 0.0, -2.5, 0.0, 0.0, 0.0, 1.0, 0.0, 1.0, -1.0, 0.0, 0.3, -0.3, 0.0, 0.0,
                0.0, 0.7, 0.0, 0.0, 1e-3,
            ],
        );
        let matrix = &rows * rows.transpose();
        let inverse = pseudo_inverse(&matrix);
        let near = |a: DMatrix<f64>, b: &DMatrix<f64>| {
            assert!((&a - b).amax() <= 1e-11 * b.amax(), "{a} {b}");
        };
        near(&matrix * &inverse * &matrix, &matrix);
        near(&inverse * &matrix * &inverse, &inverse);
        near((&matrix * &inverse).transpose(), &(&matrix * &inverse));
        near((&inverse * &matrix).transpose(), &(&inverse * &matrix));
    }

    #[test]
    fn a_hundred_on_one_member_carry_in_proportion_to_their_breakaway() {
        let limits: Vec<f64> = (1..=100).map(f64::from).collect();
        let compliance = DMatrix::from_element(100, 100, 0.25);
        // 5050 N*m of breakaway hold 1010 N*m: each carries a fifth of its own.
        let both: Vec<Limits> = limits.iter().map(|limit| Limits::both(*limit)).collect();
        let held = hold(&compliance, &[-0.25 * 1010.0; 100], &both);
        assert!(held.holds && (held.margin - 0.8).abs() < 1e-12);
        for (torque, limit) in held.torque.iter().zip(&limits) {
            assert!((torque - 0.2 * limit).abs() < 1e-10, "{torque} of {limit}");
        }
    }

    #[test]
    fn a_loop_holds_up_to_the_sum_that_statics_allows() {
        // Brakes of 50 on A and of 50 on B, a clutch of 50 between them; torque on A alone:
        // statics allows 50 (brake A) + 50 (through the clutch to brake B) = 100.
        let rows = DMatrix::from_row_slice(3, 2, &[1.0, 0.0, 0.0, 1.0, 1.0, -1.0]);
        let compliance = &rows * rows.transpose();
        let drive = |torque: f64| [torque, 0.0, torque];
        assert!(hold(&compliance, &drive(99.9), &both(&[50.0, 50.0, 50.0])).holds);
        assert!(!hold(&compliance, &drive(100.1), &both(&[50.0, 50.0, 50.0])).holds);
    }

    // Statics: a clutch that locks against forward motion only carries -30 and not +30; beside a
    // brake of 50 on the same members it leaves the wrong side to the brake.
    #[test]
    fn a_one_sided_element_carries_one_way_only() {
        let compliance = DMatrix::from_element(1, 1, 0.5);
        let clutch = Limits::sides([f64::INFINITY, 0.0], 100.0);
        assert!(hold(&compliance, &[15.0], &[clutch]).holds);
        assert!(!hold(&compliance, &[-15.0], &[clutch]).holds);
        let compliance = DMatrix::from_element(2, 2, 0.5);
        let beside = |drive: f64| hold(&compliance, &[drive; 2], &[clutch, Limits::both(50.0)]);
        assert!(beside(-24.9).holds && !beside(-25.1).holds);
        assert!(beside(1e6).holds);
        let held = beside(-20.0);
        assert!(held.torque[0].abs() < 1e-6 && (held.torque[1] - 40.0).abs() < 1e-6, "{held:?}");
    }
}
