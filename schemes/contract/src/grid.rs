//! The grid of a case, and where values sit on it.

use serde::{Deserialize, Serialize};

use crate::{GridKind, Nodes, Position};

/// A grid: uniform unless `edges` (stretched) or `vertices` (mapped) say otherwise.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Grid {
    /// Cells in each direction, x first.
    pub cells: Vec<usize>,
    /// The lower corner of the domain.
    pub lower: Vec<f64>,
    /// The upper corner of the domain.
    pub upper: Vec<f64>,
    /// Stretched: cells + 1 coordinates for each direction.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub edges: Option<Vec<Vec<f64>>>,
    /// Mapped: one array per dimension over all cell corners, x fastest.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub vertices: Option<Vec<Vec<f64>>>,
}

impl Grid {
    /// A uniform grid of `cells` cells between two corners.
    pub fn uniform(cells: &[usize], lower: &[f64], upper: &[f64]) -> Self {
        Self { cells: cells.to_vec(), lower: lower.to_vec(), upper: upper.to_vec(), edges: None, vertices: None }
    }

    /// The kind of grid.
    pub fn kind(&self) -> GridKind {
        match (&self.edges, &self.vertices) {
            (_, Some(_)) => GridKind::Mapped,
            (Some(_), None) => GridKind::Stretched,
            (None, None) => GridKind::Uniform,
        }
    }

    /// Number of space dimensions.
    pub fn dimensions(&self) -> usize {
        self.cells.len()
    }

    /// Width of a cell of a uniform grid in direction `axis`; of a stretched grid, the mean width.
    pub fn spacing(&self, axis: usize) -> f64 {
        (self.upper[axis] - self.lower[axis]) / self.cells[axis] as f64
    }

    /// The coordinate of edge `index` (0 to cells) in direction `axis` of a uniform or stretched grid.
    pub fn edge(&self, axis: usize, index: usize) -> f64 {
        match &self.edges {
            Some(edges) => edges[axis][index],
            // The upper end is returned as it was given: lower + n h may differ from it by rounding.
            None if index == self.cells[axis] => self.upper[axis],
            None => self.lower[axis] + index as f64 * self.spacing(axis),
        }
    }

    /// The coordinates along direction `axis` of values at cell centres (uniform: lower + (i + 1/2) h; stretched: midpoints).
    pub fn centres(&self, axis: usize) -> Vec<f64> {
        let cells = 0..self.cells[axis];
        match &self.edges {
            Some(edges) => cells.map(|i| 0.5 * (edges[axis][i] + edges[axis][i + 1])).collect(),
            None => cells.map(|i| self.lower[axis] + (i as f64 + 0.5) * self.spacing(axis)).collect(),
        }
    }

    /// The coordinates along direction `axis` of values at nodes, `shared_order` intervals per cell; the last node is left out
    /// where the direction is `periodic`.
    pub fn nodes(&self, axis: usize, shared_order: usize, periodic: bool) -> Vec<f64> {
        let count = self.cells[axis] * shared_order + usize::from(!periodic);
        let at = |index: usize| {
            let (cell, part) = (index / shared_order, index % shared_order);
            if part == 0 {
                return self.edge(axis, cell);
            }
            let (left, right) = (self.edge(axis, cell), self.edge(axis, cell + 1));
            left + (right - left) * part as f64 / shared_order as f64
        };
        (0..count).map(at).collect()
    }

    /// The coordinates along direction `axis` of the several values of each cell, numbered cell by cell.
    pub fn cell_nodes(&self, axis: usize, nodes: &Nodes) -> Vec<f64> {
        let cell = |i: usize| {
            let (left, right) = (self.edge(axis, i), self.edge(axis, i + 1));
            nodes.offsets.iter().map(move |offset| left + (right - left) * offset)
        };
        (0..self.cells[axis]).flat_map(cell).collect()
    }

    /// Whether values at `position` sit at nodes (true) or centres (false) along direction `axis`.
    pub fn at_nodes(position: Position, axis: usize) -> bool {
        match position {
            Position::Centre => false,
            Position::Node => true,
            Position::XFace => axis == 0,
            Position::YFace => axis == 1,
            Position::ZFace => axis == 2,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grid() -> Grid {
        Grid::uniform(&[4], &[-1.0], &[1.0])
    }

    #[test]
    fn centres_and_nodes_sit_where_the_contract_says() {
        assert_eq!(grid().centres(0), [-0.75, -0.25, 0.25, 0.75]);
        assert_eq!(grid().nodes(0, 1, true), [-1.0, -0.5, 0.0, 0.5]);
        assert_eq!(grid().nodes(0, 1, false), [-1.0, -0.5, 0.0, 0.5, 1.0]);
        assert_eq!(grid().nodes(0, 2, false).len(), 9);
        assert_eq!(grid().nodes(0, 2, true)[1], -0.75);
    }

    #[test]
    fn a_stretched_grid_has_midpoints_of_its_edges() {
        let stretched =
            Grid { edges: Some(vec![vec![0.0, 0.1, 0.4, 1.0, 2.0]]), lower: vec![0.0], upper: vec![2.0], ..grid() };
        assert_eq!(stretched.centres(0), [0.05, 0.25, 0.7, 1.5]);
        assert_eq!(stretched.nodes(0, 1, false), [0.0, 0.1, 0.4, 1.0, 2.0]);
        assert_eq!(stretched.kind(), GridKind::Stretched);
    }

    #[test]
    fn the_last_node_is_the_upper_end_itself() {
        let thirds = Grid::uniform(&[3], &[0.1], &[0.7]);
        assert_eq!(*thirds.nodes(0, 1, false).last().unwrap(), 0.7);
    }
}
