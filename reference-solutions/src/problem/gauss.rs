//! Gauss-Legendre rules.

use std::sync::OnceLock;

/// Largest number of points for which a rule is kept.
const LARGEST: usize = 16;

/// Points in [0, 1] and weights that sum to 1; exact for polynomials of degree 2 n - 1 (n from 1 to 16).
///
/// Abscissae are the roots of the Legendre polynomial, found by Newton's method from the estimate of Abramowitz & Stegun, 22.16.6.
pub(super) fn gauss_legendre(count: usize) -> &'static [(f64, f64)] {
    static RULES: OnceLock<Vec<Vec<(f64, f64)>>> = OnceLock::new();
    let rules = RULES.get_or_init(|| (1..=LARGEST).map(rule).collect());
    &rules[count.clamp(1, LARGEST) - 1]
}

fn rule(count: usize) -> Vec<(f64, f64)> {
    let size = count as f64;
    let mut rule: Vec<(f64, f64)> = (0..count)
        .map(|index| {
            let mut root = -(std::f64::consts::PI * (index as f64 + 0.75) / (size + 0.5)).cos();
            for _ in 0..8 {
                let (value, derivative) = legendre(count, root);
                root -= value / derivative;
            }
            let derivative = legendre(count, root).1;
            (0.5 * (1.0 + root), 1.0 / ((1.0 - root * root) * derivative * derivative))
        })
        .collect();
    let total: f64 = rule.iter().map(|(_, weight)| weight).sum();
    rule.iter_mut().for_each(|(_, weight)| *weight /= total);
    rule
}

/// P_n and its derivative by the three-term recurrence.
fn legendre(degree: usize, x: f64) -> (f64, f64) {
    let (mut previous, mut value) = (1.0, x);
    for k in 2..=degree {
        let k = k as f64;
        (previous, value) = (value, ((2.0 * k - 1.0) * x * value - (k - 1.0) * previous) / k);
    }
    (value, degree as f64 * (x * value - previous) / (x * x - 1.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Moments of [0, 1] are 1 / (k + 1); the degree after the last exact one must be wrong, or the test sees nothing.
    #[test]
    fn is_exact_to_degree_2n_minus_1_and_not_beyond() {
        for count in 1..=LARGEST {
            let moment = |k: i32| gauss_legendre(count).iter().map(|(x, w)| w * x.powi(k)).sum::<f64>();
            for k in 0..2 * count as i32 {
                let error = (moment(k) * f64::from(k + 1) - 1.0).abs();
                assert!(error <= 32.0 * f64::EPSILON, "{count} points, degree {k}: {error}");
            }
            let error = (moment(2 * count as i32) * f64::from(2 * count as i32 + 1) - 1.0).abs();
            assert!(count > 12 || error > 1e-15, "{count} points are exact beyond their degree");
        }
    }
}
