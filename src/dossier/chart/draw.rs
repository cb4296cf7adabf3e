//! Draws a chart as SVG.

use plotters::style::RGBColor;

use super::canvas::{Canvas, DrawError, FAMILY, Frame, Hang, Marker, Piece, Place, clip};
use super::{Across, Chart, Role, Series};

/// Colours of the curves: told apart by people of every colour vision, and by lightness in print; markers differ as well.
const SERIES: [RGBColor; 6] = [
    RGBColor(0x1F, 0x4E, 0x79),
    RGBColor(0xB8, 0x5C, 0x1E),
    RGBColor(0x2C, 0x7A, 0x66),
    RGBColor(0x7B, 0x3F, 0x6E),
    RGBColor(0x8F, 0x74, 0x19),
    RGBColor(0x5A, 0x62, 0x6B),
];
const INK: RGBColor = RGBColor(0x24, 0x28, 0x2C);
const FAINT: RGBColor = RGBColor(0x6A, 0x6C, 0x68);
const RULE: RGBColor = RGBColor(0xE2, 0xDD, 0xD1);
const BAND: RGBColor = RGBColor(0xE7, 0xEE, 0xE4);
const PAPER: RGBColor = RGBColor(0xFF, 0xFF, 0xFF);

/// The colours above by the name that a page's style sheet gives them, so that a drawn figure follows the page's theme.
const THEMED: [(&str, RGBColor); 11] = [
    ("--series-1", SERIES[0]),
    ("--series-2", SERIES[1]),
    ("--series-3", SERIES[2]),
    ("--series-4", SERIES[3]),
    ("--series-5", SERIES[4]),
    ("--series-6", SERIES[5]),
    ("--ink", INK),
    ("--faint", FAINT),
    ("--rule", RULE),
    ("--band", BAND),
    ("--sheet", PAPER),
];

/// How large a figure is, in pixels of 1/96 inch.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Size {
    pub width: u32,
    pub height: u32,
    /// Height of the letters.
    pub text: f64,
}

impl Size {
    /// Fits one column of a paper, and a phone.
    pub(crate) const COLUMN: Self = Self { width: 460, height: 330, text: 13.0 };
}

/// `chart` as an SVG document.
pub(crate) fn svg(chart: &Chart, size: Size) -> Result<String, DrawError> {
    let mut text = String::new();
    {
        let canvas = Canvas::new(&mut text, (size.width, size.height));
        Sheet { chart, size, canvas: &canvas, frame: Frame { left: 0.0, top: 0.0, right: 0.0, bottom: 0.0 } }.draw()?;
        canvas.present()?;
    }
    Ok(finish(&text, chart, size))
}

/// `svg` with colours that follow the page's theme, and without the white ground.
pub(crate) fn themed(svg: &str) -> String {
    THEMED.iter().fold(svg.to_owned(), |svg, (name, RGBColor(r, g, b))| {
        svg.replace(&format!("\"#{r:02X}{g:02X}{b:02X}\""), &format!("\"var({name})\""))
    })
}

/// States the true size, names the figure for people who do not see it, and quotes the family once.
fn finish(text: &str, chart: &Chart, size: Size) -> String {
    let body = text.split_once('>').map_or("", |(_, body)| body);
    let (fine_width, fine_height) = (size.width * 10, size.height * 10);
    let mut out = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{}\" height=\"{}\" viewBox=\"0 0 {fine_width} {fine_height}\" \
         role=\"img\" font-family=\"{FAMILY}\">\n<title>{}</title>\n<desc>{}</desc>",
        size.width,
        size.height,
        escape(&chart.title),
        escape(&chart.description)
    );
    out.push_str(&body.replace(&format!(" font-family=\"{FAMILY}\""), ""));
    out
}

fn escape(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;")
}

struct Sheet<'a, 'b> {
    chart: &'a Chart,
    size: Size,
    canvas: &'a Canvas<'b>,
    frame: Frame,
}

impl Sheet<'_, '_> {
    fn draw(mut self) -> Result<(), DrawError> {
        let (width, height) = (f64::from(self.size.width), f64::from(self.size.height));
        self.canvas.fill(Frame { left: 0.0, top: 0.0, right: width, bottom: height }, PAPER)?;
        let letters = self.size.text;
        let labels = self.chart.marks.iter().filter(|mark| mark.axis == Across::X).count();
        let top = self.legend()? + letters * 1.35 * labels as f64;
        self.frame = Frame { left: letters * 5.2, top, right: width - letters, bottom: height - letters * 3.6 };
        self.bands()?;
        self.axes()?;
        self.marks()?;
        for series in &self.chart.series {
            self.series(series)?;
        }
        Ok(())
    }

    /// The names of the curves in rows above the chart; returns where the chart may begin.
    fn legend(&self) -> Result<f64, DrawError> {
        let letters = self.size.text;
        let (mut x, mut y) = (letters * 5.2, letters * 1.1);
        // One measured curve alone needs no name.
        if self.chart.series.len() < 2 {
            return Ok(letters * 1.2);
        }
        for series in &self.chart.series {
            let width = letters * (2.9 + 0.52 * series.name.chars().count() as f64 + 1.2);
            if x + width > f64::from(self.size.width) && x > letters * 6.0 {
                x = letters * 5.2;
                y += letters * 1.4;
            }
            let (from, to) = ((x, y), (x + letters * 2.1, y));
            self.curve(series, &[(from, to)])?;
            if series.role == Role::Measured {
                self.canvas.marker(marker(series), (x + letters * 1.05, y), colour(series))?;
            }
            self.canvas.text(&series.name, (x + letters * 2.6, y), letters * 0.94, Hang::Left, INK)?;
            x += width;
        }
        Ok(y + letters * 1.3)
    }

