//! A claimed order of accuracy against the measured ladder, by the rule of [`crate::analysis::order`].

use super::Judgement;
use super::words::norm as norm_words;
use crate::analysis::order::{self, Ladder, Outcome, Settings, observe};
use crate::claims::OrderClaim;
use crate::record::{OrderRecord, StudyRecord};

/// Weighs a claimed order: every field that it is about must uphold it.
pub fn judge(claim: &OrderClaim, study: &StudyRecord, record: &OrderRecord) -> Judgement {
    if let Some(stopped) = &study.stopped {
        let measured = record.levels.len();
        let reason = format!("the ladder ended after {measured} level(s): {stopped}");
        return Judgement::undecided(reason, "a scheme that can be run on every level");
    }
    let fields: Vec<&String> = match &claim.field {
        Some(field) => vec![field],
        None => record.levels.first().map(|level| level.errors.keys().collect()).unwrap_or_default(),
    };
    let several = fields.len() > 1;
    let one = |field: &&String| {
        let mut judgement = judge_field(claim, record, field);
        if several {
            judgement.reason = format!("`{field}`: {}", judgement.reason);
        }
        judgement
    };
    Judgement::all(fields.iter().map(one).collect())
}

/// Whether a record decides the claim: what ends the lengthening of a ladder.
pub fn decides(claim: &OrderClaim, record: &OrderRecord) -> bool {
    let fields =
        record.levels.first().map(|level| level.errors.keys().cloned().collect::<Vec<_>>()).unwrap_or_default();
    let about = fields.iter().filter(|field| claim.field.as_ref().is_none_or(|about| about == *field));
    about.map(|field| judge_field(claim, record, field)).all(|judgement| judgement.decided_by.is_none())
}

fn judge_field(claim: &OrderClaim, record: &OrderRecord, field: &str) -> Judgement {
    let ladder = match Ladder::from_series(&record.series(field, &claim.norm)) {
        Ok(ladder) => ladder.with_solution_size(record.size(field, &claim.norm)),
        Err(error) => return Judgement::undecided(error.to_string(), "a ladder from coarse to fine"),
    };
    let settings = Settings { tolerance: claim.tolerance, ..Settings::default() };
    let judged = order::judge(&observe(&ladder, settings), claim.expect, settings);
    let mut reason = format!("in {}, {}", norm_words(&claim.norm), judged.reason);
    if judged.beyond_claim {
        reason.push_str("; that is more than half an order above the claim, which is no mistake but may mean that the problem is blind to a term");
    }
    match judged.outcome {
        Outcome::Upheld => Judgement::upheld(reason),
        Outcome::Refuted => Judgement::refuted(reason),
        Outcome::Undecided => Judgement::undecided(reason, judged.reason.remedy().unwrap_or("a finer ladder")),
    }
}
