//! The incompressible Navier-Stokes equations at density 1.

use std::sync::LazyLock;

use super::transport::ILL_POSED;
use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::Expression;

/// u_t + u . grad u = -grad p + nu lap u + S, div u = 0.
pub(super) struct Incompressible;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![Parameter::new("viscosity", "kinematic viscosity nu, m^2/s").within(Range::AtLeast(0.0), ILL_POSED)]
});

impl Family for Incompressible {
    fn name(&self) -> &str {
        "incompressible"
    }

    fn form(&self) -> &str {
        "u_t + u . grad u = -grad p + nu lap u + S, div u = 0"
    }

    fn dimensions(&self) -> &[usize] {
        &[2, 3]
    }

    fn fields(&self, dimensions: usize) -> Vec<String> {
        let velocity = ["u", "v", "w"][..dimensions].iter();
        velocity.chain(&["p"]).map(|name| name.to_string()).collect()
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let fields = self.fields(state.dimensions);
        let velocity: Vec<Expression> = fields[..state.dimensions].iter().map(|name| state.value(name)).collect();
        let viscosity = state.parameter("viscosity");
        let momentum = velocity.iter().zip(state.gradient(&state.value("p"))).map(|(component, slope)| {
            let inertia = state.rate(component) + state.advection(&velocity, component);
            inertia + slope - &viscosity * state.laplacian(component)
        });
        Ok(momentum.chain([state.divergence(&velocity)]).collect())
    }
}
