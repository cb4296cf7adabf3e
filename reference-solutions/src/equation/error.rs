//! What can be wrong with an equation, its parameters or a solution of it.

use thiserror::Error;

use crate::expression::ParseError;

/// A request that an equation cannot meet.
#[derive(Clone, Debug, PartialEq, Error)]
#[allow(missing_docs)] // the messages are the documentation
pub enum EquationError {
    #[error("there is no equation `{name}`; the equations are {}", known.join(", "))]
    Unknown { name: String, known: Vec<String> },
    #[error("`{equation}` is an equation in {} dimensions, not in {dimensions}", listed(allowed))]
    Dimensions { equation: String, dimensions: usize, allowed: Vec<usize> },
    #[error("`{equation}` has no parameter `{name}`; its parameters are {}", known.join(", "))]
    UnknownParameter { equation: String, name: String, known: Vec<String> },
    #[error("`{equation}` needs the parameter `{name}` ({meaning}); give it a value")]
    MissingParameter { equation: String, name: String, meaning: String },
    #[error("the parameter `{name}` of `{equation}` takes {expected} here, {found} given")]
    ParameterComponents { equation: String, name: String, expected: String, found: usize },
    #[error("the parameter `{name}` of `{equation}` is {value}, but must be {range}: {reason}")]
    ParameterRange { equation: String, name: String, value: f64, range: String, reason: String },
    #[error("`{name}` is no field of `{equation}`; a solution gives {}", known.join(", "))]
    NotAField { equation: String, name: String, known: Vec<String> },
    #[error("the solution of `{equation}` lacks {}{}", missing.join(", "), alternative(primitives))]
    Incomplete { equation: String, missing: Vec<String>, primitives: Vec<String> },
    #[error("the solution of `{equation}` is given by {}, so that `{name}` is already determined; leave it out", used.join(", "))]
    GivenTwice { equation: String, name: String, used: Vec<String> },
    #[error(
        "the equation `{equation}` has {fields} field(s) but {residuals} residual(s); give one residual for each field"
    )]
    Residuals { equation: String, fields: usize, residuals: usize },
    #[error("the name `{name}` in the equation `{equation}` is already taken by {taken_by}; choose another name")]
    NameTaken { equation: String, name: String, taken_by: &'static str },
    #[error("residual of `{equation}`, {error}")]
    Residual { equation: String, error: Box<ParseError> },
    #[error("`{equation}` has no dispersion relation of its own: {reason}")]
    NoDispersionRelation { equation: String, reason: &'static str },
    #[error(
        "the dispersion relation of `{equation}` needs `{name}` as {expected} finite number(s); give the {meaning}"
    )]
    DispersionInput { equation: String, name: String, expected: usize, meaning: String },
}

fn listed(dimensions: &[usize]) -> String {
    dimensions.iter().map(usize::to_string).collect::<Vec<_>>().join(", ")
}

fn alternative(primitives: &[String]) -> String {
    match primitives {
        [] => String::new(),
        _ => format!(" (or give all of {} instead of the fields)", primitives.join(", ")),
    }
}
