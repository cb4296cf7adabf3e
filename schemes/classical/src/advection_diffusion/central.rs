//! Explicit central differences of second, fourth and sixth order.

use gridassay_scheme::{BoundaryKind, Case, Harness, Nodes, Offer, Operation, SchemeError, Side, Solution};

use crate::advection_diffusion::steady::SteadyCentral;
use crate::diffusion::one_step::node_offer;
use crate::numerics::boundary_rates::Prescribed;
use crate::numerics::method_of_lines::Space;
use crate::numerics::padding::pad_periodic;
use crate::numerics::weights::finite_difference_weights;

/// Weights of a central difference: h u' = sum_k first\[k-1\] (u_{j+k} - u_{j-k}), h^2 u'' = sum_k second\[k-1\]
/// (u_{j+k} - 2 u_j + u_{j-k}).
///
/// As differences of pairs a uniform state has rate zero exactly.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CentralWeights {
    /// Order of accuracy, an even number; order / 2 neighbours on each side are used.
    pub order: usize,
    /// Weights of the first derivative.
    pub first: [f64; 3],
    /// Weights of the second derivative.
    pub second: [f64; 3],
}

/// Second order. k'h = sin theta; (k''h)^2 = 2 - 2 cos theta.
pub const CENTRAL2: CentralWeights = CentralWeights { order: 2, first: [0.5, 0.0, 0.0], second: [1.0, 0.0, 0.0] };

/// Fourth order. k'h = (8 sin theta - sin 2 theta) / 6; (k''h)^2 = (15 - 16 cos theta + cos 2 theta) / 6.
pub const CENTRAL4: CentralWeights =
    CentralWeights { order: 4, first: [2.0 / 3.0, -1.0 / 12.0, 0.0], second: [4.0 / 3.0, -1.0 / 12.0, 0.0] };

/// Sixth order. k'h = (45 sin theta - 9 sin 2 theta + sin 3 theta) / 30; (k''h)^2 = 49/18 - 3 cos theta + 3/10 cos 2
/// theta - 1/45 cos 3 theta.
pub const CENTRAL6: CentralWeights =
    CentralWeights { order: 6, first: [0.75, -0.15, 1.0 / 60.0], second: [1.5, -0.15, 1.0 / 90.0] };

/// The row of an operator at a node near a wall: weights of the first values counted from that wall.
#[derive(Clone, Debug)]
struct ClosureRow {
    first: Vec<f64>,
    second: Vec<f64>,
}

/// u_t = -a u_x + nu u_xx by central differences; weights from Fornberg 1988, Math. Comp. 51:699-706, table 1.
///
/// Periodic, or with a prescribed value at both ends. Nodes too near to a wall for the central stencil get one-sided
/// rows: first derivatives of order `closure_order`, second derivatives on one point more, of that order too. One
/// order less than inside would keep the order of the whole (Gustafsson 1975, Math. Comp. 29:396-406); order 4 closes
/// with order 4, order 6 with order 5.
#[derive(Clone, Debug)]
pub struct CentralSpace {
    /// First part of the scheme's name.
    pub name: &'static str,
    /// Weights inside.
    pub weights: CentralWeights,
    /// Order of the rows near a wall.
    pub closure_order: usize,
    velocity: f64,
    diffusivity: f64,
    spacing: f64,
    prescribed: Vec<Prescribed>,
    closures: Vec<ClosureRow>,
    padded: Vec<f64>,
    steady: SteadyCentral,
}

impl CentralSpace {
    /// The space operator with those weights and rows near the walls.
    pub fn new(name: &'static str, weights: CentralWeights, closure_order: usize) -> Self {
        Self {
            name,
            weights,
            closure_order,
            velocity: 0.0,
            diffusivity: 0.0,
            spacing: 1.0,
            prescribed: Vec::new(),
            closures: Vec::new(),
            padded: Vec::new(),
            steady: SteadyCentral::default(),
        }
    }

    /// Second order.
    pub fn second_order() -> Self {
        Self::new("central2", CENTRAL2, 2)
    }

    /// Fourth order.
    pub fn fourth_order() -> Self {
        Self::new("central4", CENTRAL4, 4)
    }

    /// Sixth order.
    pub fn sixth_order() -> Self {
        Self::new("central6", CENTRAL6, 5)
    }

    /// Rows at the nodes 1 to order / 2 - 1 from a wall.
    fn closure_rows(&self) -> Vec<ClosureRow> {
        let points: Vec<f64> = (0..self.closure_order + 2).map(|i| i as f64).collect();
        let row = |node: usize| {
            let first = finite_difference_weights(node as f64, &points[..=self.closure_order], 1).remove(1);
            let second = finite_difference_weights(node as f64, &points, 2).remove(2);
            ClosureRow { first, second }
        };
        (1..self.weights.order / 2).map(row).collect()
    }

