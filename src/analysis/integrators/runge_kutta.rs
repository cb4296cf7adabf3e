//! Stability polynomials of explicit Runge-Kutta methods.

use crate::analysis::eigen::Excess;
use num_complex::Complex64;

/// An explicit Runge-Kutta method by its stability polynomial R(z) = sum of a_k z^k.
#[derive(Debug, Clone, PartialEq)]
pub struct RungeKutta {
    coefficients: Vec<f64>,
    /// Coefficients e_jk of |R(x + iy)|^2 - 1 = sum of e_jk x^j y^k, by (j, k); those that are zero but for rounding left out.
    modulus: Vec<(u16, u16, f64)>,
}

impl RungeKutta {
    /// A method with these coefficients of its stability polynomial, constant first.
    pub fn from_polynomial(coefficients: &[f64]) -> Self {
        RungeKutta { coefficients: coefficients.to_vec(), modulus: modulus_terms(coefficients) }
    }

    /// The method of s stages and order s whose polynomial is exp(z) cut off after z^s (every s-stage method of order s up to four).
    pub fn taylor(stages: usize) -> Self {
        let mut coefficients = vec![1.0];
        let mut factorial = 1.0;
        for k in 1..=stages {
            factorial *= k as f64;
            coefficients.push(1.0 / factorial);
        }
        Self::from_polynomial(&coefficients)
    }

    /// The method with this explicit Butcher tableau: a_1 = sum b_i, a_{k+1} = b^T A^k 1 (Hairer & Wanner, Solving Ordinary Differential
    /// Equations II, IV.2; from memory). Row i of `a` holds the i weights of the stages before stage i.
    pub fn from_butcher(a: &[&[f64]], b: &[f64]) -> Self {
        let stages = b.len();
        let (mut powers, mut coefficients) = (vec![1.0; stages], vec![1.0]);
        for _ in 0..stages {
            coefficients.push(b.iter().zip(&powers).map(|(b, p)| b * p).sum());
            powers = a.iter().map(|row| row.iter().zip(&powers).map(|(a, p)| a * p).sum()).collect();
            powers.resize(stages, 0.0);
        }
        Self::from_polynomial(&coefficients)
    }

    /// The method in low-storage (2N) form: dU_i = A_i dU_{i-1} + dt F(U_{i-1}), U_i = U_{i-1} + B_i dU_i (Williamson 1980, J. Comput.
    /// Phys. 35:48-56).
    pub fn from_low_storage(a: &[f64], b: &[f64]) -> Self {
        // For y' = lambda y every quantity is a polynomial in z; `u` and `du` hold their coefficients.
        let n = b.len() + 1;
        let (mut u, mut du) = (vec![0.0; n], vec![0.0; n]);
        u[0] = 1.0;
        for (a, b) in a.iter().zip(b) {
            for k in (0..n).rev() {
                du[k] = a * du[k] + if k > 0 { u[k - 1] } else { 0.0 };
            }
            u.iter_mut().zip(&du).for_each(|(u, du)| *u += b * du);
        }
        Self::from_polynomial(&u)
    }

    /// Coefficients of R, constant first.
    pub fn coefficients(&self) -> &[f64] {
        &self.coefficients
    }

    /// R(z).
    pub fn polynomial(&self, z: Complex64) -> Complex64 {
        self.coefficients.iter().rev().fold(Complex64::ZERO, |sum, a| sum * z + a)
    }

    /// |R(z)| - 1 with the digits of small growth kept.
    ///
    /// |R|^2 - 1 is summed as a polynomial in x and y whose coefficients that vanish by the order conditions are exactly zero, so that
    /// growth like y^4 or y^6 is seen however small y is.
    pub fn excess(&self, z: Complex64) -> Excess {
        let term = |&(j, k, e): &(u16, u16, f64)| e * z.re.powi(j.into()) * z.im.powi(k.into());
        let (square, size) =
            self.modulus.iter().map(term).fold((0.0, 0.0), |(sum, size), t: f64| (sum + t, size + t.abs()));
        let modulus = (1.0 + square).max(0.0).sqrt();
        let terms = self.modulus.len() as f64;
        Excess { value: square / (modulus + 1.0), uncertainty: f64::EPSILON * terms * size / (modulus + 1.0) }
    }
}

