//! Lines, areas and text on the SVG backend, in units of which 1040 make the width of the figure.
//!
//! The backend counts in whole pixels, so it is given ten of them to a unit.

use plotters::prelude::*;
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{FontStyle, FontTransform};

use super::palette::PAPER;
use crate::export::Error;
use crate::export::words::plain;

/// The figure's size in its own units.
pub(super) const WIDTH: f64 = 1040.0;
pub(super) const HEIGHT: f64 = 726.0;
/// Pixels of the backend to a unit.
pub(super) const SCALE: f64 = 10.0;

/// A point, right and down from the upper left corner.
pub(super) type Point = (f64, f64);

/// Colour and width of a line.
#[derive(Clone, Copy)]
pub(super) struct Stroke {
    pub(super) color: RGBColor,
    pub(super) width: f64,
}

/// Which end of a text stands at its point.
#[derive(Clone, Copy, PartialEq)]
pub(super) enum Anchor {
    Start,
    Middle,
    End,
}

/// How a text looks.
#[derive(Clone, Copy)]
pub(super) struct Type {
    pub(super) color: RGBColor,
    pub(super) size: f64,
    pub(super) bold: bool,
    pub(super) anchor: Anchor,
    /// Reads upwards.
    pub(super) upright: bool,
}

impl Type {
    pub(super) fn new(color: RGBColor, size: f64, anchor: Anchor) -> Self {
        Self {
            color,
            size,
            bold: false,
            anchor,
            upright: false,
        }
    }
}

/// The width that a text takes in an ordinary sans-serif face, with a little to spare.
pub(super) fn text_width(text: &str, size: f64) -> f64 {
    #[allow(clippy::cast_precision_loss)] // A label has no 2^52 characters.
    let characters = text.chars().count() as f64;
    characters * size * 0.56
}

/// How much wider bold text is.
pub(super) const BOLD: f64 = 1.12;

/// What is drawn on.
pub(super) struct Canvas<'a> {
    backend: SVGBackend<'a>,
}

impl<'a> Canvas<'a> {
    /// A white sheet whose SVG goes to `body`.
    pub(super) fn new(body: &'a mut String) -> Self {
        let size = (pixels(WIDTH).unsigned_abs(), pixels(HEIGHT).unsigned_abs());
        let backend = SVGBackend::with_string(body, size);
        Self { backend }
    }

    /// Ends the document.
    pub(super) fn finish(mut self) -> Result<(), Error> {
        told(self.backend.present())
    }

    /// A straight line.
    pub(super) fn line(&mut self, from: Point, to: Point, stroke: Stroke) -> Result<(), Error> {
        told(
            self.backend
                .draw_line(pixel(from), pixel(to), &style(stroke)),
        )
    }

    /// A line through the points.
    pub(super) fn path(&mut self, points: &[Point], stroke: Stroke) -> Result<(), Error> {
        if points.len() < 2 {
            return Ok(());
        }
        let points = points.iter().copied().map(pixel);
        told(self.backend.draw_path(points, &style(stroke)))
    }

    /// A line through the points, `on` drawn and `off` left out in turn.
    pub(super) fn dashed(
        &mut self,
        points: &[Point],
        stroke: Stroke,
        (on, off): (f64, f64),
    ) -> Result<(), Error> {
        dashes(points, on, off)
            .iter()
            .try_for_each(|dash| self.path(dash, stroke))
    }

    /// A filled area.
    pub(super) fn area(&mut self, points: &[Point], color: RGBColor) -> Result<(), Error> {
        if points.len() < 3 {
            return Ok(());
        }
        let points = points.iter().copied().map(pixel);
        told(self.backend.fill_polygon(points, &color.filled()))
    }

    /// A filled rectangle.
    pub(super) fn block(&mut self, from: Point, to: Point, color: RGBColor) -> Result<(), Error> {
        let filled = color.filled();
        told(
            self.backend
                .draw_rect(pixel(from), pixel(to), &filled, true),
        )
    }

