//! Eigenvalues of the small complex blocks that symbols are made of, with how far each can be trusted.
//!
//! Sizes 1 and 2 are closed forms; larger ones go to the library behind [`gridassay_eigenvalues`].
//!
//! An eigenvalue of a matrix that is known to a relative error eps is itself known to eps ||A|| kappa, where kappa = ||x|| ||y|| / |y^H x|
//! is its condition number (x, y: right and left eigenvector); near a defective matrix kappa grows without bound and the error
//! tends to ||A|| eps^(1/m) (Wilkinson 1965, The Algebraic Eigenvalue Problem, ch. 2). Leapfrog at Courant number 1 is such a matrix: a
//! root on the unit circle is found at 1 + 1e-8, and only this bound tells that from growth.

use super::matrix::Matrix;
use gridassay_eigenvalues as dense;
pub use gridassay_eigenvalues::{DecompositionError, Eigenpairs};
use num_complex::Complex64;

/// All eigenvalues of a matrix, in no particular order.
///
/// # Errors
/// An entry that is not finite, or an iteration that does not converge.
pub fn eigenvalues(matrix: &Matrix) -> Result<Vec<Complex64>, DecompositionError> {
    match matrix.size() {
        0 => Ok(Vec::new()),
        1 | 2 => finite(matrix).map(|()| small(matrix)),
        n => dense::eigenvalues(n, matrix.entries()),
    }
}

/// All eigenvalues with right eigenvectors of unit length, in no particular order.
///
/// A defective matrix has fewer independent vectors than eigenvalues; vectors of equal eigenvalues are then parallel.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn eigenpairs(matrix: &Matrix) -> Result<Eigenpairs, DecompositionError> {
    match matrix.size() {
        0 => Ok(Eigenpairs { values: Vec::new(), vectors: Vec::new() }),
        1 | 2 => finite(matrix).map(|()| {
            let values = small(matrix);
            let vectors = small_vectors(matrix, &values);
            Eigenpairs { values, vectors }
        }),
        n => dense::eigenpairs(n, matrix.entries()),
    }
}

/// An eigenvalue with the bound on its error that rounding alone allows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Trusted {
    /// The eigenvalue.
    pub value: Complex64,
    /// Bound on |error|.
    pub uncertainty: f64,
}

/// All eigenvalues with the bounds on their errors, in no particular order.
///
/// `relative_noise` is the relative error of the matrix entries: eps for an exact stencil, more where the scheme itself is noisy.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn trusted_eigenvalues(matrix: &Matrix, relative_noise: f64) -> Result<Vec<Trusted>, DecompositionError> {
    let pairs = eigenpairs(matrix)?;
    let n = matrix.size();
    let noise = n.max(1) as f64 * relative_noise.max(f64::EPSILON);
    let norm = matrix.frobenius_norm();
    let worst = norm * noise.powf(1.0 / n.max(1) as f64);
    // Rows of the inverse of the vectors are the left eigenvectors, scaled so that y^H x = 1.
    let left = Matrix::from_fn(n, |i, k| pairs.vectors[k][i]).inverse();
    let condition = |k: usize| {
        left.as_ref().map_or(f64::INFINITY, |y| (0..n).map(|j| y.at(k, j).norm_sqr()).sum::<f64>().sqrt().max(1.0))
    };
    let trusted = |(k, &value)| {
        let bound = norm * noise * condition(k);
        Trusted { value, uncertainty: if bound < worst { bound } else { worst } }
    };
    Ok(pairs.values.iter().enumerate().map(trusted).collect())
}

/// Largest |eigenvalue| less one, with its uncertainty: positive means growth.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Excess {
    /// max |lambda| - 1, without cancellation.
    pub value: f64,
    /// Bound on its error.
    pub uncertainty: f64,
}

/// How far the spectral radius of a matrix exceeds one.
///
/// The eigenvalue that decides is the one with the largest excess beyond its own uncertainty, so that an ill-conditioned root on
/// the unit circle does not hide a well-conditioned one that grows.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn spectral_excess(matrix: &Matrix, relative_noise: f64) -> Result<Excess, DecompositionError> {
    let all = trusted_eigenvalues(matrix, relative_noise)?;
    let excess = all.iter().map(|t| Excess { value: modulus_excess(t.value), uncertainty: t.uncertainty });
    let least = Excess { value: -1.0, uncertainty: f64::EPSILON };
    Ok(excess.fold(least, |a, b| if b.value - b.uncertainty > a.value - a.uncertainty { b } else { a }))
}

/// |z| - 1 as (|z|^2 - 1) / (|z| + 1), which keeps the digits of a small excess.
///
/// ```
/// use gridassay::analysis::eigen::modulus_excess;
/// use num_complex::Complex64;
/// let z = Complex64::new(1.0, 1e-9);
/// assert!((modulus_excess(z) - 0.5e-18).abs() < 1e-30);
/// ```
pub fn modulus_excess(z: Complex64) -> f64 {
    let (large, small) = if z.re.abs() >= z.im.abs() { (z.re.abs(), z.im) } else { (z.im.abs(), z.re) };
    ((large - 1.0) * (large + 1.0) + small * small) / (z.norm() + 1.0)
}

fn finite(matrix: &Matrix) -> Result<(), DecompositionError> {
    let n = matrix.size();
    match matrix.entries().iter().position(|v| !(v.re.is_finite() && v.im.is_finite())) {
        Some(at) => Err(DecompositionError::NotFinite { row: at / n, column: at % n, value: matrix.entries()[at] }),
        None => Ok(()),
    }
}

