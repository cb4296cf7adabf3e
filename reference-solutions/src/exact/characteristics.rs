//! Inviscid Burgers before the shock, by characteristics (Whitham, "Linear and Nonlinear Waves", section 2.1).

use super::root::increasing_root;
use super::{ExactError, ExactSolution, Sample, after, positive};

/// u_t + u u_x = 0 from u(x, start) = mean + amplitude sin(wavenumber x + phase).
#[derive(Debug, Clone)]
pub struct Characteristics {
    mean: f64,
    amplitude: f64,
    wavenumber: f64,
    phase: f64,
    start: f64,
}

impl Characteristics {
    /// The wave breaks at start + 1 / |amplitude wavenumber|.
    ///
    /// # Errors
    /// A wavenumber that is not positive.
    pub fn new([mean, amplitude, wavenumber, phase]: [f64; 4], start: f64) -> Result<Self, ExactError> {
        positive("the wavenumber", wavenumber)?;
        Ok(Self { mean, amplitude, wavenumber, phase, start })
    }
}

impl ExactSolution for Characteristics {
    fn fields(&self) -> usize {
        1
    }

    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let Self { mean, amplitude, wavenumber, phase, start } = *self;
        let elapsed = after(start, time)?;
        let steepness = (amplitude * wavenumber).abs();
        if elapsed * steepness >= 1.0 {
            let requirement = format!("before the shock at time {}", start + 1.0 / steepness);
            return Err(ExactError::Time { time, requirement });
        }
        // Angle of the foot: theta + s sin(theta) = angle, increasing as |s| < 1.
        let angle = wavenumber * (position - mean * elapsed) + phase;
        let slope = wavenumber * amplitude * elapsed;
        let reach = slope.abs() + f64::EPSILON * (1.0 + angle.abs());
        let theta = increasing_root(angle - reach, angle + reach, |theta| {
            (theta + slope * theta.sin() - angle, 1.0 + slope * theta.cos())
        });
        let gradient = amplitude * wavenumber * theta.cos() / (1.0 + slope * theta.cos());
        Ok(Sample { value: [mean + amplitude * theta.sin(), 0.0, 0.0], slope: [gradient, 0.0, 0.0] })
    }

    fn breaks(&self, _time: f64) -> Vec<f64> {
        Vec::new()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The value is constant along the line that leaves its foot, which is the definition of the solution.
    #[test]
    fn carries_the_initial_value_along_each_characteristic() {
        let burgers = Characteristics::new([0.2, 0.7, 1.5, 0.3], 0.0).unwrap();
        for index in 0..50 {
            let foot = -3.0 + 0.13 * f64::from(index);
            let value = 0.2 + 0.7 * (1.5 * foot + 0.3).sin();
            // At 0.9 of the breaking time the map from the foot is up to ten times steeper than the identity.
            let time = 0.9 / (0.7 * 1.5);
            let sample = burgers.sample(time, foot + value * time).unwrap();
            assert!((sample.value[0] - value).abs() <= 64.0 * f64::EPSILON, "{} against {value}", sample.value[0]);
            let initial_slope = 0.7 * 1.5 * (1.5 * foot + 0.3).cos();
            let slope = initial_slope / (1.0 + time * initial_slope);
            assert!((sample.slope[0] - slope).abs() <= 1e-12 * (1.0 + slope.abs()), "{}", sample.slope[0]);
        }
    }

    #[test]
    fn ends_at_the_shock() {
        let burgers = Characteristics::new([0.2, -0.5, 2.0, 0.0], 0.25).unwrap();
        let error = burgers.sample(1.25, 0.0).unwrap_err().to_string();
        assert_eq!(error, "the solution is asked for at time 1.25, but it is defined before the shock at time 1.25");
    }
}
