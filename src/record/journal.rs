//! What a run has measured so far, one line a claim: a run that was killed goes on from here.
//!
//! The first line says what is run ([`JournalHead`]), each further line is a [`JournalEntry`]. A line is written in one piece and synced
//! before the next claim counts as done. A line that a kill cut off, and whatever follows it, is dropped when the journal is taken up.

use std::fs::File;
use std::io::{Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};

use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};

use super::{ClaimsRecord, RecordError, SchemeRecord, StudyRecord, VerdictRecord, write_bytes};

/// The `format` of a journal.
const FORMAT: &str = "gridassay-journal";

/// What is run: a journal is taken up by the same run alone.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct JournalHead {
    /// Always `gridassay-journal`.
    format: String,
    /// Version of Gridassay.
    pub gridassay: String,
    /// The claims file.
    pub claims: Option<ClaimsRecord>,
    /// Seed of every random state.
    pub seed: u64,
}

impl JournalHead {
    /// The head of a run of this version of Gridassay.
    pub fn new(claims: Option<ClaimsRecord>, seed: u64) -> Self {
        Self { format: FORMAT.to_owned(), gridassay: env!("CARGO_PKG_VERSION").to_owned(), claims, seed }
    }
}

/// One claim with all that was measured for it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct JournalEntry {
    /// Its place among the claims of the plan, from 0.
    pub index: usize,
    /// The studies.
    pub studies: Vec<StudyRecord>,
    /// The verdict.
    pub verdict: VerdictRecord,
    /// Who the scheme is.
    pub scheme: SchemeRecord,
}

/// Why a journal could not be taken up.
#[derive(Debug, thiserror::Error)]
pub enum JournalError {
    /// There is none.
    #[error("{}: there is no journal to go on from; run without --resume", path.display())]
    Missing {
        /// Where it was looked for.
        path: PathBuf,
    },
    /// It is of another run.
    #[error("{}: is the journal of another run ({what} differs); run without --resume", path.display())]
    OtherRun {
        /// The journal.
        path: PathBuf,
        /// What differs.
        what: &'static str,
    },
    /// The operating system refused.
    #[error(transparent)]
    Record(#[from] RecordError),
}

/// A journal that is open for writing.
#[derive(Debug)]
pub struct Journal {
    path: PathBuf,
    file: File,
}

impl Journal {
    /// Begins a new journal, in place of one that is there.
    ///
    /// # Errors
    /// The file cannot be written.
    pub fn begin(path: &Path, head: &JournalHead) -> Result<Self, RecordError> {
        write_bytes(path, &line(head))?;
        let file = File::options().append(true).open(path).map_err(|source| written(path, source))?;
        Ok(Self { path: path.into(), file })
    }

    /// Takes up the journal of the same run: what it holds, and the journal to go on with.
    ///
    /// # Errors
    /// There is no journal, it is of another run, or it cannot be read or written.
    pub fn resume(path: &Path, head: &JournalHead) -> Result<(Self, Vec<JournalEntry>), JournalError> {
        let bytes = match std::fs::read(path) {
            Ok(bytes) => bytes,
            Err(error) if error.kind() == std::io::ErrorKind::NotFound => {
                return Err(JournalError::Missing { path: path.into() });
            }
            Err(source) => return Err(RecordError::Io { path: path.into(), action: "read", source }.into()),
        };
        let other = |what| JournalError::OtherRun { path: path.into(), what };
        let (found, mut end) = next::<JournalHead>(&bytes, 0).ok_or_else(|| other("its head"))?;
        if found.format != FORMAT || found.gridassay != head.gridassay {
            return Err(other("the version of Gridassay"));
        }
        let digest = |head: &JournalHead| head.claims.as_ref().map(|claims| claims.digest.clone());
        if digest(&found) != digest(head) {
            return Err(other("the claims file"));
        }
        if found.seed != head.seed {
            return Err(other("the seed"));
        }
        let mut entries = Vec::new();
        while let Some((entry, after)) = next::<JournalEntry>(&bytes, end) {
            entries.push(entry);
            end = after;
        }
        let failed = |source| written(path, source);
        let mut file = File::options().write(true).open(path).map_err(failed)?;
        file.set_len(end as u64).map_err(failed)?;
        file.seek(SeekFrom::End(0)).map_err(failed)?;
        Ok((Self { path: path.into(), file }, entries))
    }

    /// Adds a claim, on disk when this returns.
    ///
    /// # Errors
    /// The file cannot be written.
    pub fn add(&mut self, entry: &JournalEntry) -> Result<(), RecordError> {
        let added = self.file.write_all(&line(entry)).and_then(|()| self.file.sync_data());
        added.map_err(|source| written(&self.path, source))
    }
}

fn written(path: &Path, source: std::io::Error) -> RecordError {
    RecordError::Io { path: path.into(), action: "written", source }
}

fn line(value: &impl Serialize) -> Vec<u8> {
    let mut line = serde_json::to_vec(value).expect("results hold only text, numbers and lists");
    line.push(b'\n');
    line
}

/// The value of the line that begins at `start`, and where the next one begins; `None` where no whole line is left.
fn next<T: DeserializeOwned>(bytes: &[u8], start: usize) -> Option<(T, usize)> {
    let length = memchr::memchr(b'\n', &bytes[start..])?;
    let value = serde_json::from_slice(&bytes[start..start + length]).ok()?;
    Some((value, start + length + 1))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::Verdict;

    fn entry(index: usize) -> JournalEntry {
        let verdict = VerdictRecord {
            claim: format!("order-{index}"),
            scheme: "scheme".to_owned(),
            text: "a claim\nof two lines".to_owned(),
            claimed: None,
            verdict: Verdict::Undecided,
            reason: "0.1".to_owned(),
            decided_by: None,
            evidence: Vec::new(),
        };
        JournalEntry { index, studies: Vec::new(), verdict, scheme: SchemeRecord::default() }
    }

    #[test]
    fn a_journal_cut_off_at_any_byte_gives_its_whole_lines_and_goes_on() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("journal.jsonl");
        let head = JournalHead::new(None, 7);
        let mut journal = Journal::begin(&path, &head).unwrap();
        (0..3).for_each(|index| journal.add(&entry(index)).unwrap());
        let whole = std::fs::read(&path).unwrap();
        let head_length = line(&head).len();
        for cut in head_length..=whole.len() {
            std::fs::write(&path, &whole[..cut]).unwrap();
            let (mut journal, found) = Journal::resume(&path, &head).unwrap();
            let lines = whole[head_length..cut].iter().filter(|byte| **byte == b'\n').count();
            assert_eq!(found, (0..lines).map(entry).collect::<Vec<_>>());
            (lines..3).for_each(|index| journal.add(&entry(index)).unwrap());
            assert_eq!(std::fs::read(&path).unwrap(), whole, "cut at {cut}");
        }
    }

    #[test]
    fn the_journal_of_another_run_is_refused() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("journal.jsonl");
        let head = JournalHead::new(None, 7);
        assert!(matches!(Journal::resume(&path, &head), Err(JournalError::Missing { .. })));
        Journal::begin(&path, &head).unwrap();
        let other = JournalHead { seed: 8, ..head };
        assert!(matches!(Journal::resume(&path, &other), Err(JournalError::OtherRun { what: "the seed", .. })));
    }
}
