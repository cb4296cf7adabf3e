//! The table of verdicts.

use super::{BOLD, DIM, left, paint, style, wrapped};
use crate::dossier::clean::visible;
use crate::dossier::words;
use crate::record::{Results, Verdict, VerdictRecord};
use unicode_width::UnicodeWidthStr;

/// Where the claims' words begin.
const WIDEST_NAME: usize = 18;

/// The verdicts of a run as a table of at most 80 columns: what is upheld in a line or two, what is not with its reason and with what
/// would decide it. Control characters of a scheme's names never reach the terminal.
pub fn verdict_table(results: &Results, colour: bool) -> String {
    let mut out = String::new();
    let name_width = results.verdicts.iter().map(|verdict| visible(&verdict.claim).width()).max().unwrap_or(0);
    let name_width = name_width.min(WIDEST_NAME);
    for (name, record) in words::schemes(results) {
        let head = format!("{} {}", visible(name), visible(&record.version));
        for line in wrapped(head.trim_end(), 0) {
            out += &format!("{}\n", paint(&line, BOLD, colour));
        }
        if let Some(fault) = &record.fault {
            for line in wrapped(&format!("could not be measured: {}", visible(fault)), 2) {
                out += &format!("  {line}\n");
            }
        }
        for verdict in words::verdicts_on(results, name) {
            row(&mut out, verdict, name_width, colour);
        }
        out.push('\n');
    }
    let sentence = words::overall_sentence(results);
    let sentence = results.overall.map_or_else(|| sentence.clone(), |overall| paint(&sentence, style(overall), colour));
    out + &sentence + "\n"
}

fn mark(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Upheld => "✓",
        Verdict::Refuted => "✗",
        Verdict::Undecided => "?",
    }
}

fn row(out: &mut String, verdict: &VerdictRecord, name_width: usize, colour: bool) {
    let indent = 2 + 11 + 2 + name_width + 2;
    let word = left(&format!("{} {}", mark(verdict.verdict), verdict.verdict.word()), 11);
    let name = visible(&verdict.claim);
    let mut start = format!("  {}  ", paint(&word, style(verdict.verdict), colour));
    if name.width() <= name_width {
        start += &format!("{}  ", left(&name, name_width));
    } else {
        // A long name has lines of its own.
        for line in wrapped(&name, 15) {
            *out += &format!("{start}{line}\n");
            start = " ".repeat(15);
        }
        start = " ".repeat(indent);
    }
    let rest = " ".repeat(indent);
    for line in wrapped(&visible(&verdict.text), indent) {
        *out += &format!("{start}{line}\n");
        start.clone_from(&rest);
    }
    if verdict.verdict == Verdict::Upheld {
        return;
    }
    let decided = verdict.decided_by.as_deref().map(|by| format!("What would decide it: {}", visible(by)));
    for text in [Some(visible(&verdict.reason)), decided].into_iter().flatten() {
        for line in wrapped(&text, indent) {
            *out += &format!("{rest}{}\n", paint(&line, DIM, colour));
        }
    }
}
