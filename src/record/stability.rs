//! What a study of the stable steps measured.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Parameters, PredictedRange};

/// Which number measures the step.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum StepNumber {
    /// a dt / h.
    Courant,
    /// nu dt / h^2.
    DiffusionNumber,
}

impl StepNumber {
    /// The trade's words.
    pub fn words(self) -> &'static str {
        match self {
            Self::Courant => "Courant number",
            Self::DiffusionNumber => "diffusion number",
        }
    }
}

/// A study of the stable steps.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct StabilityRecord {
    /// The equation's name.
    pub equation: String,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// The grids on which impulses were run.
    pub cells: Vec<usize>,
    /// Which number was varied.
    pub number: StepNumber,
    /// The other number, where it was held fixed.
    pub held: Option<f64>,
    /// The largest number up to which every smaller one is stable; 0: no stable step; `null`: no limit was found up to
    /// `scanned_up_to`, or nothing could be measured (then `stopped` says why).
    pub stable_up_to: Option<f64>,
    /// The end of the scan.
    pub scanned_up_to: f64,
    /// The stable set within the scan, as intervals; more than one where it has holes.
    pub intervals: Vec<[f64; 2]>,
    /// k h of the mode that grows first beyond the limit, where there is a limit.
    pub worst_theta: Option<f64>,
    /// At the limit itself the powers of G grow like this power of the number of steps: a defective eigenvalue on the unit circle, as of
    /// leapfrog at Courant number 1. `null`: bounded there, or of one component, which cannot be defective.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub growth_at_limit: Option<f64>,
    /// How the largest growth rises from zero, where there is no stable step at all.
    pub weak_growth: Option<WeakGrowth>,
    /// A bound that the scheme sets itself by refusing larger steps.
    pub refused_from: Option<f64>,
    /// The scan: (number, largest modulus of an eigenvalue of G over all wavenumbers).
    pub scan: Vec<(f64, Option<f64>)>,
    /// Whether the scheme has no amplification factor (it is not linear, not the same everywhere, or depends on the time), so that only the runs
    /// from noise below tell anything.
    #[serde(default, skip_serializing_if = "std::ops::Not::not")]
    pub by_runs_alone: bool,
    /// Long runs from noise on either side of the limit.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub confirmation: Vec<Confirmation>,
    /// Ranges that time integrators would have with the scheme's rate, where it offers one.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub predicted: Vec<PredictedRange>,
    /// The plane of both numbers, row by row, where a map was asked for.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub map: Vec<MapRow>,
}

/// The stable Courant numbers at one diffusion number.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct MapRow {
    /// The diffusion number.
    pub diffusion_number: f64,
    /// The stable Courant numbers, as intervals; empty where none is stable. The ends are the boundary of the plane's stable set.
    pub stable: Vec<[f64; 2]>,
}

/// Growth without any stable step: max |G| - 1 = coefficient x number^power.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct WeakGrowth {
    /// The power of the number.
    pub power: f64,
    /// The coefficient.
    pub coefficient: f64,
    /// Steps until a mode is ten times as large, at number 0.1.
    pub steps_to_tenfold: f64,
}

/// A long run from noise.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Confirmation {
    /// The number at which it ran.
    pub number: f64,
    /// How many steps.
    pub steps: usize,
    /// Largest value at the end over largest value at the beginning; `null`: not finite.
    pub growth: Option<f64>,
    /// Whether the run agrees with the limit.
    pub agrees: bool,
}
