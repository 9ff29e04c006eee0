//! Recovery strip: one bar per window, from the first at the top to the last at the bottom.

use crate::render::chart::palette::{
    AXIS, BREAK, COMPRESSED, GRID, HALO, LIMIT, NARROW, NOT_JUDGED, PAPER, SOFT, UNMARKED,
};
use crate::render::chart::{Heading, Key, Sample, WIDTH};
use crate::render::svg::sheet::{Frame, Lettering, Linear, Plane, Sheet};
use crate::render::svg::{Caption, Look, lettering};
use crate::report::figure::{BarLook, LimitLine, RecoveryStrip, WindowBar};

/// Bars are cut here, the same in every figure, so that the strips of two workers can be laid side by side.
const CUT_H: f64 = 72.0;

/// Where the break mark of a cut bar stands.
const BREAK_H: f64 = 69.0;

const ROW: f64 = 21.0;
const BAR: f64 = 7.0;
const LETTER_X: f64 = 138.0;
const LEFT: f64 = 150.0;
const RIGHT: f64 = 632.0;
const LIMIT_LINE: f64 = 15.0;
const FLAG_GAP: f64 = 4.0;

/// Draws the figure.
pub(super) fn draw(figure: &RecoveryStrip, id: &str) -> String {
    let heading = Heading::new(&figure.title);
    let key = key(figure);
    let limits = limit_flags(&figure.limits);
    let highest = limits.iter().map(|flag| flag.level).max().unwrap_or(0);
    let top = heading.height() + f64::from(highest) * LIMIT_LINE + 20.0;
    let rows: f64 = figure.bars.iter().map(|_| ROW).sum();
    let bottom = top + rows.max(ROW);
    let sheet = Sheet::new(WIDTH, bottom + 46.0 + key.height());
    let page = sheet.page();
    heading.draw(&page);
    let frame = Frame {
        left: LEFT,
        top,
        right: RIGHT,
        bottom,
    };
    let plane = sheet.plane(0.0..CUT_H, top..bottom, frame);
    draw_axis(&sheet, &plane, frame);
    if figure.bars.is_empty() {
        page.text(
            (LEFT + 8.0, top + ROW / 2.0),
            "no window in this roster",
            Lettering::START,
        );
    }
    draw_bars(&sheet, &plane, figure, top);
    draw_limits(&sheet, &limits, frame);
    draw_words(&sheet, figure, top);
    key.draw(&sheet, bottom + 42.0);
    sheet.finish(Caption {
        id,
        title: &figure.title,
        description: &figure.description,
    })
}

/// The look of a bar and the letter beside it.
fn look(look: BarLook) -> (Look, &'static str) {
    match look {
        BarLook::Compressed => (COMPRESSED, "C"),
        BarLook::Narrow => (NARROW, "N"),
        BarLook::Unmarked => (UNMARKED, ""),
        BarLook::NotJudged => (NOT_JUDGED, "?"),
    }
}

/// Only looks that occur are explained, apart from the three that every reader should know of.
fn key(figure: &RecoveryStrip) -> Key {
    let mut entries = vec![
        (Sample::Area(COMPRESSED), "C compressed"),
        (Sample::Area(NARROW), "N narrow"),
        (Sample::Area(UNMARKED), "no letter: no criterion met"),
    ];
    if figure.bars.iter().any(|bar| bar.look == BarLook::NotJudged) {
        entries.push((Sample::Area(NOT_JUDGED), "? not judged"));
    }
    if figure.bars.iter().any(is_cut) {
        entries.push((Sample::Words, "// bar cut at 72 h"));
    }
    if !figure.limits.is_empty() {
        entries.push((Sample::Upright(LIMIT), "limit, named at its top"));
    }
    Key::new(entries)
}

/// Whether the bar is longer than the scale.
fn is_cut(bar: &WindowBar) -> bool {
    bar.hours.is_finite() && bar.hours > CUT_H
}

/// Length of the bar as drawn, hours.
fn drawn_length(bar: &WindowBar) -> f64 {
    if bar.hours.is_finite() {
        bar.hours.clamp(0.0, CUT_H)
    } else {
        0.0
    }
}

/// Hours to the minute at least: 10 h 59 min must not read as 11 h beside the limit that it misses.
fn measured(bar: &WindowBar) -> String {
    if !bar.hours.is_finite() {
        return "length not known".to_owned();
    }
    let text = format!("{:.2}", bar.hours);
    let text = text.trim_end_matches('0').trim_end_matches('.');
    format!("{text} h")
}

