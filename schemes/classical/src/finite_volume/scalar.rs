//! Scalar conservation laws: u_t + f(u)_x = S with f = a u or f = u^2 / 2.

use gridassay_scheme::{Case, CellRule, Harness, Nodes, Offer, Operation, Placement, Position, SchemeError, Values};

use crate::finite_volume::reconstruction::Reconstruction;
use crate::numerics::method_of_lines::Space;
use crate::numerics::padding::pad_periodic;

/// A flux between the states left and right of a face.
pub type NumericalFlux = fn(f64, f64) -> f64;

/// The exact flux of the Riemann problem of Burgers' equation. Source: Godunov 1959, Mat. Sb. 47:271-306.
pub fn godunov_burgers(left: f64, right: f64) -> f64 {
    let from_left = left.max(0.0);
    let from_right = right.min(0.0);
    (0.5 * from_left * from_left).max(0.5 * from_right * from_right)
}

/// The mean flux with the larger speed of both sides as viscosity (Rusanov 1961; the local Lax-Friedrichs flux of Shu
/// & Osher 1988).
pub fn local_lax_friedrichs_burgers(left: f64, right: f64) -> f64 {
    let speed = left.abs().max(right.abs());
    0.25 * (left * left + right * right) - 0.5 * speed * (right - left)
}

/// The equations that a scheme offers, and what its numbers stand for in each.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Meaning {
    /// Point values at nodes, linear advection only: the finite-difference form, in which the fluxes are
    /// reconstructed.
    PointsAtNodes,
    /// Cell averages: the finite-volume form, linear advection and inviscid Burgers.
    CellAverages,
    /// Cell averages, inviscid Burgers only.
    BurgersAverages,
}

/// -(F_{j+1/2} - F_{j-1/2}) / h with F from the reconstructed states left and right of the face: upwind for
/// advection, a numerical flux for Burgers' equation.
pub struct ScalarLaw<R> {
    /// The reconstruction.
    pub reconstruction: R,
    /// The flux of Burgers' equation.
    pub burgers_flux: NumericalFlux,
    /// What the numbers stand for.
    pub meaning: Meaning,
    velocity: Option<f64>,
    spacing: f64,
    padded: Vec<f64>,
    flux: Vec<f64>,
}

impl<R: Reconstruction> ScalarLaw<R> {
    /// The space operator with Godunov's flux for Burgers' equation.
    pub fn new(reconstruction: R, meaning: Meaning) -> Self {
        let (padded, flux) = (Vec::new(), Vec::new());
        let burgers_flux = godunov_burgers;
        Self { reconstruction, burgers_flux, meaning, velocity: None, spacing: 1.0, padded, flux }
    }

    /// The same with another flux for Burgers' equation.
    pub fn with_burgers_flux(mut self, flux: NumericalFlux) -> Self {
        self.burgers_flux = flux;
        self
    }

    /// Fluxes through the n + 1 faces, from a field with three layers around it.
    fn fluxes(&mut self) {
        let from_left = |w: &[f64]| self.reconstruction.right_face([w[0], w[1], w[2], w[3], w[4]]);
        let from_right = |w: &[f64]| self.reconstruction.right_face([w[5], w[4], w[3], w[2], w[1]]);
        let windows = self.padded.windows(6);
        match self.velocity {
            Some(a) if a >= 0.0 => self.flux.iter_mut().zip(windows).for_each(|(f, w)| *f = a * from_left(w)),
            Some(a) => self.flux.iter_mut().zip(windows).for_each(|(f, w)| *f = a * from_right(w)),
            None => {
                let flux = self.burgers_flux;
                self.flux.iter_mut().zip(windows).for_each(|(f, w)| *f = flux(from_left(w), from_right(w)));
            }
        }
    }
}

impl<R: Reconstruction> Space for ScalarLaw<R> {
    fn name(&self) -> String {
        self.reconstruction.name()
    }

    fn offers(&self) -> Vec<Offer> {
        let offer = |equation: &str| {
            let mut offer = Offer::new(equation, &[Operation::Advance, Operation::Rate]);
            offer.cells = CellRule { minimum: 6, multiple: 1 };
            offer.source = true;
            if self.meaning == Meaning::PointsAtNodes {
                offer.placement = Placement::Same(Position::Node);
            } else {
                offer.values = Values::CellAverage;
            }
            offer
        };
        let burgers = || offer("burgers").with_parameter("viscosity", [Some(0.0), Some(0.0)]);
        match self.meaning {
            Meaning::PointsAtNodes => vec![offer("advection")],
            Meaning::CellAverages => vec![offer("advection"), burgers()],
            Meaning::BurgersAverages => vec![burgers()],
        }
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = if case.equation == "advection" { Some(case.scalar("velocity")?) } else { None };
        self.spacing = case.grid.spacing(0);
        self.flux = vec![0.0; case.grid.cells[0] + 1];
        Ok(None)
    }

    fn rate(
        &mut self,
        _time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        pad_periodic(&state[0], 3, &mut self.padded);
        self.fluxes();
        for (rate, faces) in rate[0].iter_mut().zip(self.flux.windows(2)) {
            *rate = (faces[0] - faces[1]) / self.spacing;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_godunov_flux_is_that_of_the_exact_riemann_solution() {
        // Rarefaction through the sonic point, right- and left-running shock, standing shock, supersonic on either
        // side.
        let cases =
            [(-1.0, 2.0, 0.0), (3.0, 1.0, 4.5), (1.0, -3.0, 4.5), (2.0, -2.0, 2.0), (1.0, 2.0, 0.5), (-2.0, -1.0, 0.5)];
        for (left, right, flux) in cases {
            assert_eq!(godunov_burgers(left, right), flux, "{left}, {right}");
        }
    }

    #[test]
    fn both_fluxes_are_consistent() {
        for u in [-2.0, 0.0, 0.7] {
            assert_eq!(godunov_burgers(u, u), 0.5 * u * u);
            assert_eq!(local_lax_friedrichs_burgers(u, u), 0.5 * u * u);
        }
    }
}
