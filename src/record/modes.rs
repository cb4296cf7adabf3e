//! What a Fourier study measured.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{DirectionRecord, Parameters, Resolution, SemiDiscrete, WorstDirection};

/// A Fourier study.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct ModesRecord {
    /// The equation's name.
    pub equation: String,
    /// The equation's parameters.
    pub parameters: Parameters,
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// Courant number a dt / h, where the equation has a speed.
    pub courant: Option<f64>,
    /// Diffusion number nu dt / h^2, where the equation has a diffusivity.
    pub diffusion_number: Option<f64>,
    /// The step.
    pub step: f64,
    /// Whether the linearity trial found the scheme linear and shift invariant; `null`: the trial could not be made.
    pub linear: Option<bool>,
    /// The figures of the linearity trial.
    pub linearity: Option<Linearity>,
    /// Uncertainty of G: the largest deviation of the linearity trial (rounding, or the noise of an iterative solver).
    pub uncertainty: Option<f64>,
    /// How far the approximate dispersion relation of a nonlinear scheme moves when waves of size 1 become waves of size 0.001, as the largest
    /// |difference of G|; `null` for a linear scheme.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub amplitude_dependence: Option<f64>,
    /// The modes, ascending in theta, branch by branch.
    pub modes: Vec<ModeRecord>,
    /// The coefficients of the stencil as built, where the impulse response is short.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub stencil: Vec<StencilEntry>,
    /// G held against a formula, where one is claimed.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub claimed_symbol: Option<ClaimedSymbol>,
    /// The leading error terms of the modified equation, where they could be read.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub modified_equation: Option<ModifiedEquation>,
    /// Cells per wavelength for given errors, where the equation moves waves in one dimension.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub resolution: Vec<Resolution>,
    /// Waves in every direction at 4, 8, 16 and 32 points per wavelength, in two and three dimensions where the stencil is short.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub directions: Vec<DirectionRecord>,
    /// The directions of the largest errors.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub worst_directions: Vec<WorstDirection>,
    /// The scheme's semi-discrete rate, where it offers one in one dimension.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub semi_discrete: Option<SemiDiscrete>,
}

/// The linearity and shift trial: deviations relative to the largest value.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Linearity {
    /// Largest deviation of a step of a sum from the sum of the steps.
    pub superposition: f64,
    /// Largest deviation of a step of a shifted state from the shifted step.
    pub shift: f64,
    /// Largest deviation of a step at another time from the same step at time 0.
    pub time: f64,
    /// Largest deviation that still counts as linear.
    pub allowed: f64,
}

impl Linearity {
    /// Whether all deviations still count as linear, shift invariant and independent of time; NaN does not.
    pub fn is_linear(&self) -> bool {
        [self.superposition, self.shift, self.time].iter().all(|deviation| *deviation <= self.allowed)
    }

    /// What fails, as a sentence.
    pub fn failing(&self) -> String {
        let parts = [
            ("is not linear (a step of a sum differs from the sum of the steps by", self.superposition),
            (
                "is not the same at every position (a step of a shifted state differs from the shifted step by",
                self.shift,
            ),
            ("depends on the time (a later step differs by", self.time),
        ];
        // NaN fails too.
        let fails = |(words, deviation): &(&str, f64)| {
            let holds = *deviation <= self.allowed;
            (!holds).then(|| format!("{words} {deviation:.1e} of the largest value)"))
        };
        let failing: Vec<String> = parts.iter().filter_map(fails).collect();
        format!("the scheme {}", failing.join(", "))
    }
}

/// One mode of one branch. The convention is exp(i theta j) in space; the exact factor is exp(-i omega dt).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct ModeRecord {
    /// k h in \[-pi, pi\] for each direction.
    pub theta: Vec<f64>,
    /// The branch: a field's name, or the name of an exact branch such as `acoustic +`.
    pub branch: String,
    /// Amplification factor in one step, real and imaginary part.
    pub amplification: [f64; 2],
    /// Exact factor in one step, real and imaginary part; `null` for a branch that the equation does not have.
    pub exact: Option<[f64; 2]>,
    /// |G|, the modulus of the amplification factor.
    pub modulus: f64,
    /// |G exact|, the modulus of the exact factor; `null` where there is none.
    pub exact_modulus: Option<f64>,
    /// |G| - |G exact| in one step.
    pub damping_error: Option<f64>,
    /// Phase by which the wave runs ahead (positive: towards larger x) of the exact one in one step, -arg G + arg G exact, in radians,
    /// followed continuously from theta = 0.
    pub phase_error: Option<f64>,
    /// |G|^n - |G exact|^n over the n steps of an exact period; `null` for a wave that does not move.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub damping_error_per_period: Option<f64>,
    /// The phase error over an exact period, in radians; `null` for a wave that does not move.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase_error_per_period: Option<f64>,
    /// Numerical over exact phase speed; `null` where the exact speed is zero.
    pub phase_speed_ratio: Option<f64>,
    /// Numerical over exact group speed; `null` where the exact speed is zero.
    pub group_speed_ratio: Option<f64>,
    /// Cells per wavelength; `null` at theta = 0.
    pub points_per_wavelength: Option<f64>,
    /// Share of the branch in a wave that the equation would carry along, where there are several branches and one field.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub share: Option<f64>,
    /// Share of the wave's energy that one step moves to other wavenumbers; `null` for a linear scheme, which moves none.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub leaked: Option<f64>,
}

/// One coefficient of a one-step stencil: new value at j = sum of coefficient x old value at j + offset.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct StencilEntry {
    /// Offset in cells for each direction.
    pub offset: Vec<i64>,
    /// Which component of the state (field, level, node) is computed.
    #[serde(default)]
    pub output: usize,
    /// Which component of the state is read.
    #[serde(default)]
    pub input: usize,
    /// The coefficient.
    pub coefficient: f64,
}

/// The leading terms by which the scheme departs from the equation at small wavenumbers.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ModifiedEquation {
    /// The order of the departure from the equation under refinement at a constant Courant (or diffusion) number.
    pub formal_order: Option<usize>,
    /// Coefficients of the derivatives that the scheme adds, u_t + ... = sum of coefficient x d^n u / dx^n, with their n.
    pub terms: Vec<(usize, f64)>,
}

/// G as measured against G as claimed.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct ClaimedSymbol {
    /// The formula.
    pub formula: String,
    /// At how many wavenumbers the two were compared.
    pub compared: usize,
    /// At how many they differ by more than rounding and the uncertainty of G allow.
    pub disagreeing: usize,
    /// The largest |measured - claimed|; `null` where the formula is not finite somewhere.
    pub largest_difference: Option<f64>,
    /// k h of the largest difference.
    pub worst_theta: Option<f64>,
    /// The difference that is allowed.
    pub allowed: f64,
    /// The neighbour whose coefficient differs most, where they disagree and the stencil is short.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub neighbour: Option<NeighbourDifference>,
}

/// A coefficient as built and as claimed.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct NeighbourDifference {
    /// Offset in cells.
    pub offset: i64,
    /// As built.
    pub built: f64,
    /// As claimed.
    pub claimed: f64,
}
