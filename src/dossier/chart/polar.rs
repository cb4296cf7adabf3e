//! Polar charts of how a scheme treats waves by direction, in two dimensions.

use std::f64::consts::TAU;

use super::{Axis, Chart, Role, Scale, Series, Ticks};
use crate::dossier::clean::visible;
use crate::record::{DirectedQuantity, DirectionRecord, ModesRecord};

/// Half of the height of the sheet in units of the circle on which nothing errs; its width follows from the shape of a figure.
const REACH: f64 = 1.35;

/// Width over height of the frame of a figure.
const SHAPE: f64 = 1.6;

/// One chart for each quantity of the first branch, one curve for each wavelength.
pub(super) fn charts(id: &str, record: &ModesRecord) -> Vec<Chart> {
    let Some(first) = record.directions.first().filter(|wave| wave.direction.len() == 2) else { return Vec::new() };
    let own: Vec<&DirectionRecord> = record.directions.iter().filter(|wave| wave.branch == first.branch).collect();
    DirectedQuantity::ALL.into_iter().filter_map(|quantity| chart(id, quantity, &own, &first.branch)).collect()
}

fn chart(id: &str, quantity: DirectedQuantity, waves: &[&DirectionRecord], branch: &str) -> Option<Chart> {
    let circle: Vec<[f64; 2]> = (0..=120).map(|i| TAU * f64::from(i) / 120.0).map(|a| [a.cos(), a.sin()]).collect();
    let mut series = vec![Series { name: "no error".into(), role: Role::Exact, slot: 0, points: circle }];
    let mut wavelengths: Vec<f64> = waves.iter().map(|wave| wave.points_per_wavelength).collect();
    wavelengths.dedup();
    for (slot, points) in wavelengths.into_iter().enumerate() {
        let of = waves.iter().filter(|wave| wave.points_per_wavelength == points);
        let place = |wave: &&&DirectionRecord| {
            let radius = (1.0 + quantity.error(wave)?).clamp(0.0, REACH);
            Some([radius * wave.direction[0], radius * wave.direction[1]])
        };
        let mut curve: Vec<[f64; 2]> = of.clone().filter_map(|wave| place(&wave)).collect();
        if curve.len() < of.count() || curve.is_empty() {
            continue;
        }
        curve.push(curve[0]);
        series.push(Series { name: format!("{points} cells"), role: Role::Measured, slot, points: curve });
    }
    if series.len() < 2 {
        return None;
    }
    let key = match quantity {
        DirectedQuantity::PhaseSpeed => "phase-speed",
        DirectedQuantity::Damping => "damping",
        DirectedQuantity::GroupSpeed => "group-speed",
    };
    let words = quantity.words();
    let axis = |label: &str, symbol: &str, reach: f64| Axis {
        label: label.into(),
        symbol: symbol.into(),
        scale: Scale::Linear,
        range: [-reach, reach],
        ticks: Ticks::Numbers,
    };
    Some(Chart {
        id: format!("{id}-direction-{key}"),
        title: format!("Error of the {words} by direction, {}", visible(branch)),
        description: format!(
            "Polar chart: the distance from the middle in the direction of the wavevector is one plus the error of the {words}, one curve \
             for each number of cells per wavelength; on the circle nothing errs."
        ),
        x: axis("along x", "x", REACH * SHAPE),
        y: axis("along y", "y", REACH),
        series,
        marks: Vec::new(),
        bands: Vec::new(),
    })
}
