//! Charts in which several schemes are laid over each other: modulus of G and phase speed at the same equation and number, and error
//! against measured cost on the same problem.

use super::axis::log_range;
use super::modes::{Curve, amplification, curves, phase_speed};
use super::{Axis, Chart, Role, Scale, Series, Ticks};
use crate::dossier::clean::visible;
use crate::dossier::{number, words};
use crate::record::{ModesRecord, OrderRecord, Refinement, Results, Study, StudyRecord};

/// Most schemes in one chart: as many as there are colours and markers.
const MOST: usize = 6;

/// A scheme with one study of it.
type Contender<'a, R> = (&'a StudyRecord, &'a R);

pub(super) fn charts(results: &Results) -> Vec<Chart> {
    let mut charts = Vec::new();
    let modes = groups(results, |study| match study {
        Study::Modes(record) if record.cells.len() == 1 && !record.modes.is_empty() => {
            Some((modes_key(record), record))
        }
        _ => None,
    });
    for (number, group) in (1..).zip(modes) {
        charts.extend(overlaid(number, &group));
    }
    let orders = groups(results, |study| match study {
        Study::Order(record) if record.refine != Refinement::Time => Some((record.problem.clone(), record)),
        _ => None,
    });
    for (number, group) in (1..).zip(orders) {
        charts.extend(work_precision(number, &group, results));
    }
    charts
}

fn modes_key(record: &ModesRecord) -> String {
    format!("{} {:?} {:?}", record.equation, record.courant, record.diffusion_number)
}

/// The studies about the same thing, one a scheme, in groups of at most [`MOST`] schemes; what only one scheme was tried on is left out. A
/// study that only stands beside another as evidence (its twin with the velocity turned round) is no contender.
fn groups<R>(results: &Results, about: impl Fn(&Study) -> Option<(String, &R)>) -> Vec<Vec<Contender<'_, R>>> {
    let beside = |id: &String| results.verdicts.iter().any(|verdict| verdict.evidence.iter().skip(1).any(|e| e == id));
    let mut groups: Vec<(String, Vec<Contender<'_, R>>)> = Vec::new();
    for study in results.studies.iter().filter(|study| !beside(&study.id)) {
        let Some((key, record)) = about(&study.study) else { continue };
        match groups.iter_mut().find(|(other, _)| *other == key) {
            Some((_, group)) if group.iter().any(|(other, _)| other.scheme == study.scheme) => {}
            Some((_, group)) => group.push((study, record)),
            None => groups.push((key, vec![(study, record)])),
        }
    }
    let several = groups.into_iter().filter(|(_, group)| group.len() > 1);
    several.flat_map(|(_, group)| group.chunks(MOST).map(<[_]>::to_vec).collect::<Vec<_>>()).collect()
}

/// |G| and phase speed of all schemes of a group, the first branch of each.
fn overlaid(number: usize, group: &[Contender<'_, ModesRecord>]) -> Vec<Chart> {
    let mut overlaid = Vec::new();
    for (study, record) in group {
        let first = curves(&record.modes).into_iter().next();
        overlaid.extend(first.map(|first| Curve { name: visible(&study.scheme), modes: first.modes }));
    }
    let record = group[0].1;
    let mut of = visible(&record.equation);
    for (words, value) in [("Courant number", record.courant), ("diffusion number", record.diffusion_number)] {
        if let Some(value) = value {
            of += &format!(", {words} {}", number::typeset_short(value));
        }
    }
    let id = format!("compared-{number}");
    let mut charts = vec![amplification(&id, &overlaid)];
    charts.extend(phase_speed(&id, &overlaid));
    for chart in &mut charts {
        chart.title = format!("{}: {of}", chart.title);
        // All share the exact factor: it is drawn once.
        let mut exact = 0;
        chart.series.retain(|series| {
            exact += usize::from(series.role == Role::Exact);
            series.role != Role::Exact || exact == 1
        });
        chart
            .series
            .iter_mut()
            .filter(|series| series.role == Role::Exact)
            .for_each(|series| series.name = "exact".into());
    }
    charts
}

/// Error against the wall time of the run that made it, in the norm and of the field that is claimed first.
fn work_precision(number: usize, group: &[Contender<'_, OrderRecord>], results: &Results) -> Option<Chart> {
    let claims = group.iter().flat_map(|(study, _)| words::claims_on(results, &study.id));
    let claim = claims.into_iter().find(|claim| claim.quantity == "order");
    let norm = claim.and_then(|claim| claim.norm.clone()).unwrap_or_else(|| "l2".into());
    let field = claim.and_then(|claim| claim.field.clone());
    let mut series = Vec::new();
    for (slot, (study, record)) in group.iter().enumerate() {
        let Some(field) = field.as_deref().or(words::fields(record).first().copied()) else { continue };
        let points =
            record.levels.iter().filter_map(|level| Some([level.seconds?, level.errors.get(field)?.get(&norm)?]));
        let points: Vec<[f64; 2]> = points.filter(|point| point.iter().all(|v| v.is_finite() && *v > 0.0)).collect();
        if points.len() > 1 {
            series.push(Series { name: visible(&study.scheme), role: Role::Measured, slot, points });
        }
    }
    if series.len() < 2 {
        return None;
    }
    let all = |axis: usize| series.iter().flat_map(move |series| series.points.iter().map(move |point| point[axis]));
    let (x_range, y_range) = (log_range(all(0), 1.5, [1e-3, 1.0]), log_range(all(1), 2.0, [1e-6, 1.0]));
    Some(Chart {
        id: format!("compared-work-{number}"),
        title: format!("Error against cost: {}", visible(&group[0].1.problem)),
        description: "Norm of the error of each scheme over the wall time of the run, both axes logarithmic: lower and further left is better."
            .into(),
        x: Axis { label: "wall time of the run in s".into(), symbol: "s".into(), scale: Scale::Log, range: x_range, ticks: Ticks::Numbers },
        y: Axis {
            label: format!("{} of the error", words::norm_name(&norm)),
            symbol: "error".into(),
            scale: Scale::Log,
            range: y_range,
            ticks: Ticks::Numbers,
        },
        series,
        marks: Vec::new(),
        bands: Vec::new(),
    })
}
