//! A row of the table.

use gridassay_scheme::Scheme;

use crate::tampered::Tampered;

/// A study of the harness.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Study {
    /// The amplification factor against the closed form, or against the twin's.
    Modes,
    /// The observed order with space refined, or space and time together.
    OrderSpace,
    /// The observed order with time refined alone.
    OrderTime,
    /// Conservation, bounds, total variation, symmetry.
    Invariants,
    /// The largest stable step.
    Stability,
    /// The same question asked twice, steps grouped otherwise, or after another case.
    Repeatability,
}

/// The smallest setting in which a mistake still shows: what a diagnosis should name.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Setting {
    /// Everywhere and always.
    Anywhere,
    /// The term with the velocity.
    Advection,
    /// The term with the diffusivity or viscosity.
    Diffusion,
    /// A source.
    Source,
    /// A source that varies in time.
    VaryingSource,
    /// Walls of any kind.
    Walls,
    /// The upper wall.
    UpperWall,
    /// Walls with a prescribed value that varies in time.
    VaryingBoundaryValue,
    /// Walls with a prescribed gradient.
    GradientWall,
    /// The lower wall, with a prescribed gradient.
    LowerGradientWall,
    /// The first cell or node.
    FirstCell,
    /// The last cell or node, or the face behind it.
    LastCell,
    /// One cell in the middle.
    OneCell,
    /// A velocity with a negative component.
    NegativeVelocity,
    /// Two velocities or derivatives that differ between the directions.
    ObliqueDirection,
    /// Cells that are not square.
    UnequalSpacings,
    /// A parameter that is neither 0 nor 1 nor that of air.
    Parameter(&'static str),
    /// Jumps in the solution.
    Jumps,
    /// Values below zero.
    NegativeValues,
    /// More than one step.
    SeveralSteps,
    /// Large steps.
    LargeSteps,
    /// What was asked before.
    EarlierRequests,
}

/// A right scheme with one mistake.
#[derive(Clone, Copy)]
pub struct Flaw {
    /// The flawed scheme's name.
    pub name: &'static str,
    /// The right scheme's name among the classical ones.
    pub twin: &'static str,
    /// The smallest setting in which the mistake still shows.
    pub setting: Setting,
    /// The mistake, in one sentence.
    pub mistake: &'static str,
    /// The studies that expose it; none where no study of this kind can.
    pub exposed_by: &'static [Study],
    /// Why those do, or why none does.
    pub why: &'static str,
    pub(crate) make: fn() -> Box<dyn Scheme>,
}

impl Flaw {
    /// A new scheme with the mistake, under the flaw's name.
    pub fn scheme(&self) -> Box<dyn Scheme> {
        Box::new(Tampered::new((self.make)()).named(self.name))
    }

    /// A new scheme without it.
    ///
    /// # Panics
    /// The table names a twin that is not there; a test sees to it that none does.
    pub fn right_twin(&self) -> Box<dyn Scheme> {
        gridassay_classical::scheme(self.twin).expect("twins are classical schemes")
    }
}
