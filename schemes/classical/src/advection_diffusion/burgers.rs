//! The viscous Burgers equation by central differences.

use gridassay_scheme::{BoundaryKind, Case, Harness, Nodes, Offer, Operation, SchemeError};

use crate::advection_diffusion::central::prescribed_walls;
use crate::diffusion::one_step::node_offer;
use crate::numerics::boundary_rates::Prescribed;
use crate::numerics::method_of_lines::Space;
use crate::numerics::padding::pad_periodic;

/// u_t = -(F_{j+1/2} - F_{j-1/2}) / h with F = (u_j^2 + u_{j+1}^2) / 4 - nu (u_{j+1} - u_j) / h, values at nodes,
/// periodic or between prescribed values. Second order, conservative.
///
/// Source: common practice (Fletcher 1991, Computational Techniques for Fluid Dynamics 1, ch. 10).
#[derive(Clone, Debug, Default)]
pub struct BurgersCentral {
    viscosity: f64,
    spacing: f64,
    prescribed: Vec<Prescribed>,
    padded: Vec<f64>,
}

impl Space for BurgersCentral {
    fn name(&self) -> String {
        "burgers-central2".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let kinds = [BoundaryKind::Periodic, BoundaryKind::Value];
        let positive = [Some(f64::MIN_POSITIVE), None];
        let operations = [Operation::Advance, Operation::Rate];
        vec![node_offer("burgers", &operations, &kinds, 3).with_parameter("viscosity", positive)]
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        self.viscosity = case.scalar("viscosity")?;
        self.spacing = case.grid.spacing(0);
        self.prescribed = prescribed_walls(case);
        Ok(None)
    }

    fn rate(
        &mut self,
        _time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let h = self.spacing;
        let diffusion = self.viscosity / h;
        let flux = |left: f64, right: f64| 0.25 * (left * left + right * right) - diffusion * (right - left);
        // Between walls the outermost rates are wrong and not used: their values are prescribed.
        pad_periodic(&state[0], 1, &mut self.padded);
        for (rate, w) in rate[0].iter_mut().zip(self.padded.windows(3)) {
            *rate = (flux(w[0], w[1]) - flux(w[1], w[2])) / h;
        }
        Ok(())
    }

    fn prescribed(&self) -> &[Prescribed] {
        &self.prescribed
    }
}
