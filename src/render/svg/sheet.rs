//! A page to draw on: one canvas shared by several coordinate planes.
//!
//! plotters maps positions to the grid and draws its elements; this module gives both a shape that a figure can use in one line.

use std::cell::RefCell;
use std::ops::Range;
use std::rc::Rc;

use plotters::coord::types::RangedCoordf64;
use plotters::element::{Drawable, PointCollection};
use plotters::prelude::{
    BLACK, Cartesian2d, Circle, Color, CoordTranslate, DrawingArea, PathElement, Polygon,
    Rectangle, Text, TextStyle,
};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{FontDesc, FontFamily, FontStyle, FontTransform};

use crate::render::svg::{BASE_FONT, Caption, GRID, Look, SvgCanvas};

/// A position: on a plane in its own units, on the page in SVG units.
pub(crate) type Position = (f64, f64);

/// Linear axes in both directions.
pub(crate) type Linear = Cartesian2d<RangedCoordf64, RangedCoordf64>;

/// A rectangle of the page, SVG units.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Frame {
    pub(crate) left: f64,
    pub(crate) top: f64,
    pub(crate) right: f64,
    pub(crate) bottom: f64,
}

/// Which point of a text stands at its position; across, it is always the middle of the line.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Anchor {
    Start,
    Middle,
    End,
}

/// How a text is set.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Lettering {
    pub(crate) anchor: Anchor,
    pub(crate) size: f64,
    pub(crate) bold: bool,
    /// Reads from bottom to top.
    pub(crate) upward: bool,
}

impl Lettering {
    pub(crate) const START: Self = Self::anchored(Anchor::Start);
    pub(crate) const MIDDLE: Self = Self::anchored(Anchor::Middle);
    pub(crate) const END: Self = Self::anchored(Anchor::End);

    const fn anchored(anchor: Anchor) -> Self {
        Self {
            anchor,
            size: BASE_FONT,
            bold: false,
            upward: false,
        }
    }

    /// The same in bold when `bold` holds.
    pub(crate) const fn bold(self, bold: bool) -> Self {
        Self { bold, ..self }
    }

    fn style(self) -> TextStyle<'static> {
        let weight = if self.bold {
            FontStyle::Bold
        } else {
            FontStyle::Normal
        };
        let turn = if self.upward {
            FontTransform::Rotate270
        } else {
            FontTransform::None
        };
        let across = match self.anchor {
            Anchor::Start => HPos::Left,
            Anchor::Middle => HPos::Center,
            Anchor::End => HPos::Right,
        };
        TextStyle::from(FontDesc::new(FontFamily::SansSerif, self.size, weight).transform(turn))
            .pos(Pos::new(across, VPos::Center))
    }
}

/// One figure being drawn.
pub(crate) struct Sheet {
    canvas: Rc<RefCell<SvgCanvas>>,
    width: f64,
    height: f64,
}

impl Sheet {
    /// An empty figure; size in SVG units.
    pub(crate) fn new(width: f64, height: f64) -> Self {
        let size = |units: f64| to_grid(units).unsigned_abs().div_ceil(GRID);
        Self {
            canvas: Rc::new(RefCell::new(SvgCanvas::new(size(width), size(height)))),
            width,
            height,
        }
    }

    /// The whole page, in SVG units.
    pub(crate) fn page(&self) -> Plane<Linear> {
        let frame = Frame {
            left: 0.0,
            top: 0.0,
            right: self.width,
            bottom: self.height,
        };
        self.plane(0.0..self.width, 0.0..self.height, frame)
    }

    /// A plane whose `x` runs from left to right and whose `y` runs from top to bottom of the frame.
    pub(crate) fn plane(&self, x: Range<f64>, y: Range<f64>, frame: Frame) -> Plane<Linear> {
        let across = to_grid(frame.left)..to_grid(frame.right);
        let down = to_grid(frame.top)..to_grid(frame.bottom);
        self.plane_of(Linear::new(x, y, (across, down)))
    }

