//! Where the error is: the strips along the sides of a bounded domain, and what lies between them.
//!
//! A closure of lower order shows in the strip at its side first. A strip is [`STRIP`] cells wide, so that it holds the values that a
//! boundary formula sets or reads, and its norms are taken over its own measure. Where strips meet, a value belongs to both.

use std::collections::BTreeMap;

use gridassay_reference::problem::{BoundaryKind, Problem};
use gridassay_scheme::Fields;

use super::level::{Answer, norms_of};
use crate::record::{INTERIOR, Norms, STRIP};
use crate::studies::layout::FieldLayout;

/// The fewest cells between two strips that are worth the name of an interior.
const LEAST_INSIDE: usize = 4;

/// By place (`interior`, `x_lower`, `x_upper`, ...), then by field: the norms of `a` - `b`. Empty where the domain has no sides or a grid is
/// too coarse for strips.
pub(super) fn norms(
    problem: &Problem,
    cells: &[usize],
    answer: &Answer,
    a: &Fields,
    b: &Fields,
) -> BTreeMap<String, BTreeMap<String, Norms>> {
    let bounded: Vec<usize> =
        (0..problem.dimensions()).filter(|axis| problem.boundaries()[*axis][0] != BoundaryKind::Periodic).collect();
    if bounded.is_empty() || bounded.iter().any(|axis| cells[*axis] < 2 * STRIP + LEAST_INSIDE) {
        return BTreeMap::new();
    }
    let mut places: Vec<(String, Place)> = vec![(INTERIOR.to_owned(), Place::Inside(bounded.clone()))];
    for axis in bounded {
        for (upper, end) in [(false, "lower"), (true, "upper")] {
            places.push((format!("{}_{end}", ["x", "y", "z"][axis]), Place::Strip { axis, upper }));
        }
    }
    let at = |place: &Place| {
        let each = answer.names.iter().zip(&answer.layout.fields).zip(a.iter().zip(b));
        each.map(|((name, layout), (a, b))| (name.clone(), place.norms(layout, problem, cells, a, b))).collect()
    };
    places.iter().map(|(name, place)| (name.clone(), at(place))).collect()
}

enum Place {
    /// Beyond the strips of all these directions.
    Inside(Vec<usize>),
    /// The strip at one end of a direction.
    Strip { axis: usize, upper: bool },
}

impl Place {
    fn norms(&self, layout: &FieldLayout, problem: &Problem, cells: &[usize], a: &[f64], b: &[f64]) -> Norms {
        let ends = |axis: usize| strip_ends(axis, problem, cells);
        let holds: Vec<usize> = match self {
            Self::Strip { axis, upper } => {
                let [low, high] = ends(*axis);
                indices(layout, |along| if *upper { along[*axis] > high } else { along[*axis] < low })
            }
            Self::Inside(axes) => {
                let ends: Vec<[f64; 2]> = axes.iter().map(|axis| ends(*axis)).collect();
                indices(layout, |along| {
                    axes.iter().zip(&ends).all(|(axis, [low, high])| (*low..=*high).contains(&along[*axis]))
                })
            }
        };
        let measures = layout.measures();
        let difference: Vec<f64> = holds.iter().map(|&index| a[index] - b[index]).collect();
        norms_of(&difference, &holds.iter().map(|&index| measures[index]).collect::<Vec<_>>())
    }
}

/// The indices of the values of a field whose coordinates pass a test.
fn indices(layout: &FieldLayout, test: impl Fn(&[f64]) -> bool) -> Vec<usize> {
    let points = layout.points();
    let passes = |index: &usize| test(&points.iter().map(|axis| axis[*index]).collect::<Vec<_>>());
    (0..layout.len()).filter(passes).collect()
}

/// Where the strips of a direction end: the edge after the second cell from either side, widened by rounding so that a node on it counts
/// as inside.
fn strip_ends(axis: usize, problem: &Problem, cells: &[usize]) -> [f64; 2] {
    let (lower, upper) = (problem.lower()[axis], problem.upper()[axis]);
    let width = STRIP as f64 * (upper - lower) / cells[axis] as f64;
    let slack = 1e-9 * width;
    [lower + width - slack, upper - width + slack]
}

#[cfg(test)]
mod tests {
    //! Trusted: errors whose norms on a strip are plain arithmetic.
    use gridassay_scheme::{Offer, Operation, Placement, Position};

    use super::*;
    use crate::studies::case;
    use crate::studies::layout::Layout;

    fn answer(problem: &Problem, cells: &[usize], position: Position) -> Answer {
        let case = case::of_problem(problem, cells);
        let mut offer = Offer::new(problem.equation(), &[Operation::Advance]);
        offer.placement = Placement::Same(position);
        let names = vec!["u".to_owned()];
        let layout = Layout::new(&offer, &case, &names, None).unwrap();
        let zeros: Fields = layout.lengths().iter().map(|n| vec![0.0; *n]).collect();
        let (state, exact, shaken) = (zeros.clone(), zeros.clone(), zeros);
        Answer { names, operation: Operation::Advance, layout, state, exact, seconds: None, shaken }
    }

    #[test]
    fn an_error_at_one_side_is_found_there_and_nowhere_else() {
        let problem = Problem::named("moving-boundary-values").unwrap();
        for (position, last_of_strip) in [(Position::Centre, 1), (Position::Node, 1)] {
            for spoilt in [0, last_of_strip, last_of_strip + 1] {
                let answer = answer(&problem, &[20], position);
                let mut state = answer.state.clone();
                state[0][spoilt] = 0.5;
                let norms = norms(&problem, &[20], &answer, &state, &answer.exact);
                let largest = |place: &str| norms[place]["u"].linf.unwrap();
                let at_lower = if spoilt <= last_of_strip { 0.5 } else { 0.0 };
                assert_eq!((largest("x_lower"), largest("x_upper")), (at_lower, 0.0), "{position:?} {spoilt}");
                assert_eq!(largest("interior"), 0.5 - at_lower, "{position:?} {spoilt}");
            }
        }
    }

    #[test]
    fn the_norms_of_a_strip_are_over_its_own_measure() {
        let problem = Problem::named("moving-boundary-values").unwrap();
        let answer = answer(&problem, &[20], Position::Centre);
        let ones: Fields = vec![vec![1.0; 20]];
        let norms = norms(&problem, &[20], &answer, &ones, &answer.exact);
        assert_eq!(norms.keys().collect::<Vec<_>>(), ["interior", "x_lower", "x_upper"]);
        for place in norms.values() {
            assert!((place["u"].l1.unwrap() - 1.0).abs() < 1e-14 && (place["u"].l2.unwrap() - 1.0).abs() < 1e-14);
        }
    }

    #[test]
    fn periodic_domains_and_coarse_grids_have_no_strips() {
        let periodic = Problem::named("travelling-sine").unwrap();
        let answer_of = |problem: &Problem, cells: usize| {
            let answer = answer(problem, &[cells], Position::Centre);
            norms(problem, &[cells], &answer, &answer.state, &answer.exact).len()
        };
        assert_eq!(answer_of(&periodic, 64), 0);
        let bounded = Problem::named("moving-boundary-values").unwrap();
        assert_eq!((answer_of(&bounded, 7), answer_of(&bounded, 8)), (0, 3));
    }
}
