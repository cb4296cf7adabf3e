//! Largest Courant numbers of Runge-Kutta methods with semi-discrete advection.
//!
//! Trusted: values recomputed for this project by a scan over 20 001 angles with mpmath; Baldauf (2008), J. Comput. Phys. 227:6638-6660,
//! prints those of orders one to six to three or four digits (from memory), with which they agree. Closed forms stand beside them. Three
//! entries (upwind 3 with three and seven stages, upwind 5 with three) come from |R|^2 - 1 = 0 together with its derivative by theta,
//! solved to 40 digits with mpmath: a scan with a looser bisection had put them 2e-6 to 4e-6 too high.

use super::*;
use crate::analysis::compare::agree;
use crate::analysis::integrators::RungeKutta;
use num_complex::Complex64;
use std::convert::Infallible;
use std::f64::consts::PI;

/// h times the eigenvalue of -d/dx: damping as a power of sin(theta/2), so that long waves keep their digits; and -i k'.
type Operator = fn(f64) -> Complex64;

fn half_sine(theta: f64, power: i32) -> f64 {
    (0.5 * theta).sin().powi(power)
}

fn central(coefficients: &[f64], theta: f64) -> f64 {
    coefficients.iter().enumerate().map(|(i, a)| 2.0 * a * ((i + 1) as f64 * theta).sin()).sum()
}

fn compact(theta: f64, alpha: f64, beta: f64, [a, b, c]: [f64; 3]) -> f64 {
    let above = a * theta.sin() + 0.5 * b * (2.0 * theta).sin() + c / 3.0 * (3.0 * theta).sin();
    above / (1.0 + 2.0 * alpha * theta.cos() + 2.0 * beta * (2.0 * theta).cos())
}

const CENTRAL_4: [f64; 2] = [2.0 / 3.0, -1.0 / 12.0];
const CENTRAL_6: [f64; 3] = [3.0 / 4.0, -3.0 / 20.0, 1.0 / 60.0];
const CENTRAL_8: [f64; 4] = [4.0 / 5.0, -1.0 / 5.0, 4.0 / 105.0, -1.0 / 280.0];
/// Tam & Webb (1993), J. Comput. Phys. 107:262-281.
const DRP: [f64; 3] = [0.799_266_43, -0.189_413_14, 0.026_519_95];

const OPERATORS: [(&str, Operator, [f64; 7]); 15] = [
    (
        "upwind 1",
        |t| Complex64::new(-2.0 * half_sine(t, 2), -t.sin()),
        [1.0, 1.0, 1.256_372_66, 1.392_646_78, 1.608_523_93, 1.776_720_63, 1.977_064_87],
    ),
    // (3 - 4 cos t + cos 2t)/2 = 4 sin^4(t/2), (4 sin t - sin 2t)/2.
    (
        "upwind 2",
        |t| Complex64::new(-4.0 * half_sine(t, 4), -0.5 * (4.0 * t.sin() - (2.0 * t).sin())),
        [0.0, 0.5, 0.628_069, 0.696_323, 0.804_262, 0.888_360, 0.988_532],
    ),
    (
        "upwind 3",
        |t| Complex64::new(-4.0 / 3.0 * half_sine(t, 4), -central(&CENTRAL_4, t)),
        [0.0, 0.873_580_46, 1.625_890_666, 1.745_268_99, 1.953_506_77, 2.310_400_52, 2.585_997_326],
    ),
    (
        "upwind 5",
        |t| Complex64::new(-16.0 / 15.0 * half_sine(t, 6), -central(&CENTRAL_6, t)),
        [0.0, 0.0, 1.434_983_629, 1.731_974_84, 1.643_751_83, 1.867_070_02, 2.260_792_19],
    ),
    ("central 2", |t| Complex64::new(0.0, -t.sin()), [0.0, 0.0, 1.732_050_81, 2.828_427_12, 0.0, 0.0, 1.764_421_32]),
    (
        "central 4",
        |t| Complex64::new(0.0, -central(&CENTRAL_4, t)),
        [0.0, 0.0, 1.262_223, 2.061_202, 0.0, 0.0, 1.285_813],
    ),
    (
        "central 6",
        |t| Complex64::new(0.0, -central(&CENTRAL_6, t)),
        [0.0, 0.0, 1.092_102, 1.783_396, 0.0, 0.0, 1.112_513],
    ),
    (
        "central 8",
        |t| Complex64::new(0.0, -central(&CENTRAL_8, t)),
        [0.0, 0.0, 1.000_839, 1.634_364, 0.0, 0.0, 1.019_544],
    ),
    (
        "Pade 4",
        |t| Complex64::new(0.0, -compact(t, 0.25, 0.0, [1.5, 0.0, 0.0])),
        [0.0, 0.0, 1.0, 1.632_993, 0.0, 0.0, 1.018_689],
    ),
    (
        "compact 6",
        |t| Complex64::new(0.0, -compact(t, 1.0 / 3.0, 0.0, [14.0 / 9.0, 1.0 / 9.0, 0.0])),
        [0.0, 0.0, 0.870_622, 1.421_719, 0.0, 0.0, 0.886_893],
    ),
    (
        "compact 8",
        |t| Complex64::new(0.0, -compact(t, 0.375, 0.0, [25.0 / 16.0, 0.2, -0.0125])),
        [0.0, 0.0, 0.811_873, 1.325_782, 0.0, 0.0, 0.827_046],
    ),
    (
        "dispersion-relation-preserving",
        |t| Complex64::new(0.0, -central(&DRP, t)),
        [0.0, 0.0, 1.003_809, 1.639_213, 0.0, 0.0, 1.022_569],
    ),
    // Lele (1992), J. Comput. Phys. 103:16-42, eq. 3.1.6.
    (
        "spectral-like",
        |t| Complex64::new(0.0, -compact(t, 0.577_143_9, 0.089_640_6, [1.302_516_6, 0.993_55, 0.037_502_45])),
        [0.0, 0.0, 0.657_370, 1.073_481, 0.0, 0.0, 0.669_656],
    ),
    ("Fourier", |t| Complex64::new(0.0, -t), [0.0, 0.0, 0.551_329, 0.900_316, 0.0, 0.0, 0.561_633]),
    // The same with the first-order upwind damping put in twice: a case of its own, diffusion number 1 at Courant number 1.
    (
        "diffusion",
        |t| Complex64::new(-4.0 * half_sine(t, 2), 0.0),
        [0.5, 0.5, 0.628_186_33, 0.696_323_39, 0.804_261_97, 0.888_360_31, 0.988_532_43],
    ),
];

