//! Trusted: closed-form amplification factors in two dimensions and of acoustics; for discontinuous Galerkin an
//! independent construction in Legendre polynomials from the weak form, compared through the traces of powers, which
//! do not depend on the basis.

mod common;
#[path = "common/waves.rs"]
mod waves;

use std::f64::consts::TAU;

use common::periodic;
use gridassay_classical::scheme;
use gridassay_scheme::{Grid, NoCallbacks, Parameter, Scheme, SideKinds};
use num_complex::Complex64;
use waves::{complex_step, fourier_mode};

const TOLERANCE: f64 = 1e-13;

fn assert_close(a: Complex64, b: Complex64, what: &str) {
    assert!((a - b).norm() <= TOLERANCE, "{what}: {a} and {b}");
}

/// The amplification matrix of a one-dimensional scheme with several values a cell: one field each, or several nodes
/// in one field.
fn matrix(
    scheme: &mut dyn Scheme,
    step: f64,
    mode: usize,
    cells: usize,
    fields: usize,
    nodes: usize,
) -> Vec<Vec<Complex64>> {
    let wave = fourier_mode(mode, cells);
    let size = fields * nodes;
    let mut columns = Vec::new();
    for column in 0..size {
        let field = |f: usize| -> Vec<Complex64> {
            let value = |k: usize| if f * nodes + k % nodes == column { wave[k / nodes] } else { 0.0.into() };
            (0..cells * nodes).map(value).collect()
        };
        let state: Vec<_> = (0..fields).map(field).collect();
        let (new, _) = complex_step(scheme, step, &state, &[]);
        columns.push((0..size).map(|row| new[row / nodes][row % nodes]).collect::<Vec<_>>());
    }
    (0..size).map(|row| (0..size).map(|column| columns[column][row]).collect()).collect()
}

fn product(a: &[Vec<Complex64>], b: &[Vec<Complex64>]) -> Vec<Vec<Complex64>> {
    let n = a.len();
    (0..n).map(|i| (0..n).map(|j| (0..n).map(|k| a[i][k] * b[k][j]).sum()).collect()).collect()
}

fn traces_of_powers(a: &[Vec<Complex64>]) -> Vec<Complex64> {
    let mut power = a.to_vec();
    let mut traces = Vec::new();
    for _ in 0..a.len() {
        traces.push((0..a.len()).map(|k| power[k][k]).sum());
        power = product(&power, a);
    }
    traces
}

fn plane(equation: &str, cells: [usize; 2], parameters: &[(&str, Parameter)]) -> gridassay_scheme::Case {
    let mut case = periodic(equation, 1, &[]);
    case.dimensions = 2;
    case.grid = Grid::uniform(&cells, &[0.3, -0.2], &[2.0, 0.7]);
    case.boundaries = vec![case.boundaries[0].clone(), case.boundaries[0].clone()];
    case.parameters = parameters.iter().map(|(name, value)| ((*name).to_owned(), value.clone())).collect();
    assert!(case.boundaries.iter().flatten().all(|side| matches!(side, SideKinds::Same(_))));
    case
}

#[test]
fn plane_schemes_have_their_closed_forms_in_all_quadrants() {
    let cells = [12, 10];
    let (hx, hy) = (1.7 / 12.0, 0.9 / 10.0);
    for (a, b) in [(1.1, 0.6), (-1.1, 0.6), (1.1, -0.6), (-1.1, -0.6)] {
        for name in ["upwind-2d", "lax-wendroff-2d", "diffusion-2d"] {
            let nu = 0.07;
            let step = 0.04;
            let (cx, cy, rx, ry) = (a * step / hx, b * step / hy, nu * step / (hx * hx), nu * step / (hy * hy));
            let (equation, parameters) = if name == "diffusion-2d" {
                ("diffusion", vec![("diffusivity", Parameter::Scalar(nu))])
            } else {
                ("advection", vec![("velocity", Parameter::Vector(vec![a, b]))])
            };
            let mut scheme = scheme(name).unwrap();
            scheme.prepare(&plane(equation, cells, &parameters), &mut NoCallbacks).unwrap();
            for (mx, my) in (0..12).flat_map(|mx| (0..10).map(move |my| (mx, my))) {
                let (p, q) = (TAU * mx as f64 / 12.0, TAU * my as f64 / 10.0);
                let (x, y) = (fourier_mode(mx, 12), fourier_mode(my, 10));
                let wave: Vec<Complex64> = y.iter().flat_map(|y| x.iter().map(move |x| x * y)).collect();
                let (new, _) = complex_step(scheme.as_mut(), step, std::slice::from_ref(&wave), &[]);
                let i = Complex64::i();
                let g = match name {
                    "upwind-2d" => {
                        1.0 - cx.abs() * (1.0 - p.cos())
                            - i * cx * p.sin()
                            - cy.abs() * (1.0 - q.cos())
                            - i * cy * q.sin()
                    }
                    "lax-wendroff-2d" => {
                        1.0 - i * (cx * p.sin() + cy * q.sin())
                            - cx * cx * (1.0 - p.cos())
                            - cy * cy * (1.0 - q.cos())
                            - cx * cy * p.sin() * q.sin()
                    }
                    _ => (1.0 - 2.0 * rx * (1.0 - p.cos()) - 2.0 * ry * (1.0 - q.cos())).into(),
                };
                for (new, old) in new[0].iter().zip(&wave) {
                    assert_close(*new, old * g, &format!("{name}, velocity ({a}, {b}), mode ({mx}, {my})"));
                }
            }
        }
    }
}

