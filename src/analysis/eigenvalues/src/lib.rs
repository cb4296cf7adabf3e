//! Eigenvalues and singular values of dense complex matrices.
//!
//! A thin, non-generic face of the faer library. It stands in a crate of its own because faer's algorithms are generic and would
//! otherwise be compiled anew with every change of the harness. faer was chosen because its QR iteration converges on the cyclic shift
//! (first-order upwind at Courant number 1), on which an implementation without exceptional shifts never ends.
//!
//! Matrices are given by rows: entry (i, j) of an n x n matrix stands at `i * n + j`.

use faer::{Mat, c64};
use num_complex::Complex64;

/// Why a decomposition has no answer.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum DecompositionError {
    /// The array is no n x n matrix.
    #[error(
        "a matrix of {n} rows and {n} columns needs {} entries, but {found} were given; give all entries row by row",
        n * n
    )]
    Shape {
        /// Rows and columns asked for.
        n: usize,
        /// Entries given.
        found: usize,
    },
    /// An entry is NaN or infinite.
    #[error(
        "entry ({row}, {column}) of the matrix is {value}; a matrix with an entry that is not finite has no eigenvalues, so look for the operation that overflowed"
    )]
    NotFinite {
        /// Row of the first such entry, from zero.
        row: usize,
        /// Column of the first such entry, from zero.
        column: usize,
        /// The entry.
        value: Complex64,
    },
    /// The iteration did not converge.
    #[error(
        "the iteration for the eigenvalues of a {n} x {n} matrix did not converge; scale the matrix so that its entries are near one, or use a smaller grid"
    )]
    NoConvergence {
        /// Rows and columns.
        n: usize,
    },
}

/// Eigenvalues with right eigenvectors.
#[derive(Debug, Clone, PartialEq)]
pub struct Eigenpairs {
    /// The n eigenvalues, in no particular order.
    pub values: Vec<Complex64>,
    /// Vector of `values[k]` is `vectors[k]`, of unit Euclidean length.
    pub vectors: Vec<Vec<Complex64>>,
}

fn matrix(n: usize, entries: &[Complex64]) -> Result<Mat<c64>, DecompositionError> {
    if entries.len() != n * n {
        return Err(DecompositionError::Shape { n, found: entries.len() });
    }
    if let Some(at) = entries.iter().position(|v| !(v.re.is_finite() && v.im.is_finite())) {
        return Err(DecompositionError::NotFinite { row: at / n, column: at % n, value: entries[at] });
    }
    Ok(Mat::from_fn(n, n, |i, j| entries[i * n + j]))
}

/// All eigenvalues of a complex matrix, in no particular order.
///
/// # Errors
/// A wrong number of entries, an entry that is not finite, an iteration that does not converge.
pub fn eigenvalues(n: usize, entries: &[Complex64]) -> Result<Vec<Complex64>, DecompositionError> {
    let a = matrix(n, entries)?;
    a.eigenvalues().map_err(|_| DecompositionError::NoConvergence { n })
}

/// All eigenvalues of a real matrix, in no particular order. About twice as fast as the complex form.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn eigenvalues_of_real(n: usize, entries: &[f64]) -> Result<Vec<Complex64>, DecompositionError> {
    if entries.len() != n * n {
        return Err(DecompositionError::Shape { n, found: entries.len() });
    }
    if let Some(at) = entries.iter().position(|v| !v.is_finite()) {
        let value = Complex64::from(entries[at]);
        return Err(DecompositionError::NotFinite { row: at / n, column: at % n, value });
    }
    let a = Mat::from_fn(n, n, |i, j| entries[i * n + j]);
    a.eigenvalues().map_err(|_| DecompositionError::NoConvergence { n })
}

/// All eigenvalues of a complex matrix with their right eigenvectors.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn eigenpairs(n: usize, entries: &[Complex64]) -> Result<Eigenpairs, DecompositionError> {
    let a = matrix(n, entries)?;
    let found = a.eigen().map_err(|_| DecompositionError::NoConvergence { n })?;
    let (u, s) = (found.U(), found.S());
    let values = (0..n).map(|k| s[k]).collect();
    let vectors = (0..n).map(|k| unit((0..n).map(|i| u[(i, k)]).collect())).collect();
    Ok(Eigenpairs { values, vectors })
}

/// Eigenvalues of the Hermitian part (A + A^H) / 2, in rising order. The largest is the numerical abscissa of A.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn hermitian_part_eigenvalues(n: usize, entries: &[Complex64]) -> Result<Vec<f64>, DecompositionError> {
    matrix(n, entries)?;
    let h = Mat::from_fn(n, n, |i, j| (entries[i * n + j] + entries[j * n + i].conj()) * 0.5);
    h.self_adjoint_eigenvalues(faer::Side::Lower).map_err(|_| DecompositionError::NoConvergence { n })
}

/// Singular values in falling order. The first is the spectral norm.
///
/// # Errors
/// As for [`eigenvalues`].
pub fn singular_values(n: usize, entries: &[Complex64]) -> Result<Vec<f64>, DecompositionError> {
    let a = matrix(n, entries)?;
    a.singular_values().map_err(|_| DecompositionError::NoConvergence { n })
}

fn unit(mut v: Vec<Complex64>) -> Vec<Complex64> {
    let length = v.iter().map(Complex64::norm_sqr).sum::<f64>().sqrt();
    if length > 0.0 {
        v.iter_mut().for_each(|x| *x /= length);
    }
    v
}

#[cfg(test)]
mod tests;
