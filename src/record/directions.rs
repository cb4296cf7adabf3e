//! How a scheme treats waves by their direction, in two and three dimensions.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// A plane wave in some direction, as the stencil treats it; the direction need not be one of the grid's own waves.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct DirectionRecord {
    /// The branch.
    pub branch: String,
    /// Wavelength over the largest cell width.
    pub points_per_wavelength: f64,
    /// Unit vector along the wavevector.
    pub direction: Vec<f64>,
    /// |G| in one step.
    pub modulus: f64,
    /// |G| - |G exact| in one step.
    pub damping_error: f64,
    /// Numerical over exact phase speed; `null` where the exact speed is zero. Near to such directions it says little.
    pub phase_speed_ratio: Option<f64>,
    /// By how much the wave runs faster than the exact one (negative: slower), over the largest exact phase speed of any direction; `null`
    /// where nothing moves in any.
    pub phase_speed_error: Option<f64>,
    /// Size of the numerical over that of the exact group velocity; `null` for systems, and where the exact one is zero.
    pub group_speed_ratio: Option<f64>,
}

/// The direction in which a branch errs most.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct WorstDirection {
    /// The branch.
    pub branch: String,
    /// What errs.
    pub quantity: DirectedQuantity,
    /// Wavelength over the largest cell width.
    pub points_per_wavelength: f64,
    /// Unit vector along the wavevector.
    pub direction: Vec<f64>,
    /// The error, as in [`DirectionRecord`]; for the group speed the ratio less one.
    pub error: f64,
}

/// What errs by direction.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum DirectedQuantity {
    /// The phase speed.
    PhaseSpeed,
    /// The modulus of the amplification factor in one step.
    Damping,
    /// The group speed.
    GroupSpeed,
}

impl DirectedQuantity {
    /// All of them.
    pub const ALL: [Self; 3] = [Self::PhaseSpeed, Self::Damping, Self::GroupSpeed];

    /// The trade's words.
    pub fn words(self) -> &'static str {
        match self {
            Self::PhaseSpeed => "phase speed",
            Self::Damping => "damping in one step",
            Self::GroupSpeed => "group speed",
        }
    }

    /// The error of a wave.
    pub fn error(self, wave: &DirectionRecord) -> Option<f64> {
        match self {
            Self::PhaseSpeed => wave.phase_speed_error,
            Self::Damping => Some(wave.damping_error),
            Self::GroupSpeed => wave.group_speed_ratio.map(|ratio| ratio - 1.0),
        }
    }
}
