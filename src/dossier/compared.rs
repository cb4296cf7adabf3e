//! Several schemes compared: what a dossier shows of them side by side.

use super::clean::visible;
use super::figure::{self, Figure};
use super::table::{Cell, Column, Table, column};
use super::{DossierError, chart, words};
use crate::record::{Results, Study, StudyRecord};

/// The file stem and anchor of the comparison.
pub(crate) const ID: &str = "compared";

/// What is shown of several schemes together; empty where there is one.
#[derive(Default)]
pub(crate) struct Compared {
    pub figures: Vec<Figure>,
    pub tables: Vec<Table>,
}

impl Compared {
    pub(crate) fn of(results: &Results) -> Result<Self, DossierError> {
        if results.schemes.len() < 2 {
            return Ok(Self::default());
        }
        Ok(Self {
            figures: figure::draw_each(chart::of_schemes(results))?,
            tables: table(results).into_iter().collect(),
        })
    }

    pub(crate) fn is_empty(&self) -> bool {
        self.figures.is_empty() && self.tables.is_empty()
    }
}

/// Orders and limits, row by row, so that what belongs together stands together. `None` where nothing of the kind was measured.
fn table(results: &Results) -> Option<Table> {
    let mut rows: Vec<(String, Vec<Cell>)> = results.studies.iter().flat_map(rows).collect();
    if rows.is_empty() {
        return None;
    }
    rows.sort_by(|a, b| a.0.cmp(&b.0));
    let words = |head: &str, key: &str| Column { numeric: false, ..column(head, key, head) };
    Some(Table {
        id: "orders-and-limits".into(),
        caption: "Observed orders and stable limits".into(),
        columns: vec![
            words("measured", "measured"),
            words("scheme", "scheme"),
            column("value", "value", "value"),
            column("from", "low", "from"),
            column("to", "high", "to"),
            words("study", "study"),
        ],
        rows: rows.into_iter().map(|(_, row)| row).collect(),
        of: None,
    })
}

/// The rows of one study: an order in L2 for each field, or a limit.
fn rows(study: &StudyRecord) -> Vec<(String, Vec<Cell>)> {
    let row = |measured: String, value: Option<f64>, interval: Option<[f64; 2]>| {
        let [low, high] = interval.map_or([None, None], |[low, high]| [Some(low), Some(high)]);
        let text = |text: &str| Cell::Text(visible(text));
        let numbers = [value, low, high].map(Cell::Number);
        let mut cells = vec![text(&measured), text(&study.scheme)];
        cells.extend(numbers);
        cells.push(text(&study.id));
        (measured, cells)
    };
    match &study.study {
        Study::Order(record) => {
            let fields =
                record.observed.iter().flat_map(|(field, norms)| norms.iter().map(move |(norm, of)| (field, norm, of)));
            let judged = fields.filter(|(_, norm, _)| *norm == "l2");
            judged
                .map(|(field, norm, of)| {
                    let (norm, refined) = (words::norm_name(norm), record.refine.word());
                    let measured = format!("order of {field} in {norm}, {}, refined in {refined}", record.problem);
                    row(measured, of.order, of.interval)
                })
                .collect()
        }
        Study::Stability(record) => {
            vec![row(format!("stable {}, {}", record.number.words(), record.equation), record.stable_up_to, None)]
        }
        Study::Modes(_) | Study::Invariants(_) | Study::Uncertainty(_) | Study::Operator(_) => Vec::new(),
    }
}
