//! The Riemann problem of the Euler equations for a perfect gas.
//!
//! Toro, "Riemann Solvers and Numerical Methods for Fluid Dynamics", chapter 4: the pressure function, its root, and
//! the sampling of the wave pattern. Formulas re-derived from the Rankine-Hugoniot and isentropic relations.

use super::root::increasing_root;
use super::{ExactError, ExactSolution, Sample, after, positive};

/// Density, velocity and pressure of a gas.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GasState {
    /// Mass per volume, > 0.
    pub density: f64,
    /// Velocity along x.
    pub velocity: f64,
    /// Pressure, > 0.
    pub pressure: f64,
}

/// What lies between the two outer waves.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StarRegion {
    /// Pressure on both sides of the contact.
    pub pressure: f64,
    /// Velocity on both sides of the contact.
    pub velocity: f64,
    /// Density left of the contact.
    pub density_left: f64,
    /// Density right of the contact.
    pub density_right: f64,
}

/// Two constant gas states, separated at `position` until `start`.
#[derive(Debug, Clone)]
pub struct Riemann {
    left: GasState,
    right: GasState,
    gamma: f64,
    position: f64,
    start: f64,
    star: StarRegion,
}

/// One outer wave, seen as if it ran to the left.
enum Wave {
    Shock { speed: f64 },
    Rarefaction { head: f64, tail: f64 },
}

impl GasState {
    fn sound_speed(&self, gamma: f64) -> f64 {
        (gamma * self.pressure / self.density).sqrt()
    }

    fn mirrored(&self) -> Self {
        Self { velocity: -self.velocity, ..*self }
    }
}

/// f_K(p) and its derivative: the change of velocity across one wave (Toro, eqs. 4.6, 4.7 and 4.37).
fn velocity_change(pressure: f64, state: &GasState, gamma: f64) -> (f64, f64) {
    let sound_speed = state.sound_speed(gamma);
    if pressure > state.pressure {
        let a = 2.0 / ((gamma + 1.0) * state.density);
        let b = (gamma - 1.0) / (gamma + 1.0) * state.pressure;
        let root = (a / (pressure + b)).sqrt();
        let jump = pressure - state.pressure;
        (jump * root, root * (1.0 - 0.5 * jump / (pressure + b)))
    } else {
        let exponent = (gamma - 1.0) / (2.0 * gamma);
        let logarithm = (pressure / state.pressure).ln();
        let change = 2.0 * sound_speed / (gamma - 1.0) * (exponent * logarithm).exp_m1();
        let derivative = (-(gamma + 1.0) / (2.0 * gamma) * logarithm).exp() / (state.density * sound_speed);
        (change, derivative)
    }
}

/// Density behind the wave that takes `state` to `pressure`.
fn star_density(pressure: f64, state: &GasState, gamma: f64) -> f64 {
    let ratio = pressure / state.pressure;
    if ratio > 1.0 {
        let g = (gamma - 1.0) / (gamma + 1.0);
        state.density * (ratio + g) / (g * ratio + 1.0)
    } else {
        state.density * ratio.powf(1.0 / gamma)
    }
}

impl Riemann {
    /// Solves for the star region.
    ///
    /// # Errors
    /// A density or pressure that is not positive, gamma <= 1, or states that open a vacuum.
    pub fn new(left: GasState, right: GasState, gamma: f64, position: f64, start: f64) -> Result<Self, ExactError> {
        positive("the left density", left.density)?;
        positive("the left pressure", left.pressure)?;
        positive("the right density", right.density)?;
        positive("the right pressure", right.pressure)?;
        if gamma.is_nan() || gamma <= 1.0 {
            return Err(ExactError::Argument { name: "gamma", value: gamma, requirement: "above 1" });
        }
        let separation = right.velocity - left.velocity;
        let limit = 2.0 * (left.sound_speed(gamma) + right.sound_speed(gamma)) / (gamma - 1.0);
        if separation >= limit {
            return Err(ExactError::Vacuum { separation, limit });
        }
        let residual = |pressure: f64| {
            let (change_left, slope_left) = velocity_change(pressure, &left, gamma);
            let (change_right, slope_right) = velocity_change(pressure, &right, gamma);
            (change_left + change_right + separation, slope_left + slope_right)
        };
        let mut upper = left.pressure.max(right.pressure);
        while residual(upper).0 < 0.0 {
            upper *= 4.0;
        }
        let pressure = increasing_root(0.0, upper, residual);
        let change_left = velocity_change(pressure, &left, gamma).0;
        let change_right = velocity_change(pressure, &right, gamma).0;
        let star = StarRegion {
            pressure,
            velocity: 0.5 * (left.velocity + right.velocity) + 0.5 * (change_right - change_left),
            density_left: star_density(pressure, &left, gamma),
            density_right: star_density(pressure, &right, gamma),
        };
        Ok(Self { left, right, gamma, position, start, star })
    }

    /// Pressure, velocity and densities between the outer waves.
    #[must_use]
    pub fn star(&self) -> StarRegion {
        self.star
    }

