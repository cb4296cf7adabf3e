//! What the tests ask, and how they compare.

use std::collections::BTreeMap;

use gridassay::claims::{ModesRequest, StabilityRequest};
use gridassay::host::Session;
use gridassay::record::{ModesRecord, Parameters, StabilityRecord, Study};
use gridassay::scheme::Scheme;
use gridassay::studies::{Made, modes, stability};
use num_complex::Complex64;

/// The imaginary unit.
pub const I: Complex64 = Complex64::I;

/// A classical scheme.
pub fn classical(name: &str) -> Box<dyn Scheme> {
    gridassay_classical::scheme(name).unwrap_or_else(|| panic!("there is no classical scheme {name}"))
}

/// Parameters by name.
pub fn parameters(pairs: &[(&str, &[f64])]) -> Parameters {
    pairs.iter().map(|(name, values)| ((*name).to_owned(), values.to_vec())).collect()
}

/// A request for modes at a Courant number.
pub fn at_courant(equation: &str, cells: &[usize], courant: f64) -> ModesRequest {
    ModesRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        cells: cells.to_vec(),
        courant: Some(courant),
        diffusion_number: None,
        mode_by_mode: false,
    }
}

/// The modes of a scheme, which must have been measured to the end.
pub fn modes_of(scheme: Box<dyn Scheme>, request: &ModesRequest) -> ModesRecord {
    let made = modes::run(&mut Session::in_process(scheme), request, None, 7);
    assert_eq!(made.stopped, None);
    modes_record(made)
}

/// The record of a study of modes.
pub fn modes_record(made: Made) -> ModesRecord {
    match made.study {
        Study::Modes(record) => record,
        _ => unreachable!("a study of modes was made"),
    }
}

/// The stable range of a scheme over the equation's own number.
pub fn stability_of(scheme: Box<dyn Scheme>, equation: &str, scan_to: f64) -> StabilityRecord {
    let request = StabilityRequest {
        equation: equation.to_owned(),
        parameters: Parameters::new(),
        number: None,
        held: None,
        scan_to,
        integrator: None,
        map_to: None,
    };
    let made = stability::run(&mut Session::in_process(scheme), &request, 7);
    assert_eq!(made.stopped, None);
    match made.study {
        Study::Stability(record) => record,
        _ => unreachable!("a study of stable steps was made"),
    }
}

/// The branches by wavevector: all amplification factors at each theta.
pub fn factors(record: &ModesRecord) -> Vec<(Vec<f64>, Vec<Complex64>)> {
    let mut by_theta: BTreeMap<Vec<i64>, (Vec<f64>, Vec<Complex64>)> = BTreeMap::new();
    for mode in &record.modes {
        let key = mode.theta.iter().map(|theta| (theta * 1e9).round() as i64).collect();
        let entry = by_theta.entry(key).or_insert_with(|| (mode.theta.clone(), Vec::new()));
        entry.1.push(Complex64::new(mode.amplification[0], mode.amplification[1]));
    }
    by_theta.into_values().collect()
}

/// Largest distance between two sets of values, each value taken with its nearest partner that is still free; NaN where one is NaN.
pub fn distance(found: &[Complex64], expected: &[Complex64]) -> f64 {
    assert_eq!(found.len(), expected.len(), "as many branches as expected");
    let mut free = expected.to_vec();
    let mut worst = 0.0_f64;
    for value in found {
        let nearest = |a: &usize, b: &usize| (free[*a] - value).norm().total_cmp(&(free[*b] - value).norm());
        let at = (0..free.len()).min_by(nearest).expect("a partner is left");
        let distance = (free.swap_remove(at) - value).norm();
        worst = if distance.is_nan() { f64::NAN } else { worst.max(distance) };
    }
    worst
}

/// Largest distance of the branches from closed forms over all wavevectors.
pub fn worst(record: &ModesRecord, closed: impl Fn(&[f64]) -> Vec<Complex64>) -> f64 {
    let all = factors(record);
    assert_eq!(all.len(), record.cells.iter().product::<usize>(), "every wavevector of the grid");
    let each = all.iter().map(|(theta, found)| distance(found, &closed(theta)));
    each.fold(0.0, |worst: f64, d| if d.is_nan() { f64::NAN } else { worst.max(d) })
}

/// Fails unless |found - expected| <= tolerance; NaN fails.
#[track_caller]
pub fn agree(what: &str, found: f64, expected: f64, tolerance: f64) {
    let distance = (found - expected).abs();
    assert!(distance <= tolerance, "{what}: {found} where {expected} was expected, within {tolerance:e}");
}
