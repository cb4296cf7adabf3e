//! The observed orders of a record, by the rule of [`crate::analysis::order`].

use std::collections::BTreeMap;

use crate::analysis::order::{Ladder, SetAside, Settings, observe};
use crate::record::{Norms, Observed, OrderRecord, finite};

/// The observed order of every field in every norm.
pub fn observed(record: &OrderRecord) -> BTreeMap<String, BTreeMap<String, Observed>> {
    let fields =
        record.levels.first().map(|level| level.errors.keys().cloned().collect::<Vec<_>>()).unwrap_or_default();
    let of_field =
        |field: &String| Norms::NAMES.iter().map(|norm| ((*norm).to_owned(), one(record, field, norm))).collect();
    fields.iter().map(|field| (field.clone(), of_field(field))).collect()
}

/// The observed order of every field in every norm at every place.
pub(super) fn observed_at_places(
    record: &OrderRecord,
) -> BTreeMap<String, BTreeMap<String, BTreeMap<String, Observed>>> {
    let Some(first) = record.levels.iter().find(|level| !level.places.is_empty()) else { return BTreeMap::new() };
    let in_norm = |place: &str, field: &str, norm: &str| {
        of_series(&record.series_at(place, field, norm), record.size(field, norm))
    };
    let of_field = |place: &str, field: &str| {
        Norms::NAMES.iter().map(|norm| ((*norm).to_owned(), in_norm(place, field, norm))).collect()
    };
    let at = |(place, fields): (&String, &BTreeMap<String, Norms>)| {
        (place.clone(), fields.keys().map(|field| (field.clone(), of_field(place, field))).collect())
    };
    first.places.iter().map(at).collect()
}

/// The observed order of the error of every functional.
pub(super) fn observed_functionals(record: &OrderRecord) -> BTreeMap<String, Observed> {
    let Some(first) = record.levels.first() else { return BTreeMap::new() };
    let size =
        |name: &str| record.levels.last().and_then(|level| level.functionals.get(name)).map_or(0.0, |f| f.exact.abs());
    let one = |name: &String| (name.clone(), of_series(&record.series_of(name), size(name)));
    first.functionals.keys().map(one).collect()
}

fn one(record: &OrderRecord, field: &str, norm: &str) -> Observed {
    of_series(&record.series(field, norm), record.size(field, norm))
}

fn of_series(series: &[(f64, f64, f64)], size: f64) -> Observed {
    let ladder = match Ladder::from_series(series) {
        Ok(ladder) => ladder.with_solution_size(size),
        Err(error) => return Observed { note: Some(error.to_string()), ..Observed::default() },
    };
    let observed = observe(&ladder, Settings::default());
    let slope_after = |index: usize| {
        let h = ladder.levels()[index].h;
        observed.slopes.iter().find(|slope| slope.coarse == h).and_then(|slope| finite(slope.order))
    };
    let at_round_off = observed.set_aside.iter().filter(|why| **why == Some(SetAside::RoundOff)).count();
    let unresolved = observed.set_aside.iter().filter(|why| **why == Some(SetAside::Unresolved)).count();
    let mut notes = Vec::new();
    if at_round_off > 0 {
        notes.push(format!("{at_round_off} level(s) at round-off set aside"));
    }
    if unresolved > 0 {
        notes.push(format!("{unresolved} level(s) that resolve nothing set aside"));
    }
    if observed.order.is_some() && !observed.settled {
        notes.push("the slopes have not settled".to_owned());
    }
    Observed {
        order: observed.order.and_then(finite),
        interval: observed.interval.filter(|i| i.low.is_finite() && i.high.is_finite()).map(|i| [i.low, i.high]),
        slopes: (1..ladder.levels().len()).map(|index| slope_after(index - 1)).collect(),
        used: observed.used.clone(),
        note: (!notes.is_empty()).then(|| notes.join("; ")),
    }
}
