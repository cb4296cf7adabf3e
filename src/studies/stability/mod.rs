//! The study of the stable steps: scan and bisection over the Courant or diffusion number, over all wavenumbers, then long runs from noise.

mod confirm;
mod growth;
mod map;
mod predicted;

use self::growth::Growth;
use super::setting::Numbers;
use super::{Made, Stop};
use crate::analysis::stability::{Scan, StableRange, StableSet, search};
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{StabilityRecord, StepNumber, Study, WeakGrowth};

/// Measures the stable set.
pub fn run(session: &mut Session, request: &StabilityRequest, seed: u64) -> Made {
    let number = request.number.unwrap_or_else(|| own_number(&request.equation));
    let mut record = StabilityRecord {
        equation: request.equation.clone(),
        parameters: request.parameters.clone(),
        cells: Vec::new(),
        number,
        held: request.held,
        stable_up_to: None,
        scanned_up_to: request.scan_to,
        intervals: Vec::new(),
        worst_theta: None,
        growth_at_limit: None,
        weak_growth: None,
        refused_from: None,
        by_runs_alone: false,
        scan: Vec::new(),
        confirmation: Vec::new(),
        predicted: Vec::new(),
        map: Vec::new(),
    };
    let mut notes = Vec::new();
    let ended = measure(session, request, seed, &mut record, &mut notes);
    Made::new(Study::Stability(record), ended, notes)
}

/// The number that measures the step of an equation by itself: the Courant number where anything moves.
fn own_number(equation: &str) -> StepNumber {
    match equation {
        "diffusion" => StepNumber::DiffusionNumber,
        _ => StepNumber::Courant,
    }
}

/// The numbers of a setting in which `number` has the value `value`.
fn numbers(number: StepNumber, value: f64, held: Option<f64>) -> Numbers {
    match number {
        StepNumber::Courant => Numbers { courant: Some(value), diffusion: held },
        StepNumber::DiffusionNumber => Numbers { courant: held, diffusion: Some(value) },
    }
}

fn measure(
    session: &mut Session,
    request: &StabilityRequest,
    seed: u64,
    record: &mut StabilityRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    if let Some(integrator) = &request.integrator {
        return predicted::by_integrator(session, request, integrator, seed, record);
    }
    if let Some(end) = request.map_to {
        record.map = map::rows(session, request, end, seed)?;
    }
    let mut growth = Growth::new(session, request, record.number, seed)?;
    record.parameters = growth.parameters();
    if let Some(failing) = growth.not_linear() {
        notes.push(format!("{failing}: there is no amplification factor, so that only runs from noise are told"));
        record.by_runs_alone = true;
        return confirm::by_noise_alone(session, request, seed, record);
    }
    let scan = Scan { up_to: request.scan_to, ..Scan::default() };
    let set = search(|value| growth.excess(value), scan)?;
    record.cells = growth.cells();
    record.scan = growth.scanned();
    record.refused_from = growth.refused_from();
    tell(&set, &mut growth, record)?;
    confirm::from_noise(session, request, seed, record)?;
    if let Err(stop) = predicted::beside_the_measured(session, request, seed, record, notes) {
        notes.push(format!("the rate was not measured: {stop}"));
    }
    Ok(())
}

/// Enters a stable set into the record.
fn tell(set: &StableSet, growth: &mut Growth<'_>, record: &mut StabilityRecord) -> Result<(), Stop> {
    record.intervals = set.intervals.iter().map(|(from, to)| [*from, *to]).collect();
    match set.range {
        StableRange::Unlimited => {}
        StableRange::LimitedTo { limit, uncertainty } => {
            // Where the scheme refuses larger steps, it never grew: the bound is its own.
            let beyond = limit + uncertainty.max(1e-9 * limit);
            if record.refused_from.is_some_and(|refused| refused <= beyond) {
                return Ok(());
            }
            record.stable_up_to = Some(limit);
            record.worst_theta = growth.worst_theta(limit * 1.001)?;
            if let Some(theta) = record.worst_theta {
                record.growth_at_limit = growth.defect_at(limit, theta)?;
            }
        }
        StableRange::NoStableStep { growth } => {
            record.stable_up_to = Some(0.0);
            record.weak_growth = growth.and_then(WeakGrowth::of);
        }
    }
    Ok(())
}
