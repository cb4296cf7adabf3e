//! A claimed order of accuracy against the measured ladder, by the rule of [`crate::analysis::order`].

use super::Judgement;
use super::words::norm as norm_words;
use crate::analysis::order::{self, Ladder, Outcome, Settings, observe};
use crate::claims::OrderClaim;
use crate::record::{Control, INTERIOR, OrderRecord, STRIP, StudyRecord, Verdict};

/// Weighs a claimed order: every field that it is about must uphold it.
pub fn judge(claim: &OrderClaim, study: &StudyRecord, record: &OrderRecord) -> Judgement {
    if let Some(stopped) = &study.stopped {
        let measured = record.levels.len();
        let reason = format!("the ladder ended after {measured} level(s): {stopped}");
        return Judgement::undecided(reason, "a scheme that can be run on every level");
    }
    let fields = judged_fields(claim, record);
    let several = fields.len() > 1;
    let one = |field: &String| {
        let mut judgement = judge_field(claim, record, field);
        if several {
            judgement.reason = format!("`{field}`: {}", judgement.reason);
        }
        judgement
    };
    Judgement::all(fields.iter().map(one).collect())
}

/// The fields that a claim is about.
pub fn judged_fields(claim: &OrderClaim, record: &OrderRecord) -> Vec<String> {
    match &claim.field {
        Some(field) => vec![field.clone()],
        None => record.levels.first().map(|level| level.errors.keys().cloned().collect()).unwrap_or_default(),
    }
}

/// Whether a record decides the claim: what ends the lengthening of a ladder.
pub fn decides(claim: &OrderClaim, record: &OrderRecord) -> bool {
    let fields = judged_fields(claim, record);
    fields.iter().map(|field| judge_field(claim, record, field)).all(|judgement| judgement.decided_by.is_none())
}

/// The mildest verdict on any field: refuted only where every field is. A control with an error in every field must be seen in each.
pub fn mildest(claim: &OrderClaim, record: &OrderRecord) -> Verdict {
    let fields = judged_fields(claim, record);
    fields.iter().map(|field| judge_field(claim, record, field).verdict).min().unwrap_or(Verdict::Undecided)
}

/// An upheld judgement in the light of its control: the detection limit is told, and a study that does not refute even a large error is blind.
pub fn with_control(mut upheld: Judgement, control: &Control) -> Judgement {
    let order = short(control.order);
    match (control.smallest_refuted, control.on_finest, &control.skipped) {
        (Some(size), Some(on_finest), _) => {
            let told = format!(
                "; control: an added error of order {order} is refuted from size {} on ({} of the solution on the finest level)",
                short(size),
                short(on_finest)
            );
            upheld.reason.push_str(&told);
            upheld
        }
        (_, _, Some(skipped)) => {
            upheld.reason.push_str(&format!("; no detection limit: {skipped}"));
            upheld
        }
        _ => {
            let largest = control.tried.iter().map(|trial| trial.size).fold(0.0, f64::max);
            let tried = if largest > 0.0 { format!("up to size {}", short(largest)) } else { "of any size".to_owned() };
            let reason = format!(
                "{}; but an added error of order {order}, {tried}, is not refuted either: the study is blind to it",
                upheld.reason
            );
            let decided_by = "a finer ladder or a smaller tolerance, with which the control is refuted";
            Judgement::undecided(reason, decided_by)
        }
    }
}

/// Where a field misses the claim: the orders in the interior and along the sides, where the domain has sides and any of them can be told.
fn whereabouts(claim: &OrderClaim, record: &OrderRecord, field: &str) -> Option<String> {
    let order = |place: &str| record.places.get(place)?.get(field)?.get(&claim.norm)?.order;
    let inside = order(INTERIOR);
    let sides: Vec<(&String, f64)> =
        record.places.keys().filter(|place| *place != INTERIOR).filter_map(|side| Some((side, order(side)?))).collect();
    let least = claim.expect - claim.tolerance;
    let short_of: Vec<String> = sides
        .iter()
        .filter(|(_, order)| *order < least)
        .map(|(side, order)| format!("{order:.2} within {STRIP} cells of {side}"))
        .collect();
    match inside {
        Some(inside) if inside < least && short_of.is_empty() => {
            Some(format!("the order is {inside:.2} in the interior too, {STRIP} cells and more from every side"))
        }
        Some(inside) => Some(format!("the order is {inside:.2} in the interior, {}", listed(&short_of, &sides))),
        None if short_of.is_empty() => None,
        None => Some(format!("the order is {}", listed(&short_of, &sides))),
    }
}

/// The sides that fall short, or all of them where none does.
fn listed(short_of: &[String], sides: &[(&String, f64)]) -> String {
    if short_of.is_empty() {
        let all: Vec<String> =
            sides.iter().map(|(side, order)| format!("{order:.2} within {STRIP} cells of {side}")).collect();
        return all.join(", ");
    }
    short_of.join(", ")
}

