//! Modelled physiology: the generic adult on each line, or each worker for clinicians.

use super::{chart, figure};
use crate::report::Audience;
use crate::report::document::{BandValue, DayRow, LineSection, ScreenReport};
use maud::{Markup, html};

pub(super) fn heading(report: &ScreenReport) -> &'static str {
    match report.audience {
        Audience::Planner => "Duty lines: the generic adult",
        Audience::Clinician => "Modelled physiology by worker",
    }
}

pub(super) fn section(report: &ScreenReport) -> Markup {
    html! {
        section id="physiology" aria-labelledby="physiology-title" {
            h2 id="physiology-title" { (heading(report)) }
            p {
                @match report.audience {
                    Audience::Planner => "Sleep, phase and cortisol of one generic adult with default habits, placed on each duty line. These are not estimates of the people who work the lines.",
                    Audience::Clinician => "Sleep, phase and cortisol of an adult with default habits on each worker's roster. Attributes, diaries and samples were not used.",
                }
                " Every number is a median with the 5-95 % range of the members. "
                (report.provenance.members) " members; morning daylight: " (report.provenance.morning_daylight) "."
            }
            @for (index, line) in report.lines.iter().enumerate() { (line_part(line, index)) }
        }
    }
}

fn line_part(line: &LineSection, index: usize) -> Markup {
    html! {
        article {
            h3 id={ "line-" (index) } { (line.id) ": " (line.subject) }
            @if line.subject == "generic adult" {
                p class="lead" { "Worked by: " (line.workers.join(", ")) "." }
            }
            @if line.shifts.is_empty() {
                p { "No counted duty." }
            } @else {
                (figure(&chart::raster(&line.raster, &format!("raster-{index}"))))
                (figure(&chart::cortisol_curve(&line.curve, &format!("cortisol-{index}"))))
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
            caption { "Sleep in the windows of " (line.id) ", " (line.subject) }
            thead { tr {
                th scope="col" { "From" }
                th scope="col" class="number" { "Hours" }
                th scope="col" class="number" { "Main sleep, h" }
                th scope="col" class="number" { "All sleep, h" }
                th scope="col" class="number" { "k24" }
                th scope="col" class="number" { "k48" }
                th scope="col" { "Sleep before next duty" }
                th scope="col" class="number" { "Sleep against habitual phase, h" }
                th scope="col" { "CBTmin at next duty" }
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
                    td class="number" { (band(window.phase_displacement_h, 1)) }
                    td { (shift_words(window.cbtmin_displacement_h)) }
                    td class="number" { (band(window.quiescent_awake_excess_h, 1)) }
                }
            } }
        } }
    }
}

fn shifts_table(line: &LineSection) -> Markup {
    html! {
        div class="scroll" tabindex="0" { table {
            caption { "Around the duties of " (line.id) ", " (line.subject) }
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
                    th scope="row" { (shift.start) }
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
            caption { "Days of " (line.id) ", " (line.subject) ": phase, sleep that ends on the date, total serum cortisol" }
            thead { tr {
                th scope="col" { "Date" }
                th scope="col" { "CBTmin" }
                th scope="col" { "DLMO" }
                th scope="col" class="number" { "Sleep, h" }
                th scope="col" class="number" { "MESOR, nmol/L" }
                th scope="col" class="number" { "Amplitude, nmol/L" }
                th scope="col" class="number" { "Against habitual day" }
                th scope="col" { "Acrophase" }
                th scope="col" { "Peak, nmol/L" }
                th scope="col" { "Nadir, nmol/L" }
                th scope="col" { "Quiescent" }
            } }
            tbody { @for day in &line.days { (day_row(day)) } }
        } }
        p class="source" { "Acrophase is the clock hour of the fitted 24-h cosine; it depends on sleep timing and is no phase marker in shift work. CBTmin: none, one or two may fall on a date while the clock moves." }
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
            td { (clock(day.acrophase_h)) }
            td { (band(day.peak, 0)) " at " (clock(day.peak_time)) }
            td { (band(day.nadir, 0)) " at " (clock(day.nadir_time)) }
            td { (clock(day.quiescent_start)) " to " (clock(day.quiescent_end)) }
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

/// `7.1 (6.0-7.9)`.
fn band(value: BandValue, decimals: usize) -> String {
    format!(
        "{:.decimals$} ({:.decimals$} to {:.decimals$})",
        value.median, value.p05, value.p95
    )
}

/// `03:32 (02:10 to 05:01)`.
fn clock(value: BandValue) -> String {
    let text = |hour: f64| crate::units::ClockHour::wrapping(hour).to_string();
    format!(
        "{} ({} to {})",
        text(value.median),
        text(value.p05),
        text(value.p95)
    )
}

/// A displacement in words: positive is earlier.
fn shift_words(value: BandValue) -> String {
    let word = |hours: f64| {
        let side = if hours < 0.0 { "later" } else { "earlier" };
        format!("{:.1} h {side}", hours.abs())
    };
    format!(
        "{} ({} to {})",
        word(value.median),
        word(value.p05),
        word(value.p95)
    )
}
