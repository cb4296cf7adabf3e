//! Invariants: what a scheme keeps of what its equation keeps. One file a check; every check measures a figure, allows what rounding may do, and tells where
//! it is worst. A check that the scheme's offers or the equation do not allow says so.
//!
//! Every setting that is offered is tried: each number of dimensions, and each combination of signs of the velocity.

mod conservation;
mod parameters;
mod repeatability;
mod run;
mod states;
mod still_water;
mod symmetry;
mod tally;
mod trial;
mod uniform;
mod variation;

use gridassay_scheme::NoCallbacks;

pub use self::parameters::within as parameters_within;
use self::run::History;
use self::states::Family;
use self::tally::Tally;
use self::trial::{Prepared, Trial};
use super::{Made, Stop};
use crate::claims::InvariantsRequest;
use crate::host::Session;
use crate::record::{Invariant, InvariantCheck, InvariantsRecord, Study};

/// Tries the invariants that are asked for in every setting that the scheme offers.
pub fn run(session: &mut Session, request: &InvariantsRequest, seed: u64) -> Made {
    let mut record = InvariantsRecord {
        equation: request.equation.clone(),
        parameters: request.parameters.clone(),
        settings: Vec::new(),
        checks: Vec::new(),
    };
    let trials = match trial::trials(session, request) {
        Ok(trials) => trials,
        Err(stop) => return Made::new(Study::Invariants(record), Err(stop), Vec::new()),
    };
    record.settings = trials.iter().map(Trial::record).collect();
    let mut invariants = Invariant::ALL.into_iter().filter(|one| request.invariants.contains(one)).peekable();
    let runs: Vec<Runs> = match invariants.peek() {
        Some(_) => trials.iter().map(|trial| Runs::of(session, trial, &request.invariants, seed)).collect(),
        None => Vec::new(),
    };
    for invariant in invariants {
        record.checks.push(check(session, &trials, &runs, invariant, request.tolerance, seed));
    }
    Made::new(Study::Invariants(record), Ok(()), Vec::new())
}

/// The runs of one setting that several checks look at.
struct Runs {
    prepared: Result<Prepared, String>,
    histories: Vec<History>,
}

impl Runs {
    fn of(session: &mut Session, trial: &Trial, invariants: &[Invariant], seed: u64) -> Self {
        let wanted = |list: &[Invariant]| list.iter().any(|invariant| invariants.contains(invariant));
        let mut families = Vec::new();
        if wanted(&[Invariant::Conservation, Invariant::TotalVariation, Invariant::Bounds]) {
            families.push(Family::Mixed);
        }
        if wanted(&[Invariant::Conservation, Invariant::TotalVariation, Invariant::Bounds, Invariant::Positivity]) {
            families.push(Family::NonNegative);
        }
        let mut prepare = || -> Result<(Prepared, Vec<History>), Stop> {
            let nodes = session.prepare(&trial.case, &mut NoCallbacks)?;
            let prepared = trial.prepared(nodes)?;
            let histories = run::histories(session, trial, &prepared, &families, seed)?;
            Ok((prepared, histories))
        };
        match prepare() {
            Ok((prepared, histories)) => Self { prepared: Ok(prepared), histories },
            Err(stop) => Self { prepared: Err(stop.to_string()), histories: Vec::new() },
        }
    }
}

fn check(
    session: &mut Session,
    trials: &[Trial],
    runs: &[Runs],
    invariant: Invariant,
    tolerance: f64,
    seed: u64,
) -> InvariantCheck {
    let mut tally = Tally::new(invariant, tolerance);
    for (number, (trial, runs)) in trials.iter().zip(runs).enumerate() {
        if let Some(reason) = beside_the_point(invariant, trial, trials) {
            if !trials.iter().any(|trial| beside_the_point(invariant, trial, trials).is_none()) {
                tally.obstacle(reason);
            }
            continue;
        }
        let prepared = match &runs.prepared {
            Ok(prepared) => prepared,
            Err(reason) => {
                tally.obstacle(reason.clone());
                continue;
            }
        };
        let other = trials.iter().cycle().nth(number + 1).filter(|other| other.setting != trial.setting);
        let ended = in_setting(session, trial, other, prepared, &runs.histories, invariant, seed, &mut tally);
        tally.ended(ended);
    }
    tally.finish()
}

