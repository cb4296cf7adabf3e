//! Chart of a refinement study: error against cell width (or step), both logarithmic, with the claimed slope.

use super::axis::log_range;
use super::{Axis, Chart, Role, Scale, Series, Ticks};
use crate::dossier::clean::visible;
use crate::dossier::{number, words};
use crate::record::{Claimed, Norms, OrderRecord, Refinement, Results};

pub(super) fn charts(id: &str, record: &OrderRecord, results: &Results, study: &str) -> Vec<Chart> {
    let mut series = measured(record);
    // One level shows no slope: its numbers are in the table.
    if series.iter().all(|series| series.points.len() < 2) {
        return Vec::new();
    }
    let claim = words::claims_on(results, study).into_iter().find(|claimed| claimed.quantity == "order");
    let all = |axis: usize| series.iter().flat_map(move |series| series.points.iter().map(move |point| point[axis]));
    let x_range = log_range(all(0), 1.25, [0.01, 1.0]);
    let y_range = log_range(all(1), 2.0, [1e-6, 1.0]);
    if let Some(guide) = claim.and_then(|claim| guide(claim, record, &series)) {
        series.push(guide);
    }
    let of_time = record.refine == Refinement::Time;
    vec![Chart {
        id: format!("{id}-convergence"),
        title: if of_time { "Error against step" } else { "Error against cell width" }.into(),
        description: format!(
            "Norms of the error over {}, both axes logarithmic, with the claimed slope where one is claimed.",
            if of_time { "the step" } else { "the cell width" }
        ),
        x: Axis {
            label: if of_time { "step Δt" } else { "cell width h" }.into(),
            symbol: if of_time { "Δt" } else { "h" }.into(),
            scale: Scale::Log,
            range: x_range,
            ticks: Ticks::Numbers,
        },
        y: Axis {
            label: "norm of the error".into(),
            symbol: "error".into(),
            scale: Scale::Log,
            range: y_range,
            ticks: Ticks::Numbers,
        },
        series,
        marks: Vec::new(),
        bands: Vec::new(),
    }]
}

/// A curve for each field and norm.
fn measured(record: &OrderRecord) -> Vec<Series> {
    let mut series = Vec::new();
    let fields = words::fields(record);
    for field in &fields {
        for norm in Norms::NAMES {
            let points = record.levels.iter().filter_map(|level| Some([level.h, level.errors.get(*field)?.get(norm)?]));
            let points: Vec<_> = points.filter(|[h, error]| *h > 0.0 && *error > 0.0 && error.is_finite()).collect();
            if !points.is_empty() {
                let name = words::norm_symbol(norm);
                let name = if fields.len() > 1 { format!("{name} of {}", visible(field)) } else { name.into() };
                series.push(Series { name, role: Role::Measured, slot: series.len(), points });
            }
        }
    }
    series
}

/// The claimed slope: a line below the curve that the claim is about, through the two ends of its ladder.
fn guide(claim: &Claimed, record: &OrderRecord, series: &[Series]) -> Option<Series> {
    let norm = claim.norm.as_deref().unwrap_or("l2");
    let fields = words::fields(record);
    let field = claim.field.as_deref().or(fields.first().copied())?;
    let name = words::norm_symbol(norm);
    let wanted = if fields.len() > 1 { format!("{name} of {}", visible(field)) } else { name.into() };
    let curve = series.iter().find(|series| series.name == wanted).or(series.first())?;
    let (coarse, fine) = (curve.points.first()?, curve.points.last()?);
    if coarse[0] == fine[0] {
        return None;
    }
    let through = [coarse[0], coarse[1] / 1.6];
    let end = through[1] * (fine[0] / coarse[0]).powf(claim.value);
    Some(Series {
        name: format!("claimed: order {}", number::typeset_short(claim.value)),
        role: Role::Guide,
        slot: 0,
        points: vec![through, [fine[0], end]],
    })
}
