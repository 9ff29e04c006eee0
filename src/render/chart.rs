//! How are the findings seen at a glance?
//!
//! One function per figure of [`crate::report::figure`], each returning one `<svg>` element for an HTML page.
//!
//! What all figures keep to:
//! - Nothing is told by colour alone: there is always a letter, a hatch, a line style or a marker shape beside it.
//! - Colours are those of Okabe and Ito; text is black or grey on paper, and light on a dark screen.
//! - The title is printed in the picture, because a picture may be copied out of the page and must keep saying whose it is.
//! - A figure is 700 units wide. On A4 with 15 mm margins its text is 9.5 pt; on a narrow screen it scrolls inside `.acro-scroll`.
//! - Up to six weeks fit one A4 page. Longer rosters make a taller figure; for print, give a figure a month at a time.
//!
//! A page includes [`CHART_CSS`] once in a `<style>` and [`pattern_definitions`] once before the first figure.

use crate::render::svg::sheet::{Lettering, Linear, Plane, Sheet};
use crate::render::svg::{Look, lettering};
use crate::report::figure::{CortisolCurve, PhaseClock, Raster, RecoveryStrip};

mod cortisol_curve;
mod palette;
mod phase_clock;
mod raster;
mod recovery_strip;

pub use palette::{CHART_CSS, pattern_definitions};

/// The measured recovery windows of one worker against the limits.
pub fn recovery_strip(figure: &RecoveryStrip, id: &str) -> String {
    recovery_strip::draw(figure, id)
}

/// The double-plotted raster of duty, sleep and biological night.
pub fn raster(figure: &Raster, id: &str) -> String {
    raster::draw(figure, id)
}

/// Modelled cortisol, a row per week.
pub fn cortisol_curve(figure: &CortisolCurve, id: &str) -> String {
    cortisol_curve::draw(figure, id)
}

/// Modelled `CBTmin` by day on a 24-h clock face.
pub fn phase_clock(figure: &PhaseClock, id: &str) -> String {
    phase_clock::draw(figure, id)
}

/// A file of its own from one of the figures: with namespace, style and pattern definitions.
///
/// A text that is not one of the figures comes back with the XML declaration alone.
pub fn standalone(svg: &str) -> String {
    const DECLARATION: &str = "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n";
    // Text inside the figure is escaped, so the first of each of these marks is the figure's own.
    let parts = svg
        .strip_prefix("<svg ")
        .and_then(|rest| rest.split_once("</desc>"));
    match parts {
        Some((head, body)) => format!(
            "{DECLARATION}<svg xmlns=\"http://www.w3.org/2000/svg\" {head}</desc><style>{CHART_CSS}</style>{defs}{body}",
            defs = palette::DEFINITIONS,
        ),
        None => format!("{DECLARATION}{svg}"),
    }
}

/// Width of every figure, SVG units.
const WIDTH: f64 = 700.0;

/// Height of one line of the heading.
const HEADING_LINE: f64 = 20.0;

/// Height of one line of the key.
const KEY_LINE: f64 = 20.0;

/// Room for the sample in front of a word of the key.
const SAMPLE: f64 = 26.0;

/// The title as printed above the drawing.
struct Heading {
    lines: Vec<String>,
}

impl Heading {
    const SIZE: f64 = 15.0;

    fn new(title: &str) -> Self {
        Self {
            lines: lettering::wrap(title, Self::SIZE, true, WIDTH - 8.0),
        }
    }

    /// Room that the heading takes, SVG units.
    fn height(&self) -> f64 {
        self.lines.iter().map(|_| HEADING_LINE).sum::<f64>() + 8.0
    }

    fn draw(&self, page: &Plane<Linear>) {
        let lettering = Lettering {
            size: Self::SIZE,
            bold: true,
            ..Lettering::START
        };
        let mut y = 12.0;
        for line in &self.lines {
            page.text((4.0, y), line, lettering);
            y += HEADING_LINE;
        }
    }
}

/// How an entry of the key shows what it explains.
#[derive(Debug, Clone, Copy)]
enum Sample {
    /// A box with a look.
    Area(Look),
    /// A line with a look.
    Stroke(Look),
    /// An upright line with a look.
    Upright(Look),
    /// A marker on a line, each with a look.
    Mark(Marker, Look, Look),
    /// Words alone.
    Words,
}

/// Shape of a data point; one per case, so that cases are told apart without colour.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Marker {
    Disc,
    Diamond,
    Triangle,
}

