//! Eigenvalues and right eigenvectors of a real matrix.
//!
//! Eigenvalues come from the Schur form of the balanced matrix; each vector is the right singular
//! vector of the smallest singular value of `J - lambda I`; two Newton steps on the pair polish
//! both (Wilkinson, *The Algebraic Eigenvalue Problem*, 1965).

use nalgebra::linalg::{Schur, balancing};
use nalgebra::{Complex, DMatrix, DVector};

/// Eigenvalues closer than this share of their size are taken as one that repeats.
const REPEATED: f64 = 1e-8;

/// An eigenvalue, its vector, and whether it stands alone.
#[derive(Clone, Debug)]
pub struct Root {
    /// 1/s.
    pub value: Complex<f64>,
    /// Over the states of the matrix.
    pub vector: DVector<Complex<f64>>,
}

/// All roots with imaginary part zero or above, or `None` when the iteration does not converge.
pub fn roots(matrix: &DMatrix<f64>) -> Option<Vec<Root>> {
    let size = matrix.nrows();
    if size == 0 {
        return Some(Vec::new());
    }
    if matrix.iter().any(|value| !value.is_finite()) {
        return None;
    }
    let mut balanced = matrix.clone();
    let _ = balancing::balance_parlett_reinsch(&mut balanced);
    let schur = Schur::try_new(balanced, f64::EPSILON, 10_000)?;
    let mut values: Vec<Complex<f64>> =
        schur.complex_eigenvalues().iter().copied().filter(|value| value.im >= 0.0).collect();
    values.sort_by(|a, b| a.norm().total_cmp(&b.norm()).then(a.im.total_cmp(&b.im)));
    let fastest = values.iter().map(|value| value.norm()).fold(0.0, f64::max);
    let whole = matrix.map(|value| Complex::new(value, 0.0));
    let mut found = Vec::with_capacity(values.len());
    let mut next = 0;
    while next < values.len() {
        let near = REPEATED * values[next].norm() + 1e-14 * fastest;
        let mut last = next + 1;
        while last < values.len() && (values[last] - values[next]).norm() <= near {
            last += 1;
        }
        let group = &values[next..last];
        let mean = group.iter().sum::<Complex<f64>>() / group.len() as f64;
        let vectors = null_vectors(&whole, mean, group.len())?;
        for (value, vector) in group.iter().zip(vectors) {
            let mut root = Root { value: *value, vector };
            if group.len() == 1 {
                polish(&whole, &mut root, fastest);
            }
            found.push(root);
        }
        next = last;
    }
    Some(found)
}

/// The right singular vectors of the `count` smallest singular values of `J - value I`.
fn null_vectors(
    matrix: &DMatrix<Complex<f64>>,
    value: Complex<f64>,
    count: usize,
) -> Option<Vec<DVector<Complex<f64>>>> {
    let size = matrix.nrows();
    let mut shifted = matrix.clone();
    for place in 0..size {
        shifted[(place, place)] -= value;
    }
    let svd = shifted.try_svd(false, true, f64::EPSILON, 10_000)?;
    let right = svd.v_t?;
    let mut order: Vec<usize> = (0..size).collect();
    order.sort_by(|a, b| svd.singular_values[*a].total_cmp(&svd.singular_values[*b]));
    Some(order.iter().take(count).map(|line| right.row(*line).adjoint()).collect())
}

/// Newton on `(J - lambda) v = 0, v0* v = 1`: both to the last digits that their condition allows.
fn polish(matrix: &DMatrix<Complex<f64>>, root: &mut Root, fastest: f64) {
    let size = matrix.nrows();
    for _ in 0..2 {
        let mut bordered = DMatrix::zeros(size + 1, size + 1);
        bordered.view_mut((0, 0), (size, size)).copy_from(matrix);
        for place in 0..size {
            bordered[(place, place)] -= root.value;
            bordered[(place, size)] = -root.vector[place];
            bordered[(size, place)] = root.vector[place].conj();
        }
        let residual = &root.vector * root.value - matrix * &root.vector;
        let mut right = DVector::zeros(size + 1);
        right.rows_mut(0, size).copy_from(&residual);
        let Some(step) = bordered.lu().solve(&right) else { return };
        let change = step[size];
        // A step that is more than rounding means a pair that does not stand alone: leave it.
        let rounding = change.norm() <= 1e-6 * root.value.norm() + 1e-10 * fastest;
        if !rounding {
            return;
        }
        root.value += change;
        for place in 0..size {
            root.vector[place] += step[place];
        }
        let norm = root.vector.norm();
        root.vector /= Complex::new(norm, 0.0);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_companion_matrix_gives_the_roots_of_its_polynomial() {
        // (x^2 + 2x + 5)(x + 3): roots -1 +- 2i and -3 (closed form).
        let matrix = DMatrix::from_row_slice(3, 3, &[0., 1., 0., 0., 0., 1., -15., -11., -5.]);
        let found = roots(&matrix).unwrap();
        assert_eq!(found.len(), 2);
        assert!((found[0].value - Complex::new(-1.0, 2.0)).norm() < 1e-13);
        assert!((found[1].value - Complex::new(-3.0, 0.0)).norm() < 1e-13);
        for root in found {
            let whole = matrix.map(|value| Complex::new(value, 0.0));
            assert!((&whole * &root.vector - &root.vector * root.value).norm() < 1e-13);
        }
    }

    #[test]
    fn repeated_roots_keep_independent_vectors() {
        // Two equal oscillators side by side: i*2 twice.
        let mut matrix = DMatrix::zeros(4, 4);
        for pair in [0, 2] {
            matrix[(pair, pair + 1)] = 1.0;
            matrix[(pair + 1, pair)] = -4.0;
        }
        let found = roots(&matrix).unwrap();
        assert_eq!(found.len(), 2);
        let overlap = found[0].vector.dotc(&found[1].vector).norm();
        assert!(overlap < 1e-12, "{overlap}");
    }
}
