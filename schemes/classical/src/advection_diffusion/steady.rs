//! The steady equation a u' - nu u'' = S by second-order central differences, solved directly; the Poisson equation
//! is the case a = 0.

use gridassay_scheme::{BoundaryKind, Case, Harness, Offer, Operation, SchemeError, Side, Solution};

use crate::diffusion::one_step::node_offer;
use crate::numerics::tridiagonal::Tridiagonal;

/// a (u_{j+1} - u_{j-1}) / 2h - nu (u_{j+1} - 2 u_j + u_{j-1}) / h^2 = S_j at the nodes; a prescribed value is a row
/// of its own, a prescribed gradient g (outward) enters through a value beyond the wall, u_{-1} = u_1 + 2 h g, in
/// both differences. Second order.
///
/// Source: common practice (Ferziger, Peric & Street 2020, Computational Methods for Fluid Dynamics, ch. 3).
#[derive(Clone, Debug, Default)]
pub struct SteadyCentral {
    velocity: f64,
    diffusivity: f64,
    spacing: f64,
    kinds: [Option<BoundaryKind>; 2],
    source: bool,
    cells: usize,
    /// Weight of the source's second difference that is added to the source: 0, or 1/12 for fourth order where a = 0.
    pub source_average: f64,
}

impl SteadyCentral {
    /// The equations with that part of the source's second difference added to the source.
    pub fn with_source_average(source_average: f64) -> Self {
        Self { source_average, ..Self::default() }
    }

    /// An offer to solve each of the equations between walls of those kinds.
    pub fn offers(equations: &[&str], kinds: &[BoundaryKind]) -> Vec<Offer> {
        let positive = [Some(f64::MIN_POSITIVE), None];
        let offer = |equation: &&str| {
            let parameter = if *equation == "poisson" { "conductivity" } else { "diffusivity" };
            node_offer(equation, &[Operation::Solve], kinds, 2).with_parameter(parameter, positive)
        };
        equations.iter().map(offer).collect()
    }

    /// Gets ready for a case.
    pub fn prepare(&mut self, case: &Case, velocity: f64, diffusivity: f64) {
        let kind = |end: usize| (!case.is_periodic(0)).then(|| case.boundaries[0][end].of("u"));
        let (spacing, kinds) = (case.grid.spacing(0), [kind(0), kind(1)]);
        let source_average = self.source_average;
        let (source, cells) = (case.source, case.grid.cells[0]);
        *self = Self { velocity, diffusivity, spacing, kinds, source, cells, source_average };
    }

    /// Solves the system.
    ///
    /// # Errors
    /// No prescribed value at either end (the solution is not unique), periodic ends, or a callback that failed.
    pub fn solve(&self, harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        if !self.kinds.contains(&Some(BoundaryKind::Value)) {
            return Err(SchemeError::Failed(
                "no side has a prescribed value, so the steady solution is not unique; prescribe a value at one end"
                    .to_owned(),
            ));
        }
        let n = self.cells + 1;
        let source = if self.source { harness.source(0.0, None)?.swap_remove(0) } else { vec![0.0; n] };
        let mut right = source.clone();
        for (value, s) in right[1..].iter_mut().zip(source.windows(3)) {
            *value += self.source_average * ((s[2] - s[1]) - (s[1] - s[0]));
        }
        let (half, nu) = (0.5 * self.velocity / self.spacing, self.diffusivity / self.spacing.powi(2));
        let (mut lower, mut diagonal, mut upper) = (vec![-half - nu; n], vec![2.0 * nu; n], vec![half - nu; n]);
        for (end, kind) in self.kinds.into_iter().enumerate() {
            let data = harness.boundary(0.0, Side::at(0, end == 1), 0)?;
            let row = if end == 1 { n - 1 } else { 0 };
            if kind == Some(BoundaryKind::Value) {
                (lower[row], diagonal[row], upper[row], right[row]) = (0.0, 1.0, 0.0, data.value[0][0]);
                continue;
            }
            // The value beyond the wall is the inner one plus 2 h g.
            let (inside, beyond) = if end == 1 { (&mut lower[row], upper[row]) } else { (&mut upper[row], lower[row]) };
            *inside += beyond;
            right[row] -= beyond * 2.0 * self.spacing * data.gradient[0][0];
        }
        Tridiagonal::new(&lower, &diagonal, &upper).solve(&mut right);
        Ok(Solution { state: vec![right], iterations: Some(1), residual: None })
    }
}
