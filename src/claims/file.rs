//! The claims file as it is written: one type a table, one field a key.
//!
//! ```toml
//! [scheme]
//! command = ["python3", "my_scheme.py"]
//! time_limit = "60s"
//!
//! [[order]]
//! problem = "travelling-sine"
//! cells = [32, 64, 128, 256]
//! courant = 0.5
//! norm = "l2"
//! expect = 2.0
//!
//! [[stability]]
//! equation = "advection"
//! courant_up_to = 1.0
//!
//! [[modes]]
//! equation = "advection"
//! courant = 0.5
//! phase_speed_error_within = 0.01
//! from_points_per_wavelength = 20
//!
//! [[invariants]]
//! equation = "advection"
//! courant = 0.4
//! hold = ["conservation", "total_variation", "mirror"]
//! ```

use std::collections::BTreeMap;

use schemars::JsonSchema;
use serde::Deserialize;
use toml::Spanned;

use crate::record::{Invariant, Refinement};

/// A whole claims file.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ClaimsFile {
    /// The scheme, where there is one.
    #[schemars(with = "Option<SchemeEntry>")]
    pub scheme: Option<Spanned<SchemeEntry>>,
    /// The schemes by name, where there are several. A claim then says which it is about, or is about all.
    #[serde(default)]
    #[schemars(with = "BTreeMap<String, SchemeEntry>")]
    pub schemes: BTreeMap<String, Spanned<SchemeEntry>>,
    /// How the run is done.
    #[serde(default)]
    pub run: RunEntry,
    /// Claims about an order of accuracy.
    #[serde(default)]
    #[schemars(with = "Vec<OrderEntry>")]
    pub order: Vec<Spanned<OrderEntry>>,
    /// Claims about amplification factors.
    #[serde(default)]
    #[schemars(with = "Vec<ModesEntry>")]
    pub modes: Vec<Spanned<ModesEntry>>,
    /// Claims about stable steps.
    #[serde(default)]
    #[schemars(with = "Vec<StabilityEntry>")]
    pub stability: Vec<Spanned<StabilityEntry>>,
    /// Claims about what a scheme keeps.
    #[serde(default)]
    #[schemars(with = "Vec<InvariantsEntry>")]
    pub invariants: Vec<Spanned<InvariantsEntry>>,
    /// Claims about the operator of a bounded problem.
    #[serde(default)]
    #[schemars(with = "Vec<OperatorEntry>")]
    pub operator: Vec<Spanned<OperatorEntry>>,
}

/// `[[operator]]`: the rate or the step between boundaries, as a matrix, in one dimension.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct OperatorEntry {
    /// Which of `[schemes]`, one name or a list. Default: all.
    #[schemars(with = "Option<OneOrMany>")]
    pub scheme: Option<Spanned<OneOrMany>>,
    /// The equation's name.
    #[schemars(with = "String")]
    pub equation: Spanned<String>,
    /// The equation's parameters. Default: generic values inside the offer.
    #[serde(default)]
    pub parameters: BTreeMap<String, NumberOrList>,
    /// Cells. Default 40.
    #[schemars(with = "Option<usize>")]
    pub cells: Option<Spanned<usize>>,
    /// Courant number of the step.
    #[schemars(with = "Option<f64>")]
    pub courant: Option<Spanned<f64>>,
    /// Diffusion number of the step.
    #[schemars(with = "Option<f64>")]
    pub diffusion_number: Option<Spanned<f64>>,
    /// A time integrator that takes the steps with the scheme's `rate`. Default: the scheme's own steps are probed.
    #[schemars(with = "Option<String>")]
    pub integrator: Option<Spanned<String>>,
    /// Claim: the spectral radius of a step is at most this: 1 for a stable one.
    #[schemars(with = "Option<f64>")]
    pub spectral_radius_at_most: Option<Spanned<f64>>,
    /// Claim: no state grows by more than this factor on the way, in the Euclidean norm.
    #[schemars(with = "Option<f64>")]
    pub transient_growth_at_most: Option<Spanned<f64>>,
}

