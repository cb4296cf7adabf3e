//! The tables of a study as data.

use serde::Serialize;

use super::chart::thin;
use super::clean::visible;
use super::words;
use super::{invariants, uncertainty};
use crate::record::{ModeRecord, ModesRecord, OrderRecord, StabilityRecord, Study, StudyRecord};

/// A table.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Table {
    /// Follows the study's id in file names.
    pub id: String,
    pub caption: String,
    pub columns: Vec<Column>,
    pub rows: Vec<Vec<Cell>>,
    /// How many rows there are in the results, where the table shows only some.
    pub of: Option<usize>,
}

/// A column's heading in three scripts.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Column {
    /// On a page.
    pub head: String,
    /// In a CSV file.
    pub key: String,
    /// In LaTeX.
    pub latex: String,
    /// Whether it holds numbers.
    pub numeric: bool,
    /// Whether its numbers are written with powers of ten throughout, since they run over decades.
    pub powers: bool,
}

/// A cell. `Number(None)` is a number that does not exist.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Cell {
    Number(Option<f64>),
    Count(u64),
    Text(String),
}

pub(super) fn column(head: &str, key: &str, latex: &str) -> Column {
    Column { head: head.into(), key: key.into(), latex: latex.into(), numeric: true, powers: false }
}

/// What a mode may also have: head, key and where it stands.
type Beside = (&'static str, &'static str, fn(&ModeRecord) -> Option<f64>);

/// Columns that stand in a table of modes where any mode has such a number.
const BESIDE: [Beside; 4] = [
    ("damping error / period", "damping_error_per_period", |mode| mode.damping_error_per_period),
    ("phase error / period", "phase_error_per_period", |mode| mode.phase_error_per_period),
    ("share", "share", |mode| mode.share),
    ("lost to other waves", "leaked", |mode| mode.leaked),
];

/// The tables of a study, with at most `most` rows each.
pub(crate) fn of_study(study: &StudyRecord, most: usize) -> Vec<Table> {
    match &study.study {
        Study::Order(record) => order_tables(record),
        Study::Modes(record) => modes_tables(record, most),
        Study::Invariants(record) => invariants::tables(record),
        Study::Uncertainty(record) => uncertainty::tables(record),
        Study::Operator(record) => super::operator::tables(record, most),
        Study::Stability(record) => stability_tables(record, most),
    }
}

/// One table of levels for each field: the errors in each norm, and beside each the slope from the level before.
fn order_tables(record: &OrderRecord) -> Vec<Table> {
    let fields = words::fields(record);
    let several = fields.len() > 1;
    let mut tables: Vec<_> = fields.iter().map(|field| order_table(record, field, several)).collect();
    if tables.is_empty() && !record.levels.is_empty() {
        tables.push(order_table(record, "", false));
    }
    tables
}

fn order_table(record: &OrderRecord, field: &str, several: bool) -> Table {
    let norms = words::norms_present(record, field);
    let unsteady = record.levels.iter().any(|level| level.step.is_some());
    let notes = record.levels.iter().any(|level| level.note.is_some());
    let mut columns = vec![column("cells", "cells", "cells"), column("h", "h", "$h$")];
    columns[0].numeric = record.levels.iter().all(|level| level.cells.len() == 1);
    if unsteady {
        columns.extend([column("Δt", "step", "$\\Delta t$"), column("steps", "steps", "steps")]);
    }
    for norm in &norms {
        let index = if *norm == "linf" { "\\infty" } else { &norm[1..] };
        let latex = format!("$\\|e\\|_{{{index}}}$");
        columns.push(Column { powers: true, ..column(words::norm_symbol(norm), &format!("error_{norm}"), &latex) });
        columns.push(column("slope", &format!("slope_{norm}"), "slope"));
    }
    let timed = record.levels.iter().any(|level| level.seconds.is_some());
    if timed {
        columns.push(column("wall time (s)", "seconds", "wall time (s)"));
    }
    if notes {
        columns.push(Column { numeric: false, ..column("note", "note", "note") });
    }
    let rows = record.levels.iter().enumerate().map(|(index, level)| {
        let cells = match level.cells.as_slice() {
            [one] => Cell::Count(*one as u64),
            several => Cell::Text(several.iter().map(ToString::to_string).collect::<Vec<_>>().join(" × ")),
        };
        let mut row = vec![cells, Cell::Number(Some(level.h))];
        if unsteady {
            row.push(Cell::Number(level.step));
            row.push(level.steps.map_or(Cell::Number(None), |steps| Cell::Count(steps as u64)));
        }
        for norm in &norms {
            row.push(Cell::Number(level.errors.get(field).and_then(|norms| norms.get(norm))));
            let slopes = record.observed.get(field).and_then(|norms| norms.get(*norm)).map(|observed| &observed.slopes);
            let slope = index.checked_sub(1).and_then(|before| slopes?.get(before).copied().flatten());
            row.push(Cell::Number(slope));
        }
        if timed {
            row.push(Cell::Number(level.seconds));
        }
        if notes {
            row.push(Cell::Text(level.note.as_deref().map(visible).unwrap_or_default()));
        }
        row
    });
    let rows = rows.collect();
    Table {
        id: if several { format!("levels-{}", super::clean::slug(field)) } else { "levels".into() },
        caption: if several { format!("Levels, {}", visible(field)) } else { "Levels".into() },
        columns,
        rows,
        of: None,
    }
}

