//! Fourier series of diffusion between two walls (Carslaw & Jaeger, "Conduction of Heat in Solids", chapter III).

use super::{ExactError, ExactSolution, Sample, after, positive};

/// Which eigenfunctions a series is made of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SeriesKind {
    /// sin(n pi s / L), n = first, first + stride, ...: values given at both walls.
    Sine,
    /// cos(n pi s / L): gradients given at both walls.
    Cosine,
}

/// The series ends where the decay has fallen below this, the slope's factor n included.
const NEGLIGIBLE: f64 = 1e-18;
/// A series that needs more terms than this is asked for too early.
const MOST_TERMS: usize = 10_000;

/// base + slope s + sum of b_n trig(n pi s / L) exp(-nu (n pi / L)^2 (t - origin)), with s = x - lower.
#[derive(Debug, Clone)]
pub struct Series {
    /// Eigenfunctions.
    pub kind: SeriesKind,
    /// Steady part: value at the lower wall and slope.
    pub steady: [f64; 2],
    /// First n and stride.
    pub terms: [usize; 2],
    /// b_n = coefficient(n).
    pub coefficients: Vec<f64>,
    /// Walls.
    pub walls: [f64; 2],
    /// Diffusivity, > 0.
    pub diffusivity: f64,
    /// Time from which the decay is counted.
    pub origin: f64,
}

impl Series {
    /// The most coefficients that any time can use.
    pub const MOST_TERMS: usize = MOST_TERMS;

    /// Checks the arguments.
    ///
    /// # Errors
    /// Walls that are not apart, or a diffusivity that is not positive.
    pub fn checked(self) -> Result<Self, ExactError> {
        positive("the diffusivity", self.diffusivity)?;
        positive("the distance of the walls", self.walls[1] - self.walls[0])?;
        Ok(self)
    }
}

impl ExactSolution for Series {
    fn fields(&self) -> usize {
        1
    }

    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let elapsed = after(self.origin, time)?;
        let length = self.walls[1] - self.walls[0];
        let offset = position - self.walls[0];
        let [first, stride] = self.terms;
        let (mut value, mut slope) = (0.0, 0.0);
        let mut terms = self.coefficients.iter().enumerate();
        loop {
            let Some((index, coefficient)) = terms.next() else {
                let requirement =
                    format!("later: {} terms of its series do not reach round-off", self.coefficients.len());
                return Err(ExactError::Time { time, requirement });
            };
            let number = first + stride * index;
            let wavenumber = number as f64 * std::f64::consts::PI / length;
            let decay = (-self.diffusivity * wavenumber * wavenumber * elapsed).exp();
            let term = coefficient * decay;
            // n pi s / L with the whole turns taken out first, so that high terms lose no digits.
            let (sine, cosine) = half_turns(number, offset / length);
            let (function, derivative) = match self.kind {
                SeriesKind::Sine => (sine, cosine),
                SeriesKind::Cosine => (cosine, -sine),
            };
            value += term * function;
            slope += term * wavenumber * derivative;
            if decay * (1.0 + wavenumber * length) < NEGLIGIBLE {
                break;
            }
        }
        let [base, gradient] = self.steady;
        Ok(Sample { value: [base + gradient * offset + value, 0.0, 0.0], slope: [gradient + slope, 0.0, 0.0] })
    }

    fn breaks(&self, _time: f64) -> Vec<f64> {
        Vec::new()
    }
}

/// sin and cos of n pi s.
fn half_turns(number: usize, position: f64) -> (f64, f64) {
    let product = number as f64 * position;
    // The part of the product that rounding lost matters as much as the product's last digit.
    let lost = (number as f64).mul_add(position, -product);
    let turns = product - 2.0 * (product / 2.0).round();
    ((turns + lost) * std::f64::consts::PI).sin_cos()
}

#[cfg(test)]
mod tests {
    //! Trusted: the start-up of Couette flow by images (complementary error functions), twelve digits, which the
    //! series and the images agree on.
    use super::*;
    use std::f64::consts::PI;

    #[test]
    fn agrees_with_the_start_up_of_couette_flow() {
        let table = [
            (0.01, [0.0770998717435, 0.000406952017445, 1.13727256569e-7]),
            (0.05, [0.429195269138, 0.113844196571, 0.0176288390119]),
            (0.2, [0.687349495449, 0.411566430126, 0.187586539107]),
            (1.0, [0.749976716386, 0.499967071997, 0.249976716386]),
        ];
        let series = Series {
            kind: SeriesKind::Sine,
            steady: [1.0, -1.0],
            terms: [1, 1],
            coefficients: (1..200).map(|n| -2.0 / (PI * f64::from(n))).collect(),
            walls: [0.0, 1.0],
            diffusivity: 1.0,
            origin: 0.0,
        }
        .checked()
        .unwrap();
        for (time, row) in table {
            for (position, expected) in [0.25, 0.5, 0.75].into_iter().zip(row) {
                let value = series.sample(time, position).unwrap().value[0];
                assert!((value - expected).abs() <= 5.01e-13, "{value} against {expected} at {time}, {position}");
            }
        }
        assert!(matches!(series.sample(1e-7, 0.5), Err(ExactError::Time { .. })));
    }
}
