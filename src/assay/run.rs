//! A plan carried out.

use std::time::Instant;

use super::attempt::{
    Attempt, Place, attempt_invariants, attempt_modes, attempt_operator, attempt_order, attempt_stability,
};
use super::progress::Progress;
use super::schemes::{Schemes, session_record};
use crate::claims::{Claim, ClaimKind, Plan};
use crate::host::Session;
use crate::record::{
    FORMAT, RecordError, Results, RunRecord, SchemeRecord, Study, StudyRecord, VERSION, Verdict, VerdictRecord, utc_now,
};
use crate::studies::Made;
use crate::verdict::{Judgement, words};

/// Carries out a plan, claim by claim; `keep` is handed the results so far after each, so that nothing measured is lost.
///
/// # Errors
/// Whatever `keep` fails with. What goes wrong with a scheme is no error here but an undecided claim.
pub fn run(
    plan: &Plan,
    command_line: Vec<String>,
    progress: &dyn Progress,
    mut keep: impl FnMut(&Results) -> Result<(), RecordError>,
) -> Result<Results, RecordError> {
    let begun = Instant::now();
    let mut schemes = Schemes::new(&plan.schemes, &plan.folder);
    let mut results = empty(plan, command_line);
    for (done, claim) in plan.claims.iter().enumerate() {
        let text = words::claim(&claim.kind);
        progress.tells(done, plan.claims.len(), &format!("{}: {text}", claim.scheme));
        let attempt = attempt(&mut schemes, claim, plan.seed);
        let evidence = attempt.studies.iter().map(|study| study.id.clone()).collect();
        let Judgement { verdict, reason, decided_by } = attempt.judgement;
        results.studies.extend(attempt.studies);
        let (claim, scheme, kind) = (claim.id.clone(), claim.scheme.clone(), &claim.kind);
        let claimed = words::claimed(kind);
        results.verdicts.push(VerdictRecord { claim, scheme, text, claimed, verdict, reason, decided_by, evidence });
        results.overall = Verdict::overall(results.verdicts.iter().map(|record| record.verdict));
        results.run.seconds = begun.elapsed().as_secs_f64();
        name_schemes(&mut results, plan, &mut schemes);
        keep(&results)?;
    }
    progress.ends();
    Ok(results)
}

/// Results in which nothing stands yet.
fn empty(plan: &Plan, command_line: Vec<String>) -> Results {
    Results {
        format: FORMAT.to_owned(),
        version: VERSION,
        scheme: SchemeRecord::default(),
        schemes: Default::default(),
        run: RunRecord {
            gridassay: env!("CARGO_PKG_VERSION").to_owned(),
            command_line,
            claims: plan.claims_file.clone(),
            seed: plan.seed,
            started: utc_now(),
            seconds: 0.0,
        },
        studies: Vec::new(),
        verdicts: Vec::new(),
        overall: None,
    }
}

fn attempt(schemes: &mut Schemes<'_>, claim: &Claim, seed: u64) -> Attempt {
    let session = match schemes.session(&claim.scheme) {
        Ok(session) => session,
        Err(sentence) => {
            let judgement = Judgement::undecided(sentence, "a scheme that can be started");
            return Attempt { studies: Vec::new(), judgement };
        }
    };
    let place = Place { id: &claim.id, scheme: &claim.scheme, seed };
    match &claim.kind {
        ClaimKind::Order(claim) => attempt_order(session, claim, place),
        ClaimKind::Modes(claim) => attempt_modes(session, claim, place),
        ClaimKind::Stability(claim) => attempt_stability(session, claim, place),
        ClaimKind::Invariants(claim) => attempt_invariants(session, claim, place),
        ClaimKind::Operator(claim) => attempt_operator(session, claim, place),
    }
}

/// One scheme stands under `scheme`; several stand under `schemes`, and `scheme` speaks of them together.
fn name_schemes(results: &mut Results, plan: &Plan, schemes: &mut Schemes<'_>) {
    let tried: Vec<&String> =
        plan.schemes.keys().filter(|name| results.verdicts.iter().any(|v| v.scheme == **name)).collect();
    if let ([only], 1) = (tried.as_slice(), plan.schemes.len()) {
        results.scheme = schemes.record(only);
        return;
    }
    results.schemes = tried.iter().map(|name| ((*name).clone(), schemes.record(name))).collect();
    let first = results.schemes.values().next().cloned().unwrap_or_default();
    let same = |get: fn(&SchemeRecord) -> &String| {
        let value = get(&first);
        if results.schemes.values().all(|scheme| get(scheme) == value) { value.clone() } else { "several".to_owned() }
    };
    results.scheme = SchemeRecord {
        name: format!("{} schemes", plan.schemes.len()),
        version: same(|scheme| &scheme.version),
        route: same(|scheme| &scheme.route),
        digest: None,
        fault: None,
    };
}

/// A study of a table, which no scheme answered, as results. The table stands where the scheme would.
pub fn of_table(command_line: Vec<String>, study: StudyRecord) -> Results {
    let digest = match &study.study {
        Study::Uncertainty(record) => Some(record.digest.clone()),
        _ => None,
    };
    let plan = Plan { claims_file: None, folder: ".".into(), schemes: Default::default(), seed: 1, claims: Vec::new() };
    let mut results = empty(&plan, command_line);
    let scheme = study.scheme.clone();
    results.scheme = SchemeRecord { name: scheme, route: "table".to_owned(), digest, ..SchemeRecord::default() };
    results.studies.push(study);
    results
}

/// One study without a claim, as results.
pub fn single(
    plan: &Plan,
    command_line: Vec<String>,
    id: &str,
    scheme: &str,
    session: &mut Session,
    make: impl FnOnce(&mut Session) -> Made,
) -> Results {
    let begun = Instant::now();
    let mut results = empty(plan, command_line);
    let Made { study, stopped, notes, .. } = make(session);
    results.studies.push(StudyRecord { id: id.to_owned(), scheme: scheme.to_owned(), study, stopped, notes });
    results.scheme = session_record(session);
    results.run.seconds = begun.elapsed().as_secs_f64();
    results
}
