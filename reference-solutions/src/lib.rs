//! Exact and manufactured solutions with their source terms: expressions, derivatives, exact solvers, code writers.

pub mod equation;
pub mod exact;
pub mod expression;
pub mod problem;
pub mod writer;
