//! The stencil as built: coefficients by neighbour, and from them the symbol at any wavenumber.

use super::response::{ImpulseResponses, centred};
use crate::analysis::matrix::Matrix;
use num_complex::Complex64;

/// Coefficients c(d) of the neighbours at offsets d: the new state at cell j is the sum of c(d) u_{j+d}.
#[derive(Debug, Clone, PartialEq)]
pub struct Stencil {
    components: usize,
    dimensions: usize,
    offsets: Vec<[i64; 3]>,
    /// One m x m block by rows for each offset.
    coefficients: Vec<f64>,
    dropped: f64,
}

/// A one-component symbol with its first and second derivative at one wavenumber.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Jet {
    /// G(theta).
    pub value: Complex64,
    /// dG/dtheta.
    pub first: Complex64,
    /// d2G/dtheta2.
    pub second: Complex64,
}

impl Stencil {
    /// A stencil from its neighbours: offset in x, y and z, and m x m coefficients by rows.
    ///
    /// `None` unless there are one to three dimensions, at least one component, and m x m coefficients with every offset.
    pub fn from_neighbours(dimensions: usize, components: usize, neighbours: &[([i64; 3], Vec<f64>)]) -> Option<Self> {
        let complete = neighbours.iter().all(|(_, c)| c.len() == components * components);
        if !(1..=3).contains(&dimensions) || components == 0 || !complete {
            return None;
        }
        let offsets = neighbours.iter().map(|(d, _)| *d).collect();
        let coefficients = neighbours.iter().flat_map(|(_, c)| c.iter().copied()).collect();
        Some(Stencil { components, dimensions, offsets, coefficients, dropped: 0.0 })
    }

    /// The one-component, one-dimensional stencil of these (offset, coefficient) pairs.
    pub fn scalar_1d(neighbours: &[(i64, f64)]) -> Self {
        Stencil {
            components: 1,
            dimensions: 1,
            offsets: neighbours.iter().map(|(d, _)| [*d, 0, 0]).collect(),
            coefficients: neighbours.iter().map(|(_, c)| *c).collect(),
            dropped: 0.0,
        }
    }

    /// The stencil of a scheme, where its impulse responses are short.
    ///
    /// Coefficients of size at most `negligible` are dropped: zero for an explicit scheme; for an implicit one, whose response decays but
    /// never ends, eps times the largest. A response is short when the rest fits into half of the grid in every direction, so that it
    /// cannot have wrapped around. Offsets are those nearest to zero: a shift by more than half of the grid is not told from one the
    /// other way round. `None` where the response is not short.
    pub fn from_responses(responses: &ImpulseResponses, negligible: f64) -> Option<Self> {
        let (grid, m) = (responses.grid(), responses.components());
        let pairs = || (0..m * m).map(|p| responses.response(p / m, p % m));
        let kept: Vec<usize> = (0..grid.count()).filter(|&j| pairs().any(|r| r[j].abs() > negligible)).collect();
        let arcs: Vec<(i64, i64)> = grid
            .cells()
            .iter()
            .enumerate()
            .map(|(d, &n)| shortest_arc(n, kept.iter().map(|&j| responses.offset(j)[d])))
            .collect();
        if arcs.iter().zip(grid.cells()).any(|((first, last), n)| 2 * (last - first + 1) > *n as i64 && *n > 1) {
            return None;
        }
        let mut neighbours: Vec<([i64; 3], usize)> =
            kept.iter().map(|&j| (on_arcs(responses.offset(j), &arcs, grid.cells()), j)).collect();
        neighbours.sort_by_key(|(d, _)| [d[2], d[1], d[0]]);
        let mut is_kept = vec![false; grid.count()];
        kept.iter().for_each(|&j| is_kept[j] = true);
        let dropped = pairs().map(|r| r.iter().zip(&is_kept).filter(|(_, k)| !**k).map(|(r, _)| r.abs()).sum::<f64>());
        Some(Stencil {
            components: m,
            dimensions: grid.dimensions(),
            dropped: dropped.fold(0.0, f64::max),
            coefficients: neighbours.iter().flat_map(|&(_, j)| pairs().map(move |r| r[j])).collect(),
            offsets: neighbours.into_iter().map(|(d, _)| d).collect(),
        })
    }