fn stable_set(operator: Operator, stages: usize) -> StableSet {
    let method = RungeKutta::taylor(stages);
    let excess =
        |c: f64| worst_theta(|theta| Ok::<_, Infallible>(method.excess(operator(theta) * c)), false).map(|w| w.excess);
    search(excess, Scan { up_to: 3.3, divisions: 66, ..Scan::default() }).unwrap()
}

#[test]
fn the_table_of_largest_courant_numbers() {
    for (name, operator, expected) in OPERATORS {
        for (stages, expected) in (1..).zip(expected) {
            let set = stable_set(operator, stages);
            let found = match set.range {
                StableRange::LimitedTo { limit, .. } => limit,
                StableRange::NoStableStep { .. } => 0.0,
                StableRange::Unlimited => f64::INFINITY,
            };
            // Values of the table are printed to six or more digits; zeros are zeros.
            let tolerance = if expected == 0.0 { 0.0 } else { 1e-6 };
            agree(found, expected, tolerance).map_err(|e| format!("{name}, {stages} stages: {e}")).unwrap();
        }
    }
}

#[test]
fn closed_forms_of_the_table_to_nine_digits() {
    let limit = |i: usize, stages: usize| match stable_set(OPERATORS[i].1, stages).range {
        StableRange::LimitedTo { limit, .. } => limit,
        other => panic!("{} {stages} {other:?}", OPERATORS[i].0),
    };
    for (operator, stages, expected) in [
        (0, 1, 1.0),
        (1, 2, 0.5),
        (2, 2, (2.0_f64 / 3.0).cbrt()),
        (3, 5, 12.0_f64.powf(0.2)),
        (4, 3, 3.0_f64.sqrt()),
        (4, 4, 8.0_f64.sqrt()),
        (8, 3, 1.0),
        (8, 4, 2.0 * (2.0_f64 / 3.0).sqrt()),
        (13, 3, 3.0_f64.sqrt() / PI),
        (13, 4, 8.0_f64.sqrt() / PI),
    ] {
        agree(limit(operator, stages), expected, 1e-9).map_err(|e| format!("{}: {e}", OPERATORS[operator].0)).unwrap();
    }
}

#[test]
fn weak_growth_of_a_damped_scheme_has_a_high_power() {
    // RK2 with fifth-order upwind: growth c^4 t^4 / 8 against damping of order c t^6 leaves something like c^10 at long waves.
    let StableRange::NoStableStep { growth: Some(growth) } = stable_set(OPERATORS[3].1, 2).range else { panic!() };
    agree(growth.power, 10.0, 0.2).unwrap();
    // RK5 and RK6 with central differences: c^6/720 and c^8/5760.
    for (stages, power, coefficient) in [(2, 4.0, 0.125), (5, 6.0, 1.0 / 720.0), (6, 8.0, 1.0 / 5760.0)] {
        let StableRange::NoStableStep { growth: Some(growth) } = stable_set(OPERATORS[4].1, stages).range else {
            panic!()
        };
        agree(growth.power, power, 0.01).unwrap();
        agree(growth.coefficient / coefficient, 1.0, 0.01).unwrap();
    }
}
