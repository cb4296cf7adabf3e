//! Central differences with implicit time stepping.

use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::advection::one_step::periodic_advection;
use crate::numerics::flux_form::{periodic_fluxes, subtract_divergence};
use crate::numerics::tridiagonal::Cyclic;
use crate::one_step::OneStep;

/// u^{n+1} - u^n = -c ((1 - p) d u^n + p d u^{n+1}) with d u = (u_{j+1} - u_{j-1}) / 2 and the implicit part p.
/// Second order in space, solved for the increment by a cyclic tridiagonal system; stable for all c where p >= 1/2.
///
/// G = (1 - i (1 - p) c sin theta) / (1 + i p c sin theta).
#[derive(Clone, Debug)]
pub struct ImplicitAdvection {
    /// The scheme's name.
    pub name: &'static str,
    /// The implicit part p.
    pub implicit_part: f64,
    velocity: f64,
    spacing: f64,
    courant: f64,
    system: Cyclic,
    flux: Vec<f64>,
    increment: Vec<f64>,
}

impl ImplicitAdvection {
    /// The scheme with that implicit part.
    pub fn new(name: &'static str, implicit_part: f64) -> Self {
        let (flux, increment) = (Vec::new(), Vec::new());
        Self {
            name,
            implicit_part,
            velocity: 0.0,
            spacing: 1.0,
            courant: 0.0,
            system: Cyclic::default(),
            flux,
            increment,
        }
    }

    /// Crank & Nicolson, p = 1/2: second order in time, |G| = 1.
    ///
    /// Source: Crank & Nicolson 1947, Proc. Camb. Phil. Soc. 43:50-67 (for the heat equation).
    pub fn crank_nicolson() -> Self {
        Self::new("crank-nicolson-advection", 0.5)
    }

    /// Implicit Euler, p = 1: first order in time. Source: common practice (Hirsch 2007, Numerical Computation of
    /// Internal and External Flows, ch. 7).
    pub fn implicit_euler() -> Self {
        Self::new("implicit-euler-advection", 1.0)
    }
}

impl OneStep for ImplicitAdvection {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![periodic_advection(&[Operation::Advance], 4)]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
        self.flux = vec![0.0; case.grid.cells[0]];
        self.increment = self.flux.clone();
        Ok(None)
    }

    fn start(&mut self, step: f64) -> Result<(), SchemeError> {
        self.courant = self.velocity * step / self.spacing;
        let off_diagonal = 0.5 * self.implicit_part * self.courant;
        self.system = Cyclic::new(self.flux.len(), -off_diagonal, 1.0, off_diagonal);
        Ok(())
    }

    fn step(
        &mut self,
        _time: f64,
        _step: f64,
        state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let half = 0.5 * self.courant;
        periodic_fluxes(&[0.0, half, half, 0.0], &state[0], &mut self.flux);
        self.increment.fill(0.0);
        subtract_divergence(&self.flux, &mut self.increment);
        self.system.solve(&mut self.increment);
        for (u, increment) in state[0].iter_mut().zip(&self.increment) {
            *u += increment;
        }
        Ok(())
    }
}
