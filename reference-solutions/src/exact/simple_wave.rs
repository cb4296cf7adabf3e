//! A right-running simple wave of gas dynamics (Whitham, "Linear and Nonlinear Waves", section 6.8).

use super::riemann::GasState;
use super::{Characteristics, ExactError, ExactSolution, Sample, positive};

/// A wave in which the left-running Riemann invariant and the entropy are those of the ambient gas everywhere.
///
/// Its characteristic speed w = u + c satisfies Burgers' equation exactly, at any amplitude, until a shock forms.
#[derive(Debug, Clone)]
pub struct SimpleWave {
    ambient: GasState,
    gamma: f64,
    speed: Characteristics,
}

impl SimpleWave {
    /// The velocity is that of `ambient` plus amplitude sin(wavenumber x + phase) at `start`.
    ///
    /// # Errors
    /// Density, pressure or wavenumber not positive, gamma <= 1, or an amplitude at which the sound speed would vanish.
    pub fn new(
        ambient: GasState,
        [amplitude, wavenumber, phase]: [f64; 3],
        gamma: f64,
        start: f64,
    ) -> Result<Self, ExactError> {
        positive("the density", ambient.density)?;
        positive("the pressure", ambient.pressure)?;
        if gamma.is_nan() || gamma <= 1.0 {
            return Err(ExactError::Argument { name: "gamma", value: gamma, requirement: "above 1" });
        }
        let sound_speed = (gamma * ambient.pressure / ambient.density).sqrt();
        if 0.5 * (gamma - 1.0) * amplitude.abs() >= sound_speed {
            let requirement = "small enough that the sound speed stays positive";
            return Err(ExactError::Argument { name: "the amplitude", value: amplitude, requirement });
        }
        let mean = ambient.velocity + sound_speed;
        let sine = [mean, 0.5 * (gamma + 1.0) * amplitude, wavenumber, phase];
        Ok(Self { ambient, gamma, speed: Characteristics::new(sine, start)? })
    }
}

impl ExactSolution for SimpleWave {
    fn fields(&self) -> usize {
        3
    }

    /// Density, momentum and total energy per volume.
    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let Self { ambient, gamma, .. } = self;
        let wave = self.speed.sample(time, position)?;
        let ambient_sound = (gamma * ambient.pressure / ambient.density).sqrt();
        let excess = 2.0 / (gamma + 1.0) * (wave.value[0] - ambient.velocity - ambient_sound);
        let excess_slope = 2.0 / (gamma + 1.0) * wave.slope[0];
        let velocity = ambient.velocity + excess;
        let ratio = 1.0 + 0.5 * (gamma - 1.0) * excess / ambient_sound;
        let density = ambient.density * ratio.powf(2.0 / (gamma - 1.0));
        let pressure = ambient.pressure * ratio.powf(2.0 * gamma / (gamma - 1.0));
        let sound_speed = ambient_sound * ratio;
        let density_slope = density / sound_speed * excess_slope;
        let pressure_slope = density * sound_speed * excess_slope;
        let kinetic_slope = 0.5 * density_slope * velocity * velocity + density * velocity * excess_slope;
        Ok(Sample {
            value: [density, density * velocity, pressure / (gamma - 1.0) + 0.5 * density * velocity * velocity],
            slope: [
                density_slope,
                density_slope * velocity + density * excess_slope,
                pressure_slope / (gamma - 1.0) + kinetic_slope,
            ],
        })
    }

    fn breaks(&self, _time: f64) -> Vec<f64> {
        Vec::new()
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: the definition (entropy and left invariant are constant) and the limit of linear acoustics.
    use super::*;

    fn wave(amplitude: f64) -> SimpleWave {
        let ambient = GasState { density: 1.3, velocity: 0.4, pressure: 0.9 };
        SimpleWave::new(ambient, [amplitude, 2.0, 0.3], 1.3, 0.0).unwrap()
    }

    #[test]
    fn keeps_the_entropy_and_the_left_invariant() {
        for position in [0.1, 0.9, 2.2] {
            let [density, momentum, energy] = wave(0.2).sample(0.7, position).unwrap().value;
            let velocity = momentum / density;
            let pressure = 0.3 * (energy - 0.5 * momentum * velocity);
            let entropy = pressure / density.powf(1.3) / (0.9 / 1.3_f64.powf(1.3));
            let sound = |p: f64, rho: f64| (1.3 * p / rho).sqrt();
            let invariant = velocity - 2.0 / 0.3 * sound(pressure, density);
            let expected = 0.4 - 2.0 / 0.3 * sound(0.9, 1.3);
            assert!((entropy - 1.0).abs() <= 32.0 * f64::EPSILON, "entropy {entropy}");
            assert!((invariant - expected).abs() <= 32.0 * f64::EPSILON * expected.abs(), "invariant {invariant}");
        }
    }

    /// Linear acoustics: p' = rho c u'. The rest is of the second order in the amplitude.
    #[test]
    fn becomes_linear_acoustics_at_small_amplitude() {
        let sound = (1.3 * 0.9 / 1.3_f64).sqrt();
        for amplitude in [1e-4, 1e-5] {
            let [density, momentum, energy] = wave(amplitude).sample(0.7, 0.9).unwrap().value;
            let velocity = momentum / density;
            let pressure = 0.3 * (energy - 0.5 * momentum * velocity);
            let linear = amplitude * (2.0 * (0.9 - (0.4 + sound) * 0.7) + 0.3_f64).sin();
            assert!((velocity - 0.4 - linear).abs() <= 4.0 * amplitude * amplitude, "{velocity}");
            assert!((pressure - 0.9 - 1.3 * sound * linear).abs() <= 4.0 * amplitude * amplitude, "{pressure}");
        }
    }

    #[test]
    fn slopes_match_differences() {
        let (below, above) = (wave(0.2).sample(0.7, 0.9 - 1e-5).unwrap(), wave(0.2).sample(0.7, 0.9 + 1e-5).unwrap());
        for (field, slope) in wave(0.2).sample(0.7, 0.9).unwrap().slope.into_iter().enumerate() {
            let difference = (above.value[field] - below.value[field]) / 2e-5;
            assert!((slope - difference).abs() <= 1e-8 * (1.0 + difference.abs()), "{slope} against {difference}");
        }
    }
}
