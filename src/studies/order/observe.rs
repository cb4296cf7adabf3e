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

fn one(record: &OrderRecord, field: &str, norm: &str) -> Observed {
    let ladder = match Ladder::from_series(&record.series(field, norm)) {
        Ok(ladder) => ladder.with_solution_size(record.size(field, norm)),
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
