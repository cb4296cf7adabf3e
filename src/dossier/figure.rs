//! Figures: charts drawn as files.

use std::sync::{Arc, LazyLock};

use resvg::{tiny_skia, usvg};

use super::DossierError;
use super::chart::{self, Chart, Size};
use crate::record::Results;

/// Pixels of a PNG figure for each pixel of 1/96 inch: sharp in print at 288 dots an inch.
const SHARPNESS: f32 = 3.0;

/// The letters of PNG figures; an SVG figure names its fonts and brings none.
static FONTS: LazyLock<Arc<usvg::fontdb::Database>> = LazyLock::new(|| {
    let mut fonts = usvg::fontdb::Database::new();
    fonts.load_font_data(include_bytes!("../../reports/fonts/assay-sans-regular.ttf").to_vec());
    fonts.set_sans_serif_family("Assay Sans");
    Arc::new(fonts)
});

/// A chart with its drawing.
pub(crate) struct Figure {
    pub chart: Chart,
    /// A whole SVG document.
    pub svg: String,
}

/// Draws the charts of all studies, study by study. `ids` are the file stems of the studies.
pub(crate) fn draw_all(results: &Results, ids: &[String]) -> Result<Vec<Vec<Figure>>, DossierError> {
    chart::of_studies(results, ids).into_iter().map(draw_each).collect()
}

/// Draws `charts`.
pub(crate) fn draw_each(charts: Vec<Chart>) -> Result<Vec<Figure>, DossierError> {
    charts.into_iter().map(draw).collect()
}

fn draw(chart: Chart) -> Result<Figure, DossierError> {
    let failed = |reason: String| DossierError::Figure { figure: chart.id.clone(), reason };
    let svg = chart::svg(&chart, Size::COLUMN).map_err(|error| failed(error.to_string()))?;
    Ok(Figure { chart, svg })
}

impl Figure {
    /// The figure as PNG, with its text drawn in the bundled font.
    ///
    /// # Errors
    /// The drawing cannot be turned into pixels.
    pub(crate) fn png(&self) -> Result<Vec<u8>, DossierError> {
        let failed = |reason: String| DossierError::Figure { figure: self.chart.id.clone(), reason };
        let options =
            usvg::Options { fontdb: FONTS.clone(), font_family: "Assay Sans".into(), ..usvg::Options::default() };
        let tree = usvg::Tree::from_str(&self.svg, &options).map_err(|error| failed(error.to_string()))?;
        let size = tree.size();
        let (width, height) = ((size.width() * SHARPNESS) as u32, (size.height() * SHARPNESS) as u32);
        let mut pixels = tiny_skia::Pixmap::new(width, height).ok_or_else(|| failed("it has no area".into()))?;
        resvg::render(&tree, tiny_skia::Transform::from_scale(SHARPNESS, SHARPNESS), &mut pixels.as_mut());
        pixels.encode_png().map_err(|error| failed(error.to_string()))
    }
}
