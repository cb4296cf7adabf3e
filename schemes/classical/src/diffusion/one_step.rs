//! Central differences in space with the explicit, the implicit or the mean of both in time; walls and sources
//! included.

use gridassay_scheme::{
    BoundaryKind, Case, CellRule, Fields, Harness, Nodes, Offer, Operation, Placement, Position, SchemeError, Side,
};

use crate::numerics::tridiagonal::{Cyclic, Tridiagonal};
use crate::one_step::OneStep;

/// u^{n+1} - u^n = (1 - p) (r D u^n + dt S^n) + p (r D u^{n+1} + dt S^{n+1}) with D u = u_{j+1} - 2 u_j + u_{j-1} and
/// the implicit part p.
///
/// Values at nodes, those on the walls included: a prescribed value is set at the new time; a prescribed gradient g
/// (outward) enters through a value beyond the wall, u_{-1} = u_1 + 2 h g. Second order in space up to the walls.
/// Solved for the increment.
///
/// G = (1 - 2 (1 - p) r (1 - cos theta)) / (1 + 2 p r (1 - cos theta)).
#[derive(Clone, Debug)]
pub struct OneStepDiffusion {
    /// The scheme's name.
    pub name: &'static str,
    /// The implicit part p.
    pub implicit_part: f64,
    /// The part of the step by which the boundary data of the new time are late; 0 in a right scheme.
    pub boundary_delay: f64,
    /// The part of a cell that belongs to a node on a wall with a prescribed gradient; 1/2 in a right scheme.
    pub wall_volume: f64,
    case: Prepared,
    system: System,
    increment: Vec<f64>,
}

#[derive(Clone, Debug, Default)]
struct Prepared {
    diffusivity: f64,
    spacing: f64,
    kinds: [Option<BoundaryKind>; 2],
    source: bool,
    values: usize,
}

#[derive(Clone, Debug)]
enum System {
    Explicit,
    Periodic(Cyclic),
    Walls(Tridiagonal),
}

impl OneStepDiffusion {
    /// The scheme with that implicit part.
    pub fn new(name: &'static str, implicit_part: f64) -> Self {
        let (case, increment) = (Prepared::default(), Vec::new());
        Self { name, implicit_part, boundary_delay: 0.0, wall_volume: 0.5, case, system: System::Explicit, increment }
    }

    /// Explicit Euler, p = 0: first order in time, second where r stays fixed; stable for r <= 1/2.
    ///
    /// Source: Schmidt 1924; common practice (Hirsch 2007, Numerical Computation of Internal and External Flows, ch.
    /// 7).
    pub fn explicit_euler() -> Self {
        Self::new("explicit-euler-diffusion", 0.0)
    }

    /// Crank & Nicolson, p = 1/2: second order in time; stable for all r. Source: Crank & Nicolson 1947, Proc. Camb.
    /// Phil. Soc. 43:50-67.
    pub fn crank_nicolson() -> Self {
        Self::new("crank-nicolson-diffusion", 0.5)
    }

    /// Implicit Euler, p = 1: first order in time; stable for all r. Source: Laasonen 1949, Acta Math. 81:309-317.
    pub fn implicit_euler() -> Self {
        Self::new("implicit-euler-diffusion", 1.0)
    }

