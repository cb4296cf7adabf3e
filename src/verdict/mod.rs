//! Measurements against claims: upheld, refuted or undecided, and why. Judges what stands in the record; measures nothing.

pub mod invariants;
pub mod modes;
pub mod operator;
pub mod order;
pub mod stability;
pub mod words;

use crate::record::Verdict;

/// What became of a claim, with its reason and what would decide it.
#[derive(Clone, Debug, PartialEq)]
pub struct Judgement {
    /// What became of it.
    pub verdict: Verdict,
    /// Why: a sentence with its numbers.
    pub reason: String,
    /// What would decide it, where it is undecided.
    pub decided_by: Option<String>,
}

impl Judgement {
    /// The evidence supports the claim.
    pub fn upheld(reason: impl Into<String>) -> Self {
        Self { verdict: Verdict::Upheld, reason: reason.into(), decided_by: None }
    }

    /// The evidence speaks against the claim.
    pub fn refuted(reason: impl Into<String>) -> Self {
        Self { verdict: Verdict::Refuted, reason: reason.into(), decided_by: None }
    }

    /// The evidence does not suffice.
    pub fn undecided(reason: impl Into<String>, decided_by: impl Into<String>) -> Self {
        Self { verdict: Verdict::Undecided, reason: reason.into(), decided_by: Some(decided_by.into()) }
    }

    /// Several judgements on one claim together: the worst of them decides, and all that are equally bad give their reasons.
    pub fn all(judgements: Vec<Self>) -> Self {
        let Some(verdict) = Verdict::overall(judgements.iter().map(|judgement| judgement.verdict)) else {
            return Self::undecided("nothing was measured", "a study that can be made");
        };
        let mut worst = judgements.into_iter().filter(|judgement| judgement.verdict == verdict);
        let mut together = worst.next().expect("the overall verdict is one of them");
        for other in worst {
            if !together.reason.contains(&other.reason) {
                together.reason = format!("{}; {}", together.reason, other.reason);
            }
        }
        together
    }
}
