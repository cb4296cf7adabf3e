//! What a study of invariants measured.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::Parameters;

/// What a scheme may be said to keep.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Invariant {
    /// The sum of each conserved field over the cells, weighted by their measure.
    Conservation,
    /// A state that is the same everywhere stays as it is.
    UniformState,
    /// The total variation of a scalar in one dimension does not increase in any step.
    TotalVariation,
    /// A scalar stays between its least and its greatest initial value.
    Bounds,
    /// What is not negative at the start (a scalar, depth, density, pressure) does not become negative.
    Positivity,
    /// The mirrored problem has the mirrored answer.
    Mirror,
    /// The problem with x and y exchanged has the answer with x and y exchanged.
    Exchange,
    /// Water at rest over an uneven bed stays at rest.
    StillWater,
    /// A uniform state stays as it is on a mapped grid.
    FreeStream,
    /// The answer depends on the question alone: not on how steps are grouped, nor on what was asked before.
    Repeatability,
}

impl Invariant {
    /// All of them, in the order in which they are tried.
    pub const ALL: [Self; 10] = [
        Self::Conservation,
        Self::UniformState,
        Self::TotalVariation,
        Self::Bounds,
        Self::Positivity,
        Self::Mirror,
        Self::Exchange,
        Self::StillWater,
        Self::FreeStream,
        Self::Repeatability,
    ];

    /// The name, as in claims and results files.
    pub fn name(self) -> &'static str {
        match self {
            Self::Conservation => "conservation",
            Self::UniformState => "uniform_state",
            Self::TotalVariation => "total_variation",
            Self::Bounds => "bounds",
            Self::Positivity => "positivity",
            Self::Mirror => "mirror",
            Self::Exchange => "exchange",
            Self::StillWater => "still_water",
            Self::FreeStream => "free_stream",
            Self::Repeatability => "repeatability",
        }
    }

    /// The trade's words.
    pub fn words(self) -> &'static str {
        match self {
            Self::Conservation => "conservation",
            Self::UniformState => "uniform state kept",
            Self::TotalVariation => "total variation not increased",
            Self::Bounds => "initial bounds kept",
            Self::Positivity => "positivity",
            Self::Mirror => "mirror symmetry",
            Self::Exchange => "x-y exchange symmetry",
            Self::StillWater => "still water over a bed",
            Self::FreeStream => "free stream on mapped grids",
            Self::Repeatability => "repeatability",
        }
    }

    /// What the measured figure is.
    pub fn figure(self) -> &'static str {
        match self {
            Self::Conservation => "change of the sum over the cells, relative to the sum of moduli",
            Self::UniformState | Self::FreeStream => "largest departure from the uniform state, relative to its size",
            Self::TotalVariation => "largest increase of the total variation in a step, relative to its initial value",
            Self::Bounds => "farthest overshoot beyond the initial bounds, relative to their distance",
            Self::Positivity => "most negative value, relative to the largest initial one",
            Self::Mirror => "largest difference from the mirrored answer, relative to the size of the state",
            Self::Exchange => "largest difference from the exchanged answer, relative to the size of the state",
            Self::StillWater => "largest departure from water at rest, relative to the size of the state",
            Self::Repeatability => "largest difference between two answers, relative to the size of the state",
        }
    }
}

/// A study of invariants.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct InvariantsRecord {
    /// The equation's name.
    pub equation: String,
    /// The parameters that the person fixed; each setting tells all of its own.
    pub parameters: Parameters,
    /// The settings in which the scheme was run: dimensions, signs of the velocity. A `worst` place names one by its number from 0.
    pub settings: Vec<InvariantSetting>,
    /// The checks, in the order in which they were made.
    pub checks: Vec<InvariantCheck>,
}

impl InvariantsRecord {
    /// The check of `invariant`; `None` where it was not asked for or the study ended before.
    pub fn check(&self, invariant: Invariant) -> Option<&InvariantCheck> {
        self.checks.iter().find(|check| check.invariant == invariant)
    }
}

/// One setting: a grid, parameters and a step.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct InvariantSetting {
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// The sign of the motion in each direction: of the velocity, or of the mean velocity of the states.
    pub signs: Vec<f64>,
    /// `advance`, or `rate` where the scheme offers that alone: the harness then takes the steps by SSPRK3.
    pub operation: String,
    /// The step.
    pub step: f64,
    /// Steps of each run.
    pub steps: usize,
    /// max over directions of (fastest signal) dt / h, where anything moves.
    pub courant: Option<f64>,
    /// max over directions of nu dt / h^2, where anything diffuses.
    pub diffusion_number: Option<f64>,
}

/// One invariant, tried.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct InvariantCheck {
    /// Which one.
    pub invariant: Invariant,
    /// Whether it holds within what is allowed; `null`: it could not be tried, and `sentence` says why.
    pub holds: Option<bool>,
    /// The worst figure of all runs; what it is a figure of, [`Invariant::figure`] tells. `null`: nothing was measured.
    pub measured: Option<f64>,
    /// What is allowed of that figure in that run.
    pub allowed: Option<f64>,
    /// Why so much is allowed.
    pub allowed_because: String,
    /// Where it is worst, where it was measured and is not zero.
    pub worst: Option<WorstPlace>,
    /// How many runs were compared.
    pub runs: usize,
    /// What was found, in one sentence.
    pub sentence: String,
}

/// Where an invariant is violated worst.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct WorstPlace {
    /// The number of the setting in [`InvariantsRecord::settings`].
    pub setting: usize,
    /// What the run began from, or what was compared.
    pub run: String,
    /// The field.
    pub field: Option<String>,
    /// The cell, from 0 in each direction; `null` where the figure belongs to no single cell.
    pub cell: Option<Vec<usize>>,
    /// After how many steps.
    pub step: Option<usize>,
}
