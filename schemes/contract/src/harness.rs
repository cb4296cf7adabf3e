//! What a scheme may ask back while it works on a request.

use serde::{Deserialize, Serialize};

use crate::{Fields, SchemeError};

/// The questions that a scheme may ask the harness. Because the scheme asks, it gets sources and boundary values at its own
/// stage times, and a Runge-Kutta scheme keeps its order.
///
/// Every method fails with [`SchemeError::Failed`] where the case at hand has no such data; a scheme hands the error on.
pub trait Harness {
    /// The source term of every field at `time`: at the field's own positions (`points` is `None`; cell averages where the state
    /// holds cell averages), or as point values at `points`, one list of coordinates per dimension.
    ///
    /// # Errors
    /// The case has no source term, or it cannot be evaluated there.
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError>;

    /// Values and outward normal derivatives along a side at `time`, and the exact solution in `layers` layers outside of it.
    ///
    /// # Errors
    /// The side is periodic or does not exist, or the data cannot be evaluated there.
    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError>;

    /// A varying parameter at `time`: one array for a scalar, one per dimension for a vector.
    ///
    /// # Errors
    /// The case has no such varying parameter, or it cannot be evaluated there.
    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError>;
}

/// A harness that has nothing to answer: for cases without source, boundary data and varying coefficients.
#[derive(Clone, Copy, Debug, Default)]
pub struct NoCallbacks;

impl Harness for NoCallbacks {
    fn source(&mut self, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed("this case has no source term".to_owned()))
    }

    fn boundary(&mut self, _: f64, side: Side, _: usize) -> Result<BoundaryData, SchemeError> {
        Err(SchemeError::Failed(format!("this case has no boundary data at {}", side.name())))
    }

    fn coefficient(&mut self, name: &str, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed(format!("`{name}` does not vary in this case")))
    }
}

/// The names of the questions, as they stand in the conversation.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Callback {
    /// The source term.
    Source,
    /// Boundary values and gradients.
    Boundary,
    /// A varying parameter.
    Coefficient,
}

/// A side of the domain.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Side {
    /// Where x is least.
    XLower,
    /// Where x is greatest.
    XUpper,
    /// Where y is least.
    YLower,
    /// Where y is greatest.
    YUpper,
    /// Where z is least.
    ZLower,
    /// Where z is greatest.
    ZUpper,
}

impl Side {
    /// All sides, x first, lower before upper: the numbering of the C ABI.
    pub const ALL: [Self; 6] = [Self::XLower, Self::XUpper, Self::YLower, Self::YUpper, Self::ZLower, Self::ZUpper];

    /// The side at the lower (`upper` false) or upper end of direction `axis`, 0 to 2.
    pub fn at(axis: usize, upper: bool) -> Self {
        Self::ALL[2 * axis + usize::from(upper)]
    }

    /// The direction that the side is normal to, 0 to 2.
    pub fn axis(self) -> usize {
        self as usize / 2
    }

    /// Whether the side is at the upper end of its direction.
    pub fn is_upper(self) -> bool {
        self as usize % 2 == 1
    }

    /// The side's name in the conversation.
    pub fn name(self) -> &'static str {
        ["x_lower", "x_upper", "y_lower", "y_upper", "z_lower", "z_upper"][self as usize]
    }

    /// The side of that name.
    pub fn named(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|side| side.name() == name)
    }
}

/// What the harness knows along a side, for each field in the order of the offer. A field's values sit at its own coordinates in
/// the other directions; in one dimension the arrays have length one.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct BoundaryData {
    /// The solution on the side (face averages where the state holds cell averages).
    pub value: Fields,
    /// The derivative along the outward normal.
    pub gradient: Fields,
    /// `[field][layer]`: the exact solution in the layers outside, nearest first.
    pub ghost: Vec<Fields>,
}
