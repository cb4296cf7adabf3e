//! Poisson's equation with a conductivity that may vary.

use std::sync::LazyLock;

use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::Expression;

/// -div(k grad u) = S, steady.
pub(super) struct Poisson;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![Parameter::new("conductivity", "conductivity k").default(1.0).within(
        Range::Above(0.0),
        "where it vanishes or changes its sign the equation is not elliptic, and has no unique solution",
    )]
});

impl Family for Poisson {
    fn name(&self) -> &str {
        "poisson"
    }

    fn form(&self) -> &str {
        "-div(k grad u) = S"
    }

    fn fields(&self, _dimensions: usize) -> Vec<String> {
        vec!["u".into()]
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn steady(&self) -> bool {
        true
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        Ok(vec![-state.diffusion(&state.parameter("conductivity"), &state.value("u"))])
    }
}