/// One check in one setting.
#[allow(clippy::too_many_arguments)]
fn in_setting(
    session: &mut Session,
    trial: &Trial,
    other: Option<&Trial>,
    prepared: &Prepared,
    histories: &[History],
    invariant: Invariant,
    seed: u64,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let scalar = variation::is_monotone(&trial.case.equation);
    let looked_at: Vec<&History> = match invariant {
        Invariant::Positivity => histories.iter().filter(|one| one.family == Family::NonNegative).collect(),
        _ => histories.iter().collect(),
    };
    match invariant {
        Invariant::Conservation => {
            conservation::check(trial, prepared, histories, tally);
            note_ends(&looked_at, tally);
            let here = |place: &&mut crate::record::WorstPlace| place.setting == trial.setting && place.cell.is_none();
            let field = tally.violation().filter(here).and_then(|place| place.field.clone());
            if let Some(field) = field.filter(|_| trial.case.equation != "incompressible") {
                session.prepare(&trial.case, &mut NoCallbacks)?;
                conservation::locate(session, trial, prepared, &field, tally)?;
            }
        }
        Invariant::UniformState => {
            session.prepare(&trial.case, &mut NoCallbacks)?;
            uniform::check(session, trial, prepared, tally)?;
        }
        Invariant::TotalVariation => {
            variation::total_variation(trial, prepared, histories, tally);
            note_ends(&looked_at, tally);
        }
        Invariant::Bounds => {
            variation::bounds(trial, prepared, histories, tally);
            note_ends(&looked_at, tally);
        }
        Invariant::Positivity => {
            if scalar {
                variation::positivity(trial, prepared, histories, tally);
            } else {
                let histories: Vec<History> = looked_at.iter().map(|one| (*one).clone()).collect();
                variation::positivity_of_system(trial, &histories, tally);
            }
            note_ends(&looked_at, tally);
        }
        Invariant::Mirror => symmetry::mirror(session, trial, prepared, seed, tally)?,
        Invariant::Exchange => symmetry::exchange(session, trial, prepared, seed, tally)?,
        Invariant::StillWater => still_water::check(session, trial, tally)?,
        Invariant::FreeStream => uniform::free_stream(session, trial, seed, tally)?,
        Invariant::Repeatability => repeatability::check(session, trial, other, prepared, seed, tally)?,
    }
    Ok(())
}

/// Why an invariant has no meaning in a setting, where it has none. A setting beside the point is passed over where another one is to the point.
fn beside_the_point(invariant: Invariant, trial: &Trial, trials: &[Trial]) -> Option<String> {
    let equation = trial.case.equation.as_str();
    let scalar = variation::is_monotone(equation);
    let system = matches!(equation, "shallow_water" | "euler" | "navier_stokes");
    let mirrored_here = || trials.iter().any(|other| other.setting < trial.setting && mirrors(other, trial));
    match invariant {
        Invariant::TotalVariation if !scalar || trial.case.dimensions > 1 => Some(format!(
            "solutions of `{equation}` in {} dimension(s) are not known to keep their total variation",
            trial.case.dimensions
        )),
        Invariant::Bounds if !scalar => Some(format!("solutions of `{equation}` do not keep their initial bounds")),
        Invariant::Positivity if !scalar && !system => {
            Some(format!("solutions of `{equation}` do not keep their sign"))
        }
        Invariant::StillWater if equation != "shallow_water" => Some(format!("`{equation}` has no water")),
        Invariant::Exchange if trial.case.dimensions < 2 => {
            Some("there is no y to exchange with x in one dimension".to_owned())
        }
        Invariant::FreeStream if trial.case.dimensions < 2 => {
            Some("mapped grids are tried in two dimensions and more, which the scheme does not offer".to_owned())
        }
        // Its own mirror image was the twin of an earlier setting.
        Invariant::Mirror if trial.case.dimensions == 1 && mirrored_here() => {
            Some("the mirrored setting was tried".to_owned())
        }
        _ => None,
    }
}

/// Whether two settings in one dimension are each other's mirror images.
fn mirrors(a: &Trial, b: &Trial) -> bool {
    a.case.grid == b.case.grid && a.signs.iter().zip(&b.signs).all(|(a, b)| *a == -*b)
}

/// Takes down how runs ended, where they ended early.
fn note_ends(histories: &[&History], tally: &mut Tally) {
    for history in histories {
        if let Some(step) = history.blew_up {
            tally.obstacle(format!(
                "the run from {} is not finite after {step} step(s): the scheme is not stable at this step",
                history.label
            ));
        }
        if let Some(stopped) = &history.stopped {
            tally.obstacle(stopped.clone());
        }
    }
}

/// The cell with a flat index, from 0 in each direction.
fn cell_of(cells: &[usize], flat: usize) -> Vec<usize> {
    let mut rest = flat;
    cells
        .iter()
        .map(|n| {
            let along = rest % n;
            rest /= n;
            along
        })
        .collect()
}

/// The cell that a value belongs to; `None` where cells share values.
fn cell_of_index(trial: &Trial, index: usize) -> Option<Vec<usize>> {
    let plain = trial.offer.shared_order == 1 && trial.offer.values != gridassay_scheme::Values::CellNodes;
    plain.then(|| cell_of(&trial.case.grid.cells, index))
}
