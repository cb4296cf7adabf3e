//! Exact dispersion relations omega(k) of the linear equations, and of nonlinear ones linearised about a uniform state.
//!
//! Convention everywhere: a mode is exp(i (k . x - omega t)), so that one step multiplies it by exp(-i omega dt). A negative
//! imaginary part of omega is damping.

use std::collections::BTreeMap;

use num_complex::Complex64;

use super::{Equation, EquationError};

/// One branch of a dispersion relation.
#[derive(Clone, Debug, PartialEq)]
pub struct Branch {
    /// `u` for a scalar equation; `acoustic +`, `acoustic -`, `entropy`, `shear`, `gravity +`, `gravity -`, `vorticity`.
    pub name: String,
    /// How many independent modes share it: in 3-D there are two shear modes.
    pub multiplicity: usize,
    /// Angular frequency, rad per unit of time.
    pub omega: Complex64,
}

/// The branches of `equation` for one wavevector (rad per unit length, one component a dimension).
///
/// `parameters` holds the equation's parameters and, for nonlinear equations, the uniform state that it is linearised about:
/// `u` (burgers, default 0), `depth` and `velocity` (shallow_water), `density`, `velocity`, `pressure` (euler), `velocity`
/// (incompressible). Velocities default to 0. With a = advection velocity, V = mean velocity:
///
/// | equation | omega |
/// | --- | --- |
/// | advection | a.k |
/// | diffusion | -i nu k^2 |
/// | advection_diffusion | a.k - i nu k^2 |
/// | dispersion | -mu k^3 |
/// | burgers | u (k_x + k_y + k_z) - i nu k^2 |
/// | acoustics, euler | V.k +- c k, and V.k for entropy and shear |
/// | shallow_water | V.k +- sqrt(g h) k, and V.k for the vorticity mode |
/// | incompressible | V.k - i nu k^2 for the shear modes |
///
/// # Errors
/// An equation without a dispersion relation, a parameter that is missing or not constant in number and range.
pub fn exact_branches(
    equation: &Equation,
    parameters: &BTreeMap<String, Vec<f64>>,
    wavevector: &[f64],
) -> Result<Vec<Branch>, EquationError> {
    let input = Input { equation, parameters, dimensions: wavevector.len() };
    if !equation.dimensions().contains(&input.dimensions) {
        let (equation, allowed) = (equation.name().to_string(), equation.dimensions().to_vec());
        return Err(EquationError::Dimensions { equation, dimensions: input.dimensions, allowed });
    }
    let square: f64 = wavevector.iter().map(|k| k * k).sum();
    let size = square.sqrt();
    let real = |omega: f64| Complex64::new(omega, 0.0);
    let along = |velocity: Vec<f64>| velocity.iter().zip(wavevector).map(|(v, k)| v * k).sum::<f64>();
    let damped = |omega: f64, diffusivity: f64| Complex64::new(omega, -diffusivity * square);
    let shear = wavevector.len() - 1;
    Ok(match equation.name() {
        "advection" => vec![branch("u", 1, real(along(input.velocity(None)?)))],
        "diffusion" => vec![branch("u", 1, damped(0.0, input.scalar("diffusivity")?))],
        "advection_diffusion" => {
            vec![branch("u", 1, damped(along(input.velocity(None)?), input.scalar("diffusivity")?))]
        }
        "dispersion" => vec![branch("u", 1, real(-input.scalar("dispersion")? * wavevector[0].powi(3)))],
        "burgers" => {
            let state = input.scalar_or("u", Some(0.0), "value of u to linearise about")?;
            let sum: f64 = wavevector.iter().sum();
            vec![branch("u", 1, damped(state * sum, input.scalar("viscosity")?))]
        }
        "acoustics" => {
            let (carried, speed) = (along(input.velocity(Some(0.0))?), input.scalar("sound_speed")?);
            waves("acoustic", carried, speed * size, &[("shear", shear)])
        }
        "shallow_water" => {
            let depth = input.positive("depth", "depth of the uniform state")?;
            let speed = (input.scalar("gravity")? * depth).sqrt();
            let carried = along(input.velocity(Some(0.0))?);
            waves("gravity", carried, speed * size, &[("vorticity", shear)])
        }
        "euler" => {
            let density = input.positive("density", "density of the uniform state")?;
            let pressure = input.positive("pressure", "pressure of the uniform state")?;
            let speed = (input.scalar("gamma")? * pressure / density).sqrt();
            let carried = along(input.velocity(Some(0.0))?);
            waves("acoustic", carried, speed * size, &[("entropy", 1), ("shear", shear)])
        }
        "incompressible" => {
            let carried = along(input.velocity(Some(0.0))?);
            vec![branch("shear", shear, damped(carried, input.scalar("viscosity")?))]
        }
        name => {
            let reason = match name {
                "poisson" => "it is steady",
                "navier_stokes" => "its modes couple; use `euler` for their inviscid limit",
                _ => "only the equations of the contract have a known one",
            };
            return Err(EquationError::NoDispersionRelation { equation: name.to_string(), reason });
        }
    })
}