impl Marker {
    /// Draws the marker on the page; the radius is that of the disc, the others have about its area.
    fn draw(self, page: &Plane<Linear>, (x, y): (f64, f64), radius: f64) {
        match self {
            Self::Disc => page.circle((x, y), radius),
            Self::Diamond => {
                let reach = radius * 1.3;
                page.polygon([
                    (x - reach, y),
                    (x, y - reach),
                    (x + reach, y),
                    (x, y + reach),
                ]);
            }
            Self::Triangle => {
                let (half, up, down) = (radius * 1.2, radius * 1.4, radius * 0.8);
                page.polygon([(x - half, y + down), (x, y - up), (x + half, y + down)]);
            }
        }
    }
}

/// Explains the looks used in a figure, in as many lines as needed.
struct Key {
    entries: Vec<(Sample, String)>,
}

impl Key {
    fn new<'a>(entries: impl IntoIterator<Item = (Sample, &'a str)>) -> Self {
        let entries = entries.into_iter();
        Self {
            entries: entries
                .map(|(sample, words)| (sample, words.to_owned()))
                .collect(),
        }
    }

    /// Where each entry begins, measured from the upper left corner of the key.
    fn places(&self) -> Vec<(f64, f64)> {
        let (mut x, mut y) = (0.0, KEY_LINE / 2.0);
        let mut places = Vec::with_capacity(self.entries.len());
        for (sample, words) in &self.entries {
            let width = sample_room(*sample) + lettering::width(words, 13.0, false) + 20.0;
            if x > 0.0 && x + width > WIDTH {
                (x, y) = (0.0, y + KEY_LINE);
            }
            places.push((x + 4.0, y));
            x += width;
        }
        places
    }

    /// Room that the key takes, SVG units.
    fn height(&self) -> f64 {
        self.places()
            .last()
            .map_or(0.0, |(_, y)| y + KEY_LINE / 2.0)
    }

    /// Draws the key with its upper edge at `top`.
    fn draw(&self, sheet: &Sheet, top: f64) {
        let page = sheet.page();
        for ((sample, words), (x, down)) in self.entries.iter().zip(self.places()) {
            let y = top + down;
            match *sample {
                Sample::Area(look) => {
                    sheet.group(look, || page.rectangle((x, y - 6.0), (x + 20.0, y + 6.0)));
                }
                Sample::Stroke(look) => {
                    sheet.group(look, || page.line([(x, y), (x + 20.0, y)]));
                }
                Sample::Upright(look) => {
                    sheet.group(look, || {
                        page.line([(x + 12.0, y - 7.0), (x + 12.0, y + 7.0)]);
                    });
                }
                Sample::Mark(marker, mark, stroke) => {
                    sheet.group(stroke, || page.line([(x, y), (x + 20.0, y)]));
                    sheet.group(mark, || marker.draw(&page, (x + 10.0, y), 4.0));
                }
                Sample::Words => {}
            }
            page.text((x + sample_room(*sample), y), words, Lettering::START);
        }
    }
}

