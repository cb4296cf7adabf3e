//! What the page shows, in the order in which it shows it.

use minijinja::Value;
use serde::Serialize;

use crate::dossier::facts::{self, Fact, Part};
use crate::dossier::figure::Figure;
use crate::dossier::table::{self, Table};
use crate::dossier::{Dossier, chart, clean, compared, words};
use crate::record::{Results, RunRecord, SchemeRecord, Study, StudyRecord, Verdict, VerdictRecord};

/// Most rows of a table on the page; the files under `tables/` hold all of them.
const ROWS: usize = 33;

/// Up to this many studies the page shows all of them unfolded.
const FEW: usize = 6;

/// The whole page.
#[derive(Serialize)]
pub(super) struct PageView<'a> {
    name: &'a str,
    scheme: &'a SchemeRecord,
    /// `upheld`, `refuted`, `undecided` or `measured`.
    overall: &'static str,
    sentence: String,
    run: &'a RunRecord,
    command: String,
    several: bool,
    schemes: Vec<SchemeView<'a>>,
    /// The kinds of study in the overview's columns.
    kinds: Vec<&'static str>,
    caution: &'static str,
    /// Several schemes side by side, where there are several.
    compared: Option<ComparedView<'a>>,
}

#[derive(Serialize)]
struct ComparedView<'a> {
    id: &'static str,
    name: &'static str,
    figures: Vec<FigureView<'a>>,
    tables: &'a [Table],
}

/// A scheme with what was claimed of it and measured on it.
#[derive(Serialize)]
struct SchemeView<'a> {
    id: String,
    name: &'a str,
    record: &'a SchemeRecord,
    verdict: &'static str,
    counts: Vec<(&'static str, usize)>,
    claims: Vec<ClaimView<'a>>,
    studies: Vec<StudyView<'a>>,
    open: bool,
}

#[derive(Serialize)]
struct ClaimView<'a> {
    id: String,
    verdict: &'static str,
    record: &'a VerdictRecord,
    kind: &'static str,
    evidence: Vec<Link<'a>>,
}

#[derive(Serialize)]
struct Link<'a> {
    /// `None` where the dossier has no such study.
    anchor: Option<String>,
    text: &'a str,
}

#[derive(Serialize)]
struct StudyView<'a> {
    id: &'a str,
    name: &'a str,
    kind: &'static str,
    heading: Vec<Part>,
    findings: Vec<Fact>,
    settings: Vec<Fact>,
    stopped: Option<&'a str>,
    notes: &'a [String],
    figures: Vec<FigureView<'a>>,
    tables: Vec<Table>,
    /// The claims that rest on it.
    claims: Vec<(String, &'a str, &'static str)>,
    open: bool,
}

#[derive(Serialize)]
struct FigureView<'a> {
    id: &'a str,
    title: &'a str,
    svg: Value,
    /// The chart's data for the script.
    data: Value,
}

/// What the page of `dossier` shows.
pub(super) fn view<'a>(dossier: &'a Dossier<'a>) -> PageView<'a> {
    let results = dossier.results;
    let schemes: Vec<_> =
        words::schemes(results).into_iter().map(|(name, record)| scheme(dossier, name, record)).collect();
    let command: Vec<_> = results.run.command_line.iter().map(|argument| shell(argument)).collect();
    PageView {
        name: &results.scheme.name,
        scheme: &results.scheme,
        overall: results.overall.map_or("measured", Verdict::word),
        sentence: words::overall_sentence(results),
        run: &results.run,
        command: command.join(" "),
        several: !results.schemes.is_empty(),
        kinds: kinds(&schemes),
        schemes,
        caution: words::CAUTION,
        compared: (!dossier.compared.is_empty()).then(|| ComparedView {
            id: compared::ID,
            name: "all schemes",
            figures: dossier.compared.figures.iter().map(figure_view).collect(),
            tables: &dossier.compared.tables,
        }),
    }
}

