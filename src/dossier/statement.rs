//! `statement.md` and `statement.tex`: what was shown, in the words of the field, for the section of a paper that editors ask for.
//!
//! The points are those of the published policies on numerical accuracy (Roache, Ghia and White, 1986, J. Fluids Eng. 108, 2; Freitas,
//! 1993, J. Fluids Eng. 115, 339; both from memory): formal order stated and shown, artificial damping assessed, grid convergence,
//! time-step and phase error, order of the boundary treatment, and what was not assessed.

use std::fmt::Write as _;

use super::facts;
use super::table::of_study;
use super::{Dossier, DossierError, Exporter, OutputFile, clean, number, words};
use crate::record::{Results, Study, StudyRecord, Verdict, VerdictRecord};

/// The exporter.
pub(crate) struct Statement;

impl Exporter for Statement {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        let blocks = blocks(dossier);
        let file = |path: &str, text: String| OutputFile { path: path.into(), bytes: text.into_bytes() };
        Ok(vec![file("statement.md", markdown(&blocks)), file("statement.tex", latex(&blocks))])
    }
}

/// A piece of the statement, before it has a form.
enum Block {
    Title(String),
    Section(&'static str),
    Paragraph(String),
    Items(Vec<String>),
    /// A table file of the dossier, without its ending, with its caption.
    Table(String, String),
}

fn blocks(dossier: &Dossier<'_>) -> Vec<Block> {
    let results = dossier.results;
    let mut blocks = vec![
        Block::Title(format!("Numerical accuracy of {}", results.scheme.name)),
        Block::Paragraph(opening(results)),
        Block::Section("Formal order of accuracy"),
    ];
    claims(&mut blocks, results, "order", "No order of accuracy was claimed or none could be tried.");
    blocks.push(Block::Section("Grid convergence"));
    ladders(&mut blocks, dossier);
    blocks.push(Block::Section("Artificial damping, time step and phase error"));
    claims(&mut blocks, results, "modes", "No claim was made about damping or phase.");
    described(&mut blocks, results, "modes");
    blocks.push(Block::Section("Stable steps"));
    claims(&mut blocks, results, "stability", "No claim was made about the stable steps.");
    described(&mut blocks, results, "stability");
    let rest =
        results.verdicts.iter().filter(|verdict| !["order", "modes", "stability"].contains(&kind(results, verdict)));
    let rest: Vec<_> = rest.map(|verdict| claim(results, verdict)).collect();
    if !rest.is_empty() {
        blocks.extend([Block::Section("Other claims"), Block::Items(rest)]);
    }
    blocks.push(Block::Section("Boundary treatment"));
    blocks.push(Block::Paragraph(
        "Where a problem has boundaries, its observed order includes their treatment; boundaries were not studied apart from the interior."
            .into(),
    ));
    blocks.push(Block::Section("What was not assessed"));
    blocks.push(Block::Paragraph(not_assessed(results)));
    blocks.push(Block::Paragraph(words::CAUTION.into()));
    blocks
}

fn opening(results: &Results) -> String {
    let run = &results.run;
    let mut text = format!(
        "The scheme was measured as built, by Gridassay {} ({}). {}",
        run.gridassay,
        run.started,
        words::overall_sentence(results)
    );
    if let Some(digest) = &results.scheme.digest {
        let _ = write!(text, " SHA-256 of the scheme: {digest}.");
    }
    text
}

/// The kind of study that a claim rests on.
fn kind(results: &Results, verdict: &VerdictRecord) -> &'static str {
    let evidence = results.studies.iter().find(|study| verdict.evidence.contains(&study.id));
    match evidence {
        Some(study) => study.study.kind(),
        None => {
            ["order", "modes", "stability"].into_iter().find(|kind| verdict.claim.starts_with(kind)).unwrap_or("other")
        }
    }
}

fn claims(blocks: &mut Vec<Block>, results: &Results, of: &str, none: &str) {
    let own = results.verdicts.iter().filter(|verdict| kind(results, verdict) == of);
    let items: Vec<_> = own.map(|verdict| claim(results, verdict)).collect();
    blocks.push(if items.is_empty() { Block::Paragraph(none.into()) } else { Block::Items(items) });
}

fn claim(results: &Results, verdict: &VerdictRecord) -> String {
    let scheme = if results.schemes.is_empty() { String::new() } else { format!("{}: ", verdict.scheme) };
    let mut text = format!("{scheme}{}: {}. {}", verdict.text, verdict.verdict.word(), verdict.reason);
    if let (Some(by), Verdict::Undecided) = (&verdict.decided_by, verdict.verdict) {
        let _ = write!(text, " What would decide it: {by}");
    }
    text
}

