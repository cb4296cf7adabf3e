//! Cells per wavelength that a scheme needs for given errors.

use super::exact::Exact;
use crate::analysis::dispersion::{Mode, errors, points_per_wavelength_for};
use crate::analysis::symbol::Stencil;
use crate::record::{ModeRecord, Resolution, ResolvedQuantity};
use crate::studies::Stop;
use crate::studies::setting::Setting;

/// Wavenumbers at which a short stencil is evaluated: up to a wavelength of two cells, down to one of 2 x this many.
const SAMPLES: usize = 2048;

/// The errors that are asked about.
const BOUNDS: [(ResolvedQuantity, f64); 3] = [
    (ResolvedQuantity::PhaseSpeed, 0.01),
    (ResolvedQuantity::PhaseSpeed, 0.001),
    (ResolvedQuantity::DampingPerPeriod, 0.01),
];

/// The cells per wavelength of every physical branch that moves: from the stencil where it is short, else from the waves of the grid.
///
/// # Errors
/// The equation has no dispersion relation.
pub fn needed(
    setting: &Setting,
    exact: &Exact<'_>,
    stencil: Option<&Stencil>,
    modes: &[ModeRecord],
) -> Result<Vec<Resolution>, Stop> {
    if setting.case.dimensions != 1 {
        return Ok(Vec::new());
    }
    if let Some(stencil) = stencil.filter(|stencil| stencil.components() == 1) {
        let name = modes.first().map_or_else(|| setting.names[0].clone(), |mode| mode.branch.clone());
        return Ok(of_curves(&name, &fine(setting, exact, stencil)?));
    }
    let mut names: Vec<&str> = modes.iter().filter(|mode| mode.exact.is_some()).map(|m| m.branch.as_str()).collect();
    names.dedup();
    let of_branch = |name: &&str| {
        let own = modes.iter().filter(|mode| mode.branch == **name && mode.theta[0] > 0.0);
        let curve =
            own.filter_map(|mode| Some((mode.theta[0], mode.phase_speed_ratio? - 1.0, mode.damping_error_per_period?)));
        of_curves(name, &curve.collect::<Vec<_>>())
    };
    Ok(names.iter().flat_map(of_branch).collect())
}

/// (theta, error of the phase-speed ratio, damping error per period), ascending in theta > 0.
type Curve = Vec<(f64, f64, f64)>;

fn fine(setting: &Setting, exact: &Exact<'_>, stencil: &Stencil) -> Result<Curve, Stop> {
    let theta = |i: usize| std::f64::consts::PI * i as f64 / SAMPLES as f64;
    let mode = |i: usize| {
        let jet = stencil.jet(theta(i));
        let omega = exact.branches(&[theta(i)])?[0].omega * setting.step;
        Ok(Mode { theta: theta(i), factor: jet.value, derivative: None, exact: omega, exact_group: 0.0 })
    };
    let modes: Vec<Mode> = (1..=SAMPLES).map(mode).collect::<Result<_, Stop>>()?;
    let curve = modes
        .iter()
        .zip(errors(&modes))
        .filter_map(|(mode, errors)| Some((mode.theta, errors.phase_speed_ratio? - 1.0, errors.damping_per_period?)));
    Ok(curve.collect())
}

fn of_curves(branch: &str, curve: &[(f64, f64, f64)]) -> Vec<Resolution> {
    if curve.is_empty() {
        return Vec::new();
    }
    let of = |quantity: ResolvedQuantity| -> Vec<(f64, f64)> {
        let error = |(theta, phase, damping): &(f64, f64, f64)| match quantity {
            ResolvedQuantity::PhaseSpeed => (*theta, *phase),
            ResolvedQuantity::DampingPerPeriod => (*theta, *damping),
        };
        curve.iter().map(error).collect()
    };
    let one = |(quantity, within): (ResolvedQuantity, f64)| Resolution {
        branch: branch.to_owned(),
        quantity,
        within,
        points_per_wavelength: points_per_wavelength_for(&of(quantity), within),
    };
    BOUNDS.into_iter().map(one).collect()
}
