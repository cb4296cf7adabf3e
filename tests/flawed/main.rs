//! The harness against schemes with known mistakes, and against their right twins.
//!
//! Trusted: the classical schemes, whose symbols and orders their own crate holds against closed forms. Every right scheme must be upheld on its standard claims;
//! every flawed one must be refuted by one of those same claims, at its place where the verdict names one; what no study can see must not be refuted; and no
//! verdict may flip where parameters, phases, steps and ladders are drawn at random.
//!
//! With GRIDASSAY_SURVEY set to a file's name, every claim is tried on the flawed schemes that the table does not have yet, and written there.

mod drawn;
mod formal;
mod orders;
mod problems;
mod standard;
mod table;

use std::collections::BTreeMap;

use gridassay::assay::{
    Attempt, Place, attempt_invariants, attempt_modes, attempt_operator, attempt_order, attempt_stability,
};
use gridassay::claims::ClaimKind;
use gridassay::host::Session;
use gridassay::record::Verdict;
use gridassay::scheme::Scheme;
use gridassay_flawed::{Flaw, flaws};
use rayon::prelude::*;
use standard::{Standard, standard};

/// A claim tried on a fresh scheme.
fn attempt(scheme: Box<dyn Scheme>, claim: &ClaimKind) -> Attempt {
    let mut session = Session::in_process(scheme);
    let place = Place { id: "claim-1", scheme: "scheme", seed: 1 };
    match claim {
        ClaimKind::Order(claim) => attempt_order(&mut session, claim, place),
        ClaimKind::Modes(claim) => attempt_modes(&mut session, claim, place),
        ClaimKind::Stability(claim) => attempt_stability(&mut session, claim, place),
        ClaimKind::Invariants(claim) => attempt_invariants(&mut session, claim, place),
        ClaimKind::Operator(claim) => attempt_operator(&mut session, claim, place),
    }
}

fn right(name: &str) -> Box<dyn Scheme> {
    gridassay_classical::scheme(name).expect("a classical scheme")
}

fn flaw(name: &str) -> &'static Flaw {
    flaws().iter().find(|flaw| flaw.name == name).unwrap_or_else(|| panic!("no flawed scheme `{name}`"))
}

/// The standard claims of every right twin.
fn standards() -> BTreeMap<&'static str, Vec<Standard>> {
    let twins: std::collections::BTreeSet<&str> = flaws().iter().map(|flaw| flaw.twin).collect();
    twins.into_iter().map(|twin| (twin, standard(twin))).collect()
}

/// The claims that fail a check, each with its reason; empty where all is well.
fn failing<T: Send>(jobs: Vec<T>, check: impl Fn(T) -> Option<String> + Sync + Send) -> Vec<String> {
    jobs.into_par_iter().filter_map(check).collect()
}

fn assert_none(failures: &[String]) {
    assert!(failures.is_empty(), "{} of them:\n{}", failures.len(), failures.join("\n"));
}

/// How many standard claims of right twins the rule leaves undecided, of about 215; measured: 22. Slopes that are still falling or have just turned
/// on the ladder at hand, steps whose control is blind: thin evidence that longer ladders would mend.
const UNDECIDED: usize = 24;

#[test]
fn no_right_twin_is_refuted_and_nine_in_ten_of_their_standard_claims_are_upheld() {
    let all = standards();
    let jobs: Vec<(&str, &Standard)> =
        all.iter().flat_map(|(twin, claims)| claims.iter().map(move |claim| (*twin, claim))).collect();
    assert!(jobs.len() > 150, "{}", jobs.len());
    let judged: Vec<(Verdict, String)> = jobs
        .into_par_iter()
        .map(|(twin, claim)| {
            let judgement = attempt(right(twin), &claim.kind).judgement;
            let told = format!("{twin}, {}: {:?}, {}", claim.id, judgement.verdict, judgement.reason);
            assert!(!table::undecided(twin, &claim.id) || judgement.verdict == Verdict::Undecided, "{told}");
            (judgement.verdict, told)
        })
        .collect();
    let of = |verdict: Verdict| -> Vec<String> {
        judged.iter().filter(|(found, _)| *found == verdict).map(|(_, told)| told.clone()).collect()
    };
    assert_none(&of(Verdict::Refuted));
    let undecided = of(Verdict::Undecided);
    assert!(undecided.len() <= UNDECIDED, "{} of them:\n{}", undecided.len(), undecided.join("\n"));
}

#[test]
fn every_flawed_scheme_is_refuted_by_the_claim_that_the_table_names() {
    let all = standards();
    let failures = failing(table::REFUTED.to_vec(), |(name, id, says)| {
        let flaw = flaw(name);
        let claim =
            all[flaw.twin].iter().find(|claim| claim.id == id).unwrap_or_else(|| panic!("{name}: no claim {id}"));
        let judgement = attempt(flaw.scheme(), &claim.kind).judgement;
        let right = judgement.verdict == Verdict::Refuted && judgement.reason.contains(says);
        (!right).then(|| format!("{name}, {id}, `{says}`: {:?}, {}", judgement.verdict, judgement.reason))
    });
    assert_none(&failures);
}

#[test]
fn the_table_has_a_row_for_every_flawed_scheme_and_names_twenty_places_and_more() {
    let exposed: Vec<&str> = flaws().iter().filter(|flaw| !flaw.exposed_by.is_empty()).map(|flaw| flaw.name).collect();
    let rows: Vec<&str> = table::REFUTED.iter().map(|row| row.0).collect();
    let not_yet = |name: &str| table::NOT_YET.iter().any(|row| row.0 == name);
    let missing: Vec<String> =
        exposed.iter().filter(|name| !rows.contains(name) && !not_yet(name)).map(|name| (*name).to_owned()).collect();
    assert_none(&missing);
    let places = table::REFUTED.iter().filter(|row| row.2.contains("neighbour at offset") || row.2.contains("at cell"));
    assert!(places.clone().count() >= 20, "{}", places.count());
}