/// A scheme: exactly one of `command`, `plugin` and `classical`.
#[derive(Clone, Debug, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SchemeEntry {
    /// The command line of an executable that converses in JSON, run in the folder of the claims file.
    pub command: Option<Vec<String>>,
    /// A shared library, or the folder of a plugin crate, which is then built. Relative to the claims file.
    pub plugin: Option<String>,
    /// A classical scheme that comes with the program.
    pub classical: Option<String>,
    /// Which scheme of a library that carries several.
    pub name: Option<String>,
    /// The longest time for one request, such as `"60s"` or `"5min"`. Default 60 s.
    #[schemars(with = "Option<String>")]
    pub time_limit: Option<Spanned<String>>,
    /// The longest time for start-up, until `describe` is answered. Default 60 s.
    #[schemars(with = "Option<String>")]
    pub start_limit: Option<Spanned<String>>,
    /// The most memory for the scheme's process, such as `"4GiB"`. Default: no limit.
    #[schemars(with = "Option<String>")]
    pub memory_limit: Option<Spanned<String>>,
    /// The longest message that the scheme may send, such as `"64MiB"`. Default 1 GiB.
    #[schemars(with = "Option<String>")]
    pub message_limit: Option<Spanned<String>>,
    /// The most processes that the scheme may have at once, itself included. Default: no limit.
    #[schemars(with = "Option<u32>")]
    pub process_limit: Option<Spanned<u32>>,
}

/// How the run is done.
#[derive(Clone, Debug, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RunEntry {
    /// Seed of every random state. Default 1.
    pub seed: Option<u64>,
}

/// One scheme, or a list.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum OneOrMany {
    /// One.
    One(String),
    /// Several.
    Many(Vec<String>),
}

impl OneOrMany {
    /// The names.
    pub fn names(&self) -> &[String] {
        match self {
            Self::One(name) => std::slice::from_ref(name),
            Self::Many(names) => names,
        }
    }
}

/// A parameter's value: a number, or one number per dimension.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum NumberOrList {
    /// A number.
    Number(f64),
    /// One number per dimension.
    List(Vec<f64>),
}

impl NumberOrList {
    /// The components.
    pub fn components(&self) -> Vec<f64> {
        match self {
            Self::Number(value) => vec![*value],
            Self::List(values) => values.clone(),
        }
    }
}

/// Cells of one level: one number for x (the other directions get generic proportions of it, since square cells hide exchanged spacings), or one per
/// direction.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(untagged)]
pub enum CellsEntry {
    /// Cells in x.
    One(usize),
    /// Cells in each direction.
    Each(Vec<usize>),
}

