//! Small measurements that expose a flaw against its right twin. The harness has its own, better ones; these make
//! sure that the table is true.

use gridassay_flawed::Flaw;
use gridassay_scheme::{Advance, BoundaryKind, Case, Fields, NoCallbacks, Offer, Operation, Parameter, Scheme};

use super::problems::{Problem, problems};
use super::{differences, errors_after, last_slope, run, steady_errors};

const LEVELS: [usize; 3] = [24, 48, 96];
/// By how much an order has to fall below the twin's.
const SHORTFALL: f64 = 0.3;

/// Every problem of the twin's offers, at all levels.
fn ladders(flaw: &Flaw) -> Vec<[Problem; 3]> {
    let mut all = Vec::new();
    for offer in flaw.right_twin().describe().offers {
        let [a, b, c] = LEVELS.map(|cells| problems(flaw.twin, &offer, cells));
        all.extend(a.into_iter().zip(b).zip(c).map(|((a, b), c)| [a, b, c]));
    }
    all
}

/// Whether the order in space, or in space and time together, falls short of the twin's, in the mean or in the
/// largest error.
pub fn order_space(flaw: &Flaw) -> bool {
    let slopes = |scheme: &mut dyn Scheme, ladder: &[Problem; 3]| -> [f64; 2] {
        let errors = ladder.each_ref().map(|problem| {
            if problem.steady { steady_errors(scheme, problem) } else { errors_after(scheme, problem, problem.steps) }
        });
        [0, 1].map(|norm| last_slope(errors.map(|e| e[norm])))
    };
    falls_short(flaw, &ladders(flaw), slopes)
}

/// Whether the order in time alone, from differences between runs on one grid, falls short of the twin's.
pub fn order_time(flaw: &Flaw) -> bool {
    let slopes = |scheme: &mut dyn Scheme, ladder: &[Problem; 3]| -> [f64; 2] {
        let problem = &ladder[0];
        if problem.steady {
            return [0.0; 2];
        }
        let runs = [1, 2, 4, 8].map(|factor| run(scheme, problem, factor * problem.steps));
        let between = [0, 1, 2].map(|k| differences(&runs[k], &runs[k + 1]));
        [0, 1].map(|norm| last_slope(between.map(|e| e[norm])))
    };
    falls_short(flaw, &ladders(flaw), slopes)
}

fn falls_short(
    flaw: &Flaw,
    ladders: &[[Problem; 3]],
    slopes: impl Fn(&mut dyn Scheme, &[Problem; 3]) -> [f64; 2],
) -> bool {
    ladders.iter().any(|ladder| {
        let wrong = slopes(flaw.scheme().as_mut(), ladder);
        let right = slopes(flaw.right_twin().as_mut(), ladder);
        wrong.iter().zip(right).any(|(wrong, right)| *wrong < right - SHORTFALL)
    })
}

/// Periodic cases without source of the twin's offers, with velocities of all signs, and their offers.
fn periodic_cases(flaw: &Flaw, cells: usize) -> Vec<(Offer, Case)> {
    let mut all = Vec::new();
    for offer in flaw.right_twin().describe().offers {
        if !offer.has(Operation::Advance) || !offer.boundaries.contains(&BoundaryKind::Periodic) {
            continue;
        }
        for problem in problems(flaw.twin, &offer, cells) {
            let mut case = problem.case;
            let dimensions = case.dimensions;
            case.boundaries = vec![[BoundaryKind::Periodic; 2].map(gridassay_scheme::SideKinds::Same); dimensions];
            case.source = false;
            all.push((offer.clone(), case));
        }
    }
    all
}

/// A number in [-0.5, 0.5) that looks random, from a place.
fn noise(place: usize) -> f64 {
    ((place as f64 * 12.9898 + 1.0).sin() * 43_758.545_3).fract().abs() - 0.5
}

/// A state about a base that the equation takes: noise of that size on top.
fn noisy(offer: &Offer, case: &Case, scheme: &mut dyn Scheme, size: f64) -> (Fields, Fields) {
    let points =
        scheme.prepare(case, &mut NoCallbacks).expect("within the offers").map_or(1, |nodes| nodes.offsets.len());
    let values = case.grid.cells.iter().product::<usize>() * points;
    let base: &[f64] = if offer.equation == "euler" { &[1.0, 0.3, 2.6] } else { &[0.0; 3] };
    let fields = offer.fields.as_ref().map_or(1, Vec::len);
    let field = |f: usize, size: f64| (0..values).map(|j| base[f] + size * noise(j + 977 * f)).collect();
    ((0..fields).map(|f| field(f, size)).collect(), (0..fields).map(|f| field(f, 0.0)).collect())
}

