//! Gridassay measures what a discretisation does, and weighs it against what its developer claims.

pub mod analysis;
pub mod assay;
pub mod claims;
pub mod commands;
pub mod dossier;
pub mod guide;
pub mod host;
pub mod record;
pub mod studies;
pub mod verdict;

pub use assay::expect;
/// What a scheme and the harness say to each other: the crate that a plugin depends on.
pub use gridassay_scheme as scheme;
