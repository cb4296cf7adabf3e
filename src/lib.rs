//! Gridassay measures what a discretisation does, and weighs it against what its developer claims.

pub mod dossier;
pub mod record;
