//! The leading terms of the modified equation (Warming & Hyett 1974, J. Comput. Phys. 14:159-179) of a scalar scheme in one dimension.

use num_complex::Complex64;

use super::exact::Exact;
use crate::analysis::modified_equation::ModifiedEquation as Series;
use crate::analysis::symbol::Stencil;
use crate::record::{ModeRecord, ModifiedEquation};
use crate::studies::setting::Setting;

/// The highest derivative that is looked at.
const HIGHEST: usize = 9;

/// How many terms from the leading one on are told.
const TOLD: usize = 3;

/// Waves shorter than this are none through which a series in theta may be laid.
const LONGEST_THETA: f64 = 0.65;

/// Long waves through which ln G is laid where the stencil is not short.
const SAMPLES: usize = 6;

/// The leading terms; `None` for systems, for several dimensions, and where no term stands out of rounding.
pub fn equation(
    setting: &Setting,
    exact: &Exact<'_>,
    stencil: Option<&Stencil>,
    modes: &[ModeRecord],
) -> Option<ModifiedEquation> {
    if setting.case.dimensions != 1 || setting.names.len() != 1 {
        return None;
    }
    let series = match stencil.filter(|stencil| stencil.components() == 1) {
        Some(stencil) => Series::from_stencil(stencil, HIGHEST)?,
        None => Some(long_waves(modes))
            .filter(|waves| waves.len() == SAMPLES)
            .and_then(|waves| Series::from_samples(&waves))?,
    };
    let due = exact.series();
    // At a constant Courant number the step falls like h, at a constant diffusion number like h^2.
    let step_power = if setting.numbers.courant.is_some() { 1 } else { 2 };
    let leading = series.leading_term(&due)?;
    let h = setting.case.grid.spacing(0);
    let term = |n: usize| {
        let coefficient = series.coefficients.get(n)? - due.get(n).copied().unwrap_or(0.0);
        let stands_out = coefficient.abs() > series.errors[n];
        stands_out.then(|| (n, coefficient * h.powi(n as i32) / setting.step))
    };
    Some(ModifiedEquation {
        formal_order: series.formal_order(&due, step_power).and_then(|order| usize::try_from(order).ok()),
        terms: (leading.derivative..leading.derivative + TOLD).filter_map(term).collect(),
    })
}

/// (theta, ln G) of the physical branch at the longest waves, theta > 0; the phase is the followed one.
fn long_waves(modes: &[ModeRecord]) -> Vec<(f64, Complex64)> {
    let physical =
        modes.iter().filter(|mode| mode.exact.is_some() && mode.theta[0] > 0.0 && mode.theta[0] <= LONGEST_THETA);
    let logarithm = |mode: &ModeRecord| {
        let [re, im] = mode.exact?;
        let exact = Complex64::new(re, im);
        // arg G = arg(exact) - phase error, the latter positive for a wave that runs ahead. Long waves do not turn by half a turn in a step.
        Some((mode.theta[0], Complex64::new(mode.modulus.ln(), exact.arg() - mode.phase_error?)))
    };
    physical.take(SAMPLES).filter_map(logarithm).collect()
}