    /// The outline of a rectangle.
    pub(super) fn frame(&mut self, from: Point, to: Point, stroke: Stroke) -> Result<(), Error> {
        let corners = [from, (to.0, from.1), to, (from.0, to.1), from];
        self.path(&corners, stroke)
    }

    /// A disc.
    pub(super) fn disc(&mut self, at: Point, radius: f64, color: RGBColor) -> Result<(), Error> {
        let radius = pixels(radius).unsigned_abs();
        told(
            self.backend
                .draw_circle(pixel(at), radius, &color.filled(), true),
        )
    }

    /// A ring, white within.
    pub(super) fn ring(&mut self, at: Point, radius: f64, stroke: Stroke) -> Result<(), Error> {
        self.disc(at, radius, PAPER)?;
        let radius = pixels(radius).unsigned_abs();
        told(
            self.backend
                .draw_circle(pixel(at), radius, &style(stroke), false),
        )
    }

    /// A line of text, its middle at the height of the point.
    pub(super) fn text(&mut self, text: &str, at: Point, look: &Type) -> Result<(), Error> {
        let face = if look.bold {
            FontStyle::Bold
        } else {
            FontStyle::Normal
        };
        let horizontal = match look.anchor {
            Anchor::Start => HPos::Left,
            Anchor::Middle => HPos::Center,
            Anchor::End => HPos::Right,
        };
        let turn = if look.upright {
            FontTransform::Rotate270
        } else {
            FontTransform::None
        };
        let style = TextStyle::from(("sans-serif", look.size * SCALE * BACKEND_TEXT, face))
            .transform(turn)
            .color(&look.color)
            .pos(Pos::new(horizontal, VPos::Center));
        told(self.backend.draw_text(&plain(text), &style, pixel(at)))
    }
}

/// The backend divides every text size by this.
const BACKEND_TEXT: f64 = 1.24;

fn style(stroke: Stroke) -> ShapeStyle {
    stroke
        .color
        .stroke_width(pixels(stroke.width).unsigned_abs())
}

fn pixel((x, y): Point) -> (i32, i32) {
    (pixels(x), pixels(y))
}

/// Units in pixels, kept within a million so that sums of them never overflow.
fn pixels(units: f64) -> i32 {
    #[allow(clippy::cast_possible_truncation)] // Within a million.
    let whole = (units * SCALE).clamp(-1e6, 1e6).round() as i32;
    whole
}

fn told<E: std::fmt::Display>(outcome: Result<(), E>) -> Result<(), Error> {
    outcome.map_err(|problem| Error::Figure {
        what: problem.to_string(),
    })
}

/// The pieces of a dashed line.
fn dashes(points: &[Point], on: f64, off: f64) -> Vec<Vec<Point>> {
    let mut pieces: Vec<Vec<Point>> = Vec::new();
    let mut piece: Vec<Point> = points.first().copied().into_iter().collect();
    let (mut drawing, mut left) = (true, on);
    for pair in points.windows(2) {
        let (mut from, to) = (pair[0], pair[1]);
        loop {
            let length = (to.0 - from.0).hypot(to.1 - from.1);
            if length <= left {
                left -= length;
                piece.extend(drawing.then_some(to));
                break;
            }
            let part = left / length;
            from = (
                from.0 + part * (to.0 - from.0),
                from.1 + part * (to.1 - from.1),
            );
            if drawing {
                piece.push(from);
                pieces.push(std::mem::take(&mut piece));
            } else {
                piece.push(from);
            }
            drawing = !drawing;
            left = if drawing { on } else { off };
        }
    }
    pieces.push(piece);
    pieces
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dashes_go_round_corners_and_keep_their_rhythm() {
        let pieces = dashes(&[(0.0, 0.0), (3.0, 0.0), (3.0, 7.0)], 4.0, 2.0);
        assert_eq!(
            pieces,
            [
                vec![(0.0, 0.0), (3.0, 0.0), (3.0, 1.0)],
                vec![(3.0, 3.0), (3.0, 7.0)],
            ]
        );
        assert_eq!(dashes(&[], 1.0, 1.0), [Vec::<Point>::new()]);
    }
}