#[test]
fn a_flawed_scheme_that_no_standard_claim_refutes_yet_is_undecided_at_least() {
    let all = standards();
    for (name, id, why) in table::NOT_YET {
        let flaw = flaw(name);
        let claim = all[flaw.twin].iter().find(|claim| claim.id == id).expect("a standard claim");
        let judgement = attempt(flaw.scheme(), &claim.kind).judgement;
        assert_eq!(judgement.verdict, Verdict::Undecided, "{name} ({why}): {}", judgement.reason);
    }
}

#[test]
fn what_no_study_can_see_is_not_refuted() {
    let all = standards();
    let unseen: Vec<&Flaw> = flaws().iter().filter(|flaw| flaw.exposed_by.is_empty()).collect();
    assert!(unseen.len() >= 5);
    let jobs = unseen.iter().flat_map(|flaw| all[flaw.twin].iter().map(move |claim| (*flaw, claim))).collect();
    let failures = failing(jobs, |(flaw, claim): (&Flaw, &Standard)| {
        let judgement = attempt(flaw.scheme(), &claim.kind).judgement;
        let wrong = judgement.verdict == Verdict::Refuted;
        wrong.then(|| format!("{} ({}), {}: {}", flaw.name, flaw.why, claim.id, judgement.reason))
    });
    assert_none(&failures);
}

/// Draws for each scheme; systems in one dimension take longer.
fn draws(name: &str) -> u64 {
    let slow = ["euler", "weno", "upwind5", "burgers-central", "compact", "muscl", "dg-"];
    if slow.iter().any(|slow| name.starts_with(slow)) { 12 } else { 50 }
}

/// Whether a right scheme's observed order hangs on the solution, so that a drawn ladder may truly refute the textbook's: WENO5 with the weights of
/// Jiang & Shu loses order at critical points (Henrick, Aslam & Powers 2005, J. Comput. Phys. 207:542-567), the superbee limiter steepens
/// smooth waves towards steps (Sweby 1984, SIAM J. Numer. Anal. 21:995-1011; both from memory).
fn depends_on_the_solution(name: &str) -> bool {
    name.starts_with("weno5") || name == "muscl-superbee"
}

#[test]
fn verdicts_do_not_flap_where_problems_steps_and_ladders_are_drawn() {
    let names = gridassay_classical::names();
    let jobs: Vec<(&str, u64)> = names
        .into_iter()
        .filter(|name| !depends_on_the_solution(name))
        .flat_map(|name| (1..=draws(name)).map(move |seed| (name, seed)))
        .collect();
    let failures = failing(jobs, |(name, seed)| {
        let claim = drawn::claim(&mut drawn::Draw::seeded(seed), name)?;
        let judgement = attempt(right(name), &claim.kind).judgement;
        let wrong = judgement.verdict == Verdict::Refuted;
        wrong.then(|| format!("seed {seed}, {}: {}", claim.id, judgement.reason))
    });
    assert_none(&failures);
}

#[test]
fn flawed_schemes_are_never_upheld_where_problems_steps_and_ladders_are_drawn() {
    let jobs: Vec<(&str, u64)> =
        table::NEVER_UPHELD.iter().flat_map(|name| (1..=20).map(move |seed| (*name, seed))).collect();
    let failures = failing(jobs, |(name, seed)| {
        let flaw = flaw(name);
        let claim = drawn::claim(&mut drawn::Draw::seeded(seed), flaw.twin)?;
        let judgement = attempt(flaw.scheme(), &claim.kind).judgement;
        let wrong = judgement.verdict == Verdict::Upheld;
        wrong.then(|| format!("seed {seed}, {name} on {}: {}", claim.id, judgement.reason))
    });
    assert_none(&failures);
}

#[test]
fn classical_schemes_have_their_orders_on_three_problems_each() {
    let names = gridassay_classical::names();
    let jobs: Vec<(&str, Standard)> = names
        .into_iter()
        .flat_map(|name| {
            let three = orders::three(name);
            assert!(three.len() >= 3, "{name}");
            three.into_iter().map(move |claim| (name, claim))
        })
        .collect();
    let failures = failing(jobs, |(name, claim)| {
        let (orders, verdict, reason) = orders::observed(name, &claim);
        let [low, high] = table::observed_order(name, &claim);
        let right = !orders.is_empty() && orders.iter().all(|order| (low..=high).contains(order));
        (!right || verdict == Verdict::Refuted)
            .then(|| format!("{name}, {}: {orders:.3?} {verdict:?}, {reason}", claim.id))
    });
    assert_none(&failures);
}

#[test]
fn survey() {
    let Ok(file) = std::env::var("GRIDASSAY_SURVEY") else { return };
    let all = standards();
    let jobs: Vec<(&Flaw, &Standard)> = flaws()
        .iter()
        .filter(|flaw| table::REFUTED.iter().all(|row| row.0 != flaw.name))
        .flat_map(|flaw| all[flaw.twin].iter().map(move |claim| (flaw, claim)))
        .collect();
    let line = |(flaw, claim): (&Flaw, &Standard)| {
        let judgement = attempt(flaw.scheme(), &claim.kind).judgement;
        format!("{}\t{}\t{:?}\t{}\t{:?}", flaw.name, claim.id, judgement.verdict, judgement.reason, flaw.setting)
    };
    let lines: Vec<String> = jobs.into_par_iter().map(line).collect();
    std::fs::write(file, lines.join("\n")).expect("a file that can be written");
}
