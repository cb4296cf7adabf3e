//! Where the numbers of a state sit, and how much of the domain each stands for.

use gridassay_scheme::{Case, Grid, Nodes, Offer, Placement, Position, Values};

/// The positions of one field's values. Arrays are flat with x fastest.
#[derive(Clone, Debug, PartialEq)]
pub struct FieldLayout {
    /// Coordinates along each direction.
    pub axes: Vec<Vec<f64>>,
    /// Along each direction the lower end of the cell (or dual cell) that each value stands for.
    pub lower: Vec<Vec<f64>>,
    /// Along each direction the upper end.
    pub upper: Vec<Vec<f64>>,
    /// Along each direction the width that each value stands for in an integral over the domain.
    pub widths: Vec<Vec<f64>>,
}

/// The positions of all fields of a state.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// One a field, in the order of the offer.
    pub fields: Vec<FieldLayout>,
    /// What a number stands for.
    pub values: Values,
}

impl Layout {
    /// The layout of `fields` on the grid of `case` as `offer` says; `nodes` is the answer to `prepare`.
    ///
    /// # Errors
    /// A sentence, where the offer says `cell_nodes` and `prepare` answered no nodes.
    pub fn new(offer: &Offer, case: &Case, fields: &[String], nodes: Option<&Nodes>) -> Result<Self, String> {
        let nodes = match (offer.values, nodes) {
            (Values::CellNodes, None) => {
                return Err(
                    "the scheme offers `cell_nodes` but answered `prepare` without `offsets` and `weights`".to_owned()
                );
            }
            (Values::CellNodes, Some(nodes)) => Some(nodes),
            _ => None,
        };
        let field = |name: &String| {
            let axes = (0..case.dimensions).map(|axis| Axis::new(offer, case, name, axis, nodes)).collect();
            FieldLayout::from_axes(axes)
        };
        Ok(Self { fields: fields.iter().map(field).collect(), values: offer.values })
    }

    /// Number of values of each field.
    pub fn lengths(&self) -> Vec<usize> {
        self.fields.iter().map(FieldLayout::len).collect()
    }
}

impl FieldLayout {
    fn from_axes(axes: Vec<Axis>) -> Self {
        let mut layout = Self { axes: Vec::new(), lower: Vec::new(), upper: Vec::new(), widths: Vec::new() };
        for axis in axes {
            layout.axes.push(axis.at);
            layout.lower.push(axis.lower);
            layout.upper.push(axis.upper);
            layout.widths.push(axis.widths);
        }
        layout
    }

    /// Number of values.
    pub fn len(&self) -> usize {
        self.axes.iter().map(Vec::len).product()
    }

    /// Whether there are no values.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The coordinates of every value, one array per dimension.
    pub fn points(&self) -> Vec<Vec<f64>> {
        spread(&self.axes)
    }

    /// The measure that each value stands for.
    pub fn measures(&self) -> Vec<f64> {
        let widths = spread(&self.widths);
        let product = |index: usize| widths.iter().map(|along| along[index]).product();
        (0..self.len()).map(product).collect()
    }
}

/// One array per direction over the whole tensor product, x fastest, from the coordinates along each direction.
pub fn spread(axes: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let total: usize = axes.iter().map(Vec::len).product();
    let mut stride = 1;
    let mut all = Vec::with_capacity(axes.len());
    for along in axes {
        all.push((0..total).map(|index| along[(index / stride) % along.len()]).collect());
        stride *= along.len();
    }
    all
}

/// One direction of a field's layout.
struct Axis {
    at: Vec<f64>,
    lower: Vec<f64>,
    upper: Vec<f64>,
    widths: Vec<f64>,
}

impl Axis {
    fn new(offer: &Offer, case: &Case, field: &str, axis: usize, nodes: Option<&Nodes>) -> Self {
        let grid = &case.grid;
        if let Some(nodes) = nodes {
            return Self::in_cells(grid, axis, nodes);
        }
        let position = match &offer.placement {
            Placement::Same(position) => *position,
            table => table.of(field),
        };
        match Grid::at_nodes(position, axis) {
            true => {
                let shared = if position == Position::Node { offer.shared_order } else { 1 };
                Self::at_nodes(grid, axis, shared, case.is_periodic(axis))
            }
            false => Self::at_centres(grid, axis),
        }
    }

