//! Systems of equations in one dimension.

pub mod acoustics;
pub mod euler;
pub mod riemann;
