//! The compressible Navier-Stokes equations of a perfect gas: Newtonian stress with Stokes' hypothesis, Fourier's law.

use std::sync::LazyLock;

use super::transport::ILL_POSED;
use super::{EquationError, Family, Parameter, Range, State, euler};
use crate::expression::{Expression, Number};

/// Euler's equations with div tau in the momentum equation and div(tau v - q) in the energy equation, where
/// tau = mu (grad v + grad v^T - 2/3 div v I), q = -k grad T, T = p/(rho R), k = mu gamma R/((gamma - 1) Pr).
pub(super) struct NavierStokes;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![
        euler::gamma(),
        Parameter::new("gas_constant", "specific gas constant R, J/(kg K)")
            .within(Range::Above(0.0), "temperature is p/(rho R)"),
        Parameter::new("viscosity", "dynamic viscosity mu, Pa s").within(Range::AtLeast(0.0), ILL_POSED),
        Parameter::new("prandtl", "Prandtl number mu c_p / k")
            .within(Range::Above(0.0), "the conductivity is mu c_p / Pr, and must be neither infinite nor negative"),
    ]
});

impl Family for NavierStokes {
    fn name(&self) -> &str {
        "navier_stokes"
    }

    fn form(&self) -> &str {
        "rho_t + div(rho v) = S_1, (rho v)_t + div(rho v v) + grad p = div tau + S_2, \
         E_t + div((E + p) v) = div(tau v + k grad T) + S_3, tau = mu (grad v + grad v^T - 2/3 div v I), \
         T = p/(rho R), k = mu gamma R/((gamma - 1) Pr)"
    }

    fn fields(&self, dimensions: usize) -> Vec<String> {
        euler::fields(dimensions)
    }

    fn primitives(&self, dimensions: usize) -> Vec<String> {
        euler::primitives(dimensions)
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn fields_from_primitives(&self, state: &State) -> Vec<Expression> {
        euler::conserved(state)
    }

    fn add_primitives(&self, state: &mut State) {
        euler::add_primitives(state);
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let mut residuals = euler::inviscid_residual(state);
        let velocity = state.vector("velocity");
        let stress = stress(state, &velocity);
        let energy = residuals.len() - 1;
        let mut work = heat_gain(state);
        for (i, row) in stress.iter().enumerate() {
            let force = state.divergence(row);
            residuals[i + 1] = &residuals[i + 1] - &force;
            // div(tau v) = v . div tau + tau : grad v
            let dissipation = super::state::dot(row, &state.gradient(&velocity[i]));
            work = work + &velocity[i] * force + dissipation;
        }
        residuals[energy] = &residuals[energy] - work;
        Ok(residuals)
    }
}

fn stress(state: &State, velocity: &[Expression]) -> Vec<Vec<Expression>> {
    let viscosity = state.parameter("viscosity");
    let dilation = state.divergence(velocity).scaled(Number::Fraction(2, 3));
    let coordinates = state.coordinates();
    let entry = |i: usize, j: usize| {
        let strain = velocity[i].derivative(coordinates[j]) + velocity[j].derivative(coordinates[i]);
        let deviator = if i == j { strain - &dilation } else { strain };
        // Named by the ordered pair: the tensor is symmetric, and equal parts are computed once.
        let name = format!("stress_{}{}", coordinates[i.min(j)], coordinates[i.max(j)]);
        Expression::named(&name, &viscosity * deviator)
    };
    (0..coordinates.len()).map(|i| (0..coordinates.len()).map(|j| entry(i, j)).collect()).collect()
}

/// div(k grad T)
fn heat_gain(state: &State) -> Expression {
    let (gamma, gas_constant) = (state.parameter("gamma"), state.parameter("gas_constant"));
    let specific_heat = &gamma * &gas_constant / (&gamma - Expression::one());
    let conductivity = state.parameter("viscosity") * specific_heat / state.parameter("prandtl");
    let temperature = state.value("pressure") / (state.value("density") * gas_constant);
    state.diffusion(&conductivity, &Expression::named("temperature", temperature))
}
