//! Phase clock: modelled `CBTmin` of each day on a 24-h clock face.
//!
//! Midnight is at the top and time runs clockwise. Each date has a ring of its own, the first innermost and the last outermost,
//! so a body clock that stays in place is a straight ray and one that moves is a spiral.

use std::f64::consts::TAU;

use plotters::prelude::CoordTranslate;
use plotters_backend::BackendCoord;

use crate::render::chart::palette::{AXIS, GRID, HABITUAL, HALO, MARKS, RANGES, SOFT_HALO};
use crate::render::chart::{Heading, Key, Marker, Sample, WIDTH};
use crate::render::svg::Caption;
use crate::render::svg::sheet::{Lettering, Plane, Position, Sheet, to_grid};
use crate::report::figure::{Band, PhaseClock, PhaseDay};

const INNER: f64 = 62.0;
const OUTER: f64 = 236.0;
/// Where the hours of the face are written.
const HOURS: f64 = OUTER + 28.0;
/// Room around the centre for the face, its hours and the label of the ray.
const REACH: f64 = OUTER + 40.0;
const SHAPES: [Marker; 3] = [Marker::Disc, Marker::Diamond, Marker::Triangle];

/// Clock hours around, SVG units of radius outward.
#[derive(Debug, Clone, Copy)]
struct ClockFace {
    centre: Position,
}

impl ClockFace {
    /// Where a clock hour and a radius are on the page.
    fn place(self, hour: f64, radius: f64) -> Position {
        let turn = hour / 24.0 * TAU;
        (
            self.centre.0 + radius * turn.sin(),
            self.centre.1 - radius * turn.cos(),
        )
    }
}

impl CoordTranslate for ClockFace {
    type From = Position;

    fn translate(&self, from: &Position) -> BackendCoord {
        let (x, y) = self.place(from.0, from.1);
        (to_grid(x), to_grid(y))
    }
}

/// Draws the figure.
pub(super) fn draw(figure: &PhaseClock, id: &str) -> String {
    let heading = Heading::new(&figure.title);
    let rings = Rings::new(&figure.days);
    let cases = cases(&figure.days);
    let key = key(figure, &cases, &rings);
    let bottom = heading.height() + 2.0 * REACH;
    let sheet = Sheet::new(WIDTH, bottom + key.height() + 6.0);
    heading.draw(&sheet.page());
    let face = ClockFace {
        centre: (WIDTH / 2.0, heading.height() + REACH),
    };
    let plane = sheet.plane_of(face);
    draw_face(&sheet, &plane, face, &rings);
    draw_habitual(&sheet, &plane, face, figure.habitual_h);
    for (index, case) in cases.iter().enumerate() {
        let days = figure
            .days
            .iter()
            .filter(|day| day.case.as_deref() == *case);
        let drawn = CaseDrawing {
            look: index % SHAPES.len(),
            // Two cases of one date share its ring, each a little to its own side.
            step: if cases.len() > 1 {
                if index % 2 == 0 { -1.3 } else { 1.3 }
            } else {
                0.0
            },
        };
        drawn.draw(&sheet, face, days.map(|day| (rings.radius(day), day)));
    }
    draw_dates(&sheet, &plane, face, &rings, opposite_side(figure));
    key.draw(&sheet, bottom);
    sheet.finish(Caption {
        id,
        title: &figure.title,
        description: &figure.description,
    })
}

/// The distinct dates from the first to the last, each with its ring.
struct Rings<'a> {
    dates: Vec<&'a str>,
    step: f64,
}

impl<'a> Rings<'a> {
    fn new(days: &'a [PhaseDay]) -> Self {
        let mut dates: Vec<&str> = Vec::new();
        for day in days {
            if !dates.contains(&day.label.as_str()) {
                dates.push(&day.label);
            }
        }
        let gaps: f64 = dates.iter().skip(1).map(|_| 1.0).sum();
        Self {
            step: (OUTER - 15.0 - INNER) / gaps.max(1.0),
            dates,
        }
    }

