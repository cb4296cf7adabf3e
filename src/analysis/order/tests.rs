//! The rule on ladders whose right answer is known by construction: each case is one that a sceptical reviewer would try.

use super::*;
use crate::analysis::compare::agree;

fn halved_errors(slopes: &[f64]) -> Ladder {
    let mut errors = vec![0.1];
    for slope in slopes {
        errors.push(errors[errors.len() - 1] * (-slope).exp2());
    }
    let sizes: Vec<f64> = (0..errors.len()).map(|i| 0.3 * 0.5_f64.powi(i as i32)).collect();
    Ladder::from_errors(&sizes, &errors, 0.0).unwrap()
}

fn answer(slopes: &[f64], claim: f64) -> Judgement {
    judge_ladder(&halved_errors(slopes), claim)
}

fn judge_ladder(ladder: &Ladder, claim: f64) -> Judgement {
    judge(&observe(ladder, Settings::default()), claim, Settings::default())
}

#[track_caller]
fn expect(slopes: &[f64], claim: f64, outcome: Outcome) {
    let found = answer(slopes, claim);
    assert_eq!(found.outcome, outcome, "slopes {slopes:?}, claim {claim}: {}", found.reason);
}

#[test]
fn clean_ladders_are_upheld_and_false_claims_refuted() {
    for slopes in [&[1.98, 1.99][..], &[1.99, 2.0, 2.0], &[2.05, 2.02, 2.01], &[2.01, 1.99, 2.0, 2.01]] {
        expect(slopes, 2.0, Outcome::Upheld);
        expect(slopes, 1.9, Outcome::Upheld);
        expect(slopes, 3.0, Outcome::Refuted);
        expect(slopes, 2.3, Outcome::Refuted);
    }
}

#[test]
fn rising_slopes_are_upheld_by_extrapolation_only_when_it_can_be_trusted() {
    expect(&[1.7, 1.85, 1.93, 1.97], 2.0, Outcome::Upheld);
    expect(&[1.2, 1.5], 2.0, Outcome::Undecided);
    expect(&[1.2, 1.5, 1.7], 2.0, Outcome::Undecided);
    expect(&[0.9, 0.95], 2.0, Outcome::Refuted);
    expect(&[0.7, 0.85], 2.0, Outcome::Undecided);
}

#[test]
fn drifting_slopes_are_never_upheld() {
    expect(&[2.0, 1.85, 1.7, 1.6, 1.5], 2.0, Outcome::Refuted);
    for n in 2..5 {
        let found = answer(&[2.0, 1.85, 1.7, 1.6, 1.5][..n], 2.0);
        assert_ne!(found.outcome, Outcome::Upheld, "{n}: {}", found.reason);
    }
    for n in 2..=4 {
        for claim in [2.0, 2.5, 3.0, 4.0] {
            assert_ne!(answer(&[3.9, 3.4, 2.6, 2.1][..n], claim).outcome, Outcome::Upheld, "{n} {claim}");
        }
    }
    // A term of lower order that has only just emerged: the slopes are all within the tolerance, but fall faster and faster.
    expect(&[2.0, 1.99, 1.97, 1.93], 2.0, Outcome::Undecided);
    // Two terms about to cancel: the slopes rise faster and faster, and the lower order comes after.
    expect(&[2.05, 2.1, 2.25, 2.6], 2.0, Outcome::Undecided);
    expect(&[2.34, 3.1, 1.58], 2.0, Outcome::Undecided);
    expect(&[2.32, 3.0, 2.0], 2.0, Outcome::Undecided);
}

#[test]
fn collinear_points_hide_no_drift() {
    // Slopes 1.905 and 1.9051: Student's interval alone would be 0.0007 wide. The claim just fits; a claim just above does not.
    expect(&[1.905, 1.9051], 2.0, Outcome::Upheld);
    expect(&[1.899, 1.8991], 2.0, Outcome::Undecided);
    // A straight start, then a fall: the finest slope is in the interval.
    let observed = observe(&halved_errors(&[2.0, 2.0, 2.0, 1.91]), Settings::default());
    assert!(observed.interval.is_none_or(|i| i.low <= 1.91));
}

