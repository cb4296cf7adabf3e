//! The case that a scheme is asked to prepare, from a problem or from an equation on a periodic grid.

use gridassay_reference::equation::Equation;
use gridassay_reference::problem::{BoundaryKind as ProblemBoundary, Problem};
use gridassay_scheme::{ArrayEncoding, BoundaryKind, Callback, Case, Grid, Offer, Parameter, SideKinds};

use crate::record::Parameters;

/// The case of `problem` on a uniform grid of `cells`.
pub fn of_problem(problem: &Problem, cells: &[usize]) -> Case {
    let mut steady = Vec::new();
    if problem.source_is_steady() {
        steady.push(Callback::Source);
    }
    if problem.boundary_is_steady() {
        steady.push(Callback::Boundary);
    }
    let side = |kind: ProblemBoundary| SideKinds::Same(boundary_kind(kind));
    Case {
        equation: problem.equation().to_owned(),
        dimensions: problem.dimensions(),
        parameters: constants(problem.parameters()),
        coefficients: problem.coefficients(),
        grid: Grid::uniform(cells, problem.lower(), problem.upper()),
        boundaries: problem.boundaries().iter().map(|[lower, upper]| [side(*lower), side(*upper)]).collect(),
        source: problem.has_source(),
        steady,
        arrays: ArrayEncoding::Text,
    }
}

/// A periodic case of `equation` without source on a uniform grid from `lower` to `upper`.
pub fn periodic(equation: &str, parameters: &Parameters, grid: Grid) -> Case {
    let side = SideKinds::Same(BoundaryKind::Periodic);
    Case {
        equation: equation.to_owned(),
        dimensions: grid.dimensions(),
        parameters: constants(parameters),
        coefficients: Vec::new(),
        boundaries: vec![[side.clone(), side]; grid.dimensions()],
        grid,
        source: false,
        steady: Vec::new(),
        arrays: ArrayEncoding::Text,
    }
}

/// The kinds of boundary that occur in a case.
pub fn kinds(case: &Case) -> Vec<BoundaryKind> {
    let mut kinds = Vec::new();
    for side in case.boundaries.iter().flatten() {
        let SideKinds::Same(kind) = side else { continue };
        if !kinds.contains(kind) {
            kinds.push(*kind);
        }
    }
    kinds
}

/// The names of the fields that an offer carries: its own, or the equation's; those of the problem where it defines the equation itself.
pub fn fields(offer: &Offer, dimensions: usize, problem: Option<&Problem>) -> Vec<String> {
    let of_equation = || match Equation::named(&offer.equation) {
        Ok(equation) => equation.fields(dimensions),
        Err(_) => problem.map(|problem| problem.fields().to_vec()).unwrap_or_default(),
    };
    offer.fields.clone().unwrap_or_else(of_equation)
}

/// The harness's own kind for a problem's.
pub fn boundary_kind(kind: ProblemBoundary) -> BoundaryKind {
    match kind {
        ProblemBoundary::Periodic => BoundaryKind::Periodic,
        ProblemBoundary::Value => BoundaryKind::Value,
        ProblemBoundary::Gradient => BoundaryKind::Gradient,
        ProblemBoundary::None => BoundaryKind::None,
    }
}

/// A velocity has a component for each dimension, every other parameter of the contract's equations is a number.
fn constants(parameters: &Parameters) -> std::collections::BTreeMap<String, Parameter> {
    let parameter = |name: &str, values: &Vec<f64>| match values.as_slice() {
        [value] if name != "velocity" => Parameter::Scalar(*value),
        values => Parameter::Vector(values.to_vec()),
    };
    parameters.iter().map(|(name, values)| (name.clone(), parameter(name, values))).collect()
}
