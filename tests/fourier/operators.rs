//! Operators between boundaries.
//!
//! Trusted: the eigenvalues of tridiagonal Toeplitz matrices (closed form); explicit Euler for the heat equation between walls, the largest
//! stable step of which follows from them; energy estimates of central differences.

use std::f64::consts::PI;

use gridassay::claims::OperatorRequest;
use gridassay::host::Session;
use gridassay::record::{OperatorRecord, Parameters, Study};
use gridassay::studies::operator;

use super::common::{agree, classical};

fn operator_of(
    scheme: &str,
    equation: &str,
    courant: Option<f64>,
    number: Option<f64>,
    integrator: &str,
) -> OperatorRecord {
    let request = OperatorRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        cells: 24,
        courant,
        diffusion_number: number,
        boundaries: None,
        integrator: Some(integrator.to_owned()),
    };
    let made = operator::run(&mut Session::in_process(classical(scheme)), &request, 7);
    assert_eq!(made.stopped, None);
    match made.study {
        Study::Operator(record) => record,
        _ => unreachable!("a study of an operator was made"),
    }
}

/// Second differences between walls: -4 nu / h^2 sin^2(m pi / (2 n)), m = 1 .. n - 1.
#[test]
fn the_heat_equation_between_walls_has_its_closed_form() {
    let record = operator_of("central2-rk4", "diffusion", None, Some(0.3), "rk1");
    let h: f64 = 1.7 / 24.0;
    let nu = record.parameters["diffusivity"][0];
    assert_eq!(
        (record.unknowns, record.boundaries.as_slice()),
        (23, ["value".to_owned(), "value".to_owned()].as_slice())
    );
    let mode = |m: f64| -4.0 * nu / (h * h) * (0.5 * m * PI / 24.0).sin().powi(2);
    let size = mode(24.0).abs();
    for (m, [re, im]) in (1..).zip(&record.eigenvalues) {
        agree("eigenvalue", *re / size, mode(f64::from(m)) / size, 1e-13);
        agree("imaginary part", *im / size, 0.0, 1e-13);
    }
    // A symmetric operator: both abscissas are the same, and nothing grows on the way.
    agree("numerical abscissa", record.numerical_abscissa.unwrap(), mode(1.0), 1e-12 * size);
    agree("growth", record.transient.unwrap().growth, 1.0, 0.0);
    for (epsilon, abscissa) in &record.pseudospectral_abscissa {
        agree("pseudospectral abscissa", *abscissa, mode(1.0) + epsilon, 1e-6 * size);
    }
    // Explicit Euler: R = 1 - 4 r sin^2; beyond r = 1/2 / sin^2 the shortest wave grows.
    let radius = |r: f64| operator_of("central2-rk4", "diffusion", None, Some(r), "rk1").spectral_radius.unwrap();
    let shortest = (0.5 * 23.0 * PI / 24.0).sin().powi(2);
    agree(
        "stable",
        radius(0.3),
        (1.0 - 1.2 * (0.5 * PI / 24.0).sin().powi(2)).max((1.0 - 1.2 * shortest).abs()),
        1e-12,
    );
    agree("unstable", radius(0.6), (1.0 - 2.4 * shortest).abs(), 1e-12);
}

#[test]
fn advection_between_boundaries_is_measured_and_its_closures_are_told() {
    let record = operator_of("central4-rk4", "advection_diffusion", Some(0.8), None, "rk4");
    assert_eq!(record.eigenvalues.len(), record.unknowns);
    assert!(record.deviation.unwrap() < 1e-12);
    // What every operator obeys (Trefethen & Embree 2005): the spectral abscissa is below the numerical one, pseudospectra contain the spectrum
    // and are in reach of the numerical abscissa, and growth on the way is at least the power of the radius.
    let (alpha, omega) = (record.spectral_abscissa.unwrap(), record.numerical_abscissa.unwrap());
    assert!(alpha <= omega);
    for (epsilon, abscissa) in &record.pseudospectral_abscissa {
        assert!(*abscissa >= alpha && *abscissa <= omega + epsilon * (1.0 + 1e-9), "{abscissa}");
    }
    let found = record.transient.unwrap();
    assert!(found.growth >= 1.0);
}
