//! Workers: measured gaps against the limits, and the facts of the roster.

use super::{chart, class_word, figure};
use crate::report::document::{ScreenReport, WorkerSection};
use crate::report::wording::counted;
use maud::{Markup, html};

pub(super) fn section(report: &ScreenReport) -> Markup {
    html! {
        section id="workers" aria-labelledby="workers-title" {
            h2 id="workers-title" { (report.audience.workers_heading()) }
            p {
                "One bar per recovery window with its measured hours; lines mark 11 h, 16 h and 48 h. Compressed windows bear a C, narrow ones an N, windows that could not be judged a question mark. Unmarked is no statement that a window is enough."
            }
            @for (index, worker) in report.workers.iter().enumerate() {
                (worker_part(worker, index, line_of(report, worker)))
            }
        }
    }
}

fn worker_part(worker: &WorkerSection, index: usize, line: usize) -> Markup {
    html! {
        article {
            h3 id={ "worker-" (index) } {
                (worker.id)
                @if let Some(team) = &worker.team { ", team " (team) }
                ", line " (worker.line)
            }
            p class="lead" { (attention(worker)) " " a href={ "#line-" (line) } { "Modelled physiology of the line" } "." }
            @if worker.incomplete { p { strong { "Incomplete: dates of this worker could not be read." } } }
            @if worker.windows.is_empty() {
                p { "No recovery window: fewer than two duties." }
            } @else {
                (figure(&chart::recovery_strip(&worker.strip, &format!("strip-{index}"))))
                details {
                    summary { "Table of windows and register measures" }
                    (windows_table(worker))
                    (exposure_table(worker))
                }
            }
        }
    }
}

/// Place of the section that holds the physiology of a worker's line.
fn line_of(report: &ScreenReport, worker: &WorkerSection) -> usize {
    let own = report
        .lines
        .iter()
        .position(|line| line.subject == worker.id);
    let shared = || {
        report
            .lines
            .iter()
            .position(|line| line.number == worker.line)
    };
    own.or_else(shared).unwrap_or(0)
}

/// Why a worker stands where it does in the clinician's order, as facts.
fn attention(worker: &WorkerSection) -> String {
    match worker.priority_findings {
        0 => "No priority finding.".to_owned(),
        count => format!("{}.", counted(count, "priority finding")),
    }
}

fn windows_table(worker: &WorkerSection) -> Markup {
    html! {
        div class="scroll" tabindex="0" {
            table {
                caption { "Recovery windows of " (worker.id) }
                thead { tr {
                    th scope="col" { "From" }
                    th scope="col" { "To" }
                    th scope="col" class="number" { "Hours" }
                    th scope="col" { "Between" }
                    th scope="col" { "Class" }
                    th scope="col" { "Why" }
                } }
                tbody { @for window in &worker.windows {
                    tr {
                        th scope="row" { (window.start_text) }
                        td { (window.end_text) }
                        td class="number" { (format!("{:.2}", window.hours)) }
                        td { (window.after) " and " (window.before) }
                        td { (class_word(window.class.word())) }
                        td { (window.reasons.join("; ")) }
                    }
                } }
            }
        }
    }
}

fn exposure_table(worker: &WorkerSection) -> Markup {
    html! {
        table {
            caption { "Register measures of " (worker.id) }
            thead { tr { th scope="col" { "Measure" } th scope="col" class="number" { "Value" } } }
            tbody { @for (_, name, value) in &worker.exposure {
                tr {
                    th scope="row" { (name) }
                    td class="number" {
                        @match value { Some(value) => (value), None => "not known" }
                    }
                }
            } }
        }
    }
}
