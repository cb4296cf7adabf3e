//! What the person claims: reads a claims file into a plan.
//!
//! A claims file is TOML. It names one scheme (`[scheme]`) or several (`[schemes.NAME]`) and then states claims, each in a table of its own:
//! `[[order]]`, `[[modes]]`, `[[stability]]`, `[[invariants]]` and `[[operator]]`. Unknown keys are errors. The keys are documented on the types of [`mod@file`].

mod entries;
pub mod file;
mod plan;
mod problem;
mod read;

pub use entries::{DEFAULT_TOLERANCE, SYMBOL_NAMES, default_step_power, in_proportion};
pub use plan::{
    Claim, ClaimKind, InvariantsClaim, InvariantsRequest, ModesClaim, ModesRequest, OperatorClaim, OperatorRequest,
    OrderClaim, OrderRequest, Plan, RouteChoice, SchemeChoice, StabilityClaim, StabilityRequest, StepSize,
};
pub use problem::ClaimsError;
pub use read::{plan_of, read_claims};