/// What the studies of a kind found, a line each.
fn described(blocks: &mut Vec<Block>, results: &Results, of: &str) {
    let own = results.studies.iter().filter(|study| study.study.kind() == of);
    let items: Vec<_> = own.map(|study| description(results, study)).collect();
    if !items.is_empty() {
        blocks.push(Block::Items(items));
    }
}

fn description(results: &Results, study: &StudyRecord) -> String {
    let said = |fact: &facts::Fact| format!("{}: {}", fact.label, words::joined(&fact.parts, number::plain_short));
    let facts: Vec<_> = facts::findings(study).iter().map(said).collect();
    let scheme = if results.schemes.is_empty() { String::new() } else { format!("{}, ", study.scheme) };
    let heading = words::joined(&facts::heading(study), number::plain_short);
    let mut text = format!("{scheme}{} ({heading}). {}.", study.id, facts.join("; "));
    if let Some(stopped) = &study.stopped {
        let _ = write!(text, " Ended before its time: {stopped}");
    }
    text
}

fn ladders(blocks: &mut Vec<Block>, dossier: &Dossier<'_>) {
    let mut any = false;
    for (study, id) in dossier.results.studies.iter().zip(&dossier.ids) {
        if !matches!(study.study, Study::Order(_)) {
            continue;
        }
        any = true;
        blocks.push(Block::Paragraph(description(dossier.results, study)));
        for table in of_study(study, super::table_files::ROWS) {
            let caption = format!("{}: {}", study.id, table.caption);
            blocks.push(Block::Table(format!("tables/{id}-{}", table.id), caption));
        }
    }
    if !any {
        blocks.push(Block::Paragraph("No refinement study was made.".into()));
    }
}

fn not_assessed(results: &Results) -> String {
    let missing = |of: &str| !results.studies.iter().any(|study| study.study.kind() == of);
    let mut parts = Vec::new();
    for (of, words) in [
        ("order", "the order of accuracy"),
        ("modes", "damping and phase error"),
        ("stability", "the stable steps"),
        ("invariants", "conservation and other invariants"),
    ] {
        if missing(of) {
            parts.push(words);
        }
    }
    parts.push("convergence of iterations within a step");
    parts.push("equations, norms and ranges of parameters other than those named above");
    format!("Not assessed: {}.", parts.join("; "))
}

fn markdown(blocks: &[Block]) -> String {
    let mut out = String::new();
    for block in blocks {
        let _ = match block {
            Block::Title(text) => writeln!(out, "# {}\n", clean::markdown(text)),
            Block::Section(text) => writeln!(out, "## {text}\n"),
            Block::Paragraph(text) => writeln!(out, "{}\n", clean::markdown(text)),
            Block::Items(items) => {
                let items: String = items.iter().map(|item| format!("- {}\n", clean::markdown(item))).collect();
                writeln!(out, "{items}")
            }
            Block::Table(path, caption) => writeln!(out, "[{}]({path}.csv)\n", clean::markdown(caption)),
        };
    }
    out
}

fn latex(blocks: &[Block]) -> String {
    let mut out = String::from(
        "\\documentclass{article}\n\\usepackage[utf8]{inputenc}\n\\usepackage[T1]{fontenc}\n\\usepackage{booktabs,graphicx}\n\\begin{document}\n",
    );
    for block in blocks {
        let _ = match block {
            Block::Title(text) => writeln!(out, "\\section*{{{}}}\n", clean::latex(text)),
            Block::Section(text) => writeln!(out, "\\subsection*{{{text}}}\n"),
            Block::Paragraph(text) => writeln!(out, "{}\n", clean::latex(text)),
            Block::Items(items) => {
                let items: String = items.iter().map(|item| format!("\\item {}\n", clean::latex(item))).collect();
                writeln!(out, "\\begin{{itemize}}\n{items}\\end{{itemize}}\n")
            }
            Block::Table(path, caption) => writeln!(
                out,
                "\\begin{{center}}\\footnotesize {}\\\\[2pt]\n\\resizebox{{\\textwidth}}{{!}}{{\\input{{{path}.tex}}}}\\end{{center}}\n",
                clean::latex(caption)
            ),
        };
    }
    out + "\\end{document}\n"
}
