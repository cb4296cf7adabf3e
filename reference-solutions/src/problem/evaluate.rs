//! Values and averages of a problem's quantities.

use crate::expression::Expression;

use super::average::average;
use super::error::{AXES, At, EvaluationError};
use super::formula::Formula;
use super::solver::Solved;
use super::{FieldSolution, Problem, Quantity};

/// Uncertainty beside the largest value above which an average of a smooth problem is refused.
const ACCEPTED_UNCERTAINTY: f64 = 1e-14;

/// Where the values of a quantity come from.
enum Origin<'a> {
    Formula(&'a Formula),
    /// The solver, its field, and the axis along which the slope is asked for.
    Solver(&'a Solved, usize, Option<usize>),
    Zero,
}

impl Problem {
    /// Values of a quantity at points, one array of coordinates a dimension.
    ///
    /// A derivative at a jump is that of the upper side. The source of a problem without one is zero.
    ///
    /// # Errors
    /// No such field, axis or coefficient; arrays of different lengths; a value that is not finite.
    pub fn evaluate(
        &self,
        quantity: Quantity<'_>,
        time: f64,
        points: &[&[f64]],
        out: &mut [f64],
    ) -> Result<(), EvaluationError> {
        self.same_lengths(points, out.len())?;
        match self.origin(quantity)? {
            Origin::Zero => out.fill(0.0),
            Origin::Formula(formula) => formula.evaluate(time, points, out),
            Origin::Solver(solved, field, slope) => {
                for (index, value) in out.iter_mut().enumerate() {
                    let found = solved.solution.evaluate(field, slope, time, points, index);
                    let problem = || self.name().to_string();
                    *value = found.map_err(|source| EvaluationError::Solver { problem: problem(), source })?;
                }
            }
        }
        self.all_finite(quantity, time, points, out)
    }

    /// Averages of a quantity over boxes with these corners, one array of bounds a dimension.
    ///
    /// Where both bounds of a direction are equal the box is a face, and the value is taken there. Smooth quantities are
    /// accurate to 1e-14 of the largest value among the boxes, and so are those whose jumps the problem declares or the solver knows.
    /// In a weak problem a jump that crosses a cell askew is followed by halving, to about 1e-3 of the cell's width.
    ///
    /// # Errors
    /// As [`Problem::evaluate`], and [`EvaluationError::Average`] where a smooth problem's average stays uncertain.
    pub fn average(
        &self,
        quantity: Quantity<'_>,
        time: f64,
        lower: &[&[f64]],
        upper: &[&[f64]],
        out: &mut [f64],
    ) -> Result<(), EvaluationError> {
        self.same_lengths(lower, out.len())?;
        self.same_lengths(upper, out.len())?;
        let breaks = self.breaks(time);
        let integrand = |points: &[Vec<f64>], values: &mut [f64]| {
            let points: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
            self.evaluate(quantity, time, &points, values)
        };
        let accuracy = average(lower, upper, &breaks, &integrand, out)?;
        if self.is_weak() || accuracy.uncertainty <= ACCEPTED_UNCERTAINTY {
            return Ok(());
        }
        let middle = |axis: usize| 0.5 * (lower[axis][accuracy.worst] + upper[axis][accuracy.worst]);
        Err(EvaluationError::Average {
            problem: self.name().to_string(),
            quantity: self.quantity_name(quantity),
            at: At { time, point: (0..self.dimensions()).map(middle).collect() },
            uncertainty: accuracy.uncertainty,
        })
    }

    /// Positions, by axis, at which the solution or a slope jumps at `time`; in periodic directions with their images.
    #[must_use]
    pub fn breaks(&self, time: f64) -> Vec<Vec<f64>> {
        let mut breaks: Vec<Vec<f64>> =
            self.inner.breaks.iter().map(|list| list.iter().map(|formula| formula.at_time(time)).collect()).collect();
        if let Some(solved) = &self.inner.solved {
            let (axis, positions) = solved.solution.breaks(time);
            breaks[axis].extend(positions);
        }
        for (axis, positions) in breaks.iter_mut().enumerate() {
            if self.boundaries()[axis][0] == super::BoundaryKind::Periodic {
                let (lower, length) = (self.lower()[axis], self.upper()[axis] - self.lower()[axis]);
                let first = |position: f64| lower + (position - lower).rem_euclid(length);
                *positions = positions
                    .iter()
                    .flat_map(|position| (-1..=1).map(move |image| (*position, f64::from(image))))
                    .map(|(position, image)| first(position) + image * length)
                    .collect();
            }
            positions.retain(|position| position.is_finite());
            positions.sort_by(f64::total_cmp);
            positions.dedup();
        }
        breaks
    }

    /// The source term of a field as an expression in the coordinates and time; none where there is no source.
    #[must_use]
    pub fn source_expression(&self, field: usize) -> Option<&Expression> {
        self.inner.sources.as_ref().and_then(|sources| sources.get(field)).map(Formula::expression)
    }

    /// A field of the solution as an expression in the coordinates and time; none where a solver gives it.
    #[must_use]
    pub fn solution_expression(&self, field: usize) -> Option<&Expression> {
        match self.inner.solution.get(field)? {
            FieldSolution::Formula { value, .. } => Some(value.expression()),
            FieldSolution::Solved(_) => None,
        }
    }

    /// Quantity as a person would call it.
    pub(super) fn quantity_name(&self, quantity: Quantity<'_>) -> String {
        let field = |index: usize| self.fields().get(index).map_or_else(|| format!("field {index}"), String::clone);
        match quantity {
            Quantity::Value(index) => field(index),
            Quantity::Derivative { field: index, axis } => {
                format!("the derivative of {} along {}", field(index), AXES.get(axis).unwrap_or(&"no axis"))
            }
            Quantity::Source(index) => format!("the source of {}", field(index)),
            Quantity::Coefficient { name, component } => format!("component {component} of coefficient {name}"),
        }
    }

    fn origin(&self, quantity: Quantity<'_>) -> Result<Origin<'_>, EvaluationError> {
        let missing = |reason: String| EvaluationError::NoSuchQuantity {
            problem: self.name().to_string(),
            quantity: self.quantity_name(quantity),
            reason,
        };
        let few_fields = || missing(format!("it has the fields {}", self.fields().join(", ")));
        let solved = |index: usize, slope: Option<usize>| match &self.inner.solved {
            Some(solved) => Ok(Origin::Solver(solved, index, slope)),
            None => Err(few_fields()),
        };
        match quantity {
            Quantity::Value(field) => match self.inner.solution.get(field).ok_or_else(few_fields)? {
                FieldSolution::Formula { value, .. } => Ok(Origin::Formula(value)),
                FieldSolution::Solved(index) => solved(*index, None),
            },
            Quantity::Derivative { axis, .. } if axis >= self.dimensions() => {
                Err(missing(format!("it has {} dimensions", self.dimensions())))
            }
            Quantity::Derivative { field, axis } => match self.inner.solution.get(field).ok_or_else(few_fields)? {
                FieldSolution::Formula { derivatives, .. } => Ok(Origin::Formula(&derivatives[axis])),
                FieldSolution::Solved(index) => solved(*index, Some(axis)),
            },
            Quantity::Source(field) if field >= self.fields().len() => Err(few_fields()),
            Quantity::Source(field) => {
                Ok(self.inner.sources.as_ref().map_or(Origin::Zero, |sources| Origin::Formula(&sources[field])))
            }
            Quantity::Coefficient { name, component } => {
                let formulas = self.inner.coefficients.get(name);
                let formula = formulas.and_then(|formulas| formulas.get(component));
                formula
                    .map(Origin::Formula)
                    .ok_or_else(|| missing(format!("its varying coefficients are {}", self.coefficients().join(", "))))
            }
        }
    }

    fn same_lengths(&self, arrays: &[&[f64]], count: usize) -> Result<(), EvaluationError> {
        if arrays.len() == self.dimensions() && arrays.iter().all(|array| array.len() == count) {
            return Ok(());
        }
        let lengths: Vec<String> = arrays.iter().map(|array| array.len().to_string()).collect();
        Err(EvaluationError::Shape {
            expected: format!("{} arrays of length {count}", self.dimensions()),
            found: format!("{} arrays of lengths {}", arrays.len(), lengths.join(", ")),
        })
    }

    fn all_finite(
        &self,
        quantity: Quantity<'_>,
        time: f64,
        points: &[&[f64]],
        values: &[f64],
    ) -> Result<(), EvaluationError> {
        let Some(index) = values.iter().position(|value| !value.is_finite()) else { return Ok(()) };
        Err(EvaluationError::NotFinite {
            problem: self.name().to_string(),
            quantity: self.quantity_name(quantity),
            value: values[index],
            at: At { time, point: points.iter().map(|axis| axis[index]).collect() },
        })
    }
}
