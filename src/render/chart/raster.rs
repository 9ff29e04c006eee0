//! Double-plotted raster: each row shows a date and, to its right, the date after it.
//!
//! # Days of 23 and 25 hours
//!
//! Every day has a slot of its own that begins at local midnight, so midnights stand under each other and days can be compared.
//! Inside a slot the scale is hours since that midnight, which is elapsed time: no hour is stretched, dropped or drawn twice.
//! A day of 23 h ends one hour before its slot does; the rest of the slot is crossed out, since those minutes never were.
//! Where a day of 25 h occurs, every slot is 25 h wide and the shorter days leave the last hour crossed out.
//! After a clock change the wall clock runs one hour off the scale until midnight; the row says `23 h day` or `25 h day`, and a line under the key says so in full.

use crate::render::chart::palette::{AXIS, DUTY, GRID, HALO, NIGHT, SLEEP, SOFT, VOID};
use crate::render::chart::{Heading, Key, Sample, WIDTH};
use crate::render::svg::Caption;
use crate::render::svg::lettering;
use crate::render::svg::sheet::{Frame, Lettering, Linear, Plane, Sheet};
use crate::report::figure::{Raster, RasterRow, Span};

const ROW: f64 = 20.0;
/// Half the height of a box of duty or sleep, in rows.
const BOX: f64 = 0.27;
/// Half the height of the outline around the biological night, in rows: it stays outside of the boxes.
const OUTLINE: f64 = 0.42;
const AXIS_ROOM: f64 = 38.0;
const RIGHT: f64 = 690.0;
/// Shorter differences than this are rounding of a clock time, hours.
const NEAR_H: f64 = 1e-6;

/// Draws the figure.
pub(super) fn draw(figure: &Raster, id: &str) -> String {
    let heading = Heading::new(&figure.title);
    let key = key();
    let notes = notes(figure);
    let top = heading.height() + AXIS_ROOM;
    let rows: f64 = figure.rows.iter().map(|_| 1.0).sum();
    let bottom = top + rows * ROW;
    let note_room: f64 = notes.iter().map(|_| 18.0).sum();
    let sheet = Sheet::new(WIDTH, bottom + 14.0 + key.height() + note_room);
    heading.draw(&sheet.page());
    let slot_h = figure.rows.iter().map(|row| row.day_h).fold(24.0, f64::max);
    let label_room = figure.rows.iter().map(label_width).fold(90.0, f64::max);
    let frame = Frame {
        left: label_room + 12.0,
        top,
        right: RIGHT,
        bottom,
    };
    let plane = sheet.plane(0.0..2.0 * slot_h, 0.0..rows.max(1.0), frame);
    draw_axis(&sheet, &plane, frame, slot_h);
    draw_labels(&sheet, figure, top);
    draw_void(&sheet, &plane, figure, slot_h);
    draw_days(&sheet, &plane, figure, slot_h);
    key.draw(&sheet, bottom + 10.0);
    sheet.group(SOFT, || {
        let mut y = bottom + 18.0 + key.height();
        for note in notes {
            sheet.page().text((4.0, y), &note, Lettering::START);
            y += 18.0;
        }
    });
    sheet.finish(Caption {
        id,
        title: &figure.title,
        description: &figure.description,
    })
}

fn key() -> Key {
    Key::new([
        (Sample::Area(DUTY), "duty (hatched)"),
        (Sample::Area(SLEEP), "modelled sleep (solid)"),
        (Sample::Area(NIGHT), "modelled biological night (outline)"),
        (
            Sample::Area(VOID),
            "crossed out: no such hour, or date not shown",
        ),
    ])
}

/// What the length of a day other than 24 h means for the reader, in words.
fn notes(figure: &Raster) -> Vec<String> {
    let mut notes = Vec::new();
    for row in &figure.rows {
        let Some(words) = length_words(row) else {
            continue;
        };
        let side = if row.day_h < 24.0 {
            "ahead of"
        } else {
            "behind"
        };
        let off_h = (row.day_h - 24.0).abs();
        let note = format!(
            "{words}: after the change the wall clock is {off_h} h {side} this scale until midnight."
        );
        if !notes.contains(&note) {
            notes.push(note);
        }
    }
    notes
}

/// `23 h day` for a day that is not 24 h long.
fn length_words(row: &RasterRow) -> Option<String> {
    ((row.day_h - 24.0).abs() > NEAR_H).then(|| format!("{} h day", row.day_h))
}

fn label_width(row: &RasterRow) -> f64 {
    let label = lettering::width(&row.label, 13.0, is_weekend(row));
    label + length_words(row).map_or(0.0, |words| lettering::width(&words, 13.0, true) + 8.0)
}

