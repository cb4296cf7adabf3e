//! Integrals over the domain that a problem names: the scheme's value against the exact one.
//!
//! Both are summed by the same rule, the integrand at each value times the measure that the value stands for: the rule's own error then
//! cancels, and what is left is the scheme's.

use std::collections::BTreeMap;

use gridassay_reference::problem::Problem;
use gridassay_scheme::Fields;

use super::level::Answer;
use crate::record::{FunctionalValue, finite};

/// By name: the value and the error of each functional. Empty where the fields do not sit at the same positions or the scheme does not
/// carry all fields of the problem.
pub(super) fn values(problem: &Problem, time: f64, answer: &Answer) -> BTreeMap<String, FunctionalValue> {
    let layouts = &answer.layout.fields;
    let all = problem.fields().iter().map(|field| answer.names.iter().position(|name| name == field));
    let Some(order) = all.collect::<Option<Vec<usize>>>() else { return BTreeMap::new() };
    if layouts.iter().any(|layout| layout.axes != layouts[0].axes) {
        return BTreeMap::new();
    }
    let points = layouts[0].points();
    let points: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
    let measures = layouts[0].measures();
    let integral = |index: usize, state: &Fields| -> Option<(f64, f64)> {
        let fields: Vec<&[f64]> = order.iter().map(|field| state[*field].as_slice()).collect();
        let mut integrand = vec![0.0; measures.len()];
        problem.integrand(index, time, &points, &fields, &mut integrand).ok()?;
        let terms = integrand.iter().zip(&measures).map(|(value, measure)| value * measure);
        Some(terms.fold((0.0, 0.0), |(sum, size), term| (sum + term, size + term.abs())))
    };
    let one = |(index, name): (usize, String)| {
        let (value, size) = integral(index, &answer.state)?;
        let (exact, _) = integral(index, &answer.exact)?;
        let (shaken, _) = integral(index, &answer.shaken)?;
        // Summing n terms loses at most n eps of their size, and a change in the last bit of each moves it by about eps.
        let rounding = f64::EPSILON * size * (measures.len() as f64).sqrt();
        let floor = (shaken - value).abs() + rounding;
        Some((
            name,
            FunctionalValue { value: finite(value), exact, error: finite((value - exact).abs()), floor: finite(floor) },
        ))
    };
    problem.functionals().iter().map(|functional| functional.name().to_owned()).enumerate().filter_map(one).collect()
}
