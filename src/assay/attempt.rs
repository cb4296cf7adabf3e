//! One claim tried: the studies that it needs, and the judgement on them.
//!
//! A velocity of one sign hides an upwind switch that never switches. Where the person left the velocity open and the scheme
//! offers both signs, every study is made twice, the second time with the velocity turned round, and a claim stands only if both
//! uphold it.

use std::time::Instant;

use super::control::add_control;
use crate::claims::{
    InvariantsClaim, InvariantsRequest, ModesClaim, ModesRequest, OperatorClaim, OperatorRequest, OrderClaim,
    OrderRequest, StabilityClaim, StabilityRequest,
};
use crate::host::Session;
use crate::record::{OrderRecord, Parameters, Study, StudyRecord};
use crate::studies::setting::generic_parameters;
use crate::studies::{Made, invariants, modes, operator, order, stability};
use crate::verdict::{self, Judgement};

/// The studies made for a claim, and what came of them.
#[derive(Clone, Debug)]
pub struct Attempt {
    /// The studies, the first with the claim's own id.
    pub studies: Vec<StudyRecord>,
    /// The judgement on all of them together.
    pub judgement: Judgement,
}

/// Where an attempt stands: its id, the scheme's name and the run's seed.
#[derive(Clone, Copy, Debug)]
pub struct Place<'a> {
    /// The claim's id.
    pub id: &'a str,
    /// The scheme's name.
    pub scheme: &'a str,
    /// Seed of every random state.
    pub seed: u64,
}

/// Tries a claim about an order of accuracy.
pub fn attempt_order(session: &mut Session, claim: &OrderClaim, place: Place<'_>) -> Attempt {
    let enough = |record: &OrderRecord| verdict::order::decides(claim, record);
    let make = |session: &mut Session, request: &OrderRequest| order::run(session, request, Some(&enough), place.seed);
    let mirrored = mirrored_order(&claim.request);
    let begun = Instant::now();
    let studies = both(session, place, &claim.request, mirrored.as_ref(), make);
    let took = begun.elapsed() / studies.len().max(1) as u32;
    let judge = |study: &StudyRecord| match &study.study {
        Study::Order(record) => verdict::order::judge(claim, study, record),
        _ => unreachable!("an order study was made"),
    };
    let mut attempt = judged(studies, judge);
    add_control(session, claim, &mut attempt, took);
    attempt
}

/// Tries a claim about modes.
pub fn attempt_modes(session: &mut Session, claim: &ModesClaim, place: Place<'_>) -> Attempt {
    let make = |session: &mut Session, request: &ModesRequest| {
        modes::run(session, request, claim.symbol.as_deref(), place.seed)
    };
    let mirrored = mirrored(&claim.request.equation, &claim.request.parameters, claim.request.cells.len())
        .map(|parameters| ModesRequest { parameters, ..claim.request.clone() });
    // A claimed symbol is written for one sign of the velocity.
    let mirrored = mirrored.filter(|_| claim.symbol.is_none());
    let studies = both(session, place, &claim.request, mirrored.as_ref(), make);
    let judge = |study: &StudyRecord| match &study.study {
        Study::Modes(record) => verdict::modes::judge(claim, study, record),
        _ => unreachable!("a modes study was made"),
    };
    judged(studies, judge)
}

/// Tries a claim about stable steps.
pub fn attempt_stability(session: &mut Session, claim: &StabilityClaim, place: Place<'_>) -> Attempt {
    let make = |session: &mut Session, request: &StabilityRequest| stability::run(session, request, place.seed);
    let mirrored = mirrored(&claim.request.equation, &claim.request.parameters, 1)
        .map(|parameters| StabilityRequest { parameters, ..claim.request.clone() });
    let studies = both(session, place, &claim.request, mirrored.as_ref(), make);
    let judge = |study: &StudyRecord| match &study.study {
        Study::Stability(record) => verdict::stability::judge(claim, study, record),
        _ => unreachable!("a stability study was made"),
    };
    judged(studies, judge)
}

