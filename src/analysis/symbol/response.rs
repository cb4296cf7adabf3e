//! Impulse responses on a periodic grid of one, two or three dimensions.

use std::f64::consts::PI;

/// A periodic uniform grid: cells in each of one to three directions, flat with x fastest.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Grid {
    cells: Vec<usize>,
}

impl Grid {
    /// A grid with these cells in x, y and z.
    ///
    /// # Errors
    /// [`ResponseError::Dimensions`] unless there are one to three directions with at least one cell each.
    pub fn new(cells: &[usize]) -> Result<Self, ResponseError> {
        if !(1..=3).contains(&cells.len()) || cells.contains(&0) {
            return Err(ResponseError::Dimensions { cells: cells.to_vec() });
        }
        Ok(Grid { cells: cells.to_vec() })
    }

    /// Cells in each direction.
    pub fn cells(&self) -> &[usize] {
        &self.cells
    }

    /// Number of directions.
    pub fn dimensions(&self) -> usize {
        self.cells.len()
    }

    /// Number of all cells.
    pub fn count(&self) -> usize {
        self.cells.iter().product()
    }

    /// Indices in x, y and z of flat index `at`; zero in directions that the grid does not have.
    pub fn indices(&self, at: usize) -> [usize; 3] {
        let mut indices = [0; 3];
        let mut rest = at;
        for (index, n) in indices.iter_mut().zip(&self.cells) {
            (*index, rest) = (rest % n, rest / n);
        }
        indices
    }

    /// Flat index of a cell given by its indices, which are taken modulo the cells.
    pub fn flat(&self, indices: [i64; 3]) -> usize {
        let pairs = self.cells.iter().zip(indices).rev();
        pairs.fold(0, |flat, (&n, index)| flat * n + index.rem_euclid(n as i64) as usize)
    }

    /// Wavenumbers k h in (-pi, pi] of the Fourier mode at flat index `at`; zero in directions that the grid does not have.
    pub fn theta(&self, at: usize) -> [f64; 3] {
        let mut theta = [0.0; 3];
        for ((theta, index), &n) in theta.iter_mut().zip(self.indices(at)).zip(&self.cells) {
            *theta = 2.0 * PI * centred(index, n) as f64 / n as f64;
        }
        theta
    }
}

/// The representative of `index` modulo `n` in (-n/2, n/2].
pub(super) fn centred(index: usize, n: usize) -> i64 {
    let index = index as i64;
    if 2 * index > n as i64 { index - n as i64 } else { index }
}

/// Responses of every component to a unit impulse in every component, at one cell.
#[derive(Debug, Clone, PartialEq)]
pub struct ImpulseResponses {
    grid: Grid,
    components: usize,
    impulse_at: Vec<usize>,
    responses: Vec<f64>,
}

/// Why an array is no set of impulse responses.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum ResponseError {
    /// Not one to three directions, or a direction without cells.
    #[error("a grid of {cells:?} cells was given; a grid has one to three directions with at least one cell each")]
    Dimensions {
        /// Cells as given.
        cells: Vec<usize>,
    },
    /// No component, or a wrong number of values.
    #[error(
        "{found} values were given for {components} components on {cells} cells; impulse responses hold components^2 x cells = {} values and at least one component",
        components * components * cells
    )]
    Length {
        /// Components.
        components: usize,
        /// Cells of the grid.
        cells: usize,
        /// Values given.
        found: usize,
    },
    /// The impulse stands outside the grid.
    #[error("the impulse stands at cell {at:?} of a grid of {cells:?} cells; give one index from zero a direction")]
    ImpulseOutside {
        /// Indices as given.
        at: Vec<usize>,
        /// Cells of the grid.
        cells: Vec<usize>,
    },
    /// A NaN or an infinity among the responses.
    #[error(
        "the response of component {output} to an impulse in component {input} is {value} at cell {cell}; the scheme blew up within the step, so try a smaller one"
    )]
    NotFinite {
        /// Component that answered.
        output: usize,
        /// Component that held the impulse.
        input: usize,
        /// Flat index of the cell.
        cell: usize,
        /// The value.
        value: f64,
    },
}

impl ImpulseResponses {
    /// Responses of an m-component scheme to unit impulses at one cell.
    ///
    /// `responses` is indexed by output component, input component and cell, the cell running fastest:
    /// value `(a * m + b) * cells + j` is component a of the new state at cell j, started from an impulse in component b.
    ///
    /// # Errors
    /// A wrong number of values, an impulse outside the grid, a response that is not finite.
    pub fn new(
        grid: Grid,
        components: usize,
        impulse_at: &[usize],
        responses: Vec<f64>,
    ) -> Result<Self, ResponseError> {
        let cells = grid.count();
        if components == 0 || responses.len() != components * components * cells {
            return Err(ResponseError::Length { components, cells, found: responses.len() });
        }
        let inside = impulse_at.len() == grid.dimensions() && impulse_at.iter().zip(grid.cells()).all(|(i, n)| i < n);
        if !inside {
            return Err(ResponseError::ImpulseOutside { at: impulse_at.to_vec(), cells: grid.cells().to_vec() });
        }
        if let Some(at) = responses.iter().position(|r| !r.is_finite()) {
            let (pair, cell) = (at / cells, at % cells);
            let (output, input) = (pair / components, pair % components);
            return Err(ResponseError::NotFinite { output, input, cell, value: responses[at] });
        }
        Ok(ImpulseResponses { grid, components, impulse_at: impulse_at.to_vec(), responses })
    }

    /// The grid.
    pub fn grid(&self) -> &Grid {
        &self.grid
    }

    /// Number of components m.
    pub fn components(&self) -> usize {
        self.components
    }

    /// Response of `output` to an impulse in `input`, over the cells.
    pub fn response(&self, output: usize, input: usize) -> &[f64] {
        let n = self.grid.count();
        let pair = output * self.components + input;
        &self.responses[pair * n..(pair + 1) * n]
    }

    /// Offset of the neighbour whose coefficient stands at flat index `cell` of a response, each in (-n/2, n/2].
    pub fn offset(&self, cell: usize) -> [i64; 3] {
        let indices = self.grid.indices(cell);
        let mut offset = [0; 3];
        for (d, (&n, &at)) in self.grid.cells().iter().zip(&self.impulse_at).enumerate() {
            offset[d] = centred((at + n - indices[d]) % n, n);
        }
        offset
    }

    /// Flat index that `cell` gets when the grid is turned so that the impulse stands at cell zero.
    pub(super) fn turned(&self, cell: usize) -> usize {
        let mut indices = self.grid.indices(cell).map(|i| i as i64);
        for (index, at) in indices.iter_mut().zip(&self.impulse_at) {
            *index -= *at as i64;
        }
        self.grid.flat(indices)
    }
}
