//! What the rate of a semi-discrete scheme does to Fourier modes, and what follows for time integrators.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{StepNumber, WeakGrowth};

/// The rate u' = L u mode by mode, in one dimension.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SemiDiscrete {
    /// Whether the rate was found linear and shift invariant; where not, each wavenumber was tried by itself.
    pub linear: bool,
    /// The modes, ascending in theta, branch by branch.
    pub modes: Vec<RateMode>,
    /// Lele's resolving efficiency: (relative error, share of (0, pi) that is resolved within it, without a break from zero). Lele 1992, J.
    /// Comput. Phys. 103:16-42. Only for advection with a short response.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub resolving_efficiency: Vec<(f64, f64)>,
    /// Largest real part of the modified wavenumber over the modes measured.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub largest_modified_wavenumber: Option<f64>,
    /// Which number measures the step in `predicted`.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub number: Option<StepNumber>,
    /// Stable ranges with time integrators, where the scheme offers no steps of its own (else they stand with its stable range).
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub predicted: Vec<PredictedRange>,
}

/// One mode of a rate: u' = lambda u for u = exp(i theta j).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RateMode {
    /// k h.
    pub theta: f64,
    /// The branch, as in the modes of a step.
    pub branch: String,
    /// lambda, real and imaginary part, per unit of time.
    pub rate: [f64; 2],
    /// -i omega of the equation; `null` for a branch that the equation does not have.
    pub exact_rate: Option<[f64; 2]>,
    /// Modified wavenumber k' h, real (phase) and imaginary part (negative: damping): i lambda h / a for advection; for diffusion its square
    /// is -lambda h^2 / nu. `null` for other equations and branches.
    pub modified_wavenumber: Option<[f64; 2]>,
    /// Share of the energy of the rate that goes to other wavenumbers; `null` for a linear scheme.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub leaked: Option<f64>,
}

/// The steps that a semi-discrete scheme is stable with when a time integrator takes them.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PredictedRange {
    /// The integrator: `rk4`, `ab3`, ...
    pub integrator: String,
    /// Largest number up to which every smaller one is stable; 0: no stable step; `null`: no limit up to the end of the scan.
    pub stable_up_to: Option<f64>,
    /// How growth rises from zero, where there is no stable step.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub weak_growth: Option<WeakGrowth>,
    /// Whether the range measured from the scheme's own steps is this one; `null` where it was not measured.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub is_the_measured: Option<bool>,
}

/// What a scheme resolves, from its steps: cells per wavelength that keep an error within a bound, and all longer waves too.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Resolution {
    /// The branch.
    pub branch: String,
    /// What errs: `phase_speed` (relative) or `damping_per_period` (of the amplitude).
    pub quantity: ResolvedQuantity,
    /// The bound.
    pub within: f64,
    /// Cells per wavelength that suffice; `null` where even the longest wave looked at errs by more.
    pub points_per_wavelength: Option<f64>,
}

/// What errs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum ResolvedQuantity {
    /// |phase-speed ratio - 1|.
    PhaseSpeed,
    /// | |G|^n - |G exact|^n | over the n steps of an exact period.
    DampingPerPeriod,
}

impl ResolvedQuantity {
    /// The trade's words.
    pub fn words(self) -> &'static str {
        match self {
            Self::PhaseSpeed => "phase speed",
            Self::DampingPerPeriod => "damping per period",
        }
    }
}
