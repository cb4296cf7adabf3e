//! Direct solvers for tridiagonal systems, plain and cyclic: factor once, solve often.
//!
//! Elimination without pivoting (the Thomas algorithm). It is stable for the matrices met here: diagonally dominant
//! ones, and those of implicit central advection, whose pivots d_i = 1 + c^2 / (4 d_{i-1}) never fall below 1. A
//! pivot of zero gives a result that is not finite.

/// A factored tridiagonal matrix; row i is (lower\[i\], diagonal\[i\], upper\[i\]), lower\[0\] and upper\[n-1\] are
/// not used.
#[derive(Clone, Debug, Default)]
pub struct Tridiagonal {
    lower: Vec<f64>,
    upper: Vec<f64>,
    inverse_pivot: Vec<f64>,
}

impl Tridiagonal {
    /// Factors the matrix.
    pub fn new(lower: &[f64], diagonal: &[f64], upper: &[f64]) -> Self {
        let n = diagonal.len();
        let mut factored = Self { lower: lower.to_vec(), upper: upper.to_vec(), inverse_pivot: vec![0.0; n] };
        for i in 0..n {
            let pivot = match i {
                0 => diagonal[0],
                _ => diagonal[i] - lower[i] * factored.upper[i - 1],
            };
            factored.inverse_pivot[i] = 1.0 / pivot;
            factored.upper[i] = upper[i] / pivot;
        }
        factored
    }

    /// Replaces the right-hand side by the solution.
    pub fn solve(&self, right: &mut [f64]) {
        let n = right.len();
        right[0] *= self.inverse_pivot[0];
        for i in 1..n {
            right[i] = (right[i] - self.lower[i] * right[i - 1]) * self.inverse_pivot[i];
        }
        for i in (0..n - 1).rev() {
            right[i] -= self.upper[i] * right[i + 1];
        }
    }
}

/// A factored cyclic tridiagonal matrix with equal rows (lower, diagonal, upper): row 0 reaches back to the last
/// column, the last row to column 0. Solved as a plain tridiagonal matrix plus a matrix of rank one (Sherman &
/// Morrison 1950). At least 3 rows.
#[derive(Clone, Debug, Default)]
pub struct Cyclic {
    plain: Tridiagonal,
    correction: Vec<f64>,
    tail_weight: f64,
    scale: f64,
}

impl Cyclic {
    /// Factors the matrix of `n` rows.
    pub fn new(n: usize, lower: f64, diagonal: f64, upper: f64) -> Self {
        // The rank-one part is (gamma, 0, ..., 0, upper)^T (1, 0, ..., 0, lower / gamma).
        let gamma = -diagonal;
        let mut diagonals = vec![diagonal; n];
        diagonals[0] -= gamma;
        diagonals[n - 1] -= lower * upper / gamma;
        let plain = Tridiagonal::new(&vec![lower; n], &diagonals, &vec![upper; n]);
        let mut correction = vec![0.0; n];
        correction[0] = gamma;
        correction[n - 1] = upper;
        plain.solve(&mut correction);
        let tail_weight = lower / gamma;
        let scale = 1.0 / (1.0 + correction[0] + tail_weight * correction[n - 1]);
        Self { plain, correction, tail_weight, scale }
    }

    /// Replaces the right-hand side by the solution.
    pub fn solve(&self, right: &mut [f64]) {
        self.plain.solve(right);
        let amount = (right[0] + self.tail_weight * right[right.len() - 1]) * self.scale;
        for (value, correction) in right.iter_mut().zip(&self.correction) {
            *value -= amount * correction;
        }
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: multiplication by the matrix, written out here.
    use super::*;

    #[test]
    fn the_plain_solver_undoes_the_product() {
        let n = 7;
        let (lower, diagonal, upper) = ([0.3; 7], [2.0; 7], [-0.7; 7]);
        let x: Vec<f64> = (0..n).map(|i| (i as f64).sin()).collect();
        let mut right: Vec<f64> = (0..n)
            .map(|i| {
                let left = if i > 0 { lower[i] * x[i - 1] } else { 0.0 };
                let above = if i + 1 < n { upper[i] * x[i + 1] } else { 0.0 };
                left + diagonal[i] * x[i] + above
            })
            .collect();
        Tridiagonal::new(&lower, &diagonal, &upper).solve(&mut right);
        // The condition number is below 3 and each unknown costs a few roundings.
        assert!(right.iter().zip(&x).all(|(a, b)| (a - b).abs() < 20.0 * f64::EPSILON));
    }

    #[test]
    fn the_cyclic_solver_undoes_the_product() {
        for (lower, diagonal, upper) in [(-0.45, 1.0, 0.45), (-3.0, 7.0, -3.0), (0.25, 1.0, 0.25), (-2.0, 1.0, 2.0)] {
            let n = 9;
            let x: Vec<f64> = (0..n).map(|i| (i as f64).cos()).collect();
            let mut right: Vec<f64> =
                (0..n).map(|i| lower * x[(i + n - 1) % n] + diagonal * x[i] + upper * x[(i + 1) % n]).collect();
            Cyclic::new(n, lower, diagonal, upper).solve(&mut right);
            // Condition numbers below 10, rows of norm below 13.
            assert!(right.iter().zip(&x).all(|(a, b)| (a - b).abs() < 200.0 * f64::EPSILON));
        }
    }
}
