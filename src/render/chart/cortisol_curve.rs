//! Modelled cortisol over the roster: one row per week, so that four weeks stay readable on one page.

use crate::render::chart::palette::{AXIS, BAND, DUTY, GRID, MEDIAN, SLEEP};
use crate::render::chart::{Heading, Key, Sample, WIDTH};
use crate::render::svg::sheet::{Frame, Lettering, Linear, Plane, Sheet};
use crate::render::svg::{Caption, Look};
use crate::report::figure::{CortisolCurve, CurvePoint, DayTick, Span};

const DAYS_PER_ROW: usize = 7;
const LEFT: f64 = 58.0;
const RIGHT: f64 = 694.0;
/// Room for the dates above a row.
const DATES: f64 = 20.0;
const PLOT: f64 = 96.0;
/// Height of the strip of duty and of the strip of sleep.
const STRIP: f64 = 11.0;
const STRIP_GAP: f64 = 3.0;
/// From the axis to the first strip: the zero of the axis and the name of the strip stand beside each other.
const AXIS_GAP: f64 = 8.0;
const BETWEEN_ROWS: f64 = 12.0;
/// Room for both strips.
const STRIPS: f64 = AXIS_GAP + 2.0 * STRIP + STRIP_GAP;
const ROW: f64 = DATES + PLOT + STRIPS + BETWEEN_ROWS;

/// Draws the figure.
pub(super) fn draw(figure: &CortisolCurve, id: &str) -> String {
    let heading = Heading::new(&figure.title);
    let key = Key::new([
        (Sample::Stroke(MEDIAN), "median"),
        (
            Sample::Area(BAND),
            "5-95 % band: spread of the modelled group mean",
        ),
        (Sample::Area(DUTY), "duty (hatched)"),
        (Sample::Area(SLEEP), "modelled sleep (solid)"),
    ]);
    let rows = week_rows(figure);
    let room: f64 = rows.iter().map(|_| ROW).sum();
    let sheet = Sheet::new(WIDTH, heading.height() + room.max(ROW) + key.height() + 4.0);
    heading.draw(&sheet.page());
    let scale = ValueScale::up_to(figure.points.iter().map(|point| point.nmol_l.p95));
    let longest_h = rows
        .iter()
        .map(|row| row.to_h - row.from_h)
        .fold(1.0, f64::max);
    let mut top = heading.height() + DATES;
    for row in &rows {
        // Rows share one scale of time, so a short last row ends early instead of being stretched.
        let plot = WeekPlot {
            sheet: &sheet,
            figure,
            row: *row,
            frame: Frame {
                left: LEFT,
                top,
                right: LEFT + (RIGHT - LEFT) * (row.to_h - row.from_h) / longest_h,
                bottom: top + PLOT,
            },
        };
        plot.draw(&scale);
        top += ROW;
    }
    if rows.is_empty() {
        sheet.page().text(
            (LEFT, top + PLOT / 2.0),
            "no curve for this roster",
            Lettering::START,
        );
    }
    key.draw(&sheet, heading.height() + room.max(ROW));
    sheet.finish(Caption {
        id,
        title: &figure.title,
        description: &figure.description,
    })
}

/// Stretches of seven local days, from midnight to midnight; a week with a clock change has one hour less or more.
fn week_rows(figure: &CortisolCurve) -> Vec<Span> {
    let times = || {
        figure
            .points
            .iter()
            .map(|point| point.at_h)
            .filter(|at_h| at_h.is_finite())
    };
    let (Some(first), Some(last)) = (times().next(), times().next_back()) else {
        return Vec::new();
    };
    let mut edges: Vec<f64> = figure
        .days
        .iter()
        .map(|day| day.at_h)
        .step_by(DAYS_PER_ROW)
        .collect();
    match edges.first_mut() {
        Some(edge) => *edge = edge.min(first),
        None => edges.push(first),
    }
    edges.push(figure.days.last().map_or(last, |day| day.at_h.max(last)));
    let rows = edges.windows(2).map(|pair| Span {
        from_h: pair[0],
        to_h: pair[1],
    });
    // A midnight that only closes the last week opens no row of its own.
    rows.filter(|row| row.to_h - row.from_h > 0.5).collect()
}

/// The axis of values: from zero, so that heights can be compared, to a round number above the highest band.
struct ValueScale {
    top: f64,
    step: f64,
}

