//! The Fourier study: what one step does to every mode that a periodic grid holds.

mod claimed;
mod directions;
mod exact;
mod linear;
mod modified;
mod nonlinear;
mod resolution;
mod semi_discrete;

use gridassay_scheme::Operation;

use super::setting::{Numbers, Setting};
use super::{Made, Stop, linearity};
use crate::claims::ModesRequest;
use crate::host::Session;
use crate::record::{ModesRecord, Study};
use crate::studies::cellwise::Cellwise;

/// Measures the modes; where a symbol is claimed as a formula, holds G against it.
pub fn run(session: &mut Session, request: &ModesRequest, symbol: Option<&str>, seed: u64) -> Made {
    let mut record = ModesRecord {
        equation: request.equation.clone(),
        parameters: request.parameters.clone(),
        cells: request.cells.clone(),
        courant: request.courant,
        diffusion_number: request.diffusion_number,
        ..ModesRecord::default()
    };
    let mut notes = Vec::new();
    let ended = measure(session, request, symbol, seed, &mut record, &mut notes);
    // A scheme may offer its rate alone, or beside its steps.
    let rate_alone = matches!(ended, Err(Stop::NotOffered(_)));
    let ended = match semi_discrete::measure(session, request, seed, rate_alone) {
        Ok(None) => ended,
        Ok(found) => {
            record.semi_discrete = found;
            if rate_alone {
                notes.push(
                    "the scheme offers its rate and no steps, so that it has no amplification factor of its own".into(),
                );
                told_of_rate(session, request, &mut record)
            } else {
                ended
            }
        }
        Err(stop) if rate_alone => Err(stop),
        Err(stop) => {
            notes.push(format!("the rate was not measured: {stop}"));
            ended
        }
    };
    Made::new(Study::Modes(record), ended, notes)
}

/// The setting of a scheme that offers its rate alone.
fn told_of_rate(session: &Session, request: &ModesRequest, record: &mut ModesRecord) -> Result<(), Stop> {
    let numbers = Numbers { courant: request.courant, diffusion: request.diffusion_number };
    let (equation, fixed) = (&request.equation, &request.parameters);
    let setting = Setting::asking_for(Operation::Rate, session, equation, fixed, &request.cells, numbers)?;
    record.parameters = setting.parameters;
    record.courant = setting.numbers.courant;
    record.diffusion_number = setting.numbers.diffusion;
    record.step = setting.step;
    record.linear = record.semi_discrete.as_ref().map(|found| found.linear);
    Ok(())
}

fn measure(
    session: &mut Session,
    request: &ModesRequest,
    symbol: Option<&str>,
    seed: u64,
    record: &mut ModesRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    let numbers = Numbers { courant: request.courant, diffusion: request.diffusion_number };
    let setting = Setting::new(session, &request.equation, &request.parameters, &request.cells, numbers)?;
    record.parameters = setting.parameters.clone();
    record.courant = setting.numbers.courant;
    record.diffusion_number = setting.numbers.diffusion;
    record.step = setting.step;
    let nodes = setting.prepare(session)?;
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &request.cells);
    let trial = linearity::trial(session, &setting, &cellwise, seed)?;
    let worst = trial.superposition.max(trial.shift).max(trial.time);
    record.linear = Some(trial.is_linear() && !request.mode_by_mode);
    record.uncertainty = Some(worst);
    record.linearity = Some(trial);
    if request.mode_by_mode && trial.is_linear() {
        notes.push("each wavenumber was tried by itself, as asked, although the scheme is linear".to_owned());
        return nonlinear::measure(session, &setting, record);
    }
    if !trial.is_linear() {
        notes
            .push(format!("{}: what follows is its approximate dispersion relation (Pirozzoli 2006)", trial.failing()));
        return nonlinear::measure(session, &setting, record);
    }
    let offsets = nodes.map_or_else(|| shared_offsets(cellwise.per_direction), |nodes| nodes.offsets);
    linear::measure(session, &setting, &cellwise, &offsets, record)?;
    if let Some(formula) = symbol {
        record.claimed_symbol = Some(claimed::compare(formula, record)?);
    }
    Ok(())
}

/// Where the values of a cell sit within it, as shares of the cell: `count` intervals of nodes, each at its lower end.
fn shared_offsets(count: usize) -> Vec<f64> {
    (0..count).map(|value| value as f64 / count as f64).collect()
}