#[test]
fn superconvergence_is_upheld_and_marked() {
    let found = answer(&[2.95, 2.98, 2.99], 2.0);
    assert_eq!((found.outcome, found.beyond_claim), (Outcome::Upheld, true));
    let found = answer(&[2.3, 2.35, 2.37], 2.0);
    assert_eq!((found.outcome, found.beyond_claim), (Outcome::Upheld, false));
    assert!(!answer(&[2.1, 2.5, 3.5], 2.0).beyond_claim);
}

#[test]
fn errors_that_grow_are_refuted_and_errors_that_stay_are_too() {
    let found = answer(&[-1.0, -3.0, -10.0], 2.0);
    assert!(matches!(found.reason, Reason::Grows { .. }) && found.outcome == Outcome::Refuted);
    expect(&[0.0, 0.0, 0.0], 1.0, Outcome::Refuted);
    expect(&[0.01, -0.01, 0.02], 1.0, Outcome::Refuted);
    // Small at first, then one bad level: nothing is known.
    expect(&[2.0, 2.0, -4.0], 2.0, Outcome::Undecided);
}

#[test]
fn saturated_errors_on_coarse_grids_are_no_order() {
    // First-order damping on coarse grids: e = 1 - exp(-8 h), slopes 0.03, 0.18, 0.45, ... towards one.
    let sizes: Vec<f64> = (0..10).map(|i| 0.5_f64.powi(i)).collect();
    let errors: Vec<f64> = sizes.iter().map(|h| -f64::exp_m1(-16.0 * h)).collect();
    for n in 3..=sizes.len() {
        let ladder = Ladder::from_errors(&sizes[..n], &errors[..n], 0.0).unwrap().with_solution_size(1.0);
        let found = judge_ladder(&ladder, 1.0);
        assert_ne!(found.outcome, Outcome::Refuted, "{n}: {}", found.reason);
        if n == sizes.len() {
            assert_eq!(found.outcome, Outcome::Upheld, "{}", found.reason);
        }
    }
}

#[test]
fn round_off_is_set_aside_and_told() {
    let sizes: Vec<f64> = (0..6).map(|i| 0.1 * 0.5_f64.powi(i)).collect();
    let floor = 1e-9;
    // Signs of round-off: the fourth level is lifted, the last ones are pure noise.
    let noise = [0.1, -0.3, 0.2, 0.7, 0.9, -0.8];
    let errors: Vec<f64> = sizes.iter().zip(noise).map(|(h, n)| (h.powi(6) + floor * n).abs()).collect();
    let ladder = Ladder::from_errors(&sizes, &errors, floor).unwrap();
    assert_eq!(
        ladder.set_aside(),
        [
            None,
            Some(SetAside::RoundOff),
            Some(SetAside::RoundOff),
            Some(SetAside::RoundOff),
            Some(SetAside::RoundOff),
            Some(SetAside::RoundOff)
        ]
    );
    let found = judge_ladder(&ladder, 6.0);
    assert!(matches!(found.reason, Reason::TooFew { usable: 1, at_round_off: 5, unresolved: 0 }));
    let exact = Ladder::from_errors(&sizes, &[0.0; 6], 0.0).unwrap();
    assert_eq!(judge_ladder(&exact, 2.0).reason, Reason::Exact);
    let nearly = Ladder::from_errors(&sizes, &[1e-16; 6], 1e-16).unwrap();
    assert_eq!(judge_ladder(&nearly, 2.0).reason, Reason::Exact);
}

#[test]
fn the_floor_widens_the_interval() {
    // Errors 40 floors above: a halving slope may be off by 2 (1/40) / ln 2 = 0.07.
    let sizes = [1.0, 0.5, 0.25];
    let ladder = Ladder::new(sizes.map(|h| Level { h, error: h * h, floor: h * h / 40.0 }).to_vec()).unwrap();
    let interval = observe(&ladder, Settings::default()).interval.unwrap();
    agree(interval.low, 2.0 - 0.05 / 2.0_f64.ln(), 1e-12).unwrap();
    agree(interval.high, 2.0 + 0.05 / 2.0_f64.ln(), 1e-12).unwrap();
}

