//! Claimed invariants against the measured ones.

use super::Judgement;
use crate::claims::InvariantsClaim;
use crate::record::{Invariant, InvariantsRecord, StudyRecord};

/// Weighs claimed invariants: every one must hold. One that is violated refutes the claim, one that could not be tried leaves it undecided.
pub fn judge(claim: &InvariantsClaim, study: &StudyRecord, record: &InvariantsRecord) -> Judgement {
    let one = |invariant: &Invariant| judge_one(*invariant, study, record);
    Judgement::all(claim.request.invariants.iter().map(one).collect())
}

fn judge_one(invariant: Invariant, study: &StudyRecord, record: &InvariantsRecord) -> Judgement {
    let words = invariant.words();
    let Some(check) = record.check(invariant) else {
        let stopped = study.stopped.as_deref().unwrap_or("it was not among what was asked for");
        let reason = format!("{words} was not tried: {stopped}");
        return Judgement::undecided(reason, "a scheme that can be run in a periodic box");
    };
    let says = format!("{words}: {}", check.sentence);
    match check.holds {
        Some(true) => Judgement::upheld(says),
        Some(false) => Judgement::refuted(says),
        None => Judgement::undecided(says, format!("an offer and a step with which {words} can be tried")),
    }
}
