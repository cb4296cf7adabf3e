//! The control beside an upheld order: the smallest added error of one order less that the study refutes.
//!
//! Sizes are half decades. The search begins where the added error on the finest level is as large as the error measured there, since a
//! slope then falls by about a half, climbs until a size is refuted and descends until one is not. It never adds more than a
//! third of the solution on the coarsest level: such a level would resolve nothing and be set aside, which is no test of the study.

use std::time::{Duration, Instant};

use super::attempt::Attempt;
use crate::claims::OrderClaim;
use crate::host::Session;
use crate::record::{Control, Level, OrderRecord, Study, StudyRecord, Trial, Verdict};
use crate::studies::Stop;
use crate::studies::order::control::{self, Fault};
use crate::verdict;

/// The most ladders that a control may take.
const MOST_LADDERS: usize = 6;

/// How long the ladders of a control may take together.
const BUDGET: Duration = Duration::from_secs(20);

/// The largest error that is added on the coarsest level, relative to the solution.
const LARGEST: f64 = 1.0 / 3.0;

/// Runs the control of an upheld claim on the first of its studies, enters it there, and amends the judgement. `took`: how long one study took.
pub fn add_control(session: &mut Session, claim: &OrderClaim, attempt: &mut Attempt, took: Duration) {
    let Some(StudyRecord { study: Study::Order(record), .. }) = attempt.studies.first_mut() else { return };
    if attempt.judgement.verdict != Verdict::Upheld {
        return;
    }
    let control = search(session, claim, record, took);
    attempt.judgement = verdict::order::with_control(attempt.judgement.clone(), &control);
    record.control = Some(control);
}

fn search(session: &mut Session, claim: &OrderClaim, record: &OrderRecord, took: Duration) -> Control {
    let mut control = Control { order: (claim.expect - 1.0).max(0.0), ..Control::default() };
    let [first, .., last] = record.levels.as_slice() else { return control };
    let fineness = |level: &Level| control::fineness(record.refine, &level.cells, level.steps);
    let (coarsest, finest) = (fineness(first), fineness(last));
    // A control ladder is run once a level, the study's own ran twice.
    let begun = Instant::now();
    let mut one = took / 2;
    let order = control.order;
    let size = |half_decades: i32| 10.0_f64.powf(0.5 * f64::from(half_decades));
    let largest = (2.0 * (LARGEST / coarsest.powf(order)).log10()).floor() as i32;
    let mut bracket = Bracket::new(start(claim, record, finest, order), largest);
    let mut tried: Vec<Trial> = Vec::new();
    while let Some(half_decades) = bracket.next {
        if tried.len() == MOST_LADDERS || begun.elapsed() + one > BUDGET {
            let (most, seconds) = (BUDGET.as_secs(), one.as_secs_f64().ceil());
            control.skipped = Some(format!(
                "one more ladder would take about {seconds:.0} s; a control may take {MOST_LADDERS} ladders and {most} s"
            ));
            break;
        }
        let trial_begun = Instant::now();
        let fault = Fault { order, size: size(half_decades) };
        let verdict = match try_one(session, claim, record, fault) {
            Ok(verdict) => verdict,
            Err(stop) => {
                control.skipped = Some(stop.to_string());
                break;
            }
        };
        one = trial_begun.elapsed();
        tried.push(Trial { size: fault.size, verdict });
        bracket.narrow(half_decades, verdict == Verdict::Refuted);
    }
    let limit = bracket.refuted.map(|half_decades| Fault { order, size: size(half_decades) });
    control.tried = tried;
    control.smallest_refuted = limit.map(|fault| fault.size);
    control.on_finest = limit.map(|fault| fault.relative(finest));
    control
}

/// The search for the smallest size that is refuted, in half decades.
struct Bracket {
    /// The largest size that may be tried.
    largest: i32,
    /// The smallest size that was refuted.
    refuted: Option<i32>,
    /// The largest size below it that was not.
    not_refuted: Option<i32>,
    /// What to try next; `None` where the search is over.
    next: Option<i32>,
}

impl Bracket {
    fn new(start: i32, largest: i32) -> Self {
        Self { largest, refuted: None, not_refuted: None, next: Some(start.min(largest)) }
    }

