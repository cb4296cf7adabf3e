//! Straight-line fit with Student's interval.

use statrs::distribution::{ContinuousCDF, StudentsT};

/// A closed interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Interval {
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

impl Interval {
    /// The smallest interval that holds all `points`, widened by `margin` on both sides.
    pub fn around(points: &[f64], margin: f64) -> Self {
        let low = points.iter().copied().fold(f64::INFINITY, f64::min);
        let high = points.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        Interval { low: low - margin, high: high + margin }
    }

    /// The smallest interval that holds this one and `other`.
    #[must_use]
    pub fn hull(self, other: Interval) -> Self {
        Interval { low: self.low.min(other.low), high: self.high.max(other.high) }
    }
}

/// Least-squares line through points, with the uncertainty of its slope.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LineFit {
    /// Slope.
    pub slope: f64,
    /// Value at x = 0.
    pub intercept: f64,
    /// Standard error of the slope.
    pub standard_error: f64,
    /// Student's interval of the slope.
    pub interval: Interval,
    /// Points fitted.
    pub points: usize,
}

/// Fits y = intercept + slope x; the slope's interval at confidence `confidence` has n - 2 degrees of freedom.
///
/// slope = Sxy / Sxx, standard error = sqrt(SSE / (n - 2) / Sxx), half width = t((1 + confidence) / 2; n - 2) x standard error.
/// `None` for fewer than three points, equal abscissas, or values that are not finite. Source: common practice (any text on linear regression).
///
/// ```
/// use gridassay::analysis::order::fit_line;
/// let fit = fit_line(&[(0.0, 1.0), (1.0, 3.0), (2.0, 5.0)], 0.95).unwrap();
/// assert!((fit.slope - 2.0).abs() < 1e-15 && fit.standard_error < 1e-15);
/// ```
pub fn fit_line(points: &[(f64, f64)], confidence: f64) -> Option<LineFit> {
    let n = points.len() as f64;
    let mean_x = points.iter().map(|p| p.0).sum::<f64>() / n;
    let mean_y = points.iter().map(|p| p.1).sum::<f64>() / n;
    let sxx: f64 = points.iter().map(|p| (p.0 - mean_x).powi(2)).sum();
    let sxy: f64 = points.iter().map(|p| (p.0 - mean_x) * (p.1 - mean_y)).sum();
    if points.len() < 3 || !(sxx.is_finite() && sxx > 0.0 && sxy.is_finite()) {
        return None;
    }
    let slope = sxy / sxx;
    let intercept = mean_y - slope * mean_x;
    let sse: f64 = points.iter().map(|p| (p.1 - mean_y - slope * (p.0 - mean_x)).powi(2)).sum();
    let standard_error = (sse / (n - 2.0) / sxx).sqrt();
    let quantile = StudentsT::new(0.0, 1.0, n - 2.0).ok()?.inverse_cdf(0.5 * (1.0 + confidence));
    let interval = Interval::around(&[slope], quantile * standard_error);
    Some(LineFit { slope, intercept, standard_error, interval, points: points.len() })
}

#[cfg(test)]
mod tests {
    //! Trusted: Student quantiles as printed in any table and given by SciPy 1.x `stats.t.ppf(0.975, n)`; a fit by SciPy `stats.linregress`.
    use super::*;
    use crate::analysis::compare::agree;

    #[test]
    fn quantiles_are_the_tabulated_ones() {
        // The half width over the standard error is the quantile itself.
        let tabulated = [
            (1, 12.706_204_736_174_7),
            (2, 4.302_652_729_749_46),
            (3, 3.182_446_305_284_26),
            (8, 2.306_004_135_204_17),
        ];
        for (freedom, quantile) in tabulated {
            let points: Vec<(f64, f64)> = (0..freedom + 2).map(|i| (f64::from(i), f64::from(i * i))).collect();
            let fit = fit_line(&points, 0.95).unwrap();
            let half = 0.5 * (fit.interval.high - fit.interval.low);
            agree(half / fit.standard_error, quantile, 1e-9).unwrap();
        }
    }

    #[test]
    fn three_points_with_two_slopes() {
        // Closed form: slopes 1 and 1 + d over equal spacing have the mean slope 1 + d/2 and the standard error d / sqrt(12).
        let d = 0.3;
        let fit = fit_line(&[(0.0, 0.0), (1.0, 1.0), (2.0, 2.0 + d)], 0.95).unwrap();
        agree(fit.slope, 1.0 + 0.5 * d, 1e-15).unwrap();
        agree(fit.standard_error, d / 12.0_f64.sqrt(), 1e-15).unwrap();
    }

    #[test]
    fn too_few_points_or_no_spread_have_no_fit() {
        assert!(fit_line(&[(0.0, 0.0), (1.0, 1.0)], 0.95).is_none());
        assert!(fit_line(&[(1.0, 0.0); 4], 0.95).is_none());
        assert!(fit_line(&[(0.0, f64::NAN), (1.0, 0.0), (2.0, 1.0)], 0.95).is_none());
    }
}
