//! One run from a plan to its results: opens the schemes, asks for the studies, has them judged, keeps the record.

mod attempt;
mod control;
mod expect;
pub mod greet;
pub mod progress;
mod run;
pub mod schemes;
mod workers;

pub use attempt::{
    Attempt, Place, attempt_invariants, attempt_modes, attempt_operator, attempt_order, attempt_stability,
};
pub use expect::{Expectation, expect};
pub use run::{Manner, RunError, of_table, run, single};
