//! Long runs from noise on either side of the limit: the spectrum's answer held against the scheme itself.

use super::growth::sampled;
use super::numbers;
use crate::analysis::symbol::SampledSymbol;
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{Confirmation, StabilityRecord, finite};
use crate::studies::cellwise::Cellwise;
use crate::studies::setting::{Setting, admitted};
use crate::studies::{Stop, impulse, noise};

/// Cells of the run: they divide by four and by three, so that the usual worst waves are on the grid.
const CELLS: usize = 96;

/// Steps of the run below the limit.
const STEPS: usize = 2000;

/// A bounded run may still grow by this: modes that are not orthogonal, and the many modes of noise that meet at one point.
pub const BOUNDED: f64 = 30.0;

/// Below the limit.
const BELOW: f64 = 0.99;

/// Beyond the limit: the first of these at which a wave of the run's own grid grows visibly is taken.
const BEYOND: [f64; 4] = [1.05, 1.15, 1.3, 1.6];

/// By how much the worst wave of the run's grid must grow by the spectrum, from the small share of it in the noise.
const VISIBLE: f64 = 1e6;

/// The most steps of a run beyond the limit.
const MOST_STEPS: f64 = 20_000.0;

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
    let runs: Vec<(f64, usize, bool)> = match (record.stable_up_to, record.refused_from) {
        (Some(0.0), _) => Vec::new(),
        (Some(limit), _) => {
            let beyond = beyond(session, request, record, limit)?;
            std::iter::once((BELOW * limit, STEPS, true)).chain(beyond).collect()
        }
        (None, Some(refused)) => vec![(BELOW * refused, STEPS, true)],
        (None, None) => vec![(record.scanned_up_to, STEPS, true)],
    };
    for (number, steps, bounded) in runs {
        let growth = grown(session, request, record, number, steps, seed)?;
        let agrees = match growth {
            Some(growth) => (growth <= BOUNDED) == bounded,
            None => !bounded,
        };
        record.confirmation.push(Confirmation { number, steps, growth, agrees });
    }
    Ok(())
}

/// A number beyond the limit and the steps after which growth must show; `None` where no wave of the run's grid grows visibly there.
fn beyond(
    session: &mut Session,
    request: &StabilityRequest,
    record: &StabilityRecord,
    limit: f64,
) -> Result<Option<(f64, usize, bool)>, Stop> {
    for factor in BEYOND {
        let (setting, cellwise) = prepared(session, request, record, factor * limit)?;
        let excess = match impulse::responses(session, &setting, &cellwise) {
            // It blows up within a step.
            Err(Stop::Analysis(_)) => f64::INFINITY,
            Err(stop) if stop.is_step_refused() => return Ok(None),
            Err(stop) => return Err(stop),
            Ok(responses) => sampled(&SampledSymbol::from_responses(&responses), 0.0)?.excess.value,
        };
        let steps = (VISIBLE.ln() / excess.ln_1p()).max(STEPS as f64);
        if excess > 0.0 && steps <= MOST_STEPS {
            return Ok(Some((factor * limit, steps.ceil() as usize, false)));
        }
    }
    Ok(None)
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
        let growth = match grown(session, request, record, number, STEPS, seed) {
            Err(stop) if stop.is_step_refused() => {
                record.refused_from = Some(number);
                break;
            }
            other => other?,
        };
        record.confirmation.push(Confirmation { number, steps: STEPS, growth, agrees: true });
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
    steps: usize,
    seed: u64,
) -> Result<Option<f64>, Stop> {
    let (setting, cellwise) = prepared(session, request, record, number)?;
    Ok(finite(noise::growth(session, &setting, &cellwise, steps, seed)?))
}

fn prepared(
    session: &mut Session,
    request: &StabilityRequest,
    record: &StabilityRecord,
    number: f64,
) -> Result<(Setting, Cellwise), Stop> {
    let cells = [admitted(session, &request.equation, CELLS)];
    let numbers = numbers(record.number, number, request.held);
    let setting = Setting::new(session, &request.equation, &request.parameters, &cells, numbers)?;
    let nodes = setting.prepare(session)?;
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &cells);
    Ok((setting, cellwise))
}
