//! What a study found and how it was set up, as short statements that several outputs share.

use std::collections::BTreeMap;

use serde::Serialize;

use super::clean::visible;
use super::words;
use super::{invariants, uncertainty};
use crate::record::{
    ClaimedSymbol, Control, INTERIOR, ModesRecord, Observed, OrderRecord, Parameters, StabilityRecord, Study,
    StudyRecord,
};

/// A piece of a statement. Numbers stay numbers until an output rounds them for reading.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Part {
    Text(String),
    Number(f64),
    Count(u64),
}

/// A labelled statement.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub(crate) struct Fact {
    pub label: String,
    pub parts: Vec<Part>,
}

pub(super) fn text(text: impl Into<String>) -> Part {
    Part::Text(text.into())
}

pub(super) fn fact(label: impl Into<String>, parts: Vec<Part>) -> Fact {
    Fact { label: label.into(), parts }
}

/// The heading of a study.
pub(crate) fn heading(study: &StudyRecord) -> Vec<Part> {
    match &study.study {
        Study::Order(record) => vec![text(format!("Order of accuracy on {}", visible(&record.problem)))],
        Study::Modes(record) => {
            let mut parts = vec![text(format!("Fourier modes of {}", visible(&record.equation)))];
            if let Some(courant) = record.courant {
                parts.extend([text(", Courant number "), Part::Number(courant)]);
            }
            if let Some(number) = record.diffusion_number {
                parts.extend([text(", diffusion number "), Part::Number(number)]);
            }
            parts
        }
        Study::Uncertainty(record) => vec![text(format!("Grid convergence of {}", visible(&record.table)))],
        Study::Operator(record) => vec![text(format!("Operator between boundaries, {}", visible(&record.equation)))],
        Study::Invariants(record) => vec![text(format!("Invariants of {}", visible(&record.equation)))],
        Study::Stability(record) => {
            vec![text(format!("Stable range of the {}, {}", record.number.words(), visible(&record.equation)))]
        }
    }
}

/// What a study found.
pub(crate) fn findings(study: &StudyRecord) -> Vec<Fact> {
    match &study.study {
        Study::Order(record) => order_findings(record),
        Study::Invariants(record) => invariants::findings(record),
        Study::Uncertainty(record) => uncertainty::findings(record),
        Study::Operator(record) => super::operator::findings(record),
        Study::Modes(record) => modes_findings(record),
        Study::Stability(record) => stability_findings(record, study.stopped.is_some()),
    }
}

/// How a study was set up.
pub(crate) fn settings(study: &StudyRecord) -> Vec<Fact> {
    match &study.study {
        Study::Order(record) => order_settings(record),
        Study::Invariants(record) => invariants::settings(record),
        Study::Uncertainty(record) => uncertainty::settings(record),
        Study::Operator(record) => super::operator::settings(record),
        Study::Modes(record) => modes_settings(record),
        Study::Stability(record) => stability_settings(record),
    }
}

fn order_findings(record: &OrderRecord) -> Vec<Fact> {
    let mut facts = Vec::new();
    let several = record.observed.len() > 1;
    for (field, norms) in &record.observed {
        let of_field = if several { format!(", {}", visible(field)) } else { String::new() };
        for (names, parts) in alike(norms.iter().map(|(norm, observed)| (norm, observed_parts(record, observed)))) {
            facts.push(fact(format!("Observed order in {names}{of_field}"), parts));
        }
    }
    for (place, fields) in &record.places {
        for (field, norms) in fields {
            let of_field = if several { format!(", {}", visible(field)) } else { String::new() };
            facts.push(fact(format!("Order {}{of_field}", place_words(place)), norms_parts(norms)));
        }
    }
    for (name, observed) in &record.functionals {
        facts
            .push(fact(format!("Order of the functional {}", visible(name)), functional_parts(record, name, observed)));
    }
    facts.extend(record.control.as_ref().map(control));
    facts
}

/// A place as in "order in the interior" and "order near x_lower".
fn place_words(place: &str) -> String {
    if place == INTERIOR { format!("in the {INTERIOR}") } else { format!("near {}", visible(place)) }
}

fn norms_parts(norms: &BTreeMap<String, Observed>) -> Vec<Part> {
    let mut parts = Vec::new();
    for (index, (norm, observed)) in norms.iter().enumerate() {
        parts.push(text(format!("{}{} ", if index > 0 { ", " } else { "" }, words::norm_name(norm))));
        parts.push(observed.order.map_or_else(|| text("not determined"), Part::Number));
    }
    parts
}

