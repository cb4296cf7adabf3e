//! Measured amplification factors against closed forms, at every wavenumber.
//!
//! Trusted: the closed forms, as printed in textbooks (Hirsch 2007; Strikwerda 2004; Lele 1992 for the compact differences; from memory as to
//! the page) and written here by hand, independently of the schemes. Everything else is measured through the library as a user would.

use std::f64::consts::PI;

use gridassay::claims::ModesRequest;
use gridassay::host::Session;
use gridassay::record::{ModesRecord, Parameters, Study};
use gridassay::studies::modes;
use num_complex::Complex64;

/// Rounding of a step and of the transform of a response, whose entries are of size one.
const TOLERANCE: f64 = 1e-13;

const I: Complex64 = Complex64::I;

fn real(value: f64) -> Complex64 {
    Complex64::new(value, 0.0)
}

fn measure(
    scheme: &str,
    equation: &str,
    cells: usize,
    courant: Option<f64>,
    diffusion_number: Option<f64>,
) -> ModesRecord {
    let scheme = gridassay_classical::scheme(scheme).expect("a classical scheme");
    let request = ModesRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        cells: vec![cells],
        courant,
        diffusion_number,
        mode_by_mode: false,
    };
    let made = modes::run(&mut Session::in_process(scheme), &request, None, 7);
    assert_eq!(made.stopped, None);
    match made.study {
        Study::Modes(record) => record,
        _ => unreachable!(),
    }
}

/// The largest distance of the measured physical branch from `closed` over all wavenumbers; every wavenumber must be there.
fn largest_difference(record: &ModesRecord, cells: usize, closed: impl Fn(f64) -> Complex64) -> f64 {
    let physical: Vec<_> = record.modes.iter().filter(|mode| mode.exact.is_some()).collect();
    assert_eq!(physical.len(), cells, "one physical mode a wavenumber");
    let distance = |mode: &&&gridassay::record::ModeRecord| {
        let [re, im] = mode.amplification;
        (Complex64::new(re, im) - closed(mode.theta[0])).norm()
    };
    let worst = physical
        .iter()
        .map(|mode| distance(&mode))
        .fold(0.0, |worst: f64, d| if d.is_nan() { f64::NAN } else { worst.max(d) });
    assert!(!worst.is_nan(), "a measured factor is not a number");
    worst
}

type Symbol = fn(f64, f64) -> Complex64;

/// The Taylor polynomial of degree `degree` of exp(z): every Runge-Kutta method of that many stages and that order.
fn taylor(degree: u32, z: Complex64) -> Complex64 {
    let mut term = real(1.0);
    let mut sum = term;
    for k in 1..=degree {
        term *= z / f64::from(k);
        sum += term;
    }
    sum
}

fn central4(theta: f64) -> f64 {
    (8.0 * theta.sin() - (2.0 * theta).sin()) / 6.0
}

fn central6(theta: f64) -> f64 {
    (45.0 * theta.sin() - 9.0 * (2.0 * theta).sin() + (3.0 * theta).sin()) / 30.0
}

fn pade4(theta: f64) -> f64 {
    3.0 * theta.sin() / (2.0 + theta.cos())
}

const ADVECTION: [(&str, Symbol); 16] = [
    ("upwind", |t, c| 1.0 - c * (1.0 - (-I * t).exp())),
    ("lax-friedrichs", |t, c| t.cos() - I * c * t.sin()),
    ("lax-wendroff", |t, c| 1.0 - I * c * t.sin() - c * c * (1.0 - t.cos())),
    ("maccormack", |t, c| 1.0 - I * c * t.sin() - c * c * (1.0 - t.cos())),
    ("beam-warming", |t, c| {
        let z = (-I * t).exp();
        1.0 - 0.5 * c * (3.0 - 4.0 * z + z * z) + 0.5 * c * c * (1.0 - 2.0 * z + z * z)
    }),
    ("fromm", |t, c| {
        let z = (-I * t).exp();
        let lax_wendroff = 1.0 - I * c * t.sin() - c * c * (1.0 - t.cos());
        let beam_warming = 1.0 - 0.5 * c * (3.0 - 4.0 * z + z * z) + 0.5 * c * c * (1.0 - 2.0 * z + z * z);
        0.5 * (lax_wendroff + beam_warming)
    }),
    ("leapfrog", |t, c| -I * c * t.sin() + real(1.0 - (c * t.sin()).powi(2)).sqrt()),
    ("crank-nicolson-advection", |t, c| (1.0 - 0.5 * I * c * t.sin()) / (1.0 + 0.5 * I * c * t.sin())),
    ("implicit-euler-advection", |t, c| 1.0 / (1.0 + I * c * t.sin())),
    ("central2-ssprk3", |t, c| taylor(3, -I * c * t.sin())),
    ("central2-rk4", |t, c| taylor(4, -I * c * t.sin())),
    ("central4-ssprk3", |t, c| taylor(3, -I * c * central4(t))),
    ("central4-rk4", |t, c| taylor(4, -I * c * central4(t))),
    ("central6-rk4", |t, c| taylor(4, -I * c * central6(t))),
    ("pade4-rk4", |t, c| taylor(4, -I * c * pade4(t))),
    ("pade4-ssprk3", |t, c| taylor(3, -I * c * pade4(t))),
];

