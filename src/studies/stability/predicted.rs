//! Stable ranges that follow from the scheme's rate: with an integrator that is asked about, or beside the range of the scheme's own steps.

use crate::analysis::integrators;
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{PredictedRange, StabilityRecord};
use crate::studies::Stop;
use crate::studies::semi_discrete::{Rate, USUAL, one};

/// How far a predicted limit may lie from the measured one and still be the same: both are found by bisection, the worst wavenumber by search.
const SAME: f64 = 1e-6;

/// The range with one integrator, told as the scheme's range.
///
/// # Errors
/// No rate is offered for this case, it is not linear, or the scheme failed.
pub fn by_integrator(
    session: &mut Session,
    request: &StabilityRequest,
    integrator: &str,
    seed: u64,
    record: &mut StabilityRecord,
) -> Result<(), Stop> {
    if request.held.is_some() {
        let message = "with an integrator the other number cannot be held: the rate must not change with the step";
        return Err(Stop::Request(message.to_owned()));
    }
    let rate = Rate::read(session, &request.equation, &request.parameters, one(record.number), seed)?;
    let Some(rate) = rate else {
        let message = format!("the scheme offers no linear, shift-invariant rate for `{}`", request.equation);
        return Err(Stop::NotOffered(message));
    };
    record.parameters.clone_from(&rate.setting.parameters);
    record.cells.clone_from(&rate.setting.case.grid.cells);
    let others = integrators::NAMES.iter().filter(|name| **name != integrator);
    let all = std::iter::once(&integrator).chain(others).filter_map(|name| rate.predict(name, request.scan_to));
    record.predicted = all.collect();
    let own = &record.predicted[0];
    (record.stable_up_to, record.weak_growth) = (own.stable_up_to, own.weak_growth);
    record.intervals = own.stable_up_to.filter(|limit| *limit > 0.0).map(|limit| [0.0, limit]).into_iter().collect();
    Ok(())
}

/// The ranges with the usual integrators, each held against the measured one. Nothing where no rate is offered, or where a number is held.
///
/// # Errors
/// The scheme failed.
pub fn beside_the_measured(
    session: &mut Session,
    request: &StabilityRequest,
    seed: u64,
    record: &mut StabilityRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    if request.held.is_some() || record.refused_from.is_some() {
        return Ok(());
    }
    let rate = Rate::read(session, &request.equation, &request.parameters, one(record.number), seed)?;
    let Some(rate) = rate else { return Ok(()) };
    for name in USUAL {
        let Some(mut range) = rate.predict(name, request.scan_to) else { continue };
        range.is_the_measured = Some(is_same(&range, record));
        record.predicted.push(range);
    }
    if !record.predicted.iter().any(|range| range.is_the_measured == Some(true)) {
        let message = "none of the usual Runge-Kutta methods would have this range with the scheme's own rate: its steps are made in another \
                       way, or the rate and the steps do not belong together";
        notes.push(message.to_owned());
    }
    Ok(())
}

fn is_same(range: &PredictedRange, record: &StabilityRecord) -> bool {
    match (range.stable_up_to, record.stable_up_to) {
        (None, None) => true,
        (Some(0.0), Some(0.0)) => match (range.weak_growth, record.weak_growth) {
            // Measured growth at the smallest steps carries the rounding of the steps themselves.
            (Some(a), Some(b)) => (a.power - b.power).abs() <= 0.1 && (a.coefficient / b.coefficient).ln().abs() <= 0.1,
            (a, b) => a.is_none() && b.is_none(),
        },
        (Some(a), Some(b)) => (a - b).abs() <= SAME * b.max(1.0),
        _ => false,
    }
}
