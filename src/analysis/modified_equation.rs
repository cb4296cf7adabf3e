//! The modified equation: the differential equation that a scheme solves to higher order.
//!
//! With moments M_n = sum of c_m m^n the symbol is G = sum of M_n (i theta)^n / n!, and ln G = sum of mu_n (i theta)^n, so that the scheme
//! solves u_t = sum of mu_n (h^n / dt) d^n u / dx^n (Warming & Hyett 1974, J. Comput. Phys. 14:159-179). Even terms damp, odd ones disperse.

use super::symbol::Stencil;
use num_complex::Complex64;

/// Coefficients mu_0, mu_1, ... of the modified equation, with bounds on their errors.
#[derive(Debug, Clone, PartialEq)]
pub struct ModifiedEquation {
    /// mu_n, the coefficient of (i theta)^n in ln G.
    pub coefficients: Vec<f64>,
    /// Bound on the error of each.
    pub errors: Vec<f64>,
}

/// The first term that should not be there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LeadingTerm {
    /// n, the order of the derivative.
    pub derivative: usize,
    /// mu_n less its exact value.
    pub coefficient: f64,
}

/// Rounding of the series logarithm: products of moments, each a sum over the stencil.
const ROUNDING: f64 = 32.0 * f64::EPSILON;

impl ModifiedEquation {
    /// The modified equation from the moments of a one-component, one-dimensional stencil, up to derivative `highest`.
    ///
    /// `None` for other stencils, and where the mean is not kept positive (G(0) <= 0).
    pub fn from_stencil(stencil: &Stencil, highest: usize) -> Option<Self> {
        if stencil.components() != 1 || stencil.dimensions() != 1 {
            return None;
        }
        let mut series = vec![0.0; highest + 1];
        let mut sizes = vec![0.0; highest + 1];
        for (offset, c) in stencil.neighbours() {
            let mut power = 1.0;
            for n in 0..=highest {
                series[n] += c[0] * power;
                sizes[n] += (c[0] * power).abs();
                power *= offset[0] as f64 / (n + 1) as f64;
            }
        }
        let mean = series[0];
        if !(mean.is_finite() && mean > 0.0) {
            return None;
        }
        let scaled = |v: Vec<f64>| v.into_iter().map(|x| x / mean).collect::<Vec<_>>();
        let (mut coefficients, errors) = logarithm(&scaled(series), &scaled(sizes));
        coefficients[0] = mean.ln();
        Some(ModifiedEquation { coefficients, errors })
    }

    /// The modified equation fitted through ln G at some small theta > 0, where there is no short stencil.
    ///
    /// Re ln G is a polynomial in theta^2, and so is Im ln G / theta: both are interpolated through all samples, which must have distinct
    /// theta and logarithms that are continuous from theta = 0. 2 n samples give mu_0 .. mu_{2n-1} and as many again, of which the first half
    /// are returned; their error is the change that leaving out the last sample makes. `None` for fewer than three samples.
    pub fn from_samples(samples: &[(f64, Complex64)]) -> Option<Self> {
        if samples.len() < 3 {
            return None;
        }
        let fit = |samples: &[(f64, Complex64)]| {
            let squares: Vec<f64> = samples.iter().map(|s| s.0 * s.0).collect();
            let even = interpolate(&squares, samples.iter().map(|s| s.1.re).collect());
            let odd = interpolate(&squares, samples.iter().map(|s| s.1.im / s.0).collect());
            // (i theta)^(2k) = (-1)^k theta^(2k).
            let sign = |k: usize| if k.is_multiple_of(2) { 1.0 } else { -1.0 };
            let pairs = even.into_iter().zip(odd).enumerate();
            pairs.flat_map(|(k, (e, o))| [sign(k) * e, sign(k) * o]).collect::<Vec<f64>>()
        };
        let mut coefficients = fit(samples);
        let fewer = fit(&samples[..samples.len() - 1]);
        // Rounding of ln G at the longest wave is all that is known of its n-th term to within rounding / theta^n.
        let longest = samples.iter().map(|s| s.0.abs()).fold(f64::INFINITY, f64::min);
        let rounding = |n: usize| ROUNDING / longest.powi(n as i32);
        let pairs = coefficients.iter().zip(&fewer).enumerate().take(samples.len());
        let errors = pairs.map(|(n, (a, b))| (a - b).abs().max(rounding(n))).collect();
        coefficients.truncate(samples.len());
        Some(ModifiedEquation { coefficients, errors })
    }

    /// The first term that differs from the exact ones: `exact[n]` is the exact coefficient of (i theta)^n, zero beyond its end.
    ///
    /// For advection at Courant number c: [0, -c]; for diffusion at diffusion number r: [0, 0, r]. `None` where all terms agree.
    pub fn leading_term(&self, exact: &[f64]) -> Option<LeadingTerm> {
        let differs = |(derivative, (&mu, &error)): (usize, (&f64, &f64))| {
            let coefficient = mu - exact.get(derivative).copied().unwrap_or(0.0);
            (coefficient.abs() > error).then_some(LeadingTerm { derivative, coefficient })
        };
        self.coefficients.iter().zip(&self.errors).enumerate().find_map(differs)
    }

    /// Formal order of accuracy when dt is tied to h^`step_power`: the leading term is mu_n h^n / dt, of order n - `step_power`.
    pub fn formal_order(&self, exact: &[f64], step_power: usize) -> Option<i64> {
        let term = self.leading_term(exact)?;
        Some(term.derivative as i64 - step_power as i64)
    }
}

