//! Burgers' equation.

use std::sync::LazyLock;

use super::transport::ILL_POSED;
use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::{Expression, Number};

/// u_t + (u^2/2)_x [+ (u^2/2)_y + (u^2/2)_z] = nu lap u + S, in conservative form.
pub(super) struct Burgers;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![
        Parameter::new("viscosity", "kinematic viscosity nu, m^2/s; 0 is inviscid")
            .default(0.0)
            .within(Range::AtLeast(0.0), ILL_POSED),
    ]
});

impl Family for Burgers {
    fn name(&self) -> &str {
        "burgers"
    }

    fn form(&self) -> &str {
        "u_t + (u^2/2)_x [+ (u^2/2)_y + (u^2/2)_z] = nu lap u + S"
    }

    fn fields(&self, _dimensions: usize) -> Vec<String> {
        vec!["u".into()]
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let u = state.value("u");
        let flux = vec![u.powi(2).scaled(Number::HALF); state.dimensions];
        let diffusion = state.parameter("viscosity") * state.laplacian(&u);
        Ok(vec![state.rate(&u) + state.divergence(&flux) - diffusion])
    }
}