    fn radius(&self, day: &PhaseDay) -> f64 {
        let before = self.dates.iter().take_while(|date| **date != day.label);
        INNER + self.step * before.map(|_| 1.0).sum::<f64>()
    }

    /// The first date, one in seven after it and the last, with their radii.
    fn labelled(&self) -> Vec<(f64, &'a str)> {
        let mut labelled: Vec<(f64, &str)> = Vec::new();
        let mut radius = INNER;
        for (index, date) in self.dates.iter().enumerate() {
            let is_last = index + 1 == self.dates.len();
            if index % 7 == 0 || is_last {
                // The last date wins over a week label that would touch it.
                if is_last
                    && labelled.len() > 1
                    && labelled
                        .last()
                        .is_some_and(|(other, _)| radius - other < 15.0)
                {
                    labelled.pop();
                }
                labelled.push((radius, date));
            }
            radius += self.step;
        }
        labelled
    }
}

/// The cases in the order in which they first occur.
fn cases(days: &[PhaseDay]) -> Vec<Option<&str>> {
    let mut cases: Vec<Option<&str>> = Vec::new();
    for day in days {
        if !cases.contains(&day.case.as_deref()) {
            cases.push(day.case.as_deref());
        }
    }
    cases
}

fn key(figure: &PhaseClock, cases: &[Option<&str>], rings: &Rings<'_>) -> Key {
    let mut entries: Vec<(Sample, String)> = Vec::new();
    for (index, case) in cases.iter().enumerate() {
        let look = index % SHAPES.len();
        let words = match (case, cases.len()) {
            (Some(case), _) => format!("CBTmin and 5-95 % band: {case}"),
            (None, 1) => "CBTmin of the date, median and 5-95 % band".to_owned(),
            (None, _) => "CBTmin and 5-95 % band: other dates".to_owned(),
        };
        entries.push((Sample::Mark(SHAPES[look], MARKS[look], RANGES[look]), words));
    }
    if figure.habitual_h.is_finite() {
        let words = format!("habitual CBTmin {}", clock_words(figure.habitual_h));
        entries.push((Sample::Stroke(HABITUAL), words));
    }
    if let [first, .., last] = rings.dates[..] {
        entries.push((
            Sample::Words,
            format!("innermost ring {first}, outermost ring {last}"),
        ));
    }
    Key::new(
        entries
            .iter()
            .map(|(sample, words)| (*sample, words.as_str())),
    )
}

fn draw_face(sheet: &Sheet, plane: &Plane<ClockFace>, face: ClockFace, rings: &Rings<'_>) {
    let page = sheet.page();
    let hours = || (0..24_u8).map(f64::from);
    sheet.group(GRID, || {
        for hour in hours().filter(|hour| hour % 3.0 < 0.5) {
            plane.line([(hour, INNER - 12.0), (hour, OUTER)]);
        }
        for (radius, _) in rings.labelled() {
            page.circle(face.centre, radius);
        }
    });
    sheet.group(AXIS, || {
        page.circle(face.centre, OUTER);
        for hour in hours() {
            let length = if hour % 3.0 < 0.5 { 8.0 } else { 4.0 };
            plane.line([(hour, OUTER), (hour, OUTER + length)]);
        }
    });
    for hour in hours().filter(|hour| hour % 3.0 < 0.5) {
        plane.text((hour, HOURS), &format!("{hour:02}:00"), Lettering::MIDDLE);
    }
}

