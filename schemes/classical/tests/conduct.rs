//! What the contract asks of every scheme, tried on all of them: names, refusals, and answers that depend on the
//! question alone.

mod common;

use gridassay_classical::{names, scheme};
use gridassay_scheme::{
    Advance, BoundaryKind, Case, Fields, Grid, NoCallbacks, Offer, Operation, Parameter, Scheme, SchemeError,
};

/// A periodic case within the offer, on a grid that is not square; none where the offer takes no periodic boundaries
/// or does not advance.
fn case_within(offer: &Offer) -> Option<Case> {
    if !offer.boundaries.contains(&BoundaryKind::Periodic) || !offer.has(Operation::Advance) {
        return None;
    }
    let dimensions = offer.dimensions[0];
    let mut case = common::periodic(&offer.equation, 1, &[]);
    case.dimensions = dimensions;
    case.grid =
        Grid::uniform(&[12, 10, 8][..dimensions], &[0.3, -0.2, 0.0][..dimensions], &[2.0, 0.7, 1.1][..dimensions]);
    case.boundaries = vec![case.boundaries[0].clone(); dimensions];
    let velocity = if offer.equation == "acoustics" { vec![0.0] } else { vec![1.1, -0.6, 0.4][..dimensions].to_vec() };
    let viscosity =
        if offer.parameters.get("viscosity").is_some_and(|range| range.admits(&[0.0])) { 0.0 } else { 0.01 };
    let scalars =
        [("diffusivity", 0.01), ("viscosity", viscosity), ("gamma", 1.3), ("density", 1.2), ("sound_speed", 0.8)];
    case.parameters = scalars.map(|(name, value)| (name.to_owned(), Parameter::Scalar(value))).into();
    case.parameters.insert("velocity".to_owned(), Parameter::Vector(velocity));
    Some(case)
}

/// A smooth positive state with more energy than motion, which every equation takes.
fn state(fields: usize, values: usize, shift: f64) -> Fields {
    let mean = [1.0, 0.5, 4.0];
    let wave = |f: usize, j: usize| mean[f] + 0.2 * (0.7 * j as f64 + f as f64 + shift).sin();
    let field = |f: usize| (0..values).map(|j| wave(f, j)).collect();
    (0..fields).map(field).collect()
}

fn run(
    scheme: &mut dyn Scheme,
    (mut state, mut earlier): (Fields, Vec<Fields>),
    groups: &[usize],
) -> (Fields, Vec<Fields>) {
    let mut done = 0;
    for steps in groups {
        // A step that is a power of two keeps the times of both groupings equal to the last bit.
        let (time, step) = (done as f64 / 512.0, 1.0 / 512.0);
        let request = Advance { time, step, steps: *steps, state: &mut state, earlier: &mut earlier };
        scheme.advance(request, &mut NoCallbacks).expect("a step");
        done += steps;
    }
    (state, earlier)
}

fn start(offer: &Offer, case: &Case, scheme: &mut dyn Scheme) -> (Fields, Vec<Fields>) {
    let nodes = scheme.prepare(case, &mut NoCallbacks).expect("within the offers");
    let points = nodes.map_or(1, |nodes| nodes.offsets.len());
    let values = case.grid.cells.iter().product::<usize>() * points;
    let fields = offer.fields.as_ref().map_or(1, Vec::len);
    (state(fields, values, 0.3), vec![state(fields, values, 0.2); offer.levels - 1])
}

