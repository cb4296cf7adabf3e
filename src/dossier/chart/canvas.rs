//! A sheet to draw on, over plotters' SVG backend.
//!
//! plotters places everything on whole pixels, which turns curves into stairs. So the sheet is drawn [`FINE`] times larger than it is
//! shown, and only the size that the file states is the true one.

use plotters::prelude::*;
use plotters::style::text_anchor::{HPos, Pos, VPos};

/// Drawn units in one shown pixel.
const FINE: f64 = 10.0;

/// The family in SVG files: ours where the page brings it, else what the reader has.
pub(super) const FAMILY: &str = "Assay Sans, Fira Sans, Helvetica Neue, Arial, sans-serif";

pub(super) type DrawError = DrawingAreaErrorKind<std::io::Error>;
type Area<'a> = DrawingArea<SVGBackend<'a>, plotters::coord::Shift>;

/// A place in shown pixels.
pub(super) type Place = (f64, f64);

/// A straight piece of a curve.
pub(super) type Piece = (Place, Place);

/// A rectangle in shown pixels.
#[derive(Clone, Copy, Debug)]
pub(super) struct Frame {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
}

/// A sheet; all lengths in shown pixels, y downwards.
pub(super) struct Canvas<'a> {
    area: Area<'a>,
}

/// How a text hangs on its point.
#[derive(Clone, Copy)]
pub(super) enum Hang {
    Left,
    Centre,
    Right,
    /// Turned by a quarter, reading upwards, centred.
    Upwards,
}

/// The marker of a curve.
#[derive(Clone, Copy)]
pub(super) enum Marker {
    Disc,
    Square,
    Triangle,
    Diamond,
    Ring,
    Cross,
}

impl Marker {
    pub(super) const ALL: [Self; 6] =
        [Self::Disc, Self::Square, Self::Triangle, Self::Diamond, Self::Ring, Self::Cross];
}

impl<'a> Canvas<'a> {
    pub(super) fn new(text: &'a mut String, size: (u32, u32)) -> Self {
        let fine = (size.0 * FINE as u32, size.1 * FINE as u32);
        Self { area: SVGBackend::with_string(text, fine).into_drawing_area() }
    }

    pub(super) fn present(&self) -> Result<(), DrawError> {
        self.area.present()
    }

    pub(super) fn line(&self, points: &[(f64, f64)], width: f64, colour: RGBColor) -> Result<(), DrawError> {
        let points: Vec<_> = points.iter().map(|&point| fine(point)).collect();
        self.area.draw(&PathElement::new(points, colour.stroke_width(length(width))))
    }

    pub(super) fn dashes(
        &self,
        points: &[(f64, f64)],
        width: f64,
        (on, off): (f64, f64),
        colour: RGBColor,
    ) -> Result<(), DrawError> {
        for (from, to) in dashes(points, on, off) {
            self.line(&[from, to], width, colour)?;
        }
        Ok(())
    }

    pub(super) fn fill(&self, frame: Frame, colour: RGBColor) -> Result<(), DrawError> {
        let corners = [fine((frame.left, frame.top)), fine((frame.right, frame.bottom))];
        self.area.draw(&Rectangle::new(corners, colour.filled()))
    }

    pub(super) fn text(
        &self,
        text: &str,
        at: (f64, f64),
        size: f64,
        hang: Hang,
        colour: RGBColor,
    ) -> Result<(), DrawError> {
        let (horizontal, turn) = match hang {
            Hang::Left => (HPos::Left, FontTransform::None),
            Hang::Centre => (HPos::Center, FontTransform::None),
            Hang::Right => (HPos::Right, FontTransform::None),
            Hang::Upwards => (HPos::Center, FontTransform::Rotate270),
        };
        let font = FontDesc::new(FontFamily::Name(FAMILY), size * FINE, FontStyle::Normal).transform(turn);
        let style = TextStyle::from(font).color(&colour).pos(Pos::new(horizontal, VPos::Center));
        self.area.draw(&Text::new(text.to_owned(), fine(at), style))
    }

