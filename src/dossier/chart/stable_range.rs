//! Chart of a study of the stable steps: largest growth over the number that measures the step, with the limit.

use super::axis::linear_range;
use super::{Across, Axis, Chart, Mark, Role, Scale, Series, Ticks, thin};
use crate::dossier::{number, words};
use crate::record::{Results, StabilityRecord};

/// Most points in the curve.
const POINTS: usize = 257;

/// Growth beyond which the curve is cut: what matters happens near one.
const HIGHEST: f64 = 1.5;

pub(super) fn charts(id: &str, record: &StabilityRecord, results: &Results, study: &str) -> Vec<Chart> {
    let mut charts = range(id, record, results, study);
    charts.extend(map(id, record));
    charts
}

/// The boundary of the stable set in the plane of both numbers: the first and the last stable Courant number of each row.
fn map(id: &str, record: &StabilityRecord) -> Option<Chart> {
    let end = |pick: fn(&[[f64; 2]]) -> Option<f64>| -> Vec<[f64; 2]> {
        record.map.iter().filter_map(|row| Some([row.diffusion_number, pick(&row.stable)?])).collect()
    };
    let upper = end(|stable| stable.last().map(|interval| interval[1]));
    if upper.is_empty() {
        return None;
    }
    let lower = end(|stable| stable.first().map(|interval| interval[0]).filter(|from| *from > 0.0));
    let mut series = vec![Series { name: "largest stable".into(), role: Role::Measured, slot: 0, points: upper }];
    if !lower.is_empty() {
        series.push(Series { name: "smallest stable".into(), role: Role::Measured, slot: 1, points: lower });
    }
    let axis = |label: &str, symbol: &str, end: f64| Axis {
        label: label.into(),
        symbol: symbol.into(),
        scale: Scale::Linear,
        range: [0.0, end],
        ticks: Ticks::Numbers,
    };
    let widest = record.map.iter().map(|row| row.diffusion_number).fold(0.0, f64::max);
    Some(Chart {
        id: format!("{id}-map"),
        title: "Stable Courant numbers over the diffusion number".into(),
        description: "Boundary of the stable set in the plane of the diffusion number and the Courant number; stable below the curve.".into(),
        x: axis("diffusion number", "r", widest),
        y: axis("Courant number", "c", record.scanned_up_to),
        series,
        marks: Vec::new(),
        bands: Vec::new(),
    })
}

fn range(id: &str, record: &StabilityRecord, results: &Results, study: &str) -> Vec<Chart> {
    let points = record.scan.iter().filter_map(|&(number, growth)| Some([number, growth.filter(|g| g.is_finite())?]));
    let points: Vec<_> = points.collect();
    if points.is_empty() {
        return Vec::new();
    }
    let clipped = points.iter().map(|point| point[1].min(HIGHEST));
    let y_range = linear_range(clipped.chain([1.0, 1.05]), 0.05, [0.9, 1.1]);
    let words = record.number.words();
    vec![Chart {
        id: format!("{id}-stable-range"),
        title: format!("Largest growth over the {words}"),
        description: format!(
            "Largest modulus of the amplification factor over all wavenumbers, over the {words}; the stable range is shaded."
        ),
        x: Axis {
            label: words.into(),
            symbol: words.into(),
            scale: Scale::Linear,
            range: [0.0, record.scanned_up_to.max(f64::MIN_POSITIVE)],
            ticks: Ticks::Numbers,
        },
        y: Axis {
            label: "largest |G| over all wavenumbers".into(),
            symbol: "max |G|".into(),
            scale: Scale::Linear,
            range: y_range,
            ticks: Ticks::Numbers,
        },
        series: vec![Series { name: "measured".into(), role: Role::Measured, slot: 0, points: thin(&points, POINTS) }],
        marks: marks(record, results, study),
        bands: record.intervals.clone(),
    }]
}

fn marks(record: &StabilityRecord, results: &Results, study: &str) -> Vec<Mark> {
    let across = |value: f64, label: String| Mark { axis: Across::X, value, label };
    let mut marks = vec![Mark { axis: Across::Y, value: 1.0, label: String::new() }];
    if let Some(limit) = record.stable_up_to.filter(|&limit| limit > 0.0) {
        marks.push(across(limit, format!("stable up to {}", number::typeset_short(limit))));
    }
    let claims = words::claims_on(results, study);
    for claim in claims.iter().filter(|claim| claim.quantity == "stable_up_to" && claim.value <= record.scanned_up_to) {
        // Where both stand in one place, one label says it.
        if record.stable_up_to.is_none_or(|limit| (limit - claim.value).abs() > 0.02 * record.scanned_up_to) {
            marks.push(across(claim.value, format!("claimed {}", number::typeset_short(claim.value))));
        }
    }
    marks
}
