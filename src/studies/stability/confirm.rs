//! Long runs from noise on either side of the limit: the spectrum's answer held against the scheme itself.

use super::numbers;
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{Confirmation, StabilityRecord, finite};
use crate::studies::cellwise::Cellwise;
use crate::studies::setting::{Setting, admitted};
use crate::studies::{Stop, noise};

/// Cells of the run: they divide by four and by three, so that the usual worst waves are on the grid.
const CELLS: usize = 96;

/// Steps of the run below the limit.
const STEPS: usize = 2000;

/// A bounded run may still grow by this: modes that are not orthogonal, and the many modes of noise that meet at one point.
pub const BOUNDED: f64 = 30.0;

/// Below the limit, and beyond it.
const BESIDE: [f64; 2] = [0.99, 1.05];

/// Runs on either side of a limit, or at the end of the scan where there is none.
///
/// # Errors
/// The scheme failed.
pub fn from_noise(
    session: &mut Session,
    request: &StabilityRequest,
    seed: u64,
    record: &mut StabilityRecord,
) -> Result<(), Stop> {
    let runs: Vec<(f64, bool)> = match (record.stable_up_to, record.refused_from) {
        (Some(0.0), _) => Vec::new(),
        (Some(limit), _) => vec![(BESIDE[0] * limit, true), (BESIDE[1] * limit, false)],
        (None, Some(refused)) => vec![(BESIDE[0] * refused, true)],
        (None, None) => vec![(record.scanned_up_to, true)],
    };
    for (number, bounded) in runs {
        // Beyond a limit the worst mode must show itself from the small share of it in the noise.
        let (steps, growth) = grown(session, request, record, number, seed)?;
        let agrees = match growth {
            Some(growth) => (growth <= BOUNDED) == bounded,
            None => !bounded,
        };
        record.confirmation.push(Confirmation { number, steps, growth, agrees });
    }
    Ok(())
}

/// Runs at growing numbers, for a scheme without amplification factors: told, and no limit concluded.
///
/// # Errors
/// The scheme failed.
pub fn by_noise_alone(
    session: &mut Session,
    request: &StabilityRequest,
    seed: u64,
    record: &mut StabilityRecord,
) -> Result<(), Stop> {
    for part in 1..=16 {
        let number = request.scan_to * f64::from(part) / 16.0;
        let (steps, growth) = match grown(session, request, record, number, seed) {
            Err(stop) if stop.is_step_refused() => {
                record.refused_from = Some(number);
                break;
            }
            other => other?,
        };
        record.confirmation.push(Confirmation { number, steps, growth, agrees: true });
        if growth.is_none_or(|growth| growth > BOUNDED) {
            break;
        }
    }
    Ok(())
}

fn grown(
    session: &mut Session,
    request: &StabilityRequest,
    record: &StabilityRecord,
    number: f64,
    seed: u64,
) -> Result<(usize, Option<f64>), Stop> {
    let cells = [admitted(session, &request.equation, CELLS)];
    let numbers = numbers(record.number, number, request.held);
    let setting = Setting::new(session, &request.equation, &request.parameters, &cells, numbers)?;
    let nodes = setting.prepare(session)?;
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &cells);
    Ok((STEPS, finite(noise::growth(session, &setting, &cellwise, STEPS, seed)?)))
}
