//! Boundedness of the powers of a matrix: |G| = 1 that is harmless told from |G| = 1 that grows.

use super::eigen::{DecompositionError, eigenpairs, spectral_excess};
use super::matrix::Matrix;
use num_complex::Complex64;

/// What the powers of a matrix do.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Powers {
    /// ||A^n|| stays below `bound`.
    Bounded {
        /// Largest Frobenius norm ||A^n|| met.
        bound: f64,
    },
    /// All |eigenvalues| are at most one, but ||A^n|| grows like n^`power`: a defective eigenvalue on the unit circle.
    Defective {
        /// Observed power of n, near a whole number.
        power: f64,
    },
    /// ||A^n|| grows like `factor`^n: an eigenvalue stands outside the unit circle by more than its uncertainty.
    Exponential {
        /// Growth of each step, above one.
        factor: f64,
    },
}

/// Growth of ||A^n||, by repeated squaring of the triangular (Schur) form up to n of about four million.
///
/// Two equal roots on the unit circle with one vector between them grow like n and are unstable; roots on the circle that all have
/// their own vectors are harmless. Eigenvalues alone cannot tell the two apart. `relative_noise` is the relative error of the entries, at
/// least eps.
///
/// # Errors
/// An entry that is not finite, or an iteration that does not converge.
pub fn powers(matrix: &Matrix, relative_noise: f64) -> Result<Powers, DecompositionError> {
    let excess = spectral_excess(matrix, relative_noise)?;
    if excess.value > excess.uncertainty {
        return Ok(Powers::Exponential { factor: 1.0 + excess.value });
    }
    // Rounding splits a defective pair into 1 +- 1e-8 (a triple into 1 +- 1e-5); powers stop before that could pass for growth.
    let doublings = (0.05 / excess.uncertainty).log2().floor().clamp(10.0, 22.0) as usize;
    Ok(classify(&largest_norms(&triangular(matrix)?, doublings)))
}

/// log2 of the largest ||T^n|| met for n = 1, 2, 4, ... 2^k, for k up to `doublings`.
fn largest_norms(triangular: &Matrix, doublings: usize) -> Vec<f64> {
    // The power is kept as 2^log * scaled, since one that dies out or rises first leaves the range of f64.
    let (mut scaled, mut log, mut so_far) = (triangular.clone(), 0.0, f64::NEG_INFINITY);
    let mut largest = Vec::with_capacity(doublings + 1);
    for _ in 0..=doublings {
        let norm = scaled.frobenius_norm();
        if norm > 0.0 {
            log += norm.log2();
            so_far = f64::max(so_far, log);
            let unit = Matrix::from_fn(scaled.size(), |i, j| scaled.at(i, j) / norm);
            log *= 2.0;
            // Of a triangular matrix no entry of the square cancels more than it must; of a full one near to defective all digits would go.
            scaled = &unit * &unit;
        }
        largest.push(so_far);
    }
    largest
}

fn classify(largest: &[f64]) -> Powers {
    let last = largest.len() - 1;
    // Over the last five doublings a bounded family is flat, and n^p rises by p each.
    let slope = (largest[last] - largest[last - 5]) / 5.0;
    if slope < 0.5 || largest[last] == f64::NEG_INFINITY {
        Powers::Bounded { bound: largest[last].exp2() }
    } else {
        Powers::Defective { power: slope }
    }
}

/// Upper triangular matrix that is unitarily similar to `matrix`, by deflation of one eigenvector after the other.
fn triangular(matrix: &Matrix) -> Result<Matrix, DecompositionError> {
    let n = matrix.size();
    let mut t = matrix.clone();
    for k in 0..n.saturating_sub(1) {
        let rest = Matrix::from_fn(n - k, |i, j| t.at(k + i, k + j));
        let pairs = eigenpairs(&rest)?;
        let reflected = reflector(&pairs.vectors[0]);
        let q = Matrix::from_fn(n, |i, j| match (i.checked_sub(k), j.checked_sub(k)) {
            (Some(i), Some(j)) => reflected.at(i, j),
            _ if i == j => Complex64::ONE,
            _ => Complex64::ZERO,
        });
        let turned = &(&q * &t) * &q;
        t = Matrix::from_fn(n, |i, j| match (i, j) {
            (i, j) if i == k && j == k => pairs.values[0],
            (i, j) if j <= k && i > j => Complex64::ZERO,
            _ => turned.at(i, j),
        });
    }
    Ok(t)
}