impl ValueScale {
    fn up_to(values: impl Iterator<Item = f64>) -> Self {
        let highest = values.filter(|value| value.is_finite()).fold(1.0, f64::max);
        // Three to five steps fit the height of a row.
        let mut step = 1.0;
        for factor in [2.0, 2.5, 2.0].into_iter().cycle() {
            if highest <= 4.0 * step {
                break;
            }
            step *= factor;
        }
        Self {
            top: (highest / step).ceil() * step,
            step,
        }
    }

    fn ticks(&self) -> Vec<f64> {
        let mut ticks = vec![0.0];
        let mut value = self.step;
        while value <= self.top + self.step * 0.01 {
            ticks.push(value);
            value += self.step;
        }
        ticks
    }
}

/// One row being drawn.
struct WeekPlot<'a> {
    sheet: &'a Sheet,
    figure: &'a CortisolCurve,
    row: Span,
    frame: Frame,
}

impl WeekPlot<'_> {
    fn draw(&self, scale: &ValueScale) {
        let (from_h, to_h) = (self.row.from_h, self.row.to_h);
        let plane = self.sheet.plane(from_h..to_h, scale.top..0.0, self.frame);
        self.draw_grid(&plane, scale);
        self.draw_curve(&plane);
        self.sheet.group(AXIS, || {
            plane.line([(from_h, scale.top), (from_h, 0.0), (to_h, 0.0)]);
        });
        self.draw_strip(DUTY, &self.figure.work, AXIS_GAP);
        self.draw_strip(SLEEP, &self.figure.sleep, AXIS_GAP + STRIP + STRIP_GAP);
    }

    fn days(&self) -> impl Iterator<Item = &DayTick> {
        let row = self.row;
        let inside = move |day: &&DayTick| day.at_h >= row.from_h && day.at_h < row.to_h - 0.5;
        self.figure.days.iter().filter(inside)
    }

    fn draw_grid(&self, plane: &Plane<Linear>, scale: &ValueScale) {
        let (row, frame) = (self.row, self.frame);
        let page = self.sheet.page();
        let per_hour = (frame.right - frame.left) / (row.to_h - row.from_h);
        let per_unit = (frame.bottom - frame.top) / scale.top;
        let day_x = |day: &DayTick| frame.left + (day.at_h - row.from_h) * per_hour;
        let strips = frame.bottom + STRIPS;
        self.sheet.group(GRID, || {
            for tick in scale.ticks() {
                plane.line([(row.from_h, tick), (row.to_h, tick)]);
            }
            for day in self.days() {
                page.line([(day_x(day), frame.top - DATES + 4.0), (day_x(day), strips)]);
            }
        });
        for day in self.days() {
            page.text(
                (day_x(day) + 4.0, frame.top - 9.0),
                &day.label,
                Lettering::START,
            );
        }
        for tick in scale.ticks() {
            let at = (frame.left - 5.0, frame.bottom - tick * per_unit);
            page.text(at, &format!("{tick}"), Lettering::END);
        }
        let upward = Lettering {
            upward: true,
            ..Lettering::MIDDLE
        };
        page.text(
            (9.0, f64::midpoint(frame.top, frame.bottom)),
            "nmol/L",
            upward,
        );
    }

    /// Band and median; a stretch without values breaks both, nothing is drawn across it.
    fn draw_curve(&self, plane: &Plane<Linear>) {
        let stretches = stretches(&self.figure.points, self.row);
        self.sheet.group(BAND, || {
            for stretch in &stretches {
                let upper = stretch.iter().map(|point| (point.at_h, point.nmol_l.p95));
                let lower = stretch
                    .iter()
                    .rev()
                    .map(|point| (point.at_h, point.nmol_l.p05));
                plane.polygon(upper.chain(lower).collect::<Vec<_>>());
            }
        });
        self.sheet.group(MEDIAN, || {
            for stretch in &stretches {
                let median = stretch
                    .iter()
                    .map(|point| (point.at_h, point.nmol_l.median));
                plane.line(median.collect::<Vec<_>>());
            }
        });
    }

    fn draw_strip(&self, look: Look, spans: &[Span], below: f64) {
        let (row, frame) = (self.row, self.frame);
        let top = frame.bottom + below;
        let strip = Frame {
            top,
            bottom: top + STRIP,
            ..frame
        };
        let plane = self.sheet.plane(row.from_h..row.to_h, 0.0..1.0, strip);
        self.sheet.group(look, || {
            for span in spans {
                let (from_h, to_h) = (span.from_h.max(row.from_h), span.to_h.min(row.to_h));
                if from_h < to_h {
                    plane.rectangle((from_h, 0.0), (to_h, 1.0));
                }
            }
        });
        let words = if look == DUTY { "duty" } else { "sleep" };
        let at = (frame.left - 5.0, top + STRIP / 2.0);
        self.sheet.page().text(at, words, Lettering::END);
    }
}

