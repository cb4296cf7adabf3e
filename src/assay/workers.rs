//! Claims tried side by side: each worker takes the next claim of the plan and has scheme processes of its own.

use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::mpsc;

use super::attempt::{
    Attempt, Place, attempt_invariants, attempt_modes, attempt_operator, attempt_order, attempt_stability,
};
use super::schemes::Schemes;
use crate::claims::{Claim, ClaimKind, Plan};
use crate::record::{JournalEntry, RecordError, VerdictRecord};
use crate::verdict::{Judgement, words};

/// As much stack as the main thread has: schemes of this process run here.
const STACK: usize = 8 << 20;

/// What a worker tells.
pub enum Told {
    /// The claim of this index is being tried.
    Begun(usize),
    /// A claim is done.
    Done(Box<JournalEntry>),
}

/// Tries the claims `missing` of the plan with as many `workers`; `hear` is told in this thread, and an error of its ends the work.
///
/// # Errors
/// Whatever `hear` fails with.
pub fn side_by_side(
    plan: &Plan,
    missing: &[usize],
    workers: usize,
    hear: impl FnMut(Told) -> Result<(), RecordError>,
) -> Result<(), RecordError> {
    let next = AtomicUsize::new(0);
    std::thread::scope(|scope| {
        let (sender, receiver) = mpsc::channel();
        for _ in 0..workers.clamp(1, missing.len().max(1)) {
            let (sender, next) = (sender.clone(), &next);
            let work = move || {
                let mut schemes = Schemes::new(&plan.schemes, &plan.folder);
                while let Some(index) = missing.get(next.fetch_add(1, Ordering::Relaxed)) {
                    // A closed channel says that the run has ended early.
                    let begun = sender.send(Told::Begun(*index));
                    if begun.is_err() || sender.send(Told::Done(Box::new(tried(&mut schemes, plan, *index)))).is_err() {
                        break;
                    }
                }
            };
            let spawned = std::thread::Builder::new().stack_size(STACK).spawn_scoped(scope, work);
            spawned.expect("the system starts a thread");
        }
        drop(sender);
        receiver.into_iter().try_for_each(hear)
    })
}

/// One claim tried, with everything that the record needs.
fn tried(schemes: &mut Schemes<'_>, plan: &Plan, index: usize) -> JournalEntry {
    let Claim { id, scheme, kind, .. } = &plan.claims[index];
    let Attempt { studies, judgement } = attempt(schemes, &plan.claims[index], plan.seed);
    let Judgement { verdict, reason, decided_by } = judgement;
    let verdict = VerdictRecord {
        claim: id.clone(),
        scheme: scheme.clone(),
        text: words::claim(kind),
        claimed: words::claimed(kind),
        verdict,
        reason,
        decided_by,
        evidence: studies.iter().map(|study| study.id.clone()).collect(),
    };
    JournalEntry { index, studies, verdict, scheme: schemes.record(scheme) }
}

fn attempt(schemes: &mut Schemes<'_>, claim: &Claim, seed: u64) -> Attempt {
    let session = match schemes.session(&claim.scheme) {
        Ok(session) => session,
        Err(sentence) => {
            let judgement = Judgement::undecided(sentence, "a scheme that can be started");
            return Attempt { studies: Vec::new(), judgement };
        }
    };
    // What the same process printed for an earlier claim would make the sentence of a fault depend on the order of the work.
    session.forget_log();
    let place = Place { id: &claim.id, scheme: &claim.scheme, seed };
    match &claim.kind {
        ClaimKind::Order(claim) => attempt_order(session, claim, place),
        ClaimKind::Modes(claim) => attempt_modes(session, claim, place),
        ClaimKind::Stability(claim) => attempt_stability(session, claim, place),
        ClaimKind::Invariants(claim) => attempt_invariants(session, claim, place),
        ClaimKind::Operator(claim) => attempt_operator(session, claim, place),
    }
}
