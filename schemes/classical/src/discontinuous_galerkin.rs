//! The discontinuous Galerkin method for u_t + a u_x = S, nodal at Gauss points.

use gridassay_scheme::{Case, Harness, Nodes, Offer, Operation, SchemeError, Values};

use crate::numerics::method_of_lines::Space;
use crate::numerics::weights::finite_difference_weights;

/// Polynomials of degree p in each cell, held by their values at the p + 1 Gauss points, with upwind fluxes between
/// cells.
///
/// u_i' = -(a / h) ((D u)_i + l_i(0) / w_i (u(0) - u of the left neighbour at its right end)) for a > 0, where D
/// differentiates the interpolating polynomial, l_i are Lagrange's polynomials and w_i the weights, all on \[0, 1\];
/// the mirror image for a < 0. The error of the modified wavenumber is of order 2p + 2 in phase and 2p + 1 in
/// damping. A source is taken at the points.
///
/// Source: Cockburn & Shu 2001, J. Sci. Comput. 16:173-261; Hu & Atkins 2002, J. Comput. Phys. 182:516-545 (orders in
/// phase and damping).
#[derive(Clone, Debug)]
pub struct DiscontinuousGalerkin {
    /// The degree p, from 1 to 3.
    pub degree: usize,
    nodes: Nodes,
    velocity: f64,
    spacing: f64,
    cells: usize,
    /// (D u)_i = sum over j of derivative\[i\]\[j\] (u_j - u_i).
    derivative: Vec<Vec<f64>>,
    lower_end: Vec<f64>,
    upper_end: Vec<f64>,
}

impl DiscontinuousGalerkin {
    /// The method of degree 1, 2 or 3.
    ///
    /// # Panics
    /// With another degree.
    pub fn new(degree: usize) -> Self {
        let nodes = gauss_points(degree + 1).expect("degrees 1 to 3 are known");
        let at = |x: f64, order: usize| finite_difference_weights(x, &nodes.offsets, order).remove(order);
        let derivative = nodes.offsets.iter().map(|x| at(*x, 1)).collect();
        let (lower_end, upper_end) = (at(0.0, 0), at(1.0, 0));
        Self { degree, nodes, velocity: 0.0, spacing: 1.0, cells: 0, derivative, lower_end, upper_end }
    }

    /// The weights of the quadrature and the points.
    pub fn nodes(&self) -> &Nodes {
        &self.nodes
    }
}

/// Gauss's points and weights on \[0, 1\] for 2, 3 or 4 points (Abramowitz & Stegun 1964, table 25.4, in closed
/// form).
pub fn gauss_points(count: usize) -> Option<Nodes> {
    let root = f64::sqrt;
    // Points and weights on [-1, 1] from the middle outwards.
    let half: Vec<(f64, f64)> = match count {
        2 => vec![(1.0 / root(3.0), 1.0)],
        3 => vec![(root(0.6), 5.0 / 9.0)],
        4 => {
            let spread = 2.0 / 7.0 * root(1.2);
            let near = (root(3.0 / 7.0 - spread), (18.0 + root(30.0)) / 36.0);
            let far = (root(3.0 / 7.0 + spread), (18.0 - root(30.0)) / 36.0);
            vec![near, far]
        }
        _ => return None,
    };
    let middle = (count == 3).then_some((0.0, 8.0 / 9.0));
    let lower = half.iter().rev().map(|(x, w)| (-x, *w));
    let all: Vec<(f64, f64)> = lower.chain(middle).chain(half.iter().copied()).collect();
    Some(Nodes {
        offsets: all.iter().map(|(x, _)| 0.5 * (1.0 + x)).collect(),
        weights: all.iter().map(|(_, w)| 0.5 * w).collect(),
    })
}

impl Space for DiscontinuousGalerkin {
    fn name(&self) -> String {
        format!("dg-p{}", self.degree)
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = Offer::new("advection", &[Operation::Advance, Operation::Rate]);
        offer.values = Values::CellNodes;
        offer.source = true;
        vec![offer]
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
        self.cells = case.grid.cells[0];
        Ok(Some(self.nodes.clone()))
    }

    fn rate(
        &mut self,
        _time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let (points, cells) = (self.degree + 1, self.cells);
        let cell = |k: usize| &state[0][k * points..(k + 1) * points];
        let end = |weights: &[f64], u: &[f64]| -> f64 {
            u[0] + weights.iter().zip(u).map(|(w, v)| w * (v - u[0])).sum::<f64>()
        };
        let factor = -self.velocity / self.spacing;
        for k in 0..cells {
            let u = cell(k);
            // The jump at the inflow end, and the values of Lagrange's polynomials there.
            let (lift, jump) = if self.velocity >= 0.0 {
                let inflow = end(&self.upper_end, cell((k + cells - 1) % cells));
                (&self.lower_end, end(&self.lower_end, u) - inflow)
            } else {
                let inflow = end(&self.lower_end, cell((k + 1) % cells));
                (&self.upper_end, inflow - end(&self.upper_end, u))
            };
            for i in 0..points {
                let slope: f64 = self.derivative[i].iter().zip(u).map(|(d, v)| d * (v - u[i])).sum();
                rate[0][k * points + i] = factor * (slope + lift[i] / self.nodes.weights[i] * jump);
            }
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn gauss_points_integrate_polynomials_up_to_their_degree_and_not_beyond() {
        for count in 2..=4 {
            let Nodes { offsets, weights } = gauss_points(count).unwrap();
            let error = |degree: usize| {
                let sum: f64 = offsets.iter().zip(&weights).map(|(x, w)| w * x.powi(degree as i32)).sum();
                (sum - 1.0 / (degree + 1) as f64).abs()
            };
            assert!((0..2 * count).all(|degree| error(degree) < 4.0 * f64::EPSILON), "{count} points");
            assert!(error(2 * count) > 1e-6, "{count} points");
        }
    }
}
