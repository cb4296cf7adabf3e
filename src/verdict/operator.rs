//! Claims about the operator of a bounded problem against the measured one.

use super::Judgement;
use crate::claims::OperatorClaim;
use crate::record::{OperatorRecord, StudyRecord};

/// How far a spectral radius may lie beyond a claim by the rounding of a step, beside what its own condition allows.
const ROUNDING: f64 = 1e-12;

/// Weighs what is claimed of an operator.
pub fn judge(claim: &OperatorClaim, study: &StudyRecord, record: &OperatorRecord) -> Judgement {
    if let Some(stopped) = &study.stopped {
        let reason = format!("the operator was not measured: {stopped}");
        return Judgement::undecided(reason, "a scheme that can be run with these boundaries");
    }
    let mut judgements = Vec::new();
    if let Some(bound) = claim.spectral_radius_at_most {
        judgements.push(radius(bound, record));
    }
    if let Some(bound) = claim.transient_growth_at_most {
        judgements.push(transient(bound, record));
    }
    Judgement::all(judgements)
}

fn radius(bound: f64, record: &OperatorRecord) -> Judgement {
    let (Some(radius), Some(uncertainty)) = (record.spectral_radius, record.radius_uncertainty) else {
        return Judgement::undecided("the spectral radius of a step is not known", "a one-step integrator, or steps");
    };
    let slack = uncertainty + ROUNDING;
    let says = format!(
        "the spectral radius of a step on {} unknowns is {radius:.9}, claimed at most {bound}",
        record.unknowns
    );
    if radius <= bound + ROUNDING && radius - slack <= bound {
        Judgement::upheld(says)
    } else if radius - slack > bound {
        Judgement::refuted(says)
    } else {
        Judgement::undecided(
            format!("{says}; it is uncertain by {uncertainty:.1e}, since the operator is far from normal"),
            "fewer cells, or a claim about transient growth",
        )
    }
}

fn transient(bound: f64, record: &OperatorRecord) -> Judgement {
    let Some(found) = record.transient else {
        return Judgement::undecided("the growth on the way is not known", "a one-step integrator, or steps");
    };
    let says = format!(
        "the largest growth within {} steps is {:.6e} (after {}), claimed at most {bound}",
        found.steps, found.growth, found.step
    );
    if found.growth > bound * (1.0 + ROUNDING) {
        Judgement::refuted(says)
    } else if found.still_growing {
        Judgement::undecided(format!("{says}, and it is still growing"), "a longer run")
    } else {
        Judgement::upheld(says)
    }
}
