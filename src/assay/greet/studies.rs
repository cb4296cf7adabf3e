//! Which studies and problems of the catalogue a scheme can take.

use gridassay_reference::problem::Problem;
use gridassay_scheme::{BoundaryKind, Description, GridKind, Offer, Operation};

use super::Step;
use crate::record::Parameters;
use crate::studies::case;
use crate::studies::selection::{Need, choose};
use crate::studies::setting::generic_parameters;

/// The list, as steps.
pub fn list(description: &Description) -> Vec<Step> {
    let mut steps: Vec<Step> = description.offers.iter().flat_map(of_offer).collect();
    let fits: Vec<&str> = Problem::catalogue()
        .iter()
        .copied()
        .filter(|name| Problem::named(name).is_ok_and(|p| takes(description, &p)))
        .collect();
    steps.push(match fits.is_empty() {
        true => Step::note(
            "it can take no problem of the catalogue, so that no order of accuracy can be tried",
            "offer the boundaries and the source that they need (gridassay problems NAME shows them), or write a problem file",
        ),
        false => Step::good(format!("order: {}", fits.join(", "))),
    });
    steps
}

fn of_offer(offer: &Offer) -> Vec<Step> {
    let equation = &offer.equation;
    let periodic = offer.boundaries.contains(&BoundaryKind::Periodic);
    let mut steps = Vec::new();
    if periodic && offer.has(Operation::Advance) {
        if !generic_parameters(equation, 1).is_empty() {
            steps.push(Step::good(format!("modes and stability: of `{equation}`")));
        }
        steps.push(Step::good(format!("invariants: of `{equation}`")));
    }
    steps
}

/// Whether an offer takes the problem on a grid of its own rule.
fn takes(description: &Description, problem: &Problem) -> bool {
    let cells = |offer: &Offer| {
        let multiple = offer.cells.multiple.max(1);
        vec![32.max(offer.cells.minimum).div_ceil(multiple) * multiple; problem.dimensions()]
    };
    description.offers.iter().filter(|offer| offer.equation == problem.equation()).any(|offer| {
        let cells = cells(offer);
        let case = case::of_problem(problem, &cells);
        let parameters: &Parameters = problem.parameters();
        let need = Need {
            equation: &case.equation,
            dimensions: case.dimensions,
            operations: if problem.is_steady() { &[Operation::Solve] } else { &[Operation::Advance, Operation::March] },
            boundaries: &case::kinds(&case),
            source: case.source,
            coefficients: &case.coefficients,
            parameters,
            cells: &cells,
            grid: GridKind::Uniform,
        };
        choose(description, &need).is_ok()
    })
}
