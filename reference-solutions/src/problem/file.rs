//! The problem file: what may stand in it, key by key. Formulas are texts in the language of [`crate::expression`].
//!
//! | key | meaning | default |
//! | --- | --- | --- |
//! | `name`, `title`, `reference` | name to call it by, one line for people, published source | required |
//! | `equation` | a known equation, or a new name together with `fields` and `residuals` | required |
//! | `dimensions` | 1, 2 or 3 | required |
//! | `fields`, `residuals` | an equation of one's own: its fields, and what must vanish, one residual a field | none |
//! | `source` | `none`: the solution satisfies the equation as it stands; `derived`: a source term makes it do so | `none` |
//! | `[parameters]` | constants of the equation: a number, or one number a dimension | by equation |
//! | `[coefficients]` | parameters of the equation that vary: a formula, or one formula a dimension | none |
//! | `[constants]` | the solution's own numbers | none |
//! | `[names]` | named sub-expressions, which may use each other | none |
//! | `[solution]` | a formula for each field that `exact` does not give | none |
//! | `[exact]` | a solver and its arguments | none |
//! | `[domain]` | `lower`, `upper` (numbers), `boundaries` (a kind, or a pair of kinds, for each direction) | required |
//! | `[time]` | `start` and `final`, or `steady = true` | required |
//! | `[breaks]` | for each coordinate a list of formulas in `t`: where the solution or a slope jumps | none |
//! | `[weak]` | `wave` (`linear` or `nonlinear`) and `continuous` (0): see [`super::Weak`] | none |
//! | `norms` | norms that make sense, of `l1`, `l2`, `linf` | all |
//! | `step` | `courant_number` or `diffusion_number` that suits | none |
//! | `[[functionals]]` | `name` and `integrand`, a formula in the fields and coordinates | none |

use std::collections::BTreeMap;

use serde::Deserialize;
use toml::Spanned;

/// A whole file as it is read.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct ProblemFile {
    pub name: Spanned<String>,
    pub title: String,
    pub reference: String,
    pub equation: Spanned<String>,
    pub dimensions: Spanned<usize>,
    #[serde(default)]
    pub fields: Option<Spanned<Vec<String>>>,
    #[serde(default)]
    pub residuals: Option<Vec<Spanned<String>>>,
    #[serde(default)]
    pub source: SourceKind,
    #[serde(default)]
    pub parameters: BTreeMap<String, Spanned<OneOrMany<f64>>>,
    #[serde(default)]
    pub coefficients: BTreeMap<String, Spanned<OneOrMany<String>>>,
    #[serde(default)]
    pub constants: BTreeMap<String, Spanned<f64>>,
    #[serde(default)]
    pub names: BTreeMap<String, Spanned<String>>,
    #[serde(default)]
    pub solution: BTreeMap<String, Spanned<String>>,
    #[serde(default)]
    pub exact: Option<Spanned<ExactEntry>>,
    pub domain: Spanned<DomainEntry>,
    pub time: Spanned<TimeEntry>,
    #[serde(default)]
    pub breaks: BTreeMap<String, Spanned<Vec<String>>>,
    #[serde(default)]
    pub weak: Option<Spanned<WeakEntry>>,
    #[serde(default)]
    pub norms: Option<Vec<Norm>>,
    #[serde(default)]
    pub step: Option<StepEntry>,
    #[serde(default)]
    pub functionals: Vec<FunctionalEntry>,
}

/// A value, or one value a dimension.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(untagged, expecting = "expected one value, or a list with one value a dimension")]
pub(super) enum OneOrMany<T> {
    One(T),
    Many(Vec<T>),
}

impl<T> OneOrMany<T> {
    pub fn as_slice(&self) -> &[T] {
        match self {
            Self::One(value) => std::slice::from_ref(value),
            Self::Many(values) => values,
        }
    }
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub(super) enum SourceKind {
    #[default]
    None,
    Derived,
}

/// A norm of the error.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Norm {
    /// Mean of the absolute error, weighted by cell measure.
    L1,
    /// Root of the mean square.
    L2,
    /// Largest absolute error.
    Linf,
}

#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct DomainEntry {
    pub lower: Spanned<Vec<f64>>,
    pub upper: Spanned<Vec<f64>>,
    pub boundaries: Spanned<Vec<OneOrMany<BoundaryName>>>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub(super) enum BoundaryName {
    Periodic,
    Value,
    Gradient,
    None,
}

#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct TimeEntry {
    #[serde(default)]
    pub start: Option<f64>,
    #[serde(default, rename = "final")]
    pub end: Option<f64>,
    #[serde(default)]
    pub steady: bool,
}

#[derive(Debug, Clone, Copy, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct WeakEntry {
    pub wave: Wave,
    #[serde(default)]
    pub continuous: u32,
}

/// What carries the singularity of a weak solution.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Wave {
    /// A contact, or a linear equation: nothing steepens what a scheme has smeared.
    Linear,
    /// A shock or a rarefaction: the characteristics steepen it again.
    Nonlinear,
}

#[derive(Debug, Clone, Copy, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct StepEntry {
    #[serde(default)]
    pub courant_number: Option<f64>,
    #[serde(default)]
    pub diffusion_number: Option<f64>,
}

#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct FunctionalEntry {
    pub name: String,
    pub integrand: Spanned<String>,
}

/// A solver with its arguments. Arguments are formulas in parameters and constants, or numbers.
#[derive(Debug, Clone, Deserialize)]
#[serde(tag = "solver", rename_all = "snake_case", deny_unknown_fields)]
pub(super) enum ExactEntry {
    /// Two gas states (density, velocity, pressure) apart at `position`.
    Riemann { left: [Argument; 3], right: [Argument; 3], position: Argument },
    /// Water at rest, two depths apart at `position`.
    DamBreak { upstream: Argument, downstream: Argument, position: Argument },
    /// Viscous Burgers from `mean + amplitude*sin(wavenumber*x + phase)`.
    ColeHopf { mean: Argument, amplitude: Argument, wavenumber: Argument, phase: Argument },
    /// Inviscid Burgers from the same, before the shock.
    Characteristics { mean: Argument, amplitude: Argument, wavenumber: Argument, phase: Argument },
    /// A right-running simple wave of gas dynamics whose velocity starts as that sine.
    SimpleWave {
        mean: Argument,
        amplitude: Argument,
        wavenumber: Argument,
        phase: Argument,
        density: Argument,
        pressure: Argument,
    },
    /// A hill in LeVeque's swirling flow.
    Swirl { period: Argument, base: Argument, height: Argument, centre: [Argument; 2], width: Argument },
    /// A Fourier series between the walls of `axis`, with `coefficient` a formula in `n`.
    Series {
        field: String,
        axis: String,
        functions: SeriesName,
        #[serde(default)]
        base: Option<Argument>,
        #[serde(default)]
        slope: Option<Argument>,
        coefficient: String,
        first: usize,
        stride: usize,
        diffusivity: Argument,
    },
}

impl ExactEntry {
    /// What the solver does, for people.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Riemann { .. } => "exact Riemann solver",
            Self::DamBreak { .. } => "exact dam break",
            Self::ColeHopf { .. } => "Cole-Hopf transform",
            Self::Characteristics { .. } => "characteristics",
            Self::SimpleWave { .. } => "simple wave",
            Self::Swirl { .. } => "particle paths",
            Self::Series { .. } => "Fourier series",
        }
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub(super) enum SeriesName {
    Sine,
    Cosine,
}

#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(untagged, expecting = "expected a number, or a formula in parameters and constants")]
pub(super) enum Argument {
    Number(f64),
    Formula(String),
}
