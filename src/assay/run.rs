//! A plan carried out.

use std::collections::BTreeMap;
use std::time::Instant;

use super::progress::Progress;
use super::schemes::{Schemes, session_record};
use super::workers::{Told, side_by_side};
use crate::claims::Plan;
use crate::dossier::visible;
use crate::host::Session;
use crate::record::{
    FORMAT, Journal, JournalEntry, RecordError, Results, RunRecord, SchemeRecord, Study, StudyRecord, VERSION, Verdict,
    utc_now,
};
use crate::studies::Made;
use crate::verdict::words;

/// Why a run could not be finished. What goes wrong with a scheme is no error but an undecided claim.
#[derive(Debug, thiserror::Error)]
pub enum RunError {
    /// The journal could not be written.
    #[error(transparent)]
    Record(#[from] RecordError),
    /// What the journal holds was measured on another scheme than the one that is there now.
    #[error(
        "the scheme `{name}` is another than the one that the interrupted run measured (its name, version or digest differs); \
         run without --resume"
    )]
    OtherScheme {
        /// Its name in the claims file.
        name: String,
    },
}

/// How a run is carried out.
pub struct Manner<'a> {
    /// The command line, for the record.
    pub command_line: Vec<String>,
    /// How many claims are tried side by side, each worker with processes of its own. Results do not depend on it.
    pub workers: usize,
    /// Told of each claim as it is taken up.
    pub progress: &'a dyn Progress,
    /// Where each claim is kept as soon as it is done.
    pub journal: Option<Journal>,
    /// What an interrupted run has done already.
    pub done: Vec<JournalEntry>,
}

/// Carries out a plan. Results stand in the order of the plan.
///
/// # Errors
/// The journal cannot be written, or what is done already was measured on another scheme.
pub fn run(plan: &Plan, manner: Manner<'_>) -> Result<Results, RunError> {
    let begun = Instant::now();
    let mut results = empty(plan, manner.command_line);
    let mut journal = manner.journal;
    let mut entries = taken_up(plan, manner.done)?;
    let missing: Vec<usize> = (0..entries.len()).filter(|index| entries[*index].is_none()).collect();
    let mut taken = entries.len() - missing.len();
    side_by_side(plan, &missing, manner.workers, |told| {
        match told {
            Told::Begun(index) => {
                let claim = &plan.claims[index];
                let what = format!("{}: {}", claim.scheme, words::claim(&claim.kind));
                manner.progress.tells(taken, plan.claims.len(), &visible(&what));
                taken += 1;
            }
            Told::Done(entry) => {
                if let Some(journal) = &mut journal {
                    journal.add(&entry)?;
                }
                let index = entry.index;
                entries[index] = Some(*entry);
            }
        }
        Ok(())
    })?;
    manner.progress.ends();
    let mut records = BTreeMap::new();
    for entry in entries.into_iter().flatten() {
        records.entry(entry.verdict.scheme.clone()).or_insert(entry.scheme);
        results.studies.extend(entry.studies);
        results.verdicts.push(entry.verdict);
    }
    results.overall = Verdict::overall(results.verdicts.iter().map(|record| record.verdict));
    name_schemes(&mut results, plan, records);
    results.run.seconds = begun.elapsed().as_secs_f64();
    Ok(results)
}

/// What is done already, in the places of the plan. A claim whose scheme could not be started is tried again.
fn taken_up(plan: &Plan, done: Vec<JournalEntry>) -> Result<Vec<Option<JournalEntry>>, RunError> {
    let mut entries: Vec<Option<JournalEntry>> = plan.claims.iter().map(|_| None).collect();
    let mut schemes = Schemes::new(&plan.schemes, &plan.folder);
    for entry in done.into_iter().filter(|entry| entry.scheme.fault.is_none()) {
        let name = &entry.verdict.scheme;
        if !plan.schemes.contains_key(name) || schemes.record(name) != entry.scheme {
            return Err(RunError::OtherScheme { name: name.clone() });
        }
        if let Some(place) = entries.get_mut(entry.index) {
            *place = Some(entry);
        }
    }
    Ok(entries)
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

/// One scheme stands under `scheme`; several stand under `schemes`, and `scheme` speaks of them together.
fn name_schemes(results: &mut Results, plan: &Plan, mut records: BTreeMap<String, SchemeRecord>) {
    if plan.schemes.len() == 1
        && let Some((_, only)) = records.pop_first()
    {
        results.scheme = only;
        return;
    }
    results.schemes = records;
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