    /// The increments that the fluxes at the old time and the walls' data give; rows of prescribed values get their
    /// change.
    fn right_side(
        &mut self,
        (time, step): (f64, f64),
        u: &[f64],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let n = u.len();
        let r = self.case.diffusivity * step / self.case.spacing.powi(2);
        let p = self.implicit_part;
        for (increment, window) in self.increment[1..].iter_mut().zip(u.windows(3)) {
            *increment = r * ((window[2] - window[1]) - (window[1] - window[0]));
        }
        if self.case.kinds == [None, None] {
            self.increment[0] = r * ((u[1] - u[0]) - (u[0] - u[n - 1]));
            self.increment[n - 1] = r * ((u[0] - u[n - 1]) - (u[n - 1] - u[n - 2]));
        }
        if self.case.source {
            for (part, at) in [(1.0 - p, time), (p, time + step)] {
                if part != 0.0 {
                    let source = &harness.source(at, None)?[0];
                    self.increment.iter_mut().zip(source).for_each(|(increment, s)| *increment += part * step * s);
                }
            }
        }
        let new_time = time + step * (1.0 - self.boundary_delay);
        for (upper, kind) in self.case.kinds.into_iter().enumerate() {
            let side = Side::at(0, upper == 1);
            let (wall, inner) = if upper == 1 { (n - 1, n - 2) } else { (0, 1) };
            match kind {
                Some(BoundaryKind::Value) => {
                    self.increment[wall] = harness.boundary(new_time, side, 0)?.value[0][0] - u[wall];
                }
                Some(_) => {
                    let old = harness.boundary(time, side, 0)?.gradient[0][0];
                    let new = if p == 0.0 { 0.0 } else { harness.boundary(new_time, side, 0)?.gradient[0][0] };
                    let gradient = (1.0 - p) * old + p * new;
                    let source = if self.case.source { self.increment[wall] } else { 0.0 };
                    self.increment[wall] =
                        source + r / self.wall_volume * ((u[inner] - u[wall]) + self.case.spacing * gradient);
                }
                None => {}
            }
        }
        Ok(())
    }
}

/// The offers of a one-dimensional scheme with values at nodes: `equation` with the boundaries `kinds`, with a source
/// or without.
pub fn node_offer(equation: &str, operations: &[Operation], kinds: &[BoundaryKind], minimum: usize) -> Offer {
    let mut offer = Offer::new(equation, operations);
    offer.placement = Placement::Same(Position::Node);
    offer.boundaries = kinds.to_vec();
    offer.source = true;
    offer.cells = CellRule { minimum, multiple: 1 };
    offer
}

impl OneStep for OneStepDiffusion {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let kinds = [BoundaryKind::Periodic, BoundaryKind::Value, BoundaryKind::Gradient];
        let offer = node_offer("diffusion", &[Operation::Advance], &kinds, 3);
        vec![offer.with_parameter("diffusivity", [Some(0.0), None])]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        let periodic = case.is_periodic(0);
        let kind = |end: usize| (!periodic).then(|| case.boundaries[0][end].of("u"));
        self.case = Prepared {
            diffusivity: case.scalar("diffusivity")?,
            spacing: case.grid.spacing(0),
            kinds: [kind(0), kind(1)],
            source: case.source,
            values: case.grid.cells[0] + usize::from(!periodic),
        };
        self.increment = vec![0.0; self.case.values];
        Ok(None)
    }

    fn start(&mut self, step: f64) -> Result<(), SchemeError> {
        let off = -self.implicit_part * self.case.diffusivity * step / self.case.spacing.powi(2);
        let n = self.case.values;
        if self.implicit_part == 0.0 {
            self.system = System::Explicit;
            return Ok(());
        }
        if self.case.kinds == [None, None] {
            self.system = System::Periodic(Cyclic::new(n, off, 1.0 - 2.0 * off, off));
            return Ok(());
        }
        let (mut lower, mut diagonal, mut upper) = (vec![off; n], vec![1.0 - 2.0 * off; n], vec![off; n]);
        for (row, neighbour, kind) in [(0, &mut upper, self.case.kinds[0]), (n - 1, &mut lower, self.case.kinds[1])] {
            if kind == Some(BoundaryKind::Value) {
                (diagonal[row], neighbour[row]) = (1.0, 0.0);
            } else {
                neighbour[row] = off / self.wall_volume;
                diagonal[row] = 1.0 - neighbour[row];
            }
        }
        self.system = System::Walls(Tridiagonal::new(&lower, &diagonal, &upper));
        Ok(())
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
        self.right_side((time, step), &state[0], harness)?;
        match &self.system {
            System::Explicit => {}
            System::Periodic(system) => system.solve(&mut self.increment),
            System::Walls(system) => system.solve(&mut self.increment),
        }
        for (u, increment) in state[0].iter_mut().zip(&self.increment) {
            *u += increment;
        }
        Ok(())
    }
}