    fn at_centres(grid: &Grid, axis: usize) -> Self {
        let lower: Vec<f64> = (0..grid.cells[axis]).map(|cell| grid.edge(axis, cell)).collect();
        let upper: Vec<f64> = (0..grid.cells[axis]).map(|cell| grid.edge(axis, cell + 1)).collect();
        let widths = differences(&lower, &upper);
        Self { at: grid.centres(axis), lower, upper, widths }
    }

    /// A node stands for half the interval on each of its sides; an end node of a bounded direction for one half interval.
    fn at_nodes(grid: &Grid, axis: usize, shared_order: usize, periodic: bool) -> Self {
        let at = grid.nodes(axis, shared_order, periodic);
        let period = grid.upper[axis] - grid.lower[axis];
        let count = at.len();
        let before = |i: usize| match (i, periodic) {
            (0, true) => 0.5 * (at[count - 1] - period + at[0]),
            (0, false) => at[0],
            _ => 0.5 * (at[i - 1] + at[i]),
        };
        let lower: Vec<f64> = (0..count).map(before).collect();
        let last = if periodic { lower[0] + period } else { at[count - 1] };
        let upper: Vec<f64> = lower.iter().skip(1).copied().chain([last]).collect();
        let widths = differences(&lower, &upper);
        Self { at, lower, upper, widths }
    }

    /// The several values of a cell all stand for that cell; the quadrature's weights share its width among them.
    fn in_cells(grid: &Grid, axis: usize, nodes: &Nodes) -> Self {
        let mut axes =
            Self { at: grid.cell_nodes(axis, nodes), lower: Vec::new(), upper: Vec::new(), widths: Vec::new() };
        for cell in 0..grid.cells[axis] {
            let (lower, upper) = (grid.edge(axis, cell), grid.edge(axis, cell + 1));
            for weight in &nodes.weights {
                axes.lower.push(lower);
                axes.upper.push(upper);
                axes.widths.push(weight * (upper - lower));
            }
        }
        axes
    }
}

fn differences(lower: &[f64], upper: &[f64]) -> Vec<f64> {
    lower.iter().zip(upper).map(|(lower, upper)| upper - lower).collect()
}

#[cfg(test)]
mod tests {
    use std::collections::BTreeMap;

    use gridassay_scheme::{BoundaryKind, Operation, SideKinds};

    use super::*;

    fn case(cells: &[usize], kind: BoundaryKind) -> Case {
        let dimensions = cells.len();
        let side = SideKinds::Same(kind);
        Case {
            equation: "advection".to_owned(),
            dimensions,
            parameters: BTreeMap::new(),
            coefficients: Vec::new(),
            grid: Grid::uniform(cells, &vec![0.0; dimensions], &vec![1.0; dimensions]),
            boundaries: vec![[side.clone(), side]; dimensions],
            source: false,
            steady: Vec::new(),
            arrays: Default::default(),
        }
    }

    fn measure_of(offer: &Offer, case: &Case, nodes: Option<&Nodes>) -> f64 {
        let layout = Layout::new(offer, case, &["u".to_owned()], nodes).unwrap();
        layout.fields[0].measures().iter().sum()
    }

    #[test]
    fn the_measures_of_every_placement_sum_to_the_domain() {
        let mut offer = Offer::new("advection", &[Operation::Advance]);
        for kind in [BoundaryKind::Periodic, BoundaryKind::Value] {
            for position in [Position::Centre, Position::Node, Position::YFace] {
                offer.placement = Placement::Same(position);
                assert!((measure_of(&offer, &case(&[5, 3], kind), None) - 1.0).abs() < 8.0 * f64::EPSILON);
            }
        }
        offer.values = Values::CellNodes;
        let nodes = Nodes { offsets: vec![0.2, 0.8], weights: vec![0.5, 0.5] };
        assert!(
            (measure_of(&offer, &case(&[7], BoundaryKind::Periodic), Some(&nodes)) - 1.0).abs() < 8.0 * f64::EPSILON
        );
    }

    #[test]
    fn x_runs_fastest() {
        let points = spread(&[vec![1.0, 2.0, 3.0], vec![10.0, 20.0]]);
        assert_eq!(points[0], [1.0, 2.0, 3.0, 1.0, 2.0, 3.0]);
        assert_eq!(points[1], [10.0, 10.0, 10.0, 20.0, 20.0, 20.0]);
    }
}
