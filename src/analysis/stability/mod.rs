//! Which steps are stable: the set of s (Courant or diffusion number) for which nothing grows.
//!
//! * [`search`]: the stable set from a function that gives the growth at s, by scan and bisection, with weak growth followed to s = 0;
//! * [`worst_theta`]: the worst of all wavenumbers, not only of those that a grid holds;
//! * [`StencilGrowth`]: the same for a one-component stencil, exactly, from the polynomial that |G|^2 - 1 is;
//! * [`RateSpectrum`]: a semi-discrete scheme with any time integrator.

mod rate;
mod search;
mod theta;
mod trigonometric;

pub use rate::{RateEigenvalue, RateSpectrum, RateSymbol};
pub use search::{Scan, StableRange, StableSet, WeakGrowth, search};
pub use theta::{Worst, worst_theta};
pub use trigonometric::StencilGrowth;

#[cfg(test)]
mod semi_discrete_tests;
#[cfg(test)]
mod tests;
