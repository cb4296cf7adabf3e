//! Explicit schemes in three dimensions in flux form, periodic, point values at cell centres. Throughout c_x = a_x dt / h_x
//! and r_x = nu dt / h_x^2, and so on for y and z.

use gridassay_scheme::{Case, CellRule, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::one_step::OneStep;

/// Weights of the values below and above a face in the flux through it, times step over spacing, at a Courant and a
/// diffusion number.
pub type PairWeights = fn(f64, f64) -> [f64; 2];

/// The upwind cell in each direction. First order; stable for |c_x| + |c_y| + |c_z| <= 1.
///
/// G = 1 - sum of |c| (1 - cos theta) + i c sin theta over the directions.
/// Source: LeVeque 2002, Finite Volume Methods for Hyperbolic Problems, section 20.2 (donor cell upwind).
pub fn upwind_3d(courant: f64, _: f64) -> [f64; 2] {
    [courant.max(0.0), courant.min(0.0)]
}

/// Explicit Euler with central differences. Second order where r stays fixed; stable for r_x + r_y + r_z <= 1/2.
///
/// G = 1 - sum of 2 r (1 - cos theta) over the directions.
/// Source: common practice (Hirsch 2007, Numerical Computation of Internal and External Flows, ch. 8).
pub fn diffusion_3d(_: f64, diffusion: f64) -> [f64; 2] {
    [diffusion, -diffusion]
}

/// An explicit three-dimensional scheme whose fluxes take the two cells beside a face; a source is taken at the old time.
#[derive(Clone, Debug)]
pub struct VolumeScheme {
    /// The scheme's name.
    pub name: &'static str,
    /// The equation: `advection` or `diffusion`.
    pub equation: &'static str,
    /// Weights of the fluxes, the same rule in each direction.
    pub weights: PairWeights,
    velocity: [f64; 3],
    diffusivity: f64,
    spacing: [f64; 3],
    cells: [usize; 3],
    source: bool,
    increment: Vec<f64>,
}

impl VolumeScheme {
    /// The scheme with those fluxes.
    pub fn new(name: &'static str, equation: &'static str, weights: PairWeights) -> Self {
        let (velocity, spacing, cells) = ([0.0; 3], [1.0; 3], [0; 3]);
        let increment = Vec::new();
        Self { name, equation, weights, velocity, diffusivity: 0.0, spacing, cells, source: false, increment }
    }

    /// Moves the flux through every face normal to `axis` from the cell below it to the cell above it.
    fn exchange(&mut self, axis: usize, step: f64, u: &[f64]) {
        let courant = self.velocity[axis] * step / self.spacing[axis];
        let diffusion = self.diffusivity * step / self.spacing[axis].powi(2);
        let [below, above] = (self.weights)(courant, diffusion);
        let stride: usize = self.cells[..axis].iter().product();
        let count = self.cells[axis];
        // Slabs of `count` layers, each `stride` values long, one behind the other.
        let slabs = u.chunks_exact(stride * count).zip(self.increment.chunks_exact_mut(stride * count));
        for (u, increment) in slabs {
            for layer in 0..count {
                let (here, next) = (layer * stride, (layer + 1) % count * stride);
                for k in 0..stride {
                    let flux = below * u[here + k] + above * u[next + k];
                    increment[here + k] -= flux;
                    increment[next + k] += flux;
                }
            }
        }
    }
}

impl OneStep for VolumeScheme {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = Offer::new(self.equation, &[Operation::Advance]);
        offer.dimensions = vec![3];
        offer.cells = CellRule { minimum: 3, multiple: 1 };
        if self.equation == "diffusion" {
            offer = offer.with_parameter("diffusivity", [Some(0.0), None]);
            offer.source = true;
        }
        vec![offer]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        if self.equation == "advection" {
            let velocity = case.vector("velocity")?;
            let count = velocity.len();
            self.velocity = velocity
                .try_into()
                .map_err(|_| SchemeError::Failed(format!("`velocity` has {count} components, three are needed")))?;
        } else {
            self.diffusivity = case.scalar("diffusivity")?;
        }
        self.spacing = [0, 1, 2].map(|axis| case.grid.spacing(axis));
        self.cells = [0, 1, 2].map(|axis| case.grid.cells[axis]);
        self.source = case.source;
        self.increment = vec![0.0; self.cells.iter().product()];
        Ok(None)
    }

    fn step(
        &mut self,
        time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        self.increment.fill(0.0);
        for axis in 0..3 {
            self.exchange(axis, step, &state[0]);
        }
        state[0].iter_mut().zip(&self.increment).for_each(|(u, increment)| *u += increment);
        if self.source {
            let source = harness.source(time, None)?;
            state[0].iter_mut().zip(&source[0]).for_each(|(u, s)| *u += step * s);
        }
        Ok(())
    }
}
