//! The explicit one-step schemes, each given by its flux through a face.

use gridassay_scheme::{Case, CellRule, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::numerics::flux_form::{FaceWeights, mirrored, periodic_fluxes, subtract_divergence};
use crate::one_step::OneStep;

/// An explicit one-step scheme for advection in flux form.
#[derive(Clone, Debug)]
pub struct ExplicitAdvection {
    /// The scheme's name.
    pub name: &'static str,
    /// Weights of the flux, times dt / h, at a Courant number of either sign.
    pub weights: fn(f64) -> FaceWeights,
    velocity: f64,
    spacing: f64,
    flux: Vec<f64>,
}

impl ExplicitAdvection {
    /// The scheme with that flux.
    pub fn new(name: &'static str, weights: fn(f64) -> FaceWeights) -> Self {
        Self { name, weights, velocity: 0.0, spacing: 1.0, flux: Vec::new() }
    }
}

/// The values of the upwind cell: F = c u_j for c > 0. First order; stable for |c| <= 1.
///
/// G = 1 - |c| (1 - cos theta) - i c sin theta.
/// Source: Courant, Isaacson & Rees 1952, Commun. Pure Appl. Math. 5:243-255.
pub fn upwind(courant: f64) -> FaceWeights {
    mirrored(courant, |c| [0.0, c, 0.0, 0.0])
}

/// The mean of both neighbours in place of the value: F = c (u_j + u_{j+1}) / 2 - (u_{j+1} - u_j) / 2. First order;
/// stable for |c| <= 1.
///
/// G = cos theta - i c sin theta. Source: Lax 1954, Commun. Pure Appl. Math. 7:159-193.
pub fn lax_friedrichs(c: f64) -> FaceWeights {
    [0.0, 0.5 * (c + 1.0), 0.5 * (c - 1.0), 0.0]
}

/// F = c (u_j + u_{j+1}) / 2 - c^2 (u_{j+1} - u_j) / 2. Second order; stable for |c| <= 1.
///
/// G = 1 - c^2 (1 - cos theta) - i c sin theta. Source: Lax & Wendroff 1960, Commun. Pure Appl. Math. 13:217-237.
pub fn lax_wendroff(c: f64) -> FaceWeights {
    [0.0, 0.5 * c * (1.0 + c), 0.5 * c * (1.0 - c), 0.0]
}

/// Second-order upwind: F = c (u_j + (1 - c) (u_j - u_{j-1}) / 2) for c > 0. Second order; stable for |c| <= 2.
///
/// G = 1 - c (3 - 4 z + z^2) / 2 + c^2 (1 - 2 z + z^2) / 2 with z = exp(-i theta), for c > 0; for c < 0 the complex
/// conjugate of G(|c|). Source: Warming & Beam 1976, AIAA J. 14:1241-1249.
pub fn beam_warming(courant: f64) -> FaceWeights {
    mirrored(courant, |c| [-0.5 * c * (1.0 - c), 0.5 * c * (3.0 - c), 0.0, 0.0])
}

/// The mean of Lax-Wendroff and Beam-Warming: F = c (u_j + (1 - c) (u_{j+1} - u_{j-1}) / 4) for c > 0. Second order;
/// stable for |c| <= 1.
///
/// G is the mean of theirs. Source: Fromm 1968, J. Comput. Phys. 3:176-189.
pub fn fromm(courant: f64) -> FaceWeights {
    mirrored(courant, |c| {
        let slope = 0.25 * c * (1.0 - c);
        [-slope, c, slope, 0.0]
    })
}

/// The offer of a periodic advection scheme with point values at cell centres and at least `minimum` cells.
pub fn periodic_advection(operations: &[Operation], minimum: usize) -> Offer {
    let mut offer = Offer::new("advection", operations);
    offer.cells = CellRule { minimum, multiple: 1 };
    offer
}

impl OneStep for ExplicitAdvection {
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
        Ok(None)
    }

    fn step(
        &mut self,
        _time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let weights = (self.weights)(self.velocity * step / self.spacing);
        periodic_fluxes(&weights, &state[0], &mut self.flux);
        subtract_divergence(&self.flux, &mut state[0]);
        Ok(())
    }
}