fn draw_axis(sheet: &Sheet, plane: &Plane<Linear>, frame: Frame) {
    let page = sheet.page();
    let ticks = [0.0, 12.0, 24.0, 36.0, 48.0, 60.0, 72.0];
    sheet.group(GRID, || {
        for tick in ticks {
            plane.line([(tick, frame.top), (tick, frame.bottom)]);
        }
    });
    sheet.group(AXIS, || {
        plane.line([(0.0, frame.top), (0.0, frame.bottom), (CUT_H, frame.bottom)]);
    });
    let scale = (frame.right - frame.left) / CUT_H;
    for tick in ticks {
        let at = (frame.left + tick * scale, frame.bottom + 11.0);
        page.text(at, &format!("{tick}"), Lettering::MIDDLE);
    }
    let middle = f64::midpoint(frame.left, frame.right);
    page.text(
        (middle, frame.bottom + 27.0),
        "length of the window, elapsed hours",
        Lettering::MIDDLE,
    );
}

fn draw_bars(sheet: &Sheet, plane: &Plane<Linear>, figure: &RecoveryStrip, top: f64) {
    let mut y = top + ROW / 2.0;
    for bar in &figure.bars {
        let length = drawn_length(bar);
        let (look, _) = look(bar.look);
        if length > 0.0 {
            sheet.group(look, || plane.rectangle((0.0, y - BAR), (length, y + BAR)));
        }
        if is_cut(bar) {
            draw_break(sheet, plane, y);
        }
        y += ROW;
    }
}

/// A slanted gap with a stroke on either side: the bar goes on beyond the scale.
fn draw_break(sheet: &Sheet, plane: &Plane<Linear>, y: f64) {
    let (lean, half, over) = (0.5, 0.45, 2.0);
    let edge = |side: f64| {
        [
            (BREAK_H + side * half - lean, y + BAR + over),
            (BREAK_H + side * half + lean, y - BAR - over),
        ]
    };
    let (near, far) = (edge(-1.0), edge(1.0));
    sheet.group(PAPER, || plane.polygon([near[0], near[1], far[1], far[0]]));
    sheet.group(BREAK, || {
        plane.line(near);
        plane.line(far);
    });
}

/// A limit with its place above the bars.
struct LimitFlag<'a> {
    x: f64,
    level: u8,
    text: &'a str,
}

/// The label of a limit stands like a flag to the right of the top of its line.
///
/// A flag rises above all limits that stand under it, so no line runs through a label.
fn limit_flags(limits: &[LimitLine]) -> Vec<LimitFlag<'_>> {
    let scale = (RIGHT - LEFT) / CUT_H;
    let mut flags: Vec<LimitFlag<'_>> = Vec::new();
    let shown = limits
        .iter()
        .filter(|limit| (0.0..=CUT_H).contains(&limit.hours));
    for limit in shown.rev() {
        let x = LEFT + limit.hours * scale;
        let end = x + FLAG_GAP + lettering::width(&limit.label, 13.0, false) + 4.0;
        let under = flags.iter().filter(|flag| flag.x < end);
        let level = under
            .map(|flag| flag.level.saturating_add(1))
            .max()
            .unwrap_or(0);
        flags.push(LimitFlag {
            x,
            level,
            text: &limit.label,
        });
    }
    flags
}

