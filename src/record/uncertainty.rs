//! What a table of values on several grids says about its own uncertainty.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// Values without an exact solution, on three grids or more.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct UncertaintyRecord {
    /// The table's path as it was given.
    pub table: String,
    /// SHA-256 of the table's bytes, in hexadecimal.
    pub digest: String,
    /// Where the table counts the cells of whole grids, the number of space dimensions by which cell sizes were taken from them; `null`
    /// where it gives cell sizes.
    pub dimensions: Option<usize>,
    /// The quantities, in the order of the table.
    pub quantities: Vec<QuantityUncertainty>,
}

/// What the table says of one quantity.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct QuantityUncertainty {
    /// Its column's heading.
    pub name: String,
    /// Every three neighbouring grids, the finest three first.
    pub triples: Vec<GridTriple>,
}

/// Three grids, fine to coarse, by the procedure of Celik et al. (2008), ASME J. Fluids Eng. 130(7):078001. A figure that has no
/// meaning (no apparent order, or a value of zero to be relative to) is `null`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct GridTriple {
    /// Cell sizes.
    pub sizes: [f64; 3],
    /// Values.
    pub values: [f64; 3],
    /// How the values converge.
    pub convergence: ConvergenceKind,
    /// Apparent order.
    pub order: Option<f64>,
    /// Value extrapolated from the two finest of the three.
    pub extrapolated: Option<f64>,
    /// |(phi_1 - phi_2) / phi_1|.
    pub approximate_error: Option<f64>,
    /// |(phi_ext - phi_1) / phi_ext|.
    pub extrapolated_error: Option<f64>,
    /// Grid convergence index of the finest of the three, relative.
    pub fine_index: Option<f64>,
    /// Grid convergence index of the middle one, relative.
    pub coarse_index: Option<f64>,
}

/// How three values converge.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ConvergenceKind {
    /// Differences shrink and keep their sign.
    Monotone,
    /// Differences change their sign: the index bounds an oscillation, and the apparent order means little.
    Oscillatory,
    /// Differences do not shrink: there is no order and no index.
    Diverging,
    /// The two finest values differ by no more than round-off.
    Stalled,
}

impl ConvergenceKind {
    /// The word, as on pages.
    pub fn word(self) -> &'static str {
        match self {
            Self::Monotone => "monotone",
            Self::Oscillatory => "oscillatory",
            Self::Diverging => "diverging",
            Self::Stalled => "stalled",
        }
    }

    /// What a reader should make of it, where the figures do not speak for themselves.
    pub fn caution(self) -> Option<&'static str> {
        match self {
            Self::Monotone => None,
            Self::Oscillatory => Some(
                "the differences change their sign: the index bounds an oscillation, and the apparent order means little",
            ),
            Self::Diverging => Some(
                "the differences do not shrink as the grid is refined: there is no order and no index; finer grids are needed",
            ),
            Self::Stalled => Some(
                "the two finest values differ by no more than round-off: converged, or not changed by the grid at all",
            ),
        }
    }
}