/// The Hermitian unitary matrix I - 2 v v^H / (v^H v) that turns the unit vector `x` into a multiple of the first axis.
fn reflector(x: &[Complex64]) -> Matrix {
    let direction = if x[0].norm() == 0.0 { Complex64::ONE } else { x[0] / x[0].norm() };
    let mut v = x.to_vec();
    v[0] += direction;
    let square: f64 = v.iter().map(Complex64::norm_sqr).sum();
    Matrix::from_fn(x.len(), |i, j| f64::from(u8::from(i == j)) - v[i] * v[j].conj() * (2.0 / square))
}

#[cfg(test)]
mod tests {
    //! Trusted: powers of Jordan blocks, rotations and companion matrices (closed forms).
    use super::*;
    use crate::analysis::compare::all_agree;

    fn real(rows: &[&[f64]]) -> Matrix {
        Matrix::from_fn(rows.len(), |i, j| rows[i][j].into())
    }

    fn grow(matrix: &Matrix) -> Powers {
        powers(matrix, f64::EPSILON).unwrap()
    }

    #[test]
    fn the_triangular_form_has_the_same_powers() {
        let a = Matrix::from_fn(5, |i, j| Complex64::new((1.0 + i as f64 * 0.7 + j as f64).sin(), 0.2 * i as f64));
        let t = triangular(&a).unwrap();
        let tolerance = 50.0 * f64::EPSILON * a.frobenius_norm().powi(3);
        // Traces of powers are unchanged by a similarity, the Frobenius norm by a unitary one.
        let traces = |m: &Matrix| -> Vec<Complex64> {
            let (two, three) = (m * m, &(m * m) * m);
            [m, &two, &three].map(|p| (0..5).map(|i| p.at(i, i)).sum()).to_vec()
        };
        all_agree(&traces(&t), &traces(&a), tolerance).unwrap();
        all_agree(&[t.frobenius_norm()], &[a.frobenius_norm()], tolerance).unwrap();
        assert!((0..5).all(|i| (0..i).all(|j| t.at(i, j) == Complex64::ZERO)));
    }

    #[test]
    fn powers_tell_defective_from_harmless() {
        // Leapfrog at s = 1 is defective; the identity and a rotation have double or simple roots on the circle and are harmless.
        let i = Complex64::I;
        let defective = Matrix::from_rows(2, vec![-2.0 * i, 1.0.into(), 1.0.into(), 0.0.into()]).unwrap();
        assert!(matches!(grow(&defective), Powers::Defective { power } if (power - 1.0).abs() < 1e-3));
        // ||A^n|| is n (n - 1) / 2 to leading order, and powers stop at n of about 2000: the power is seen as 2.004.
        let jordan = real(&[&[1.0, 1.0, 0.0], &[0.0, 1.0, 1.0], &[0.0, 0.0, 1.0]]);
        assert!(matches!(grow(&jordan), Powers::Defective { power } if (power - 2.0).abs() < 0.01));
        for harmless in [Matrix::identity(2), real(&[&[0.6, -0.8], &[0.8, 0.6]]), real(&[&[0.5, 7.0], &[0.0, -1.0]])] {
            assert!(matches!(grow(&harmless), Powers::Bounded { bound } if bound < 20.0));
        }
        // Close to defective yet bounded: the powers rise to about 1/gap = 22000 and stay there.
        let s = 1.0 - 1e-9;
        let near = Matrix::from_rows(2, vec![-2.0 * s * i, 1.0.into(), 1.0.into(), 0.0.into()]).unwrap();
        assert!(matches!(grow(&near), Powers::Bounded { bound } if bound > 1e4));
    }

    #[test]
    fn powers_of_growing_and_dying_matrices_stay_in_range() {
        assert!(matches!(grow(&real(&[&[1.001]])), Powers::Exponential { factor } if (factor - 1.001).abs() < 1e-9));
        assert!(matches!(grow(&real(&[&[1e100]])), Powers::Exponential { .. }));
        assert!(matches!(grow(&real(&[&[0.9]])), Powers::Bounded { bound } if (bound - 0.9).abs() < 1e-12));
        assert!(matches!(grow(&real(&[&[0.0, 5.0], &[0.0, 0.0]])), Powers::Bounded { bound } if bound >= 5.0 - 1e-12));
        assert!(matches!(grow(&real(&[&[0.0]])), Powers::Bounded { bound } if bound == 0.0));
        assert!(powers(&Matrix::scalar(f64::NAN.into()), 0.0).is_err());
    }
}
