//! Choices of a refinement study that hide mistakes: told beside its numbers, with what to choose instead.

use gridassay_reference::problem::{BoundaryKind, Problem};

use super::ladder::Rung;
use crate::claims::{OrderRequest, StepSize};

/// One sentence for each trap that a request and its ladder fall into.
pub(super) fn notes(request: &OrderRequest, rungs: &[Rung]) -> Vec<String> {
    let problem = &request.problem;
    let step = if problem.is_steady() { None } else { dyadic_step(request) };
    let time = if problem.is_steady() { None } else { half_periods(problem, request.final_time) };
    let grid = square_cells(problem, rungs);
    time.into_iter().chain(step).chain(grid).chain(unit_parameters(problem)).collect()
}

/// A wave that has gone a multiple of half a domain cannot tell the sign of its velocity.
fn half_periods(problem: &Problem, final_time: f64) -> Option<String> {
    let velocity = problem.parameters().get("velocity")?;
    let travelled = |axis: usize| {
        let extent = problem.upper()[axis] - problem.lower()[axis];
        let periodic = problem.boundaries()[axis][0] == BoundaryKind::Periodic;
        let halves = 2.0 * velocity.get(axis)? * (final_time - problem.start_time()) / extent;
        // Times are written with a few digits: what is within 1e-6 of a half period is meant to be one.
        (periodic && halves.abs() > 0.5 && (halves - halves.round()).abs() < 1e-6).then_some(halves / 2.0)
    };
    let (axis, periods) = (0..problem.dimensions()).find_map(|axis| Some((axis, travelled(axis)?)))?;
    let direction = ["x", "y", "z"][axis];
    let better = problem.start_time() + (final_time - problem.start_time()) * 0.913;
    Some(format!(
        "at t = {final_time} the solution has gone {:.1} times through the domain in {direction}, where velocities of either sign look alike; a generic final time such as {better:.3} tells them apart",
        periods.abs()
    ))
}

/// Products with a dyadic fraction are exact in single precision too.
fn dyadic_step(request: &OrderRequest) -> Option<String> {
    let (name, number) = match request.step? {
        StepSize::Courant(number) => ("Courant", number),
        StepSize::DiffusionNumber(number) => ("diffusion", number),
        StepSize::Step(_) => return None,
    };
    // Multiples of 1/64 below 16: what a person writes as a round number.
    let dyadic = (64.0 * number).fract() == 0.0;
    let better = 0.93 * number;
    dyadic.then(|| {
        format!("the {name} number {number} is a dyadic fraction, which hides constants that were cut to single precision; {better:.3} would show them")
    })
}

/// Equal spacings hide that two of them were exchanged.
fn square_cells(problem: &Problem, rungs: &[Rung]) -> Option<String> {
    let width = |rung: &Rung, axis: usize| (problem.upper()[axis] - problem.lower()[axis]) / rung.cells[axis] as f64;
    let alike = |rung: &Rung, a: usize, b: usize| (width(rung, a) / width(rung, b) - 1.0).abs() < 1e-9;
    let pairs = [(0, 1), (0, 2), (1, 2)].into_iter().filter(|(_, b)| *b < problem.dimensions());
    let (a, b) = pairs.into_iter().find(|(a, b)| !rungs.is_empty() && rungs.iter().all(|rung| alike(rung, *a, *b)))?;
    let (a, b) = (["x", "y", "z"][a], ["x", "y", "z"][b]);
    Some(format!(
        "the cells are as wide in {a} as in {b} on every level, which hides spacings that were exchanged; give levels such as [40, 50]"
    ))
}

/// A parameter of one hides its powers, gamma = 1.4 hides a value that was written into the code.
fn unit_parameters(problem: &Problem) -> Option<String> {
    let known = problem.parameters().iter();
    let unit: Vec<String> = known
        .filter(|(_, values)| values.iter().any(|value| value.abs() == 1.0))
        .map(|(name, _)| format!("`{name}`"))
        .collect();
    let gamma = problem.parameters().get("gamma").is_some_and(|gamma| gamma == &[1.4]);
    match (unit.is_empty(), gamma) {
        (true, false) => None,
        (true, true) => {
            Some("`gamma` is 1.4, which hides a 1.4 that was written into the code; 1.37 would show it".to_owned())
        }
        (false, _) => Some(format!(
            "{} is 1, which hides a factor that is missing or a wrong power of it; a value such as 1.3 would show it",
            unit.join(" and ")
        )),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::Refinement;

    fn request(problem: &str, step: Option<StepSize>, final_time: Option<f64>) -> OrderRequest {
        let problem = Problem::named(problem).unwrap();
        OrderRequest {
            velocity_is_open: false,
            cells: None,
            step,
            refine: Refinement::SpaceTime,
            step_power: 1.0,
            final_time: final_time.unwrap_or(problem.final_time()),
            operation: None,
            problem,
        }
    }

    fn rung(cells: &[usize]) -> Rung {
        Rung { cells: cells.to_vec(), step: None, steps: None }
    }

    #[test]
    fn the_harness_own_choices_fall_into_none() {
        for problem in ["travelling-sine", "oblique-sine", "decaying-sine", "manufactured-poisson-2d"] {
            let request = request(problem, Some(StepSize::Courant(0.7)), None);
            let cells: Vec<usize> = crate::claims::in_proportion(24, request.problem.dimensions());
            assert_eq!(notes(&request, &[rung(&cells)]), Vec::<String>::new(), "{problem}");
        }
    }

    #[test]
    fn half_a_period_is_told_and_a_hair_beside_it_is_not() {
        let plain = request("travelling-sine", None, None).problem;
        let extent = plain.upper()[0] - plain.lower()[0];
        let velocity = plain.parameters()["velocity"][0];
        let at = |halves: f64| Some(plain.start_time() + 0.5 * halves * extent / velocity.abs());
        for halves in [1.0, 2.0, 3.0] {
            let told = notes(&request("travelling-sine", None, at(halves)), &[]);
            assert!(told.len() == 1 && told[0].contains("velocities of either sign look alike"), "{told:?}");
        }
        assert!(notes(&request("travelling-sine", None, at(1.01)), &[]).is_empty());
    }

    #[test]
    fn a_dyadic_number_and_a_square_grid_are_told() {
        let told = |courant: f64| notes(&request("travelling-sine", Some(StepSize::Courant(courant)), None), &[]).len();
        assert_eq!([0.5, 0.25, 1.0, 0.625].map(told), [1; 4]);
        assert_eq!([0.7, 0.4, 0.3, 0.9].map(told), [0; 4]);
        let plane = request("oblique-sine", None, None);
        let [x, y] = [0, 1].map(|axis| plane.problem.upper()[axis] - plane.problem.lower()[axis]);
        let proportion = |n: f64| [n as usize, (n * y / x).round() as usize];
        let square = [40.0, 80.0].map(proportion);
        let equal = (y / x * 40.0).fract() == 0.0;
        let told = notes(&plane, &square.map(|cells| rung(&cells)));
        assert_eq!(told.iter().any(|note| note.contains("exchanged")), equal, "{told:?}");
    }
}