    /// Takes in what became of a size. Climbs by decades, descends by half decades, then halves what lies between.
    fn narrow(&mut self, tried: i32, refuted: bool) {
        if refuted {
            self.refuted = Some(tried);
        } else {
            self.not_refuted = Some(tried);
        }
        self.next = match (self.not_refuted, self.refuted) {
            (Some(low), None) => Some((low + 2).min(self.largest)).filter(|next| *next > low),
            (None, Some(high)) => Some(high - 1),
            (Some(low), Some(high)) => Some((low + high).div_euclid(2)).filter(|next| *next > low && *next < high),
            (None, None) => None,
        };
    }
}

/// The half decade in which the added error on the finest level is about as large as the smallest error measured there.
fn start(claim: &OrderClaim, record: &OrderRecord, finest: f64, order: f64) -> i32 {
    let level = record.levels.iter().rev().find(|level| !level.errors.is_empty());
    let relative = verdict::order::judged_fields(claim, record)
        .into_iter()
        .filter_map(|field| {
            let error = level?.errors.get(&field)?.get(&claim.norm)?;
            let size = record.size(&field, &claim.norm);
            Some(error / if size > 0.0 { size } else { 1.0 })
        })
        .fold(f64::INFINITY, f64::min);
    let size = if relative.is_finite() { relative / finest.powf(order) } else { 1.0 };
    (2.0 * size.log10()).round().clamp(-24.0, 24.0) as i32
}

fn try_one(session: &mut Session, claim: &OrderClaim, record: &OrderRecord, fault: Fault) -> Result<Verdict, Stop> {
    let faulty = control::run(session, &claim.request, record, fault)?;
    Ok(verdict::order::mildest(claim, &faulty))
}

#[cfg(test)]
mod tests {
    //! Trusted: Lax-Wendroff is of second order (its modified equation); what a fault adds is a closed form, tested with the fault.
    use gridassay_reference::problem::Problem;

    use super::*;
    use crate::assay::attempt::{Place, attempt_order};
    use crate::claims::{OrderRequest, StepSize};
    use crate::record::Refinement;

    fn claim(problem: &str, step: Option<StepSize>, expect: f64, tolerance: f64, cells: &[usize]) -> OrderClaim {
        let problem = Problem::named(problem).unwrap();
        OrderClaim {
            request: OrderRequest {
                velocity_is_open: false,
                cells: Some(cells.iter().map(|x| vec![*x]).collect()),
                step,
                refine: Refinement::SpaceTime,
                step_power: 1.0,
                final_time: problem.final_time(),
                operation: None,
                problem,
            },
            norm: "l2".to_owned(),
            field: None,
            expect,
            tolerance,
        }
    }

    fn attempt(scheme: &str, claim: &OrderClaim) -> (Attempt, Control) {
        let mut session = Session::in_process(gridassay_classical::scheme(scheme).unwrap());
        let attempt = attempt_order(&mut session, claim, Place { id: "order-1", scheme, seed: 1 });
        let Study::Order(record) = &attempt.studies[0].study else { panic!("an order study") };
        let control = record.control.clone().unwrap_or_default();
        (attempt, control)
    }

    /// The detection limit is refuted, half a decade less is not, and no more ladders were run than allowed.
    fn brackets(control: &Control) {
        let limit = control.smallest_refuted.expect("some size is refuted");
        assert!(control.tried.len() <= MOST_LADDERS && control.skipped.is_none(), "{control:?}");
        for trial in &control.tried {
            assert_eq!(trial.verdict == Verdict::Refuted, trial.size >= limit, "{control:?}");
        }
        let below = control.tried.iter().map(|trial| trial.size).filter(|size| *size < limit).fold(0.0, f64::max);
        assert!((limit / below).log10() < 0.5 + 1e-9, "{control:?}");
    }

