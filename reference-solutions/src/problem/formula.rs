//! A formula in the coordinates and time, compiled for evaluation at many points.

use std::sync::Arc;

use crate::expression::{EvaluateError, Expression, Input, Kind, Plan, Program};

use super::error::AXES;

/// An expression in which only the coordinates and `t` are free.
#[derive(Clone)]
pub(super) struct Formula {
    expression: Expression,
    plan: Arc<Plan>,
}

impl Formula {
    /// Compiles a formula in the first `dimensions` coordinates and time.
    pub fn new(expression: Expression, dimensions: usize) -> Result<Self, EvaluateError> {
        let names: Vec<&str> = AXES[..dimensions].iter().copied().chain(["t"]).collect();
        let kinds: Vec<Kind> = [Kind::Points].repeat(dimensions).into_iter().chain([Kind::Scalar]).collect();
        let plan = Plan::new(&Program::new(std::slice::from_ref(&expression), &names)?, &kinds);
        Ok(Self { expression, plan: Arc::new(plan) })
    }

    pub fn expression(&self) -> &Expression {
        &self.expression
    }

    pub fn depends_on(&self, name: &str) -> bool {
        self.expression.symbols().contains(name)
    }

    /// Values at points given by one array a direction; NaN or infinite outside the formula's range.
    pub fn evaluate(&self, time: f64, points: &[&[f64]], out: &mut [f64]) {
        let coordinates = points.iter().map(|axis| Input::Points(axis));
        let inputs: Vec<Input<'_>> = coordinates.chain([Input::Scalar(time)]).collect();
        self.plan.evaluate(&inputs, &mut [out]);
    }

    /// Value of a formula in `t` alone.
    pub fn at_time(&self, time: f64) -> f64 {
        self.expression.evaluate(&[("t", time)]).unwrap_or(f64::NAN)
    }
}
