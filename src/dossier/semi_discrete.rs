//! What the rate of a semi-discrete scheme implies, as statements and tables.

use super::chart::thin;
use super::clean::visible;
use super::facts::{Fact, Part, fact, text};
use super::table::{Cell, Column, Table, column};
use crate::record::{PredictedRange, SemiDiscrete};

/// How far predictions without a stable range of the scheme's own are scanned.
const SCANNED_TO: f64 = 4.0;

pub(super) fn findings(facts: &mut Vec<Fact>, found: &SemiDiscrete) {
    let how = if found.linear { "from its impulse response" } else { "one wavenumber at a time" };
    facts.push(fact("Rate of the scheme", vec![text(format!("measured {how}"))]));
    if let Some(largest) = found.largest_modified_wavenumber {
        facts.push(fact("Largest modified wavenumber", vec![text("k' h = "), Part::Number(largest)]));
    }
    for (within, share) in &found.resolving_efficiency {
        let parts = vec![Part::Number(*share), text(" of all wavenumbers, within "), Part::Number(*within)];
        facts.push(fact("Resolving efficiency", parts));
    }
    if let Some(number) = found.number {
        ranges(facts, &found.predicted, number.words(), SCANNED_TO);
    }
}

/// The stable range with each integrator.
pub(super) fn ranges(facts: &mut Vec<Fact>, predicted: &[PredictedRange], words: &str, scanned_to: f64) {
    for range in predicted {
        let mut parts = match (range.stable_up_to, range.weak_growth) {
            (Some(0.0), Some(weak)) => vec![
                text("no stable step: growth like the power "),
                Part::Number(weak.power),
                text(", tenfold after "),
                Part::Number(weak.steps_to_tenfold),
                text(" steps at a tenth"),
            ],
            (Some(0.0), None) => vec![text("no stable step")],
            (Some(limit), _) => vec![text(format!("up to {words} ")), Part::Number(limit)],
            (None, _) => vec![text(format!("no limit up to {words} ")), Part::Number(scanned_to)],
        };
        if range.is_the_measured == Some(true) {
            parts.push(text(", which is what the scheme's own steps do"));
        }
        facts.push(fact(format!("The rate with {}", visible(&range.integrator)), parts));
    }
}

/// The modes of the rate.
pub(super) fn tables(found: &SemiDiscrete, most: usize) -> Vec<Table> {
    if found.modes.is_empty() {
        return Vec::new();
    }
    let rows = thin(&found.modes, most);
    let of = (rows.len() < found.modes.len()).then_some(found.modes.len());
    let parts = |pair: Option<[f64; 2]>| [Cell::Number(pair.map(|p| p[0])), Cell::Number(pair.map(|p| p[1]))];
    let row = |mode: &crate::record::RateMode| {
        let mut row = vec![Cell::Text(visible(&mode.branch)), Cell::Number(Some(mode.theta))];
        row.extend(parts(Some(mode.rate)));
        row.extend(parts(mode.exact_rate));
        row.extend(parts(mode.modified_wavenumber));
        row
    };
    vec![Table {
        id: "rate".into(),
        caption: "Modes of the rate: eigenvalue per unit of time, and modified wavenumber".into(),
        columns: vec![
            Column { numeric: false, ..column("branch", "branch", "branch") },
            column("θ", "theta", "$\\theta$"),
            column("Re λ", "rate_re", "$\\mathrm{Re}\\,\\lambda$"),
            column("Im λ", "rate_im", "$\\mathrm{Im}\\,\\lambda$"),
            column("Re λ exact", "exact_rate_re", "$\\mathrm{Re}\\,\\lambda$ exact"),
            column("Im λ exact", "exact_rate_im", "$\\mathrm{Im}\\,\\lambda$ exact"),
            column("Re k'h", "modified_wavenumber_re", "$\\mathrm{Re}\\,k'h$"),
            column("Im k'h", "modified_wavenumber_im", "$\\mathrm{Im}\\,k'h$"),
        ],
        rows: rows.iter().map(row).collect(),
        of,
    }]
}
