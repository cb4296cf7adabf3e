//! What can be wrong with a problem.

use std::fmt;

/// A line of a problem file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    /// The file, as it was named.
    pub file: String,
    /// Line, from 1.
    pub line: usize,
}

impl fmt::Display for Place {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{}:{}", self.file, self.line)
    }
}

/// A position in space and time, for messages.
#[derive(Debug, Clone, PartialEq)]
pub struct At {
    /// Time.
    pub time: f64,
    /// Coordinates.
    pub point: Vec<f64>,
}

impl fmt::Display for At {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (axis, coordinate) in AXES.iter().zip(&self.point) {
            write!(formatter, "{axis} = {coordinate}, ")?;
        }
        write!(formatter, "t = {}", self.time)
    }
}

/// Names of the coordinates.
pub(crate) const AXES: [&str; 3] = ["x", "y", "z"];

/// Why a problem cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum ProblemError {
    /// No problem of the catalogue has this name.
    #[error(
        "no problem is called \"{name}\"{}; `gridassay problems` lists all, and a name that ends in .toml is read as a file",
        alike(near)
    )]
    Unknown {
        /// The name asked for.
        name: String,
        /// Names that resemble it.
        near: Vec<&'static str>,
    },
    /// The file cannot be read.
    #[error("the problem file {path} cannot be read: {cause}")]
    Unreadable {
        /// The path.
        path: String,
        /// What the system says.
        #[source]
        cause: std::io::Error,
    },
    /// The file is no TOML, or holds keys or types that do not belong there.
    #[error("{place}: {reason}")]
    Syntax {
        /// Where.
        place: Place,
        /// What the reader says.
        reason: String,
    },
    /// An entry cannot be used.
    #[error("{place}: {entry}: {reason}")]
    Entry {
        /// Where.
        place: Place,
        /// Which entry.
        entry: String,
        /// What is wrong, and the remedy.
        reason: String,
    },
    /// A parameter was given from outside that does not fit the problem.
    #[error("parameter {name} of problem {problem}: {reason}")]
    Parameter {
        /// The problem.
        problem: String,
        /// The parameter.
        name: String,
        /// What is wrong, and the remedy.
        reason: String,
    },
    /// The solution is not finite, or leaves the range in which the equation has a meaning.
    #[error(
        "{place}: the solution leaves its domain at {at}: {quantity} is {value}, but it must be {requirement}; change the solution, or the domain or times of the problem"
    )]
    Domain {
        /// Where the solution stands.
        place: Place,
        /// Point and time.
        at: At,
        /// What is out of range.
        quantity: String,
        /// Its value there.
        value: f64,
        /// The range.
        requirement: &'static str,
    },
    /// The solution does not satisfy its equation with its source.
    #[error(
        "{place}: the solution does not fit its equation: at {at} the residual of {field} misses the source by {misfit:.3e}, where its largest term is {scale:.3e}; correct the formula or a parameter, or write source = \"derived\""
    )]
    Misfit {
        /// Where the solution stands.
        place: Place,
        /// The field whose equation fails.
        field: String,
        /// Point and time.
        at: At,
        /// Residual minus source.
        misfit: f64,
        /// Size of the largest term.
        scale: f64,
    },
    /// A periodic direction in which the solution is not periodic.
    #[error(
        "{place}: {field} is not periodic in {axis}: it is {lower} at the lower side and {upper} at the upper side at {at}; change the domain's length or the boundary kind"
    )]
    NotPeriodic {
        /// Where the boundaries stand.
        place: Place,
        /// The field.
        field: String,
        /// The direction.
        axis: &'static str,
        /// Value at the lower side.
        lower: f64,
        /// Value at the upper side.
        upper: f64,
        /// Point and time.
        at: At,
    },
}

fn alike(names: &[&str]) -> String {
    match names {
        [] => String::new(),
        names => format!(" (near it: {})", names.join(", ")),
    }
}

/// Why a quantity cannot be evaluated.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum EvaluationError {
    /// The question has no meaning for this problem.
    #[error("problem {problem} has no {quantity}: {reason}")]
    NoSuchQuantity {
        /// The problem.
        problem: String,
        /// What was asked for.
        quantity: String,
        /// Why it is not there.
        reason: String,
    },
    /// Arrays of different lengths, or too few coordinates.
    #[error("the points have {found}, but {expected} are needed")]
    Shape {
        /// What was needed.
        expected: String,
        /// What was given.
        found: String,
    },
    /// A value is not finite.
    #[error("{quantity} of problem {problem} is {value} at {at}: the point is outside the range of its formula")]
    NotFinite {
        /// The problem.
        problem: String,
        /// The quantity.
        quantity: String,
        /// Its value.
        value: f64,
        /// Point and time.
        at: At,
    },
    /// An exact solver refuses.
    #[error("problem {problem}: {source}")]
    Solver {
        /// The problem.
        problem: String,
        /// What the solver says.
        #[source]
        source: crate::exact::ExactError,
    },
    /// An average did not reach its accuracy.
    #[error(
        "the average of {quantity} of problem {problem} over the cell around {at} is uncertain by {uncertainty:.1e} of its size: declare where it jumps under [breaks]"
    )]
    Average {
        /// The problem.
        problem: String,
        /// The quantity.
        quantity: String,
        /// Middle of the cell.
        at: At,
        /// Relative uncertainty.
        uncertainty: f64,
    },
}
