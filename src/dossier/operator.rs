//! A study of a bounded problem's operator as statements and tables.

use super::chart::thin;
use super::facts::{Fact, Part, fact, text};
use super::table::{Cell, Table, column};
use crate::record::OperatorRecord;

pub(super) fn findings(record: &OperatorRecord) -> Vec<Fact> {
    let mut facts = Vec::new();
    let mut number = |label: &str, value: Option<f64>| {
        facts.extend(value.map(|value| fact(label, vec![Part::Number(value)])));
    };
    number("Spectral abscissa", record.spectral_abscissa);
    number("Numerical abscissa", record.numerical_abscissa);
    number("Spectral radius of a step", record.spectral_radius);
    number("Uncertain by", record.radius_uncertainty);
    for (epsilon, abscissa) in &record.pseudospectral_abscissa {
        let parts = vec![Part::Number(*abscissa), text(" within "), Part::Number(*epsilon)];
        facts.push(fact("Pseudospectral abscissa", parts));
    }
    if let Some(found) = record.transient {
        let mut parts = vec![
            Part::Number(found.growth),
            text(" after "),
            Part::Count(found.step as u64),
            text(" of "),
            Part::Count(found.steps as u64),
            text(" steps"),
        ];
        if found.still_growing {
            parts.push(text(", and still growing"));
        }
        facts.push(fact("Largest growth on the way", parts));
    }
    facts
}

pub(super) fn settings(record: &OperatorRecord) -> Vec<Fact> {
    let mut facts = vec![
        fact("Boundaries", vec![text(record.boundaries.join(" and "))]),
        fact("Probed", vec![text(record.operation.clone())]),
        fact("Unknowns", vec![Part::Count(record.unknowns as u64)]),
        fact("Step", vec![Part::Number(record.step)]),
    ];
    if let Some(integrator) = &record.integrator {
        facts.push(fact("Integrator", vec![text(integrator.clone())]));
    }
    facts
}

pub(super) fn tables(record: &OperatorRecord, most: usize) -> Vec<Table> {
    if record.eigenvalues.is_empty() {
        return Vec::new();
    }
    let rows = thin(&record.eigenvalues, most);
    let of = (rows.len() < record.eigenvalues.len()).then_some(record.eigenvalues.len());
    vec![Table {
        id: "eigenvalues".into(),
        caption: "Eigenvalues of the operator".into(),
        columns: vec![
            column("Re λ", "re", "$\\mathrm{Re}\\,\\lambda$"),
            column("Im λ", "im", "$\\mathrm{Im}\\,\\lambda$"),
        ],
        rows: rows.iter().map(|[re, im]| vec![Cell::Number(Some(*re)), Cell::Number(Some(*im))]).collect(),
        of,
    }]
}