fn functional_parts(record: &OrderRecord, name: &str, observed: &Observed) -> Vec<Part> {
    let mut parts = observed_parts(record, observed);
    if let Some(last) = record.levels.last().and_then(|level| level.functionals.get(name)) {
        parts.extend([text("; on the finest level it is ")]);
        parts.push(last.value.map_or_else(|| text("not finite"), Part::Number));
        parts.extend([text(", exactly "), Part::Number(last.exact)]);
        parts.extend(last.error.into_iter().flat_map(|error| [text(", error "), Part::Number(error)]));
    }
    parts
}

/// The smallest added error that the study refutes.
fn control(control: &Control) -> Fact {
    let mut parts = match (control.smallest_refuted, control.on_finest) {
        (Some(size), Some(on_finest)) => vec![
            text("an added error of order "),
            Part::Number(control.order),
            text(" is refuted from size "),
            Part::Number(size),
            text(" on, "),
            Part::Number(on_finest),
            text(" of the solution on the finest level"),
        ],
        _ => vec![text("no added error of order "), Part::Number(control.order), text(" was refuted")],
    };
    for (index, trial) in control.tried.iter().enumerate() {
        parts.push(text(if index == 0 { "; tried: " } else { ", " }));
        parts.extend([Part::Number(trial.size), text(format!(" {}", trial.verdict.word()))]);
    }
    if let Some(skipped) = &control.skipped {
        parts.push(text(format!("; {}", visible(skipped))));
    }
    fact("Detection limit", parts)
}

/// Neighbouring norms of which the same is said, said once.
fn alike<'a>(norms: impl Iterator<Item = (&'a String, Vec<Part>)>) -> Vec<(String, Vec<Part>)> {
    let mut said: Vec<(String, Vec<Part>)> = Vec::new();
    for (norm, parts) in norms {
        let name = words::norm_name(norm);
        match said.last_mut() {
            Some((names, last)) if *last == parts => *names = format!("{names}, {name}"),
            _ => said.push((name.into(), parts)),
        }
    }
    said
}

fn observed_parts(record: &OrderRecord, observed: &Observed) -> Vec<Part> {
    let mut parts = match observed.order {
        Some(order) => vec![Part::Number(order)],
        None => vec![text("not determined")],
    };
    if let Some([low, high]) = observed.interval {
        parts.extend([text(", interval "), Part::Number(low), text(" to "), Part::Number(high)]);
    }
    let used: Vec<_> = observed.used.iter().filter_map(|&index| record.levels.get(index)).collect();
    if let (Some(first), Some(last), true) = (used.first(), used.last(), observed.order.is_some()) {
        parts.push(text(format!(", from {} levels, ", words::count(used.len()))));
        parts.extend(cells_parts(&first.cells));
        parts.push(text(" to "));
        parts.extend(cells_parts(&last.cells));
        parts.push(text(" cells"));
    }
    if let Some(note) = &observed.note {
        parts.push(text(format!(": {}", visible(note))));
    }
    parts
}

/// Cells in each direction, as in `64 × 32`.
pub(crate) fn cells_parts(cells: &[usize]) -> Vec<Part> {
    let mut parts = Vec::new();
    for (index, &count) in cells.iter().enumerate() {
        if index > 0 {
            parts.push(text(" × "));
        }
        parts.push(Part::Count(count as u64));
    }
    parts
}

