//! The plane of Courant and diffusion numbers, row by row.

use super::growth::Growth;
use crate::analysis::stability::{Scan, search};
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{MapRow, StepNumber};
use crate::studies::Stop;

/// Rows of the map; the first one lies at the first division, since no diffusion at all is another equation.
const ROWS: usize = 24;

/// Divisions of the scan along a row; its ends are found by bisection.
const DIVISIONS: usize = 50;

/// The rows up to the diffusion number `end`.
///
/// # Errors
/// The equation has no such plane, the scheme is not linear, refused or failed.
pub fn rows(session: &mut Session, request: &StabilityRequest, end: f64, seed: u64) -> Result<Vec<MapRow>, Stop> {
    if request.equation != "advection_diffusion" {
        let message =
            format!("a map needs an equation with a Courant and a diffusion number, not `{}`", request.equation);
        return Err(Stop::Request(message));
    }
    let mut rows = Vec::new();
    for row in 1..=ROWS {
        let diffusion_number = end * row as f64 / ROWS as f64;
        let held = StabilityRequest { held: Some(diffusion_number), ..request.clone() };
        let mut growth = Growth::new(session, &held, StepNumber::Courant, seed)?;
        if let Some(failing) = growth.not_linear() {
            return Err(Stop::Analysis(failing));
        }
        let scan = Scan { up_to: request.scan_to, divisions: DIVISIONS, ..Scan::default() };
        let set = search(|value| growth.excess(value), scan)?;
        rows.push(MapRow { diffusion_number, stable: set.intervals.iter().map(|(from, to)| [*from, *to]).collect() });
    }
    Ok(rows)
}