/// Tries a claim about invariants. The study itself tries every sign of the velocity that is offered.
pub fn attempt_invariants(session: &mut Session, claim: &InvariantsClaim, place: Place<'_>) -> Attempt {
    let make = |session: &mut Session, request: &InvariantsRequest| invariants::run(session, request, place.seed);
    let studies = both(session, place, &claim.request, None, make);
    let judge = |study: &StudyRecord| match &study.study {
        Study::Invariants(record) => verdict::invariants::judge(claim, study, record),
        _ => unreachable!("a study of invariants was made"),
    };
    judged(studies, judge)
}

/// Tries a claim about the operator of a bounded problem.
pub fn attempt_operator(session: &mut Session, claim: &OperatorClaim, place: Place<'_>) -> Attempt {
    let make = |session: &mut Session, request: &OperatorRequest| operator::run(session, request, place.seed);
    let studies = both(session, place, &claim.request, None, make);
    let judge = |study: &StudyRecord| match &study.study {
        Study::Operator(record) => verdict::operator::judge(claim, study, record),
        _ => unreachable!("a study of an operator was made"),
    };
    judged(studies, judge)
}

/// The study as asked for and, where there is one, its twin. A twin that the scheme does not offer is left out.
fn both<R>(
    session: &mut Session,
    place: Place<'_>,
    request: &R,
    mirrored: Option<&R>,
    mut make: impl FnMut(&mut Session, &R) -> Made,
) -> Vec<StudyRecord> {
    let record = |id: String, made: Made| StudyRecord {
        id,
        scheme: place.scheme.to_owned(),
        study: made.study,
        stopped: made.stopped,
        notes: made.notes,
    };
    let first = make(session, request);
    let mut studies = vec![record(place.id.to_owned(), first)];
    if let Some(mirrored) = mirrored.filter(|_| studies[0].stopped.is_none()) {
        let twin = make(session, mirrored);
        match twin.not_offered {
            true => studies[0]
                .notes
                .push("the scheme offers one sign of the velocity only, so that the other was not tried".to_owned()),
            false => studies.push(record(format!("{}-mirrored", place.id), twin)),
        }
    }
    studies
}

fn judged(studies: Vec<StudyRecord>, judge: impl Fn(&StudyRecord) -> Judgement) -> Attempt {
    let mut judgements: Vec<Judgement> = studies.iter().map(judge).collect();
    if let [first, twin] = judgements.as_mut_slice() {
        match first.reason == twin.reason {
            true => {
                first.reason += "; the same with the velocity turned round";
                twin.reason.clone_from(&first.reason);
            }
            false => twin.reason = format!("with the velocity turned round: {}", twin.reason),
        }
    }
    Attempt { studies, judgement: Judgement::all(judgements) }
}

fn mirrored_order(request: &OrderRequest) -> Option<OrderRequest> {
    let velocity = request.problem.parameters().get("velocity").filter(|_| request.velocity_is_open)?;
    let turned = Parameters::from([("velocity".to_owned(), velocity.iter().map(|a| -a).collect())]);
    let problem = request.problem.with_parameters(&turned).ok()?;
    Some(OrderRequest { problem, ..request.clone() })
}

/// The parameters with the equation's generic velocity turned round; `None` where there is no velocity, or the person gave one.
fn mirrored(equation: &str, fixed: &Parameters, dimensions: usize) -> Option<Parameters> {
    let generic = generic_parameters(equation, dimensions);
    let velocity = generic.get("velocity").filter(|velocity| velocity.iter().any(|a| *a != 0.0))?;
    if fixed.contains_key("velocity") {
        return None;
    }
    let mut parameters = fixed.clone();
    parameters.insert("velocity".to_owned(), velocity.iter().map(|a| -a).collect());
    Some(parameters)
}
