//! Every combination that an offer of a scheme holds: boundaries, kind of grid, callbacks, operation.

use std::fmt;

use gridassay_scheme::{ArrayEncoding, BoundaryKind, Case, Grid, GridKind, Offer, Operation, Parameter, SideKinds};

use crate::record::Parameters;
use crate::studies::invariants::parameters_within;

/// Cells in each direction, before the offer's own rule: few, and different.
const CELLS: [usize; 3] = [12, 9, 7];
/// A box whose corners and lengths are generic.
const LOWER: [f64; 3] = [-0.37, 0.21, -0.58];
const LENGTH: [f64; 3] = [1.7, 1.3, 2.1];

/// One thing to ask of a scheme.
#[derive(Clone, Debug)]
pub struct Combination {
    /// The offer.
    pub offer: Offer,
    /// The names of the fields.
    pub names: Vec<String>,
    /// The case.
    pub case: Case,
    /// The operation.
    pub operation: Operation,
}

impl fmt::Display for Combination {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let [lower, upper] = &self.case.boundaries[0];
        write!(out, "`{}` with {} and {} boundaries", self.operation.name(), word(lower), word(upper))?;
        if self.case.grid.kind() != GridKind::Uniform {
            write!(out, " on a {} grid", if self.case.grid.edges.is_some() { "stretched" } else { "mapped" })?;
        }
        if self.case.source {
            write!(out, ", with a source")?;
        }
        if !self.case.coefficients.is_empty() {
            write!(out, ", with varying {}", self.case.coefficients.join(" and "))?;
        }
        Ok(())
    }
}

fn word(kind: &SideKinds) -> &'static str {
    match kind.of("") {
        BoundaryKind::Periodic => "periodic",
        BoundaryKind::Value => "value",
        BoundaryKind::Gradient => "gradient",
        BoundaryKind::None => "free",
    }
}

/// All combinations of an offer in one number of dimensions.
///
/// # Errors
/// A sentence, where the contract does not know the equation, so that nothing is known of its parameters and fields.
pub fn all(offer: &Offer, dimensions: usize) -> Result<Vec<Combination>, String> {
    let names = offer.field_names(dimensions);
    let known = gridassay_reference::equation::Equation::named(&offer.equation).is_ok();
    let (Some(names), true) = (names, known) else {
        return Err(format!("the contract does not know the equation `{}`", offer.equation));
    };
    let parameters = parameters(offer, dimensions)?;
    let mut combinations = Vec::new();
    for boundaries in boundaries(offer, dimensions) {
        for grid in offer.grids.iter().map(|kind| grid(offer, dimensions, *kind)) {
            for source in [false, true].into_iter().filter(|source| offer.source || !source) {
                for coefficients in coefficient_choices(offer) {
                    for operation in &offer.operations {
                        let case = Case {
                            equation: offer.equation.clone(),
                            dimensions,
                            parameters: constants(&parameters, &coefficients),
                            coefficients: coefficients.clone(),
                            grid: grid.clone(),
                            boundaries: boundaries.clone(),
                            source,
                            steady: Vec::new(),
                            arrays: ArrayEncoding::Text,
                        };
                        let (offer, names) = (offer.clone(), names.clone());
                        combinations.push(Combination { offer, names, case, operation: *operation });
                    }
                }
            }
        }
    }
    Ok(combinations)
}

/// Generic parameters within the offer's ranges, with the motion in a direction that the offer takes.
fn parameters(offer: &Offer, dimensions: usize) -> Result<Parameters, String> {
    let takes = |parameters: &Parameters| {
        let fits = |(name, range): (&String, &gridassay_scheme::ParameterRange)| {
            parameters.get(name).is_none_or(|values| range.admits(values))
        };
        offer.parameters.iter().all(fits)
    };
    for sign in [1.0, -1.0, 0.0] {
        let signs = vec![sign; dimensions];
        let found =
            parameters_within(offer, dimensions, &Parameters::new(), &signs).map_err(|stop| stop.to_string())?;
        if takes(&found) {
            return Ok(found);
        }
    }
    Err("its ranges of parameters leave no generic value".to_owned())
}

fn constants(parameters: &Parameters, varying: &[String]) -> std::collections::BTreeMap<String, Parameter> {
    let parameter = |name: &str, values: &Vec<f64>| match values.as_slice() {
        [value] if name != "velocity" => Parameter::Scalar(*value),
        values => Parameter::Vector(values.to_vec()),
    };
    let constant = parameters.iter().filter(|(name, _)| !varying.contains(name));
    constant.map(|(name, values)| (name.clone(), parameter(name, values))).collect()
}

/// Nothing varies, and then each parameter that may.
fn coefficient_choices(offer: &Offer) -> Vec<Vec<String>> {
    std::iter::once(Vec::new()).chain(offer.coefficients.iter().map(|name| vec![name.clone()])).collect()
}

/// Periodic in all directions; and every pair of other kinds at the two ends of x, where the other directions are periodic if they can be.
fn boundaries(offer: &Offer, dimensions: usize) -> Vec<Vec<[SideKinds; 2]>> {
    let same = |kind: BoundaryKind| [SideKinds::Same(kind), SideKinds::Same(kind)];
    let periodic = offer.boundaries.contains(&BoundaryKind::Periodic);
    let others: Vec<BoundaryKind> =
        offer.boundaries.iter().copied().filter(|kind| *kind != BoundaryKind::Periodic).collect();
    let mut found = Vec::new();
    if periodic {
        found.push(vec![same(BoundaryKind::Periodic); dimensions]);
    }
    for lower in &others {
        for upper in &others {
            let rest = if periodic { BoundaryKind::Periodic } else { *lower };
            let mut sides = vec![same(rest); dimensions];
            sides[0] = [SideKinds::Same(*lower), SideKinds::Same(*upper)];
            found.push(sides);
        }
    }
    found
}

fn grid(offer: &Offer, dimensions: usize, kind: GridKind) -> Grid {
    let rule = offer.cells;
    let multiple = rule.multiple.max(1);
    let cells: Vec<usize> =
        CELLS[..dimensions].iter().map(|cells| cells.max(&rule.minimum).div_ceil(multiple) * multiple).collect();
    let upper: Vec<f64> = (0..dimensions).map(|axis| LOWER[axis] + LENGTH[axis]).collect();
    let uniform = Grid::uniform(&cells, &LOWER[..dimensions], &upper);
    // Cells that differ by a third at most, and ends where they were.
    let bent = |axis: usize, index: usize| {
        let s = index as f64 / cells[axis] as f64;
        LOWER[axis] + LENGTH[axis] * (s + 0.05 * (std::f64::consts::TAU * s).sin())
    };
    let edges = |axis: usize| (0..=cells[axis]).map(|index| bent(axis, index)).collect::<Vec<f64>>();
    let along: Vec<Vec<f64>> = (0..dimensions).map(edges).collect();
    match kind {
        GridKind::Uniform => uniform,
        GridKind::Stretched => Grid { edges: Some(along), ..uniform },
        GridKind::Mapped => Grid { vertices: Some(crate::studies::layout::spread(&along)), ..uniform },
    }
}
