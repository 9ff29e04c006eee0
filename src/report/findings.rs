//! Findings as rows, for one audience.

use super::document::{FindingRow, hours};
use super::{Audience, ReportInput, wording, workers};
use crate::assessment::{Finding, FindingKind, RecoveryWindow, SubjectOf};
use crate::source::OriginId;

/// The findings of the assessment for the audience.
///
/// Planners see model findings on lines only; clinicians see them once per worker on the line.
pub(super) fn rows(input: &ReportInput<'_>) -> Vec<FindingRow> {
    input
        .assessment
        .findings
        .iter()
        .flat_map(|finding| match (input.audience, finding.subject) {
            (Audience::Clinician, SubjectOf::Line(line)) => input
                .assessment
                .workers
                .iter()
                .filter(|worker| worker.line == line)
                .map(|worker| {
                    let name = &input.roster.workers[worker.worker.index()].name;
                    row(input, finding, Some(name.clone()))
                })
                .collect(),
            (_, SubjectOf::Worker(worker)) => {
                let name = &input.roster.workers[worker.index()].name;
                vec![row(input, finding, Some(name.clone()))]
            }
            _ => vec![row(input, finding, None)],
        })
        .collect()
}

fn row(input: &ReportInput<'_>, finding: &Finding, worker: Option<String>) -> FindingRow {
    let window = match finding.subject {
        SubjectOf::Worker(id) => input
            .assessment
            .workers
            .iter()
            .find(|worker| worker.worker == id)
            .and_then(|worker| {
                worker
                    .windows
                    .iter()
                    .find(|w| w.start == finding.start && w.end == finding.end)
            }),
        _ => None,
    };
    // Beside a name, planners see no share of members: it is physiology.
    let shows_members = input.audience == Audience::Clinician || finding.kind == FindingKind::Model;
    FindingRow {
        code: finding.code.name(),
        attention: finding.attention,
        kind: finding.kind.word(),
        worker,
        line: match finding.subject {
            SubjectOf::Line(line) => Some(line.0),
            _ => None,
        },
        start: wording::stamp(input.axis, finding.start),
        end: wording::stamp(input.axis, finding.end),
        start_text: wording::when(input.axis, finding.start),
        measured: finding.measured.map(hours),
        limit: finding.limit.map(hours),
        unit: finding.unit.clone(),
        members: finding
            .members
            .filter(|_| shows_members)
            .map(|members| (members.hold, members.of)),
        rules: finding.rules.iter().map(|rule| rule.id.clone()).collect(),
        places: wording::places(input.axis, finding),
        source: finding.source.clone(),
        rows: finding
            .rows
            .iter()
            .map(|origin| workers::row_text(input, *origin))
            .collect(),
        rows_text: rows_text(input, &finding.rows),
        occurrences: finding.occurrences.len().max(1),
        message: message(input, finding, window),
    }
}

/// `rows 192, 193 of ward.csv`.
fn rows_text(input: &ReportInput<'_>, rows: &[OriginId]) -> String {
    let files: Vec<String> = input
        .inputs
        .iter()
        .zip(0..)
        .filter_map(|((name, _), file)| {
            let numbers: Vec<String> = rows
                .iter()
                .filter(|origin| origin.file.0 == file)
                .map(|origin| origin.row.to_string())
                .collect();
            let noun = if numbers.len() == 1 { "row" } else { "rows" };
            (!numbers.is_empty()).then(|| format!("{noun} {} of {name}", numbers.join(", ")))
        })
        .collect();
    files.join("; ")
}

fn message(input: &ReportInput<'_>, finding: &Finding, window: Option<&RecoveryWindow>) -> String {
    let person = match input.audience {
        Audience::Planner => "generic adult",
        Audience::Clinician => "average adult on this roster",
    };
    let text = wording::message(finding, window, person);
    if finding.kind != FindingKind::NotJudged && is_eu(input, finding) {
        format!("{text}; EU minimum standard; the national law that implements it decides")
    } else {
        text
    }
}

fn is_eu(input: &ReportInput<'_>, finding: &Finding) -> bool {
    input
        .packs
        .iter()
        .filter(|pack| pack.jurisdiction == "EU")
        .flat_map(|pack| &pack.rules)
        .any(|rule| finding.rules.iter().any(|broken| broken.id == rule.id))
}
