//! The case that a scheme gets ready for: what `prepare` is asked with.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use crate::{ArrayEncoding, BoundaryKind, Callback, Grid, SchemeError};

/// What `prepare` is asked with.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Case {
    /// The equation's name.
    pub equation: String,
    /// Number of space dimensions.
    pub dimensions: usize,
    /// The parameters that are constant in this case.
    pub parameters: BTreeMap<String, Parameter>,
    /// The parameters that vary; they are absent from `parameters` and are asked through `coefficient`.
    #[serde(default)]
    pub coefficients: Vec<String>,
    /// The grid.
    pub grid: Grid,
    /// For each direction the kinds at its lower and upper end.
    pub boundaries: Vec<[SideKinds; 2]>,
    /// Whether a source term is to be added, by asking `source`.
    #[serde(default)]
    pub source: bool,
    /// What does not depend on time, so that asking once is enough.
    #[serde(default)]
    pub steady: Vec<Callback>,
    /// How arrays are written in this case (JSON conversation only).
    #[serde(default)]
    pub arrays: ArrayEncoding,
}

impl Case {
    /// A scalar parameter; a vector of length one counts as a scalar.
    ///
    /// # Errors
    /// [`SchemeError::Failed`] where the case has no such parameter, or has a vector.
    pub fn scalar(&self, name: &str) -> Result<f64, SchemeError> {
        match self.vector(name)? {
            [value] => Ok(*value),
            values => Err(SchemeError::Failed(format!(
                "parameter `{name}` has {} components, a scalar is needed",
                values.len()
            ))),
        }
    }

    /// The components of a parameter; a scalar has one.
    ///
    /// # Errors
    /// [`SchemeError::Failed`] where the case has no such parameter.
    pub fn vector(&self, name: &str) -> Result<&[f64], SchemeError> {
        let parameter = self.parameters.get(name);
        parameter
            .map(Parameter::components)
            .ok_or_else(|| SchemeError::Failed(format!("the case has no parameter `{name}`")))
    }

    /// Whether the direction `axis` is periodic.
    pub fn is_periodic(&self, axis: usize) -> bool {
        self.boundaries[axis][0].of("") == BoundaryKind::Periodic
    }

    /// Whether `callback` may be asked once for all times.
    pub fn is_steady(&self, callback: Callback) -> bool {
        self.steady.contains(&callback)
    }
}

/// The value of a parameter: a number, or one number per dimension.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum Parameter {
    /// A number.
    Scalar(f64),
    /// One number per dimension, such as a velocity.
    Vector(Vec<f64>),
}

impl Parameter {
    /// The components; a scalar has one.
    pub fn components(&self) -> &[f64] {
        match self {
            Self::Scalar(value) => std::slice::from_ref(value),
            Self::Vector(values) => values,
        }
    }
}

/// The kind of condition at one end of a direction: one for all fields, or a table by field.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum SideKinds {
    /// The same kind for all fields.
    Same(BoundaryKind),
    /// A kind for each field.
    ByField(BTreeMap<String, BoundaryKind>),
}

impl SideKinds {
    /// The kind for `field`; a field that a table leaves out has no condition.
    pub fn of(&self, field: &str) -> BoundaryKind {
        match self {
            Self::Same(kind) => *kind,
            Self::ByField(table) => table.get(field).copied().unwrap_or(BoundaryKind::None),
        }
    }
}