const DIFFUSION: [(&str, Symbol); 4] = [
    ("explicit-euler-diffusion", |t, r| real(1.0 - 2.0 * r * (1.0 - t.cos()))),
    ("crank-nicolson-diffusion", |t, r| real((1.0 - r * (1.0 - t.cos())) / (1.0 + r * (1.0 - t.cos())))),
    ("implicit-euler-diffusion", |t, r| real(1.0 / (1.0 + 2.0 * r * (1.0 - t.cos())))),
    ("du-fort-frankel", |t, r| {
        // (1 + 2r) G^2 - 4 r cos(theta) G - (1 - 2r) = 0, the root that is 1 at theta = 0.
        let root = (real(4.0 * r * r * t.cos().powi(2) + 1.0 - 4.0 * r * r)).sqrt();
        (2.0 * r * t.cos() + root) / (1.0 + 2.0 * r)
    }),
];

#[test]
fn advection_schemes_have_their_closed_forms_at_every_wavenumber() {
    for (scheme, closed) in ADVECTION {
        for cells in [64, 1000] {
            for c in [0.1, 0.5, 0.9, 1.0] {
                let record = measure(scheme, "advection", cells, Some(c), None);
                let exact_at_one = scheme == "leapfrog" && c == 1.0;
                // The roots of leapfrog meet at theta = pi / 2 and Courant number 1, and the branches pass through each other there: the physical
                // one is exp(-i theta) throughout, where the principal square root changes over.
                let closed = |theta: f64| if exact_at_one { (-I * theta).exp() } else { closed(theta, c) };
                let worst = largest_difference(&record, cells, closed);
                assert!(worst <= tolerance(scheme, c), "{scheme}, {cells} cells, c = {c}: {worst:e}");
            }
        }
    }
}

/// At Courant number 1 the two roots of leapfrog meet at theta = pi / 2, where a perturbation eps moves them by sqrt(eps).
fn tolerance(scheme: &str, c: f64) -> f64 {
    if scheme == "leapfrog" && c == 1.0 { 4.0 * f64::EPSILON.sqrt() } else { TOLERANCE }
}

#[test]
fn diffusion_schemes_have_their_closed_forms_at_every_wavenumber() {
    for (scheme, closed) in DIFFUSION {
        for cells in [64, 1000] {
            for r in [0.1, 0.3, 0.45] {
                let record = measure(scheme, "diffusion", cells, None, Some(r));
                let worst = largest_difference(&record, cells, |theta| closed(theta, r));
                assert!(worst <= TOLERANCE, "{scheme}, {cells} cells, r = {r}: {worst:e}");
            }
        }
    }
}

#[test]
fn the_mean_never_changes_where_a_scheme_conserves() {
    let schemes = ADVECTION
        .iter()
        .map(|(name, _)| (*name, "advection"))
        .chain(DIFFUSION.iter().map(|(name, _)| (*name, "diffusion")));
    for (scheme, equation) in schemes {
        let (courant, number) = if equation == "advection" { (Some(0.9), None) } else { (None, Some(0.3)) };
        let record = measure(scheme, equation, 64, courant, number);
        let mean =
            record.modes.iter().find(|mode| mode.exact.is_some() && mode.theta[0] == 0.0).expect("theta = 0 is a mode");
        let [re, im] = mean.amplification;
        assert!((Complex64::new(re, im) - 1.0).norm() <= 1e-15, "{scheme}: G(0) - 1 = {:e}", re - 1.0);
    }
}

#[test]
fn the_exact_factor_of_diffusion_is_the_decay_of_each_mode() {
    let record = measure("explicit-euler-diffusion", "diffusion", 64, None, Some(0.3));
    // exp(-nu k^2 dt) with k = theta / h and nu dt / h^2 = r.
    for mode in &record.modes {
        let expected = (-0.3 * mode.theta[0] * mode.theta[0]).exp();
        let [re, im] = mode.exact.unwrap();
        assert!((Complex64::new(re, im) - expected).norm() <= 8.0 * f64::EPSILON, "theta = {}", mode.theta[0]);
    }
    assert!(record.modes.iter().any(|mode| (mode.theta[0] - PI).abs() < 1e-12));
}

#[test]
fn a_wrong_closed_form_is_seen() {
    // The check itself: one per cent in one coefficient, and a conjugate (the velocity's sign), must show.
    let record = measure("lax-wendroff", "advection", 64, Some(0.5), None);
    let off = |t: f64| 1.0 - 0.505 * I * t.sin() - 0.25 * (1.0 - t.cos());
    assert!(largest_difference(&record, 64, off) > 1e-3);
    let mirrored = |t: f64| 1.0 + 0.5 * I * t.sin() - 0.25 * (1.0 - t.cos());
    assert!(largest_difference(&record, 64, mirrored) > 0.5);
}