fn take(scheme: &mut dyn Scheme, offer: &Offer, start: &Fields, step: f64, groups: &[usize]) -> Fields {
    let (mut state, mut earlier) = (start.clone(), vec![start.clone(); offer.levels - 1]);
    let mut time = 0.0;
    for steps in groups {
        let request = Advance { time, step, steps: *steps, state: &mut state, earlier: &mut earlier };
        scheme.advance(request, &mut NoCallbacks).expect("steps");
        time += step * *steps as f64;
    }
    state
}

/// Steps at which a wave crosses the given part of a cell, and heat that part of its square.
fn steps_at(case: &Case, numbers: &[f64]) -> Vec<f64> {
    let h = case.grid.spacing(0).min(case.grid.spacing(case.dimensions - 1));
    let largest = |name: &str| case.vector(name).map_or(0.0, |v| v.iter().fold(0.0_f64, |a, b| a.max(b.abs())));
    let flow = if case.equation == "diffusion" { 0.0 } else { largest("velocity") };
    let speed = match case.equation.as_str() {
        "acoustics" => flow + largest("sound_speed"),
        "euler" => 2.2,
        "burgers" => 1.0,
        _ => flow,
    };
    let viscous = if case.equation == "advection" { 0.0 } else { largest("diffusivity").max(largest("viscosity")) };
    numbers.iter().map(|number| number / (speed / h + viscous / (h * h))).collect()
}

/// Whether one or a few steps of noise differ from the twin's beyond rounding: the amplification factor differs.
pub fn modes(flaw: &Flaw) -> bool {
    modes_where(flaw, |_| true)
}

/// The same in those periodic cases that `keep` keeps and may simplify.
pub fn modes_where(flaw: &Flaw, keep: impl Fn(&mut Case) -> bool) -> bool {
    let mut cases = periodic_cases(flaw, 16);
    cases.retain_mut(|(_, case)| keep(case));
    cases.iter().any(|(offer, case)| {
        let (mut wrong, mut right) = (flaw.scheme(), flaw.right_twin());
        let (start, _) = noisy(offer, case, right.as_mut(), 1.0);
        noisy(offer, case, wrong.as_mut(), 1.0);
        steps_at(case, &[0.1, 0.45]).into_iter().any(|step| {
            let of = |scheme: &mut dyn Scheme| take(scheme, offer, &start, step, &[3]);
            differences(&of(wrong.as_mut()), &of(right.as_mut()))[1] > 1e-10
        })
    })
}

/// Whether noise grows where the twin's does not.
pub fn stability(flaw: &Flaw) -> bool {
    let growth = |scheme: &mut dyn Scheme, (offer, case): &(Offer, Case), step: f64| {
        let size = if offer.equation == "euler" { 1e-6 } else { 1.0 };
        let (start, base) = noisy(offer, case, scheme, size);
        let end = take(scheme, offer, &start, step, &[600]);
        differences(&end, &base)[1] / differences(&start, &base)[1]
    };
    periodic_cases(flaw, 16).iter().any(|case| {
        steps_at(&case.1, &[0.05, 0.1, 0.3, 0.45, 0.9, 1.5, 2.0]).into_iter().any(|step| {
            let right = growth(flaw.right_twin().as_mut(), case, step);
            let wrong = growth(flaw.scheme().as_mut(), case, step);
            right < 10.0 && (wrong > 1e3 || !wrong.is_finite())
        })
    })
}

/// Whether sums, bounds, the total variation or the mirror image are kept less well than by the twin.
pub fn invariants(flaw: &Flaw) -> bool {
    periodic_cases(flaw, 40).iter().filter(|(_, case)| case.dimensions == 1).any(|(offer, case)| {
        let wrong = violations(flaw.scheme().as_mut(), offer, case);
        let right = violations(flaw.right_twin().as_mut(), offer, case);
        wrong.iter().zip(right).any(|(wrong, right)| right < 1e-11 && (*wrong > 1e-7 || !wrong.is_finite()))
    })
}

