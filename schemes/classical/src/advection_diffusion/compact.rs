//! Compact (Pade) differences: derivatives at neighbouring nodes are coupled by a tridiagonal system.

use gridassay_scheme::{BoundaryKind, Case, Harness, Nodes, Offer, SchemeError};

use crate::advection_diffusion::central::{advection_diffusion_offers, coefficients, prescribed_walls};
use crate::numerics::boundary_rates::Prescribed;
use crate::numerics::method_of_lines::Space;
use crate::numerics::padding::pad_periodic;
use crate::numerics::tridiagonal::{Cyclic, Tridiagonal};

/// alpha d_{j-1} + d_j + alpha d_{j+1} = sum over k of weights times differences over k nodes: (u_{j+k} - u_{j-k})
/// for the first derivative, (u_{j+k} - 2 u_j + u_{j-k}) for the second, with the powers of k and the factor 1/2 in
/// the weights.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CompactRow {
    /// Weight of the neighbouring derivatives.
    pub alpha: f64,
    /// Weights of the differences over one and two nodes.
    pub weights: [f64; 2],
}

/// A compact scheme for both derivatives.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CompactWeights {
    /// First derivative.
    pub first: CompactRow,
    /// Second derivative.
    pub second: CompactRow,
}

/// Fourth order (Lele 1992, J. Comput. Phys. 103:16-42, eqs. 2.1.6 and 2.2.6 with alpha = 1/4 and 1/10).
///
/// k'h = 3 sin theta / (2 + cos theta); (k''h)^2 = 12 (1 - cos theta) / (5 + cos theta).
pub const PADE4: CompactWeights = CompactWeights {
    first: CompactRow { alpha: 0.25, weights: [0.75, 0.0] },
    second: CompactRow { alpha: 0.1, weights: [1.2, 0.0] },
};

/// Sixth order (Lele 1992, J. Comput. Phys. 103:16-42, alpha = 1/3, a = 14/9, b = 1/9; second derivative alpha =
/// 2/11, a = 12/11, b = 3/11).
///
/// k'h = (14/9 sin theta + 1/18 sin 2 theta) / (1 + 2/3 cos theta);
/// (k''h)^2 = (24/11 (1 - cos theta) + 3/22 (1 - cos 2 theta)) / (1 + 4/11 cos theta).
pub const COMPACT6: CompactWeights = CompactWeights {
    first: CompactRow { alpha: 1.0 / 3.0, weights: [7.0 / 9.0, 1.0 / 36.0] },
    second: CompactRow { alpha: 2.0 / 11.0, weights: [12.0 / 11.0, 3.0 / 44.0] },
};

/// The row at a wall: d_0 + beta d_1 = sum weights\[i\] u_i.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct WallRow {
    /// Weight of the derivative at the first inner node.
    pub beta: f64,
    /// Weights of the values counted from the wall.
    pub weights: [f64; 4],
}

/// h u' at a wall, third order (Lele 1992, eq. 4.1.3 with alpha = 2).
pub const WALL_FIRST: WallRow = WallRow { beta: 2.0, weights: [-2.5, 2.0, 0.5, 0.0] };

/// h^2 u'' at a wall, third order (Lele 1992, eq. 4.3.1).
pub const WALL_SECOND: WallRow = WallRow { beta: 11.0, weights: [13.0, -27.0, 15.0, -1.0] };

/// u_t = -a u_x + nu u_xx by compact differences.
///
/// Periodic; the fourth-order one also between prescribed values, with third-order rows at the walls, which keep the
/// fourth order of the whole.
#[derive(Clone, Debug)]
pub struct CompactSpace {
    /// First part of the scheme's name.
    pub name: &'static str,
    /// Weights inside.
    pub weights: CompactWeights,
    /// Rows at the walls for the first and second derivative, where walls are offered.
    pub walls: Option<[WallRow; 2]>,
    coefficients: [f64; 2],
    spacing: f64,
    prescribed: Vec<Prescribed>,
    systems: Vec<System>,
    padded: Vec<f64>,
    derivative: Vec<f64>,
}

#[derive(Clone, Debug)]
enum System {
    Periodic(Cyclic),
    Walls(Tridiagonal),
}

