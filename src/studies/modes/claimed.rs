//! G as measured against G as claimed by a formula.

use std::f64::consts::PI;

use gridassay_reference::expression::{Expression, Scope};
use num_complex::Complex64;

use crate::claims::SYMBOL_NAMES;
use crate::record::{ClaimedSymbol, ModesRecord, NeighbourDifference};
use crate::studies::Stop;

/// Rounding that a formula and a scheme may differ by, relative to the largest |G|: both sum a few dozen terms of size |G|.
const ROUNDING: f64 = 256.0 * f64::EPSILON;

/// Holds the modes of a record against a formula in `theta`, `c` and `r`.
///
/// # Errors
/// The formula cannot be read.
pub fn compare(formula: &str, record: &ModesRecord) -> Result<ClaimedSymbol, Stop> {
    let scope = Scope::new(SYMBOL_NAMES).with_imaginary_unit();
    let symbol = Expression::parse(formula, &scope).map_err(|error| Stop::Request(error.to_string()))?;
    let claimed = |theta: f64| {
        let real = |value: f64| Complex64::new(value, 0.0);
        let (c, r) = (record.courant.unwrap_or(f64::NAN), record.diffusion_number.unwrap_or(f64::NAN));
        symbol
            .evaluate_complex(&[("theta", real(theta)), ("c", real(c)), ("r", real(r))])
            .ok()
            .filter(|g| g.is_finite())
    };
    let measured: Vec<(f64, Complex64)> = record
        .modes
        .iter()
        .filter(|mode| mode.exact.is_some() && mode.theta.len() == 1)
        .map(|mode| (mode.theta[0], Complex64::new(mode.amplification[0], mode.amplification[1])))
        .collect();
    let size = measured.iter().map(|(_, g)| g.norm()).fold(1.0, f64::max);
    let allowed = ROUNDING * size + record.uncertainty.unwrap_or(0.0);
    let mut compared = ClaimedSymbol {
        formula: formula.to_owned(),
        compared: measured.len(),
        disagreeing: 0,
        largest_difference: Some(0.0),
        worst_theta: None,
        allowed,
        neighbour: None,
    };
    for (theta, g) in measured {
        let Some(claimed) = claimed(theta) else {
            compared.largest_difference = None;
            return Ok(compared);
        };
        let difference = (g - claimed).norm();
        if compared.largest_difference.is_none_or(|largest| difference > largest) {
            compared.largest_difference = Some(difference);
            compared.worst_theta = Some(theta);
        }
        // A difference that is NaN disagrees.
        let agrees = difference <= allowed;
        compared.disagreeing += usize::from(!agrees);
    }
    if compared.disagreeing > 0 {
        compared.neighbour = neighbour(record, &claimed);
    }
    Ok(compared)
}

/// The neighbour whose coefficient differs most, where the stencil as built is short: the claimed coefficients are the Fourier
/// coefficients of the claimed symbol, c_m = 1/n sum over theta of G(theta) exp(-i m theta).
fn neighbour(record: &ModesRecord, claimed: &impl Fn(f64) -> Option<Complex64>) -> Option<NeighbourDifference> {
    let built = &record.stencil;
    if built.is_empty() || built.iter().any(|entry| entry.offset.len() != 1) {
        return None;
    }
    let reach = built.iter().map(|entry| entry.offset[0].abs()).max()? + 4;
    let samples = 64.max(8 * reach);
    let thetas: Vec<f64> = (0..samples).map(|j| 2.0 * PI * j as f64 / samples as f64).collect();
    let values: Vec<Complex64> = thetas.iter().map(|theta| claimed(*theta)).collect::<Option<_>>()?;
    let coefficient = |offset: i64| {
        let terms =
            thetas.iter().zip(&values).map(|(theta, g)| g * Complex64::from_polar(1.0, -(offset as f64) * theta));
        terms.sum::<Complex64>().re / samples as f64
    };
    let of_built =
        |offset: i64| built.iter().filter(|entry| entry.offset[0] == offset).map(|entry| entry.coefficient).sum();
    let differences = (-reach..=reach).map(|offset| NeighbourDifference {
        offset,
        built: of_built(offset),
        claimed: coefficient(offset),
    });
    differences.max_by(|a, b| (a.built - a.claimed).abs().total_cmp(&(b.built - b.claimed).abs()))
}