fn sample_room(sample: Sample) -> f64 {
    match sample {
        Sample::Words => 0.0,
        _ => SAMPLE,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::figure::{
        Band, BarLook, CurvePoint, DayTick, LimitLine, PhaseDay, RasterRow, Span, WindowBar,
    };

    const TITLE: &str = "Line <7> & \"others\"";

    fn figures() -> Vec<(&'static str, String)> {
        let title = TITLE.to_owned();
        let description = "A <b> & 'c' \"d\"".to_owned();
        let span = |from_h, to_h| Span { from_h, to_h };
        let strip = RecoveryStrip {
            title: title.clone(),
            description: description.clone(),
            bars: [
                BarLook::Compressed,
                BarLook::Narrow,
                BarLook::Unmarked,
                BarLook::NotJudged,
            ]
            .map(|look| WindowBar {
                start: "Mon <1>".to_owned(),
                hours: 90.0,
                look,
            })
            .to_vec(),
            limits: vec![LimitLine {
                hours: 11.0,
                label: "11 h & more".to_owned(),
            }],
        };
        let row = |number: u8| RasterRow {
            label: format!("Sat <{number}>"),
            day_h: 24.0,
            work: vec![span(0.0, 7.25), span(21.5, 24.0)],
            sleep: vec![span(8.5, 13.1), span(14.2, 16.4)],
            biological_night: vec![span(0.0, 6.7), span(22.3, 24.0)],
        };
        let raster_figure = Raster {
            title: title.clone(),
            description: description.clone(),
            rows: (1..=28).map(row).collect(),
        };
        let curve = CortisolCurve {
            title: title.clone(),
            description: description.clone(),
            points: (0..100_u8)
                .map(|n| CurvePoint {
                    at_h: f64::from(n),
                    nmol_l: Band {
                        median: 300.0,
                        p05: 200.0,
                        p95: 400.0 + f64::from(n),
                    },
                })
                .collect(),
            work: vec![span(7.0, 15.0)],
            sleep: vec![span(22.0, 30.0)],
            days: vec![DayTick {
                at_h: 0.0,
                label: "Mon & 09".to_owned(),
            }],
        };
        let day = |case: &str| PhaseDay {
            label: "Mon <9>".to_owned(),
            clock_h: Band {
                median: 4.0,
                p05: 3.0,
                p95: 5.0,
            },
            case: Some(case.to_owned()),
        };
        let clock = PhaseClock {
            title,
            description,
            habitual_h: 4.0,
            days: vec![day("<a>"), day("b & c")],
        };
        vec![
            ("recovery strip", recovery_strip(&strip, "f1")),
            ("raster", raster(&raster_figure, "f2")),
            ("cortisol curve", cortisol_curve(&curve, "f3")),
            ("phase clock", phase_clock(&clock, "f4")),
        ]
    }

    /// Walks the tags and says what is wrong, if anything: enough of XML for what the canvas writes.
    fn fault(xml: &str) -> Option<String> {
        let mut open: Vec<&str> = Vec::new();
        let mut rest = xml;
        while let Some((text, tail)) = rest.split_once('<') {
            let references = text.split('&').skip(1);
            for reference in references {
                let known = ["amp;", "lt;", "gt;", "quot;", "#39;"];
                if !known.iter().any(|name| reference.starts_with(name)) {
                    return Some(format!("bare ampersand before {reference:.20}"));
                }
            }
            let Some((tag, after)) = tail.split_once('>') else {
                return Some(format!("tag without end: {tail:.30}"));
            };
            if tag.contains('<') || tag.matches('"').count() % 2 == 1 {
                return Some(format!("broken tag: {tag}"));
            }
            if let Some(name) = tag.strip_prefix('/') {
                if open.pop() != Some(name) {
                    return Some(format!("</{name}> closes another element"));
                }
            } else if !tag.ends_with('/') && !tag.starts_with('?') {
                open.push(tag.split(' ').next().unwrap_or(tag));
            }
            rest = after;
        }
        open.pop().map(|name| format!("<{name}> is not closed"))
    }

    #[test]
    fn every_figure_is_well_formed_alone_and_in_a_page() {
        for (name, svg) in figures() {
            assert_eq!(fault(&svg), None, "{name}");
            assert_eq!(fault(&standalone(&svg)), None, "{name}");
        }
        assert_eq!(fault(pattern_definitions()), None);
        assert!(fault("<a><b></a>").is_some() && fault("<a>&b</a>").is_some());
    }

    #[test]
    fn every_figure_names_and_describes_itself() {
        for (name, svg) in figures() {
            assert!(svg.contains("role=\"img\" aria-labelledby=\"f"), "{name}");
            assert!(svg.contains("<desc id=\"f"), "{name}");
            // Once for those who hear the figure, once for those who see it.
            assert_eq!(
                svg.matches("Line &lt;7&gt; &amp; &quot;others&quot;")
                    .count(),
                2,
                "{name}"
            );
        }
    }

    #[test]
    fn a_page_has_each_pattern_once_and_a_file_brings_its_own() {
        for (name, svg) in figures() {
            assert!(!svg.contains("<pattern"), "{name}");
            let file = standalone(&svg);
            assert_eq!(file.matches("id=\"acro-fill-narrow\"").count(), 1, "{name}");
            assert_eq!(file.matches("xmlns=").count(), 1, "{name}");
            assert!(
                file.starts_with("<?xml") && file.contains("<style>"),
                "{name}"
            );
        }
    }

    #[test]
    fn a_figure_is_the_same_each_time() {
        assert_eq!(figures(), figures());
    }

    #[test]
    fn colours_live_in_the_style_sheet_alone() {
        for (name, svg) in figures() {
            let drawing = svg.split_once("</desc>").map_or("", |(_, drawing)| drawing);
            assert!(
                !drawing.contains("fill=")
                    && !drawing.contains("stroke=")
                    && !drawing.contains("url("),
                "{name}"
            );
        }
    }

    #[test]
    fn a_raster_of_four_weeks_is_small() {
        let size = figures()[1].1.len();
        assert!(size < 40_000, "{size}");
    }

    #[test]
    fn a_text_that_is_no_figure_is_left_as_it_is() {
        assert!(standalone("<p>x</p>").ends_with("<p>x</p>"));
    }

    #[test]
    fn a_key_longer_than_a_line_goes_on_in_the_next() {
        let words = "a rather long explanation of one look among several";
        let key = Key::new([
            (Sample::Words, words),
            (Sample::Area(palette::DUTY), words),
            (Sample::Words, words),
        ]);
        assert!(key.height() > KEY_LINE);
        assert!(key.places().iter().all(|(x, _)| *x < WIDTH));
    }
}
