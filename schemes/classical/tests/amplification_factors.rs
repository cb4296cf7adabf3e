//! Trusted: the closed-form amplification factors of the doc comments, derived by hand. Every linear scheme takes one
//! step of every Fourier mode on 64 cells, at four Courant numbers of either sign, and must give mode times factor
//! within 1e-13. On 1000 cells the modes are taken from the answer to an impulse, which costs one step.

mod common;
#[path = "common/waves.rs"]
mod waves;

use common::periodic;
use gridassay_classical::scheme;
use gridassay_scheme::{Advance, NoCallbacks, Scheme};
use num_complex::Complex64;
use waves::{complex_step, fourier_mode};

const CELLS: usize = 64;
const MANY_CELLS: usize = 1000;
const COURANT_NUMBERS: [f64; 4] = [0.1, 0.5, 0.9, 1.0];
/// Some ten roundings of numbers of size below 10 would give 2e-14; this is the bound that the project promises.
const TOLERANCE: f64 = 1e-13;

fn i() -> Complex64 {
    Complex64::i()
}

/// All G that a scheme may have at (c, r, theta): one a level.
type Factors = Box<dyn Fn(f64, f64, f64) -> Vec<Complex64>>;

fn one(factor: impl Fn(f64, f64, f64) -> Complex64 + 'static) -> Factors {
    Box::new(move |c, r, theta| vec![factor(c, r, theta)])
}

/// An upwind formula for c > 0; for c < 0 the mirror image, which is the complex conjugate.
fn upwinded(factor: impl Fn(f64, Complex64) -> Complex64 + 'static) -> Factors {
    one(move |c, _, theta| {
        let g = factor(c.abs(), Complex64::from_polar(1.0, -theta));
        if c < 0.0 { g.conj() } else { g }
    })
}

fn roots(a: Complex64, b: Complex64, c: Complex64) -> Vec<Complex64> {
    let root = (b * b - 4.0 * a * c).sqrt();
    vec![(-b + root) / (2.0 * a), (-b - root) / (2.0 * a)]
}

/// The Taylor polynomial of exp of that degree: the stability function of a Runge-Kutta method with as many stages as
/// its order.
fn taylor(degree: usize, z: Complex64) -> Complex64 {
    let mut term = Complex64::from(1.0);
    let mut sum = term;
    for m in 1..=degree {
        term *= z / m as f64;
        sum += term;
    }
    sum
}

/// Modified wavenumber k'h and (k''h)^2 of the central and compact differences.
fn symbols(space: &str, t: f64) -> (f64, f64) {
    let (s, c) = (
        (1..4).map(|m| (m as f64 * t).sin()).collect::<Vec<_>>(),
        (1..4).map(|m| (m as f64 * t).cos()).collect::<Vec<_>>(),
    );
    match space {
        "central2" => (s[0], 2.0 - 2.0 * c[0]),
        "central4" => ((8.0 * s[0] - s[1]) / 6.0, (15.0 - 16.0 * c[0] + c[1]) / 6.0),
        "central6" => ((45.0 * s[0] - 9.0 * s[1] + s[2]) / 30.0, 49.0 / 18.0 - 3.0 * c[0] + 0.3 * c[1] - c[2] / 45.0),
        "pade4" => (3.0 * s[0] / (2.0 + c[0]), 12.0 * (1.0 - c[0]) / (5.0 + c[0])),
        "compact6" => (
            (14.0 / 9.0 * s[0] + s[1] / 18.0) / (1.0 + 2.0 / 3.0 * c[0]),
            (24.0 / 11.0 * (1.0 - c[0]) + 3.0 / 22.0 * (1.0 - c[1])) / (1.0 + 4.0 / 11.0 * c[0]),
        ),
        other => panic!("no symbol for {other}"),
    }
}

fn upwind_symbol(space: &str, z: Complex64) -> Complex64 {
    let inverse = z.inv();
    match space {
        "upwind1" => 1.0 - z,
        "upwind2" => (3.0 - 4.0 * z + z * z) / 2.0,
        "upwind3" => (2.0 * inverse + 3.0 - 6.0 * z + z * z) / 6.0,
        "upwind5" => {
            (-3.0 * inverse * inverse + 30.0 * inverse + 20.0 - 60.0 * z + 15.0 * z * z - 2.0 * z * z * z) / 60.0
        }
        other => panic!("no symbol for {other}"),
    }
}

const STAGES: [(&str, usize); 5] = [("rk1", 1), ("rk2", 2), ("rk3", 3), ("ssprk3", 3), ("rk4", 4)];

