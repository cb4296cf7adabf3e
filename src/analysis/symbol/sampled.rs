//! The symbol at all wavenumbers of the grid, by fast Fourier transform.

use super::response::{Grid, ImpulseResponses};
use crate::analysis::matrix::Matrix;
use num_complex::Complex64;
use rustfft::{Fft, FftPlanner};
use std::cell::RefCell;
use std::sync::Arc;

/// G(theta), an m x m block at each wavenumber of a periodic grid.
#[derive(Debug, Clone, PartialEq)]
pub struct SampledSymbol {
    grid: Grid,
    components: usize,
    /// By output component, input component, wavenumber.
    values: Vec<Complex64>,
}

impl SampledSymbol {
    /// The symbol of a scheme from its impulse responses: one transform for each pair of components.
    ///
    /// The rounding error of each entry is below eps x log2(n) times the sum of |response|.
    pub fn from_responses(responses: &ImpulseResponses) -> Self {
        Self::transformed(responses, |_| Complex64::ONE)
    }

    /// dG/dtheta in one direction (0 for x, 1 for y, 2 for z): the sum of i d c(d) exp(i d . theta), taken from the responses and
    /// not by differences.
    ///
    /// Exact where the response is shorter than half the grid; otherwise the derivative of the trigonometric interpolation of G.
    pub fn derivative(responses: &ImpulseResponses, direction: usize) -> Self {
        let n = responses.grid().cells().get(direction).copied().unwrap_or(1) as i64;
        Self::transformed(responses, |cell| {
            let offset = responses.offset(cell)[direction];
            // On an even grid the offset n/2 is -n/2 as well: half of its coefficient belongs to each, and their derivatives cancel.
            Complex64::new(0.0, if 2 * offset == n { 0.0 } else { offset as f64 })
        })
    }

    fn transformed(responses: &ImpulseResponses, weight: impl Fn(usize) -> Complex64) -> Self {
        let (grid, m) = (responses.grid().clone(), responses.components());
        let n = grid.count();
        let transform = GridTransform::new(&grid);
        let mut values = vec![Complex64::ZERO; m * m * n];
        for (pair, block) in values.chunks_mut(n).enumerate() {
            let response = responses.response(pair / m, pair % m);
            if grid.dimensions() == 1 {
                // The same as below without a division a cell, which would cost as much as the transform.
                let at = n - responses.turned(0);
                let turned = response.iter().enumerate().cycle().skip(at % n);
                block.iter_mut().zip(turned).for_each(|(to, (cell, r))| *to = weight(cell) * r);
            } else {
                response.iter().enumerate().for_each(|(cell, r)| block[responses.turned(cell)] = weight(cell) * r);
            }
            transform.forward(block);
        }
        SampledSymbol { grid, components: m, values }
    }

    /// The grid; its [`Grid::theta`] gives the wavenumber of an index.
    pub fn grid(&self) -> &Grid {
        &self.grid
    }

    /// Number of components m.
    pub fn components(&self) -> usize {
        self.components
    }

    /// One entry of G at all wavenumbers. For a scheme of one component, `entry(0, 0)` is the whole symbol.
    pub fn entry(&self, output: usize, input: usize) -> &[Complex64] {
        let n = self.grid.count();
        let pair = output * self.components + input;
        &self.values[pair * n..(pair + 1) * n]
    }

    /// The block G at wavenumber index `at`.
    pub fn block(&self, at: usize) -> Matrix {
        Matrix::from_fn(self.components, |output, input| self.entry(output, input)[at])
    }
}

thread_local! {
    /// Making a plan costs several transforms, so that plans are kept for the next study.
    static PLANNER: RefCell<FftPlanner<f64>> = RefCell::new(FftPlanner::new());
}

/// Forward transform along every direction of a grid.
struct GridTransform {
    plans: Vec<Arc<dyn Fft<f64>>>,
}

impl GridTransform {
    fn new(grid: &Grid) -> Self {
        let plan = |n: &usize| PLANNER.with_borrow_mut(|planner| planner.plan_fft_forward(*n));
        GridTransform { plans: grid.cells().iter().map(plan).collect() }
    }

    fn forward(&self, values: &mut [Complex64]) {
        let mut stride = 1;
        for plan in &self.plans {
            if stride == 1 {
                plan.process(values);
            } else {
                transform_columns(plan.as_ref(), values, stride);
            }
            stride *= plan.len();
        }
    }
}

/// Lines of one direction that are gathered and transformed together, so that each cache line is read once.
const LINES_AT_ONCE: usize = 16;

fn transform_columns(plan: &dyn Fft<f64>, values: &mut [Complex64], stride: usize) {
    let n = plan.len();
    let mut lines = vec![Complex64::ZERO; n * LINES_AT_ONCE];
    for slab in values.chunks_mut(stride * n) {
        for first in (0..stride).step_by(LINES_AT_ONCE) {
            let count = LINES_AT_ONCE.min(stride - first);
            for j in 0..n {
                for l in 0..count {
                    lines[l * n + j] = slab[j * stride + first + l];
                }
            }
            plan.process(&mut lines[..count * n]);
            for j in 0..n {
                for l in 0..count {
                    slab[j * stride + first + l] = lines[l * n + j];
                }
            }
        }
    }
}