#[test]
fn names_are_unique_and_in_kebab_case() {
    let mut all = names();
    assert!(all.iter().all(|name| name.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-')));
    let count = all.len();
    all.sort_unstable();
    all.dedup();
    assert_eq!(all.len(), count);
    assert!(all.iter().all(|name| scheme(name).expect("listed").describe().name == *name));
    assert!(scheme("no-such-scheme").is_none());
}

#[test]
fn answers_depend_on_the_question_alone() {
    for name in names() {
        let mut scheme = scheme(name).unwrap();
        for offer in scheme.describe().offers {
            let Some(case) = case_within(&offer) else { continue };
            let begin = start(&offer, &case, scheme.as_mut());
            let at_once = run(scheme.as_mut(), begin.clone(), &[6]);
            assert_eq!(at_once, run(scheme.as_mut(), begin.clone(), &[2, 1, 3]), "{name}: grouping of steps");
            let mut other = case.clone();
            other.grid.upper[0] = 3.1;
            scheme.prepare(&other, &mut NoCallbacks).unwrap();
            run(scheme.as_mut(), begin.clone(), &[1]);
            scheme.prepare(&case, &mut NoCallbacks).unwrap();
            assert_eq!(at_once, run(scheme.as_mut(), begin, &[6]), "{name}: after another case");
        }
    }
}

#[test]
fn the_mean_of_every_field_is_kept_and_a_uniform_state_stays() {
    for name in names() {
        let mut scheme = scheme(name).unwrap();
        for offer in scheme.describe().offers {
            let Some(case) = case_within(&offer) else { continue };
            let begin = start(&offer, &case, scheme.as_mut());
            let weights = scheme.prepare(&case, &mut NoCallbacks).unwrap().map_or(vec![1.0], |nodes| nodes.weights);
            // Two levels carry two means, of which the scheme's own mode mixes both.
            if offer.levels == 1 {
                let total = |u: &[f64]| -> f64 { u.iter().zip(weights.iter().cycle()).map(|(u, w)| u * w).sum() };
                let (end, _) = run(scheme.as_mut(), begin.clone(), &[20]);
                for (before, after) in begin.0.iter().zip(&end) {
                    let size: f64 = before.iter().map(|u| u.abs()).sum();
                    let drift = (total(after) - total(before)).abs();
                    // A rounding of each value in each of 20 steps.
                    assert!(drift <= 20.0 * f64::EPSILON * size, "{name}: {drift:e}");
                }
            }
            let uniform = |fields: &Fields| -> Fields { fields.iter().map(|u| vec![u[0]; u.len()]).collect() };
            let flat = (uniform(&begin.0), vec![uniform(&begin.0); offer.levels - 1]);
            let (end, _) = run(scheme.as_mut(), flat.clone(), &[20]);
            assert_eq!(end, flat.0, "{name}: uniform state");
        }
    }
}

#[test]
fn the_rate_is_what_short_steps_make() {
    for name in names() {
        let mut scheme = scheme(name).unwrap();
        for offer in scheme.describe().offers.into_iter().filter(|offer| offer.has(Operation::Rate)) {
            let Some(case) = case_within(&offer) else { continue };
            let (begin, _) = start(&offer, &case, scheme.as_mut());
            let rate = scheme.rate(0.0, &begin, &mut NoCallbacks).unwrap();
            let step = 1e-7;
            let mut state = begin.clone();
            let request = Advance { time: 0.0, step, steps: 1, state: &mut state, earlier: &mut [] };
            scheme.advance(request, &mut NoCallbacks).unwrap();
            let size = rate.iter().flatten().fold(0.0_f64, |most, r| most.max(r.abs()));
            for ((new, old), rate) in state.iter().flatten().zip(begin.iter().flatten()).zip(rate.iter().flatten()) {
                // Second differences over so short a step, and the rounding of the state divided by the step.
                let allowed = 1e-4 * size + 10.0 * f64::EPSILON * old.abs() / step;
                assert!(((new - old) / step - rate).abs() <= allowed, "{name}: {} and {rate}", (new - old) / step);
            }
        }
    }
}

#[test]
fn the_smallest_grid_that_is_offered_is_taken() {
    for name in names() {
        let mut scheme = scheme(name).unwrap();
        for offer in scheme.describe().offers {
            let Some(mut case) = case_within(&offer) else { continue };
            case.grid.cells.fill(offer.cells.minimum);
            let begin = start(&offer, &case, scheme.as_mut());
            let (end, _) = run(scheme.as_mut(), begin, &[3]);
            assert!(end.iter().flatten().all(|u| u.is_finite()), "{name}");
            if offer.cells.minimum > 1 {
                case.grid.cells.fill(offer.cells.minimum - 1);
                let refused = scheme.prepare(&case, &mut NoCallbacks);
                assert!(matches!(refused, Err(SchemeError::NotOffered(_))), "{name}: {refused:?}");
            }
        }
    }
}

#[test]
fn what_is_not_offered_is_refused() {
    for name in names() {
        let mut scheme = scheme(name).unwrap();
        let advance = |scheme: &mut dyn Scheme| {
            let mut state = vec![vec![1.0; 12]];
            let request = Advance { time: 0.0, step: 0.01, steps: 1, state: &mut state, earlier: &mut [] };
            scheme.advance(request, &mut NoCallbacks)
        };
        assert_eq!(advance(scheme.as_mut()), Err(SchemeError::NotPrepared), "{name}");
        let refused = scheme.prepare(&common::periodic("magnetism", 12, &[]), &mut NoCallbacks);
        assert!(matches!(refused, Err(SchemeError::NotOffered(_))), "{name}: {refused:?}");
    }
}
