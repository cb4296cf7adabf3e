//! Results as data: the one source of every page.
//!
//! `results.json` has a fixed frame (`format`, `version`, `scheme`, `studies`, `verdicts`, `overall`); within it fields grow.
//! Null rule: `null` (or an absent field) means that the number does not exist (it was not asked for, or could not be measured, or is not
//! finite); the `note` or `stopped` sentence beside it says why. Numbers are f64 and read back to the same bits.

mod change;
pub mod comparison;
mod directions;
mod file;
mod invariants;
mod join;
mod journal;
mod model;
mod modes;
mod operator;
mod order;
mod semi_discrete;
mod stability;
mod uncertainty;

pub use change::{Change, changes};
pub use directions::{DirectedQuantity, DirectionRecord, WorstDirection};
pub use file::{RecordError, read_results, write_bytes, write_results, write_text};
pub use invariants::{Invariant, InvariantCheck, InvariantSetting, InvariantsRecord, WorstPlace};
pub use join::join;
pub use journal::{Journal, JournalEntry, JournalError, JournalHead};
pub use model::{
    Claimed, ClaimsRecord, FORMAT, Parameters, Results, RunRecord, SchemeRecord, Study, StudyRecord, VERSION, Verdict,
    VerdictRecord, finite, nine_digits, utc_now,
};
pub use modes::{
    ClaimedSymbol, Linearity, ModeRecord, ModesRecord, ModifiedEquation, NeighbourDifference, StencilEntry,
};
pub use operator::{OperatorRecord, TransientRecord};
pub use order::{Control, FunctionalValue, INTERIOR, Level, Norms, Observed, OrderRecord, Refinement, STRIP, Trial};
pub use semi_discrete::{PredictedRange, RateMode, Resolution, ResolvedQuantity, SemiDiscrete};
pub use stability::{Confirmation, MapRow, StabilityRecord, StepNumber, WeakGrowth};
pub use uncertainty::{ConvergenceKind, GridTriple, QuantityUncertainty, UncertaintyRecord};
