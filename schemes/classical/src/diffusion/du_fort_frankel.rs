//! The scheme of Du Fort and Frankel.

use gridassay_scheme::{Case, CellRule, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::advection::leapfrog::leap;
use crate::one_step::OneStep;

/// (1 + 2 r) u_j^{n+1} = (1 - 2 r) u_j^{n-1} + 2 r (u_{j+1}^n + u_{j-1}^n). Explicit, two time levels, stable for all
/// r; consistent only where dt / h tends to zero, of second order where dt is proportional to h^2.
///
/// (1 + 2 r) G^2 - 4 r cos(theta) G - (1 - 2 r) = 0. Source: Du Fort & Frankel 1953, Math. Tables Aids Comput.
/// 7:135-152.
#[derive(Clone, Debug, Default)]
pub struct DuFortFrankel {
    diffusivity: f64,
    spacing: f64,
}

impl OneStep for DuFortFrankel {
    fn name(&self) -> String {
        "du-fort-frankel".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = Offer::new("diffusion", &[Operation::Advance]).with_parameter("diffusivity", [Some(0.0), None]);
        offer.levels = 2;
        offer.cells = CellRule { minimum: 3, multiple: 1 };
        vec![offer]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.diffusivity = case.scalar("diffusivity")?;
        self.spacing = case.grid.spacing(0);
        Ok(None)
    }

    fn step(
        &mut self,
        _time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let r = self.diffusivity * step / self.spacing.powi(2);
        let weight = 2.0 * r / (1.0 + 2.0 * r);
        // As a change of the older value, which keeps a uniform state as it is.
        leap(&state[0], &mut earlier[0][0], |[left, _, right], old| weight * ((left - old) + (right - old)));
        std::mem::swap(&mut state[0], &mut earlier[0][0]);
        Ok(())
    }
}
