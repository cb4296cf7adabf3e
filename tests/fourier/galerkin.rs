//! Discontinuous Galerkin schemes against an independent construction in NumPy: modal Legendre polynomials instead of nodal values.

use std::path::Path;
use std::process::Command;

use num_complex::Complex64;
use serde_json::Value;

use super::common::{at_courant, classical, distance, factors, modes_of};

/// Prints, for each degree, Courant number and theta, the eigenvalues of R(dt L(theta)).
///
/// With Legendre polynomials P_k on [-1, 1] the modal equations of u_t + a u_x = 0 with the upwind flux, a > 0, are (Cockburn & Shu 2001):
/// h / (2k + 1) d u_k / dt = -a [sum_j u_j - (-1)^k exp(-i theta) sum_j u_j - sum_j u_j D_kj], D_kj = 1 - (-1)^(k+j) for j < k, else 0.
const NUMPY: &str = r#"
import json, sys
import numpy as np
from math import factorial
out = []
for degree, stages, c, thetas in json.loads(sys.argv[1]):
    m = degree + 1
    k = np.arange(m)
    sign = (-1.0) ** k
    inner = np.array([[1 - (-1.0) ** (i + j) if j < i else 0.0 for j in k] for i in k])
    for theta in thetas:
        flux = np.ones((m, m)) - np.exp(-1j * theta) * np.outer(sign, np.ones(m))
        z = -c * (2 * k[:, None] + 1) * (flux - inner)
        r = sum(np.linalg.matrix_power(z, p) / factorial(p) for p in range(stages + 1))
        out.append([[v.real, v.imag] for v in np.linalg.eigvals(r)])
print(json.dumps(out))
"#;

/// The answers of NumPy; `None` where that Python has no NumPy.
fn numpy(argument: &Value) -> Option<Vec<Vec<Complex64>>> {
    let python = std::env::var("GRIDASSAY_PYTHON").unwrap_or_else(|_| "python3".to_owned());
    let has = Command::new(&python).args(["-c", "import numpy"]).output().ok()?.status.success();
    if !has {
        assert!(!Path::new(&python).is_absolute(), "{python} was named for the tests and has no NumPy");
        eprintln!("not compared: {python} has no NumPy; set GRIDASSAY_PYTHON");
        return None;
    }
    let output = Command::new(&python).args(["-c", NUMPY, &argument.to_string()]).output().unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let values: Vec<Vec<[f64; 2]>> = serde_json::from_slice(&output.stdout).unwrap();
    Some(values.iter().map(|all| all.iter().map(|[re, im]| Complex64::new(*re, *im)).collect()).collect())
}

#[test]
fn eigenvalues_are_those_of_a_modal_construction_in_numpy() {
    let mut asked = Vec::new();
    let mut found = Vec::new();
    for (degree, stages, c) in [(1, 2, 0.25), (2, 3, 0.15), (3, 4, 0.1)] {
        let record = modes_of(classical(&format!("dg-p{degree}")), &at_courant("advection", &[32], c));
        assert_eq!(record.linear, Some(true));
        let all = factors(&record);
        assert_eq!(all.len(), 32, "every wavenumber");
        let thetas: Vec<f64> = all.iter().map(|(theta, _)| theta[0]).collect();
        asked.push(serde_json::json!([degree, stages, c, thetas]));
        found.extend(all.into_iter().map(|(theta, values)| (degree, theta[0], values)));
    }
    let Some(expected) = numpy(&Value::Array(asked.clone())) else { return };
    assert_eq!(expected.len(), found.len());
    for ((degree, theta, values), expected) in found.iter().zip(&expected) {
        let off = distance(values, expected);
        assert!(off <= 1e-12, "p = {degree}, theta = {theta}: {off:e}");
    }
    // The check itself: another Courant number must show.
    asked[0][2] = 0.2525.into();
    let wrong = numpy(&Value::Array(asked)).unwrap();
    let shown = found.iter().zip(&wrong).map(|((_, _, values), wrong)| distance(values, wrong)).fold(0.0, f64::max);
    assert!(shown > 1e-3, "{shown:e}");
}

#[test]
fn one_branch_is_physical_and_carries_nearly_all_of_a_long_wave() {
    for degree in 1..=3 {
        let record = modes_of(classical(&format!("dg-p{degree}")), &at_courant("advection", &[32], 0.08));
        let physical: Vec<_> = record.modes.iter().filter(|mode| mode.exact.is_some()).collect();
        assert_eq!(physical.len(), 32);
        assert_eq!(record.modes.len(), 32 * (degree + 1));
        for mode in physical.iter().filter(|mode| mode.theta[0].abs() < 1.0) {
            assert!(mode.share.unwrap() > 0.99, "p = {degree}: {mode:?}");
        }
        for theta in factors(&record).iter().map(|(theta, _)| theta[0]) {
            let shares = record.modes.iter().filter(|mode| (mode.theta[0] - theta).abs() < 1e-9);
            let sum: f64 = shares.map(|mode| mode.share.unwrap()).sum();
            assert!((sum - 1.0).abs() < 1e-12, "p = {degree}, theta = {theta}: the shares sum to {sum}");
        }
    }
}