    /// A plane with a coordinate system of the caller's own.
    pub(crate) fn plane_of<C: CoordTranslate<From = Position>>(&self, coordinates: C) -> Plane<C> {
        Plane {
            area: DrawingArea::from(&self.canvas).apply_coord_spec(coordinates),
        }
    }

    /// Gives everything that `draw` draws one look.
    pub(crate) fn group(&self, look: Look, draw: impl FnOnce()) {
        self.canvas.borrow_mut().open_group(look);
        draw();
        self.canvas.borrow_mut().close_group();
    }

    /// The finished `<svg>` element.
    pub(crate) fn finish(&self, caption: Caption<'_>) -> String {
        self.canvas.borrow_mut().finish(caption)
    }
}

/// Part of a sheet with its own coordinates.
pub(crate) struct Plane<C: CoordTranslate<From = Position>> {
    area: DrawingArea<SvgCanvas, C>,
}

impl<C: CoordTranslate<From = Position>> Plane<C> {
    /// A rectangle between two opposite corners.
    pub(crate) fn rectangle(&self, from: Position, to: Position) {
        self.draw(&Rectangle::new([from, to], BLACK.filled()));
    }

    /// An open line through the points.
    pub(crate) fn line(&self, points: impl Into<Vec<Position>>) {
        self.draw(&PathElement::new(points, BLACK));
    }

    /// A closed shape through the points.
    pub(crate) fn polygon(&self, points: impl Into<Vec<Position>>) {
        self.draw(&Polygon::new(points, BLACK));
    }

    /// A circle with its radius in SVG units.
    pub(crate) fn circle(&self, centre: Position, radius: f64) {
        self.draw(&Circle::new(centre, to_grid(radius), BLACK.filled()));
    }

    /// A line of text.
    pub(crate) fn text(&self, at: Position, text: &str, lettering: Lettering) {
        self.draw(&Text::new(text, at, lettering.style()));
    }

    fn draw<'a, E>(&self, element: &'a E)
    where
        &'a E: PointCollection<'a, Position>,
        E: Drawable<SvgCanvas>,
    {
        // The canvas is borrowed only inside one drawing call and its own error type has no value.
        self.area
            .draw(element)
            .expect("a canvas that collects text in memory cannot fail");
    }
}

/// SVG units as whole grid steps.
#[expect(
    clippy::cast_possible_truncation,
    reason = "the value is rounded first; `as` saturates, and a position beyond i32 is outside any page"
)]
pub(crate) fn to_grid(units: f64) -> i32 {
    (units * f64::from(GRID)).round() as i32
}

#[cfg(test)]
mod tests {
    use super::*;

    const CAPTION: Caption<'static> = Caption {
        id: "s",
        title: "t",
        description: "d",
    };

    #[test]
    fn planes_share_one_canvas_and_keep_tenths_of_a_unit() {
        let sheet = Sheet::new(100.0, 40.0);
        let frame = Frame {
            left: 10.0,
            top: 0.0,
            right: 60.0,
            bottom: 40.0,
        };
        let hours = sheet.plane(0.0..24.0, 0.0..1.0, frame);
        sheet.group(Look::plain("duty"), || {
            hours.rectangle((6.5, 0.0), (12.0, 0.5));
        });
        sheet.page().text((3.0, 20.0), "x", Lettering::END);
        let svg = sheet.finish(CAPTION);
        assert!(svg.contains(r#"viewBox="0 0 100 40""#), "{svg}");
        assert!(
            svg.contains(r#"<path d="M23.5 0h11.5v20h-11.5z"/>"#),
            "{svg}"
        );
        assert!(
            svg.contains(r#"<text x="3" y="24.6" text-anchor="end">x</text>"#),
            "{svg}"
        );
    }

    #[test]
    fn a_position_that_is_no_number_does_not_stop_the_drawing() {
        assert_eq!(to_grid(f64::NAN), 0);
        assert_eq!(to_grid(f64::INFINITY), i32::MAX);
        assert_eq!(to_grid(-0.04), 0);
    }
}
