//! Modelled physiology: the generic adult on each line, or each worker for clinicians.

use super::{chart, figure};
use crate::report::Audience;
use crate::report::document::{BandValue, CasedBand, DayRow, LineSection, ScreenReport};
use maud::{Markup, html};

pub(super) fn heading(report: &ScreenReport) -> &'static str {
    match report.audience {
        Audience::Planner => "Duty lines: the generic adult",
        Audience::Clinician => "Modelled physiology by roster",
    }
}

pub(super) fn section(report: &ScreenReport) -> Markup {
    html! {
        section id="physiology" aria-labelledby="physiology-title" {
            h2 id="physiology-title" { (heading(report)) }
            p {
                @match report.audience {
                    Audience::Planner => "Sleep, phase and cortisol of one generic adult with default habits, placed on each duty line. These are not estimates of the people who work the lines; where a line is worked by one person, do not attach these numbers to that person.",
                    Audience::Clinician => "Sleep, phase and cortisol of an average adult with default habits on each worker's roster. The worker's own habits, illness and medicines were not used.",
                }
                " Every number is a median with the 5-95 % range of " (report.provenance.members)
                " simulated adults; morning daylight: " (report.provenance.morning_daylight) "."
            }
            (glossary())
            @for (index, line) in report.lines.iter().enumerate() { (line_part(line, index)) }
        }
    }
}

fn glossary() -> Markup {
    const TERMS: [(&str, &str); 6] = [
        (
            "CBTmin",
            "the hour at which core body temperature is lowest, the usual marker of the body clock; in day-living people 2 to 4 h before waking",
        ),
        (
            "DLMO",
            "the evening rise of melatonin, here CBTmin minus 7 h, with about 1 h of spread that is not modelled",
        ),
        ("biological night", "from DLMO to 10 h later"),
        (
            "MESOR, amplitude, acrophase",
            "mean, height and clock hour of the peak of the 24-h cosine fitted to the modelled cortisol; the acrophase follows sleep and is no marker of the clock in shift work",
        ),
        (
            "quiescent interval",
            "the unbroken hours around the nadir with modelled cortisol below 60 % of the day's mean; in the model it begins too early and lasts too long against most measured groups",
        ),
        (
            "modelled cortisol",
            "the spread of a modelled group mean, in nmol/L of total serum cortisol: do not compare a laboratory value with it",
        ),
    ];
    html! {
        dl class="glossary" {
            @for (term, meaning) in TERMS { div { dt { (term) } dd { (meaning) } } }
        }
    }
}

fn line_part(line: &LineSection, index: usize) -> Markup {
    html! {
        article {
            h3 id={ "line-" (index) } {
                @if line.subject == "generic adult" { (line.id) ": generic adult" }
                @else { "Average adult on the roster of " (line.id) }
            }
            @if line.shifts.is_empty() {
                p { "No counted duty." }
            } @else {
                (figure(&chart::raster(&line.raster, &format!("raster-{index}"))))
                (figure(&chart::cortisol_curve(&line.curve, &format!("cortisol-{index}"))))
                p class="source" {
                    "The band is the spread of a modelled group mean: do not compare a laboratory value with it. The drawn median is lower than the median of the members' own peaks in the table, because they peak at different times."
                }
                (figure(&chart::phase_clock(&line.clock, &format!("clock-{index}"))))
                h4 { "Evidence beside the classes (no effect on them)" }
                ul { @for sentence in &line.evidence { li { (sentence) } } }
                details { summary { "Table of windows" } (windows_table(line)) }
                details { summary { "Table of duties" } (shifts_table(line)) }
                details { summary { "Table of days" } (days_table(line)) }
            }
        }
    }
}

fn windows_table(line: &LineSection) -> Markup {
    html! {
        div class="scroll" tabindex="0" { table {
            caption { "Sleep in the windows, " (line.id) }
            thead { tr {
                th scope="col" { "From" }
                th scope="col" class="number" { "Hours" }
                th scope="col" class="number" { "Main sleep, h" }
                th scope="col" class="number" { "All sleep, h" }
                th scope="col" class="number" { "k24: share under 5 h in the last 24 h" }
                th scope="col" class="number" { "k48: share under 12 h in the last 48 h" }
                th scope="col" { "Sleep before next duty" }
                th scope="col" { "Last main sleep against habitual body-clock time" }
                th scope="col" { "CBTmin at next duty against habitual" }
                th scope="col" class="number" { "Awake in quiescent interval beyond habit, h" }
            } }
            tbody { @for window in &line.windows {
                tr {
                    th scope="row" { (window.start_text) }
                    td class="number" { (format!("{:.2}", window.hours)) }
                    td class="number" { (band(window.main_sleep_h, 1)) }
                    td class="number" { (band(window.total_sleep_h, 1)) }
                    td class="number" { (window.k24) }
                    td class="number" { (window.k48) }
                    td { (window.sleep_test) @if window.history_assumed { " (history: assumed)" } }
                    td {
                        @match window.phase_displacement_h {
                            // Positive: later in the body's night.
                            Some(value) => (shift_band(value, -1.0)),
                            None => "no sleep in 24 h",
                        }
                    }
                    td {
                        @match &window.phase_ill_defined {
                            Some(range) => (range),
                            None => (cased(&window.cbtmin_displacement_h, |value| shift_band(value, 1.0))),
                        }
                    }
                    td class="number" { (band(window.quiescent_awake_excess_h, 1)) }
                }
            } }
        } }
    }
}

