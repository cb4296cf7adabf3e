//! The shallow-water equations over a bed.

use std::sync::LazyLock;

use super::{COORDINATES, EquationError, Family, Parameter, Range, State};
use crate::expression::{Expression, Number};

/// h_t + div(h v) = S_h, (h v)_t + div(h v v) + grad(g h^2/2) = -g h grad b + S_v.
pub(super) struct ShallowWater;

static PARAMETERS: LazyLock<Vec<Parameter>> = LazyLock::new(|| {
    vec![
        Parameter::new("gravity", "acceleration of gravity g, m/s^2")
            .within(Range::Above(0.0), "without gravity the water has no waves, and the system is not hyperbolic"),
        Parameter::new("bed", "height b of the bed, m").default(0.0),
    ]
});

impl Family for ShallowWater {
    fn name(&self) -> &str {
        "shallow_water"
    }

    fn form(&self) -> &str {
        "h_t + div(h v) = S_h, (h v)_t + div(h v v) + grad(g h^2/2) = -g h grad b + S_v"
    }

    fn dimensions(&self) -> &[usize] {
        &[1, 2]
    }

    fn fields(&self, dimensions: usize) -> Vec<String> {
        named_vector("depth", "discharge", dimensions)
    }

    fn primitives(&self, dimensions: usize) -> Vec<String> {
        named_vector("depth", "velocity", dimensions)
    }

    fn parameters(&self) -> &[Parameter] {
        &PARAMETERS
    }

    fn fields_from_primitives(&self, state: &State) -> Vec<Expression> {
        let depth = state.value("depth");
        let discharge = state.vector("velocity").into_iter().map(|velocity| &depth * velocity);
        std::iter::once(depth.clone()).chain(discharge).collect()
    }

    fn add_primitives(&self, state: &mut State) {
        let depth = state.value("depth");
        for (x, discharge) in state.coordinates().iter().zip(state.vector("discharge")) {
            state.set(&format!("velocity_{x}"), discharge / &depth);
        }
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let (depth, gravity) = (state.value("depth"), state.parameter("gravity"));
        let (discharge, velocity) = (state.vector("discharge"), state.vector("velocity"));
        let pressure = (&gravity * depth.powi(2)).scaled(Number::HALF);
        let mut residuals = vec![state.rate(&depth) + state.divergence(&discharge)];
        for ((component, x), slope) in
            discharge.iter().zip(state.coordinates()).zip(state.gradient(&state.parameter("bed")))
        {
            let flux: Vec<Expression> = velocity.iter().map(|v| component * v).collect();
            let balance = state.divergence(&flux) + pressure.derivative(x) + &gravity * &depth * slope;
            residuals.push(state.rate(component) + balance);
        }
        Ok(residuals)
    }
}

/// `first`, then `vector_x`, `vector_y`, ...
pub(super) fn named_vector(first: &str, vector: &str, dimensions: usize) -> Vec<String> {
    let components = COORDINATES[..dimensions].iter().map(|x| format!("{vector}_{x}"));
    std::iter::once(first.to_string()).chain(components).collect()
}
