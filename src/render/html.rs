//! One self-contained HTML file: no scripts, no reference to anything outside it.

mod lines;
mod reference;
mod workers;

use super::chart;
use crate::report::Audience;
use crate::report::document::{FindingRow, ScreenReport};
use crate::report::wording::counted;
use maud::{DOCTYPE, Markup, PreEscaped, html};
use std::io::{self, Write};

const PAGE_CSS: &str = include_str!("html/page.css");
/// Nothing may be loaded, run or sent.
const POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; img-src 'none'; base-uri 'none'; form-action 'none'";

/// Writes the report.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write(report: &ScreenReport, mut out: impl Write) -> io::Result<()> {
    out.write_all(page(report).into_string().as_bytes())?;
    out.write_all(b"\n")
}

fn page(report: &ScreenReport) -> Markup {
    let provenance = &report.provenance;
    let title = format!("Recovery windows, {} to {}", provenance.from, provenance.to);
    html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta http-equiv="Content-Security-Policy" content=(POLICY);
                meta name="viewport" content="width=device-width, initial-scale=1";
                meta name="referrer" content="no-referrer";
                title { (title) }
                style { (PreEscaped(PAGE_CSS)) (PreEscaped(chart::CHART_CSS)) (PreEscaped(page_footer(report))) }
            }
            body {
                (PreEscaped(chart::pattern_definitions()))
                header { (head(report, &title)) }
                (contents(report))
                main {
                    (summary(report))
                    (findings(report))
                    (workers::section(report))
                    (lines::section(report))
                    (reference::section(report))
                }
                footer {
                    p { (report.cautions.device) }
                    p class="lead" {
                        "Audience: " (report.audience.word()) ". "
                        (provenance.tool) " " (provenance.version) ", time zone database " (provenance.tzdb) "."
                    }
                }
            }
        }
    }
}

/// Every printed page says for whom it is and of which dates.
fn page_footer(report: &ScreenReport) -> String {
    let confidential = match report.audience {
        Audience::Planner => "planner",
        Audience::Clinician => "clinician, confidential",
    };
    format!(
        "@page {{ @bottom-left {{ content: \"acroshift, audience {confidential}, roster {} to {}\"; font-size: 8pt; }} }}",
        report.provenance.from, report.provenance.to
    )
}

fn head(report: &ScreenReport, title: &str) -> Markup {
    let provenance = &report.provenance;
    html! {
        h1 { (title) }
        p class="lead" {
            (counted(report.summary.workers, "worker")) " on " (counted(report.summary.lines, "duty line")) ", "
            (provenance.zone) ". Rules: " (provenance.rules.join(", ")) ". Audience: " (report.audience.word()) "."
        }
    }
}

fn contents(report: &ScreenReport) -> Markup {
    let physiology = lines::heading(report);
    html! {
        nav aria-label="Contents" {
            ul {
                li { a href="#summary" { "Summary" } }
                li { a href="#findings" { "Findings" } }
                li { a href="#workers" { "Workers" } }
                li { a href="#physiology" { (physiology) } }
                li { a href="#input" { "Input" } }
                li { a href="#methods" { "Methods and sources" } }
                li { a href="#cautions" { "Cautions" } }
                li { a href="#provenance" { "Provenance" } }
            }
        }
    }
}

