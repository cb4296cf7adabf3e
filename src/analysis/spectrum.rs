//! A dense operator as a whole: spectrum, abscissas, transient growth and pseudospectra.
//!
//! For u' = A u growth in the long run is told by the spectral abscissa, growth at once by the numerical abscissa, and growth on the way by
//! the norm of exp(t A); for a step u <- A u by the spectral radius and the norms of A^n. Far from normal operators (closures at
//! boundaries) these differ by orders of magnitude (Trefethen & Embree 2005, Spectra and Pseudospectra).

use super::matrix::Matrix;
use gridassay_eigenvalues as dense;
use gridassay_eigenvalues::DecompositionError;
use num_complex::Complex64;

/// What a semi-discrete operator does in the long run and at once.
#[derive(Debug, Clone, PartialEq)]
pub struct Spectrum {
    /// All eigenvalues, by falling real part.
    pub eigenvalues: Vec<Complex64>,
    /// Largest real part of an eigenvalue: the rate of growth in the long run.
    pub spectral_abscissa: f64,
    /// Largest eigenvalue of (A + A^H) / 2: the fastest growth of the norm that any state has at once.
    pub numerical_abscissa: f64,
    /// Largest modulus of an eigenvalue.
    pub spectral_radius: f64,
}

/// The spectrum of an operator; minus infinity for the abscissas of an empty one.
///
/// # Errors
/// An entry that is not finite, or an iteration that does not converge.
pub fn spectrum(operator: &Matrix) -> Result<Spectrum, DecompositionError> {
    let (n, entries) = (operator.size(), operator.entries());
    let mut eigenvalues = dense::eigenvalues(n, entries)?;
    eigenvalues.sort_by(|a, b| b.re.total_cmp(&a.re).then(b.im.total_cmp(&a.im)));
    Ok(Spectrum {
        spectral_abscissa: eigenvalues.first().map_or(f64::NEG_INFINITY, |l| l.re),
        numerical_abscissa: dense::hermitian_part_eigenvalues(n, entries)?.last().copied().unwrap_or(f64::NEG_INFINITY),
        spectral_radius: eigenvalues.iter().map(|l| l.norm()).fold(0.0, f64::max),
        eigenvalues,
    })
}

/// The largest norm of a power, and when it is reached.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Transient {
    /// Largest spectral norm of A^n over n = 0 .. steps; at least one.
    pub growth: f64,
    /// The n at which it is reached.
    pub step: usize,
    /// Whether it was reached at the last step, so that more may follow.
    pub still_growing: bool,
}

/// Largest transient growth of u <- A u within a number of steps, in the Euclidean norm.
///
/// # Errors
/// A power that overflows, or an iteration that does not converge.
pub fn transient_growth(step: &Matrix, steps: usize) -> Result<Transient, DecompositionError> {
    let mut power = Matrix::identity(step.size());
    let mut found = Transient { growth: 1.0, step: 0, still_growing: false };
    for n in 1..=steps {
        power = &power * step;
        let norm = spectral_norm(&power)?;
        if norm > found.growth {
            found = Transient { growth: norm, step: n, still_growing: n == steps };
        }
    }
    Ok(found)
}

/// exp(t A) by scaling and squaring of its Taylor series.
///
/// Scaled until ||t A|| <= 1/2, where eighteen terms leave less than eps. Its powers serve [`transient_growth`] for u' = A u.
pub fn exponential(operator: &Matrix, time: f64) -> Matrix {
    let n = operator.size();
    let norm = operator.frobenius_norm() * time.abs();
    let halvings = if norm > 0.5 && norm.is_finite() { (norm.log2() + 1.0).ceil() as i32 } else { 0 };
    let factor = time * 0.5_f64.powi(halvings);
    let scaled = Matrix::from_fn(n, |i, j| operator.at(i, j) * factor);
    let mut sum = Matrix::identity(n);
    // Horner: I + A (I + A/2 (I + A/3 ...)).
    for k in (1..=18).rev() {
        let product = &scaled * &sum;
        sum = Matrix::from_fn(n, |i, j| product.at(i, j) / f64::from(k) + f64::from(u8::from(i == j)));
    }
    (0..halvings).fold(sum, |power, _| &power * &power)
}

/// Spectral norm: the largest singular value.
///
/// # Errors
/// An entry that is not finite, or an iteration that does not converge.
pub fn spectral_norm(matrix: &Matrix) -> Result<f64, DecompositionError> {
    Ok(dense::singular_values(matrix.size(), matrix.entries())?.first().copied().unwrap_or(0.0))
}

/// Smallest singular value of z - A: z belongs to the epsilon-pseudospectrum where it is at most epsilon.
///
/// # Errors
/// As for [`spectral_norm`].
pub fn resolvent_distance(operator: &Matrix, z: Complex64) -> Result<f64, DecompositionError> {
    let n = operator.size();
    let shifted = Matrix::from_fn(n, |i, j| if i == j { z - operator.at(i, j) } else { -operator.at(i, j) });
    Ok(dense::singular_values(n, shifted.entries())?.last().copied().unwrap_or(f64::INFINITY))
}

