//! -(k u')' = S with constant k.

use gridassay_scheme::{BoundaryKind, Case, Fields, Harness, Nodes, Offer, Operation, SchemeError, Solution};

use crate::advection_diffusion::steady::SteadyCentral;
use crate::one_step::{OneStep, not_offered};

/// The Poisson equation by central differences at nodes, solved directly.
#[derive(Clone, Debug)]
pub struct PoissonCentral {
    /// The scheme's name.
    pub name: &'static str,
    /// Kinds of walls that are taken.
    pub kinds: &'static [BoundaryKind],
    /// The discrete equations.
    pub steady: SteadyCentral,
}

impl PoissonCentral {
    /// Second order, with values and gradients prescribed. Source: common practice (LeVeque 2007, Finite Difference
    /// Methods for Ordinary and Partial Differential Equations, ch. 2).
    pub fn second_order() -> Self {
        let kinds = &[BoundaryKind::Value, BoundaryKind::Gradient];
        Self { name: "poisson-central2", kinds, steady: SteadyCentral::default() }
    }

    /// Fourth order, with values prescribed: -k (u_{j+1} - 2 u_j + u_{j-1}) / h^2 = (S_{j-1} + 10 S_j + S_{j+1}) /
    /// 12. Source: Collatz 1960, The Numerical Treatment of Differential Equations (Mehrstellenverfahren; Numerov
    /// 1924).
    pub fn fourth_order() -> Self {
        let steady = SteadyCentral::with_source_average(1.0 / 12.0);
        Self { name: "poisson-compact4", kinds: &[BoundaryKind::Value], steady }
    }
}

impl OneStep for PoissonCentral {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        SteadyCentral::offers(&["poisson"], self.kinds)
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