fn advection_factors() -> Vec<(String, Factors)> {
    let lax_wendroff = |c: f64, t: f64| 1.0 - c * c * (1.0 - t.cos()) - i() * c * t.sin();
    let beam_warming =
        |c: f64, z: Complex64| 1.0 - c * (3.0 - 4.0 * z + z * z) / 2.0 + c * c * (1.0 - 2.0 * z + z * z) / 2.0;
    let mut all: Vec<(String, Factors)> = vec![
        ("upwind".into(), one(|c, _, t| 1.0 - c.abs() * (1.0 - t.cos()) - i() * c * t.sin())),
        ("lax-friedrichs".into(), one(|c, _, t| t.cos() - i() * c * t.sin())),
        ("lax-wendroff".into(), one(move |c, _, t| lax_wendroff(c, t))),
        ("maccormack".into(), one(move |c, _, t| lax_wendroff(c, t))),
        ("beam-warming".into(), upwinded(beam_warming)),
        ("fromm".into(), upwinded(move |c, z| 0.5 * (beam_warming(c, z) + lax_wendroff(c, -z.arg())))),
        ("leapfrog".into(), Box::new(|c, _, t| roots(1.0.into(), 2.0 * i() * c * t.sin(), (-1.0).into()))),
        (
            "crank-nicolson-advection".into(),
            one(|c, _, t| (1.0 - 0.5 * i() * c * t.sin()) / (1.0 + 0.5 * i() * c * t.sin())),
        ),
        ("implicit-euler-advection".into(), one(|c, _, t| 1.0 / (1.0 + i() * c * t.sin()))),
    ];
    for space in ["upwind1", "upwind2", "upwind3", "upwind5"] {
        for (method, stages) in STAGES {
            all.push((format!("{space}-{method}"), upwinded(move |c, z| taylor(stages, -c * upwind_symbol(space, z)))));
        }
    }
    all
}

fn diffusion_factors() -> Vec<(String, Factors)> {
    let theta_scheme = |p: f64| {
        one(move |_, r, t| {
            let d = 2.0 * r * (1.0 - t.cos());
            Complex64::from((1.0 - (1.0 - p) * d) / (1.0 + p * d))
        })
    };
    vec![
        ("explicit-euler-diffusion".into(), theta_scheme(0.0)),
        ("crank-nicolson-diffusion".into(), theta_scheme(0.5)),
        ("implicit-euler-diffusion".into(), theta_scheme(1.0)),
        (
            "du-fort-frankel".into(),
            Box::new(|_, r, t| roots((1.0 + 2.0 * r).into(), (-4.0 * r * t.cos()).into(), (-(1.0 - 2.0 * r)).into())),
        ),
    ]
}

fn advection_diffusion_factors() -> Vec<(String, Factors)> {
    let mut all = Vec::new();
    for space in ["central2", "central4", "central6", "pade4", "compact6"] {
        for (method, stages) in [("ssprk3", 3), ("rk4", 4)] {
            let factor = one(move |c, r, t| {
                let (first, second) = symbols(space, t);
                taylor(stages, Complex64::new(-r * second, -c * first))
            });
            all.push((format!("{space}-{method}"), factor));
        }
    }
    all
}

/// The largest difference between a step and the factor, over all modes and both signs of the velocity.
fn worst_difference(name: &str, equation: &str, courant: f64, factors: &Factors) -> f64 {
    let mut scheme = scheme(name).unwrap_or_else(|| panic!("no scheme {name}"));
    let mut worst = 0.0_f64;
    for sign in [1.0, -1.0] {
        let velocity = 1.3 * sign;
        let spacing = 1.7 / CELLS as f64;
        let step = courant * spacing / 1.3;
        let r = 0.45 * courant;
        let diffusivity = r * spacing * spacing / step;
        let case = periodic(equation, CELLS, &[("velocity", velocity), ("diffusivity", diffusivity)]);
        scheme.prepare(&case, &mut NoCallbacks).expect("within the offers");
        for mode in 0..CELLS {
            let theta = std::f64::consts::TAU * mode as f64 / CELLS as f64;
            // theta and theta - 2 pi give the same factor; the latter keeps arguments of sine and cosine small.
            let theta = if mode > CELLS / 2 { theta - std::f64::consts::TAU } else { theta };
            let wave = fourier_mode(mode, CELLS);
            let c = if equation == "diffusion" { 0.0 } else { courant * sign };
            let r = if equation == "advection" { 0.0 } else { r };
            let all = factors(c, r, theta);
            for g in &all {
                let times =
                    |factor: Complex64| -> Vec<Vec<Complex64>> { vec![wave.iter().map(|z| z * factor).collect()] };
                let two_levels = all.len() == 2;
                let (state, earlier) =
                    if two_levels { (times(*g), vec![times(1.0.into())]) } else { (times(1.0.into()), vec![]) };
                let (new, _) = complex_step(scheme.as_mut(), step, &state, &earlier);
                for (value, old) in new[0].iter().zip(&state[0]) {
                    let difference = (value - old * g).norm();
                    worst = if difference > worst || difference.is_nan() { difference } else { worst };
                }
            }
        }
    }
    worst
}

