//! Roots of the Adams-Bashforth methods.

use crate::analysis::eigen::{DecompositionError, Excess, eigenvalues, spectral_excess};
use crate::analysis::matrix::Matrix;
use num_complex::Complex64;

/// The Adams-Bashforth method of a number of steps: y_{n+1} = y_n + dt sum of b_j f_{n-j}.
#[derive(Debug, Clone, PartialEq)]
pub struct AdamsBashforth {
    weights: Vec<f64>,
}

impl AdamsBashforth {
    /// The method with two, three or four steps; `None` for other numbers. Weights: Bashforth & Adams 1883, as in any text.
    pub fn new(steps: usize) -> Option<Self> {
        let weights: &[f64] = match steps {
            2 => &[3.0 / 2.0, -1.0 / 2.0],
            3 => &[23.0 / 12.0, -16.0 / 12.0, 5.0 / 12.0],
            4 => &[55.0 / 24.0, -59.0 / 24.0, 37.0 / 24.0, -9.0 / 24.0],
            _ => return None,
        };
        Some(AdamsBashforth { weights: weights.to_vec() })
    }

    /// Companion matrix of the characteristic polynomial zeta^k - zeta^(k-1) - z sum of b_j zeta^(k-1-j).
    fn companion(&self, z: Complex64) -> Matrix {
        Matrix::from_fn(self.weights.len(), |i, j| match (i, j) {
            (0, 0) => 1.0 + z * self.weights[0],
            (0, j) => z * self.weights[j],
            (i, j) if i == j + 1 => Complex64::ONE,
            _ => Complex64::ZERO,
        })
    }

    /// Largest |root| less one; infinite where the roots cannot be computed.
    pub fn excess(&self, z: Complex64) -> Excess {
        let failed = |_: DecompositionError| Excess { value: f64::INFINITY, uncertainty: 0.0 };
        spectral_excess(&self.companion(z), f64::EPSILON).unwrap_or_else(failed)
    }

    /// The root nearest to exp(z); NaN where the roots cannot be computed.
    pub fn principal_root(&self, z: Complex64) -> Complex64 {
        let roots = eigenvalues(&self.companion(z)).unwrap_or_default();
        let distance = |root: &Complex64| (root - z.exp()).norm();
        roots
            .into_iter()
            .min_by(|a, b| distance(a).total_cmp(&distance(b)))
            .unwrap_or(Complex64::new(f64::NAN, f64::NAN))
    }
}