#[test]
fn volume_schemes_have_their_closed_forms_in_all_octants() {
    let (cells, velocity, nu, step) = ([6, 5, 4], [1.1, 0.6, 0.4], 0.03, 0.03);
    let (lower, upper) = ([0.3, -0.2, 0.0], [2.0, 0.7, 1.1]);
    for octant in 0..8 {
        let velocity: Vec<f64> =
            (0..3).map(|axis| if octant >> axis & 1 == 1 { -velocity[axis] } else { velocity[axis] }).collect();
        for (name, equation) in [("upwind-3d", "advection"), ("diffusion-3d", "diffusion")] {
            let mut case = plane(equation, [1, 1], &[]);
            case.dimensions = 3;
            case.grid = Grid::uniform(&cells, &lower, &upper);
            case.boundaries.push(case.boundaries[0].clone());
            case.parameters.insert("velocity".to_owned(), Parameter::Vector(velocity.clone()));
            case.parameters.insert("diffusivity".to_owned(), Parameter::Scalar(nu));
            let mut scheme = scheme(name).unwrap();
            scheme.prepare(&case, &mut NoCallbacks).unwrap();
            for mode in 0..cells.iter().product() {
                let modes = [mode % 6, mode / 6 % 5, mode / 30];
                let waves = [0, 1, 2].map(|axis| fourier_mode(modes[axis], cells[axis]));
                let wave: Vec<Complex64> = (0..120)
                    .map(|place| waves[0][place % 6] * waves[1][place / 6 % 5] * waves[2][place / 30])
                    .collect();
                let (new, _) = complex_step(scheme.as_mut(), step, std::slice::from_ref(&wave), &[]);
                let lost: Complex64 = (0..3)
                    .map(|axis| {
                        let theta = TAU * modes[axis] as f64 / cells[axis] as f64;
                        let h = case.grid.spacing(axis);
                        let (c, r) = (velocity[axis] * step / h, nu * step / (h * h));
                        let upwind = c.abs() * (1.0 - theta.cos()) + Complex64::i() * c * theta.sin();
                        if equation == "advection" { upwind } else { (2.0 * r * (1.0 - theta.cos())).into() }
                    })
                    .sum();
                for (new, old) in new[0].iter().zip(&wave) {
                    assert_close(*new, old * (1.0 - lost), &format!("{name}, octant {octant}, modes {modes:?}"));
                }
            }
        }
    }
}

#[test]
fn acoustics_upwind_is_scalar_upwind_along_the_characteristics() {
    let (cells, density, sound_speed) = (32, 1.3, 0.7);
    for mean_flow in [0.0, 0.2, -0.2, 1.1] {
        let mut scheme = scheme("acoustics-upwind").unwrap();
        let parameters = [("density", density), ("sound_speed", sound_speed), ("velocity", mean_flow)];
        scheme.prepare(&periodic("acoustics", cells, &parameters), &mut NoCallbacks).unwrap();
        let step = 0.02;
        for mode in 0..cells {
            let theta = TAU * mode as f64 / cells as f64;
            let g = matrix(scheme.as_mut(), step, mode, cells, 2, 1);
            for sign in [1.0, -1.0] {
                let c = (mean_flow + sign * sound_speed) * step * cells as f64 / 1.7;
                let factor = 1.0 - c.abs() * (1.0 - theta.cos()) - Complex64::i() * c * theta.sin();
                let vector = [1.0, sign / (density * sound_speed)];
                for row in 0..2 {
                    let image = g[row][0] * vector[0] + g[row][1] * vector[1];
                    assert_close(image, factor * vector[row], &format!("mean flow {mean_flow}, mode {mode}"));
                }
            }
        }
    }
}