/// The points inside a row, parted where a value is missing.
fn stretches(points: &[CurvePoint], row: Span) -> Vec<Vec<CurvePoint>> {
    let inside = |point: &CurvePoint| point.at_h >= row.from_h && point.at_h <= row.to_h;
    let is_value = |point: &CurvePoint| {
        let band = point.nmol_l;
        band.median.is_finite() && band.p05.is_finite() && band.p95.is_finite()
    };
    points
        .split(|point| !is_value(point))
        .map(|run| run.iter().copied().filter(inside).collect::<Vec<_>>())
        .filter(|run| run.len() > 1)
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::figure::Band;

    fn curve(days: u16, missing_at: Option<u16>) -> CortisolCurve {
        let points = (0..=days * 48).map(|step| {
            let at_h = f64::from(step) / 2.0;
            let level = 250.0 + 150.0 * (at_h * std::f64::consts::TAU / 24.0).sin();
            let median = if missing_at == Some(step) {
                f64::NAN
            } else {
                level
            };
            CurvePoint {
                at_h,
                nmol_l: Band {
                    median,
                    p05: level * 0.8,
                    p95: level * 1.25,
                },
            }
        });
        CortisolCurve {
            title: "t".to_owned(),
            description: "d".to_owned(),
            points: points.collect(),
            work: vec![Span {
                from_h: 160.0,
                to_h: 172.0,
            }],
            sleep: Vec::new(),
            days: (0..=days)
                .map(|day| DayTick {
                    at_h: f64::from(day) * 24.0,
                    label: format!("Mon {day:02}"),
                })
                .collect(),
        }
    }

    #[test]
    fn four_weeks_are_four_rows_and_stay_small() {
        let figure = curve(28, None);
        let rows = week_rows(&figure);
        assert_eq!(rows.len(), 4, "{rows:?}");
        let svg = draw(&figure, "c");
        assert!(svg.len() < 60_000, "{}", svg.len());
        assert_eq!(svg.matches(">nmol/L</text>").count(), 4);
    }

    #[test]
    fn a_roster_of_ten_days_has_a_short_second_row() {
        let rows = week_rows(&curve(10, None));
        let edges: Vec<_> = rows.iter().map(|row| (row.from_h, row.to_h)).collect();
        assert_eq!(edges, [(0.0, 168.0), (168.0, 240.0)]);
    }

    #[test]
    fn a_duty_over_the_end_of_a_row_is_drawn_in_both_rows() {
        let svg = draw(&curve(14, None), "c");
        // One more than the two rows: the sample in the key.
        assert_eq!(svg.matches("<g class=\"duty\"><path").count(), 3);
    }

    #[test]
    fn a_missing_value_breaks_the_curve() {
        let row = Span {
            from_h: 0.0,
            to_h: 168.0,
        };
        assert_eq!(stretches(&curve(7, None).points, row).len(), 1);
        assert_eq!(stretches(&curve(7, Some(100)).points, row).len(), 2);
    }

    #[test]
    fn the_value_axis_begins_at_zero_and_ends_on_a_round_number() {
        for (highest, top) in [
            (0.0, 1.0),
            (390.0, 400.0),
            (401.0, 600.0),
            (730.0, 800.0),
            (1200.0, 1500.0),
        ] {
            let scale = ValueScale::up_to([highest].into_iter());
            assert!((scale.top - top).abs() < 1e-9, "{highest} {}", scale.top);
            let ticks = scale.ticks();
            assert!(ticks.len() <= 6 && ticks[0].abs() < 1e-9, "{ticks:?}");
        }
    }

    #[test]
    fn a_figure_without_points_says_so() {
        let empty = CortisolCurve {
            points: Vec::new(),
            ..curve(1, None)
        };
        assert!(draw(&empty, "c").contains("no curve for this roster"));
    }
}
