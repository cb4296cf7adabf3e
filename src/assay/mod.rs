//! One run from a plan to its results: opens the schemes, asks for the studies, has them judged, keeps the record.

mod attempt;
pub mod progress;
mod run;
pub mod schemes;

pub use attempt::{Attempt, Place, attempt_modes, attempt_order, attempt_stability};
pub use run::{run, single};
