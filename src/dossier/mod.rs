//! Results as pages, figures, tables and files for machines.
//!
//! Data flows one way: every number that an output shows is an f64 of the results, only rounded for reading. Each output is one file in
//! this folder behind `Exporter`; `chart` holds the charts as data, `table` the tables, `facts` the sentences that several outputs share.

mod annotations;
mod chart;
mod clean;
mod compared;
mod error;
mod facts;
mod figure;
mod figure_files;
mod invariants;
mod junit;
mod number;
mod operator;
mod page;
mod semi_discrete;
mod statement;
mod summary;
mod table;
mod table_files;
pub mod terminal;
mod uncertainty;
mod words;

use std::path::{Path, PathBuf};

pub use annotations::annotations;
pub(crate) use clean::visible;
pub use error::DossierError;
pub use page::contrast_page;

use crate::record::{Results, write_bytes, write_results};
use compared::Compared;
use figure::Figure;

/// The file of the results within a dossier.
pub const RESULTS_FILE: &str = "results.json";

/// The file of a run's journal within a dossier.
pub const JOURNAL_FILE: &str = "journal.jsonl";

/// What all outputs are made from.
pub(crate) struct Dossier<'a> {
    pub results: &'a Results,
    /// A file stem and anchor for each study.
    pub ids: Vec<String>,
    /// The figures of each study.
    pub figures: Vec<Vec<Figure>>,
    /// Several schemes side by side.
    pub compared: Compared,
}

/// A file of a dossier.
pub(crate) struct OutputFile {
    /// Relative to the dossier.
    pub path: PathBuf,
    pub bytes: Vec<u8>,
}

/// One kind of output.
pub(crate) trait Exporter {
    /// The files of this output.
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError>;
}

/// The outputs of every dossier, in the order in which they are written.
const EXPORTERS: [&dyn Exporter; 6] = [
    &summary::Summary,
    &junit::JUnit,
    &page::Page,
    &statement::Statement,
    &table_files::TableFiles,
    &figure_files::FigureFiles,
];

/// Writes a dossier of `results` into `folder`, which is created where it is missing: `results.json`, `index.html`, `summary.md`,
/// `junit.xml`, `statement.md`, `statement.tex`, `figures/` (SVG and PNG) and `tables/` (CSV and LaTeX).
///
/// The results are written first, and one output that fails does not keep the others from being written.
///
/// # Errors
/// The first thing that could not be made or written.
pub fn write_dossier(folder: &Path, results: &Results) -> Result<(), DossierError> {
    create_folder(folder)?;
    write_results(&folder.join(RESULTS_FILE), results)?;
    let dossier = Dossier::of(results)?;
    let outcomes: Vec<_> = EXPORTERS.iter().map(|exporter| write_output(folder, &dossier, *exporter)).collect();
    outcomes.into_iter().collect()
}

/// Makes `folder` ready before long work begins: created where it is missing, and tried for writing. Answers the path of its results file.
///
/// # Errors
/// The folder cannot be created or written to.
pub fn prepare_folder(folder: &Path) -> Result<PathBuf, DossierError> {
    create_folder(folder)?;
    tempfile::tempfile_in(folder).map_err(|source| DossierError::Folder { path: folder.into(), source })?;
    Ok(folder.join(RESULTS_FILE))
}

fn write_output(folder: &Path, dossier: &Dossier<'_>, exporter: &dyn Exporter) -> Result<(), DossierError> {
    for file in exporter.export(dossier)? {
        let path = folder.join(file.path);
        if let Some(parent) = path.parent() {
            create_folder(parent)?;
        }
        write_bytes(&path, &file.bytes)?;
    }
    Ok(())
}

fn create_folder(folder: &Path) -> Result<(), DossierError> {
    std::fs::create_dir_all(folder).map_err(|source| DossierError::Folder { path: folder.into(), source })
}

impl<'a> Dossier<'a> {
    fn of(results: &'a Results) -> Result<Self, DossierError> {
        let ids = study_ids(results);
        let figures = figure::draw_all(results, &ids)?;
        Ok(Self { results, ids, figures, compared: Compared::of(results)? })
    }
}

/// A file stem for each study: its id, made fit for a file name, and unique.
fn study_ids(results: &Results) -> Vec<String> {
    let mut ids: Vec<String> = Vec::new();
    for study in &results.studies {
        let stem = clean::slug(&study.id);
        let mut id = stem.clone();
        let mut count = 2;
        while ids.contains(&id) {
            id = format!("{stem}-{count}");
            count += 1;
        }
        ids.push(id);
    }
    ids
}