/// Terms of |R(x + iy)|^2 - 1. Coefficients below eps times the sum of what they are made of are zeros of the order conditions.
fn modulus_terms(coefficients: &[f64]) -> Vec<(u16, u16, f64)> {
    let s = coefficients.len() - 1;
    // |R|^2 = sum over m, n of a_m a_n z^m conj(z)^n, and z^m conj(z)^n is expanded in x and y.
    let side = 2 * s + 1;
    let (mut sums, mut sizes) = (vec![0.0; side * side], vec![0.0; side * side]);
    for (m, am) in coefficients.iter().enumerate() {
        for (n, an) in coefficients.iter().enumerate() {
            for k in 0..=m + n {
                let c = am * an * conjugate_product(m, n, k);
                let at = (m + n - k) * side + k;
                sums[at] += c;
                sizes[at] += c.abs();
            }
        }
    }
    sums[0] -= 1.0;
    sizes[0] += 1.0;
    let kept = (0..side * side).filter(|&at| sums[at].abs() > 8.0 * f64::EPSILON * sizes[at]);
    kept.map(|at| ((at / side) as u16, (at % side) as u16, sums[at])).collect()
}

/// Real part of the coefficient of x^(m + n - k) y^k in (x + iy)^m (x - iy)^n.
fn conjugate_product(m: usize, n: usize, k: usize) -> f64 {
    if k % 2 == 1 {
        return 0.0; // imaginary, and cancelled by the term with m and n exchanged
    }
    let sign = if (k / 2).is_multiple_of(2) { 1.0 } else { -1.0 };
    let term = |l: usize| binomial(m, k - l) * binomial(n, l) * if l.is_multiple_of(2) { 1.0 } else { -1.0 };
    sign * (0..=k).map(term).sum::<f64>()
}

fn binomial(n: usize, k: usize) -> f64 {
    if k > n { 0.0 } else { (0..k).fold(1.0, |c, i| c * (n - i) as f64 / (i + 1) as f64) }
}

#[cfg(test)]
mod tests {
    //! Trusted: |R(iy)|^2 - 1 of Taylor methods in closed form, and direct evaluation of |R(z)| away from one.
    use super::*;
    use crate::analysis::compare::agree;

    #[test]
    fn growth_is_that_of_the_polynomial() {
        for stages in 1..=7 {
            let method = RungeKutta::taylor(stages);
            for (x, y) in [(-1.3, 0.4), (0.2, -2.0), (-3.0, 3.0), (0.0, 1.0), (-2.0, 0.0)] {
                let z = Complex64::new(x, y);
                let excess = method.excess(z);
                let direct = method.polynomial(z).norm() - 1.0;
                agree(excess.value, direct, excess.uncertainty + 1e-14 * (1.0 + direct.abs())).unwrap();
            }
        }
    }

    #[test]
    fn weak_growth_keeps_its_power_at_any_size() {
        // |R(iy)|^2 - 1 = y^4/4, y^6/360 and y^8/2880 to leading order for two, five and six stages.
        for (stages, power, coefficient) in [(2, 4, 1.0 / 4.0), (5, 6, 1.0 / 360.0), (6, 8, 1.0 / 2880.0)] {
            for y in [1e-2, 1e-4, 1e-8_f64] {
                let excess = RungeKutta::taylor(stages).excess(Complex64::new(0.0, y));
                let expected = 0.5 * coefficient * y.powi(power);
                agree(excess.value / expected, 1.0, 1e-4).unwrap();
                assert!(excess.value > excess.uncertainty);
            }
        }
    }
}