fn modes_tables(record: &ModesRecord, most: usize) -> Vec<Table> {
    let of_rate = record.semi_discrete.as_ref().map(|found| super::semi_discrete::tables(found, most));
    let of_steps = (!record.modes.is_empty()).then(|| step_table(record, most));
    let stencil = stencil_table(record, most);
    of_steps.into_iter().chain(of_rate.into_iter().flatten()).chain(stencil).collect()
}

fn step_table(record: &ModesRecord, most: usize) -> Table {
    let dimensions = record.modes[0].theta.len();
    let branches = record.modes.iter().any(|mode| mode.branch != record.modes[0].branch);
    let mut columns = Vec::new();
    if branches {
        columns.push(Column { numeric: false, ..column("branch", "branch", "branch") });
    }
    match dimensions {
        0 | 1 => columns.push(column("θ", "theta", "$\\theta$")),
        _ => {
            let axes = ["x", "y", "z"].into_iter().take(dimensions);
            columns.extend(axes.map(|x| column(&format!("θ {x}"), &format!("theta_{x}"), &format!("$\\theta_{x}$"))));
        }
    }
    columns.extend([
        column("cells / wavelength", "points_per_wavelength", "cells/wavelength"),
        column("Re G", "amplification_re", "$\\mathrm{Re}\\,G$"),
        column("Im G", "amplification_im", "$\\mathrm{Im}\\,G$"),
        column("|G|", "modulus", "$|G|$"),
        column("|G| exact", "exact_modulus", "$|G|$ exact"),
        column("damping error", "damping_error", "damping error"),
        column("phase error", "phase_error", "phase error"),
        column("phase speed", "phase_speed_ratio", "phase speed"),
        column("group speed", "group_speed_ratio", "group speed"),
    ]);
    let beside = BESIDE.map(|(head, key, of)| (column(head, key, head), of));
    let beside: Vec<_> =
        beside.into_iter().filter(|(_, of)| record.modes.iter().any(|mode| of(mode).is_some())).collect();
    columns.extend(beside.iter().map(|(column, _)| column.clone()));
    let rows: Vec<_> = thin(&record.modes, most)
        .iter()
        .map(|mode| {
            let mut row = Vec::new();
            if branches {
                row.push(Cell::Text(visible(&mode.branch)));
            }
            row.extend(mode.theta.iter().map(|&theta| Cell::Number(Some(theta))));
            let [re, im] = mode.amplification;
            let numbers = [
                mode.points_per_wavelength,
                Some(re),
                Some(im),
                Some(mode.modulus),
                mode.exact_modulus,
                mode.damping_error,
                mode.phase_error,
                mode.phase_speed_ratio,
                mode.group_speed_ratio,
            ];
            row.extend(numbers.map(Cell::Number));
            row.extend(beside.iter().map(|(_, of)| Cell::Number(of(mode))));
            row
        })
        .collect();
    let of = (rows.len() < record.modes.len()).then_some(record.modes.len());
    Table {
        id: "modes".into(),
        caption: "Modes, per step; speeds relative to the exact ones".into(),
        columns,
        rows,
        of,
    }
}

