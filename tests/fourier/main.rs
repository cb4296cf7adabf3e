//! Fourier studies of schemes as built, against closed forms and published values.
//!
//! Trusted: closed forms written here by hand, independently of the schemes; an independent construction in NumPy; published tables, each named
//! beside its check. Everything else is measured through the studies, as a user would.

mod blocks;
mod claims;
mod common;
mod directions;
mod galerkin;
mod limits;
mod maps;
mod operators;
mod published;
mod rates;