fn draw_limits(sheet: &Sheet, flags: &[LimitFlag<'_>], frame: Frame) {
    let page = sheet.page();
    let flag_y = |flag: &LimitFlag<'_>| frame.top - 10.0 - f64::from(flag.level) * LIMIT_LINE;
    sheet.group(LIMIT, || {
        for flag in flags {
            page.line([(flag.x, flag_y(flag) - 6.0), (flag.x, frame.bottom)]);
        }
    });
    for flag in flags {
        page.text(
            (flag.x + FLAG_GAP, flag_y(flag)),
            flag.text,
            Lettering::START,
        );
    }
}

fn draw_words(sheet: &Sheet, figure: &RecoveryStrip, top: f64) {
    let page = sheet.page();
    let scale = (RIGHT - LEFT) / CUT_H;
    let heads = top - 10.0;
    sheet.group(SOFT, || {
        page.text((4.0, heads), "window begins", Lettering::START);
    });
    let mut y = top + ROW / 2.0;
    for bar in &figure.bars {
        page.text((4.0, y), &bar.start, Lettering::START);
        let (_, letter) = look(bar.look);
        page.text((LETTER_X, y), letter, Lettering::MIDDLE.bold(true));
        y += ROW;
    }
    sheet.group(HALO, || {
        let mut y = top + ROW / 2.0;
        for bar in &figure.bars {
            let length = drawn_length(bar);
            page.text(
                (LEFT + length * scale + 6.0, y),
                &measured(bar),
                Lettering::START,
            );
            y += ROW;
        }
    });
}

#[cfg(test)]
mod tests {
    use super::*;

    fn strip(bars: &[(f64, BarLook)]) -> String {
        let bars = bars.iter().map(|(hours, look)| WindowBar {
            start: "Tue 10 Mar 21:30".to_owned(),
            hours: *hours,
            look: *look,
        });
        let limits = [11.0, 12.0, 14.0, 46.0, 80.0].map(|hours| LimitLine {
            hours,
            label: format!("{hours} h"),
        });
        let figure = RecoveryStrip {
            title: "Recovery <&\" windows".to_owned(),
            description: "d".to_owned(),
            bars: bars.collect(),
            limits: limits.to_vec(),
        };
        draw(&figure, "strip")
    }

    fn bars_of(svg: &str, look: Look) -> usize {
        svg.matches(&format!("<g class=\"{}\"><path", look.class))
            .count()
    }

    #[test]
    fn only_a_bar_longer_than_the_scale_has_a_break_mark() {
        for (hours, marks) in [(72.0, 0), (72.1, 1), (110.0, 1), (f64::INFINITY, 0)] {
            let svg = strip(&[(hours, BarLook::Unmarked)]);
            assert_eq!(bars_of(&svg, BREAK), marks, "{hours}");
            assert_eq!(svg.contains("bar cut at 72 h"), marks > 0, "{hours}");
        }
        assert!(strip(&[(110.0, BarLook::Unmarked)]).contains(">110 h</text>"));
    }

    #[test]
    fn a_window_not_judged_is_never_drawn_as_unmarked() {
        let svg = strip(&[(30.0, BarLook::NotJudged)]);
        // The one pale box and one of the two dashed boxes are samples of the key.
        assert_eq!(bars_of(&svg, UNMARKED), 1);
        assert_eq!(bars_of(&svg, NOT_JUDGED), 2);
        assert!(svg.contains(">?</text>"), "{svg}");
    }

    #[test]
    fn each_class_has_its_own_letter() {
        let looks = [
            BarLook::Compressed,
            BarLook::Narrow,
            BarLook::Unmarked,
            BarLook::NotJudged,
        ];
        assert_eq!(looks.map(|l| look(l).1), ["C", "N", "", "?"]);
    }

    #[test]
    fn a_window_one_minute_short_of_a_limit_does_not_read_as_the_limit() {
        let bar = |hours| {
            measured(&WindowBar {
                start: String::new(),
                hours,
                look: BarLook::Compressed,
            })
        };
        assert_eq!(bar(10.0 + 59.0 / 60.0), "10.98 h");
        assert_eq!(bar(11.0), "11 h");
        assert_eq!(bar(100.0), "100 h");
        assert_eq!(bar(10.5), "10.5 h");
        assert_eq!(bar(f64::NAN), "length not known");
    }

    #[test]
    fn labels_of_near_limits_stand_above_each_other_and_limits_off_the_scale_are_left_out() {
        let limits = [11.0, 12.0, 14.0, 16.0, 46.0, 48.0, 90.0].map(|hours| LimitLine {
            hours,
            label: format!("{hours} h"),
        });
        let flags = limit_flags(&limits);
        let levels: Vec<_> = flags.iter().map(|flag| (flag.text, flag.level)).collect();
        let expected = [
            ("48 h", 0),
            ("46 h", 1),
            ("16 h", 0),
            ("14 h", 1),
            ("12 h", 2),
            ("11 h", 3),
        ];
        assert_eq!(levels, expected);
    }

    #[test]
    fn a_figure_without_windows_says_so() {
        assert!(strip(&[]).contains("no window in this roster"));
    }

    #[test]
    fn the_title_is_escaped_wherever_it_stands() {
        let svg = strip(&[(f64::NAN, BarLook::NotJudged)]);
        assert_eq!(
            svg.matches("Recovery &lt;&amp;&quot; windows").count(),
            2,
            "{svg}"
        );
    }
}
