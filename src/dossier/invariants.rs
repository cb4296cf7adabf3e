//! A study of invariants as statements and as a table.

use super::facts::{Fact, Part, cells_parts, fact, text};
use super::table::{Cell, Column, Table, column};
use crate::record::{InvariantCheck, InvariantSetting, InvariantsRecord};

/// One statement for each check.
pub(super) fn findings(record: &InvariantsRecord) -> Vec<Fact> {
    record.checks.iter().map(|check| fact(capitalised(check.invariant.words()), vec![text(&*check.sentence)])).collect()
}

/// One statement for each setting.
pub(super) fn settings(record: &InvariantsRecord) -> Vec<Fact> {
    let each = record.settings.iter().enumerate();
    each.map(|(number, setting)| fact(format!("Setting {number}"), setting_parts(setting))).collect()
}

fn setting_parts(setting: &InvariantSetting) -> Vec<Part> {
    let mut parts = cells_parts(&setting.cells);
    parts.extend([text(" cells, step "), Part::Number(setting.step)]);
    parts.extend([text(", "), Part::Count(setting.steps as u64), text(format!(" steps by {}", setting.operation))]);
    if let Some(courant) = setting.courant {
        parts.extend([text(", Courant number "), Part::Number(courant)]);
    }
    if let Some(number) = setting.diffusion_number {
        parts.extend([text(", diffusion number "), Part::Number(number)]);
    }
    for (name, values) in &setting.parameters {
        parts.push(text(format!(", {name} ")));
        for (index, value) in values.iter().enumerate() {
            parts.push(text(if index > 0 { ", " } else { "" }));
            parts.push(Part::Number(*value));
        }
    }
    parts
}

/// One table: a row for each check.
pub(super) fn tables(record: &InvariantsRecord) -> Vec<Table> {
    if record.checks.is_empty() {
        return Vec::new();
    }
    let words = |head: &str, key: &str| Column { numeric: false, ..column(head, key, head) };
    vec![Table {
        id: "checks".into(),
        caption: "Invariants: the worst figure of all runs".into(),
        columns: vec![
            words("invariant", "invariant"),
            words("found", "found"),
            column("measured", "measured", "measured"),
            column("allowed", "allowed", "allowed"),
            column("runs", "runs", "runs"),
            words("worst at", "worst_at"),
        ],
        rows: record.checks.iter().map(row).collect(),
        of: None,
    }]
}

fn row(check: &InvariantCheck) -> Vec<Cell> {
    let found = match check.holds {
        Some(true) => "holds",
        Some(false) => "violated",
        None => "not tried in full",
    };
    vec![
        Cell::Text(check.invariant.name().into()),
        Cell::Text(found.into()),
        Cell::Number(check.measured),
        Cell::Number(check.allowed),
        Cell::Count(check.runs as u64),
        Cell::Text(place(check)),
    ]
}

fn place(check: &InvariantCheck) -> String {
    let Some(worst) = &check.worst else { return String::new() };
    let cell = worst.cell.as_ref().map(|cell| {
        let numbers: Vec<String> = cell.iter().map(usize::to_string).collect();
        format!("cell {}", numbers.join(" × "))
    });
    let step = worst.step.map(|step| format!("step {step}"));
    let parts = [worst.field.clone(), cell, step, Some(format!("setting {}", worst.setting)), Some(worst.run.clone())];
    parts.into_iter().flatten().collect::<Vec<_>>().join(", ")
}

fn capitalised(words: &str) -> String {
    let mut letters = words.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}
