//! The Euler equations of a perfect gas in one dimension, finite volumes.

use gridassay_scheme::{BoundaryKind, Case, CellRule, Harness, Nodes, Offer, Operation, SchemeError, Side, Values};

use crate::numerics::limiters::Limiter;
use crate::numerics::method_of_lines::Space;
use crate::systems::riemann::{EulerFlux, Primitive, primitive};

/// Cells beyond each end that a face's states reach into.
const LAYERS: usize = 2;

/// -(F_{j+1/2} - F_{j-1/2}) / h with a flux between the states at both sides of a face: the cells' own (first order),
/// or with limited slopes of density, velocity and pressure (second order).
///
/// Periodic; `value`: the cell averages beyond the end are those of the harness; `none`: they repeat the last cell.
/// Source: van Leer 1979, J. Comput. Phys. 32:101-136; Toro 2009, Riemann Solvers and Numerical Methods for Fluid
/// Dynamics, ch. 10, 13 and 14.
#[derive(Clone, Debug)]
pub struct EulerSpace {
    /// First part of the scheme's name.
    pub name: &'static str,
    /// The flux between two states.
    pub flux: EulerFlux,
    /// The slope limiter; without one the scheme is of first order.
    pub limiter: Option<Limiter>,
    gamma: f64,
    spacing: f64,
    ends: [BoundaryKind; 2],
    cells: Vec<Primitive>,
    fluxes: Vec<[f64; 3]>,
}

impl EulerSpace {
    /// The space operator with that flux and those slopes.
    pub fn new(name: &'static str, flux: EulerFlux, limiter: Option<Limiter>) -> Self {
        let (cells, fluxes, ends) = (Vec::new(), Vec::new(), [BoundaryKind::Periodic; 2]);
        Self { name, flux, limiter, gamma: 1.4, spacing: 1.0, ends, cells, fluxes }
    }

    /// The primitive states of all cells and of the layers beyond the ends.
    fn fill_cells(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<(), SchemeError> {
        let n = state[0].len();
        let gamma = self.gamma;
        let cell = |j: usize| primitive(gamma, [state[0][j], state[1][j], state[2][j]]);
        self.cells.clear();
        self.cells.resize(n + 2 * LAYERS, [0.0; 3]);
        for j in 0..n {
            self.cells[LAYERS + j] = cell(j);
        }
        for (end, kind) in self.ends.into_iter().enumerate() {
            let upper = end == 1;
            let beyond = match kind {
                BoundaryKind::Value => Some(harness.boundary(time, Side::at(0, upper), LAYERS)?.ghost),
                _ => None,
            };
            for layer in 0..LAYERS {
                let place = if upper { LAYERS + n + layer } else { LAYERS - 1 - layer };
                self.cells[place] = match (&beyond, kind) {
                    (Some(ghost), _) => primitive(gamma, std::array::from_fn(|field| ghost[field][layer][0])),
                    (None, BoundaryKind::Periodic) => {
                        cell(if upper { layer % n } else { (LAYERS * n - 1 - layer) % n })
                    }
                    (None, _) => cell(if upper { n - 1 } else { 0 }),
                };
            }
        }
        Ok(())
    }

    /// The state at the face of the middle cell that looks towards `towards`.
    fn at_face(&self, away: &Primitive, middle: &Primitive, towards: &Primitive) -> Primitive {
        match self.limiter {
            None => *middle,
            Some(limiter) => {
                std::array::from_fn(|k| middle[k] + 0.5 * limiter(middle[k] - away[k], towards[k] - middle[k]))
            }
        }
    }
}

impl Space for EulerSpace {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let operations = [Operation::Advance, Operation::Rate];
        let mut offer = Offer::new("euler", &operations).with_parameter("gamma", [Some(1.0 + f64::EPSILON), None]);
        offer.fields = Some(["density", "momentum_x", "energy"].map(str::to_owned).to_vec());
        offer.values = Values::CellAverage;
        offer.boundaries = vec![BoundaryKind::Periodic, BoundaryKind::Value, BoundaryKind::None];
        offer.source = true;
        offer.cells = CellRule { minimum: 4, multiple: 1 };
        vec![offer]
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        self.gamma = case.scalar("gamma")?;
        self.spacing = case.grid.spacing(0);
        self.ends = [0, 1].map(|end| case.boundaries[0][end].of("density"));
        Ok(None)
    }

    fn rate(
        &mut self,
        time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        self.fill_cells(time, state, harness)?;
        let mut fluxes = std::mem::take(&mut self.fluxes);
        fluxes.clear();
        fluxes.extend(self.cells.windows(4).map(|w| {
            let left = self.at_face(&w[0], &w[1], &w[2]);
            let right = self.at_face(&w[3], &w[2], &w[1]);
            (self.flux)(self.gamma, left, right)
        }));
        for (j, faces) in fluxes.windows(2).enumerate() {
            for (k, rate) in rate.iter_mut().enumerate() {
                rate[j] = (faces[0][k] - faces[1][k]) / self.spacing;
            }
        }
        self.fluxes = fluxes;
        Ok(())
    }
}
