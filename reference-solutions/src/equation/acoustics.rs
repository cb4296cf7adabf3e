//! Linear acoustics in a mean flow.

use std::sync::LazyLock;

use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::Expression;

/// p_t + V . grad p + rho c^2 div v = S_p, v_t + V . grad v + grad p / rho = S_v.
pub(super) struct Acoustics;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![
        Parameter::new("density", "density rho of the medium, kg/m^3").within(Range::Above(0.0), "a medium has mass"),
        Parameter::new("sound_speed", "speed of sound c, m/s")
            .within(Range::Above(0.0), "at zero the system is no longer hyperbolic: its matrix cannot be diagonalised"),
        Parameter::new("velocity", "velocity V of the mean flow, one number per dimension, m/s").vector().default(0.0),
    ]
});

impl Family for Acoustics {
    fn name(&self) -> &str {
        "acoustics"
    }

    fn form(&self) -> &str {
        "p_t + V . grad p + rho c^2 div v = S_p, v_t + V . grad v + grad p / rho = S_v"
    }

    fn fields(&self, dimensions: usize) -> Vec<String> {
        ["p", "u", "v", "w"][..=dimensions].iter().map(|name| name.to_string()).collect()
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let (density, sound_speed) = (state.parameter("density"), state.parameter("sound_speed"));
        let mean = state.parameter_vector("velocity");
        let p = state.value("p");
        let velocity: Vec<Expression> =
            self.fields(state.dimensions)[1..].iter().map(|name| state.value(name)).collect();
        let material = |of: &Expression| state.rate(of) + state.advection(mean, of);
        let mut residuals = vec![material(&p) + &density * sound_speed.powi(2) * state.divergence(&velocity)];
        for (component, slope) in velocity.iter().zip(state.gradient(&p)) {
            residuals.push(material(component) + slope / &density);
        }
        Ok(residuals)
    }
}
