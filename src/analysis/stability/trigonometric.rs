//! Growth of a one-component, one-dimensional stencil: |G|^2 - 1 as a polynomial in sin^2(theta/2).
//!
//! |G(theta)|^2 - 1 = sum over n of q_n w^n with w = 4 sin^2(theta/2) in [0, 4]. The consistency conditions make the low q_n vanish; in
//! floating point they come out as rounding errors, which would pass for growth (or hide it) at long waves, where everything that
//! matters is small. Coefficients within rounding are therefore set to zero, and the sign of the first one that is left decides about
//! long waves. The rest is a matter of where a polynomial is largest on an interval.

use super::theta::Worst;
use crate::analysis::eigen::Excess;
use crate::analysis::symbol::Stencil;

/// |G|^2 - 1: as a polynomial in w = 4 sin^2(theta/2) for long waves, as a cosine series for the others.
#[derive(Debug, Clone, PartialEq)]
pub struct StencilGrowth {
    /// q_n, and the bounds on their errors.
    coefficients: Vec<f64>,
    errors: Vec<f64>,
    /// r_k of the cosine series, less one at k = 0.
    series: Vec<f64>,
    /// Bound on the error of the series.
    series_error: f64,
}

/// Widest stencil whose polynomial keeps its digits for w up to [`LONG`].
const WIDEST: usize = 24;
/// Largest w at which the polynomial is used; at larger ones its terms cancel, and the series does not.
const LONG: f64 = 0.25;

impl StencilGrowth {
    /// The growth of a stencil; `None` unless it has one component in one dimension and spans at most 25 cells.
    ///
    /// `relative_noise` is the error of the coefficients relative to the largest: eps unless the scheme itself is noisy.
    pub fn new(stencil: &Stencil, relative_noise: f64) -> Option<Self> {
        if stencil.components() != 1 || stencil.dimensions() != 1 {
            return None;
        }
        let neighbours: Vec<(i64, f64)> = stencil.neighbours().map(|(d, c)| (d[0], c[0])).collect();
        let width = neighbours.iter().map(|n| n.0).max()? - neighbours.iter().map(|n| n.0).min()?;
        let degree = usize::try_from(width).ok().filter(|d| *d <= WIDEST)?;
        // |G|^2 = sum of r_k cos(k theta), with the autocorrelation r.
        // Coefficients are known to eps times the largest of them: one like 1 - c^2 near c = 1 has lost its own digits.
        let largest = neighbours.iter().map(|n| n.1.abs()).fold(0.0, f64::max);
        let (mut r, mut r_size) = (vec![0.0; degree + 1], vec![0.0; degree + 1]);
        for (i, a) in &neighbours {
            for (j, b) in &neighbours {
                let k = (i - j).unsigned_abs() as usize;
                r[k] += a * b;
                r_size[k] += 0.5 * largest * (a.abs() + b.abs());
            }
        }
        r[0] -= 1.0;
        r_size[0] += 1.0;
        let (mut coefficients, mut sizes) = (vec![0.0; degree + 1], vec![0.0; degree + 1]);
        for (k, (r, r_size)) in r.iter().zip(&r_size).enumerate() {
            for (n, c) in chebyshev(k).into_iter().enumerate() {
                coefficients[n] += r * c;
                sizes[n] += r_size * c.abs();
            }
        }
        let noise = 4.0 * relative_noise.max(f64::EPSILON);
        for (q, size) in coefficients.iter_mut().zip(&sizes) {
            if q.abs() <= noise * size {
                *q = 0.0;
            }
        }
        let errors = errors(&coefficients, &sizes.iter().map(|s| noise * s).collect::<Vec<_>>());
        let series_error = noise * r_size.iter().sum::<f64>();
        Some(StencilGrowth { coefficients, errors, series: r, series_error })
    }

    /// |G(theta)| - 1, with the digits of small growth kept.
    pub fn excess(&self, theta: f64) -> Excess {
        let w = 4.0 * (0.5 * theta).sin().powi(2);
        let sum = |q: &[f64]| q.iter().rev().fold(0.0, |sum, q| sum * w + q);
        let (square, error) = if w <= LONG {
            (sum(&self.coefficients), sum(&self.errors))
        } else {
            let terms = self.series.iter().enumerate().map(|(k, r)| r * (k as f64 * theta).cos());
            (terms.sum(), self.series_error)
        };
        let modulus = (1.0 + square).max(0.0).sqrt();
        Excess { value: square / (modulus + 1.0), uncertainty: error / (modulus + 1.0) }
    }

    /// The wavenumber that grows most, of all in [0, pi].
    pub fn worst(&self) -> Worst {
        let found = super::theta::worst_theta(|theta| Ok::<_, std::convert::Infallible>(self.excess(theta)), false);
        let Ok(mut worst) = found;
        // Growth at long waves alone may begin below every sampled theta; the first coefficient tells.
        if let Some(first) = self.coefficients.iter().position(|q| *q != 0.0)
            && self.coefficients[first] > 0.0
            && self.errors[..first].iter().all(|error| *error == 0.0)
            && worst.excess.value <= 0.0
        {
            let theta = 1e-7;
            let value = 0.5 * self.coefficients[first] * theta_power(theta, first);
            worst = Worst { theta, excess: Excess { value, uncertainty: 0.0 } };
        }
        worst
    }
}

/// Bounds on the errors of the coefficients, of which `noise` bounds the rounding.
///
/// Coefficients before the first that stands above rounding are zero by consistency, without error, where that one outweighs their
/// rounding at long waves; else they may as well be small, and the sign at long waves is open.
fn errors(coefficients: &[f64], noise: &[f64]) -> Vec<f64> {
    let mut errors = noise.to_vec();
    if let Some(first) = coefficients.iter().position(|q| *q != 0.0) {
        let outweighs = |n: usize| coefficients[first].abs() * LONG.powi((first - n) as i32) > noise[n];
        if (0..first).all(outweighs) {
            errors[..first].fill(0.0);
        }
    }
    errors
}

fn theta_power(theta: f64, n: usize) -> f64 {
    theta.powi(2 * n as i32)
}

/// Coefficients of cos(k theta) in powers of w = 4 sin^2(theta/2) = 2 - 2 cos(theta).
pub(super) fn chebyshev(k: usize) -> Vec<f64> {
    // cos(k t) obeys T_{k+1} = 2 cos(t) T_k - T_{k-1}, with cos(t) = 1 - w/2.
    let (mut before, mut now) = (vec![1.0], vec![1.0, -0.5]);
    if k == 0 {
        return before;
    }
    for _ in 1..k {
        let mut next = vec![0.0; now.len() + 1];
        for (n, c) in now.iter().enumerate() {
            next[n] += 2.0 * c;
            next[n + 1] -= c;
        }
        before.iter().enumerate().for_each(|(n, c)| next[n] -= c);
        (before, now) = (now, next);
    }
    now
}