fn scheme<'a>(dossier: &'a Dossier<'a>, name: &'a str, record: &'a SchemeRecord) -> SchemeView<'a> {
    let results = dossier.results;
    let verdicts = words::verdicts_on(results, name);
    let single = results.schemes.is_empty();
    let studies = results.studies.iter().zip(&dossier.ids).zip(&dossier.figures);
    let own = studies.filter(|((study, _), _)| single || study.scheme == name);
    let counts = words::counts(verdicts.iter().copied());
    let overall = Verdict::overall(verdicts.iter().map(|verdict| verdict.verdict));
    SchemeView {
        id: scheme_id(name),
        name,
        record,
        verdict: overall.map_or("measured", Verdict::word),
        counts: counts.into_iter().filter(|(_, count)| *count > 0).map(|(kind, count)| (kind.word(), count)).collect(),
        claims: verdicts.iter().map(|verdict| claim(dossier, verdict)).collect(),
        studies: own.map(|((study, id), figures)| study_view(results, study, id, figures)).collect(),
        open: single || overall != Some(Verdict::Upheld),
    }
}

fn scheme_id(name: &str) -> String {
    format!("scheme-{}", clean::slug(name))
}

fn claim_id(verdict: &VerdictRecord) -> String {
    format!("claim-{}-{}", clean::slug(&verdict.scheme), clean::slug(&verdict.claim))
}

fn claim<'a>(dossier: &'a Dossier<'a>, verdict: &'a VerdictRecord) -> ClaimView<'a> {
    let studies = &dossier.results.studies;
    let place = |id: &str| studies.iter().position(|study| study.id == id);
    let first = verdict.evidence.iter().find_map(|id| place(id));
    let kind = match first.map(|index| &studies[index].study) {
        Some(study) => study.kind(),
        // Without evidence the claim's id still tells its kind: it begins with it.
        None => ["order", "modes", "stability", "invariants"]
            .into_iter()
            .find(|kind| verdict.claim.starts_with(kind))
            .unwrap_or("other"),
    };
    let evidence =
        verdict.evidence.iter().map(|id| Link { anchor: place(id).map(|index| dossier.ids[index].clone()), text: id });
    ClaimView {
        id: claim_id(verdict),
        verdict: verdict.verdict.word(),
        record: verdict,
        kind,
        evidence: evidence.collect(),
    }
}

fn study_view<'a>(results: &'a Results, study: &'a StudyRecord, id: &'a str, figures: &'a [Figure]) -> StudyView<'a> {
    let resting = results.verdicts.iter().filter(|verdict| verdict.evidence.contains(&study.id));
    let resting: Vec<_> = resting.collect();
    let not_upheld = resting.iter().any(|verdict| verdict.verdict != Verdict::Upheld);
    StudyView {
        id,
        name: &study.id,
        kind: match study.study {
            Study::Order(_) => "order",
            Study::Modes(_) => "modes",
            Study::Stability(_) => "stability",
            Study::Invariants(_) => "invariants",
            Study::Uncertainty(_) => "uncertainty",
            Study::Operator(_) => "operator",
        },
        heading: facts::heading(study),
        findings: facts::findings(study),
        settings: facts::settings(study),
        stopped: study.stopped.as_deref(),
        notes: &study.notes,
        figures: figures.iter().map(figure_view).collect(),
        tables: table::of_study(study, ROWS),
        claims: resting.iter().map(|v| (claim_id(v), v.claim.as_str(), v.verdict.word())).collect(),
        open: results.studies.len() <= FEW || not_upheld || study.stopped.is_some(),
    }
}

fn figure_view(figure: &Figure) -> FigureView<'_> {
    let data = serde_json::to_string(&figure.chart).expect("a chart holds only text and finite numbers");
    FigureView {
        id: &figure.chart.id,
        title: &figure.chart.title,
        svg: Value::from_safe_string(chart::themed(&figure.svg)),
        // Within a script element `<` could end it, whatever the JSON means.
        data: Value::from_safe_string(data.replace('<', "\\u003c").replace('>', "\\u003e").replace('&', "\\u0026")),
    }
}

/// The kinds of claim that occur, in the order of the page.
fn kinds(schemes: &[SchemeView<'_>]) -> Vec<&'static str> {
    let occurs = |kind: &str| schemes.iter().flat_map(|scheme| &scheme.claims).any(|claim| claim.kind == kind);
    ["order", "modes", "stability", "invariants", "other"].into_iter().filter(|kind| occurs(kind)).collect()
}

/// An argument as a shell would need it.
fn shell(argument: &str) -> String {
    let plain = |c: char| c.is_ascii_alphanumeric() || "-_./=,:+".contains(c);
    if !argument.is_empty() && argument.chars().all(plain) {
        argument.into()
    } else {
        format!("'{}'", argument.replace('\'', "'\\''"))
    }
}
