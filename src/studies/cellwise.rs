//! Which values of a periodic state belong to which cell.

use gridassay_scheme::{Nodes, Offer, Values};

/// How the flat array of a field is made of cells, x fastest; along each direction a cell holds `per_direction` values one after another.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Cellwise {
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// Values of a cell along each direction.
    pub per_direction: usize,
}

impl Cellwise {
    /// The arrangement that an offer and the answer to `prepare` imply on `cells`.
    pub fn new(offer: &Offer, nodes: Option<&Nodes>, cells: &[usize]) -> Self {
        let per_direction = match (offer.values, nodes) {
            (Values::CellNodes, Some(nodes)) => nodes.offsets.len(),
            _ => offer.shared_order,
        };
        Self { cells: cells.to_vec(), per_direction }
    }

    /// Values of a field that belong to one cell.
    pub fn per_cell(&self) -> usize {
        self.per_direction.pow(self.cells.len() as u32)
    }

    /// Number of cells.
    pub fn count(&self) -> usize {
        self.cells.iter().product()
    }

    /// Number of values of a field.
    pub fn len(&self) -> usize {
        self.count() * self.per_cell()
    }

    /// Whether there are no values.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Where value `value` (0 to per_cell - 1, x fastest) of the cell with flat index `cell` stands in the array.
    pub fn index(&self, cell: usize, value: usize) -> usize {
        let (mut cell, mut value, mut stride, mut index) = (cell, value, 1, 0);
        for n in &self.cells {
            let along = (cell % n) * self.per_direction + value % self.per_direction;
            index += along * stride;
            stride *= n * self.per_direction;
            (cell, value) = (cell / n, value / self.per_direction);
        }
        index
    }

    /// `values` moved up by `shift` cells in direction `axis`.
    pub fn shifted(&self, values: &[f64], axis: usize, shift: usize) -> Vec<f64> {
        let stride: usize = self.cells[..axis].iter().map(|n| n * self.per_direction).product();
        let length = self.cells[axis] * self.per_direction;
        let back = length - shift * self.per_direction % length;
        let from = |index: usize| {
            let along = (index / stride) % length;
            index - along * stride + (along + back) % length * stride
        };
        (0..values.len()).map(|index| values[from(index)]).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_indices_of_all_values_of_all_cells_are_the_whole_array() {
        let cellwise = Cellwise { cells: vec![3, 2], per_direction: 2 };
        let mut all: Vec<usize> =
            (0..6).flat_map(|cell| (0..4).map(move |value| (cell, value))).map(|(c, v)| cellwise.index(c, v)).collect();
        all.sort_unstable();
        assert_eq!(all, (0..24).collect::<Vec<_>>());
        // Cell (1, 1), its second value in x and first in y: column 3 of row 2 of an array of 6 columns.
        assert_eq!(cellwise.index(4, 1), 2 * 6 + 3);
    }

    #[test]
    fn a_shift_moves_whole_cells() {
        let cellwise = Cellwise { cells: vec![3], per_direction: 2 };
        assert_eq!(cellwise.shifted(&[1.0, 2.0, 3.0, 4.0, 5.0, 6.0], 0, 1), [5.0, 6.0, 1.0, 2.0, 3.0, 4.0]);
        let plane = Cellwise { cells: vec![2, 3], per_direction: 1 };
        assert_eq!(plane.shifted(&[1.0, 2.0, 3.0, 4.0, 5.0, 6.0], 1, 1), [5.0, 6.0, 1.0, 2.0, 3.0, 4.0]);
        assert_eq!(plane.shifted(&[1.0, 2.0, 3.0, 4.0, 5.0, 6.0], 0, 1), [2.0, 1.0, 4.0, 3.0, 6.0, 5.0]);
    }
}
