//! Viscous Burgers by the transform of Hopf (1950) and Cole (1951), for u(x, 0) = mean + amplitude sin(k x + phase).

use super::{ExactError, ExactSolution, Sample, after, positive};

/// Relative size at which the weights of the integral are cut: e^-45 is 3e-20.
const CUT: f64 = 45.0;
/// Points for each standard deviation of the narrowest weight. The trapezoidal rule on a Gaussian has the relative
/// error 2 exp(-2 pi^2 n^2), which is far below round-off at n = 3.
const POINTS_PER_WIDTH: f64 = 3.0;

/// u_t + u u_x = nu u_xx with a sine as initial value.
///
/// The transform gives u(x, t) as a mean of the initial values with the weights exp(-E / (2 nu)),
/// E(y) = (x - y)^2 / (2 t) + integral of u0 up to y. All weights are positive: unlike the Fourier series of the transform, nothing
/// cancels, and the result is good to a few ulp at any viscosity.
#[derive(Debug, Clone)]
pub struct ColeHopf {
    mean: f64,
    amplitude: f64,
    wavenumber: f64,
    phase: f64,
    viscosity: f64,
    start: f64,
}

impl ColeHopf {
    /// The initial value mean + amplitude sin(wavenumber x + phase) holds at `start`.
    ///
    /// # Errors
    /// A viscosity or wavenumber that is not positive.
    pub fn new([mean, amplitude, wavenumber, phase]: [f64; 4], viscosity: f64, start: f64) -> Result<Self, ExactError> {
        positive("the viscosity", viscosity)?;
        positive("the wavenumber", wavenumber)?;
        Ok(Self { mean, amplitude, wavenumber, phase, viscosity, start })
    }

    /// Fluctuation about the mean in the frame that moves with the mean, and its slope.
    fn fluctuation(&self, elapsed: f64, position: f64) -> (f64, f64) {
        let Self { amplitude, wavenumber, phase, viscosity, .. } = *self;
        let initial = |y: f64| amplitude * (wavenumber * y + phase).sin();
        let potential = |y: f64| -amplitude / wavenumber * (wavenumber * y + phase).cos();
        if elapsed == 0.0 {
            return (initial(position), amplitude * wavenumber * (wavenumber * position + phase).cos());
        }
        let exponent = |offset: f64| offset * offset / (2.0 * elapsed) + potential(position + offset);
        let swing = 2.0 * (amplitude / wavenumber).abs();
        let reach = (2.0 * elapsed * (2.0 * viscosity * CUT + swing)).sqrt();
        let width = (2.0 * viscosity / (1.0 / elapsed + (amplitude * wavenumber).abs())).sqrt();
        let count = (reach * POINTS_PER_WIDTH / width).ceil() as i64;
        let spacing = reach / count as f64;
        let offsets = || (-count..=count).map(|index| index as f64 * spacing);
        let least = offsets().map(exponent).fold(f64::INFINITY, f64::min);
        let weight = |offset: f64| ((least - exponent(offset)) / (2.0 * viscosity)).exp();
        let (mut total, mut sum, mut moment) = (0.0, 0.0, 0.0);
        for offset in offsets() {
            let share = weight(offset);
            total += share;
            sum += share * initial(position + offset);
            moment += share * offset;
        }
        let (value, centre) = (sum / total, moment / total);
        let covariance: f64 = offsets()
            .map(|offset| weight(offset) * (initial(position + offset) - value) * (offset - centre))
            .sum::<f64>()
            / total;
        (value, covariance / (2.0 * viscosity * elapsed))
    }
}

impl ExactSolution for ColeHopf {
    fn fields(&self) -> usize {
        1
    }

    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let elapsed = after(self.start, time)?;
        let (value, slope) = self.fluctuation(elapsed, position - self.mean * elapsed);
        Ok(Sample { value: [self.mean + value, 0.0, 0.0], slope: [slope, 0.0, 0.0] })
    }

    fn breaks(&self, _time: f64) -> Vec<f64> {
        Vec::new()
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: the exact columns of the tables for u0 = sin(pi x) that are quoted since Kutluay, Bahadir & Ozdes (1999,
    //! J. Comput. Appl. Math. 103:251-261), recomputed to twelve digits from the Bessel series.
    use super::*;
    use std::f64::consts::PI;

    const TABLE: [(f64, f64, f64, f64); 14] = [
        (0.1, 0.25, 0.4, 0.308894227876),
        (0.1, 0.50, 0.6, 0.447205521199),
        (0.1, 0.75, 0.8, 0.373921753209),
        (0.1, 0.50, 3.0, 0.040204924438),
        (0.1, 0.75, 3.0, 0.029772126859),
        (0.01, 0.25, 0.4, 0.341914932412),
        (0.01, 0.75, 0.4, 0.910264549119),
        (0.01, 0.50, 1.0, 0.374420037645),
        (0.01, 0.75, 3.0, 0.224811248194),
        (1.0, 0.10, 0.1, 0.109538151271),
        (1.0, 0.25, 0.1, 0.253637576456),
        (1.0, 0.50, 0.1, 0.371577476147),
        (1.0, 0.75, 0.1, 0.272581718687),
        (1.0, 0.90, 0.1, 0.120686691089),
    ];

    /// Half a unit of the twelfth decimal, which is what the table gives.
    #[test]
    fn agrees_with_the_table_for_a_sine() {
        for (viscosity, position, time, expected) in TABLE {
            let burgers = ColeHopf::new([0.0, 1.0, PI, 0.0], viscosity, 0.0).unwrap();
            let value = burgers.sample(time, position).unwrap().value[0];
            assert!((value - expected).abs() <= 5.01e-13, "{value} against {expected}");
        }
    }

    #[test]
    fn slope_matches_an_extrapolated_difference() {
        let burgers = ColeHopf::new([0.3, -0.8, 2.0, 0.4], 0.05, 0.1).unwrap();
        let value = |x: f64| burgers.sample(0.9, x).unwrap().value[0];
        let h = 1e-3;
        let difference = |h: f64| (value(0.7 + h) - value(0.7 - h)) / (2.0 * h);
        let expected = (4.0 * difference(h) - difference(2.0 * h)) / 3.0;
        let slope = burgers.sample(0.9, 0.7).unwrap().slope[0];
        assert!((slope - expected).abs() <= 1e-9 * expected.abs(), "{slope} against {expected}");
    }

    #[test]
    fn starts_from_the_initial_value_and_refuses_bad_arguments() {
        let burgers = ColeHopf::new([0.3, -0.8, 2.0, 0.4], 0.05, 0.1).unwrap();
        assert_eq!(burgers.sample(0.1, 0.7).unwrap().value[0], 0.3 - 0.8 * (2.0_f64 * 0.7 + 0.4).sin());
        assert!(burgers.sample(0.0, 0.7).is_err());
        assert!(ColeHopf::new([0.0, 1.0, 1.0, 0.0], 0.0, 0.0).is_err());
    }
}