    /// Number of components m.
    pub fn components(&self) -> usize {
        self.components
    }

    /// Number of directions.
    pub fn dimensions(&self) -> usize {
        self.dimensions
    }

    /// Offsets with their m x m coefficients by rows, sorted by z, y and x where they come from responses.
    pub fn neighbours(&self) -> impl Iterator<Item = ([i64; 3], &[f64])> {
        self.offsets.iter().copied().zip(self.coefficients.chunks(self.components * self.components))
    }

    /// Bound on what the dropped coefficients could change in any entry of G.
    pub fn dropped(&self) -> f64 {
        self.dropped
    }

    /// The block G(theta). Directions beyond the grid's are ignored.
    pub fn symbol(&self, theta: [f64; 3]) -> Matrix {
        self.sum(theta, |_| Complex64::ONE)
    }

    /// dG/dtheta in one direction (0 for x, 1 for y, 2 for z).
    pub fn derivative(&self, theta: [f64; 3], direction: usize) -> Matrix {
        self.sum(theta, |d| Complex64::new(0.0, d[direction] as f64))
    }

    fn sum(&self, theta: [f64; 3], weight: impl Fn([i64; 3]) -> Complex64) -> Matrix {
        let m = self.components;
        let mut entries = vec![Complex64::ZERO; m * m];
        for (offset, block) in self.neighbours() {
            let factor = weight(offset) * phase(offset, theta);
            entries.iter_mut().zip(block).for_each(|(e, c)| *e += factor * c);
        }
        Matrix::from_fn(m, |i, j| entries[i * m + j])
    }

    /// G with its two derivatives by theta in x, for a stencil of one component; of more components, entry (0, 0).
    pub fn jet(&self, theta: f64) -> Jet {
        let mut jet = Jet { value: Complex64::ZERO, first: Complex64::ZERO, second: Complex64::ZERO };
        for (offset, block) in self.neighbours() {
            let d = offset[0] as f64;
            let term = block[0] * phase(offset, [theta, 0.0, 0.0]);
            jet.value += term;
            jet.first += Complex64::I * d * term;
            jet.second -= d * d * term;
        }
        jet
    }
}

fn phase(offset: [i64; 3], theta: [f64; 3]) -> Complex64 {
    Complex64::cis(offset.iter().zip(theta).map(|(d, t)| *d as f64 * t).sum())
}

/// First and last offset of the shortest arc of a circle of n cells that holds all offsets, its middle nearest to zero.
fn shortest_arc(n: usize, offsets: impl Iterator<Item = i64>) -> (i64, i64) {
    let n = n as i64;
    let mut places: Vec<i64> = offsets.map(|d| d.rem_euclid(n)).collect();
    places.sort_unstable();
    places.dedup();
    let Some(&lowest) = places.first() else { return (0, 0) };
    let nexts = places.iter().skip(1).copied().chain([lowest + n]);
    // The arc is what remains when the widest gap is taken out; of equal gaps the one opposite to zero.
    let gaps = places.iter().copied().zip(nexts);
    let widest = gaps.max_by_key(|(a, b)| (b - a, -(a + b - n).abs()));
    let (before, after) = widest.unwrap_or((lowest, lowest + n));
    let (first, last) = (after, before + n);
    let turns = (first + last).div_euclid(2 * n) * n;
    let shift = [turns, turns + n].into_iter().min_by_key(|t| (first + last - 2 * t).abs()).unwrap_or(turns);
    (first - shift, last - shift)
}

fn on_arcs(offset: [i64; 3], arcs: &[(i64, i64)], cells: &[usize]) -> [i64; 3] {
    let mut placed = [0; 3];
    for (d, ((first, _), &n)) in arcs.iter().zip(cells).enumerate() {
        placed[d] = first + (offset[d] - first).rem_euclid(n as i64);
        debug_assert_eq!(centred(placed[d].rem_euclid(n as i64) as usize, n), offset[d]);
    }
    placed
}
