//! `judge --repeat`: the same run again, held against the results of the first.

use std::path::{Path, PathBuf};

use crate::claims::{ClaimsError, Plan, read_claims};
use crate::record::{Change, Results, changes};

/// Most changes that are shown.
const SHOWN: usize = 20;

/// Why a run cannot be repeated.
#[derive(Debug, thiserror::Error)]
pub enum RepeatError {
    /// The results do not come from a claims file.
    #[error("{}: comes from a single study without a claims file; run its command line again: {command_line}", path.display())]
    NoClaims {
        /// The results.
        path: PathBuf,
        /// How they were made.
        command_line: String,
    },
    /// The claims file is another.
    #[error(
        "{claims}: is not the claims file that `{}` comes from (its SHA-256 differs); restore it, or name it: \
         gridassay judge CLAIMS.toml --repeat {}", path.display(), path.display()
    )]
    OtherClaims {
        /// The results.
        path: PathBuf,
        /// The claims file.
        claims: String,
    },
    /// The claims file cannot be read.
    #[error(transparent)]
    Claims(#[from] ClaimsError),
}

/// The plan that `before` comes from: the embedded one, or that of the claims file which it names.
///
/// # Errors
/// There was no claims file, or it cannot be read.
pub fn plan(path: &Path, before: &Results, embedded: &Plan) -> Result<Plan, RepeatError> {
    let Some(claims) = &before.run.claims else {
        return Err(RepeatError::NoClaims { path: path.into(), command_line: before.run.command_line.join(" ") });
    };
    if before.run.claims == embedded.claims_file {
        return Ok(embedded.clone());
    }
    Ok(read_claims(Path::new(&claims.path))?)
}

/// Checks that the plan's claims file is the one that `before` comes from.
///
/// # Errors
/// It is another.
pub fn check(path: &Path, before: &Results, plan: &Plan) -> Result<(), RepeatError> {
    let found = plan.claims_file.as_ref().map(|claims| &claims.digest);
    if before.run.claims.as_ref().map(|claims| &claims.digest) == found {
        return Ok(());
    }
    let claims = plan.claims_file.as_ref().map_or_else(String::new, |claims| claims.path.clone());
    Err(RepeatError::OtherClaims { path: path.into(), claims })
}

/// What to say of the second run, and whether anything changed. Where the claims file lies is no change.
pub fn told(before: &Results, after: &Results) -> (String, bool) {
    let mut after = after.clone();
    after.run.claims.clone_from(&before.run.claims);
    let changes = changes(before, &after);
    if changes.is_empty() {
        let studies = before.studies.len();
        return (
            format!("Nothing changed: {studies} studies and {} verdicts, to the last bit.\n", before.verdicts.len()),
            false,
        );
    }
    let plural = if changes.len() == 1 { "value" } else { "values" };
    let mut text = format!("{} {plural} changed:\n", changes.len());
    for change in changes.iter().take(SHOWN) {
        text += &format!("  {}: {}\n", named(before, change), values(change));
    }
    if changes.len() > SHOWN {
        text += &format!("  and {} more\n", changes.len() - SHOWN);
    }
    (text, true)
}

/// The place of a change, studies and verdicts by their ids.
fn named(results: &Results, change: &Change) -> String {
    let mut parts = change.place.splitn(3, '.');
    let (list, index, rest) = (parts.next(), parts.next(), parts.next());
    let index = index.and_then(|index| index.parse::<usize>().ok());
    let id = match (list, index) {
        (Some("studies"), Some(index)) => results.studies.get(index).map(|study| study.id.clone()),
        (Some("verdicts"), Some(index)) => {
            results.verdicts.get(index).map(|verdict| format!("verdict on {}", verdict.claim))
        }
        _ => None,
    };
    id.map_or_else(|| change.place.clone(), |id| format!("{id} {}", rest.unwrap_or_default()))
}

fn values(change: &Change) -> String {
    let shown = |value: &Option<serde_json::Value>| value.as_ref().map_or_else(|| "nothing".to_owned(), short);
    format!("{} -> {}", shown(&change.before), shown(&change.after))
}

/// A value in a line: texts without control characters, long values cut.
fn short(value: &serde_json::Value) -> String {
    let text = value.to_string();
    let mut short: String = text.chars().take(80).filter(|c| !c.is_control()).collect();
    if text.chars().nth(80).is_some() {
        short.push_str("...");
    }
    short
}
