//! Problems with exact solutions for every offer of the classical schemes, and runs on them.

pub mod measures;
pub mod problems;
pub mod solutions;

use gridassay_scheme::{Advance, Fields, Scheme};

use problems::Problem;

/// The mean and the largest error after `steps` steps from the problem's start to its end.
pub fn errors_after(scheme: &mut dyn Scheme, problem: &Problem, steps: usize) -> [f64; 2] {
    let end = run(scheme, problem, steps);
    differences(&end, &problem.state_at(problem.end, scheme, problem.end / steps as f64))
}

/// The state after `steps` steps to the problem's end.
pub fn run(scheme: &mut dyn Scheme, problem: &Problem, steps: usize) -> Fields {
    let mut harness = problem.harness(scheme);
    let step = problem.end / steps as f64;
    let mut state = problem.state_at(0.0, scheme, step);
    scheme.prepare(&problem.case, &mut harness).expect("within the offers");
    let levels = problem.offer.levels;
    let mut earlier: Vec<Fields> = (1..levels).map(|k| problem.state_at(-(k as f64) * step, scheme, step)).collect();
    scheme.prepare(&problem.case, &mut harness).expect("within the offers");
    let request = Advance { time: 0.0, step, steps, state: &mut state, earlier: &mut earlier };
    scheme.advance(request, &mut harness).expect("steps");
    state
}

/// The mean and the largest error of the steady solution.
pub fn steady_errors(scheme: &mut dyn Scheme, problem: &Problem) -> [f64; 2] {
    let mut harness = problem.harness(scheme);
    let exact = problem.state_at(0.0, scheme, 0.0);
    scheme.prepare(&problem.case, &mut harness).expect("within the offers");
    let solution = scheme.solve(&exact, &mut harness).expect("a steady solution");
    differences(&solution.state, &exact)
}

/// Mean and largest of the absolute differences, summed over the fields; a value that is not finite makes both
/// infinite.
pub fn differences(a: &[Vec<f64>], b: &[Vec<f64>]) -> [f64; 2] {
    let (mut mean, mut largest) = (0.0, 0.0);
    for (a, b) in a.iter().zip(b) {
        let all: Vec<f64> = a.iter().zip(b).map(|(a, b)| (a - b).abs()).collect();
        if all.iter().any(|d| !d.is_finite()) {
            return [f64::INFINITY; 2];
        }
        mean += all.iter().sum::<f64>() / all.len() as f64;
        largest += all.into_iter().fold(0.0, f64::max);
    }
    [mean, largest]
}

/// The order between the two finest of three levels; minus infinity where an error is not finite.
pub fn last_slope(errors: [f64; 3]) -> f64 {
    if errors.iter().all(|e| e.is_finite()) { (errors[1] / errors[2]).log2() } else { f64::NEG_INFINITY }
}