    /// The wave that takes `state` to the star region, for a state on the left (the right one is mirrored first).
    fn wave(&self, state: &GasState, star_velocity: f64) -> Wave {
        let (gamma, sound_speed) = (self.gamma, state.sound_speed(self.gamma));
        let ratio = self.star.pressure / state.pressure;
        if ratio > 1.0 {
            let factor = ((gamma + 1.0) / (2.0 * gamma) * ratio + (gamma - 1.0) / (2.0 * gamma)).sqrt();
            Wave::Shock { speed: state.velocity - sound_speed * factor }
        } else {
            let star_sound_speed = sound_speed * ratio.powf((gamma - 1.0) / (2.0 * gamma));
            Wave::Rarefaction { head: state.velocity - sound_speed, tail: star_velocity - star_sound_speed }
        }
    }

    /// State and its derivative by `speed` = x/t on the left of the contact.
    fn left_of_contact(&self, state: &GasState, star: GasState, speed: f64) -> (GasState, GasState) {
        const FLAT: GasState = GasState { density: 0.0, velocity: 0.0, pressure: 0.0 };
        match self.wave(state, star.velocity) {
            Wave::Shock { speed: shock } => (if speed < shock { *state } else { star }, FLAT),
            Wave::Rarefaction { head, .. } if speed < head => (*state, FLAT),
            Wave::Rarefaction { tail, .. } if speed >= tail => (star, FLAT),
            Wave::Rarefaction { .. } => self.inside_fan(state, speed),
        }
    }

    /// Inside a left rarefaction (Toro, eq. 4.56).
    fn inside_fan(&self, state: &GasState, speed: f64) -> (GasState, GasState) {
        let gamma = self.gamma;
        let outer = state.sound_speed(gamma);
        let local = 2.0 / (gamma + 1.0) * (outer + 0.5 * (gamma - 1.0) * (state.velocity - speed));
        let ratio = local / outer;
        let value = GasState {
            density: state.density * ratio.powf(2.0 / (gamma - 1.0)),
            velocity: 2.0 / (gamma + 1.0) * (outer + 0.5 * (gamma - 1.0) * state.velocity + speed),
            pressure: state.pressure * ratio.powf(2.0 * gamma / (gamma - 1.0)),
        };
        let relative_slope = -(gamma - 1.0) / (gamma + 1.0) / local;
        let slope = GasState {
            density: value.density * 2.0 / (gamma - 1.0) * relative_slope,
            velocity: 2.0 / (gamma + 1.0),
            pressure: value.pressure * 2.0 * gamma / (gamma - 1.0) * relative_slope,
        };
        (value, slope)
    }

    /// State and its derivative by x/t, at `speed` = x/t.
    fn at_speed(&self, speed: f64) -> (GasState, GasState) {
        let StarRegion { pressure, velocity, density_left, density_right } = self.star;
        if speed < velocity {
            return self.left_of_contact(&self.left, GasState { density: density_left, velocity, pressure }, speed);
        }
        let star = GasState { density: density_right, velocity: -velocity, pressure };
        let (value, slope) = self.left_of_contact(&self.right.mirrored(), star, -speed);
        // Mirroring changes the sign of the velocity and of d/dx: the velocity's slope keeps its sign.
        (value.mirrored(), GasState { density: -slope.density, velocity: slope.velocity, pressure: -slope.pressure })
    }

    fn speeds(&self) -> Vec<f64> {
        let waves = |wave: Wave| match wave {
            Wave::Shock { speed } => vec![speed],
            Wave::Rarefaction { head, tail } => vec![head, tail],
        };
        let mut speeds = waves(self.wave(&self.left, self.star.velocity));
        speeds.push(self.star.velocity);
        let right = waves(self.wave(&self.right.mirrored(), -self.star.velocity));
        speeds.extend(right.into_iter().rev().map(|speed| -speed));
        speeds
    }
}

impl ExactSolution for Riemann {
    fn fields(&self) -> usize {
        3
    }

    /// Density, momentum and total energy per volume.
    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let elapsed = after(self.start, time)?;
        let distance = position - self.position;
        let (state, slope) = if elapsed == 0.0 {
            let state = if distance < 0.0 { self.left } else { self.right };
            (state, GasState { density: 0.0, velocity: 0.0, pressure: 0.0 })
        } else {
            self.at_speed(distance / elapsed)
        };
        let GasState { density, velocity, pressure } = state;
        let scale = if elapsed == 0.0 { 0.0 } else { 1.0 / elapsed };
        Ok(Sample {
            value: [density, density * velocity, pressure / (self.gamma - 1.0) + 0.5 * density * velocity * velocity],
            slope: [
                slope.density * scale,
                (slope.density * velocity + density * slope.velocity) * scale,
                (slope.pressure / (self.gamma - 1.0)
                    + 0.5 * slope.density * velocity * velocity
                    + density * velocity * slope.velocity)
                    * scale,
            ],
        })
    }

    fn breaks(&self, time: f64) -> Vec<f64> {
        let elapsed = (time - self.start).max(0.0);
        self.speeds().into_iter().map(|speed| self.position + speed * elapsed).collect()
    }
}

#[cfg(test)]
#[path = "riemann_tests.rs"]
mod tests;