fn draw_habitual(sheet: &Sheet, plane: &Plane<ClockFace>, face: ClockFace, hour: f64) {
    if !hour.is_finite() {
        return;
    }
    sheet.group(HABITUAL, || {
        plane.line([(hour, 0.0), (hour, OUTER + 10.0)]);
    });
    // Beside the hour label when the ray runs into one, at the end of the ray otherwise; the key says the clock time.
    let written = (hour / 3.0).round() * 3.0;
    let ((x, y), step) = if (hour - written).abs() < 0.6 {
        (face.place(written, HOURS), 24.0)
    } else {
        (face.place(hour, OUTER + 16.0), 2.0)
    };
    let (x, lettering) = if x < face.centre.0 {
        (x - step, Lettering::END)
    } else {
        (x + step, Lettering::START)
    };
    sheet.group(HALO, || sheet.page().text((x, y), "habitual", lettering));
}

/// How the dates of one case are drawn.
struct CaseDrawing {
    look: usize,
    step: f64,
}

impl CaseDrawing {
    fn draw<'a>(
        &self,
        sheet: &Sheet,
        face: ClockFace,
        days: impl Iterator<Item = (f64, &'a PhaseDay)>,
    ) {
        let known = days.filter(|(_, day)| is_known(day.clock_h));
        let days: Vec<_> = known
            .map(|(radius, day)| (radius + self.step, day.clock_h))
            .collect();
        let (page, plane) = (sheet.page(), sheet.plane_of(face));
        sheet.group(RANGES[self.look], || {
            for (radius, band) in &days {
                plane.line(arc(*band, *radius));
            }
        });
        sheet.group(MARKS[self.look], || {
            for (radius, band) in &days {
                SHAPES[self.look].draw(&page, face.place(band.median, *radius), 3.4);
            }
        });
    }
}

fn is_known(band: Band) -> bool {
    band.median.is_finite() && band.p05.is_finite() && band.p95.is_finite()
}

/// Points along the band, dense enough to look round; more than once around says no more than once.
fn arc(band: Band, radius: f64) -> Vec<Position> {
    const STEP_H: f64 = 0.2;
    let length = (band.p95 - band.p05).clamp(0.0, 24.0);
    let mut points = Vec::new();
    let mut along = 0.0;
    while along < length {
        points.push((band.p05 + along, radius));
        along += STEP_H;
    }
    points.push((band.p05 + length, radius));
    points
}

/// Midnight or noon, whichever is farther from the data: there the dates are written, unless the habitual ray runs there.
fn opposite_side(figure: &PhaseClock) -> f64 {
    let known = figure.days.iter().map(|day| day.clock_h);
    let known = known.filter(|band| is_known(*band));
    let upward: f64 = known.map(|band| (band.median / 24.0 * TAU).cos()).sum();
    // A twelfth of a turn is room enough for the ray to pass the dates.
    let habitual = (figure.habitual_h / 24.0 * TAU).cos();
    if habitual > 0.866 || (upward > 0.0 && habitual >= -0.866) {
        12.0
    } else {
        0.0
    }
}

fn draw_dates(
    sheet: &Sheet,
    plane: &Plane<ClockFace>,
    face: ClockFace,
    rings: &Rings<'_>,
    hour: f64,
) {
    sheet.group(AXIS, || {
        for (radius, _) in rings.labelled() {
            let (x, y) = face.place(hour, radius);
            sheet.page().line([(x - 4.0, y), (x + 4.0, y)]);
        }
        plane.line([(hour, INNER), (hour, OUTER)]);
    });
    sheet.group(SOFT_HALO, || {
        for (radius, date) in rings.labelled() {
            let (x, y) = face.place(hour, radius);
            sheet.page().text((x - 7.0, y), date, Lettering::END);
        }
    });
}