/// The label begins with the day of the week; bold print makes the weekend found sooner, the word tells it.
fn is_weekend(row: &RasterRow) -> bool {
    row.label.starts_with("Sat") || row.label.starts_with("Sun")
}

fn draw_axis(sheet: &Sheet, plane: &Plane<Linear>, frame: Frame, slot_h: f64) {
    let rows = (frame.bottom - frame.top) / ROW;
    let scale = (frame.right - frame.left) / (2.0 * slot_h);
    let page = sheet.page();
    sheet.group(GRID, || {
        for hour in [6.0, 12.0, 18.0] {
            for start in [0.0, slot_h] {
                plane.line([(start + hour, 0.0), (start + hour, rows)]);
            }
        }
        let mut row = 1.0;
        while row < rows {
            plane.line([(0.0, row), (2.0 * slot_h, row)]);
            row += 1.0;
        }
    });
    sheet.group(AXIS, || {
        plane.rectangle((0.0, 0.0), (2.0 * slot_h, rows));
        plane.line([(slot_h, 0.0), (slot_h, rows)]);
    });
    for (start, name) in [(0.0, "the date"), (slot_h, "the next date")] {
        let x = frame.left + (start + 12.0) * scale;
        sheet.group(SOFT, || {
            page.text((x, frame.top - 28.0), name, Lettering::MIDDLE);
        });
        for hour in [0.0, 6.0, 12.0, 18.0] {
            let at = (frame.left + (start + hour) * scale, frame.top - 10.0);
            page.text(at, &format!("{hour:02}"), Lettering::MIDDLE);
        }
    }
    let end = frame.left + (slot_h + 24.0) * scale;
    page.text((end, frame.top - 10.0), "24", Lettering::MIDDLE);
    sheet.group(SOFT, || {
        page.text((4.0, frame.top - 10.0), "hour", Lettering::START);
    });
}

fn draw_labels(sheet: &Sheet, figure: &Raster, top: f64) {
    let page = sheet.page();
    let mut y = top + ROW / 2.0;
    for row in &figure.rows {
        let weekend = is_weekend(row);
        page.text((4.0, y), &row.label, Lettering::START.bold(weekend));
        if let Some(words) = length_words(row) {
            let x = 12.0 + lettering::width(&row.label, 13.0, weekend);
            page.text((x, y), &words, Lettering::START.bold(true));
        }
        y += ROW;
    }
}

/// Each row with its number and the date shown to its right, if the roster holds one.
fn rows_and_next(figure: &Raster) -> impl Iterator<Item = (f64, &RasterRow, Option<&RasterRow>)> {
    let mut number = -1.0;
    let next = figure.rows.iter().skip(1).map(Some).chain([None]);
    figure.rows.iter().zip(next).map(move |(row, next)| {
        number += 1.0;
        (number + 0.5, row, next)
    })
}

/// Crosses out hours that a day does not have, and the half row after the last date.
fn draw_void(sheet: &Sheet, plane: &Plane<Linear>, figure: &Raster, slot_h: f64) {
    sheet.group(VOID, || {
        for (middle, row, next) in rows_and_next(figure) {
            let next_h = next.map_or(0.0, |day| day.day_h);
            for (start, day_h) in [(0.0, row.day_h), (slot_h, next_h)] {
                if day_h < slot_h - NEAR_H {
                    let (from, to) = (start + day_h.max(0.0), start + slot_h);
                    plane.rectangle((from, middle - 0.5), (to, middle + 0.5));
                }
            }
        }
    });
    let Some(last) = figure.rows.last() else {
        return;
    };
    let words = format!("not shown: after {}", last.label);
    if let Some((middle, ..)) = rows_and_next(figure).last() {
        sheet.group(HALO, || {
            plane.text((slot_h * 1.5, middle), &words, Lettering::MIDDLE);
        });
    }
}

fn draw_days(sheet: &Sheet, plane: &Plane<Linear>, figure: &Raster, slot_h: f64) {
    let layer = |class, half, spans: fn(&RasterRow) -> &[Span]| {
        sheet.group(class, || {
            for (middle, row, next) in rows_and_next(figure) {
                let right = next.map_or(&[][..], spans);
                for span in side_by_side((row, spans(row)), right, slot_h) {
                    plane.rectangle((span.from_h, middle - half), (span.to_h, middle + half));
                }
            }
        });
    };
    layer(SLEEP, BOX, |row| &row.sleep);
    layer(DUTY, BOX, |row| &row.work);
    layer(NIGHT, OUTLINE, |row| &row.biological_night);
}