    #[test]
    fn the_detection_limit_of_an_advancing_scheme_is_about_as_large_as_its_own_error() {
        let claim = claim("travelling-sine", Some(StepSize::Courant(0.7)), 2.0, 0.1, &[32, 64, 128, 256]);
        let (attempt, control) = attempt("lax-wendroff", &claim);
        assert_eq!(attempt.judgement.verdict, Verdict::Upheld, "{}", attempt.judgement.reason);
        assert!(
            attempt.judgement.reason.contains("added error of order 1 is refuted from size"),
            "{}",
            attempt.judgement.reason
        );
        brackets(&control);
        let Study::Order(record) = &attempt.studies[0].study else { panic!("an order study") };
        let own = record.levels[3].errors["u"].l2.unwrap() / record.size("u", "l2");
        // An added error as large as the scheme's own moves the finest slope by about a half. A wave that travels averages all but the mean
        // of what is added, which halves it; sizes are half decades; and the rule does not refute while slopes still run.
        let ratio = control.on_finest.unwrap() / own;
        assert!((0.3..30.0).contains(&ratio), "{ratio}");
    }

    #[test]
    fn a_steady_scheme_has_a_detection_limit_too() {
        let claim = claim("manufactured-poisson", None, 2.0, 0.1, &[20, 40, 80, 160]);
        let (attempt, control) = attempt("poisson-central2", &claim);
        assert_eq!(attempt.judgement.verdict, Verdict::Upheld, "{}", attempt.judgement.reason);
        brackets(&control);
    }

    #[test]
    fn a_study_that_no_error_of_lower_order_can_fail_is_blind() {
        // A tolerance of 1.2 lets first order pass for second.
        let claim = claim("travelling-sine", Some(StepSize::Courant(0.7)), 2.0, 1.2, &[32, 64, 128, 256]);
        let (attempt, control) = attempt("lax-wendroff", &claim);
        assert_eq!(attempt.judgement.verdict, Verdict::Undecided);
        assert!(attempt.judgement.reason.contains("the study is blind"), "{}", attempt.judgement.reason);
        assert!(control.smallest_refuted.is_none() && control.tried.iter().all(|t| t.verdict != Verdict::Refuted));
    }

    #[test]
    fn the_search_finds_the_limit_wherever_it_starts() {
        for (start, limit) in [(0, 3), (0, -2), (-5, -5), (3, 2), (9, 4), (-1, 4)] {
            let mut bracket = Bracket::new(start, 4);
            let mut ladders = 0;
            while let Some(tried) = bracket.next {
                assert!(tried <= 4, "beyond the largest size");
                bracket.narrow(tried, tried >= limit);
                ladders += 1;
            }
            assert_eq!((bracket.refuted, bracket.not_refuted), (Some(limit), Some(limit - 1)), "from {start}");
            assert!(ladders <= MOST_LADDERS, "{ladders} ladders from {start} to {limit}");
        }
        let mut blind = Bracket::new(-3, 4);
        while let Some(tried) = blind.next {
            blind.narrow(tried, false);
        }
        assert_eq!((blind.refuted, blind.not_refuted), (None, Some(4)));
    }

    #[test]
    fn a_refuted_claim_has_no_control() {
        let claim = claim("travelling-sine", Some(StepSize::Courant(0.7)), 2.0, 0.1, &[80, 160, 320, 640]);
        let (attempt, control) = attempt("upwind", &claim);
        assert_eq!((attempt.judgement.verdict, control.tried.len()), (Verdict::Refuted, 0));
    }

    #[test]
    fn a_rate_integrated_by_the_harness_shows_the_order_in_space_alone() {
        // Fourth-order differences are of order 4 whatever integrates them; the step that was asked for plays no part.
        let mut claim = claim("travelling-sine", Some(StepSize::Courant(0.7)), 4.0, 0.1, &[24, 48, 96, 192]);
        claim.request.operation = Some(gridassay_scheme::Operation::Rate);
        let (attempt, control) = attempt("central4-rk4", &claim);
        assert_eq!(attempt.judgement.verdict, Verdict::Upheld, "{}", attempt.judgement.reason);
        brackets(&control);
        let Study::Order(record) = &attempt.studies[0].study else { panic!("an order study") };
        assert_eq!((record.operation.as_str(), record.levels[0].step, record.courant), ("rate", None, None));
        // A finer tolerance would not move the error: it is some thousand times the one that was allowed.
        let finest = &record.levels[3];
        assert!(finest.errors["u"].l2.unwrap() > 100.0 * finest.floor["u"].l2.unwrap(), "{finest:?}");
        claim.expect = 5.0;
        assert_eq!(self::attempt("central4-rk4", &claim).0.judgement.verdict, Verdict::Refuted);
    }
}
