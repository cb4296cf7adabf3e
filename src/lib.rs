//! Gridassay measures what a discretisation does, and weighs it against what its developer claims.

pub mod analysis;

pub mod claims;

pub mod host;
pub mod dossier;
pub mod record;
pub mod studies;
pub mod verdict;
