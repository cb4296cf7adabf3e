//! Explicit schemes in two dimensions in flux form, periodic, point values at cell centres. Throughout cx = a dt /
//! hx, cy = b dt / hy, rx = nu dt / hx^2, ry = nu dt / hy^2.

use gridassay_scheme::{Case, CellRule, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::one_step::OneStep;

/// Weights in the flux through a face, times step over spacing: the first index is the side of the face (lower,
/// upper), the second the position along the face (one before, the face's own, one after).
pub type FaceBlock = [[f64; 3]; 2];

/// Courant and diffusion numbers in both directions.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct PlaneNumbers {
    /// cx and cy.
    pub courant: [f64; 2],
    /// rx and ry.
    pub diffusion: [f64; 2],
}

/// The upwind cell in each direction. First order; stable for |cx| + |cy| <= 1.
///
/// G = 1 - |cx| (1 - cos p) - i cx sin p - |cy| (1 - cos q) - i cy sin q, with p = kx hx and q = ky hy.
/// Source: LeVeque 2002, Finite Volume Methods for Hyperbolic Problems, section 20.2 (donor cell upwind).
pub fn upwind_2d(numbers: PlaneNumbers) -> [FaceBlock; 2] {
    numbers.courant.map(|c| [[0.0, c.max(0.0), 0.0], [0.0, c.min(0.0), 0.0]])
}

/// Lax-Wendroff with the mixed derivative. Second order; stable for cx^(2/3) + cy^(2/3) <= 1.
///
/// G = 1 - i (cx sin p + cy sin q) - cx^2 (1 - cos p) - cy^2 (1 - cos q) - cx cy sin p sin q.
/// Source: Lax & Wendroff 1964, Commun. Pure Appl. Math. 17:381-398.
pub fn lax_wendroff_2d(numbers: PlaneNumbers) -> [FaceBlock; 2] {
    let mixed = 0.125 * numbers.courant[0] * numbers.courant[1];
    numbers.courant.map(|c| [[mixed, 0.5 * c * (1.0 + c), -mixed], [mixed, 0.5 * c * (1.0 - c), -mixed]])
}

/// Explicit Euler with central differences. Second order where r stays fixed; stable for rx + ry <= 1/2.
///
/// G = 1 - 2 rx (1 - cos p) - 2 ry (1 - cos q). Source: common practice (Hirsch 2007, Numerical Computation of
/// Internal and External Flows, ch. 8).
pub fn diffusion_2d(numbers: PlaneNumbers) -> [FaceBlock; 2] {
    numbers.diffusion.map(|r| [[0.0, r, 0.0], [0.0, -r, 0.0]])
}

/// An explicit two-dimensional scheme given by its fluxes; a source is taken at the old time.
#[derive(Clone, Debug)]
pub struct PlaneScheme {
    /// The scheme's name.
    pub name: &'static str,
    /// The equation: `advection` or `diffusion`.
    pub equation: &'static str,
    /// Weights of the fluxes through the faces normal to x and to y.
    pub weights: fn(PlaneNumbers) -> [FaceBlock; 2],
    velocity: [f64; 2],
    diffusivity: f64,
    spacing: [f64; 2],
    cells: [usize; 2],
    source: bool,
    flux: Vec<f64>,
    increment: Vec<f64>,
}

impl PlaneScheme {
    /// The scheme with those fluxes.
    pub fn new(name: &'static str, equation: &'static str, weights: fn(PlaneNumbers) -> [FaceBlock; 2]) -> Self {
        Self {
            name,
            equation,
            weights,
            velocity: [0.0; 2],
            diffusivity: 0.0,
            spacing: [1.0; 2],
            cells: [0; 2],
            source: false,
            flux: Vec::new(),
            increment: Vec::new(),
        }
    }

    fn numbers(&self, step: f64) -> PlaneNumbers {
        let each = |f: &dyn Fn(usize) -> f64| [f(0), f(1)];
        PlaneNumbers {
            courant: each(&|axis| self.velocity[axis] * step / self.spacing[axis]),
            diffusion: each(&|axis| self.diffusivity * step / self.spacing[axis].powi(2)),
        }
    }

    /// Takes the difference of the fluxes normal to `axis` from the increment.
    fn subtract_divergence(&mut self, axis: usize, block: &FaceBlock, u: &[f64]) {
        let [nx, ny] = self.cells;
        let (normal, along) = if axis == 0 { (nx, ny) } else { (ny, nx) };
        // Place of the value at `m` in the normal direction and `l` along the face.
        let at = |m: usize, l: usize| if axis == 0 { l * nx + m } else { m * nx + l };
        for l in 0..along {
            let beside = [(l + along - 1) % along, l, (l + 1) % along];
            for m in 0..normal {
                let next = (m + 1) % normal;
                let row = |m: usize, w: &[f64; 3]| -> f64 { w.iter().zip(beside).map(|(w, l)| w * u[at(m, l)]).sum() };
                self.flux[at(m, l)] = row(m, &block[0]) + row(next, &block[1]);
            }
            for m in 0..normal {
                let before = (m + normal - 1) % normal;
                self.increment[at(m, l)] -= self.flux[at(m, l)] - self.flux[at(before, l)];
            }
        }
    }
}

impl OneStep for PlaneScheme {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = Offer::new(self.equation, &[Operation::Advance]);
        offer.dimensions = vec![2];
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
            let [a, b] = velocity else {
                let count = velocity.len();
                return Err(SchemeError::Failed(format!("`velocity` has {count} components, two are needed")));
            };
            self.velocity = [*a, *b];
        } else {
            self.diffusivity = case.scalar("diffusivity")?;
        }
        self.spacing = [case.grid.spacing(0), case.grid.spacing(1)];
        self.cells = [case.grid.cells[0], case.grid.cells[1]];
        self.source = case.source;
        self.flux = vec![0.0; self.cells[0] * self.cells[1]];
        self.increment = self.flux.clone();
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
        let blocks = (self.weights)(self.numbers(step));
        self.increment.fill(0.0);
        if self.source {
            let source = harness.source(time, None)?;
            self.increment.iter_mut().zip(&source[0]).for_each(|(increment, s)| *increment = step * s);
        }
        for (axis, block) in blocks.iter().enumerate() {
            self.subtract_divergence(axis, block, &state[0]);
        }
        state[0].iter_mut().zip(&self.increment).for_each(|(u, increment)| *u += increment);
        Ok(())
    }
}