/// The spans of two days on the axis of their row; what goes on over midnight is one span again.
fn side_by_side((row, left): (&RasterRow, &[Span]), right: &[Span], slot_h: f64) -> Vec<Span> {
    let mut spans: Vec<Span> = left.iter().copied().filter(is_drawable).collect();
    for span in right.iter().filter(|span| is_drawable(span)) {
        let goes_on = span.from_h <= NEAR_H && row.day_h >= slot_h - NEAR_H;
        let before = spans
            .iter_mut()
            .find(|before| goes_on && (before.to_h - row.day_h).abs() <= NEAR_H);
        match before {
            Some(before) => before.to_h = slot_h + span.to_h,
            None => spans.push(Span {
                from_h: slot_h + span.from_h,
                to_h: slot_h + span.to_h,
            }),
        }
    }
    spans
}

fn is_drawable(span: &Span) -> bool {
    span.from_h.is_finite() && span.to_h.is_finite() && span.from_h < span.to_h
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(label: &str, day_h: f64, work: &[(f64, f64)]) -> RasterRow {
        let work = work.iter().map(|(from_h, to_h)| Span {
            from_h: *from_h,
            to_h: *to_h,
        });
        RasterRow {
            label: label.to_owned(),
            day_h,
            work: work.collect(),
            sleep: Vec::new(),
            biological_night: Vec::new(),
        }
    }

    fn raster(rows: Vec<RasterRow>) -> String {
        let figure = Raster {
            title: "t".to_owned(),
            description: "d".to_owned(),
            rows,
        };
        draw(&figure, "raster")
    }

    #[track_caller]
    fn joined(day_h: f64, slot_h: f64, expected: &[(f64, f64)]) {
        let night = row("Sat", day_h, &[(20.0, day_h)]);
        let after = row("Sun", 24.0, &[(0.0, 8.0)]);
        let spans = side_by_side((&night, &night.work), &after.work, slot_h);
        let spans: Vec<_> = spans.iter().map(|span| (span.from_h, span.to_h)).collect();
        assert_eq!(spans, expected);
    }

    #[test]
    fn a_night_duty_is_one_box_over_midnight() {
        joined(24.0, 24.0, &[(20.0, 32.0)]);
    }

    #[test]
    fn a_night_duty_is_parted_where_an_hour_is_crossed_out() {
        joined(23.0, 24.0, &[(20.0, 23.0), (24.0, 32.0)]);
        joined(24.0, 25.0, &[(20.0, 24.0), (25.0, 33.0)]);
        joined(25.0, 25.0, &[(20.0, 33.0)]);
    }

    #[test]
    fn every_date_but_the_first_appears_twice() {
        let figure = Raster {
            title: String::new(),
            description: String::new(),
            rows: ["a", "b", "c"].map(|label| row(label, 24.0, &[])).to_vec(),
        };
        let pairs: Vec<_> = rows_and_next(&figure)
            .map(|(middle, row, next)| (middle, row.label.as_str(), next.map(|n| n.label.as_str())))
            .collect();
        assert_eq!(
            pairs,
            [
                (0.5, "a", Some("b")),
                (1.5, "b", Some("c")),
                (2.5, "c", None)
            ]
        );
    }

    #[test]
    fn a_day_with_a_clock_change_is_told_in_words() {
        let plain = raster(vec![row("Sat 28 Mar", 24.0, &[])]);
        assert!(!plain.contains("h day"), "{plain}");
        let short = raster(vec![
            row("Sat 28 Mar", 24.0, &[]),
            row("Sun 29 Mar", 23.0, &[]),
        ]);
        assert!(
            short.contains(">23 h day</text>") && short.contains("1 h ahead"),
            "{short}"
        );
        let long = raster(vec![
            row("Sun 25 Oct", 25.0, &[]),
            row("Mon 26 Oct", 24.0, &[]),
        ]);
        assert!(
            long.contains(">25 h day</text>") && long.contains("1 h behind"),
            "{long}"
        );
    }

    #[test]
    fn the_half_row_after_the_last_date_is_not_left_blank() {
        let svg = raster(vec![row("Sat 28 Mar", 24.0, &[])]);
        assert!(svg.contains("not shown: after Sat 28 Mar"), "{svg}");
        assert!(svg.contains("<g class=\"void\"><path"), "{svg}");
    }

    #[test]
    fn no_rows_and_spans_that_are_no_numbers_do_not_stop_the_drawing() {
        raster(Vec::new());
        let svg = raster(vec![row("Mon", 24.0, &[(f64::NAN, 3.0), (5.0, 4.0)])]);
        assert!(svg.contains("<g class=\"duty\"></g>"), "{svg}");
    }
}
