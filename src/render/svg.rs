//! How does a drawing become SVG text?
//!
//! A plotters backend of this program.
//! The usual SVG writer for plotters rounds to whole pixels, rescales fonts and knows neither hatching, classes, titles nor descriptions; a report needs all of these.
//!
//! - Precision: one SVG unit is [`GRID`] backend steps, so every coordinate has one decimal.
//! - Paint: the colours that plotters passes along are not written. What a shape looks like is said by the class of the
//!   group around it ([`SvgCanvas::open_group`]), so a style sheet can recolour it for a dark screen, dash it or fill it with a pattern.
//!   Only a fully transparent colour has an effect: nothing is drawn.
//! - Hatch: a [`Look`] may ask for lines across its rectangles. They are drawn as lines rather than by an SVG pattern, because
//!   browsers turn patterns into coarse bitmaps when they print.
//! - Size: neighbouring shapes of one group become one `<path>`. A class with a fill must not hold shapes that are to cover each other.
//! - Text: font sizes are SVG units as they are; widths are estimated from a table, because the library reads no font files.

use std::convert::Infallible;
use std::fmt::Write as _;

use plotters_backend::text_anchor::{HPos, VPos};
use plotters_backend::{
    BackendColor, BackendCoord, BackendStyle, BackendTextStyle, DrawingBackend, DrawingErrorKind,
    FontStyle, FontTransform,
};

use crate::render::svg::outline::Outline;

pub(crate) mod lettering;
mod outline;
pub(crate) mod sheet;

/// Backend steps per SVG unit.
pub const GRID: u32 = 10;

/// Font size of text that says no other, SVG units; 9.5 pt when a figure 700 units wide fills an A4 page with 15 mm margins.
pub const BASE_FONT: f64 = 13.0;

/// What an SVG says about itself to somebody who does not see it.
#[derive(Debug, Clone, Copy)]
pub struct Caption<'a> {
    /// Unique in the page; the ids of title and description are made from it.
    pub id: &'a str,
    /// Title.
    pub title: &'a str,
    /// Text alternative.
    pub description: &'a str,
}

/// How the shapes of a group look.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Look {
    /// CSS class, or several with spaces between.
    pub class: &'static str,
    /// Lines across every rectangle of the group, if any; the style sheet knows them as class `lines` inside the group.
    pub hatch: Option<Hatch>,
}

impl Look {
    /// A look without hatch.
    pub const fn plain(class: &'static str) -> Self {
        Self { class, hatch: None }
    }

    /// A look with slanted lines.
    pub const fn hatched(class: &'static str, hatch: Hatch) -> Self {
        Self {
            class,
            hatch: Some(hatch),
        }
    }
}

/// Slanted lines at 45 degrees, their distance measured along the horizontal in backend steps.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Hatch {
    /// Lines that rise to the right.
    Rising(u16),
    /// Lines that fall to the right.
    Falling(u16),
}

/// A canvas that collects SVG text.
///
/// # Example
/// ```
/// use acroshift::render::svg::{Caption, Look, SvgCanvas};
/// use plotters::prelude::*;
/// use std::{cell::RefCell, rc::Rc};
///
/// let canvas = Rc::new(RefCell::new(SvgCanvas::new(100, 50)));
/// let area = DrawingArea::from(&canvas);
/// canvas.borrow_mut().open_group(Look::plain("duty"));
/// area.draw(&Rectangle::new([(0, 0), (105, 200)], BLACK.filled()))?;
/// canvas.borrow_mut().close_group();
/// let svg = canvas.borrow_mut().finish(Caption { id: "f1", title: "Duty", description: "One duty." });
/// assert!(svg.contains(r#"<g class="duty"><path d="M0 0h10.5v20h-10.5z"/></g>"#));
/// # Ok::<(), Box<dyn std::error::Error>>(())
/// ```
#[derive(Debug, Clone)]
pub struct SvgCanvas {
    width: u32,
    height: u32,
    body: String,
    pending: Outline,
    lines: Outline,
    open: Vec<Look>,
}

impl SvgCanvas {
    /// An empty canvas of the given size in SVG units.
    pub fn new(width: u32, height: u32) -> Self {
        Self {
            width,
            height,
            body: String::new(),
            pending: Outline::default(),
            lines: Outline::default(),
            open: Vec::new(),
        }
    }

