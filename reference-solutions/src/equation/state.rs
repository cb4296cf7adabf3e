//! The quantities of one case, and the operators of vector calculus on them.

use std::collections::BTreeMap;

use super::{COORDINATES, Parameters};
use crate::expression::Expression;

/// A solution's fields and primitives as named parts, with the parameters: what a residual is written in.
pub struct State {
    /// Number of space dimensions.
    pub dimensions: usize,
    parameters: Parameters,
    values: BTreeMap<String, Expression>,
}

impl State {
    pub(super) fn new(dimensions: usize, parameters: Parameters) -> State {
        State { dimensions, parameters, values: BTreeMap::new() }
    }

    pub(super) fn set(&mut self, name: &str, value: Expression) {
        self.values.insert(name.to_string(), Expression::named(name, value));
    }

    /// The field or primitive `name`.
    ///
    /// # Panics
    /// If the family asks for a name that it does not list.
    pub fn value(&self, name: &str) -> Expression {
        self.values[name].clone()
    }

    /// The components `name_x`, `name_y`, `name_z`.
    pub fn vector(&self, name: &str) -> Vec<Expression> {
        self.coordinates().iter().map(|x| self.value(&format!("{name}_{x}"))).collect()
    }

    /// A scalar parameter.
    pub fn parameter(&self, name: &str) -> Expression {
        self.parameters[name][0].clone()
    }

    /// A parameter with a component for each dimension.
    pub fn parameter_vector(&self, name: &str) -> &[Expression] {
        &self.parameters[name]
    }

    /// Every parameter.
    pub fn parameters(&self) -> &Parameters {
        &self.parameters
    }

    /// The coordinates' names.
    pub fn coordinates(&self) -> &'static [&'static str] {
        &COORDINATES[..self.dimensions]
    }

    /// The derivative by time.
    pub fn rate(&self, of: &Expression) -> Expression {
        of.derivative("t")
    }

    /// The gradient.
    pub fn gradient(&self, of: &Expression) -> Vec<Expression> {
        self.coordinates().iter().map(|x| of.derivative(x)).collect()
    }

    /// The divergence of a vector, or of one row of a tensor.
    pub fn divergence(&self, of: &[Expression]) -> Expression {
        let terms = self.coordinates().iter().zip(of).map(|(x, component)| component.derivative(x));
        terms.fold(Expression::zero(), |sum, term| sum + term)
    }

    /// div(coefficient grad of)
    pub fn diffusion(&self, coefficient: &Expression, of: &Expression) -> Expression {
        let flux: Vec<Expression> = self.gradient(of).iter().map(|slope| coefficient * slope).collect();
        self.divergence(&flux)
    }

    /// lap of
    pub fn laplacian(&self, of: &Expression) -> Expression {
        self.divergence(&self.gradient(of))
    }

    /// velocity . grad of
    pub fn advection(&self, velocity: &[Expression], of: &Expression) -> Expression {
        dot(velocity, &self.gradient(of))
    }
}

/// The scalar product.
pub(super) fn dot(a: &[Expression], b: &[Expression]) -> Expression {
    a.iter().zip(b).fold(Expression::zero(), |sum, (a, b)| sum + a * b)
}
