//! Trusted: closed-form symbols of textbook schemes. The stencil is checked against them, the transform against the stencil.

use super::*;
use crate::analysis::compare::{agree, all_agree};
use crate::analysis::matrix::Matrix;
use num_complex::Complex64;

const EPS: f64 = f64::EPSILON;

/// Applies a stencil to unit impulses on a periodic grid: the slow reference for what a scheme would answer.
fn respond(stencil: &Stencil, cells: &[usize], at: &[usize]) -> ImpulseResponses {
    let (grid, m) = (Grid::new(cells).unwrap(), stencil.components());
    let n = grid.count();
    let mut responses = vec![0.0; m * m * n];
    for (offset, block) in stencil.neighbours() {
        let mut cell = [0_i64; 3];
        for (d, &a) in at.iter().enumerate() {
            cell[d] = a as i64 - offset[d];
        }
        let cell = grid.flat(cell);
        for (pair, c) in block.iter().enumerate() {
            responses[pair * n + cell] += c;
        }
    }
    ImpulseResponses::new(grid, m, at, responses).unwrap()
}

fn lax_wendroff(c: f64) -> Stencil {
    Stencil::scalar_1d(&[(-1, 0.5 * c * (1.0 + c)), (0, 1.0 - c * c), (1, -0.5 * c * (1.0 - c))])
}

fn lax_wendroff_symbol(c: f64, theta: f64) -> Complex64 {
    // Lax & Wendroff 1960; Hirsch, Numerical Computation of Internal and External Flows, vol. 1, ch. 8.
    Complex64::new(1.0 - c * c * (1.0 - theta.cos()), -c * theta.sin())
}

#[test]
fn one_component_on_any_number_of_cells() {
    for n in [5, 64, 97, 1000] {
        let responses = respond(&lax_wendroff(0.7), &[n], &[n / 3]);
        let symbol = SampledSymbol::from_responses(&responses);
        let expected: Vec<Complex64> = (0..n).map(|k| lax_wendroff_symbol(0.7, symbol.grid().theta(k)[0])).collect();
        // The transform's error is eps log2(n) times the sum of |c|, here about 1.3; a prime n goes through three transforms.
        all_agree(symbol.entry(0, 0), &expected, 4.0 * EPS * (n as f64).log2()).unwrap();
        agree(symbol.entry(0, 0)[0], Complex64::ONE, 2.0 * EPS).unwrap();
    }
}

#[test]
fn wavenumbers_run_over_the_half_open_interval() {
    let even: Vec<f64> = (0..4).map(|k| Grid::new(&[4]).unwrap().theta(k)[0]).collect();
    let pi = std::f64::consts::PI;
    all_agree(&even, &[0.0, pi / 2.0, pi, -pi / 2.0], 0.0).unwrap();
    let odd = Grid::new(&[3]).unwrap();
    agree(odd.theta(2)[0], -2.0 * pi / 3.0, EPS).unwrap();
}

#[test]
fn derivative_is_that_of_the_closed_form() {
    let c = 0.6;
    let responses = respond(&lax_wendroff(c), &[48], &[7]);
    let derivative = SampledSymbol::derivative(&responses, 0);
    let stencil = Stencil::from_responses(&responses, 0.0).unwrap();
    for k in 0..48 {
        let theta = derivative.grid().theta(k)[0];
        let expected = Complex64::new(-c * c * theta.sin(), -c * theta.cos());
        agree(derivative.entry(0, 0)[k], expected, 30.0 * EPS).unwrap();
        agree(stencil.derivative([theta, 0.0, 0.0], 0).at(0, 0), expected, 8.0 * EPS).unwrap();
        let jet = stencil.jet(theta);
        agree(jet.first, expected, 8.0 * EPS).unwrap();
        agree(jet.second, Complex64::new(-c * c * theta.cos(), c * theta.sin()), 8.0 * EPS).unwrap();
    }
}

#[test]
fn the_stencil_comes_back_as_it_was_built() {
    // Beam-Warming leans to one side, the last is a pure shift by three cells across the seam of the grid.
    let c = 0.8;
    let beam_warming = [(-2, 0.5 * c * (c - 1.0)), (-1, c * (2.0 - c)), (0, 0.5 * (1.0 - c) * (2.0 - c))];
    for neighbours in [beam_warming.to_vec(), vec![(-3, 1.0)], vec![(2, 0.5), (4, 0.5)], vec![(0, 1.0)]] {
        for at in [0, 1, 11] {
            let built = Stencil::scalar_1d(&neighbours);
            let found = Stencil::from_responses(&respond(&built, &[12], &[at]), 0.0).unwrap();
            assert_eq!(found, built);
        }
    }
}