    /// Begins a group of shapes with one look.
    pub fn open_group(&mut self, look: Look) {
        self.flush();
        self.add(format_args!(r#"<g class="{}">"#, escape(look.class)));
        self.open.push(look);
    }

    /// Ends the group begun last; without an open group nothing happens.
    pub fn close_group(&mut self) {
        self.flush();
        if self.open.pop().is_some() {
            self.body.push_str("</g>");
            if self.open.is_empty() {
                self.body.push('\n');
            }
        }
    }

    /// The whole `<svg>` element, for use inside an HTML page.
    pub fn finish(&mut self, caption: Caption<'_>) -> String {
        while !self.open.is_empty() {
            self.close_group();
        }
        self.flush();
        let id = identifier(caption.id);
        let (width, height) = (self.width, self.height);
        format!(
            concat!(
                r#"<svg class="acro-chart" viewBox="0 0 {width} {height}" width="{width}" height="{height}" "#,
                r#"font-size="{font}" role="img" aria-labelledby="{id}-title {id}-desc">"#,
                r#"<title id="{id}-title">{title}</title><desc id="{id}-desc">{description}</desc>"#,
                r#"<rect class="paper" width="{width}" height="{height}"/>"#,
                "\n{body}</svg>\n"
            ),
            width = width,
            height = height,
            font = BASE_FONT,
            id = id,
            title = escape(caption.title),
            description = escape(caption.description),
            body = self.body,
        )
    }

    /// Writes the path collected so far, and its hatch over it.
    fn flush(&mut self) {
        let data = self.pending.take();
        if !data.is_empty() {
            self.add(format_args!(r#"<path d="{data}"/>"#));
        }
        let lines = self.lines.take();
        if !lines.is_empty() {
            self.add(format_args!(r#"<path class="lines" d="{lines}"/>"#));
        }
    }

    fn add(&mut self, text: std::fmt::Arguments<'_>) {
        self.body
            .write_fmt(text)
            .expect("writing to a String cannot fail");
    }
}

impl DrawingBackend for SvgCanvas {
    type ErrorType = Infallible;

    fn get_size(&self) -> (u32, u32) {
        (self.width * GRID, self.height * GRID)
    }

    fn ensure_prepared(&mut self) -> Result<(), DrawingErrorKind<Infallible>> {
        Ok(())
    }

    fn present(&mut self) -> Result<(), DrawingErrorKind<Infallible>> {
        Ok(())
    }

    fn draw_pixel(
        &mut self,
        point: BackendCoord,
        color: BackendColor,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if is_seen(color) {
            self.pending.rectangle(point, (point.0 + 1, point.1 + 1));
        }
        Ok(())
    }

    fn draw_line<S: BackendStyle>(
        &mut self,
        from: BackendCoord,
        to: BackendCoord,
        style: &S,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        self.draw_path([from, to], style)
    }

    fn draw_rect<S: BackendStyle>(
        &mut self,
        upper_left: BackendCoord,
        bottom_right: BackendCoord,
        style: &S,
        _fill: bool,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if is_seen(style.color()) {
            self.pending.rectangle(upper_left, bottom_right);
            if let Some(hatch) = self.open.last().and_then(|look| look.hatch) {
                self.lines.hatch(upper_left, bottom_right, hatch);
            }
        }
        Ok(())
    }

    fn draw_path<S: BackendStyle, I: IntoIterator<Item = BackendCoord>>(
        &mut self,
        path: I,
        style: &S,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if is_seen(style.color()) {
            self.pending.line(path);
        }
        Ok(())
    }

    fn draw_circle<S: BackendStyle>(
        &mut self,
        center: BackendCoord,
        radius: u32,
        style: &S,
        _fill: bool,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if is_seen(style.color()) {
            self.flush();
            let (cx, cy) = (Tenths(center.0.into()), Tenths(center.1.into()));
            let r = Tenths(radius.into());
            self.add(format_args!(r#"<circle cx="{cx}" cy="{cy}" r="{r}"/>"#));
        }
        Ok(())
    }

    fn fill_polygon<S: BackendStyle, I: IntoIterator<Item = BackendCoord>>(
        &mut self,
        vert: I,
        style: &S,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if is_seen(style.color()) {
            self.pending.polygon(vert);
        }
        Ok(())
    }

    fn draw_text<TStyle: BackendTextStyle>(
        &mut self,
        text: &str,
        style: &TStyle,
        pos: BackendCoord,
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        if !is_seen(style.color()) || text.is_empty() {
            return Ok(());
        }
        self.flush();
        // The anchor belongs to the text as it is read, so the step to the baseline turns with it.
        let drop = sheet::to_grid(style.size() * baseline(style.anchor().v_pos));
        let (dx, dy) = style.transform().transform(0, drop);
        let x = Tenths(i64::from(pos.0) + i64::from(dx));
        let y = Tenths(i64::from(pos.1) + i64::from(dy));
        self.add(format_args!(r#"<text x="{x}" y="{y}""#));
        self.body.push_str(anchor_attribute(style.anchor().h_pos));
        self.body.push_str(face_attribute(style.style()));
        if (style.size() - BASE_FONT).abs() > 0.01 {
            self.add(format_args!(r#" font-size="{}""#, style.size()));
        }
        if let Some(degrees) = degrees(&style.transform()) {
            self.add(format_args!(r#" transform="rotate({degrees} {x} {y})""#));
        }
        self.add(format_args!(">{}</text>", escape(text)));
        Ok(())
    }

    fn estimate_text_size<TStyle: BackendTextStyle>(
        &self,
        text: &str,
        style: &TStyle,
    ) -> Result<(u32, u32), DrawingErrorKind<Infallible>> {
        let width = lettering::width(text, style.size(), matches!(style.style(), FontStyle::Bold));
        let height = style.size() * lettering::LINE;
        Ok((
            sheet::to_grid(width).unsigned_abs(),
            sheet::to_grid(height).unsigned_abs(),
        ))
    }

    fn blit_bitmap(
        &mut self,
        _pos: BackendCoord,
        _size: (u32, u32),
        _src: &[u8],
    ) -> Result<(), DrawingErrorKind<Infallible>> {
        // No figure holds a picture; one pixel at a time would be megabytes of text.
        Ok(())
    }
}

/// A length in grid steps, printed in SVG units without needless characters.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Tenths(pub(crate) i64);

impl std::fmt::Display for Tenths {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let grid = u64::from(GRID);
        let (whole, rest) = (self.0.unsigned_abs() / grid, self.0.unsigned_abs() % grid);
        if self.0 < 0 {
            out.write_char('-')?;
        }
        match (whole, rest) {
            (whole, 0) => write!(out, "{whole}"),
            (0, rest) => write!(out, ".{rest}"),
            (whole, rest) => write!(out, "{whole}.{rest}"),
        }
    }
}

/// Text with the characters that XML reserves written as entities, and those that XML forbids replaced.
pub fn escape(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for character in text.chars() {
        match character {
            '&' => escaped.push_str("&amp;"),
            '<' => escaped.push_str("&lt;"),
            '>' => escaped.push_str("&gt;"),
            '"' => escaped.push_str("&quot;"),
            '\'' => escaped.push_str("&#39;"),
            '\t' | '\n' | '\r' => escaped.push(' '),
            control if control.is_control() => escaped.push('\u{fffd}'),
            '\u{fffe}' | '\u{ffff}' => escaped.push('\u{fffd}'),
            plain => escaped.push(plain),
        }
    }
    escaped
}

/// An id may not hold spaces, because `aria-labelledby` is a list with spaces between.
fn identifier(id: &str) -> String {
    id.chars()
        .map(|c| {
            if c.is_ascii_alphanumeric() || c == '_' {
                c
            } else {
                '-'
            }
        })
        .collect()
}

fn is_seen(color: BackendColor) -> bool {
    color.alpha > 0.0
}

fn anchor_attribute(position: HPos) -> &'static str {
    match position {
        HPos::Left => "",
        HPos::Center => r#" text-anchor="middle""#,
        HPos::Right => r#" text-anchor="end""#,
    }
}

fn face_attribute(style: FontStyle) -> &'static str {
    match style {
        FontStyle::Normal => "",
        FontStyle::Bold => r#" font-weight="bold""#,
        FontStyle::Italic | FontStyle::Oblique => r#" font-style="italic""#,
    }
}

/// Clockwise turn of a text that does not stand upright.
fn degrees(turn: &FontTransform) -> Option<u16> {
    match turn {
        FontTransform::None => None,
        FontTransform::Rotate90 => Some(90),
        FontTransform::Rotate180 => Some(180),
        FontTransform::Rotate270 => Some(270),
    }
}

/// Step from the anchor down to the baseline, in font sizes.
fn baseline(position: VPos) -> f64 {
    match position {
        VPos::Top => 0.8,
        VPos::Center => 0.35,
        VPos::Bottom => -0.2,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use plotters::prelude::*;
    use plotters::style::text_anchor::Pos;

    const CAPTION: Caption<'static> = Caption {
        id: "fig 1",
        title: "A <&\" title",
        description: "It's a > b",
    };

    fn draw(with: impl FnOnce(&mut SvgCanvas)) -> String {
        let mut canvas = SvgCanvas::new(100, 50);
        with(&mut canvas);
        canvas.finish(CAPTION)
    }

    #[test]
    fn coordinates_have_one_decimal_and_no_needless_zero() {
        for (tenths, printed) in [(0, "0"), (5, ".5"), (-5, "-.5"), (10, "1"), (-123, "-12.3")] {
            assert_eq!(Tenths(tenths).to_string(), printed);
        }
    }

    #[test]
    fn title_and_description_are_escaped_and_named() {
        let svg = draw(|_| {});
        assert!(
            svg.contains(r#"<title id="fig-1-title">A &lt;&amp;&quot; title</title>"#),
            "{svg}"
        );
        assert!(
            svg.contains(r#"<desc id="fig-1-desc">It&#39;s a &gt; b</desc>"#),
            "{svg}"
        );
        assert!(
            svg.contains(r#"role="img" aria-labelledby="fig-1-title fig-1-desc""#),
            "{svg}"
        );
    }

    #[test]
    fn characters_that_xml_forbids_do_not_survive() {
        assert_eq!(
            escape("a\u{0}b\u{1b}c\nd\u{ffff}"),
            "a\u{fffd}b\u{fffd}c d\u{fffd}"
        );
    }

    #[test]
    fn neighbouring_shapes_of_one_group_share_one_path() {
        let svg = draw(|canvas| {
            canvas.open_group(Look::plain("duty"));
            canvas.draw_rect((0, 0), (105, 20), &BLACK, true).unwrap();
            canvas.draw_line((0, 0), (-5, 5), &BLACK).unwrap();
            canvas.close_group();
        });
        assert!(
            svg.contains(r#"<g class="duty"><path d="M0 0h10.5v2h-10.5zM0 0l-.5 .5"/></g>"#),
            "{svg}"
        );
    }

    #[test]
    fn the_hatch_of_a_group_follows_its_rectangles() {
        let svg = draw(|canvas| {
            canvas.open_group(Look::hatched("duty", Hatch::Rising(100)));
            canvas.draw_rect((0, 0), (200, 100), &BLACK, true).unwrap();
            canvas.close_group();
        });
        assert!(
            svg.contains(r#"<path d="M0 0h20v10h-20z"/><path class="lines" d="M"#),
            "{svg}"
        );
    }

    #[test]
    fn a_group_left_open_is_closed_and_one_too_many_is_not() {
        let svg = draw(|canvas| {
            canvas.close_group();
            canvas.open_group(Look::plain("a"));
        });
        assert!(svg.contains("<g class=\"a\"></g>\n</svg>"), "{svg}");
    }

    #[test]
    fn text_keeps_its_font_size_anchor_and_turn() {
        let style = TextStyle::from(("sans-serif", 20.0).into_font())
            .pos(Pos::new(HPos::Center, VPos::Center))
            .transform(FontTransform::Rotate270);
        let svg = draw(|canvas| canvas.draw_text("a<b", &style, (500, 250)).unwrap());
        assert!(
            svg.contains(r#"<text x="57" y="25" text-anchor="middle" font-size="20" transform="rotate(270 57 25)">a&lt;b</text>"#),
            "{svg}"
        );
    }

    #[test]
    fn transparent_shapes_are_not_written() {
        let svg = draw(|canvas| {
            canvas.draw_circle((1, 1), 1, &TRANSPARENT, true).unwrap();
            canvas.draw_line((1, 1), (5, 5), &TRANSPARENT).unwrap();
        });
        assert!(!svg.contains("<circle") && !svg.contains("<path"), "{svg}");
    }

    #[test]
    fn text_size_needs_no_font_file() {
        let style = TextStyle::from(("sans-serif", 10.0).into_font());
        let (width, height) = SvgCanvas::new(1, 1)
            .estimate_text_size("0000", &style)
            .unwrap();
        assert!(
            (200..260).contains(&width) && (100..140).contains(&height),
            "{width} {height}"
        );
    }
}
