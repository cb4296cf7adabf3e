//! What a study of a bounded problem's operator measured.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::Parameters;

/// The rate or the step of a problem with boundaries, as a matrix: the data on the boundary are zero, so that it is linear.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct OperatorRecord {
    /// The equation's name.
    pub equation: String,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// Cells.
    pub cells: Vec<usize>,
    /// Courant number of the step, where the equation has a speed.
    pub courant: Option<f64>,
    /// Diffusion number of the step, where the equation has a diffusivity.
    pub diffusion_number: Option<f64>,
    /// The step.
    pub step: f64,
    /// Kinds of boundary at the lower and the upper end.
    pub boundaries: Vec<String>,
    /// What was probed: `rate` or `advance`.
    pub operation: String,
    /// The time integrator that takes the steps, where a rate was probed.
    pub integrator: Option<String>,
    /// How many values the operator acts on: those that no boundary prescribes.
    pub unknowns: usize,
    /// Eigenvalues of the operator, real and imaginary part, by falling real part: per unit of time of a rate, factors of a step.
    pub eigenvalues: Vec<[f64; 2]>,
    /// Largest real part of an eigenvalue of a rate: growth in the long run.
    pub spectral_abscissa: Option<f64>,
    /// Largest eigenvalue of the Hermitian part of a rate: the fastest growth that any state has at once, in the Euclidean norm.
    pub numerical_abscissa: Option<f64>,
    /// (epsilon, largest real part of an eigenvalue of any matrix within epsilon of the rate); epsilon per unit of time.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub pseudospectral_abscissa: Vec<(f64, f64)>,
    /// Largest modulus of an eigenvalue of one step.
    pub spectral_radius: Option<f64>,
    /// Bound on the error of the spectral radius by rounding; large for operators far from normal.
    pub radius_uncertainty: Option<f64>,
    /// Largest Euclidean norm of the powers of one step.
    pub transient: Option<TransientRecord>,
    /// Largest deviation of the answer to a random state from the matrix times that state, relative to the largest answer.
    pub deviation: Option<f64>,
}

/// Growth on the way.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct TransientRecord {
    /// Largest factor by which the norm of a state grows.
    pub growth: f64,
    /// After how many steps.
    pub step: usize,
    /// How many steps were looked at.
    pub steps: usize,
    /// Whether it was reached at the last of them, so that more may follow.
    pub still_growing: bool,
}