/// Two significant digits.
fn short(value: f64) -> String {
    let rounded: f64 = format!("{value:.1e}").parse().unwrap_or(value);
    if rounded == 0.0 || (1e-3..1e4).contains(&rounded) { format!("{rounded}") } else { format!("{rounded:e}") }
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
    if judged.outcome != Outcome::Upheld {
        reason.extend(whereabouts(claim, record, field).map(|place| format!("; {place}")));
    }
    match judged.outcome {
        Outcome::Upheld => Judgement::upheld(reason),
        Outcome::Refuted => Judgement::refuted(reason),
        Outcome::Undecided => Judgement::undecided(reason, judged.reason.remedy().unwrap_or("a finer ladder")),
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: ladders whose orders are known by construction.
    use std::collections::BTreeMap;

    use gridassay_reference::problem::Problem;

    use super::*;
    use crate::claims::OrderRequest;
    use crate::record::{Level, Norms, Observed, Refinement, Trial};

    fn claim(expect: f64) -> OrderClaim {
        let problem = Problem::named("moving-boundary-values").unwrap();
        OrderClaim {
            request: OrderRequest {
                velocity_is_open: false,
                cells: None,
                step: None,
                refine: Refinement::SpaceTime,
                step_power: 1.0,
                final_time: problem.final_time(),
                operation: None,
                problem,
            },
            norm: "linf".to_owned(),
            field: None,
            expect,
            tolerance: 0.1,
        }
    }

    /// A record whose error falls with one order as a whole, and with these at the places.
    fn record(order: f64, places: &[(&str, f64)]) -> OrderRecord {
        let level = |cells: usize| {
            let h = 1.0 / cells as f64;
            let norms = Norms { linf: Some(h.powf(order)), ..Norms::default() };
            Level { cells: vec![cells], h, errors: BTreeMap::from([("u".to_owned(), norms)]), ..Level::default() }
        };
        let place = |(name, order): &(&str, f64)| {
            let observed = Observed { order: Some(*order), ..Observed::default() };
            let norms = BTreeMap::from([("linf".to_owned(), observed)]);
            ((*name).to_owned(), BTreeMap::from([("u".to_owned(), norms)]))
        };
        OrderRecord {
            levels: [20, 40, 80, 160].map(level).into(),
            places: places.iter().map(place).collect(),
            ..OrderRecord::default()
        }
    }

    fn judged(expect: f64, record: &OrderRecord) -> Judgement {
        judge_field(&claim(expect), record, "u")
    }

    #[test]
    fn a_side_that_falls_short_is_named_and_the_others_are_not() {
        let found = judged(2.0, &record(1.0, &[("interior", 1.98), ("x_lower", 1.01), ("x_upper", 2.02)]));
        assert_eq!(found.verdict, Verdict::Refuted);
        let told = "the order is 1.98 in the interior, 1.01 within 2 cells of x_lower";
        assert!(found.reason.ends_with(told), "{}", found.reason);
    }

    #[test]
    fn an_interior_that_falls_short_is_told_too() {
        let found = judged(2.0, &record(1.0, &[("interior", 1.0), ("x_lower", 2.0), ("x_upper", 2.0)]));
        assert!(found.reason.contains("1.00 in the interior too"), "{}", found.reason);
        // Neither a place is named where the claim is upheld, nor where the domain has no sides.
        let upheld = judged(1.0, &record(1.0, &[("interior", 1.0), ("x_lower", 0.5)]));
        assert_eq!(upheld.verdict, Verdict::Upheld);
        assert!(!upheld.reason.contains("x_lower"), "{}", upheld.reason);
        assert!(!judged(2.0, &record(1.0, &[])).reason.contains("interior"));
    }

    #[test]
    fn a_control_is_told_and_a_blind_study_is_undecided() {
        let upheld = || Judgement::upheld("in L2, fine");
        let trial = |size, verdict| Trial { size, verdict };
        let seen = Control {
            order: 1.0,
            smallest_refuted: Some(10.0_f64.powf(-2.5)),
            on_finest: Some(1.2345e-5),
            tried: vec![trial(10.0_f64.powf(-2.5), Verdict::Refuted)],
            skipped: None,
        };
        let told = with_control(upheld(), &seen);
        let sentence = "in L2, fine; control: an added error of order 1 is refuted from size 0.0032 on (1.2e-5 of the solution on the finest level)";
        assert_eq!((told.verdict, told.reason.as_str()), (Verdict::Upheld, sentence));
        let blind = Control { order: 1.0, tried: vec![trial(3.0, Verdict::Upheld)], ..Control::default() };
        let told = with_control(upheld(), &blind);
        assert!(
            told.verdict == Verdict::Undecided && told.decided_by.is_some() && told.reason.contains("up to size 3")
        );
        let skipped = Control { skipped: Some("too long".to_owned()), ..blind };
        let told = with_control(upheld(), &skipped);
        assert!(told.verdict == Verdict::Upheld && told.reason.ends_with("no detection limit: too long"));
    }
}
