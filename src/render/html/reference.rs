//! Input, methods, sources, cautions and provenance.

use crate::report::document::{PackRow, ScreenReport};
use maud::{Markup, html};

pub(super) fn section(report: &ScreenReport) -> Markup {
    html! {
        (input(report))
        (methods(report))
        (cautions(report))
        (provenance(report))
    }
}

fn input(report: &ScreenReport) -> Markup {
    html! {
        section id="input" aria-labelledby="input-title" {
            h2 id="input-title" { "Input: what was wrong or assumed" }
            p { (report.diagnostic_counts) "." }
            @if !report.diagnostics.is_empty() {
                div class="scroll" tabindex="0" { table {
                    caption { "Diagnostics" }
                    thead { tr {
                        th scope="col" { "Level" } th scope="col" { "Code" } th scope="col" { "Place" } th scope="col" { "What" }
                    } }
                    tbody { @for row in &report.diagnostics {
                        tr {
                            td { (row.level) }
                            td { (row.id) " " (row.code) }
                            th scope="row" { (row.location) }
                            td { (row.message) }
                        }
                    } }
                } }
            }
        }
    }
}

fn methods(report: &ScreenReport) -> Markup {
    html! {
        section id="methods" aria-labelledby="methods-title" {
            h2 id="methods-title" { "Methods and sources" }
            dl {
                @for row in &report.methods {
                    dt { strong { (row.title) } }
                    dd { p { (row.text) } }
                }
            }
            h3 { "Rule packs" }
            @for pack in &report.packs { (pack_part(pack)) }
            details {
                summary { "Every number used, with unit and source (" (report.numbers.len()) ")" }
                div class="scroll" tabindex="0" { table {
                    caption { "Numbers" }
                    thead { tr {
                        th scope="col" { "Set" } th scope="col" { "Key" } th scope="col" class="number" { "Value" } th scope="col" { "Unit" } th scope="col" { "Source" }
                    } }
                    tbody { @for row in &report.numbers {
                        tr {
                            td { (row.set) }
                            th scope="row" { (row.key) }
                            td class="number" { (row.value) }
                            td { (row.unit) }
                            td { (row.source) }
                        }
                    } }
                } }
            }
        }
    }
}

fn pack_part(pack: &PackRow) -> Markup {
    html! {
        h4 { (pack.name) ": " (pack.title) }
        p { (pack.reading) ". As seen: " (pack.as_seen) ". " (pack.night) "." }
        @if !pack.left_out.is_empty() {
            p { "Not measured by this version, so not judged: " (pack.left_out.join(", ")) "." }
        }
        details {
            summary { "Rules of " (pack.name) }
            div class="scroll" tabindex="0" { table {
                caption { "Rules of " (pack.name) }
                thead { tr {
                    th scope="col" { "Rule" } th scope="col" { "What it asks" } th scope="col" { "Whom it concerns" }
                    th scope="col" { "Derogations it knows" } th scope="col" { "Source" }
                } }
                tbody { @for rule in &pack.rules {
                    tr {
                        th scope="row" { (rule.id) }
                        td { (rule.asks) }
                        td { (rule.scope) }
                        td { @if rule.derogations.is_empty() { "none" } @else { (rule.derogations) } }
                        td { (rule.source) }
                    }
                } }
            } }
        }
    }
}

fn cautions(report: &ScreenReport) -> Markup {
    html! {
        section id="cautions" aria-labelledby="cautions-title" {
            h2 id="cautions-title" { "Cautions" }
            p { strong { (report.cautions.device) } }
            @for caution in &report.cautions.list {
                h3 { (caution.title) }
                p { (caution.text) }
            }
            h3 { "Data limits of this run" }
            p {
                (report.summary.incomplete_workers) " incomplete workers; dates " (report.provenance.from) " to " (report.provenance.to)
                "; zone " (report.provenance.zone) "; " (report.diagnostic_counts) " in the input."
            }
            p class="source" { "Version of these texts: " (report.cautions.version) "." }
        }
    }
}

fn provenance(report: &ScreenReport) -> Markup {
    let run = &report.provenance;
    let rows = [
        ("program", format!("{} {}", run.tool, run.version)),
        ("time zone database", run.tzdb.clone()),
        ("zone", run.zone.clone()),
        ("dates", format!("{} to {}", run.from, run.to)),
        ("rule packs", run.rules.join(", ")),
        ("audience", report.audience.word().to_owned()),
        ("pacemaker", run.pacemaker.clone()),
        ("members", run.members.to_string()),
        ("seed", run.seed.to_string()),
        ("daylight", run.daylight.clone()),
        ("morning daylight", run.morning_daylight.clone()),
    ];
    html! {
        section id="provenance" aria-labelledby="provenance-title" {
            h2 id="provenance-title" { "Provenance" }
            p { "The same input, options and version give the same report, byte for byte." }
            table {
                caption { "This run" }
                thead { tr { th scope="col" { "What" } th scope="col" { "Value" } } }
                tbody {
                    @for (name, value) in rows { tr { th scope="row" { (name) } td { (value) } } }
                    @for input in &run.inputs {
                        tr { th scope="row" { "SHA-256 of " (input.name) } td { code { (input.sha256) } } }
                    }
                }
            }
        }
    }
}
