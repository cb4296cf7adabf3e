//! Trusted: the accuracy tables of Jiang & Shu 1996, J. Comput. Phys. 126:202-228 (numbers from memory, three
//! digits). With a node on the boundary, RK4 with dt = 0.8 h^(5/4), the last step shortened, epsilon as in
//! [`Weno5::as_in_the_tables`], and the mean taken over N + 1 nodes (both ends counted), our computation must give
//! every printed digit.
//!
//! [`Weno5::as_in_the_tables`]: gridassay_classical::finite_volume::weno::Weno5::as_in_the_tables

mod common;

use gridassay_classical::scheme;
use gridassay_scheme::{Advance, Grid, NoCallbacks};

/// Largest and mean error at time 1 on [-1, 1].
fn errors(name: &str, cells: usize, start: fn(f64) -> f64) -> [f64; 2] {
    let mut scheme = scheme(name).unwrap();
    let mut case = common::periodic("advection", cells, &[("velocity", 1.0)]);
    case.grid = Grid::uniform(&[cells], &[-1.0], &[1.0]);
    scheme.prepare(&case, &mut NoCallbacks).unwrap();
    let x = case.grid.nodes(0, 1, true);
    let mut state = vec![x.iter().map(|x| start(*x)).collect::<Vec<_>>()];
    let step = 0.8 * case.grid.spacing(0).powf(1.25);
    let whole = (1.0 / step).floor() as usize;
    let request = Advance { time: 0.0, step, steps: whole, state: &mut state, earlier: &mut [] };
    scheme.advance(request, &mut NoCallbacks).unwrap();
    let time = whole as f64 * step;
    let request = Advance { time, step: 1.0 - time, steps: 1, state: &mut state, earlier: &mut [] };
    scheme.advance(request, &mut NoCallbacks).unwrap();
    let error: Vec<f64> = x.iter().zip(&state[0]).map(|(x, u)| (u - start(x - 1.0)).abs()).collect();
    assert!(error.iter().all(|e| e.is_finite()));
    let both_ends = error.iter().sum::<f64>() + error[0];
    [error.iter().copied().fold(0.0, f64::max), both_ends / (cells + 1) as f64]
}

fn check(name: &str, coarsest: usize, start: fn(f64) -> f64, largest: [f64; 6], mean: [f64; 6]) {
    for level in 0..6 {
        let cells = coarsest << level;
        let computed = errors(name, cells, start);
        for (computed, printed) in computed.into_iter().zip([largest[level], mean[level]]) {
            assert_eq!(format!("{computed:.2e}"), format!("{printed:.2e}"), "{name}, {cells} cells");
        }
    }
}

fn sine(x: f64) -> f64 {
    (std::f64::consts::PI * x).sin()
}

fn sine_to_the_fourth(x: f64) -> f64 {
    sine(x).powi(4)
}

#[test]
fn weno5_on_the_sine() {
    let largest = [2.98e-2, 1.45e-3, 4.58e-5, 1.48e-6, 4.41e-8, 1.35e-9];
    let mean = [1.60e-2, 7.41e-4, 2.22e-5, 6.91e-7, 2.17e-8, 6.79e-10];
    check("weno5-jiang-shu-rk4", 10, sine, largest, mean);
}

#[test]
fn the_linear_twin_on_the_sine() {
    let largest = [4.98e-3, 1.60e-4, 5.03e-6, 1.57e-7, 4.91e-9, 1.53e-10];
    let mean = [3.07e-3, 9.92e-5, 3.14e-6, 9.90e-8, 3.11e-9, 9.73e-11];
    check("upwind5-rk4", 10, sine, largest, mean);
}

#[test]
fn weno5_on_the_sine_to_the_fourth() {
    let largest = [1.08e-1, 8.90e-3, 1.80e-3, 1.22e-4, 4.37e-6, 9.79e-8];
    let mean = [4.91e-2, 3.64e-3, 5.00e-4, 2.17e-5, 6.17e-7, 1.57e-8];
    check("weno5-jiang-shu-rk4", 20, sine_to_the_fourth, largest, mean);
}