fn branch(name: &str, multiplicity: usize, omega: Complex64) -> Branch {
    Branch { name: name.to_string(), multiplicity, omega }
}

fn waves(name: &str, carried: f64, travelled: f64, others: &[(&str, usize)]) -> Vec<Branch> {
    let mut branches = vec![
        branch(&format!("{name} +"), 1, (carried + travelled).into()),
        branch(&format!("{name} -"), 1, (carried - travelled).into()),
    ];
    let present = others.iter().filter(|(_, multiplicity)| *multiplicity > 0);
    branches.extend(present.map(|(name, multiplicity)| branch(name, *multiplicity, carried.into())));
    branches
}

struct Input<'a> {
    equation: &'a Equation,
    parameters: &'a BTreeMap<String, Vec<f64>>,
    dimensions: usize,
}

impl Input<'_> {
    fn numbers(
        &self,
        name: &str,
        count: usize,
        default: Option<f64>,
        meaning: &str,
    ) -> Result<Vec<f64>, EquationError> {
        let found = self.parameters.get(name).cloned().or_else(|| default.map(|value| vec![value; count]));
        let fits = |values: &Vec<f64>| values.len() == count && values.iter().all(|value| value.is_finite());
        found.filter(fits).ok_or_else(|| EquationError::DispersionInput {
            equation: self.equation.name().to_string(),
            name: name.to_string(),
            expected: count,
            meaning: meaning.to_string(),
        })
    }

    fn velocity(&self, default: Option<f64>) -> Result<Vec<f64>, EquationError> {
        self.numbers("velocity", self.dimensions, default, "velocity, one number per dimension")
    }

    /// A parameter of the equation, inside its range.
    fn scalar(&self, name: &str) -> Result<f64, EquationError> {
        let parameter = self.equation.parameters().iter().find(|parameter| parameter.name == name);
        let (default, meaning) = parameter.map_or((None, name), |parameter| (parameter.default, &parameter.meaning));
        let value = self.scalar_or(name, default, meaning)?;
        parameter.map_or(Ok(()), |parameter| parameter.check(self.equation.name(), value))?;
        Ok(value)
    }

    fn scalar_or(&self, name: &str, default: Option<f64>, meaning: &str) -> Result<f64, EquationError> {
        Ok(self.numbers(name, 1, default, meaning)?[0])
    }

    fn positive(&self, name: &str, meaning: &str) -> Result<f64, EquationError> {
        let value = self.scalar_or(name, None, meaning)?;
        if value > 0.0 {
            return Ok(value);
        }
        let (equation, name) = (self.equation.name().to_string(), name.to_string());
        let (range, reason) = ("above 0".to_string(), "waves need a positive state".to_string());
        Err(EquationError::ParameterRange { equation, name, value, range, reason })
    }
}

#[cfg(test)]
#[path = "dispersion_tests.rs"]
mod tests;
