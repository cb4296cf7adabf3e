//! The scheme itself: the trait that a plugin implements.

use serde::{Deserialize, Serialize};

use crate::{Case, Description, Harness, Operation, SchemeError};

/// One array a field, in the order of the offer's fields, each flat with x fastest.
pub type Fields = Vec<Vec<f64>>;

/// A discretisation as built.
///
/// Answers depend on the parameters of the request and on the last `prepare` alone: the same question has the same answer,
/// whatever was asked before. The harness checks this. An operation that is not offered answers
/// [`SchemeError::NotOffered`], as the default methods do.
pub trait Scheme: Send {
    /// Who the scheme is and what it offers.
    fn describe(&self) -> Description;

    /// Gets ready for a case; a later call replaces the earlier case. Answers the nodes of a cell where the offer says
    /// [`Values::CellNodes`](crate::Values::CellNodes).
    ///
    /// # Errors
    /// A case outside the offers, or one that cannot be set up.
    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError>;

    /// Takes `steps` steps of exactly `step`, in place.
    ///
    /// # Errors
    /// A step outside what the scheme allows, or a computation that could not be done.
    fn advance(&mut self, _request: Advance<'_>, _harness: &mut dyn Harness) -> Result<(), SchemeError> {
        Err(not_offered(Operation::Advance))
    }

    /// Goes on to the time `until` by steps of its own choice, in place; answers how many steps it took.
    ///
    /// # Errors
    /// A computation that could not be done.
    fn march(&mut self, _request: March<'_>, _harness: &mut dyn Harness) -> Result<usize, SchemeError> {
        Err(not_offered(Operation::March))
    }

    /// The semi-discrete right-hand side at `time`, source included; ignored at nodes with a prescribed value.
    ///
    /// # Errors
    /// A computation that could not be done.
    fn rate(&mut self, _time: f64, _state: &[Vec<f64>], _harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        Err(not_offered(Operation::Rate))
    }

    /// The steady solution, iterated well below the discretisation error; callbacks are asked at time 0.
    ///
    /// # Errors
    /// An iteration that did not converge.
    fn solve(&mut self, _guess: &[Vec<f64>], _harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        Err(not_offered(Operation::Solve))
    }
}

fn not_offered(operation: Operation) -> SchemeError {
    SchemeError::NotOffered(format!("operation `{}`", operation.name()))
}

/// What `advance` is asked with. The state is replaced in place.
#[derive(Debug)]
pub struct Advance<'a> {
    /// The time of the state.
    pub time: f64,
    /// The size of every step.
    pub step: f64,
    /// How many steps.
    pub steps: usize,
    /// One array a field; the answer is left here. At nodes with a prescribed value it is the value at the new time.
    pub state: &'a mut [Vec<f64>],
    /// The levels - 1 older states, spaced by `step`, newest first; left as those of the new time.
    pub earlier: &'a mut [Fields],
}

/// What `march` is asked with. The state is replaced in place.
#[derive(Debug)]
pub struct March<'a> {
    /// The time of the state.
    pub time: f64,
    /// The time to reach, to rounding.
    pub until: f64,
    /// One array a field; the answer is left here.
    pub state: &'a mut [Vec<f64>],
    /// How accurate the time integration should be, where the harness asks for it.
    pub tolerance: Option<f64>,
}

/// Where the several values of a cell sit, along each direction.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Nodes {
    /// Positions in \[0, 1\] within a cell, ascending.
    pub offsets: Vec<f64>,
    /// Weights of a quadrature over the cell; they sum to 1.
    pub weights: Vec<f64>,
}

/// A steady solution.
#[derive(Clone, Debug, PartialEq)]
pub struct Solution {
    /// One array a field.
    pub state: Fields,
    /// How many iterations were taken, where that is known.
    pub iterations: Option<usize>,
    /// The norm of what is left of the discrete equations, where that is known.
    pub residual: Option<f64>,
}