/// The answer of the newest level to an impulse in level `level`, taken apart into modes.
fn modes_of_impulse(
    scheme: &mut dyn Scheme,
    level: usize,
    levels: usize,
    step: f64,
    table: &[Complex64],
) -> Vec<Complex64> {
    let n = MANY_CELLS;
    let field = |of: usize| vec![(0..n).map(|j| if of == level && j == 0 { 1.0 } else { 0.0 }).collect::<Vec<_>>()];
    let mut state = field(0);
    let mut earlier: Vec<_> = (1..levels).map(field).collect();
    let request = Advance { time: 0.0, step, steps: 1, state: &mut state, earlier: &mut earlier };
    scheme.advance(request, &mut NoCallbacks).expect("a step");
    let mode = |m: usize| (0..n).map(|j| state[0][j] * table[(m * j) % n].conj()).sum();
    (0..n).map(mode).collect()
}

/// The largest residual of the closed forms in G = a (one level) or G^2 = a G + b (two), with a and b from impulses.
fn worst_of_impulses(name: &str, equation: &str, courant: f64, factors: &Factors) -> f64 {
    let n = MANY_CELLS;
    let spacing = 1.7 / n as f64;
    let step = courant * spacing / 1.3;
    let r = 0.45 * courant;
    let mut scheme = scheme(name).unwrap();
    let levels = scheme.describe().offers[0].levels;
    let case = periodic(equation, n, &[("velocity", -1.3), ("diffusivity", r * spacing * spacing / step)]);
    scheme.prepare(&case, &mut NoCallbacks).expect("within the offers");
    let table = fourier_mode(1, n);
    let by_level: Vec<_> =
        (0..levels).map(|level| modes_of_impulse(scheme.as_mut(), level, levels, step, &table)).collect();
    let (c, r) = (if equation == "diffusion" { 0.0 } else { -courant }, if equation == "advection" { 0.0 } else { r });
    let mut worst = 0.0_f64;
    for m in 0..n {
        let theta = std::f64::consts::TAU * (m as f64 - if m > n / 2 { n as f64 } else { 0.0 }) / n as f64;
        for g in factors(c, r, theta) {
            let residual = match by_level.as_slice() {
                [a] => (a[m] - g).norm(),
                [a, b] => (g * g - a[m] * g - b[m]).norm(),
                _ => f64::NAN,
            };
            worst = if residual > worst || residual.is_nan() { residual } else { worst };
        }
    }
    worst
}

fn check(equation: &str, table: Vec<(String, Factors)>) {
    for (name, factors) in table {
        for courant in COURANT_NUMBERS {
            let worst = worst_difference(&name, equation, courant, &factors);
            assert!(worst <= TOLERANCE, "{name}, {equation}, Courant number {courant}: {worst:e}");
            let worst = worst_of_impulses(&name, equation, courant, &factors);
            assert!(worst <= TOLERANCE, "{name}, {equation}, {MANY_CELLS} cells, Courant number {courant}: {worst:e}");
        }
    }
}

#[test]
fn advection_schemes_have_their_closed_forms() {
    check("advection", advection_factors());
}

#[test]
fn diffusion_schemes_have_their_closed_forms() {
    check("diffusion", diffusion_factors());
}

#[test]
fn advection_diffusion_schemes_have_their_closed_forms() {
    for equation in ["advection", "diffusion", "advection_diffusion"] {
        check(equation, advection_diffusion_factors());
    }
}

#[test]
fn a_closed_form_that_is_wrong_by_a_thousandth_is_seen() {
    let wrong = one(|c, _, t| 1.0 - 1.001 * c.abs() * (1.0 - t.cos()) - i() * c * t.sin());
    assert!(worst_difference("upwind", "advection", 0.5, &wrong) > 1e-4);
}

#[test]
fn the_sum_over_the_answer_to_an_impulse_is_one() {
    let all = advection_factors().into_iter().map(|(name, _)| (name, "advection"));
    let all = all.chain(diffusion_factors().into_iter().map(|(name, _)| (name, "diffusion")));
    let all = all.chain(advection_diffusion_factors().into_iter().map(|(name, _)| (name, "advection_diffusion")));
    for (name, equation) in all {
        let mut scheme = scheme(&name).unwrap();
        let case = periodic(equation, CELLS, &[("velocity", 1.3), ("diffusivity", 0.01)]);
        scheme.prepare(&case, &mut NoCallbacks).unwrap();
        let levels = scheme.describe().offers[0].levels;
        for courant in COURANT_NUMBERS {
            let mut impulse = vec![0.0; CELLS];
            impulse[11] = 1.0;
            let mut state = vec![impulse.clone()];
            let mut earlier = vec![vec![impulse]; levels - 1];
            let step = courant * 1.7 / CELLS as f64 / 1.3;
            let request = Advance { time: 0.0, step, steps: 1, state: &mut state, earlier: &mut earlier };
            scheme.advance(request, &mut NoCallbacks).unwrap();
            let sum: f64 = state[0].iter().sum();
            assert!((sum - 1.0).abs() <= 1e-15, "{name}, Courant number {courant}: {:e}", sum - 1.0);
        }
    }
}