    fn bands(&self) -> Result<(), DrawError> {
        for [low, high] in &self.chart.bands {
            let clamp = |value: f64| self.across(value).clamp(self.frame.left, self.frame.right);
            let (left, right) = (clamp(*low), clamp(*high));
            if right > left {
                self.canvas.fill(Frame { left, right, ..self.frame }, BAND)?;
            }
        }
        Ok(())
    }

    fn axes(&self) -> Result<(), DrawError> {
        let (frame, letters) = (self.frame, self.size.text);
        for tick in self.chart.x.ticks() {
            let x = self.across(tick.value);
            self.canvas.line(&[(x, frame.top), (x, frame.bottom)], 0.7, RULE)?;
            self.canvas.line(&[(x, frame.bottom), (x, frame.bottom + 4.0)], 1.0, INK)?;
            self.canvas.text(&tick.label, (x, frame.bottom + letters * 1.1), letters, Hang::Centre, INK)?;
        }
        for tick in self.chart.y.ticks() {
            let y = self.down(tick.value);
            self.canvas.line(&[(frame.left, y), (frame.right, y)], 0.7, RULE)?;
            self.canvas.line(&[(frame.left - 4.0, y), (frame.left, y)], 1.0, INK)?;
            self.canvas.text(&tick.label, (frame.left - 7.0, y), letters, Hang::Right, INK)?;
        }
        self.canvas.line(
            &[(frame.left, frame.top), (frame.left, frame.bottom), (frame.right, frame.bottom)],
            1.0,
            INK,
        )?;
        let middle = (frame.left + frame.right) / 2.0;
        self.canvas.text(&self.chart.x.label, (middle, frame.bottom + letters * 2.7), letters, Hang::Centre, INK)?;
        let middle = (frame.top + frame.bottom) / 2.0;
        self.canvas.text(&self.chart.y.label, (letters * 0.85, middle), letters, Hang::Upwards, INK)
    }

    fn marks(&self) -> Result<(), DrawError> {
        let (frame, letters) = (self.frame, self.size.text);
        let mut row = 0.0;
        for mark in &self.chart.marks {
            match mark.axis {
                Across::Y => {
                    let y = self.down(mark.value);
                    if (frame.top..=frame.bottom).contains(&y) {
                        self.canvas.dashes(&[(frame.left, y), (frame.right, y)], 1.1, (5.0, 3.0), FAINT)?;
                        let at = (frame.right - 3.0, y - letters * 0.75);
                        self.canvas.text(&mark.label, at, letters * 0.9, Hang::Right, FAINT)?;
                    }
                }
                Across::X => {
                    let x = self.across(mark.value);
                    self.canvas.line(&[(x, frame.top), (x, frame.bottom)], 1.6, INK)?;
                    // Labels stand above the chart, where no curve crosses them.
                    row += 1.0;
                    let y = frame.top - letters * (1.35 * row - 0.6);
                    self.canvas.line(&[(x, y + letters * 0.6), (x, frame.top)], 1.6, INK)?;
                    let leftwards = x > (frame.left + frame.right) / 2.0;
                    let (at, hang) = if leftwards { (x + 2.0, Hang::Right) } else { (x - 2.0, Hang::Left) };
                    self.canvas.text(&mark.label, (at, y), letters * 0.94, hang, INK)?;
                }
            }
        }
        Ok(())
    }

    fn series(&self, series: &Series) -> Result<(), DrawError> {
        let places: Vec<_> = series.points.iter().map(|&[x, y]| (self.across(x), self.down(y))).collect();
        let pieces: Vec<_> = places.windows(2).filter_map(|pair| clip(pair[0], pair[1], self.frame)).collect();
        self.curve(series, &pieces)?;
        if series.role != Role::Measured {
            return Ok(());
        }
        // Markers on at most about twenty points, and not in the same places for every curve.
        let every = places.len().div_ceil(20).max(1);
        let first = if every > 1 { series.slot * every / 3 } else { 0 };
        for &place in places.iter().skip(first).step_by(every) {
            if clip(place, place, self.frame).is_some() {
                self.canvas.marker(marker(series), place, colour(series))?;
            }
        }
        Ok(())
    }

    /// Draws pieces of a curve, joined where one begins where the other ended.
    fn curve(&self, series: &Series, pieces: &[Piece]) -> Result<(), DrawError> {
        let mut paths: Vec<Vec<Place>> = Vec::new();
        for &(from, to) in pieces {
            match paths.last_mut() {
                Some(path) if path.last() == Some(&from) => path.push(to),
                _ => paths.push(vec![from, to]),
            }
        }
        for path in &paths {
            match series.role {
                Role::Measured => self.canvas.line(path, 1.7, colour(series))?,
                Role::Exact => self.canvas.dashes(path, 1.5, (7.0, 3.5), FAINT)?,
                Role::Guide => self.canvas.dashes(path, 1.4, (2.0, 3.0), INK)?,
            }
        }
        Ok(())
    }

    fn across(&self, value: f64) -> f64 {
        self.frame.left + self.chart.x.place(value) * (self.frame.right - self.frame.left)
    }

    fn down(&self, value: f64) -> f64 {
        self.frame.bottom - self.chart.y.place(value) * (self.frame.bottom - self.frame.top)
    }
}

fn colour(series: &Series) -> RGBColor {
    match series.role {
        Role::Measured => SERIES[series.slot % SERIES.len()],
        Role::Exact => FAINT,
        Role::Guide => INK,
    }
}

fn marker(series: &Series) -> Marker {
    Marker::ALL[series.slot % Marker::ALL.len()]
}