impl CompactSpace {
    /// The space operator with those weights; with walls where there are rows for them.
    pub fn new(name: &'static str, weights: CompactWeights, walls: Option<[WallRow; 2]>) -> Self {
        Self {
            name,
            weights,
            walls,
            coefficients: [0.0; 2],
            spacing: 1.0,
            prescribed: Vec::new(),
            systems: Vec::new(),
            padded: Vec::new(),
            derivative: Vec::new(),
        }
    }

    /// The fourth-order Pade scheme.
    pub fn pade4() -> Self {
        Self::new("pade4", PADE4, Some([WALL_FIRST, WALL_SECOND]))
    }

    /// The sixth-order tridiagonal scheme, periodic only.
    pub fn compact6() -> Self {
        Self::new("compact6", COMPACT6, None)
    }

    fn system(&self, row: CompactRow, wall: Option<WallRow>, values: usize) -> System {
        match wall {
            None => System::Periodic(Cyclic::new(values, row.alpha, 1.0, row.alpha)),
            Some(wall) => {
                let (mut lower, mut upper) = (vec![row.alpha; values], vec![row.alpha; values]);
                upper[0] = wall.beta;
                lower[values - 1] = wall.beta;
                System::Walls(Tridiagonal::new(&lower, &vec![1.0; values], &upper))
            }
        }
    }

    /// Leaves h^m times the derivative of order m = `which` + 1 in `self.derivative`.
    fn differentiate(&mut self, which: usize) {
        let row = if which == 0 { self.weights.first } else { self.weights.second };
        let [near, far] = row.weights;
        let windows = self.padded.windows(5);
        for (value, w) in self.derivative.iter_mut().zip(windows) {
            *value = if which == 0 {
                near * (w[3] - w[1]) + far * (w[4] - w[0])
            } else {
                near * ((w[3] - w[2]) - (w[2] - w[1])) + far * ((w[4] - w[2]) - (w[2] - w[0]))
            };
        }
        match &self.systems[which] {
            System::Periodic(system) => system.solve(&mut self.derivative),
            System::Walls(system) => {
                if let Some(walls) = self.walls {
                    close(&walls[which], &self.padded, which == 0, &mut self.derivative);
                }
                system.solve(&mut self.derivative);
            }
        }
    }
}

/// Replaces the right-hand sides at both walls; `odd` derivatives change their sign at the upper one, from where x
/// runs backwards.
fn close(wall: &WallRow, padded: &[f64], odd: bool, right: &mut [f64]) {
    let n = right.len();
    let u = &padded[2..2 + n];
    let sum = |at: &dyn Fn(usize) -> f64| -> f64 { wall.weights.iter().enumerate().map(|(i, w)| w * at(i)).sum() };
    right[0] = sum(&|i| u[i]);
    let upper = sum(&|i| u[n - 1 - i]);
    right[n - 1] = if odd { -upper } else { upper };
}

impl Space for CompactSpace {
    fn name(&self) -> String {
        self.name.to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let both = [BoundaryKind::Periodic, BoundaryKind::Value];
        advection_diffusion_offers(if self.walls.is_some() { &both } else { &both[..1] }, 5)
    }

    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError> {
        let (velocity, diffusivity) = coefficients(case)?;
        self.spacing = case.grid.spacing(0);
        self.coefficients = [-velocity / self.spacing, diffusivity / self.spacing.powi(2)];
        self.prescribed = prescribed_walls(case);
        let periodic = self.prescribed.is_empty();
        let values = case.grid.cells[0] + usize::from(!periodic);
        let walls = self.walls.filter(|_| !periodic);
        self.systems = vec![
            self.system(self.weights.first, walls.map(|w| w[0]), values),
            self.system(self.weights.second, walls.map(|w| w[1]), values),
        ];
        self.derivative = vec![0.0; values];
        Ok(None)
    }

    fn rate(
        &mut self,
        _time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        pad_periodic(&state[0], 2, &mut self.padded);
        rate[0].fill(0.0);
        for which in 0..2 {
            let factor = self.coefficients[which];
            if factor != 0.0 {
                self.differentiate(which);
                rate[0].iter_mut().zip(&self.derivative).for_each(|(r, d)| *r += factor * d);
            }
        }
        Ok(())
    }

    fn prescribed(&self) -> &[Prescribed] {
        &self.prescribed
    }
}
