//! Pieces that several schemes share; none of them knows the contract's callbacks except the method of lines.

pub mod boundary_rates;
pub mod flux_form;
pub mod limiters;
pub mod method_of_lines;
pub mod padding;
pub mod runge_kutta;
pub mod tridiagonal;
pub mod weights;