fn modes_findings(record: &ModesRecord) -> Vec<Fact> {
    let mut facts = Vec::new();
    let linear = match record.linear {
        Some(true) => "linear and shift invariant: one impulse gives the factor at every wavenumber",
        Some(false) => "not linear or not shift invariant: each wavenumber was tried by itself at small amplitude",
        None => "could not be tried",
    };
    facts.push(fact("Linearity", vec![text(linear)]));
    if let Some(trial) = record.linearity {
        let parts = vec![
            text("superposition "),
            Part::Number(trial.superposition),
            text(", shift "),
            Part::Number(trial.shift),
            text(", time "),
            Part::Number(trial.time),
            text("; allowed "),
            Part::Number(trial.allowed),
        ];
        facts.push(fact("Deviations of the trial", parts));
    }
    if let Some(uncertainty) = record.uncertainty {
        facts.push(fact("Uncertainty of G", vec![Part::Number(uncertainty)]));
    }
    if let Some(dependence) = record.amplitude_dependence {
        facts.push(fact("G moves with amplitude by", vec![Part::Number(dependence)]));
    }
    let leaking = record.modes.iter().filter_map(|mode| Some((mode.leaked?, mode)));
    if let Some((leaked, mode)) = leaking.max_by(|a, b| a.0.total_cmp(&b.0)) {
        let mut parts = vec![text("at most the share "), Part::Number(leaked), text(" of its energy, at θ = ")];
        for (index, theta) in mode.theta.iter().enumerate() {
            parts.extend([text(if index > 0 { ", " } else { "" }), Part::Number(*theta)]);
        }
        facts.push(fact("A wave loses to others in a step", parts));
    }
    if let Some(claimed) = &record.claimed_symbol {
        claimed_symbol(&mut facts, claimed);
    }
    if let Some(equation) = &record.modified_equation {
        if let Some(order) = equation.formal_order {
            facts.push(fact("Order at small wavenumbers", vec![Part::Count(order as u64)]));
        }
        for (derivative, coefficient) in &equation.terms {
            let parts =
                vec![Part::Number(*coefficient), text(" × derivative of order "), Part::Count(*derivative as u64)];
            facts.push(fact("The scheme adds", parts));
        }
    }
    resolution(&mut facts, record);
    worst_directions(&mut facts, record);
    if let Some(found) = &record.semi_discrete {
        super::semi_discrete::findings(&mut facts, found);
    }
    facts
}

/// Cells per wavelength for given errors.
fn resolution(facts: &mut Vec<Fact>, record: &ModesRecord) {
    let several = record.resolution.iter().any(|entry| entry.branch != record.resolution[0].branch);
    for entry in &record.resolution {
        let of = if several { format!(", {}", visible(&entry.branch)) } else { String::new() };
        let mut parts = vec![text(format!("{} within ", entry.quantity.words())), Part::Number(entry.within)];
        match entry.points_per_wavelength {
            Some(points) => parts.extend([text(" from "), Part::Number(points)]),
            None => parts.push(text(": not even the longest wave")),
        }
        facts.push(fact(format!("Cells per wavelength{of}"), parts));
    }
}

/// The direction in which waves of eight cells err most.
fn worst_directions(facts: &mut Vec<Fact>, record: &ModesRecord) {
    for worst in record.worst_directions.iter().filter(|worst| worst.points_per_wavelength == TOLD_POINTS) {
        let mut parts = vec![text(format!("{}, ", visible(&worst.branch))), Part::Number(worst.error), text(" along ")];
        for (index, component) in worst.direction.iter().enumerate() {
            parts.push(text(if index > 0 { ", " } else { "(" }));
            parts.push(Part::Number(*component));
        }
        parts.extend([text(") at "), Part::Number(worst.points_per_wavelength), text(" cells per wavelength")]);
        facts.push(fact(format!("Worst {}", worst.quantity.words()), parts));
    }
}

/// The wavelength for which the worst directions are told; all stand in the results.
const TOLD_POINTS: f64 = 8.0;

/// G against a claimed formula.
fn claimed_symbol(facts: &mut Vec<Fact>, claimed: &ClaimedSymbol) {
    facts.push(fact("Claimed formula of G", vec![text(visible(&claimed.formula))]));
    let mut parts = vec![
        text("differs at "),
        Part::Count(claimed.disagreeing as u64),
        text(" of "),
        Part::Count(claimed.compared as u64),
        text(" wavenumbers"),
    ];
    if let Some(difference) = claimed.largest_difference {
        parts.extend([text(", by at most "), Part::Number(difference)]);
    }
    if let Some(theta) = claimed.worst_theta {
        parts.extend([text(" (at θ = "), Part::Number(theta), text(")")]);
    }
    parts.extend([text("; allowed "), Part::Number(claimed.allowed)]);
    facts.push(fact("G against the formula", parts));
    if let Some(neighbour) = &claimed.neighbour {
        let parts = vec![
            text("the neighbour at "),
            Part::Number(neighbour.offset as f64),
            text(": "),
            Part::Number(neighbour.built),
            text(" as built, "),
            Part::Number(neighbour.claimed),
            text(" as claimed"),
        ];
        facts.push(fact("Coefficient that differs most", parts));
    }
}

