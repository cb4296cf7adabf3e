//! `tables/`: every table as CSV with all digits, and as LaTeX for the `booktabs` package.

use std::fmt::Write as _;

use super::table::{Cell, Table, of_study};
use super::{Dossier, DossierError, Exporter, OutputFile, clean, compared, number};

/// Most rows of a LaTeX table: a page of a paper holds no more.
pub(super) const ROWS: usize = 40;

/// The exporter.
pub(crate) struct TableFiles;

impl Exporter for TableFiles {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        let mut files = Vec::new();
        let mut add = |id: &str, table: &Table, suffix: &str, text: String| {
            let path = format!("tables/{id}-{}.{suffix}", table.id).into();
            files.push(OutputFile { path, bytes: text.into_bytes() });
        };
        for table in &dossier.compared.tables {
            add(compared::ID, table, "csv", csv(table));
            add(compared::ID, table, "tex", latex(table));
        }
        for (study, id) in dossier.results.studies.iter().zip(&dossier.ids) {
            for table in of_study(study, usize::MAX) {
                add(id, &table, "csv", csv(&table));
            }
            for table in of_study(study, ROWS) {
                add(id, &table, "tex", latex(&table));
            }
        }
        Ok(files)
    }
}

/// `table` as CSV (RFC 4180): numbers with all their digits, an empty cell where a number does not exist.
pub(crate) fn csv(table: &Table) -> String {
    let quoted = |text: &str| {
        // A spreadsheet would run a text that begins like a formula.
        let text = if text.starts_with(['=', '+', '-', '@']) { format!("'{text}") } else { text.into() };
        if text.contains(['"', ',', '\n', '\r']) { format!("\"{}\"", text.replace('"', "\"\"")) } else { text }
    };
    let heads: Vec<_> = table.columns.iter().map(|column| quoted(&column.key)).collect();
    let mut out = heads.join(",") + "\r\n";
    for row in &table.rows {
        let cells = row.iter().map(|cell| match cell {
            Cell::Number(value) => value.map(number::exact).unwrap_or_default(),
            Cell::Count(count) => count.to_string(),
            Cell::Text(text) => quoted(text),
        });
        out += &(cells.collect::<Vec<_>>().join(",") + "\r\n");
    }
    out
}

/// `table` as a LaTeX `tabular` with the rules of the `booktabs` package.
pub(crate) fn latex(table: &Table) -> String {
    let alignment: String = table.columns.iter().map(|column| if column.numeric { 'r' } else { 'l' }).collect();
    let mut out = String::from("% needs \\usepackage{booktabs}\n");
    if let Some(of) = table.of {
        let _ = writeln!(out, "% {} of {of} rows, evenly chosen", table.rows.len());
    }
    let heads: Vec<_> = table.columns.iter().map(|column| column.latex.as_str()).collect();
    let _ = writeln!(out, "\\begin{{tabular}}{{{alignment}}}\n\\toprule\n{} \\\\\n\\midrule", heads.join(" & "));
    for row in &table.rows {
        let cells = row.iter().zip(&table.columns).map(|(cell, column)| match cell {
            Cell::Number(Some(value)) if column.powers => format!("${}$", number::latex_power(*value, number::DIGITS)),
            Cell::Number(Some(value)) => format!("${}$", number::latex(*value, number::DIGITS)),
            Cell::Number(None) => "--".into(),
            Cell::Count(count) => format!("${count}$"),
            Cell::Text(text) => clean::latex(text),
        });
        let _ = writeln!(out, "{} \\\\", cells.collect::<Vec<_>>().join(" & "));
    }
    out + "\\bottomrule\n\\end{tabular}\n"
}
