//! `index.html`: one page that holds everything, its fonts and figures included, and asks nothing of the network.
//!
//! The layout is `reports/page/index.html`; this folder turns results into what the layout shows, and decides nothing else.

mod contrast;
mod layout;
mod view;

pub use contrast::contrast_page;

use super::{Dossier, DossierError, Exporter, OutputFile};

/// The exporter.
pub(crate) struct Page;

impl Exporter for Page {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        let failed = |source| DossierError::Layout { page: "index.html", source };
        let text = layout::render("index.html", &view::view(dossier)).map_err(failed)?;
        Ok(vec![OutputFile { path: "index.html".into(), bytes: text.into_bytes() }])
    }
}
