//! Integrals over the domain that a study may compare.

use crate::expression::Expression;

use super::average::average;
use super::error::{AXES, EvaluationError};
use super::{Problem, Quantity};

/// Cells a direction into which the domain is cut to integrate: pulses must not fall between the points of one rule.
const CELLS: usize = 24;

/// The integral over the domain of a formula in the fields, the coordinates and time.
#[derive(Debug, Clone)]
pub struct Functional {
    name: String,
    text: String,
    integrand: Expression,
}

impl Functional {
    pub(super) fn new(name: &str, text: &str, integrand: Expression) -> Self {
        Self { name: name.to_string(), text: text.to_string(), integrand }
    }

    /// Its name.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The integrand as it was written.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }
}

impl Problem {
    /// The integrand of a functional from values of the fields (one array a field) at points.
    ///
    /// # Errors
    /// No functional with this index, or arrays of different lengths.
    pub fn integrand(
        &self,
        functional: usize,
        time: f64,
        points: &[&[f64]],
        fields: &[&[f64]],
        out: &mut [f64],
    ) -> Result<(), EvaluationError> {
        let count = out.len();
        let whole = |arrays: &[&[f64]], expected| arrays.len() == expected && arrays.iter().all(|a| a.len() == count);
        let Some(known) = self.functionals().get(functional) else {
            return Err(EvaluationError::NoSuchQuantity {
                problem: self.name().to_string(),
                quantity: format!("functional {functional}"),
                reason: format!("it has {}", self.functionals().len()),
            });
        };
        if !whole(points, self.dimensions()) || !whole(fields, self.fields().len()) {
            let expected = format!("one array of length {count} for each coordinate and each field");
            return Err(EvaluationError::Shape { expected, found: "others".to_string() });
        }
        for (index, value) in out.iter_mut().enumerate() {
            let coordinates = AXES.iter().zip(points).map(|(axis, line)| (*axis, line[index]));
            let state = self.fields().iter().zip(fields).map(|(name, array)| (name.as_str(), array[index]));
            let names: Vec<(&str, f64)> = coordinates.chain(state).chain([("t", time)]).collect();
            *value = known.integrand.evaluate(&names).unwrap_or(f64::NAN);
        }
        Ok(())
    }

    /// The exact value of a functional at `time`, to 1e-13 of the integral of its absolute value.
    ///
    /// # Errors
    /// As [`Problem::integrand`] and [`Problem::average`].
    pub fn functional(&self, functional: usize, time: f64) -> Result<f64, EvaluationError> {
        let dimensions = self.dimensions();
        let boxes = CELLS.pow(dimensions as u32);
        let bound = |axis: usize, index: usize, end: usize| {
            let cell = index / CELLS.pow(axis as u32) % CELLS + end;
            self.lower()[axis] + (self.upper()[axis] - self.lower()[axis]) * cell as f64 / CELLS as f64
        };
        let side = |end: usize| -> Vec<Vec<f64>> {
            (0..dimensions).map(|axis| (0..boxes).map(|index| bound(axis, index, end)).collect()).collect()
        };
        let (lower, upper) = (side(0), side(1));
        let lower: Vec<&[f64]> = lower.iter().map(Vec::as_slice).collect();
        let upper: Vec<&[f64]> = upper.iter().map(Vec::as_slice).collect();
        let integrand = |points: &[Vec<f64>], values: &mut [f64]| {
            let points: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
            let mut fields = vec![vec![0.0; values.len()]; self.fields().len()];
            for (field, array) in fields.iter_mut().enumerate() {
                self.evaluate(Quantity::Value(field), time, &points, array)?;
            }
            let fields: Vec<&[f64]> = fields.iter().map(Vec::as_slice).collect();
            self.integrand(functional, time, &points, &fields, values)
        };
        let mut averages = vec![0.0; boxes];
        average(&lower, &upper, &self.breaks(time), &integrand, &mut averages)?;
        let measure: f64 = self.lower().iter().zip(self.upper()).map(|(low, high)| high - low).product();
        Ok(averages.iter().sum::<f64>() / boxes as f64 * measure)
    }
}
