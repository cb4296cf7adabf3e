//! The refinement study: errors on a ladder of grids and steps.

pub mod control;
mod functionals;
mod ladder;
mod level;
mod observe;
mod places;
mod semi_discrete;
mod traps;

use std::collections::BTreeMap;
use std::time::{Duration, Instant};

use gridassay_scheme::Operation;

use self::ladder::Rung;
use self::level::Answer;
use super::{Made, Stop, speed};
use crate::claims::OrderRequest;
use crate::host::Session;
use crate::record::{Level, Norms, OrderRecord, Refinement, Study};

pub use observe::observed;
use observe::{observed_at_places, observed_functionals};

/// How long a ladder that the harness chose itself may go on growing.
const BUDGET: Duration = Duration::from_secs(8);

/// The most cells of a level that the harness chooses itself.
const MOST_CELLS: usize = 1 << 21;

/// Runs a ladder. Where the person named none, the harness lengthens its own until `enough` says that the record decides, or the
/// budget is spent.
pub fn run(
    session: &mut Session,
    request: &OrderRequest,
    enough: Option<&dyn Fn(&OrderRecord) -> bool>,
    seed: u64,
) -> Made {
    let mut record = empty(request);
    let mut notes = Vec::new();
    let ended = measure(session, request, enough, seed, &mut record, &mut notes);
    record.observed = observed(&record);
    record.places = observed_at_places(&record);
    record.functionals = observed_functionals(&record);
    Made::new(Study::Order(record), ended, notes)
}

fn empty(request: &OrderRequest) -> OrderRecord {
    let problem = &request.problem;
    OrderRecord {
        equation: problem.equation().to_owned(),
        problem: problem.name().to_owned(),
        parameters: problem.parameters().clone(),
        refine: request.refine,
        operation: Operation::Advance.name().to_owned(),
        times: (!problem.is_steady()).then(|| [problem.start_time(), request.final_time]),
        courant: None,
        diffusion_number: None,
        step_power: (!problem.is_steady() && request.refine != Refinement::Time).then_some(request.step_power),
        levels: Vec::new(),
        solution_size: BTreeMap::new(),
        observed: BTreeMap::new(),
        places: BTreeMap::new(),
        functionals: BTreeMap::new(),
        control: None,
    }
}

fn measure(
    session: &mut Session,
    request: &OrderRequest,
    enough: Option<&dyn Fn(&OrderRecord) -> bool>,
    seed: u64,
    record: &mut OrderRecord,
    notes: &mut Vec<String>,
) -> Result<(), Stop> {
    let problem = &request.problem;
    let steady = problem.is_steady();
    if steady && request.refine == Refinement::Time {
        return Err(Stop::Request(format!("`{}` is steady, so that there is no step to refine", problem.name())));
    }
    let mut rungs = ladder::rungs(request, steady)?;
    notes.extend(traps::notes(request, &rungs));
    if let Some(step) = rungs[0].step {
        record.courant = speed::crossings(problem, &rungs[0].cells)?.map(|rate| rate * step);
        record.diffusion_number = speed::spreading(problem, &rungs[0].cells).map(|rate| rate * step);
    }
    let begun = Instant::now();
    let mut before: Option<Answer> = None;
    let mut next = 0;
    while let Some(rung) = rungs.get(next).cloned() {
        let took = Instant::now();
        let answer = level::run(session, request, &rung, level::Variation::Shaken(seed.wrapping_add(next as u64)))?;
        record.operation = answer.operation.name().to_owned();
        let rung = as_run(rung, &answer, record);
        match request.refine {
            Refinement::Time => push_difference(record, &rung, request, before.as_ref(), &answer),
            _ => push_error(record, &rung, request, &answer),
        }
        before = Some(answer);
        next += 1;
        let finite = record.levels.last().is_none_or(|level| level.note.is_none());
        if next == rungs.len() && finite && may_grow(request, &rung, begun.elapsed() + 8 * took.elapsed()) {
            record.observed = observed(record);
            if enough.is_some_and(|enough| !enough(record)) {
                rungs.push(ladder::next(request, &rung, steady)?);
                notes.push(format!("the ladder was lengthened to {:?} cells", rungs[next].cells));
            }
        }
    }
    notes.dedup();
    Ok(())
}

