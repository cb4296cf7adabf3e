//! The approximate dispersion relation of a nonlinear scheme (Pirozzoli 2006, J. Comput. Phys. 219:489-497): one wave at a time, one step, and
//! what becomes of that wave. What leaks into other wavenumbers, and how the answer depends on the amplitude, stand beside it.

use num_complex::Complex64;
use rustfft::FftPlanner;

use super::exact::Exact;
use super::linear::scalar_records;
use crate::analysis::dispersion::Mode;
use crate::host::Session;
use crate::record::ModesRecord;
use crate::studies::Stop;
use crate::studies::linearity::step;
use crate::studies::setting::Setting;

/// The amplitude of the wave. Nonlinear weights and limiters of the usual kind do not depend on it, but for their small safeguards.
pub const AMPLITUDE: f64 = 1.0;

/// A second amplitude, by which a dependence shows.
const OTHER_AMPLITUDE: f64 = 1e-3;

/// The phase of the wave: generic, so that no grid point sits on a crest.
const PHASE: f64 = 0.6180339887;

/// Measures the response to every wave of a 1-D scalar setting with one level.
///
/// # Errors
/// The scheme has several fields, levels or directions, or refused or failed.
pub fn measure(session: &mut Session, setting: &Setting, record: &mut ModesRecord) -> Result<(), Stop> {
    if setting.case.dimensions != 1 || setting.names.len() != 1 || setting.offer.levels != 1 {
        let message =
            "the approximate dispersion relation is measured for one field in one dimension with one time level";
        return Err(Stop::Request(message.to_owned()));
    }
    let cells = setting.case.grid.cells[0];
    let exact = Exact::new(setting)?;
    let (mut modes, mut leaks) = (Vec::new(), Vec::new());
    let mut dependence = 0.0_f64;
    for mode in 0..=cells / 2 {
        let theta = 2.0 * std::f64::consts::PI * mode as f64 / cells as f64;
        let (factor, leaked) = response(session, setting, cells, mode, AMPLITUDE)?;
        let (other, _) = response(session, setting, cells, mode, OTHER_AMPLITUDE)?;
        dependence = dependence.max((factor - other).norm());
        let omega = exact.branches(&[theta])?[0].omega * setting.step;
        modes.push(Mode { theta, factor, derivative: None, exact: omega, exact_group: exact.group(theta, 0)? });
        leaks.push(leaked);
    }
    record.amplitude_dependence = Some(dependence);
    record.modes = scalar_records(&setting.names[0], &modes, &leaks);
    Ok(())
}

/// By what one step (or the rate) multiplies wave number `mode`, and the share of the energy that it moves to other wavenumbers.
///
/// # Errors
/// The scheme refused or failed.
pub fn response(
    session: &mut Session,
    setting: &Setting,
    cells: usize,
    mode: usize,
    amplitude: f64,
) -> Result<(Complex64, f64), Stop> {
    let theta = 2.0 * std::f64::consts::PI * mode as f64 / cells as f64;
    let before: Vec<f64> = (0..cells).map(|j| amplitude * (theta * j as f64 + PHASE).cos()).collect();
    let after = step(session, setting, &vec![vec![before.clone()]], 0.0)?;
    let (before, after) = (spectrum(&before), spectrum(&after[0][0]));
    let factor = after[mode] / before[mode];
    let energy = |spectrum: &[Complex64]| spectrum.iter().map(|value| value.norm_sqr()).sum::<f64>();
    let own =
        after[mode].norm_sqr() + if (2 * mode).is_multiple_of(cells) { 0.0 } else { after[cells - mode].norm_sqr() };
    let leaked = (energy(&after) - own).max(0.0) / energy(&before);
    Ok((factor, leaked))
}

fn spectrum(values: &[f64]) -> Vec<Complex64> {
    let mut buffer: Vec<Complex64> = values.iter().map(|value| Complex64::new(*value, 0.0)).collect();
    FftPlanner::new().plan_fft_forward(buffer.len()).process(&mut buffer);
    buffer
}
