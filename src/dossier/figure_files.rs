//! `figures/`: every figure as SVG and PNG.

use rayon::prelude::*;

use super::{Dossier, DossierError, Exporter, OutputFile};

/// The exporter.
pub(crate) struct FigureFiles;

impl Exporter for FigureFiles {
    fn export(&self, dossier: &Dossier<'_>) -> Result<Vec<OutputFile>, DossierError> {
        let figures: Vec<_> = dossier.figures.iter().flatten().chain(&dossier.compared.figures).collect();
        // Each figure is made by itself, so that the order of work cannot change a file.
        let pairs: Result<Vec<_>, DossierError> = figures
            .par_iter()
            .map(|figure| {
                let path = |suffix: &str| format!("figures/{}.{suffix}", figure.chart.id).into();
                let svg = OutputFile { path: path("svg"), bytes: figure.svg.clone().into_bytes() };
                Ok([svg, OutputFile { path: path("png"), bytes: figure.png()? }])
            })
            .collect();
        Ok(pairs?.into_iter().flatten().collect())
    }
}