/// `[[order]]`: the scheme reaches an order of accuracy on a problem.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct OrderEntry {
    /// Which of `[schemes]`, one name or a list. Default: all.
    #[schemars(with = "Option<OneOrMany>")]
    pub scheme: Option<Spanned<OneOrMany>>,
    /// A problem of the catalogue, or a problem file (`.toml`) relative to the claims file.
    #[schemars(with = "String")]
    pub problem: Spanned<String>,
    /// Parameters that replace the problem's.
    #[serde(default)]
    pub parameters: BTreeMap<String, NumberOrList>,
    /// The ladder, coarse to fine; at least two levels, three to decide anything. Default: chosen by the harness.
    #[schemars(with = "Option<Vec<CellsEntry>>")]
    pub cells: Option<Spanned<Vec<CellsEntry>>>,
    /// Courant number on the coarsest level: the step is at most courant h / |a|.
    #[schemars(with = "Option<f64>")]
    pub courant: Option<Spanned<f64>>,
    /// Diffusion number on the coarsest level: the step is at most diffusion_number h^2 / nu.
    #[schemars(with = "Option<f64>")]
    pub diffusion_number: Option<Spanned<f64>>,
    /// The step on the coarsest level itself.
    #[schemars(with = "Option<f64>")]
    pub step: Option<Spanned<f64>>,
    /// `space-time` (default): grid and step in proportion; `space`: the step falls as fast as needed to keep its error below; `time`: the step alone.
    #[serde(default)]
    pub refine: Refinement,
    /// The step falls as this power of the cell width. Default: 1 for `space-time` (2 where `diffusion_number` is given); for `space` expect / time_order.
    #[schemars(with = "Option<f64>")]
    pub step_power: Option<Spanned<f64>>,
    /// With `refine = "space"`: the claimed order in time, from which the power of the step follows.
    #[schemars(with = "Option<f64>")]
    pub time_order: Option<Spanned<f64>>,
    /// Where the run ends. Default: the problem's.
    #[schemars(with = "Option<f64>")]
    pub final_time: Option<Spanned<f64>>,
    /// How the problem is taken to its end: `advance`, `march`, or `rate`, which the harness integrates so that the error in time is far below
    /// the one in space. Default: the first of these that the scheme offers.
    #[schemars(with = "Option<String>")]
    pub operation: Option<Spanned<String>>,
    /// `l1`, `l2` (default) or `linf`.
    #[schemars(with = "Option<String>")]
    pub norm: Option<Spanned<String>>,
    /// The field whose error is judged. Default: every field.
    #[schemars(with = "Option<String>")]
    pub field: Option<Spanned<String>>,
    /// The order that the scheme is said to reach.
    #[schemars(with = "f64")]
    pub expect: Spanned<f64>,
    /// How far below `expect` the observed order may lie. Default 0.1.
    #[schemars(with = "Option<f64>")]
    pub tolerance: Option<Spanned<f64>>,
}

/// `[[modes]]`: what the scheme does to Fourier modes.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ModesEntry {
    /// Which of `[schemes]`, one name or a list. Default: all.
    #[schemars(with = "Option<OneOrMany>")]
    pub scheme: Option<Spanned<OneOrMany>>,
    /// The equation's name.
    #[schemars(with = "String")]
    pub equation: Spanned<String>,
    /// The equation's parameters. Default: generic values inside the offer.
    #[serde(default)]
    pub parameters: BTreeMap<String, NumberOrList>,
    /// Cells. Default 64.
    #[schemars(with = "Option<usize>")]
    pub cells: Option<Spanned<usize>>,
    /// Courant number.
    #[schemars(with = "Option<f64>")]
    pub courant: Option<Spanned<f64>>,
    /// Diffusion number.
    #[schemars(with = "Option<f64>")]
    pub diffusion_number: Option<Spanned<f64>>,
    /// Claim: |phase-speed ratio - 1| stays within this for waves of `from_points_per_wavelength` cells and more.
    #[schemars(with = "Option<f64>")]
    pub phase_speed_error_within: Option<Spanned<f64>>,
    /// Claim: the modulus of G per step stays within this of the exact one, for waves of `from_points_per_wavelength` cells and more.
    #[schemars(with = "Option<f64>")]
    pub damping_error_within: Option<Spanned<f64>>,
    /// Cells per wavelength from which on the two claims above hold. Default 20.
    #[schemars(with = "Option<f64>")]
    pub from_points_per_wavelength: Option<Spanned<f64>>,
    /// Claim: G as a formula in `theta`, the Courant number `c` and the diffusion number `r`, with `i` the imaginary unit.
    #[schemars(with = "Option<String>")]
    pub symbol: Option<Spanned<String>>,
    /// Claim: the formal order of accuracy, from the leading term of the modified equation at a constant Courant (or diffusion) number.
    #[schemars(with = "Option<usize>")]
    pub formal_order: Option<Spanned<usize>>,
    /// Whether each wavenumber is tried by itself even where the scheme is linear. Default false.
    #[serde(default)]
    pub mode_by_mode: bool,
}

