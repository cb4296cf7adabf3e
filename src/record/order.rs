//! What a refinement study measured.

use std::collections::BTreeMap;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Parameters, Verdict};

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
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
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
    /// By place (`interior`, `x_lower`, ...), field and norm: the observed order there; empty where the domain has no sides. A side stands for
    /// the strip of [`STRIP`] cells along it.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub places: BTreeMap<String, BTreeMap<String, BTreeMap<String, Observed>>>,
    /// By functional: the observed order of its error.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub functionals: BTreeMap<String, Observed>,
    /// The same study on the scheme with a known error added; absent where no claim was upheld.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub control: Option<Control>,
}

impl OrderRecord {
    /// The ladder of one field in one norm: (h, error, floor), coarse to fine, without levels that have no errors at all (the finest
    /// step, where the step alone is refined). An error that is not finite is NaN, a floor that was not measured is 0.
    pub fn series(&self, field: &str, norm: &str) -> Vec<(f64, f64, f64)> {
        let read = |table: &BTreeMap<String, Norms>| table.get(field).and_then(|norms| norms.get(norm));
        let one = |level: &Level| (level.h, read(&level.errors).unwrap_or(f64::NAN), read(&level.floor).unwrap_or(0.0));
        self.levels.iter().filter(|level| !level.errors.is_empty()).map(one).collect()
    }

    /// The ladder of one field in one norm at one place. The floors are those of the whole field.
    pub fn series_at(&self, place: &str, field: &str, norm: &str) -> Vec<(f64, f64, f64)> {
        let read = |table: &BTreeMap<String, Norms>| table.get(field).and_then(|norms| norms.get(norm));
        let one = |level: &Level| {
            let errors = level.places.get(place)?;
            Some((level.h, read(errors).unwrap_or(f64::NAN), read(&level.floor).unwrap_or(0.0)))
        };
        self.levels.iter().filter_map(one).collect()
    }

    /// The ladder of the error of a functional.
    pub fn series_of(&self, functional: &str) -> Vec<(f64, f64, f64)> {
        let one = |level: &Level| {
            let value = level.functionals.get(functional)?;
            Some((level.h, value.error.unwrap_or(f64::NAN), value.floor.unwrap_or(0.0)))
        };
        self.levels.iter().filter_map(one).collect()
    }

    /// The size of the exact solution of one field in one norm; 0 where it is not known.
    pub fn size(&self, field: &str, norm: &str) -> f64 {
        self.solution_size.get(field).and_then(|norms| norms.get(norm)).unwrap_or(0.0)
    }
}

/// The name of the place that lies between the strips along the sides.
pub const INTERIOR: &str = "interior";

/// Cells in the strip along a side, over which errors near that side are taken.
pub const STRIP: usize = 2;

/// One level of a ladder.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
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
    /// By place, then by field: the norms of the error in the interior and in the strip along each side.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub places: BTreeMap<String, BTreeMap<String, Norms>>,
    /// By name: the functionals of the problem.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub functionals: BTreeMap<String, FunctionalValue>,
    /// Why this level has no errors, where it has none.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A functional on one level: the sum over all values of the integrand times the measure that each stands for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct FunctionalValue {
    /// From the scheme's state.
    pub value: Option<f64>,
    /// From the exact state, by the same sum.
    pub exact: f64,
    /// The modulus of their difference.
    pub error: Option<f64>,
    /// The size that round-off gives to it.
    pub floor: Option<f64>,
}

/// The control of an upheld claim: an error of known order and size is added to the scheme, and the claim judged anew.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Control {
    /// The order of the added error: one below the claim, at least 0.
    pub order: f64,
    /// The detection limit: the smallest size that is refuted. The added error is this x (h / L)^order x the size of the solution, with L
    /// the extent in x (where the step alone is refined: the whole time). `null`: none was refuted, or no control was run.
    pub smallest_refuted: Option<f64>,
    /// The added error at the detection limit on the finest level, relative to the solution.
    pub on_finest: Option<f64>,
    /// The sizes that were tried, in the order of trial.
    pub tried: Vec<Trial>,
    /// Why sizes that would have told more were not tried, where they were not.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub skipped: Option<String>,
}

/// One size of an added error.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Trial {
    /// The size.
    pub size: f64,
    /// What became of the claim with it.
    pub verdict: Verdict,
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