/// Clock time to the minute, of an hour that may lie outside one day.
fn clock_words(hour: f64) -> String {
    let minutes = (hour * 60.0).round().rem_euclid(1440.0);
    let (hours, rest) = ((minutes / 60.0).floor(), minutes % 60.0);
    format!("{hours:02}:{rest:02}")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn day(label: &str, median: f64, case: Option<&str>) -> PhaseDay {
        PhaseDay {
            label: label.to_owned(),
            clock_h: Band {
                median,
                p05: median - 1.0,
                p95: median + 1.5,
            },
            case: case.map(str::to_owned),
        }
    }

    fn clock(days: Vec<PhaseDay>) -> PhaseClock {
        PhaseClock {
            title: "t".to_owned(),
            description: "d".to_owned(),
            habitual_h: 4.25,
            days,
        }
    }

    #[test]
    fn midnight_is_at_the_top_and_time_runs_clockwise() {
        let face = ClockFace {
            centre: (100.0, 100.0),
        };
        for (hour, x, y) in [
            (0.0, 1000, 500),
            (6.0, 1500, 1000),
            (12.0, 1000, 1500),
            (18.0, 500, 1000),
            (-6.0, 500, 1000),
            (30.0, 1500, 1000),
        ] {
            assert_eq!(face.translate(&(hour, 50.0)), (x, y), "{hour}");
        }
    }

    #[test]
    fn the_first_date_is_inside_and_the_last_outside() {
        let days = vec![
            day("a", 4.0, None),
            day("b", 5.0, None),
            day("c", 6.0, None),
        ];
        let rings = Rings::new(&days);
        let radii: Vec<_> = days.iter().map(|day| rings.radius(day)).collect();
        assert!(
            radii[0] < radii[1] && radii[1] < radii[2] && radii[2] < OUTER,
            "{radii:?}"
        );
    }

    #[test]
    fn two_cases_of_one_date_share_its_ring_and_differ_in_shape() {
        let figure = clock(vec![
            day("a", 4.0, Some("with light")),
            day("a", 7.0, Some("without")),
        ]);
        assert_eq!(Rings::new(&figure.days).dates, ["a"]);
        let svg = draw(&figure, "p");
        assert!(svg.contains("<g class=\"mark-a\"><circle"), "{svg}");
        assert!(svg.contains("<g class=\"mark-b\"><path"), "{svg}");
        assert!(
            svg.contains(": with light</text>") && svg.contains(": without</text>"),
            "{svg}"
        );
    }

    #[test]
    fn labels_are_few_and_hold_the_first_and_last_date() {
        let days: Vec<_> = (0..28).map(|n| day(&format!("{n}"), 4.0, None)).collect();
        let rings = Rings::new(&days);
        let labels: Vec<_> = rings.labelled().into_iter().map(|(_, date)| date).collect();
        assert_eq!(labels, ["0", "7", "14", "21", "27"]);
    }

    #[test]
    fn dates_are_written_away_from_the_data() {
        assert!((opposite_side(&clock(vec![day("a", 3.0, None)])) - 12.0).abs() < 1e-9);
        assert!(opposite_side(&clock(vec![day("a", 9.0, None)])).abs() < 1e-9);
        let mut early = clock(vec![day("a", 9.0, None)]);
        early.habitual_h = 0.5;
        assert!((opposite_side(&early) - 12.0).abs() < 1e-9);
    }

    #[test]
    fn an_hour_outside_one_day_reads_as_a_clock_time() {
        for (hour, words) in [
            (4.25, "04:15"),
            (-1.5, "22:30"),
            (25.0, "01:00"),
            (23.9999, "00:00"),
        ] {
            assert_eq!(clock_words(hour), words);
        }
    }

    #[test]
    fn a_band_wider_than_a_day_is_one_turn() {
        let wide = Band {
            median: 0.0,
            p05: -20.0,
            p95: 20.0,
        };
        let points = arc(wide, 100.0);
        assert!((points[points.len() - 1].0 - 4.0).abs() < 1e-9);
    }

    #[test]
    fn values_that_are_no_numbers_are_left_out() {
        let mut figure = clock(vec![day("a", f64::NAN, None)]);
        figure.habitual_h = f64::NAN;
        let svg = draw(&figure, "p");
        assert!(svg.contains("<g class=\"mark-a\"></g>"), "{svg}");
        assert!(!svg.contains(">habitual"), "{svg}");
    }
}
