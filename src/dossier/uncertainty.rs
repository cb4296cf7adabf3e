//! The uncertainty of a table of values as statements and as a table.

use super::clean::visible;
use super::facts::{Fact, Part, fact, text};
use super::table::{Cell, Column, Table, column};
use crate::record::{GridTriple, QuantityUncertainty, UncertaintyRecord};

/// For each quantity what its three finest grids say.
pub(super) fn findings(record: &UncertaintyRecord) -> Vec<Fact> {
    let finest = |quantity: &QuantityUncertainty| {
        quantity.triples.first().map(|triple| fact(visible(&quantity.name), triple_parts(triple)))
    };
    record.quantities.iter().filter_map(finest).collect()
}

/// The table's own choices.
pub(super) fn settings(record: &UncertaintyRecord) -> Vec<Fact> {
    let sizes = match record.dimensions {
        Some(1) => vec![text("one over the count of cells")],
        Some(dimensions) => {
            vec![text("count of cells to the power of minus one over "), Part::Count(dimensions as u64)]
        }
        None => vec![text("as given")],
    };
    vec![
        fact("Table", vec![text(visible(&record.table))]),
        fact("Table, SHA-256", vec![text(visible(&record.digest))]),
        fact("Cell sizes", sizes),
        fact("Procedure", vec![text("Celik et al. (2008), ASME J. Fluids Eng. 130(7):078001, safety factor 1.25")]),
    ]
}

fn triple_parts(triple: &GridTriple) -> Vec<Part> {
    let mut parts = vec![text(triple.convergence.word())];
    let figures = [
        ("apparent order ", triple.order),
        ("extrapolated value ", triple.extrapolated),
        ("approximate relative error ", triple.approximate_error),
        ("extrapolated relative error ", triple.extrapolated_error),
        ("grid convergence index ", triple.fine_index),
    ];
    for (words, value) in figures {
        if let Some(value) = value {
            parts.extend([text(format!(", {words}")), Part::Number(value)]);
        }
    }
    if let Some(caution) = triple.convergence.caution() {
        parts.push(text(format!(": {caution}")));
    }
    parts
}

/// One table for each quantity: a row for every three neighbouring grids, the finest first.
pub(super) fn tables(record: &UncertaintyRecord) -> Vec<Table> {
    let rows = |quantity: &QuantityUncertainty| quantity.triples.iter().map(row).collect();
    let one = |quantity: &QuantityUncertainty| Table {
        id: format!("grids-{}", super::clean::slug(&quantity.name)),
        caption: format!("Grid convergence of {}", visible(&quantity.name)),
        columns: vec![
            column("h₁", "h_1", "$h_1$"),
            column("h₂", "h_2", "$h_2$"),
            column("h₃", "h_3", "$h_3$"),
            column("φ₁", "phi_1", "$\\varphi_1$"),
            column("φ₂", "phi_2", "$\\varphi_2$"),
            column("φ₃", "phi_3", "$\\varphi_3$"),
            Column { numeric: false, ..column("convergence", "convergence", "convergence") },
            column("order", "order", "$p$"),
            column("φ extrapolated", "extrapolated", "$\\varphi_{\\mathrm{ext}}$"),
            column("approximate error", "approximate_error", "$e_a$"),
            column("extrapolated error", "extrapolated_error", "$e_{\\mathrm{ext}}$"),
            column("index, fine", "fine_index", "$\\mathrm{GCI}_{21}$"),
            column("index, middle", "coarse_index", "$\\mathrm{GCI}_{32}$"),
        ],
        rows: rows(quantity),
        of: None,
    };
    record.quantities.iter().map(one).collect()
}

fn row(triple: &GridTriple) -> Vec<Cell> {
    let mut row: Vec<Cell> =
        triple.sizes.iter().chain(&triple.values).map(|value| Cell::Number(Some(*value))).collect();
    row.push(Cell::Text(triple.convergence.word().into()));
    let figures = [
        triple.order,
        triple.extrapolated,
        triple.approximate_error,
        triple.extrapolated_error,
        triple.fine_index,
        triple.coarse_index,
    ];
    row.extend(figures.map(Cell::Number));
    row
}