/// The rung as it was run: where the scheme or the harness chose the steps, the planned ones were not used and are not told.
fn as_run(rung: Rung, answer: &Answer, record: &mut OrderRecord) -> Rung {
    if !matches!(answer.operation, Operation::March | Operation::Rate) {
        return rung;
    }
    (record.courant, record.diffusion_number, record.step_power) = (None, None, None);
    Rung { step: None, steps: None, ..rung }
}

/// Whether the harness may add a finer level of its own: the next one takes about eight times as long in 2-D and time.
fn may_grow(request: &OrderRequest, finest: &Rung, would_take: Duration) -> bool {
    let cells: usize = finest.cells.iter().map(|n| 2 * n).product();
    request.cells.is_none() && request.refine != Refinement::Time && cells <= MOST_CELLS && would_take < BUDGET
}

fn push_error(record: &mut OrderRecord, rung: &Rung, request: &OrderRequest, answer: &Answer) {
    let problem = &request.problem;
    let time = if problem.is_steady() { 0.0 } else { request.final_time };
    let h = (problem.upper()[0] - problem.lower()[0]) / rung.cells[0] as f64;
    let errors = level::differences(&answer.layout, &answer.state, &answer.exact);
    let mut floor = level::differences(&answer.layout, &answer.shaken, &answer.state);
    if answer.operation == Operation::Rate {
        let largest = answer.exact.iter().flatten().fold(0.0_f64, |largest, value| largest.max(value.abs()));
        let in_time = Some(semi_discrete::TOLERANCE * largest);
        for norms in &mut floor {
            *norms = sum((*norms, Norms { l1: in_time, l2: in_time, linf: in_time }));
        }
    }
    let zeros: Vec<Vec<f64>> = answer.exact.iter().map(|field| vec![0.0; field.len()]).collect();
    record.solution_size = by_field(&answer.names, level::differences(&answer.layout, &answer.exact, &zeros));
    record.levels.push(Level {
        cells: rung.cells.clone(),
        h,
        step: rung.step,
        steps: rung.steps,
        errors: by_field(&answer.names, errors),
        floor: by_field(&answer.names, floor),
        places: places::norms(problem, &rung.cells, answer, &answer.state, &answer.exact),
        functionals: functionals::values(problem, time, answer),
        seconds: answer.seconds,
        note: level::not_finite(&answer.names, &answer.state),
    });
}

/// Where the step alone is refined: the difference of this rung from the one before stands with the one before, whose error is the larger.
fn push_difference(
    record: &mut OrderRecord,
    rung: &Rung,
    request: &OrderRequest,
    before: Option<&Answer>,
    answer: &Answer,
) {
    if let (Some(before), Some(level)) = (before, record.levels.last_mut()) {
        level.errors = by_field(&answer.names, level::differences(&answer.layout, &before.state, &answer.state));
        let own = level::differences(&before.layout, &before.shaken, &before.state);
        let next = level::differences(&answer.layout, &answer.shaken, &answer.state);
        level.floor = by_field(&answer.names, own.into_iter().zip(next).map(sum).collect());
        level.places = places::norms(&request.problem, &rung.cells, answer, &before.state, &answer.state);
        level.note = level::not_finite(&answer.names, &before.state);
    }
    record.levels.push(Level {
        cells: rung.cells.clone(),
        h: rung.step.unwrap_or(f64::NAN),
        step: rung.step,
        steps: rung.steps,
        seconds: answer.seconds,
        note: Some("the finest step: what the others are held against".to_owned()),
        ..Level::default()
    });
}

fn sum((a, b): (Norms, Norms)) -> Norms {
    Norms { l1: add(a.l1, b.l1), l2: add(a.l2, b.l2), linf: add(a.linf, b.linf) }
}

fn add(a: Option<f64>, b: Option<f64>) -> Option<f64> {
    Some(a? + b?)
}

fn by_field(names: &[String], norms: Vec<Norms>) -> BTreeMap<String, Norms> {
    names.iter().cloned().zip(norms).collect()
}
