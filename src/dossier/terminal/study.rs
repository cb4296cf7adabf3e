//! A single study as text: what it found, the ladder with its slopes, or the curves.

use std::f64::consts::PI;

use super::plot::{Plot, draw};
use super::{BOLD, left, paint, right, wrapped};
use unicode_width::UnicodeWidthStr;

use crate::dossier::chart::{self, Role, Scale, Ticks};
use crate::dossier::clean::visible;
use crate::dossier::facts::{self, Part};
use crate::dossier::{number, words};
use crate::record::{OrderRecord, Study, StudyRecord};

/// Columns of a fact's label.
const LABEL: usize = 30;

/// What a study found, in at most 80 columns: a ladder with errors and slopes, curves over the wavenumber, the limit of stable steps.
pub fn study_text(study: &StudyRecord, colour: bool) -> String {
    let heading = format!("{}  {}", visible(&study.id), joined(&facts::heading(study)));
    let mut out: String = wrapped(&heading, 0).iter().map(|line| paint(line, BOLD, colour) + "\n").collect();
    if let Some(stopped) = &study.stopped {
        paragraph(&mut out, &format!("Ended before its time: {}", visible(stopped)));
    }
    match &study.study {
        Study::Order(record) => ladders(&mut out, record),
        Study::Modes(record) => curves(&mut out, &chart::modes_charts(record), colour),
        Study::Stability(_) | Study::Invariants(_) | Study::Uncertainty(_) | Study::Operator(_) => {}
    }
    for fact in facts::findings(study) {
        let mut label = left(&fact.label, LABEL);
        if label.width() > LABEL {
            // A long label has lines of its own.
            paragraph(&mut out, &label);
            label = " ".repeat(LABEL);
        }
        for (index, line) in wrapped(&joined(&fact.parts), LABEL + 4).iter().enumerate() {
            let label = if index == 0 { label.clone() } else { " ".repeat(LABEL) };
            out += &format!("  {label}  {line}\n");
        }
    }
    for note in &study.notes {
        paragraph(&mut out, &format!("Note: {}", visible(note)));
    }
    out
}

fn paragraph(out: &mut String, text: &str) {
    for line in wrapped(text, 2) {
        *out += &format!("  {line}\n");
    }
}

/// A statement as one text.
fn joined(parts: &[Part]) -> String {
    words::joined(parts, number::plain_short)
}

/// The levels of each field, with the errors and the slopes of each norm.
fn ladders(out: &mut String, record: &OrderRecord) {
    let fields = words::fields(record);
    for field in &fields {
        let norms = words::norms_present(record, field);
        if fields.len() > 1 {
            *out += &format!("  {}\n", visible(field));
        }
        let mut line = format!("  {}{}", right("cells", 9), right("h", 12));
        for norm in &norms {
            line += &right(&format!("{} error", words::norm_name(norm)), 12);
            line += &right("slope", 7);
        }
        *out += &(line + "\n");
        for (index, level) in record.levels.iter().enumerate() {
            let cells: Vec<_> = level.cells.iter().map(ToString::to_string).collect();
            let mut line = format!("  {}{}", right(&cells.join("x"), 9), right(&number::plain(level.h, 5), 12));
            for norm in &norms {
                let error = level.errors.get(*field).and_then(|norms| norms.get(norm));
                line += &right(&error.map_or("-".into(), |error| format!("{error:.3e}")), 12);
                let observed = record.observed.get(*field).and_then(|norms| norms.get(*norm));
                let slope = index.checked_sub(1).and_then(|before| observed?.slopes.get(before).copied().flatten());
                line += &right(&slope.map_or("-".into(), |slope| format!("{slope:.2}")), 7);
            }
            *out += &(line + "\n");
            if let Some(note) = &level.note {
                paragraph(out, &format!("         {}", visible(note)));
            }
        }
    }
}

/// The charts of a Fourier study, one for each branch.
fn curves(out: &mut String, charts: &[chart::Chart], colour: bool) {
    for chart in charts {
        debug_assert!(chart.x.scale == Scale::Linear && chart.x.ticks == Ticks::Pi && chart.x.range[1] == PI);
        let x_labels = if chart.x.range[0] < 0.0 { ["-π", "0", "π"] } else { ["0", "π/2", "π"] };
        let one = chart.marks.iter().find(|mark| mark.label == "exact");
        let line = one.map(|mark| [[chart.x.range[0], mark.value], [chart.x.range[1], mark.value]]);
        let of = |role: Role| chart.series.iter().filter(move |series| series.role == role);
        let several = of(Role::Measured).count() > 1;
        for series in of(Role::Measured) {
            // An exact curve that branches share is kept once, with the first of them.
            let own = of(Role::Exact).find(|exact| exact.slot == series.slot).or(of(Role::Exact).next());
            let exact = line.as_ref().map_or(own.map_or(&[][..], |exact| &exact.points), |line| &line[..]);
            let name = if several { format!(", {}", series.name) } else { String::new() };
            for line in wrapped(&format!("{}{name} (dotted: exact)", chart.title), 2) {
                *out += &format!("  {line}\n");
            }
            let plot = Plot { points: &series.points, exact, x: chart.x.range, y: chart.y.range, x_labels };
            *out += &draw(&plot, colour);
        }
    }
}
