//! Trusted: closed-form limits of textbook schemes (Hirsch; Strikwerda; Durran). Each is found twice: from the polynomial of the stencil,
//! and from the modulus of G at sampled wavenumbers.

use super::*;
use crate::analysis::compare::agree;
use crate::analysis::eigen::{Excess, modulus_excess, spectral_excess};
use crate::analysis::matrix::Matrix;
use crate::analysis::symbol::Stencil;
use num_complex::Complex64;
use std::convert::Infallible;

fn from_stencil(stencil: impl Fn(f64) -> Vec<(i64, f64)>, up_to: f64) -> StableSet {
    let excess = |s: f64| {
        let growth = StencilGrowth::new(&Stencil::scalar_1d(&stencil(s)), f64::EPSILON).unwrap();
        Ok::<_, Infallible>(growth.worst().excess)
    };
    search(excess, Scan { up_to, ..Scan::default() }).unwrap()
}

fn from_symbol(g: impl Fn(f64, f64) -> Complex64, up_to: f64) -> StableSet {
    let excess = |s: f64| {
        let at = |theta: f64| {
            let value = modulus_excess(g(s, theta));
            Ok::<_, Infallible>(Excess { value, uncertainty: 8.0 * f64::EPSILON })
        };
        worst_theta(at, false).map(|w| w.excess)
    };
    search(excess, Scan { up_to, ..Scan::default() }).unwrap()
}

fn limit(set: &StableSet) -> f64 {
    match set.range {
        StableRange::LimitedTo { limit, uncertainty } => {
            assert!(uncertainty <= 1e-12 * set.scanned_up_to);
            limit
        }
        other => panic!("{other:?}"),
    }
}

type Neighbours = fn(f64) -> Vec<(i64, f64)>;

const UPWIND: Neighbours = |c| vec![(-1, c), (0, 1.0 - c)];
const LAX_FRIEDRICHS: Neighbours = |c| vec![(-1, 0.5 * (1.0 + c)), (1, 0.5 * (1.0 - c))];
const LAX_WENDROFF: Neighbours = |c| vec![(-1, 0.5 * c * (1.0 + c)), (0, 1.0 - c * c), (1, -0.5 * c * (1.0 - c))];
const BEAM_WARMING: Neighbours =
    |c| vec![(-2, 0.5 * c * (c - 1.0)), (-1, c * (2.0 - c)), (0, 0.5 * (1.0 - c) * (2.0 - c))];
const FROMM: Neighbours = |c| {
    let mean = |i: usize| [LAX_WENDROFF(c), BEAM_WARMING(c)][i].iter().map(|(d, x)| (*d, 0.5 * x)).collect::<Vec<_>>();
    [mean(0), mean(1)].concat()
};
const DIFFUSION: Neighbours = |r| vec![(-1, r), (0, 1.0 - 2.0 * r), (1, r)];
const DIFFUSION_FOURTH: Neighbours = |r| {
    let (near, far) = (16.0 / 12.0 * r, -r / 12.0);
    vec![(-2, far), (-1, near), (0, 1.0 - 2.0 * (near + far)), (1, near), (2, far)]
};

#[test]
fn limits_of_textbook_schemes() {
    for (name, stencil, expected) in [
        ("upwind", UPWIND, 1.0),
        ("Lax-Friedrichs", LAX_FRIEDRICHS, 1.0),
        ("Lax-Wendroff", LAX_WENDROFF, 1.0),
        ("Beam-Warming", BEAM_WARMING, 2.0),
        ("Fromm", FROMM, 1.0),
        ("explicit diffusion", DIFFUSION, 0.5),
        ("explicit diffusion, fourth order", DIFFUSION_FOURTH, 0.375),
    ] {
        agree(limit(&from_stencil(stencil, 3.7)), expected, 1e-12).map_err(|e| format!("{name}: {e}")).unwrap();
        let sampled = from_symbol(|s, theta| Stencil::scalar_1d(&stencil(s)).jet(theta).value, 3.7);
        agree(limit(&sampled), expected, 1e-9).map_err(|e| format!("{name}: {e}")).unwrap();
    }
}

#[test]
fn a_limit_at_a_sampled_step_is_not_overrun() {
    // The scan's own points hit the limit exactly.
    for up_to in [1.0, 2.0, 4.0] {
        let set = from_stencil(LAX_WENDROFF, up_to);
        if up_to == 1.0 {
            assert_eq!((set.range, &set.intervals[..]), (StableRange::Unlimited, &[(0.0, 1.0)][..]));
        } else {
            agree(limit(&set), 1.0, 1e-12).unwrap();
        }
    }
}

#[test]
fn implicit_schemes_have_no_limit() {
    let i = Complex64::I;
    let crank_nicolson = |c: f64, t: f64| (1.0 - 0.5 * i * c * t.sin()) / (1.0 + 0.5 * i * c * t.sin());
    let implicit_euler = |r: f64, t: f64| Complex64::from(1.0 / (1.0 + 2.0 * r * (1.0 - t.cos())));
    assert_eq!(from_symbol(crank_nicolson, 100.0).range, StableRange::Unlimited);
    assert_eq!(from_symbol(implicit_euler, 100.0).range, StableRange::Unlimited);
}