fn stability_findings(record: &StabilityRecord, stopped: bool) -> Vec<Fact> {
    let words = record.number.words();
    let limit = match record.stable_up_to {
        Some(0.0) => vec![text("no step is stable")],
        Some(limit) => vec![text(format!("{words} ")), Part::Number(limit)],
        None if stopped || record.scan.is_empty() => vec![text("not determined")],
        None => vec![text(format!("no limit found up to {words} ")), Part::Number(record.scanned_up_to)],
    };
    let mut facts = vec![fact("Stable up to", limit)];
    if record.by_runs_alone {
        let why = "none: the scheme is not linear, not the same everywhere or depends on the time, so that only runs from noise tell anything";
        facts.push(fact("Amplification factor", vec![text(why)]));
    }
    if record.intervals.len() > 1 {
        let mut parts = Vec::new();
        for (index, [low, high]) in record.intervals.iter().enumerate() {
            parts.push(text(if index > 0 { "; " } else { "" }));
            parts.extend([Part::Number(*low), text(" to "), Part::Number(*high)]);
        }
        facts.push(fact("The stable set has holes", parts));
    }
    if let Some(theta) = record.worst_theta {
        facts.push(fact("Mode that grows first", vec![text("θ = "), Part::Number(theta)]));
    }
    if let Some(power) = record.growth_at_limit {
        let parts =
            vec![text("like the power "), Part::Number(power), text(" of the number of steps: a defective eigenvalue")];
        facts.push(fact("At the limit itself it grows", parts));
    }
    if let Some(weak) = record.weak_growth {
        let parts = vec![
            text("max |G| − one = "),
            Part::Number(weak.coefficient),
            text(" × (number to the power "),
            Part::Number(weak.power),
            text("); tenfold after "),
            Part::Number(weak.steps_to_tenfold),
            text(" steps at a tenth"),
        ];
        facts.push(fact("Weak growth", parts));
    }
    if let Some(bound) = record.refused_from {
        facts.push(fact("Refused by the scheme from", vec![Part::Number(bound)]));
    }
    super::semi_discrete::ranges(&mut facts, &record.predicted, words, record.scanned_up_to);
    facts
}

fn order_settings(record: &OrderRecord) -> Vec<Fact> {
    let mut facts = vec![
        fact("Problem", vec![text(visible(&record.problem))]),
        fact("Equation", vec![text(visible(&record.equation))]),
        fact("Refined", vec![text(record.refine.word())]),
        fact("Operation", vec![text(visible(&record.operation))]),
    ];
    if let Some([from, to]) = record.times {
        facts.push(fact("Time", vec![Part::Number(from), text(" to "), Part::Number(to)]));
    }
    numbers(&mut facts, " on the coarsest level", record.courant, record.diffusion_number);
    if let Some(power) = record.step_power {
        facts.push(fact("Step falls as cell width to", vec![text("the power "), Part::Number(power)]));
    }
    parameters(&mut facts, &record.parameters);
    facts
}

fn modes_settings(record: &ModesRecord) -> Vec<Fact> {
    let mut facts = vec![
        fact("Equation", vec![text(visible(&record.equation))]),
        fact("Cells", cells_parts(&record.cells)),
        fact("Step", vec![Part::Number(record.step)]),
    ];
    numbers(&mut facts, "", record.courant, record.diffusion_number);
    parameters(&mut facts, &record.parameters);
    facts
}

fn stability_settings(record: &StabilityRecord) -> Vec<Fact> {
    let mut grids = Vec::new();
    for (index, &cells) in record.cells.iter().enumerate() {
        grids.push(text(if index > 0 { ", " } else { "" }));
        grids.push(Part::Count(cells as u64));
    }
    let mut facts = vec![
        fact("Equation", vec![text(visible(&record.equation))]),
        fact("Grids of the impulses", grids),
        fact("Scanned up to", vec![text(format!("{} ", record.number.words())), Part::Number(record.scanned_up_to)]),
    ];
    if let Some(held) = record.held {
        facts.push(fact("Other number, held fixed", vec![Part::Number(held)]));
    }
    parameters(&mut facts, &record.parameters);
    facts
}

fn numbers(facts: &mut Vec<Fact>, place: &str, courant: Option<f64>, diffusion: Option<f64>) {
    if let Some(courant) = courant {
        facts.push(fact(format!("Courant number{place}"), vec![Part::Number(courant)]));
    }
    if let Some(diffusion) = diffusion {
        facts.push(fact(format!("Diffusion number{place}"), vec![Part::Number(diffusion)]));
    }
}

fn parameters(facts: &mut Vec<Fact>, parameters: &Parameters) {
    for (name, components) in parameters {
        let mut parts = Vec::new();
        for (index, &component) in components.iter().enumerate() {
            parts.push(text(if index > 0 { ", " } else { "" }));
            parts.push(Part::Number(component));
        }
        facts.push(fact(format!("Parameter {}", visible(name)), parts));
    }
}
