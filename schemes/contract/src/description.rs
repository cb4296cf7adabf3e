//! Who a scheme is and what it offers: the answer to `describe`.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use crate::CONTRACT;

/// The answer to `describe`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Description {
    /// Version of the contract, [`CONTRACT`]; another number is refused by the harness.
    pub contract: u32,
    /// Free text for people.
    pub name: String,
    /// Free text for people.
    #[serde(default)]
    pub version: String,
    /// The encodings of arrays that the scheme understands in the JSON conversation.
    #[serde(default = "only_text")]
    pub arrays: Vec<ArrayEncoding>,
    /// What the scheme can be asked for. A study that no offer can take is undecided.
    pub offers: Vec<Offer>,
}

impl Description {
    /// A description in this contract version with plain-text arrays.
    pub fn new(name: impl Into<String>, version: impl Into<String>, offers: Vec<Offer>) -> Self {
        Self { contract: CONTRACT, name: name.into(), version: version.into(), arrays: only_text(), offers }
    }
}

/// One thing that a scheme can be asked for: an equation with the operations, grids and boundaries that go with it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Offer {
    /// The name of an equation of the contract, or one that a problem file defines.
    pub equation: String,
    /// Numbers of space dimensions, each 1, 2 or 3.
    #[serde(default = "one_dimension")]
    pub dimensions: Vec<usize>,
    /// The arrays of the state, in order; `None`: the equation's own.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub fields: Option<Vec<String>>,
    /// Which operations answer.
    pub operations: Vec<Operation>,
    /// What a number of the state stands for.
    #[serde(default)]
    pub values: Values,
    /// Where the numbers sit.
    #[serde(default)]
    pub placement: Placement,
    /// With [`Position::Node`]: intervals of nodes per cell, shared with the neighbours (quadratic elements: 2).
    #[serde(default = "one")]
    pub shared_order: usize,
    /// Kinds of boundary taken, in any mix.
    #[serde(default = "only_periodic")]
    pub boundaries: Vec<BoundaryKind>,
    /// Time levels in the state (2 for leapfrog).
    #[serde(default = "one")]
    pub levels: usize,
    /// By field, in steps, for fields that are staggered in time.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub time_offset: BTreeMap<String, f64>,
    /// Whether a source term is added, by asking `source`.
    #[serde(default)]
    pub source: bool,
    /// Parameters that may vary in space or time, by asking `coefficient`.
    #[serde(default)]
    pub coefficients: Vec<String>,
    /// Ranges accepted, by name; a parameter without a range is taken whatever its value.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub parameters: BTreeMap<String, ParameterRange>,
    /// Which numbers of cells are taken, the same rule in each direction.
    #[serde(default)]
    pub cells: CellRule,
    /// Which kinds of grid are taken.
    #[serde(default = "only_uniform")]
    pub grids: Vec<GridKind>,
}

impl Offer {
    /// An offer in one dimension with point values at cell centres, periodic, everything else as the contract's defaults say.
    pub fn new(equation: &str, operations: &[Operation]) -> Self {
        Self {
            equation: equation.to_owned(),
            dimensions: one_dimension(),
            fields: None,
            operations: operations.to_vec(),
            values: Values::default(),
            placement: Placement::default(),
            shared_order: 1,
            boundaries: only_periodic(),
            levels: 1,
            time_offset: BTreeMap::new(),
            source: false,
            coefficients: Vec::new(),
            parameters: BTreeMap::new(),
            cells: CellRule::default(),
            grids: only_uniform(),
        }
    }

    /// The same offer with a range for the parameter `name` (every component of a vector).
    pub fn with_parameter(mut self, name: &str, range: Range) -> Self {
        self.parameters.insert(name.to_owned(), ParameterRange::All(range));
        self
    }

    /// Whether `operation` is among the offered ones.
    pub fn has(&self, operation: Operation) -> bool {
        self.operations.contains(&operation)
    }
}

/// Encodings of arrays in the JSON conversation.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ArrayEncoding {
    /// A JSON list of numbers that read back to the same bits.
    #[default]
    Text,
    /// One string (RFC 4648) of the little-endian bytes.
    Base64,
}

