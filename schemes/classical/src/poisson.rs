//! -(k u')' = S with constant k.

use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, SchemeError, Solution};

use crate::advection_diffusion::steady::SteadyCentral;
use crate::one_step::{OneStep, not_offered};

/// The Poisson equation by second-order central differences at nodes, solved directly; values and gradients prescribed at the walls. Second order.
///
/// Source: common practice (LeVeque 2007, Finite Difference Methods for Ordinary and Partial Differential Equations, ch. 2).
#[derive(Clone, Debug, Default)]
pub struct PoissonCentral {
    steady: SteadyCentral,
}

impl OneStep for PoissonCentral {
    fn name(&self) -> String {
        "poisson-central2".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        SteadyCentral::offers(&["poisson"])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.steady.prepare(case, 0.0, case.scalar("conductivity").unwrap_or(1.0));
        Ok(None)
    }

    fn step(
        &mut self,
        _time: f64,
        _step: f64,
        _state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        Err(not_offered(Operation::Advance))
    }

    fn solve(&mut self, _guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        self.steady.solve(harness)
    }
}