fn shifts_table(line: &LineSection) -> Markup {
    html! {
        div class="scroll" tabindex="0" { table {
            caption { "Around the duties, " (line.id) }
            thead { tr {
                th scope="col" { "Start" }
                th scope="col" class="number" { "Sleep in 24 h before, h" }
                th scope="col" class="number" { "Sleep in 48 h before, h" }
                th scope="col" class="number" { "Awake at start, h" }
                th scope="col" class="number" { "Awake at end, h" }
                th scope="col" class="number" { "Duty in quiescent interval, h" }
            } }
            tbody { @for shift in &line.shifts {
                tr {
                    th scope="row" { (shift.start_text) }
                    td class="number" { (band(shift.sleep_prior_24h, 1)) }
                    td class="number" { (band(shift.sleep_prior_48h, 1)) }
                    td class="number" { (band(shift.awake_at_start_h, 1)) }
                    td class="number" { (band(shift.awake_at_end_h, 1)) }
                    td class="number" { (band(shift.quiescent_duty_h, 1)) }
                }
            } }
        } }
    }
}

fn days_table(line: &LineSection) -> Markup {
    html! {
        div class="scroll" tabindex="0" { table {
            caption { "Days, " (line.id) ": phase, sleep that ends on the date, total serum cortisol, nadir of the night that leads into the date" }
            thead { tr {
                th scope="col" { "Date" }
                th scope="col" { "CBTmin" }
                th scope="col" { "DLMO" }
                th scope="col" class="number" { "Sleep, h" }
                th scope="col" class="number" { "MESOR, nmol/L" }
                th scope="col" class="number" { "Amplitude, nmol/L" }
                th scope="col" class="number" { "Amplitude over habitual day" }
                th scope="col" { "Acrophase" }
                th scope="col" { "Peak, nmol/L" }
                th scope="col" { "Nadir, nmol/L" }
                th scope="col" { "Quiescent" }
            } }
            tbody { @for day in &line.days { (day_row(day)) } }
        } }
        p class="source" { "CBTmin: none, one or two may fall on a date while the clock moves." }
    }
}

fn day_row(day: &DayRow) -> Markup {
    html! {
        tr {
            th scope="row" { (day.date) }
            td { (markers(&day.cbtmin)) }
            td { (markers(&day.dlmo)) }
            td class="number" { (band(day.sleep_h, 1)) }
            td class="number" { (band(day.mesor, 0)) }
            td class="number" { (band(day.amplitude, 0)) }
            td class="number" { (band(day.amplitude_ratio, 2)) }
            td { (cased(&day.acrophase_h, clock)) }
            td { (band(day.peak, 0)) " at " (cased(&day.peak_time, clock)) }
            td { (band(day.nadir, 0)) " at " (cased(&day.nadir_time, clock)) }
            td { (cased(&day.quiescent_start, clock)) " to " (cased(&day.quiescent_end, clock)) }
        }
    }
}

fn markers(list: &[(BandValue, Option<&'static str>)]) -> Markup {
    html! {
        @if list.is_empty() { "none on this date" }
        @for (index, (value, case)) in list.iter().enumerate() {
            @if index > 0 { "; " }
            (clock(*value))
            @if let Some(case) = case { " " (case) }
        }
    }
}

/// One entry, or one per daylight case.
fn cased(value: &CasedBand, text: impl Fn(BandValue) -> Markup) -> Markup {
    html! {
        @for (index, (entry, case)) in value.entries().into_iter().enumerate() {
            @if index > 0 { "; " }
            (text(entry))
            @if let Some(case) = case { " " (case) }
        }
    }
}

/// A median with its band in a smaller hand below it.
fn banded(median: &str, low: &str, high: &str) -> Markup {
    html! { (median) " " span class="band" { "(" (low) " to " (high) ")" } }
}

fn band(value: BandValue, decimals: usize) -> Markup {
    let text = |number: f64| format!("{number:.decimals$}");
    banded(&text(value.median), &text(value.p05), &text(value.p95))
}

/// Clock hours: `03:32 (02:10 to 05:01)`.
fn clock(value: BandValue) -> Markup {
    let text = |hour: f64| crate::units::ClockHour::wrapping(hour).to_string();
    banded(&text(value.median), &text(value.p05), &text(value.p95))
}

/// A displacement in words; `sign` 1 when positive is earlier, -1 when positive is later.
fn shift_band(value: BandValue, sign: f64) -> Markup {
    let text = |hours: f64| {
        let earlier = sign * hours;
        let side = if earlier < 0.0 { "later" } else { "earlier" };
        format!("{:.1} h {side}", earlier.abs())
    };
    banded(&text(value.median), &text(value.p05), &text(value.p95))
}