/// The coefficients of the stencil as built: new value = sum of coefficient x old value at the offset.
fn stencil_table(record: &ModesRecord, most: usize) -> Option<Table> {
    let first = record.stencil.first()?;
    // Which component reads which matters only where there are several.
    let components = record.stencil.iter().any(|entry| entry.output > 0 || entry.input > 0);
    let axes = ["x", "y", "z"].into_iter().take(first.offset.len());
    let mut columns: Vec<Column> = match first.offset.len() {
        1 => vec![column("offset", "offset", "offset")],
        _ => axes.map(|x| column(&format!("offset {x}"), &format!("offset_{x}"), &format!("offset {x}"))).collect(),
    };
    if components {
        columns.extend([column("computed", "output", "computed"), column("read", "input", "read")]);
    }
    columns.push(column("coefficient", "coefficient", "coefficient"));
    let rows: Vec<_> = thin(&record.stencil, most)
        .iter()
        .map(|entry| {
            let mut row: Vec<Cell> = entry.offset.iter().map(|&cells| Cell::Number(Some(cells as f64))).collect();
            if components {
                row.extend([Cell::Count(entry.output as u64), Cell::Count(entry.input as u64)]);
            }
            row.push(Cell::Number(Some(entry.coefficient)));
            row
        })
        .collect();
    let of = (rows.len() < record.stencil.len()).then_some(record.stencil.len());
    let caption = "Stencil as built: what a step makes of the old values at these offsets".into();
    Some(Table { id: "stencil".into(), caption, columns, rows, of })
}

fn stability_tables(record: &StabilityRecord, most: usize) -> Vec<Table> {
    let words = record.number.words();
    let key = words.replace(' ', "_").to_lowercase();
    let mut tables = Vec::new();
    if !record.confirmation.is_empty() {
        let rows = record.confirmation.iter().map(|run| {
            let agrees = if run.agrees { "agrees" } else { "disagrees" };
            vec![
                Cell::Number(Some(run.number)),
                Cell::Count(run.steps as u64),
                Cell::Number(run.growth),
                Cell::Text(agrees.into()),
            ]
        });
        tables.push(Table {
            id: "confirmation".into(),
            caption: "Long runs from noise on either side of the limit".into(),
            columns: vec![
                column(words, &key, words),
                column("steps", "steps", "steps"),
                column("growth", "growth", "growth"),
                Column { numeric: false, ..column("with the limit", "agrees", "with the limit") },
            ],
            rows: rows.collect(),
            of: None,
        });
    }
    if !record.map.is_empty() {
        let row = |row: &crate::record::MapRow| {
            let interval = |[from, to]: &[f64; 2]| format!("{from:.6} to {to:.6}");
            let stable: Vec<String> = row.stable.iter().map(interval).collect();
            let words = if stable.is_empty() { "none".to_owned() } else { stable.join("; ") };
            vec![Cell::Number(Some(row.diffusion_number)), Cell::Text(words)]
        };
        tables.push(Table {
            id: "map".into(),
            caption: "Stable Courant numbers by diffusion number".into(),
            columns: vec![
                column("diffusion number", "diffusion_number", "diffusion number"),
                Column { numeric: false, ..column("stable Courant numbers", "stable", "stable Courant numbers") },
            ],
            rows: record.map.iter().map(row).collect(),
            of: None,
        });
    }
    if !record.scan.is_empty() {
        let rows = thin(&record.scan, most);
        let of = (rows.len() < record.scan.len()).then_some(record.scan.len());
        let rows = rows.iter().map(|&(number, growth)| vec![Cell::Number(Some(number)), Cell::Number(growth)]);
        tables.push(Table {
            id: "scan".into(),
            caption: "Scan of the steps".into(),
            columns: vec![column(words, &key, words), column("max |G|", "largest_modulus", "$\\max|G|$")],
            rows: rows.collect(),
            of,
        });
    }
    tables
}