/// `[[stability]]`: the scheme is stable up to a step.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct StabilityEntry {
    /// Which of `[schemes]`, one name or a list. Default: all.
    #[schemars(with = "Option<OneOrMany>")]
    pub scheme: Option<Spanned<OneOrMany>>,
    /// The equation's name.
    #[schemars(with = "String")]
    pub equation: Spanned<String>,
    /// The equation's parameters. Default: generic values inside the offer.
    #[serde(default)]
    pub parameters: BTreeMap<String, NumberOrList>,
    /// Claim: every Courant number up to this one is stable.
    #[schemars(with = "Option<f64>")]
    pub courant_up_to: Option<Spanned<f64>>,
    /// Claim: every diffusion number up to this one is stable.
    #[schemars(with = "Option<f64>")]
    pub diffusion_number_up_to: Option<Spanned<f64>>,
    /// The diffusion number that is held while the Courant number is varied (equations with both).
    #[schemars(with = "Option<f64>")]
    pub diffusion_number: Option<Spanned<f64>>,
    /// The Courant number that is held while the diffusion number is varied (equations with both).
    #[schemars(with = "Option<f64>")]
    pub courant: Option<Spanned<f64>>,
    /// Whether the claim is that this is the limit itself: a scheme that is stable beyond it is refuted too. Default false.
    #[serde(default)]
    pub exactly: bool,
    /// A time integrator that takes the steps with the scheme's `rate`: `rk1` to `rk7`, `ssp-rk2`, `ssp-rk3`, `ssp-rk3-four-stages`,
    /// `low-storage-rk3`, `low-storage-rk4`, `ab2`, `ab3` or `ab4`. Default: the scheme's own steps.
    #[schemars(with = "Option<String>")]
    pub integrator: Option<Spanned<String>>,
    /// A map of the plane of both numbers as well, up to this diffusion number and up to `scan_to` in the Courant number (equations with both).
    #[schemars(with = "Option<f64>")]
    pub map_to: Option<Spanned<f64>>,
    /// How far the scan goes. Default: twice the claim, at least 4.
    #[schemars(with = "Option<f64>")]
    pub scan_to: Option<Spanned<f64>>,
}

/// `[[invariants]]`: the scheme keeps what the equation keeps.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct InvariantsEntry {
    /// Which of `[schemes]`, one name or a list. Default: all.
    #[schemars(with = "Option<OneOrMany>")]
    pub scheme: Option<Spanned<OneOrMany>>,
    /// The equation's name.
    #[schemars(with = "String")]
    pub equation: Spanned<String>,
    /// The equation's parameters. Default: generic values inside the offer, a velocity in every sign that is offered.
    #[serde(default)]
    pub parameters: BTreeMap<String, NumberOrList>,
    /// Cells in each direction, which also say in how many dimensions the scheme is tried. Default: generic numbers, in every number of
    /// dimensions that is offered.
    #[schemars(with = "Option<Vec<usize>>")]
    pub cells: Option<Spanned<Vec<usize>>>,
    /// Courant number of the fastest signal. Default: small enough for most explicit schemes.
    #[schemars(with = "Option<f64>")]
    pub courant: Option<Spanned<f64>>,
    /// Diffusion number. Default: small enough for most explicit schemes.
    #[schemars(with = "Option<f64>")]
    pub diffusion_number: Option<Spanned<f64>>,
    /// Claim: these hold, within rounding: `conservation`, `uniform_state`, `total_variation`, `bounds`, `positivity`, `mirror`, `exchange`,
    /// `still_water`, `free_stream`, `repeatability`.
    #[schemars(with = "Vec<Invariant>")]
    pub hold: Spanned<Vec<Invariant>>,
    /// Relative figures up to this one still count as held: for a scheme that iterates to a tolerance of its own. Default: rounding alone.
    #[schemars(with = "Option<f64>")]
    pub tolerance: Option<Spanned<f64>>,
}
