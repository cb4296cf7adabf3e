//! Schemes built from fluxes between reconstructed states, by the method of lines.

pub mod reconstruction;
pub mod scalar;
pub mod weno;