#[test]
fn forward_euler_with_central_differences_has_no_stable_step() {
    // |G|^2 = 1 + c^2 sin^2(theta): growth c^2/2 at theta = pi/2.
    let set = from_stencil(|c| vec![(-1, 0.5 * c), (0, 1.0), (1, -0.5 * c)], 4.0);
    let StableRange::NoStableStep { growth: Some(growth) } = set.range else { panic!("{:?}", set.range) };
    agree(growth.power, 2.0, 1e-3).unwrap();
    agree(growth.coefficient, 0.5, 1e-3).unwrap();
    assert!(set.intervals.is_empty());
    agree(growth.steps_until(10.0, 0.1), 10.0_f64.ln() / 0.005_f64.ln_1p(), 0.5).unwrap();
}

#[test]
fn weak_growth_is_followed_below_round_off() {
    // RK2 with central differences by plain moduli, which lose growth below 1e-15: c^4/8 sinks there at c = 0.0003.
    let rk2 = |c: f64, t: f64| {
        let z = Complex64::new(0.0, -c * t.sin());
        1.0 + z + 0.5 * z * z
    };
    for up_to in [0.01, 1.0, 4.0] {
        let set = from_symbol(rk2, up_to);
        let StableRange::NoStableStep { growth: Some(growth) } = set.range else { panic!("{up_to} {:?}", set.range) };
        agree(growth.power, 4.0, 0.1).unwrap();
        agree(growth.steps_until(10.0, 0.1), 10.0_f64.ln() / 1.25e-5, 0.3 * 10.0_f64.ln() / 1.25e-5).unwrap();
    }
    // Anti-diffusion grows like s itself: no step postpones it.
    let set = from_stencil(|r| vec![(-1, -r), (0, 1.0 + 2.0 * r), (1, -r)], 1.0);
    let StableRange::NoStableStep { growth: Some(growth) } = set.range else { panic!("{:?}", set.range) };
    agree(growth.power, 1.0, 1e-9).unwrap();
}

#[test]
fn holes_in_the_stable_set_are_found() {
    // Growth positive between 0.7 and 0.8 and beyond 1.5.
    let excess = |s: f64| {
        Ok::<_, Infallible>(Excess {
            value: if s > 1.5 { s - 1.5 } else { -(s - 0.7) * (s - 0.8) },
            uncertainty: 1e-16,
        })
    };
    let set = search(excess, Scan { up_to: 2.0, ..Scan::default() }).unwrap();
    assert_eq!(set.intervals.len(), 2);
    agree(limit(&set), 0.7, 1e-11).unwrap();
    agree(set.intervals[1].0, 0.8, 1e-11).unwrap();
    agree(set.intervals[1].1, 1.5, 1e-11).unwrap();
    // A scheme that refuses steps beyond a bound of its own answers infinity; one that returns NaN is never stable.
    let refused =
        |s: f64| Ok::<_, Infallible>(Excess { value: if s > 0.3 { f64::INFINITY } else { 0.0 }, uncertainty: 0.0 });
    agree(limit(&search(refused, Scan::default()).unwrap()), 0.3, 1e-11).unwrap();
    let nan = |_: f64| Ok::<_, Infallible>(Excess { value: f64::NAN, uncertainty: 0.0 });
    let set = search(nan, Scan::default()).unwrap();
    assert_eq!((set.intervals.len(), set.range), (0, StableRange::NoStableStep { growth: None }));
    assert_eq!(search(|_| Err::<Excess, _>("crashed"), Scan::default()), Err("crashed"));
}

#[test]
fn leapfrog_reaches_its_limit_although_its_roots_are_ill_conditioned_there() {
    // Leapfrog with central differences of second, fourth and sixth order: 1 / max k' (check of Durran, Numerical Methods for Fluid
    // Dynamics; maxima 1, 1.37222197980336, 1.585978396265639 in closed form or from mpmath).
    let modified = [
        |t: f64| t.sin(),
        |t: f64| (8.0 * t.sin() - (2.0 * t).sin()) / 6.0,
        |t: f64| (45.0 * t.sin() - 9.0 * (2.0 * t).sin() + (3.0 * t).sin()) / 30.0,
    ];
    for (k, largest) in modified.iter().zip([1.0, 1.372_221_979_803_36, 1.585_978_396_265_639]) {
        let excess = |c: f64| {
            let at = |theta: f64| {
                let corner = Complex64::new(0.0, -2.0 * c * k(theta));
                let block = Matrix::from_rows(2, vec![corner, Complex64::ONE, Complex64::ONE, Complex64::ZERO]);
                spectral_excess(&block.unwrap(), f64::EPSILON)
            };
            worst_theta(at, false).map(|w| w.excess)
        };
        let set = search(excess, Scan { up_to: 1.7, divisions: 50, ..Scan::default() }).unwrap();
        agree(limit(&set), 1.0 / largest, 1e-9).unwrap();
    }
}

#[test]
fn the_worst_wavenumber_is_found_between_the_samples() {
    let peak = |at: f64| move |t: f64| Ok::<_, Infallible>(Excess { value: -(t - at).powi(2), uncertainty: 0.0 });
    for at in [0.0, 1e-5, 0.7654, std::f64::consts::PI] {
        agree(worst_theta(peak(at), false).unwrap().theta, at, 1e-7).unwrap();
    }
    agree(worst_theta(peak(-1.234), true).unwrap().theta, -1.234, 1e-7).unwrap();
}

#[test]
fn wide_or_blocked_stencils_have_no_polynomial() {
    assert!(StencilGrowth::new(&Stencil::scalar_1d(&[(-20, 0.5), (20, 0.5)]), 0.0).is_none());
    let block = Stencil::from_neighbours(1, 2, &[([0; 3], vec![1.0, 0.0, 0.0, 1.0])]).unwrap();
    assert!(StencilGrowth::new(&block, 0.0).is_none());
}
