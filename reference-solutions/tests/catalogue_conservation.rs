//! Weak solutions conserve: what a domain holds changes by what flows through its ends alone.
//!
//! Trusted: the integral form of the conservation laws. A shock at the wrong place or speed satisfies the differential
//! equation everywhere else, and is seen here only. It also shows that averages are split at the jumps.

use gridassay_reference::problem::{Problem, Quantity};

/// Fluxes of Burgers, shallow water and Euler in one dimension.
fn flux(problem: &Problem, state: &[f64]) -> Vec<f64> {
    let parameter = |name: &str| problem.parameters()[name][0];
    match problem.equation() {
        "burgers" => vec![0.5 * state[0] * state[0]],
        "shallow_water" => {
            let (depth, discharge) = (state[0], state[1]);
            let velocity = if depth > 0.0 { discharge / depth } else { 0.0 };
            vec![discharge, discharge * velocity + 0.5 * parameter("gravity") * depth * depth]
        }
        "euler" => {
            let (density, momentum, energy) = (state[0], state[1], state[2]);
            let velocity = momentum / density;
            let pressure = (parameter("gamma") - 1.0) * (energy - 0.5 * momentum * velocity);
            vec![momentum, momentum * velocity + pressure, (energy + pressure) * velocity]
        }
        other => panic!("no flux of {other} is written here"),
    }
}

fn values(problem: &Problem, time: f64, x: f64) -> Vec<f64> {
    let value = |field| {
        let mut out = [0.0];
        problem.evaluate(Quantity::Value(field), time, &[&[x]], &mut out).expect("a value");
        out[0]
    };
    (0..problem.fields().len()).map(value).collect()
}

/// Means over `cells` equal cells, added up.
fn content(problem: &Problem, time: f64, cells: usize) -> Vec<f64> {
    let (lower, upper) = (problem.lower()[0], problem.upper()[0]);
    let edge = |index: usize| lower + (upper - lower) * index as f64 / cells as f64;
    let (low, high): (Vec<f64>, Vec<f64>) = (0..cells).map(|cell| (edge(cell), edge(cell + 1))).unzip();
    let total = |field| {
        let mut out = vec![0.0; cells];
        problem.average(Quantity::Value(field), time, &[&low], &[&high], &mut out).expect("an average");
        out.iter().sum::<f64>() * (upper - lower) / cells as f64
    };
    (0..problem.fields().len()).map(total).collect()
}

#[test]
fn weak_solutions_conserve() {
    let names = Problem::catalogue().iter().map(|name| Problem::named(name).expect("it is checked elsewhere"));
    let weak: Vec<Problem> = names
        .filter(|problem| problem.is_weak() && problem.dimensions() == 1 && problem.equation() != "advection")
        .collect();
    assert!(weak.len() >= 9, "shocks, rarefactions, dam breaks and shock tubes: {}", weak.len());
    for problem in weak {
        let (start, end) = (problem.start_time(), problem.final_time());
        let early = start + 0.4 * (end - start);
        for cells in [1, 37] {
            let (before, after) = (content(&problem, early, cells), content(&problem, end, cells));
            let (lower, upper) = (values(&problem, end, problem.lower()[0]), values(&problem, end, problem.upper()[0]));
            let (inflow, outflow) = (flux(&problem, &lower), flux(&problem, &upper));
            for field in 0..before.len() {
                let expected = (end - early) * (inflow[field] - outflow[field]);
                let change = after[field] - before[field];
                // Sums of 37 cells of rounded means; fans are integrated to 1e-14 of the largest value.
                let through = (end - early) * (inflow[field].abs() + outflow[field].abs());
                let scale = before[field].abs() + after[field].abs() + through;
                let name = problem.name();
                assert!(
                    (change - expected).abs() <= 1e-13 * scale,
                    "{name}, field {field}: {change} against {expected}"
                );
            }
        }
    }
}

/// The orders that theory gives on weak solutions.
#[test]
fn expected_orders_of_weak_solutions() {
    let order = |name: &str, formal: f64| Problem::named(name).unwrap().weak().unwrap().expected_order(formal);
    assert_eq!(order("square-wave", 1.0), 0.5);
    assert_eq!(order("square-wave", 2.0), 2.0 / 3.0);
    assert_eq!(order("rotating-cone", 1.0), 1.0);
    assert_eq!(order("burgers-shock", 3.0), 1.0);
    assert_eq!(Problem::named("toro-1").unwrap().expected_order(), Some(0.5));
    assert_eq!(Problem::named("travelling-sine").unwrap().expected_order(), None);
}
