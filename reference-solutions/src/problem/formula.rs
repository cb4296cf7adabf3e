//! A formula in the coordinates and time, ready to be evaluated at many points.

use crate::expression::Expression;

use super::error::AXES;

/// An expression in which only `x`, `y`, `z` and `t` are free.
#[derive(Debug, Clone)]
pub(super) struct Formula {
    expression: Expression,
}

impl Formula {
    pub fn new(expression: Expression) -> Self {
        Self { expression }
    }

    pub fn expression(&self) -> &Expression {
        &self.expression
    }

    pub fn depends_on(&self, name: &str) -> bool {
        self.expression.symbols().contains(name)
    }

    /// Values at points given by one array a direction; NaN or infinite outside the formula's range.
    pub fn evaluate(&self, time: f64, points: &[&[f64]], out: &mut [f64]) {
        for (index, value) in out.iter_mut().enumerate() {
            let mut names = [("t", time); 4];
            for (axis, coordinates) in points.iter().enumerate() {
                names[axis + 1] = (AXES[axis], coordinates[index]);
            }
            *value = self.expression.evaluate(&names[..=points.len()]).unwrap_or(f64::NAN);
        }
    }

    /// Value of a formula in `t` alone.
    pub fn at_time(&self, time: f64) -> f64 {
        self.expression.evaluate(&[("t", time)]).unwrap_or(f64::NAN)
    }
}