    pub(super) fn marker(&self, marker: Marker, (x, y): (f64, f64), colour: RGBColor) -> Result<(), DrawError> {
        let polygon = |corners: &[(f64, f64)]| {
            let corners: Vec<_> = corners.iter().map(|(dx, dy)| fine((x + dx, y + dy))).collect();
            self.area.draw(&Polygon::new(corners, colour.filled()))
        };
        match marker {
            Marker::Disc => self.area.draw(&Circle::new(fine((x, y)), length(3.2), colour.filled())),
            Marker::Ring => self.area.draw(&Circle::new(fine((x, y)), length(3.0), colour.stroke_width(length(1.4)))),
            Marker::Square => polygon(&[(-2.9, -2.9), (2.9, -2.9), (2.9, 2.9), (-2.9, 2.9)]),
            Marker::Triangle => polygon(&[(0.0, -3.9), (3.7, 2.8), (-3.7, 2.8)]),
            Marker::Diamond => polygon(&[(0.0, -4.2), (4.2, 0.0), (0.0, 4.2), (-4.2, 0.0)]),
            Marker::Cross => {
                self.line(&[(x - 3.0, y - 3.0), (x + 3.0, y + 3.0)], 1.6, colour)?;
                self.line(&[(x - 3.0, y + 3.0), (x + 3.0, y - 3.0)], 1.6, colour)
            }
        }
    }
}

fn fine((x, y): (f64, f64)) -> (i32, i32) {
    ((x * FINE).round() as i32, (y * FINE).round() as i32)
}

fn length(value: f64) -> u32 {
    (value * FINE).round().max(1.0) as u32
}

/// Cuts a path into dashes.
fn dashes(points: &[(f64, f64)], on: f64, off: f64) -> Vec<Piece> {
    let mut out = Vec::new();
    let (mut left, mut drawing) = (on, true);
    for pair in points.windows(2) {
        let (from, to) = (pair[0], pair[1]);
        let whole = (to.0 - from.0).hypot(to.1 - from.1);
        let at = |along: f64| (from.0 + (to.0 - from.0) * along / whole, from.1 + (to.1 - from.1) * along / whole);
        let mut along = 0.0;
        while whole > 0.0 && along < whole {
            let end = (along + left).min(whole);
            if drawing {
                out.push((at(along), at(end)));
            }
            left -= end - along;
            along = end;
            if left <= 1e-9 {
                drawing = !drawing;
                left = if drawing { on } else { off };
            }
        }
    }
    out
}

/// The part of a segment within `frame` (the method of Liang and Barsky, 1984); `None` where none is.
pub(super) fn clip(from: (f64, f64), to: (f64, f64), frame: Frame) -> Option<Piece> {
    let (dx, dy) = (to.0 - from.0, to.1 - from.1);
    let edges = [
        (-dx, from.0 - frame.left),
        (dx, frame.right - from.0),
        (-dy, from.1 - frame.top),
        (dy, frame.bottom - from.1),
    ];
    let (mut enter, mut leave) = (0.0f64, 1.0f64);
    for (p, q) in edges {
        if p == 0.0 {
            if q < 0.0 {
                return None;
            }
        } else if p < 0.0 {
            enter = enter.max(q / p);
        } else {
            leave = leave.min(q / p);
        }
    }
    let at = |t: f64| (from.0 + t * dx, from.1 + t * dy);
    (enter <= leave).then(|| (at(enter), at(leave)))
}

#[cfg(test)]
mod tests {
    use super::*;

    const FRAME: Frame = Frame { left: 0.0, top: 0.0, right: 10.0, bottom: 10.0 };

    #[test]
    fn segments_are_cut_at_the_frame() {
        assert_eq!(clip((-5.0, 5.0), (15.0, 5.0), FRAME), Some(((0.0, 5.0), (10.0, 5.0))));
        assert_eq!(clip((2.0, 2.0), (3.0, 4.0), FRAME), Some(((2.0, 2.0), (3.0, 4.0))));
        assert_eq!(clip((-5.0, -1.0), (15.0, -1.0), FRAME), None);
    }

    #[test]
    fn dashes_cover_their_share_of_the_path() {
        let cut = dashes(&[(0.0, 0.0), (10.0, 0.0)], 3.0, 2.0);
        assert_eq!(cut, [((0.0, 0.0), (3.0, 0.0)), ((5.0, 0.0), (8.0, 0.0))]);
    }
}
