//! Problems: an equation, a solution, and all that a study needs to ask of them.
//!
//! A [`Problem`] comes from the catalogue or from a file of one's own; `file.rs` says what may stand in one. It is checked when it is read:
//! the solution must be finite, stay in the range in which the equation has a meaning, be periodic where it is said to
//! be, and satisfy the equation with its source, found by a second method.

mod accessors;
mod asked;
mod average;
mod build;
mod catalogue;
mod check;
mod error;
mod evaluate;
mod file;
mod formula;
mod functional;
mod gauss;
mod header;
mod names;
mod patch;
mod residuals;
mod solver;
mod text;

use std::collections::BTreeMap;
use std::path::Path;
use std::sync::Arc;

pub use error::{At, EvaluationError, Place, ProblemError};
pub use file::{Norm, Wave};
pub use functional::Functional;

use crate::equation::Equation;
use crate::expression::Expression;

use file::ProblemFile;
use formula::Formula;
use solver::Solved;
use text::Text;

/// A problem with a known solution. Cheap to clone; the clones share everything.
#[derive(Clone)]
pub struct Problem {
    inner: Arc<Inner>,
}

/// What can be asked of a problem.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Quantity<'a> {
    /// The solution's field with this index.
    Value(usize),
    /// The derivative of a field along a coordinate axis (0: x).
    Derivative {
        /// Index of the field.
        field: usize,
        /// Index of the axis.
        axis: usize,
    },
    /// The source term S of the equation of the field with this index.
    Source(usize),
    /// A component of a parameter that varies.
    Coefficient {
        /// The parameter's name.
        name: &'a str,
        /// Component of a vector, else 0.
        component: usize,
    },
}

/// What is prescribed at a side of the domain.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum BoundaryKind {
    /// The opposite side continues here.
    Periodic,
    /// The fields' values.
    Value,
    /// The fields' derivatives along the outward normal.
    Gradient,
    /// Nothing.
    None,
}

/// A solution that has jumps, or jumps in a derivative.
///
/// A scheme of formal order p smears a jump that is carried along linearly over a width h^(p/(p+1)), and its error in L1
/// is that width times the jump (Banks, Aslam & Rider 2008, J. Comput. Phys. 227:6985-7002). Where the c-th derivative is the first
/// that jumps, the error is the width to the power c + 1. Nonlinear waves steepen again, and their order is 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Weak {
    /// What carries the jump.
    pub wave: Wave,
    /// The first derivative that jumps: 0, the solution itself; 1, its slope (a kink); 2, its curvature.
    pub continuous: u32,
}

impl Weak {
    /// The order in L1 that theory gives a scheme of formal order `formal`.
    #[must_use]
    pub fn expected_order(&self, formal: f64) -> f64 {
        match self.wave {
            Wave::Linear => formal.min(f64::from(self.continuous + 1) * formal / (formal + 1.0)),
            Wave::Nonlinear => formal.min(1.0),
        }
    }
}

/// One component of a solution.
enum FieldSolution {
    /// A formula with its derivatives along the axes.
    Formula { value: Formula, derivatives: Vec<Formula> },
    /// The solver's field with this index.
    Solved(usize),
}

struct Inner {
    file: ProblemFile,
    text: Text,
    changed: BTreeMap<String, Vec<f64>>,
    equation: Equation,
    fields: Vec<String>,
    /// The equation once more, for the check.
    residuals: Vec<Expression>,
    parameters: BTreeMap<String, Vec<f64>>,
    coefficients: BTreeMap<String, Vec<Formula>>,
    boundaries: Vec<[BoundaryKind; 2]>,
    start: f64,
    end: f64,
    solution: Vec<FieldSolution>,
    solved: Option<Solved>,
    sources: Option<Vec<Formula>>,
    breaks: Vec<Vec<Formula>>,
    functionals: Vec<Functional>,
}

