//! The weighted essentially non-oscillatory reconstruction of fifth order.

use crate::finite_volume::reconstruction::Reconstruction;

/// WENO5 after Jiang & Shu 1996, J. Comput. Phys. 126:202-228: three parabolas weighted by their smoothness.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Weno5 {
    /// First part of the names of schemes that use it.
    pub name: &'static str,
    /// Keeps the weights finite; squared with the smoothness it carries the square of the unit of u.
    pub epsilon: f64,
    /// The weights at which the three parabolas together are of fifth order, from the most upwind one on.
    pub linear_weights: [f64; 3],
    /// Factors of the curvature and of the slope in the measure of smoothness.
    pub smoothness: [f64; 2],
}

impl Weno5 {
    /// The published scheme: epsilon = 1e-6.
    pub const fn published() -> Self {
        Self { name: "weno5", epsilon: 1e-6, linear_weights: [0.1, 0.6, 0.3], smoothness: [13.0 / 12.0, 0.25] }
    }

    /// With the epsilon at which our own computation gives all digits of the published accuracy tables: 1e-6 beside a
    /// smoothness that is twelve times the usual one, which is 1e-6 / 12 beside the usual one.
    pub const fn as_in_the_tables() -> Self {
        Self { name: "weno5-jiang-shu", epsilon: 1e-6 / 12.0, ..Self::published() }
    }
}

impl Reconstruction for Weno5 {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn right_face(&self, [a, b, c, d, e]: [f64; 5]) -> f64 {
        let [curvature, slope] = self.smoothness;
        let measures = [
            curvature * square(a - 2.0 * b + c) + slope * square(a - 4.0 * b + 3.0 * c),
            curvature * square(b - 2.0 * c + d) + slope * square(b - d),
            curvature * square(c - 2.0 * d + e) + slope * square(3.0 * c - 4.0 * d + e),
        ];
        let mut weights = [0.0; 3];
        for ((weight, linear), measure) in weights.iter_mut().zip(self.linear_weights).zip(measures) {
            *weight = linear / square(self.epsilon + measure);
        }
        let total: f64 = weights.iter().sum();
        // As differences to the middle value, so that a uniform state comes back exactly.
        let parabolas =
            [(2.0 * (a - c) - 7.0 * (b - c)) / 6.0, (2.0 * (d - c) - (b - c)) / 6.0, (5.0 * (d - c) - (e - c)) / 6.0];
        let sum: f64 = weights.iter().zip(parabolas).map(|(w, p)| w * p).sum();
        c + sum / total
    }
}

fn square(value: f64) -> f64 {
    value * value
}
