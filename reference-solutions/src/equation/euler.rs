//! The Euler equations of a perfect gas.

use std::sync::LazyLock;

use super::shallow_water::named_vector;
use super::state::dot;
use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::{Expression, Number};

/// rho_t + div(rho v) = S, (rho v)_t + div(rho v v) + grad p = S, E_t + div((E + p) v) = S, p = (gamma - 1)(E - rho |v|^2/2).
pub(super) struct Euler;

pub(super) fn gamma() -> Parameter {
    Parameter::new("gamma", "ratio of specific heats")
        .within(Range::Above(1.0), "a gas at gamma <= 1 has no positive internal energy")
}

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| vec![gamma()]);

impl Family for Euler {
    fn name(&self) -> &str {
        "euler"
    }

    fn form(&self) -> &str {
        "rho_t + div(rho v) = S_1, (rho v)_t + div(rho v v) + grad p = S_2, E_t + div((E + p) v) = S_3, \
         p = (gamma - 1)(E - rho |v|^2/2)"
    }

    fn fields(&self, dimensions: usize) -> Vec<String> {
        fields(dimensions)
    }

    fn primitives(&self, dimensions: usize) -> Vec<String> {
        primitives(dimensions)
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn fields_from_primitives(&self, state: &State) -> Vec<Expression> {
        conserved(state)
    }

    fn add_primitives(&self, state: &mut State) {
        add_primitives(state);
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        Ok(inviscid_residual(state))
    }
}

pub(super) fn fields(dimensions: usize) -> Vec<String> {
    let mut names = named_vector("density", "momentum", dimensions);
    names.push("energy".into());
    names
}

pub(super) fn primitives(dimensions: usize) -> Vec<String> {
    let mut names = named_vector("density", "velocity", dimensions);
    names.push("pressure".into());
    names
}

pub(super) fn conserved(state: &State) -> Vec<Expression> {
    let (density, velocity) = (state.value("density"), state.vector("velocity"));
    let internal = state.value("pressure") / (state.parameter("gamma") - Expression::one());
    let kinetic = (&density * dot(&velocity, &velocity)).scaled(Number::HALF);
    let momentum = velocity.iter().map(|velocity| &density * velocity);
    std::iter::once(density.clone()).chain(momentum).chain([internal + kinetic]).collect()
}

pub(super) fn add_primitives(state: &mut State) {
    let (density, momentum) = (state.value("density"), state.vector("momentum"));
    let kinetic = (dot(&momentum, &momentum) / &density).scaled(Number::HALF);
    let pressure = (state.parameter("gamma") - Expression::one()) * (state.value("energy") - kinetic);
    for (x, momentum) in state.coordinates().iter().zip(&momentum) {
        state.set(&format!("velocity_{x}"), momentum / &density);
    }
    state.set("pressure", pressure);
}

pub(super) fn inviscid_residual(state: &State) -> Vec<Expression> {
    let (momentum, velocity) = (state.vector("momentum"), state.vector("velocity"));
    let (energy, pressure) = (state.value("energy"), state.value("pressure"));
    let carried = |of: &Expression| velocity.iter().map(|v| of * v).collect::<Vec<_>>();
    let mut residuals = vec![state.rate(&state.value("density")) + state.divergence(&momentum)];
    for (component, slope) in momentum.iter().zip(state.gradient(&pressure)) {
        residuals.push(state.rate(component) + state.divergence(&carried(component)) + slope);
    }
    let enthalpy = Expression::named("total_enthalpy", &energy + &pressure);
    residuals.push(state.rate(&energy) + state.divergence(&carried(&enthalpy)));
    residuals
}