#[test]
fn thin_evidence_is_undecided() {
    assert!(matches!(answer(&[2.0], 2.0).reason, Reason::TooFew { usable: 2, .. }));
    assert!(matches!(answer(&[], 2.0).reason, Reason::TooFew { usable: 1, .. }));
    for bad in [f64::NAN, f64::INFINITY, -1.0] {
        let ladder = Ladder::from_errors(&[1.0, 0.5, 0.25, 0.125], &[1.0, 0.25, bad, 0.015_625], 0.0).unwrap();
        let found = judge_ladder(&ladder, 2.0);
        assert_eq!((found.outcome, found.reason), (Outcome::Undecided, Reason::Failed { level: 2 }));
    }
    for claim in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert_eq!(answer(&[2.0, 2.0, 2.0], claim).outcome, Outcome::Undecided);
    }
    let nothing = Ladder::new(vec![]).unwrap();
    assert_eq!(judge_ladder(&nothing, 2.0).outcome, Outcome::Undecided);
}

#[test]
fn every_undecided_case_says_what_would_decide_it() {
    for slopes in [&[][..], &[2.0], &[1.2, 1.5], &[2.0, 1.85, 1.7], &[1.9, 1.88, 1.9]] {
        let found = answer(slopes, 2.0);
        assert_eq!(found.outcome, Outcome::Undecided, "{slopes:?} {}", found.reason);
        assert!(found.reason.remedy().is_some());
    }
    let found = answer(&[2.0, 1.99, 1.97, 1.93], 2.0);
    let sentence = "the slopes are still falling: the finest is 1.930 and changes by -0.040 each halving";
    assert_eq!(found.reason.to_string(), sentence);
}

#[test]
fn any_refinement_ratio_will_do() {
    // e = h^2 (1 + 0.5 h) on 1-D cell counts with ratios between 1.2 and 2.5.
    for cells in
        [&[20, 30, 45, 60, 100][..], &[16, 40, 64, 128], &[32, 48, 64, 96, 128], &[30, 36, 43, 52, 62, 75, 90, 108]]
    {
        let sizes: Vec<f64> = cells.iter().map(|&n| 1.0 / f64::from(n)).collect();
        let errors: Vec<f64> = sizes.iter().map(|h| h * h * (1.0 + 0.5 * h)).collect();
        let ladder = Ladder::from_errors(&sizes, &errors, 0.0).unwrap();
        let found = judge_ladder(&ladder, 2.0);
        assert_eq!(found.outcome, Outcome::Upheld, "{cells:?} {}", found.reason);
        assert_eq!(judge_ladder(&ladder, 3.0).outcome, Outcome::Refuted, "{cells:?}");
    }
}

#[test]
fn ladders_that_are_none_are_refused() {
    assert!(matches!(
        Ladder::from_errors(&[0.5, 0.5], &[1.0, 1.0], 0.0),
        Err(LadderError::NotFalling { level: 1, .. })
    ));
    assert!(matches!(Ladder::from_errors(&[f64::NAN], &[1.0], 0.0), Err(LadderError::NotFalling { level: 0, .. })));
    assert!(matches!(Ladder::from_errors(&[1.0], &[1.0], f64::NAN), Err(LadderError::BadFloor { .. })));
    assert!(matches!(Ladder::from_errors(&[1.0], &[1.0, 2.0], 0.0), Err(LadderError::Length { .. })));
}

#[test]
fn a_run_that_blew_up_tells_nothing_of_the_order_whether_or_not_its_numbers_are_still_finite() {
    let sizes = [0.4, 0.2, 0.1, 0.05];
    for last in [[1e-3, 1e40], [1e7, 1e90], [2.0e3, 1e5], [f64::INFINITY, f64::NAN]] {
        let ladder = Ladder::from_errors(&sizes, &[0.1, 0.025, last[0], last[1]], 0.0).unwrap().with_solution_size(1.0);
        let found = judge_ladder(&ladder, 2.0);
        assert_eq!(found.outcome, Outcome::Undecided, "{last:?}: {}", found.reason);
        assert!(found.reason.to_string().contains("blew up"), "{}", found.reason);
    }
    // Errors that grow to the size of the solution are no blow-up: they refute.
    let ladder = Ladder::from_errors(&sizes, &[0.02, 0.05, 0.15, 0.6], 0.0).unwrap().with_solution_size(1.0);
    assert_eq!(judge_ladder(&ladder, 2.0).outcome, Outcome::Refuted);
}