impl Problem {
    /// Names of the problems that come with the program.
    #[must_use]
    pub fn catalogue() -> &'static [&'static str] {
        catalogue::NAMES
    }

    /// The problem of the catalogue with this name.
    ///
    /// # Errors
    /// [`ProblemError::Unknown`], with the names that are near.
    pub fn named(name: &str) -> Result<Self, ProblemError> {
        let Some(text) = catalogue::text(name) else {
            return Err(ProblemError::Unknown { name: name.to_string(), near: catalogue::near(name) });
        };
        Self::from_text(&format!("catalogue/{name}.toml"), text)
    }

    /// The problem in a file of one's own.
    ///
    /// # Errors
    /// The file cannot be read, is no problem file, or its solution does not fit its equation.
    pub fn from_file(path: &Path) -> Result<Self, ProblemError> {
        let label = path.display().to_string();
        match std::fs::read_to_string(path) {
            Ok(text) => Self::from_text(&label, &text),
            Err(cause) => Err(ProblemError::Unreadable { path: label, cause }),
        }
    }

    /// The problem in a text, which messages call `label`.
    ///
    /// ```
    /// use gridassay_reference::problem::{Problem, Quantity};
    ///
    /// let text = r#"
    /// name = "my-wave"
    /// title = "A wave in a channel"
    /// reference = "own"
    /// equation = "advection"
    /// dimensions = 1
    /// source = "derived"
    ///
    /// [parameters]
    /// velocity = [-0.7]
    ///
    /// [names]
    /// k = "2*pi/1.3"
    ///
    /// [solution]
    /// u = "1 + 0.2*sin(k*x)*exp(-0.4*t)"
    ///
    /// [domain]
    /// lower = [0.0]
    /// upper = [1.3]
    /// boundaries = ["periodic"]
    ///
    /// [time]
    /// start = 0.0
    /// final = 0.37
    /// "#;
    /// let problem = Problem::from_text("my-wave.toml", text)?;
    /// let mut source = [0.0];
    /// problem.evaluate(Quantity::Source(0), 0.0, &[&[0.0]], &mut source).unwrap();
    /// // u_t + a u_x at x = 0, t = 0
    /// let expected = -0.7 * 0.2 * 2.0 * std::f64::consts::PI / 1.3;
    /// assert!((source[0] - expected).abs() < 1e-15);
    /// # Ok::<(), gridassay_reference::problem::ProblemError>(())
    /// ```
    ///
    /// # Errors
    /// As [`Problem::from_file`].
    pub fn from_text(label: &str, text: &str) -> Result<Self, ProblemError> {
        let text = Text::new(label, text);
        let file = text.parse()?;
        Self::assembled(file, text, BTreeMap::new())
    }

    /// A file where `name_or_path` ends with `.toml` (relative to `folder`), else a problem of the catalogue.
    ///
    /// # Errors
    /// As [`Problem::from_file`] and [`Problem::named`].
    pub fn resolve(name_or_path: &str, folder: &Path) -> Result<Self, ProblemError> {
        if name_or_path.ends_with(".toml") {
            Self::from_file(&folder.join(name_or_path))
        } else {
            Self::named(name_or_path)
        }
    }

    /// The same problem with other values of some parameters or constants. Coefficients stay as they are.
    ///
    /// # Errors
    /// [`ProblemError::Parameter`] for an unknown name, a wrong count or a value outside the equation's range, and the
    /// errors of the check when the solution then no longer fits.
    pub fn with_parameters(&self, values: &BTreeMap<String, Vec<f64>>) -> Result<Self, ProblemError> {
        let mut changed = self.inner.changed.clone();
        for (name, values) in values {
            self.inner.acceptable(name, values)?;
            changed.insert(name.clone(), values.clone());
        }
        Self::assembled(self.inner.file.clone(), self.inner.text.clone(), changed)
    }

    fn assembled(file: ProblemFile, text: Text, changed: BTreeMap<String, Vec<f64>>) -> Result<Self, ProblemError> {
        let problem = Self { inner: Arc::new(build::assemble(file, text, changed)?) };
        check::check(&problem)?;
        Ok(problem)
    }
}

#[cfg(test)]
mod tests;