#[test]
fn the_staggered_scheme_has_its_trace_and_keeps_areas() {
    let (cells, sound_speed) = (32, 0.7);
    for courant in [0.1, 0.5, 0.9, 1.0] {
        let mut scheme = scheme("acoustics-staggered").unwrap();
        let parameters = [("density", 1.3), ("sound_speed", sound_speed), ("velocity", 0.0)];
        scheme.prepare(&periodic("acoustics", cells, &parameters), &mut NoCallbacks).unwrap();
        let step = courant * 1.7 / cells as f64 / sound_speed;
        for mode in 0..cells {
            let half = 0.5 * TAU * mode as f64 / cells as f64;
            let g = matrix(scheme.as_mut(), step, mode, cells, 2, 1);
            assert_close(g[0][0] + g[1][1], (2.0 - 4.0 * (courant * half.sin()).powi(2)).into(), "trace");
            assert_close(g[0][0] * g[1][1] - g[0][1] * g[1][0], 1.0.into(), "determinant");
        }
    }
}

/// dt times the semi-discrete matrix in Legendre polynomials, from the weak form with upwind fluxes, velocity of sign
/// `sign`.
fn legendre_matrix(degree: usize, courant: f64, sign: f64, theta: f64) -> Vec<Vec<Complex64>> {
    let parity = |m: usize| if m.is_multiple_of(2) { 1.0 } else { -1.0 };
    let entry = |i: usize, j: usize| -> Complex64 {
        let stiffness = if i > j && (i - j) % 2 == 1 { 2.0 } else { 0.0 };
        let shift = Complex64::from_polar(1.0, -sign * theta);
        // Values of the polynomials at the outflow end are 1 (a > 0) or the parity (a < 0), and the other way at the
        // inflow end.
        let at_upper_end = |_: f64| 1.0;
        let at_lower_end = |parity: f64| parity;
        let outflow = |p: f64| if sign > 0.0 { at_upper_end(p) } else { at_lower_end(p) };
        let inflow = |p: f64| if sign > 0.0 { at_lower_end(p) } else { at_upper_end(p) };
        let faces = -outflow(parity(i)) * outflow(parity(j)) + shift * inflow(parity(i)) * outflow(parity(j));
        courant * (2 * i + 1) as f64 * (sign * stiffness + faces)
    };
    (0..=degree).map(|i| (0..=degree).map(|j| entry(i, j)).collect()).collect()
}

#[test]
fn discontinuous_galerkin_agrees_with_a_modal_construction() {
    let cells = 16;
    for (name, degree, stages) in [("dg-p1", 1, 2), ("dg-p2", 2, 3), ("dg-p3", 3, 4)] {
        for sign in [1.0, -1.0] {
            let mut scheme = scheme(name).unwrap();
            scheme.prepare(&periodic("advection", cells, &[("velocity", 1.3 * sign)]), &mut NoCallbacks).unwrap();
            let courant = 0.12;
            let step = courant * 1.7 / cells as f64 / 1.3;
            for mode in 0..cells {
                let theta = TAU * mode as f64 / cells as f64;
                let measured = traces_of_powers(&matrix(scheme.as_mut(), step, mode, cells, 1, degree + 1));
                let z = legendre_matrix(degree, courant, sign, theta);
                // The Taylor polynomial of the exponential.
                let identity = |i: usize, j: usize| Complex64::from(if i == j { 1.0 } else { 0.0 });
                let mut term: Vec<Vec<_>> =
                    (0..=degree).map(|i| (0..=degree).map(|j| identity(i, j)).collect()).collect();
                let mut g = term.clone();
                for m in 1..=stages {
                    term = product(&term, &z);
                    for (i, j) in (0..=degree).flat_map(|i| (0..=degree).map(move |j| (i, j))) {
                        term[i][j] /= m as f64;
                        g[i][j] += term[i][j];
                    }
                }
                for (a, b) in measured.into_iter().zip(traces_of_powers(&g)) {
                    assert_close(a, b, &format!("{name}, sign {sign}, mode {mode}"));
                }
            }
        }
    }
}
