//! `summary.md`: the verdicts, short enough for a comment on a pull request.

use std::fmt::Write as _;

use super::clean::{markdown, visible};
use super::{Dossier, DossierError, Exporter, OutputFile, words};
use crate::record::{Results, Verdict, VerdictRecord};

/// Most claims in the table, and most reasons below it: forges cut a comment at 65 536 characters.
const MOST: usize = 60;

/// Most characters of a sentence.
const LONGEST: usize = 500;

/// The exporter.
pub(crate) struct Summary;

impl Exporter for Summary {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        Ok(vec![OutputFile { path: "summary.md".into(), bytes: summary(dossier.results).into_bytes() }])
    }
}

/// The mark of a verdict: told by its shape, whatever the colours of the page that shows it.
fn mark(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Upheld => "✓",
        Verdict::Refuted => "✗",
        Verdict::Undecided => "?",
    }
}

fn summary(results: &Results) -> String {
    let mut out = String::new();
    let overall = results.overall.map_or("measured", Verdict::word);
    let _ = writeln!(out, "## Gridassay: {overall}\n");
    // Several schemes have versions of their own, which the page lists.
    let version = if results.schemes.is_empty() { sentence(&results.scheme.version) } else { String::new() };
    let _ = writeln!(out, "{}\n", format!("**{}** {version}", sentence(&results.scheme.name)).trim_end());
    let _ = writeln!(out, "{}\n", words::overall_sentence(results));
    for (name, record) in words::schemes(results) {
        if let Some(fault) = &record.fault {
            let _ = writeln!(out, "{} could not be measured: {}\n", sentence(name), sentence(fault));
        }
    }
    if !results.verdicts.is_empty() {
        table(&mut out, results);
        reasons(&mut out, results);
    }
    footer(&mut out, results);
    out
}

fn table(out: &mut String, results: &Results) {
    let several = !results.schemes.is_empty();
    let (head, rule) = if several { ("| scheme ", "| --- ") } else { ("", "") };
    let _ = writeln!(out, "| verdict {head}| claim | |\n| --- {rule}| --- | --- |");
    for verdict in results.verdicts.iter().take(MOST) {
        let scheme = if several { format!("| {} ", sentence(&verdict.scheme)) } else { String::new() };
        let (claim, text) = (sentence(&verdict.claim), sentence(&verdict.text));
        let _ = writeln!(out, "| {} {} {scheme}| {claim} | {text} |", mark(verdict.verdict), verdict.verdict.word());
    }
    if results.verdicts.len() > MOST {
        let _ = writeln!(out, "\nThe table shows the first claims only; the dossier's page shows all.");
    }
}

fn reasons(out: &mut String, results: &Results) {
    let mut open: Vec<&VerdictRecord> = results.verdicts.iter().filter(|v| v.verdict != Verdict::Upheld).collect();
    if open.is_empty() {
        return;
    }
    // What is refuted comes first; within a kind, the order of the claims.
    open.sort_by_key(|verdict| std::cmp::Reverse(verdict.verdict));
    let _ = writeln!(out, "\n### What is not upheld\n");
    let several = !results.schemes.is_empty();
    for verdict in open.iter().take(MOST) {
        let scheme = if several { format!("{}, ", sentence(&verdict.scheme)) } else { String::new() };
        let name = format!("{scheme}{}", sentence(&verdict.claim));
        let _ = write!(
            out,
            "- {} **{name}** {}: {}",
            mark(verdict.verdict),
            verdict.verdict.word(),
            sentence(&verdict.reason)
        );
        if let Some(by) = &verdict.decided_by {
            let _ = write!(out, " What would decide it: {}", sentence(by));
        }
        out.push('\n');
    }
    if open.len() > MOST {
        let _ = writeln!(out, "- and more: the dossier's page shows all.");
    }
}

fn footer(out: &mut String, results: &Results) {
    let run = &results.run;
    let _ = write!(out, "\n<sub>Gridassay {}", sentence(&run.gridassay));
    if let Some(digest) = &results.scheme.digest {
        let short: String = visible(digest).chars().take(12).collect();
        let _ = write!(out, "; scheme SHA-256 {}", markdown(&short));
    }
    if let Some(claims) = &run.claims {
        let _ = write!(out, "; claims {}", sentence(&claims.path));
    }
    let _ = writeln!(out, "; {}. {}</sub>", sentence(&run.started), words::CAUTION);
}

/// `text` escaped and on one line, cut where it is too long for a comment.
fn sentence(text: &str) -> String {
    if text.chars().count() <= LONGEST {
        return markdown(text);
    }
    let start: String = text.chars().take(LONGEST).collect();
    format!("{} …", markdown(&start))
}
