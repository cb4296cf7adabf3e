//! The words and look-ups that several outputs share.

use super::facts::Part;
use crate::record::{Claimed, Norms, OrderRecord, Results, SchemeRecord, Verdict, VerdictRecord};

/// What a dossier says of itself, on every page that people decide by.
pub(crate) const CAUTION: &str = "This dossier is code verification: it shows whether equations are solved as stated, not whether they are \
the right equations. For work where people can come to harm, validation, the responsible engineer's review and the local codes decide.";

/// The numbers claimed about a study.
pub(crate) fn claims_on<'a>(results: &'a Results, study: &str) -> Vec<&'a Claimed> {
    let on_it = results.verdicts.iter().filter(|verdict| verdict.evidence.iter().any(|id| id == study));
    on_it.filter_map(|verdict| verdict.claimed.as_ref()).collect()
}

/// The fields of a refinement study, in the order of the file.
pub(crate) fn fields(record: &OrderRecord) -> Vec<&str> {
    let mut fields: Vec<&str> = Vec::new();
    for level in &record.levels {
        for field in level.errors.keys() {
            if !fields.contains(&field.as_str()) {
                fields.push(field);
            }
        }
    }
    fields
}

/// A norm of the error as mathematics writes it.
pub(crate) fn norm_symbol(norm: &str) -> &'static str {
    match norm {
        "l1" => "‖e‖₁",
        "l2" => "‖e‖₂",
        _ => "‖e‖∞",
    }
}

/// A norm's name in plain text.
pub(crate) fn norm_name(norm: &str) -> &'static str {
    match norm {
        "l1" => "L1",
        "l2" => "L2",
        _ => "Linf",
    }
}

/// The norms of which any level has a number, for one field.
pub(crate) fn norms_present(record: &OrderRecord, field: &str) -> Vec<&'static str> {
    let has =
        |norm: &str| record.levels.iter().any(|level| level.errors.get(field).and_then(|n| n.get(norm)).is_some());
    let present: Vec<_> = Norms::NAMES.into_iter().filter(|norm| has(norm)).collect();
    // A field without any number still gets its table, with the norms empty.
    if present.is_empty() { Norms::NAMES.to_vec() } else { present }
}

/// The schemes by the name that studies and verdicts use, in the order of the file.
pub(crate) fn schemes(results: &Results) -> Vec<(&str, &SchemeRecord)> {
    if results.schemes.is_empty() {
        vec![(results.scheme.name.as_str(), &results.scheme)]
    } else {
        results.schemes.iter().map(|(name, record)| (name.as_str(), record)).collect()
    }
}

/// The verdicts on one scheme; with a single scheme, all.
pub(crate) fn verdicts_on<'a>(results: &'a Results, scheme: &str) -> Vec<&'a VerdictRecord> {
    let single = results.schemes.is_empty();
    results.verdicts.iter().filter(|verdict| single || verdict.scheme == scheme).collect()
}

/// How many verdicts are of each kind: upheld, refuted, undecided.
pub(crate) fn counts<'a>(verdicts: impl IntoIterator<Item = &'a VerdictRecord>) -> [(Verdict, usize); 3] {
    let mut counts = [(Verdict::Upheld, 0), (Verdict::Refuted, 0), (Verdict::Undecided, 0)];
    for verdict in verdicts {
        for (kind, count) in &mut counts {
            *count += usize::from(verdict.verdict == *kind);
        }
    }
    counts
}

/// The overall verdict as a sentence.
pub(crate) fn overall_sentence(results: &Results) -> String {
    let claims = |count: usize| if count == 1 { "1 claim".into() } else { format!("{count} claims") };
    let [(_, upheld), (_, refuted), (_, undecided)] = counts(&results.verdicts);
    match results.overall {
        None => "Nothing was claimed: what follows was measured and is not judged.".into(),
        Some(Verdict::Upheld) if upheld == 1 => "The one claim is upheld.".into(),
        Some(Verdict::Upheld) => format!("All {} are upheld.", claims(upheld)),
        Some(Verdict::Refuted) => {
            let rest = [(upheld, "upheld"), (undecided, "undecided")];
            let rest = rest.iter().filter(|(count, _)| *count > 0).map(|(count, word)| format!("{count} {word}"));
            let rest: Vec<_> = rest.collect();
            let verb = if refuted == 1 { "is" } else { "are" };
            let rest = if rest.is_empty() { String::new() } else { format!("; {}", rest.join(", ")) };
            format!("{} {verb} refuted{rest}.", claims(refuted))
        }
        Some(Verdict::Undecided) => {
            let verb = if undecided == 1 { "is" } else { "are" };
            let rest = if upheld == 0 { String::new() } else { format!(", {upheld} upheld") };
            format!("Nothing is refuted, but {} {verb} undecided{rest}.", claims(undecided))
        }
    }
}

/// A small count in words, as prose has it.
pub(crate) fn count(count: usize) -> String {
    const WORDS: [&str; 13] =
        ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven", "twelve"];
    WORDS.get(count).map_or_else(|| count.to_string(), |word| (*word).into())
}

/// A statement as one text, with its numbers written by `number`.
pub(crate) fn joined(parts: &[Part], number: fn(f64) -> String) -> String {
    let word = |part: &Part| match part {
        Part::Text(text) => text.clone(),
        Part::Number(value) => number(*value),
        Part::Count(count) => count.to_string(),
    };
    parts.iter().map(word).collect()
}