/// Growth of the sum, of the total variation, and the difference between the mirrored run and the run's mirror image.
fn violations(scheme: &mut dyn Scheme, offer: &Offer, case: &Case) -> [f64; 3] {
    let nodes = scheme.prepare(case, &mut NoCallbacks).expect("within the offers");
    let weights = nodes.map_or(vec![1.0], |nodes| nodes.weights);
    let values = case.grid.cells[0] * weights.len();
    let fields = offer.fields.as_ref().map_or(1, Vec::len);
    let base: &[f64] = if offer.equation == "euler" { &[1.0, 0.3, 2.6] } else { &[0.0; 3] };
    // A spike, steps of several widths and a ramp, rough within cells of several values too.
    let shape = |j: usize| match j * 40 / values {
        3 => 0.8,
        8..10 => -0.5,
        15..20 => 0.4,
        25..38 => 0.05 * (j * 40 / values - 25) as f64,
        _ => 0.0,
    };
    let scale = if offer.equation == "euler" { 0.1 } else { 1.0 };
    let start: Fields =
        (0..fields).map(|f| (0..values).map(|j| base[f] + scale * (shape(j) + 0.02 * noise(j))).collect()).collect();
    let step = steps_at(case, &[0.4])[0] * if weights.len() > 1 { 0.3 } else { 1.0 };
    let total = |u: &[f64]| -> f64 { u.iter().zip(weights.iter().cycle()).map(|(u, w)| u * w).sum() };
    let variation = |u: &[f64]| -> f64 { (0..u.len()).map(|j| (u[j] - u[(j + 1) % u.len()]).abs()).sum() };
    let (mut sum, mut growth) = (0.0_f64, 0.0_f64);
    let mut state = start.clone();
    for _ in 0..60 {
        let next = take(scheme, offer, &state, step, &[1]);
        for (old, new) in state.iter().zip(&next) {
            sum = sum.max((total(new) - total(old)).abs());
            growth = growth.max(variation(new) - variation(old));
            if new.iter().any(|u| !u.is_finite()) {
                return [f64::INFINITY; 3];
            }
        }
        state = next;
    }
    [sum, growth, asymmetry(scheme, offer, case, &start, step)]
}

/// The largest difference between the mirror image of a run and the run from the mirror image.
fn asymmetry(scheme: &mut dyn Scheme, offer: &Offer, case: &Case, start: &Fields, step: f64) -> f64 {
    let odd = |f: usize| match offer.equation.as_str() {
        "burgers" => true,
        "euler" | "acoustics" => f == 1,
        _ => false,
    };
    // Values at centres are mirrored about the middle of the domain, values at nodes about a node: another period for
    // either.
    let mirror = |fields: &Fields| -> Fields {
        let one = |(f, u): (usize, &Vec<f64>)| u.iter().rev().map(|u| if odd(f) { -u } else { *u }).collect();
        fields.iter().enumerate().map(one).collect()
    };
    let forward = take(scheme, offer, start, step, &[10]);
    let mut mirrored_case = case.clone();
    if let Some(Parameter::Scalar(velocity)) = mirrored_case.parameters.get_mut("velocity") {
        *velocity = -*velocity;
    }
    scheme.prepare(&mirrored_case, &mut NoCallbacks).expect("within the offers");
    let backward = take(scheme, offer, &mirror(start), step, &[10]);
    differences(&mirror(&forward), &backward)[1]
}

/// Whether the answer depends on how steps are grouped or on what was asked before, and the twin's does not.
pub fn repeatability(flaw: &Flaw) -> bool {
    let depends = |scheme: &mut dyn Scheme, (offer, case): &(Offer, Case)| {
        let (start, _) = noisy(offer, case, scheme, 1.0);
        let step = steps_at(case, &[0.3])[0];
        let at_once = take(scheme, offer, &start, step, &[6]);
        let grouped = take(scheme, offer, &start, step, &[2, 1, 3]);
        let mut other = case.clone();
        other.grid.upper[0] += 1.3;
        scheme.prepare(&other, &mut NoCallbacks).expect("within the offers");
        take(scheme, offer, &start, 0.5 * step, &[7]);
        scheme.prepare(case, &mut NoCallbacks).expect("within the offers");
        differences(&at_once, &grouped)[1] > 1e-11 || take(scheme, offer, &start, step, &[6]) != at_once
    };
    // Every scheme meets the other case first, so that one which remembers it is found out.
    periodic_cases(flaw, 16).iter().any(|case| {
        !depends(flaw.right_twin().as_mut(), case) && {
            let mut scheme = flaw.scheme();
            depends(scheme.as_mut(), case) || {
                let fresh = fresh_answer(flaw, case);
                let (start, _) = noisy(&case.0, &case.1, scheme.as_mut(), 1.0);
                take(scheme.as_mut(), &case.0, &start, steps_at(&case.1, &[0.3])[0], &[6]) != fresh
            }
        }
    })
}

fn fresh_answer(flaw: &Flaw, (offer, case): &(Offer, Case)) -> Fields {
    let mut scheme = flaw.scheme();
    let mut other = case.clone();
    other.grid.upper[0] += 1.3;
    let (start, _) = noisy(offer, &other, scheme.as_mut(), 1.0);
    take(scheme.as_mut(), offer, &start, steps_at(case, &[0.2])[0], &[3]);
    scheme.prepare(case, &mut NoCallbacks).expect("within the offers");
    take(scheme.as_mut(), offer, &start, steps_at(case, &[0.3])[0], &[6])
}
