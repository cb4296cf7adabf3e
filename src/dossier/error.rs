//! Why a dossier could not be written.

use std::path::PathBuf;

use crate::record::RecordError;

/// Why a dossier could not be written.
#[derive(Debug, thiserror::Error)]
pub enum DossierError {
    /// The folder of the dossier, or one within it, cannot be made.
    #[error("{path}: cannot be created: {source}; name another folder with --out")]
    Folder {
        /// The folder.
        path: PathBuf,
        /// What the operating system said.
        source: std::io::Error,
    },
    /// A file cannot be written.
    #[error(transparent)]
    File(#[from] RecordError),
    /// A figure cannot be drawn.
    #[error("figure {figure}: cannot be drawn: {reason}; the numbers are in results.json")]
    Figure {
        /// The figure's file stem.
        figure: String,
        /// What the drawing library said.
        reason: String,
    },
    /// A page's layout does not fit the results.
    #[error("{page}: cannot be laid out: {source}; the numbers are in results.json, please report this")]
    Layout {
        /// The page.
        page: &'static str,
        /// What the layout engine said.
        source: minijinja::Error,
    },
    /// The JUnit file cannot be written as XML.
    #[error("junit.xml: cannot be written: {0}; please report this")]
    JUnit(#[from] quick_junit::SerializeError),
}
