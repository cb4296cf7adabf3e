//! Linear transport of one field: advection, diffusion, both, and third-derivative dispersion.

use std::sync::LazyLock;

use super::{EquationError, Family, Parameter, Range, State};
use crate::expression::Expression;

/// u_t + a . grad u = div(nu grad u) + S, u_t + mu u_xxx = S.
pub(super) enum Transport {
    Advection,
    Diffusion,
    AdvectionDiffusion,
    Dispersion,
}

/// Why a diffusion coefficient cannot be negative.
pub(super) const ILL_POSED: &str =
    "with a negative one the equation is ill-posed: modes would grow as exp(+|nu| k^2 t), without bound in k";

fn velocity() -> Parameter {
    Parameter::new("velocity", "velocity of advection, one number per dimension, m/s").vector()
}

fn diffusivity() -> Parameter {
    Parameter::new("diffusivity", "diffusion coefficient nu, m^2/s").within(Range::AtLeast(0.0), ILL_POSED)
}

static VELOCITY: LazyLock<Vec<Parameter>> = LazyLock::new(|| vec![velocity()]);
static DIFFUSIVITY: LazyLock<Vec<Parameter>> = LazyLock::new(|| vec![diffusivity()]);
static BOTH: LazyLock<Vec<Parameter>> = LazyLock::new(|| vec![velocity(), diffusivity()]);
static DISPERSION: LazyLock<Vec<Parameter>> =
    LazyLock::new(|| vec![Parameter::new("dispersion", "coefficient mu of the third derivative, m^3/s")]);

impl Family for Transport {
    fn name(&self) -> &str {
        match self {
            Transport::Advection => "advection",
            Transport::Diffusion => "diffusion",
            Transport::AdvectionDiffusion => "advection_diffusion",
            Transport::Dispersion => "dispersion",
        }
    }

    fn form(&self) -> &str {
        match self {
            Transport::Advection => "u_t + a . grad u = S",
            Transport::Diffusion => "u_t = div(nu grad u) + S",
            Transport::AdvectionDiffusion => "u_t + a . grad u = div(nu grad u) + S",
            Transport::Dispersion => "u_t + mu u_xxx = S",
        }
    }

    fn dimensions(&self) -> &[usize] {
        if matches!(self, Transport::Dispersion) { &[1] } else { &[1, 2, 3] }
    }

    fn fields(&self, _dimensions: usize) -> Vec<String> {
        vec!["u".into()]
    }

    fn parameters(&self) -> &[Parameter] {
        match self {
            Transport::Advection => &VELOCITY,
            Transport::Diffusion => &DIFFUSIVITY,
            Transport::AdvectionDiffusion => &BOTH,
            Transport::Dispersion => &DISPERSION,
        }
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let u = state.value("u");
        let advection = || state.advection(state.parameter_vector("velocity"), &u);
        let diffusion = || state.diffusion(&state.parameter("diffusivity"), &u);
        let rest = match self {
            Transport::Advection => advection(),
            Transport::Diffusion => -diffusion(),
            Transport::AdvectionDiffusion => advection() - diffusion(),
            Transport::Dispersion => state.parameter("dispersion") * u.derivative("x").derivative("x").derivative("x"),
        };
        Ok(vec![state.rate(&u) + rest])
    }
}