/// Pseudospectral abscissa: the largest real part of any eigenvalue of A + E with ||E|| <= epsilon.
///
/// By criss-cross search (Burke, Lewis & Overton 2003, IMA J. Numer. Anal. 23:359-375; from memory), which converges to the global maximum: the
/// rightmost point of the pseudospectrum on horizontal lines, then its sections with the vertical line through the best point.
///
/// # Errors
/// An entry that is not finite, or an iteration that does not converge.
pub fn pseudospectral_abscissa(operator: &Matrix, epsilon: f64) -> Result<f64, DecompositionError> {
    let start = spectrum(operator)?;
    let Some(rightmost) = start.eigenvalues.first() else { return Ok(f64::NEG_INFINITY) };
    let scale = operator.frobenius_norm() + epsilon;
    let mut best = rightmost_on_line(operator, epsilon, rightmost.im)?.unwrap_or(rightmost.re + epsilon);
    for _ in 0..50 {
        let crossings = crossings_of_column(operator, epsilon, best, scale)?;
        let mut next = best;
        for pair in crossings.windows(2) {
            let middle = 0.5 * (pair[0] + pair[1]);
            if let Some(x) = rightmost_on_line(operator, epsilon, middle)? {
                next = next.max(x);
            }
        }
        let gained = next - best;
        best = next;
        if gained <= 1e-12 * scale {
            break;
        }
    }
    Ok(best)
}

/// Largest x with sigma_min(x + iy - A) = epsilon: the largest real eigenvalue of [[B, eps], [eps, B^H]] with B = A - iy.
fn rightmost_on_line(operator: &Matrix, epsilon: f64, y: f64) -> Result<Option<f64>, DecompositionError> {
    let n = operator.size();
    let shift = |i: usize, j: usize| if i == j { Complex64::new(0.0, y) } else { Complex64::ZERO };
    let b = |i: usize, j: usize| operator.at(i, j) - shift(i, j);
    let entries = paired(n, b, epsilon, epsilon, |i, j| b(j, i).conj());
    let values = dense::eigenvalues(2 * n, &entries)?;
    // Real eigenvalues come out with a small imaginary part where two are close, as at the rightmost point itself.
    let tolerance = f64::EPSILON.sqrt() * (operator.frobenius_norm() + y.abs() + epsilon);
    Ok(values.iter().filter(|v| v.im.abs() <= tolerance).map(|v| v.re).max_by(f64::total_cmp))
}

/// The y, in rising order, at which sigma_min(x + iy - A) = epsilon may hold: the imaginary eigenvalues of a Hamiltonian matrix.
fn crossings_of_column(operator: &Matrix, epsilon: f64, x: f64, scale: f64) -> Result<Vec<f64>, DecompositionError> {
    let n = operator.size();
    let shift = |i: usize, j: usize| if i == j { Complex64::from(x) } else { Complex64::ZERO };
    let a = |i: usize, j: usize| operator.at(i, j) - shift(i, j);
    let entries = paired(n, a, epsilon, -epsilon, |i, j| -a(j, i).conj());
    let values = dense::eigenvalues(2 * n, &entries)?;
    let tolerance = f64::EPSILON.sqrt() * (scale + x.abs());
    let mut crossings: Vec<f64> = values.iter().filter(|v| v.re.abs() <= tolerance).map(|v| v.im).collect();
    crossings.sort_by(f64::total_cmp);
    Ok(crossings)
}

/// Entries by rows of [[upper, right I], [left I, lower]].
fn paired(
    n: usize,
    upper: impl Fn(usize, usize) -> Complex64,
    right: f64,
    left: f64,
    lower: impl Fn(usize, usize) -> Complex64,
) -> Vec<Complex64> {
    let on_diagonal = |i: usize, j: usize, value: f64| if i == j { value.into() } else { Complex64::ZERO };
    let entry = |at: usize| match (at / (2 * n), at % (2 * n)) {
        (i, j) if i < n && j < n => upper(i, j),
        (i, j) if i < n => on_diagonal(i, j - n, right),
        (i, j) if j < n => on_diagonal(i - n, j, left),
        (i, j) => lower(i - n, j - n),
    };
    (0..4 * n * n).map(entry).collect()
}

#[cfg(test)]
mod tests {
    //! Trusted: normal matrices, whose pseudospectra are discs about the eigenvalues; the 2 x 2 Jordan block, for which everything is known in
    //! closed form; the upwind operator with an inflow boundary, a single Jordan block.
    use super::*;
    use crate::analysis::compare::{agree, all_agree};

    fn real(rows: &[&[f64]]) -> Matrix {
        Matrix::from_fn(rows.len(), |i, j| rows[i][j].into())
    }