fn small(matrix: &Matrix) -> Vec<Complex64> {
    if matrix.size() == 1 {
        return vec![matrix.at(0, 0)];
    }
    let (a, d) = (matrix.at(0, 0), matrix.at(1, 1));
    let (mean, half) = (0.5 * (a + d), 0.5 * (a - d));
    let root = (half * half + matrix.at(0, 1) * matrix.at(1, 0)).sqrt();
    vec![mean + root, mean - root]
}

fn small_vectors(matrix: &Matrix, values: &[Complex64]) -> Vec<Vec<Complex64>> {
    if matrix.size() == 1 {
        return vec![vec![Complex64::ONE]];
    }
    let (b, c) = (matrix.at(0, 1), matrix.at(1, 0));
    let diagonal = b == Complex64::ZERO && c == Complex64::ZERO;
    let vector = |(k, value): (usize, &Complex64)| {
        if diagonal {
            // `small` gives mean + root first, where root is (a - d) / 2 up to its sign.
            let first = (value - matrix.at(0, 0)).norm() <= (value - matrix.at(1, 1)).norm();
            let first = if matrix.at(0, 0) == matrix.at(1, 1) { k == 0 } else { first };
            return if first { [1.0, 0.0] } else { [0.0, 1.0] }.map(Complex64::from).to_vec();
        }
        // Both rows of A - lambda give the vector; the longer one does so without cancellation.
        let upper = [b, value - matrix.at(0, 0)];
        let lower = [value - matrix.at(1, 1), c];
        let length = |v: &[Complex64; 2]| v[0].norm().hypot(v[1].norm());
        let v = if length(&upper) >= length(&lower) { upper } else { lower };
        v.iter().map(|x| x / length(&v)).collect()
    };
    values.iter().enumerate().map(vector).collect()
}

#[cfg(test)]
mod tests {
    //! Trusted: closed-form eigenvalues (triangular, rotation, companion matrices), and A x = lambda x.
    use super::*;
    use crate::analysis::compare::agree;

    fn real(rows: &[&[f64]]) -> Matrix {
        Matrix::from_fn(rows.len(), |i, j| rows[i][j].into())
    }

    fn residual(a: &Matrix) -> f64 {
        let pairs = eigenpairs(a).unwrap();
        let residual = |(value, vector): (&Complex64, &Vec<Complex64>)| {
            let image = a.apply(vector);
            image.iter().zip(vector).map(|(y, x)| (y - value * x).norm()).fold(0.0, f64::max)
        };
        pairs.values.iter().zip(&pairs.vectors).map(residual).fold(0.0, f64::max)
    }

    #[test]
    fn vectors_satisfy_their_equation_at_every_size() {
        for n in 1..=9 {
            let a = Matrix::from_fn(n, |i, j| Complex64::new((i as f64 + 2.3 * j as f64).sin(), (i * j) as f64 * 0.1));
            assert!(residual(&a) <= 20.0 * f64::EPSILON * n as f64 * a.frobenius_norm());
        }
        for rows in
            [[[1.0, 0.0], [0.0, 2.0]], [[2.0, 0.0], [0.0, 1.0]], [[3.0, 0.0], [0.0, 3.0]], [[1.0, 1e-9], [0.0, 1.0]]]
        {
            let a = real(&[&rows[0], &rows[1]]);
            assert!(residual(&a) <= 4.0 * f64::EPSILON * a.frobenius_norm());
        }
    }

    #[test]
    fn leapfrog_is_trusted_to_its_limit_and_not_beyond() {
        // Roots i(-s +- sqrt(s^2 - 1)) or -is +- sqrt(1 - s^2), with s = c sin theta; on the circle up to s = 1.
        let leapfrog = |s: f64| {
            Matrix::from_fn(2, |i, j| {
                if i + j == 1 { 1.0.into() } else { Complex64::new(0.0, if i == 0 { -2.0 * s } else { 0.0 }) }
            })
        };
        for s in [0.1, 0.5, 0.99, 1.0 - 1e-9, 1.0 - 1e-15, 1.0] {
            let e = spectral_excess(&leapfrog(s), f64::EPSILON).unwrap();
            assert!(e.value <= e.uncertainty, "{s}: {e:?}");
        }
        for beyond in [1e-9, 1e-6, 1e-3] {
            let e = spectral_excess(&leapfrog(1.0 + beyond), f64::EPSILON).unwrap();
            assert!(e.value > e.uncertainty, "{beyond}: {e:?}");
            agree(e.value, beyond + (2.0 * beyond + beyond * beyond).sqrt(), e.uncertainty).unwrap();
        }
    }

    #[test]
    fn a_small_excess_keeps_its_digits() {
        // R(iy) of the second-order Runge-Kutta method: |R|^2 = 1 + y^4/4.
        let y = 1e-3_f64;
        let excess = modulus_excess(Complex64::new(1.0 - 0.5 * y * y, y));
        agree(excess, y.powi(4) / 8.0, 2.0 * f64::EPSILON).unwrap();
        agree(modulus_excess(Complex64::new(0.0, -2.0)), 1.0, f64::EPSILON).unwrap();
    }

    #[test]
    fn what_is_not_finite_has_no_eigenvalues() {
        for n in 1..=3 {
            let a = Matrix::from_fn(n, |i, j| if (i, j) == (0, n - 1) { f64::NAN.into() } else { 1.0.into() });
            assert!(matches!(eigenvalues(&a), Err(DecompositionError::NotFinite { row: 0, .. })));
            assert!(spectral_excess(&a, f64::EPSILON).is_err());
        }
    }
}