/// Coefficients of ln(1 + a_1 x + ...), and bounds on their errors: n l_n = n a_n - sum over k < n of k l_k a_{n-k}.
fn logarithm(a: &[f64], sizes: &[f64]) -> (Vec<f64>, Vec<f64>) {
    let (mut l, mut size) = (vec![0.0; a.len()], vec![sizes[0]; a.len()]);
    for n in 1..a.len() {
        let sum: f64 = (1..n).map(|k| k as f64 * l[k] * a[n - k]).sum();
        let bound: f64 = (1..n).map(|k| k as f64 * size[k] * sizes[n - k]).sum();
        l[n] = a[n] - sum / n as f64;
        size[n] = sizes[n] + bound / n as f64;
    }
    (l, size.into_iter().map(|s| ROUNDING * s).collect())
}

/// Monomial coefficients of the polynomial through (x, y), by Newton's divided differences.
fn interpolate(x: &[f64], mut y: Vec<f64>) -> Vec<f64> {
    let n = x.len();
    for order in 1..n {
        for i in (order..n).rev() {
            y[i] = (y[i] - y[i - 1]) / (x[i] - x[i - order]);
        }
    }
    let mut coefficients = vec![0.0; n];
    for i in (0..n).rev() {
        // coefficients <- coefficients * (t - x_i) + y_i
        for k in (1..n).rev() {
            coefficients[k] = coefficients[k - 1] - x[i] * coefficients[k];
        }
        coefficients[0] = y[i] - x[i] * coefficients[0];
    }
    coefficients
}

#[cfg(test)]
mod tests {
    //! Trusted: the modified equations of upwind and Lax-Wendroff as printed by Warming & Hyett (1974), from memory, and re-derived by the
    //! series of ln G with SymPy; explicit diffusion in closed form.
    use super::*;
    use crate::analysis::compare::agree;

    fn lax_wendroff(c: f64) -> Stencil {
        Stencil::scalar_1d(&[(-1, 0.5 * c * (1.0 + c)), (0, 1.0 - c * c), (1, -0.5 * c * (1.0 - c))])
    }

    #[test]
    fn upwind_and_lax_wendroff_after_warming_and_hyett() {
        for c in [0.1, 0.45, 0.8, 0.99] {
            let upwind = ModifiedEquation::from_stencil(&Stencil::scalar_1d(&[(-1, c), (0, 1.0 - c)]), 4).unwrap();
            let expected = [0.0, -c, c * (1.0 - c) / 2.0, -c * (2.0 * c * c - 3.0 * c + 1.0) / 6.0];
            for (n, expected) in expected.iter().enumerate() {
                agree(upwind.coefficients[n], *expected, upwind.errors[n]).unwrap();
            }
            assert_eq!(upwind.formal_order(&[0.0, -c], 1), Some(1));
            let lw = ModifiedEquation::from_stencil(&lax_wendroff(c), 4).unwrap();
            let expected = [0.0, -c, 0.0, -c * (1.0 - c * c) / 6.0, -c * c * (1.0 - c * c) / 8.0];
            for (n, expected) in expected.iter().enumerate() {
                agree(lw.coefficients[n], *expected, lw.errors[n]).unwrap();
            }
            assert_eq!(lw.formal_order(&[0.0, -c], 1), Some(2));
        }
    }

    #[test]
    fn diffusion_gains_two_orders_at_one_sixth() {
        // mu_4 = r/12 - r^2/2 vanishes at r = 1/6.
        let at = |r: f64| {
            ModifiedEquation::from_stencil(&Stencil::scalar_1d(&[(-1, r), (0, 1.0 - 2.0 * r), (1, r)]), 8).unwrap()
        };
        agree(at(0.4).leading_term(&[0.0, 0.0, 0.4]).unwrap().coefficient, 0.4 / 12.0 - 0.08, 1e-15).unwrap();
        assert_eq!(at(0.4).formal_order(&[0.0, 0.0, 0.4], 2), Some(2));
        let sixth = 1.0 / 6.0;
        assert_eq!(at(sixth).formal_order(&[0.0, 0.0, sixth], 2), Some(4));
    }

    #[test]
    fn a_wrong_coefficient_shows_as_order_zero_and_an_exact_shift_has_no_error() {
        let wrong = ModifiedEquation::from_stencil(&lax_wendroff(0.505), 4).unwrap();
        assert_eq!(wrong.formal_order(&[0.0, -0.5], 1), Some(0));
        let shift = ModifiedEquation::from_stencil(&Stencil::scalar_1d(&[(-1, 1.0)]), 6).unwrap();
        assert_eq!(shift.leading_term(&[0.0, -1.0]), None);
        assert!(ModifiedEquation::from_stencil(&Stencil::scalar_1d(&[(0, -1.0)]), 4).is_none());
    }

    #[test]
    fn a_fit_at_small_wavenumbers_finds_the_same_terms() {
        let c = 0.6;
        let exact = ModifiedEquation::from_stencil(&lax_wendroff(c), 5).unwrap();
        let samples: Vec<(f64, Complex64)> =
            (1..=6).map(|k| 0.05 * f64::from(k)).map(|t| (t, lax_wendroff(c).jet(t).value.ln())).collect();
        let fitted = ModifiedEquation::from_samples(&samples).unwrap();
        for n in 0..5 {
            agree(fitted.coefficients[n], exact.coefficients[n], 1e-6).unwrap();
        }
        assert_eq!(fitted.formal_order(&[0.0, -c], 1), Some(2));
        assert!(ModifiedEquation::from_samples(&samples[..2]).is_none());
    }
}