    #[test]
    fn a_normal_operator_has_no_surprises() {
        // Periodic central differences with a little damping: eigenvalues -0.1 + i sin(theta).
        let n = 12;
        let a = Matrix::from_fn(n, |i, j| {
            let d = (n + j - i) % n;
            (if d == 0 {
                -0.1
            } else if d == 1 {
                -0.5
            } else if d == n - 1 {
                0.5
            } else {
                0.0
            })
            .into()
        });
        let s = spectrum(&a).unwrap();
        agree(s.spectral_abscissa, -0.1, 1e-14).unwrap();
        agree(s.numerical_abscissa, -0.1, 1e-14).unwrap();
        agree(pseudospectral_abscissa(&a, 0.05).unwrap(), -0.05, 1e-7).unwrap();
        let step = exponential(&a, 0.3);
        assert_eq!(transient_growth(&step, 20).unwrap(), Transient { growth: 1.0, step: 0, still_growing: false });
    }

    #[test]
    fn a_jordan_block_in_closed_form() {
        // A = [[-1, k], [0, -1]]: numerical abscissa -1 + k/2; sigma_min(z - A) with w = |z + 1| is (sqrt(k^2 + 4 w^2) - k) / 2, so that the
        // epsilon-pseudospectral abscissa is -1 + sqrt(epsilon^2 + epsilon k); exp(tA) = e^-t [[1, kt], [0, 1]].
        let k = 10.0;
        let a = real(&[&[-1.0, k], &[0.0, -1.0]]);
        let s = spectrum(&a).unwrap();
        agree(s.spectral_abscissa, -1.0, 1e-14).unwrap();
        agree(s.numerical_abscissa, -1.0 + 0.5 * k, 1e-13).unwrap();
        for epsilon in [1e-3, 0.1, 1.0_f64] {
            let expected = -1.0 + (epsilon * epsilon + epsilon * k).sqrt();
            agree(pseudospectral_abscissa(&a, epsilon).unwrap(), expected, 1e-7).unwrap();
            agree(resolvent_distance(&a, expected.into()).unwrap(), epsilon, 1e-7).unwrap();
        }
        let t = 0.7_f64;
        let decay = (-t).exp();
        let expected = [decay, decay * k * t, 0.0, decay].map(Complex64::from);
        all_agree(exponential(&a, t).entries(), &expected, 1e-14).unwrap();
        // Norm of exp(tA) in closed form: e^-t (kt + sqrt(k^2 t^2 + 4)) / 2; its maximum over t = 0.1 n lies at n = 10.
        let found = transient_growth(&exponential(&a, 0.1), 40).unwrap();
        let norm = |t: f64| (-t).exp() * 0.5 * (k * t + (k * k * t * t + 4.0).sqrt());
        let best = (0..=40).max_by(|i, j| norm(0.1 * f64::from(*i)).total_cmp(&norm(0.1 * f64::from(*j)))).unwrap();
        agree(found.growth, norm(0.1 * f64::from(best)), 1e-12).unwrap();
        assert_eq!((found.step, found.still_growing), (best as usize, false));
    }

    #[test]
    fn upwind_with_an_inflow_boundary_is_far_from_normal() {
        // All eigenvalues are -1/h, although signals cross the domain undamped: the pseudospectrum reaches far to the right.
        let n = 16;
        let a = Matrix::from_fn(n, |i, j| {
            (if i == j {
                -1.0
            } else if i == j + 1 {
                1.0
            } else {
                0.0
            })
            .into()
        });
        let abscissa = pseudospectral_abscissa(&a, 1e-3).unwrap();
        assert!(abscissa > -0.5, "{abscissa}");
        agree(resolvent_distance(&a, abscissa.into()).unwrap(), 1e-3, 1e-8).unwrap();
    }

    #[test]
    fn growing_and_broken_operators_are_told() {
        let found = transient_growth(&real(&[&[1.1]]), 5).unwrap();
        agree(found.growth, 1.1_f64.powi(5), 1e-14).unwrap();
        assert!(found.still_growing);
        assert!(spectrum(&real(&[&[f64::NAN]])).is_err());
        assert!(transient_growth(&real(&[&[1e200]]), 5).is_err());
    }

    #[test]
    fn the_abscissa_of_a_generic_operator_touches_its_line_and_no_more() {
        // Slow reference: along the vertical line through the abscissa the smallest sigma_min is epsilon itself.
        let a = Matrix::from_fn(5, |i, j| {
            let k = (5 * i + j) as f64;
            Complex64::new((1.1 * k).sin() + if j > i { 2.0 } else { 0.0 }, (2.3 * k).cos())
        });
        for epsilon in [0.01, 0.3] {
            let x = pseudospectral_abscissa(&a, epsilon).unwrap();
            let distance = |i: i32| resolvent_distance(&a, Complex64::new(x, 0.002 * f64::from(i))).unwrap();
            let least = (-3000..=3000).map(distance).fold(f64::INFINITY, f64::min);
            // sigma_min changes by no more than z does: a sample 0.001 beside the nearest point is at most 0.001^2 / (2 epsilon) higher.
            agree(least, epsilon, 0.5e-6 / epsilon).unwrap();
        }
    }
}
