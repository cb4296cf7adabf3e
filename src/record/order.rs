//! What a refinement study measured.

use std::collections::BTreeMap;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::Parameters;

/// What is refined from level to level.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum Refinement {
    /// The grid, with the step tied to it by a power such that the time error falls at least as fast.
    Space,
    /// The step alone, on one grid; errors are differences between successive levels.
    Time,
    /// Grid and step together, in proportion.
    #[default]
    SpaceTime,
}

impl Refinement {
    /// The word, as in claims files and on pages.
    pub fn word(self) -> &'static str {
        match self {
            Self::Space => "space",
            Self::Time => "time",
            Self::SpaceTime => "space-time",
        }
    }
}

/// A refinement study.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct OrderRecord {
    /// The equation's name.
    pub equation: String,
    /// The problem's name.
    pub problem: String,
    /// The equation's constant parameters.
    pub parameters: Parameters,
    /// What was refined.
    pub refine: Refinement,
    /// The operation of the scheme that was used: `advance`, `march`, `rate` or `solve`.
    pub operation: String,
    /// Where the run began and ended; `null` for a steady problem.
    pub times: Option<[f64; 2]>,
    /// Courant number on the coarsest level, where the problem has a speed.
    pub courant: Option<f64>,
    /// Diffusion number on the coarsest level, where the problem has a diffusivity.
    pub diffusion_number: Option<f64>,
    /// The step falls as this power of the cell width; `null` for a steady problem or where the step alone is refined.
    pub step_power: Option<f64>,
    /// The grids and steps, coarse to fine.
    pub levels: Vec<Level>,
    /// By field: the norms of the exact solution on the finest level, by which levels that resolve nothing are known; empty where the
    /// step alone is refined.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub solution_size: BTreeMap<String, Norms>,
    /// By field, then by norm (`l1`, `l2`, `linf`): the observed order.
    pub observed: BTreeMap<String, BTreeMap<String, Observed>>,
}

impl OrderRecord {
    /// The ladder of one field in one norm: (h, error, floor), coarse to fine, without levels that have no errors at all (the finest
    /// step, where the step alone is refined). An error that is not finite is NaN, a floor that was not measured is 0.
    pub fn series(&self, field: &str, norm: &str) -> Vec<(f64, f64, f64)> {
        let read = |table: &BTreeMap<String, Norms>| table.get(field).and_then(|norms| norms.get(norm));
        let one = |level: &Level| (level.h, read(&level.errors).unwrap_or(f64::NAN), read(&level.floor).unwrap_or(0.0));
        self.levels.iter().filter(|level| !level.errors.is_empty()).map(one).collect()
    }

    /// The size of the exact solution of one field in one norm; 0 where it is not known.
    pub fn size(&self, field: &str, norm: &str) -> f64 {
        self.solution_size.get(field).and_then(|norms| norms.get(norm)).unwrap_or(0.0)
    }
}

/// One level of a ladder.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Level {
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// What falls from level to level: the cell width in x, or the step where the step alone is refined.
    pub h: f64,
    /// Size of a step; `null` for a steady problem.
    pub step: Option<f64>,
    /// Number of steps; `null` for a steady problem.
    pub steps: Option<usize>,
    /// By field: the norms of the error against the exact solution (where the step alone is refined: of the difference from the
    /// next level). `null` in a norm: not finite.
    pub errors: BTreeMap<String, Norms>,
    /// By field: how far the answer moves when the data change in the last bit, the floor below which no error can be read.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub floor: BTreeMap<String, Norms>,
    /// Wall time of the scheme's run on this level in seconds, without the exact solution and the norms; it differs from run to run.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub seconds: Option<f64>,
    /// Why this level has no errors, where it has none.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// Norms of one array, weighted by cell measure and divided by the total measure.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Norms {
    /// Mean of the absolute values.
    pub l1: Option<f64>,
    /// Root of the mean of the squares.
    pub l2: Option<f64>,
    /// Largest absolute value.
    pub linf: Option<f64>,
}

impl Norms {
    /// The names of the norms, as in files and claims.
    pub const NAMES: [&str; 3] = ["l1", "l2", "linf"];

    /// The norm of that name.
    pub fn get(&self, name: &str) -> Option<f64> {
        match name {
            "l1" => self.l1,
            "l2" => self.l2,
            "linf" => self.linf,
            _ => None,
        }
    }
}

/// The order observed in one norm of one field.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Observed {
    /// The limit order; `null` where the ladder does not tell.
    pub order: Option<f64>,
    /// The interval in which the limit order lies.
    pub interval: Option<[f64; 2]>,
    /// Slopes between neighbouring levels, coarse to fine; `null`: no slope between these two.
    pub slopes: Vec<Option<f64>>,
    /// Indices of the levels that the order rests on.
    pub used: Vec<usize>,
    /// What a reader should know: levels at round-off, slopes that have not settled.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}