#[test]
fn a_response_that_fills_the_grid_has_no_stencil_until_it_decays() {
    // Implicit Euler for diffusion with r = 1: the response is a geometric sequence of ratio q, q + 1/q = 3, on the infinite line.
    let q: f64 = (3.0 - 5.0_f64.sqrt()) / 2.0;
    let response = |n: usize| -> ImpulseResponses {
        let one = |j: usize| q.powi(j as i32) / 5.0_f64.sqrt();
        // On a periodic grid the images of the impulse add up; the next ones are below 1e-16 for n of 40 and more.
        let r = (0..n).map(|j| one(j) + one(n - j) * if j == 0 { 2.0 } else { 1.0 } + one(n + j)).collect();
        ImpulseResponses::new(Grid::new(&[n]).unwrap(), 1, &[0], r).unwrap()
    };
    assert!(Stencil::from_responses(&response(64), 1e-17).is_none());
    let wide = response(256);
    let stencil = Stencil::from_responses(&wide, 1e-17).unwrap();
    for theta in [0.1, 1.0, 2.5, 3.1] {
        let expected = Complex64::from(1.0 / (1.0 + 2.0 * (1.0 - f64::cos(theta))));
        agree(stencil.symbol([theta, 0.0, 0.0]).at(0, 0), expected, 10.0 * EPS + stencil.dropped()).unwrap();
    }
}

#[test]
fn two_components_are_a_block() {
    // Leapfrog as a two-level scheme, (new, old) from (old, older): [[-2 i c sin theta, 1], [1, 0]].
    let c = 0.5;
    let side = |s: f64| vec![s * c, 0.0, 0.0, 0.0];
    let neighbours = [([-1, 0, 0], side(1.0)), ([0, 0, 0], vec![0.0, 1.0, 1.0, 0.0]), ([1, 0, 0], side(-1.0))];
    assert!(Stencil::from_neighbours(1, 2, &[([0, 0, 0], vec![0.0; 3])]).is_none());
    let built = Stencil::from_neighbours(1, 2, &neighbours).unwrap();
    let responses = respond(&built, &[20], &[9]);
    assert_eq!(Stencil::from_responses(&responses, 0.0).unwrap(), built);
    let symbol = SampledSymbol::from_responses(&responses);
    for k in 0..20 {
        let theta = symbol.grid().theta(k);
        let corner = Complex64::new(0.0, -2.0 * c * theta[0].sin());
        let expected = Matrix::from_rows(2, vec![corner, Complex64::ONE, Complex64::ONE, Complex64::ZERO]).unwrap();
        all_agree(symbol.block(k).entries(), expected.entries(), 10.0 * EPS).unwrap();
        all_agree(built.symbol(theta).entries(), expected.entries(), 10.0 * EPS).unwrap();
    }
}

#[test]
fn two_and_three_dimensions_keep_their_directions_apart() {
    // Upwind with different Courant numbers in each direction, on a grid with different counts, so that exchanged directions show.
    let (cx, cy, cz) = (0.2, 0.3, 0.4);
    let neighbours = [([0, 0, 0], 1.0 - cx - cy - cz), ([-1, 0, 0], cx), ([0, 1, 0], cy), ([0, 0, -1], cz)]
        .map(|(d, c)| (d, vec![c]));
    let exact = |t: [f64; 3]| {
        let shift = |c: f64, x: f64| c * (Complex64::cis(x) - 1.0);
        1.0 + shift(cx, -t[0]) + shift(cy, t[1]) + shift(cz, -t[2])
    };
    let built = Stencil::from_neighbours(3, 1, &neighbours).unwrap();
    let responses = respond(&built, &[6, 35, 9], &[1, 33, 4]);
    let symbol = SampledSymbol::from_responses(&responses);
    let found = Stencil::from_responses(&responses, 0.0).unwrap();
    let dy = SampledSymbol::derivative(&responses, 1);
    for k in 0..symbol.grid().count() {
        let theta = symbol.grid().theta(k);
        agree(symbol.entry(0, 0)[k], exact(theta), 20.0 * EPS).unwrap();
        agree(found.symbol(theta).at(0, 0), exact(theta), 8.0 * EPS).unwrap();
        agree(dy.entry(0, 0)[k], Complex64::I * cy * Complex64::cis(theta[1]), 60.0 * EPS).unwrap();
    }
    // The same without z, where the centre keeps its coefficient: the symbol is lower by cz everywhere.
    let flat = Stencil::from_neighbours(2, 1, &neighbours[..3]).unwrap();
    let symbol = SampledSymbol::from_responses(&respond(&flat, &[40, 12], &[39, 0]));
    for k in 0..480 {
        agree(symbol.entry(0, 0)[k], exact(symbol.grid().theta(k)) - cz, 20.0 * EPS).unwrap();
    }
}

#[test]
fn wrong_arrays_are_refused() {
    let grid = || Grid::new(&[3, 2]).unwrap();
    assert!(matches!(Grid::new(&[]), Err(ResponseError::Dimensions { .. })));
    assert!(matches!(Grid::new(&[4, 0]), Err(ResponseError::Dimensions { .. })));
    assert!(matches!(ImpulseResponses::new(grid(), 1, &[0, 0], vec![0.0; 5]), Err(ResponseError::Length { .. })));
    assert!(matches!(ImpulseResponses::new(grid(), 0, &[0, 0], vec![]), Err(ResponseError::Length { .. })));
    assert!(matches!(
        ImpulseResponses::new(grid(), 1, &[0, 2], vec![0.0; 6]),
        Err(ResponseError::ImpulseOutside { .. })
    ));
    let mut r = vec![0.0; 24];
    r[13] = f64::NAN;
    let error = ImpulseResponses::new(grid(), 2, &[0, 0], r).unwrap_err();
    assert!(matches!(error, ResponseError::NotFinite { output: 1, input: 0, cell: 1, .. }));
}
