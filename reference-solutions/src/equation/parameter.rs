//! Parameters of equations: how many components, which values, and why not others.

use super::{COORDINATES, Equation, EquationError, Parameters};
use crate::expression::Expression;

/// How many numbers a parameter is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Components {
    /// One.
    Scalar,
    /// One for each space dimension.
    Vector,
}

/// The values that make the equation well-posed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Range {
    /// Every finite number.
    Any,
    /// This value or more.
    AtLeast(f64),
    /// More than this value.
    Above(f64),
}

/// A parameter of an equation.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// Its name in the contract.
    pub name: String,
    /// What it is, with its dimension in SI units.
    pub meaning: String,
    /// How many numbers it is.
    pub components: Components,
    /// The value of each component where none is given.
    pub default: Option<f64>,
    /// The admissible values.
    pub range: Range,
    /// Why other values are not admissible.
    pub reason: String,
}

impl Parameter {
    pub(crate) fn new(name: &str, meaning: &str) -> Parameter {
        let (name, meaning) = (name.to_string(), meaning.to_string());
        Parameter {
            name,
            meaning,
            components: Components::Scalar,
            default: None,
            range: Range::Any,
            reason: "it has to be a finite number".into(),
        }
    }

    pub(crate) fn vector(mut self) -> Parameter {
        self.components = Components::Vector;
        self
    }

    pub(crate) fn default(mut self, value: f64) -> Parameter {
        self.default = Some(value);
        self
    }

    pub(crate) fn within(mut self, range: Range, reason: &str) -> Parameter {
        self.range = range;
        self.reason = reason.to_string();
        self
    }

    /// Checks one value of one component; a varying parameter is checked wherever it is evaluated.
    ///
    /// # Errors
    /// [`EquationError::ParameterRange`], with the reason.
    pub fn check(&self, equation: &str, value: f64) -> Result<(), EquationError> {
        let (holds, range) = match self.range {
            Range::Any => (value.is_finite(), "a finite number".to_string()),
            Range::AtLeast(bound) => (value.is_finite() && value >= bound, format!("at least {bound}")),
            Range::Above(bound) => (value.is_finite() && value > bound, format!("above {bound}")),
        };
        if holds {
            return Ok(());
        }
        let (equation, name, reason) = (equation.to_string(), self.name.clone(), self.reason.clone());
        Err(EquationError::ParameterRange { equation, name, value, range, reason })
    }

    /// The names of the components: `velocity_x`, `velocity_y`; a scalar's only name is its own.
    pub fn component_names(&self, dimensions: usize) -> Vec<String> {
        match self.components {
            Components::Scalar => vec![self.name.clone()],
            Components::Vector => COORDINATES[..dimensions].iter().map(|x| format!("{}_{x}", self.name)).collect(),
        }
    }
}

pub(super) fn complete(
    equation: &Equation,
    dimensions: usize,
    given: &Parameters,
) -> Result<Parameters, EquationError> {
    let name_of = || equation.name().to_string();
    let known = equation.parameters();
    if let Some(name) = given.keys().find(|name| known.iter().all(|parameter| parameter.name != **name)) {
        let known = known.iter().map(|parameter| parameter.name.clone()).collect();
        return Err(EquationError::UnknownParameter { equation: name_of(), name: name.clone(), known });
    }
    let mut complete = Parameters::new();
    for parameter in known {
        let components = parameter.component_names(dimensions).len();
        let values = match (given.get(&parameter.name), parameter.default) {
            (Some(values), _) => values.clone(),
            (None, Some(default)) => vec![Expression::from(default); components],
            (None, None) => {
                let (name, meaning) = (parameter.name.clone(), parameter.meaning.clone());
                return Err(EquationError::MissingParameter { equation: name_of(), name, meaning });
            }
        };
        if values.len() != components {
            let expected = format!("{components} value{}", if components == 1 { "" } else { "s" });
            let (name, found) = (parameter.name.clone(), values.len());
            return Err(EquationError::ParameterComponents { equation: name_of(), name, expected, found });
        }
        // What has no free name is a number, `2*pi` too.
        for value in values.iter().filter(|value| value.symbols().is_empty()) {
            parameter.check(equation.name(), value.evaluate(&[]).unwrap_or(f64::NAN))?;
        }
        complete.insert(parameter.name.clone(), values);
    }
    Ok(complete)
}

impl Equation {
    /// Every parameter left open: a symbol for each component, as a general formula shows them.
    pub fn open_parameters(&self, dimensions: usize) -> Parameters {
        let symbols = |parameter: &Parameter| {
            parameter.component_names(dimensions).iter().map(|name| Expression::symbol(name)).collect()
        };
        self.parameters().iter().map(|parameter| (parameter.name.clone(), symbols(parameter))).collect()
    }
}
