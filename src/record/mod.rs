//! Results as data: the one source of every page.
//!
//! `results.json` has a fixed frame (`format`, `version`, `scheme`, `studies`, `verdicts`, `overall`); within it fields grow.
//! Null rule: `null` (or an absent field) means that the number does not exist (it was not asked for, or could not be measured, or is not
//! finite); the `note` or `stopped` sentence beside it says why. Numbers are f64 and read back to the same bits.

mod change;
mod file;
mod invariants;
mod journal;
mod model;
mod modes;
mod order;
mod stability;

pub use change::{Change, changes};
pub use file::{RecordError, read_results, write_bytes, write_results, write_text};
pub use invariants::{Invariant, InvariantCheck, InvariantSetting, InvariantsRecord, WorstPlace};
pub use journal::{Journal, JournalEntry, JournalError, JournalHead};
pub use model::{
    Claimed, ClaimsRecord, FORMAT, Parameters, Results, RunRecord, SchemeRecord, Study, StudyRecord, VERSION, Verdict,
    VerdictRecord, finite, utc_now,
};
pub use modes::{
    ClaimedSymbol, Linearity, ModeRecord, ModesRecord, ModifiedEquation, NeighbourDifference, StencilEntry,
};
pub use order::{Level, Norms, Observed, OrderRecord, Refinement};
pub use stability::{Confirmation, StabilityRecord, StepNumber, WeakGrowth};