    /// The rate at the nodes near the walls, from the first values counted from each of them.
    fn close(&self, u: &[f64], rate: &mut [f64]) {
        let n = u.len();
        let (advection, diffusion) = (-self.velocity / self.spacing, self.diffusivity / self.spacing.powi(2));
        for (node, row) in (1..).zip(&self.closures) {
            let dot = |weights: &[f64], at: &dyn Fn(usize) -> f64| -> f64 {
                weights.iter().enumerate().map(|(i, w)| w * at(i)).sum()
            };
            let from_lower = |i: usize| u[i];
            let from_upper = |i: usize| u[n - 1 - i];
            rate[node] = advection * dot(&row.first, &from_lower) + diffusion * dot(&row.second, &from_lower);
            // Seen from the upper wall, x runs backwards: the first derivative changes its sign.
            rate[n - 1 - node] = -advection * dot(&row.first, &from_upper) + diffusion * dot(&row.second, &from_upper);
        }
        rate[0] = 0.0;
        rate[n - 1] = 0.0;
    }
}

/// The offers of a space operator for advection and diffusion, each alone or both together, on periodic grids and,
/// with diffusion, between prescribed values.
pub fn advection_diffusion_offers(boundaries: &[BoundaryKind], minimum: usize) -> Vec<Offer> {
    let operations = [Operation::Advance, Operation::Rate];
    let periodic = [BoundaryKind::Periodic];
    let not_negative = [Some(0.0), None];
    let mut offers = vec![
        node_offer("advection", &operations, &periodic, minimum),
        node_offer("diffusion", &operations, boundaries, minimum).with_parameter("diffusivity", not_negative),
        node_offer("advection_diffusion", &operations, &periodic, minimum).with_parameter("diffusivity", not_negative),
    ];
    if boundaries.contains(&BoundaryKind::Value) {
        // Without diffusion a value prescribed at the outflow would be one too many.
        let positive = [Some(f64::MIN_POSITIVE), None];
        let kinds = [BoundaryKind::Value];
        let offer = node_offer("advection_diffusion", &operations, &kinds, minimum);
        offers.push(offer.with_parameter("diffusivity", positive));
    }
    offers
}

/// Velocity and diffusivity of a case; the one that the equation does not have is zero.
pub fn coefficients(case: &Case) -> Result<(f64, f64), SchemeError> {
    let velocity = if case.equation == "diffusion" { 0.0 } else { case.scalar("velocity")? };
    let diffusivity = if case.equation == "advection" { 0.0 } else { case.scalar("diffusivity")? };
    Ok((velocity, diffusivity))
}

/// The nodes on both walls where values are prescribed.
pub fn prescribed_walls(case: &Case) -> Vec<Prescribed> {
    if case.is_periodic(0) {
        return Vec::new();
    }
    let ends = [(0, case.grid.lower[0]), (case.grid.cells[0], case.grid.upper[0])];
    let node = |(upper, (index, position)): (usize, (usize, f64))| Prescribed {
        side: Side::at(0, upper == 1),
        field: 0,
        index,
        position,
    };
    ends.into_iter().enumerate().map(node).collect()
}

impl Space for CentralSpace {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let minimum = if self.weights.order == 2 { 3 } else { self.closure_order + 2 };
        let mut offers = advection_diffusion_offers(&[BoundaryKind::Periodic, BoundaryKind::Value], minimum);
        if self.weights.order == 2 {
            offers.extend(SteadyCentral::offers(
                &["advection_diffusion", "diffusion"],
                &[BoundaryKind::Value, BoundaryKind::Gradient],
            ));
        }
        offers
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        (self.velocity, self.diffusivity) = coefficients(case)?;
        self.spacing = case.grid.spacing(0);
        self.prescribed = prescribed_walls(case);
        self.closures = if case.is_periodic(0) { Vec::new() } else { self.closure_rows() };
        self.steady.prepare(case, self.velocity, self.diffusivity);
        Ok(None)
    }

    fn rate(
        &mut self,
        _time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let (advection, diffusion) = (-self.velocity / self.spacing, self.diffusivity / self.spacing.powi(2));
        let u = &state[0];
        // Near walls the padded stencil is wrong; the closures then replace what it gives.
        pad_periodic(u, 3, &mut self.padded);
        let first = self.weights.first.map(|w| w * advection);
        let second = self.weights.second.map(|w| w * diffusion);
        let width = self.weights.order / 2;
        for (value, window) in rate[0].iter_mut().zip(self.padded.windows(7)) {
            let middle = window[3];
            let mut sum = 0.0;
            for k in 0..width {
                let (left, right) = (window[2 - k], window[4 + k]);
                sum += first[k] * (right - left) + second[k] * ((right - middle) - (middle - left));
            }
            *value = sum;
        }
        if !self.prescribed.is_empty() {
            self.close(u, &mut rate[0]);
        }
        Ok(())
    }

    fn prescribed(&self) -> &[Prescribed] {
        &self.prescribed
    }

    fn solve(&mut self, _guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        self.steady.solve(harness)
    }
}