/// What a scheme can be asked to do with a state.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Operation {
    /// A number of steps of a given size.
    Advance,
    /// On to a given time by steps of the scheme's own choice.
    March,
    /// The semi-discrete right-hand side.
    Rate,
    /// The steady solution.
    Solve,
}

impl Operation {
    /// The method's name in the conversation.
    pub fn name(self) -> &'static str {
        match self {
            Self::Advance => "advance",
            Self::March => "march",
            Self::Rate => "rate",
            Self::Solve => "solve",
        }
    }
}

/// What a number of the state stands for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Values {
    /// The value at a point.
    #[default]
    Point,
    /// The mean over a cell.
    CellAverage,
    /// Several values per cell, at the offsets that `prepare` answers.
    CellNodes,
}

/// Where a field's numbers sit on the grid.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Position {
    /// Cell centres.
    #[default]
    Centre,
    /// Cell corners.
    Node,
    /// As `Node` in x, as `Centre` otherwise.
    XFace,
    /// As `Node` in y, as `Centre` otherwise.
    YFace,
    /// As `Node` in z, as `Centre` otherwise.
    ZFace,
}

/// One position for all fields, or a table by field (staggered grids).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum Placement {
    /// All fields at the same position: `centre` or `node`.
    Same(Position),
    /// A position for each field.
    ByField(BTreeMap<String, Position>),
}

impl Default for Placement {
    fn default() -> Self {
        Self::Same(Position::Centre)
    }
}

impl Placement {
    /// The position of `field`; a field that a table leaves out sits at cell centres.
    pub fn of(&self, field: &str) -> Position {
        match self {
            Self::Same(position) => *position,
            Self::ByField(table) => table.get(field).copied().unwrap_or_default(),
        }
    }
}

/// Kinds of boundary condition.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum BoundaryKind {
    /// The domain repeats itself; always at both ends of a direction.
    Periodic,
    /// The value is prescribed (Dirichlet).
    Value,
    /// The derivative along the outward normal is prescribed (Neumann).
    Gradient,
    /// Nothing is prescribed.
    None,
}

/// Kinds of grid.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum GridKind {
    /// Equal cells.
    Uniform,
    /// Straight lines at given edges.
    Stretched,
    /// Given cell corners.
    Mapped,
}

/// Lower and upper bound, both included; `None`: no bound.
pub type Range = [Option<f64>; 2];

/// The values of a parameter that are accepted.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum ParameterRange {
    /// One range for a scalar, or for every component of a vector.
    All(Range),
    /// A range for each component of a vector.
    Each(Vec<Range>),
}

impl ParameterRange {
    /// The range of component `component`; a component beyond the list has no bounds.
    pub fn component(&self, component: usize) -> Range {
        match self {
            Self::All(range) => *range,
            Self::Each(ranges) => ranges.get(component).copied().unwrap_or([None, None]),
        }
    }

    /// Whether every component of `values` lies in its range. A value that is not a number lies in none.
    pub fn admits(&self, values: &[f64]) -> bool {
        values.iter().enumerate().all(|(component, value)| {
            let [lower, upper] = self.component(component);
            !value.is_nan() && lower.is_none_or(|bound| *value >= bound) && upper.is_none_or(|bound| *value <= bound)
        })
    }
}

/// Which numbers of cells a scheme takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CellRule {
    /// The fewest cells in a direction.
    #[serde(default = "one")]
    pub minimum: usize,
    /// The number of cells in a direction is a multiple of this.
    #[serde(default = "one")]
    pub multiple: usize,
}

impl Default for CellRule {
    fn default() -> Self {
        Self { minimum: 1, multiple: 1 }
    }
}

impl CellRule {
    /// Whether `cells` cells in a direction are taken.
    pub fn admits(&self, cells: usize) -> bool {
        cells >= self.minimum && cells.is_multiple_of(self.multiple.max(1))
    }
}

fn only_text() -> Vec<ArrayEncoding> {
    vec![ArrayEncoding::Text]
}

fn one_dimension() -> Vec<usize> {
    vec![1]
}

fn only_periodic() -> Vec<BoundaryKind> {
    vec![BoundaryKind::Periodic]
}

fn only_uniform() -> Vec<GridKind> {
    vec![GridKind::Uniform]
}

fn one() -> usize {
    1
}
