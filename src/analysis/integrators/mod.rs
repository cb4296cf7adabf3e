//! Stability of time integrators: what a step does to y' = lambda y, with z = lambda dt.
//!
//! A Runge-Kutta method multiplies by its stability polynomial R(z); an Adams-Bashforth method by the largest root of its
//! characteristic polynomial. Semi-discrete schemes are stable with a step where z stays in the region in which neither grows.

mod adams_bashforth;
mod catalogue;
mod dormand_prince;
mod runge_kutta;

pub use adams_bashforth::AdamsBashforth;
pub use catalogue::{NAMES, by_name};
pub use dormand_prince::{Equations, Unfinished, integrate};
pub use runge_kutta::RungeKutta;

use super::eigen::Excess;
use super::stability::{Scan, StableSet, search};
use num_complex::Complex64;
use std::convert::Infallible;

/// A time integrator, as far as linear stability goes.
#[derive(Debug, Clone, PartialEq)]
pub enum Integrator {
    /// One step, several stages.
    RungeKutta(RungeKutta),
    /// One stage, several steps.
    AdamsBashforth(AdamsBashforth),
}

impl Integrator {
    /// Growth of |y| in a step, less one, for y' = lambda y with z = lambda dt: positive means growth.
    pub fn excess(&self, z: Complex64) -> Excess {
        match self {
            Integrator::RungeKutta(method) => method.excess(z),
            Integrator::AdamsBashforth(method) => method.excess(z),
        }
    }

    /// The factor of the principal root: R(z), or for a multistep method the root that tends to exp(z).
    pub fn factor(&self, z: Complex64) -> Complex64 {
        match self {
            Integrator::RungeKutta(method) => method.polynomial(z),
            Integrator::AdamsBashforth(method) => method.principal_root(z),
        }
    }

    /// Stable stretches of the ray z = x exp(i angle), x > 0, up to `up_to`. The negative real axis has the angle pi, the imaginary
    /// axis pi/2.
    pub fn ray(&self, angle: f64, up_to: f64) -> StableSet {
        let direction = if angle == std::f64::consts::FRAC_PI_2 {
            // cos(pi/2) is 6e-17 in f64, which is damping where there is none.
            Complex64::I
        } else {
            Complex64::cis(angle)
        };
        let scan = Scan { up_to, ..Scan::default() };
        let Ok(set) = search(|x| Ok::<_, Infallible>(self.excess(direction * x)), scan);
        set
    }
}