fn summary(report: &ScreenReport) -> Markup {
    let summary = &report.summary;
    let counts = [
        ("windows counted", summary.windows),
        ("compressed", summary.compressed),
        ("narrow", summary.narrow),
        ("unmarked", summary.unmarked),
        ("not judged", summary.not_judged),
        ("findings: priority", summary.priority),
        ("findings: review", summary.review),
        ("findings: note", summary.note),
    ];
    html! {
        section id="summary" aria-labelledby="summary-title" {
            h2 id="summary-title" { "Summary" }
            p class="statement" { (summary.statement) }
            dl class="counts" {
                @for (name, count) in counts {
                    div { dt { (name) } dd { (count) } }
                }
            }
            p class="lead" {
                (counted(summary.shifts, "shift")) ", " (format!("{:.1}", summary.duty_h)) " h. Left out of the counts: "
                (counted(summary.listed, "window")) " over 7 days. In " (counted(summary.assumed, "window"))
                " the model was set aside, because it rests on an assumed history."
            }
            @if summary.incomplete_workers > 0 {
                p { strong {
                    (summary.incomplete_workers) " workers are incomplete: dates could not be read, and the windows that touch them are not judged. Results are partial."
                } }
            }
            (short_cautions(report))
        }
    }
}

fn short_cautions(report: &ScreenReport) -> Markup {
    html! {
        aside class="cautions" aria-label="Cautions" {
            p { strong { (report.cautions.device) } }
            ul {
                @for caution in &report.cautions.list {
                    li { (caution.short) }
                }
            }
        }
    }
}

fn findings(report: &ScreenReport) -> Markup {
    html! {
        section id="findings" aria-labelledby="findings-title" {
            h2 id="findings-title" { "Findings" }
            p {
                "Most urgent first, then by time. Law, advice and model are different kinds: a departure from advice is no breach, and a model estimate is no fact. "
                strong class="word priority" { "priority" } ": look first; "
                strong class="word review" { "review" } ": look next; "
                span class="word note" { "note" } ": for the record."
            }
            div class="scroll" tabindex="0" {
                table class="findings" {
                    caption { "Findings (" (report.findings.len()) ")" }
                    thead { tr {
                        th scope="col" { "Attention" }
                        th scope="col" { "Kind" }
                        th scope="col" { "From" }
                        th scope="col" { "Whom" }
                        th scope="col" { "What" }
                        th scope="col" { "Sources, rows of the input" }
                    } }
                    tbody { @for finding in &report.findings { (finding_row(finding)) } }
                }
            }
        }
    }
}

fn finding_row(finding: &FindingRow) -> Markup {
    let whom = match (&finding.worker, finding.line) {
        (Some(worker), _) => worker.clone(),
        (None, Some(line)) => format!("line {line}"),
        (None, None) => "all".to_owned(),
    };
    html! {
        tr {
            td { span class={ "word " (finding.attention.word()) } { (finding.attention.word()) } }
            td { (finding.kind) }
            td class="when" { (finding.start_text) }
            th scope="row" { (whom) }
            td {
                (unbroken(&finding.message))
                @if let Some((hold, of)) = finding.members {
                    " " span class="source" { "(holds in " (hold) " of " (of) " simulated adults)" }
                }
                @if !finding.places.is_empty() {
                    details { summary { "All " (finding.places.len()) " places" } ul { @for place in &finding.places { li { (unbroken(place)) } } } }
                }
            }
            td class="source" {
                (finding.source) "."
                @if !finding.rows_text.is_empty() { " Input: " (finding.rows_text) "." }
            }
        }
    }
}

/// `9 h 30` must not be broken over two lines.
fn unbroken(text: &str) -> String {
    let words: Vec<&str> = text.split(' ').collect();
    let mut joined = String::new();
    for (index, word) in words.iter().enumerate() {
        if index > 0 {
            let keeps =
                *word == "h" || words[index - 1] == "h" && word.starts_with(char::is_numeric);
            joined.push(if keeps { '\u{a0}' } else { ' ' });
        }
        joined.push_str(word);
    }
    joined
}

/// A word for a class of window, with a look of its own that does not rest on colour.
fn class_word(word: &str) -> Markup {
    html! { span class={ "word " (word) } { (word.replace('-', " ")) } }
}

/// A figure in a frame that scrolls on narrow screens.
fn figure(svg: &str) -> Markup {
    html! { div class="figure acro-scroll" tabindex="0" { (PreEscaped(svg)) } }
}
