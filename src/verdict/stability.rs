//! A claimed stable range against the measured one.

use super::Judgement;
use crate::claims::StabilityClaim;
use crate::record::{StabilityRecord, StudyRecord, nine_digits as number};

/// How far beyond a measured limit a claim may lie and still name that limit: claims are written in decimals, limits found by bisection.
const SAME: f64 = 1e-6;

/// Weighs a stable range.
pub fn judge(claim: &StabilityClaim, study: &StudyRecord, record: &StabilityRecord) -> Judgement {
    let words = &match &claim.request.integrator {
        Some(integrator) => format!("{} with {integrator}", record.number.words()),
        None => record.number.words().to_owned(),
    };
    if let Some(stopped) = &study.stopped {
        return Judgement::undecided(
            format!("the range was not measured: {stopped}"),
            "a scheme that can be run over the whole range",
        );
    }
    if record.by_runs_alone {
        return by_runs(claim, record);
    }
    if let Some(weak) = &record.weak_growth {
        return Judgement::refuted(format!(
            "no {words} is stable: the largest growth in a step is {:.3e} times the {words} to the power {:.2}, tenfold after {:.3e} steps at 0.1",
            weak.coefficient, weak.power, weak.steps_to_tenfold
        ));
    }
    if let Some(run) = record.confirmation.iter().find(|run| !run.agrees) {
        return Judgement::undecided(
            format!(
                "the spectrum and a run of {} steps from noise at {words} {} disagree",
                run.steps,
                number(run.number)
            ),
            "finding out why: a scheme that depends on what it was asked before, or is not linear",
        );
    }
    match record.stable_up_to {
        None => without_limit(claim, record),
        Some(0.0) => Judgement::refuted(format!("no {words} is stable, however small")),
        Some(limit) if limit < claim.up_to * (1.0 - SAME) => Judgement::refuted(format!(
            "stable only up to {words} {}, claimed up to {}{}",
            number(limit),
            claim.up_to,
            worst(record)
        )),
        Some(limit) if claim.exactly && limit > claim.up_to * (1.0 + SAME) => Judgement::refuted(format!(
            "stable up to {words} {}, beyond the claimed limit {}",
            number(limit),
            claim.up_to
        )),
        Some(limit) => Judgement::upheld(format!("stable up to {words} {}{}", number(limit), worst(record))),
    }
}

/// A scheme without amplification factor: a run that blows up refutes, bounded runs uphold nothing.
fn by_runs(claim: &StabilityClaim, record: &StabilityRecord) -> Judgement {
    let words = record.number.words();
    let blew_up = record.confirmation.iter().find(|run| run.growth.is_none_or(|growth| growth > 1e6));
    match blew_up {
        Some(run) if run.number <= claim.up_to => Judgement::refuted(format!(
            "a run of {} steps from noise at {words} {} blows up, claimed stable up to {}",
            run.steps,
            number(run.number),
            claim.up_to
        )),
        _ => Judgement::undecided(
            "the scheme is not linear, so that it has no amplification factor; runs from noise stay bounded up to the claim, which shows no \
             instability but does not exclude one",
            "a claim of what it keeps, such as total variation or bounds ([[invariants]])",
        ),
    }
}

fn without_limit(claim: &StabilityClaim, record: &StabilityRecord) -> Judgement {
    let (words, end) = (record.number.words(), number(record.scanned_up_to));
    match record.refused_from {
        Some(refused) if refused < claim.up_to => Judgement::refuted(format!(
            "the scheme itself refuses {words} {} and more, claimed up to {}; every smaller one is stable",
            number(refused),
            claim.up_to
        )),
        _ if claim.exactly => Judgement::refuted(format!(
            "no limit was found up to {words} {end}, beyond the claimed limit {}",
            claim.up_to
        )),
        _ => Judgement::upheld(format!("no limit was found up to {words} {end}, the end of the scan")),
    }
}

fn worst(record: &StabilityRecord) -> String {
    let at_limit = record.growth_at_limit.map_or_else(String::new, |power| {
        format!("; at the limit itself that mode grows like the power {power:.1} of the number of steps")
    });
    let first = |theta| format!("; beyond it the mode at k h = {theta:.4} grows first{at_limit}");
    record.worst_theta.map_or_else(String::new, first)
}
