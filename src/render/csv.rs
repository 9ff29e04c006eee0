//! `findings.csv`: RFC 4180, UTF-8, one row per finding.

use crate::report::document::{FindingRow, ScreenReport};
use std::io::{self, Write};

/// Columns of the file.
pub const COLUMNS: [&str; 18] = [
    "code",
    "attention",
    "kind",
    "worker",
    "line",
    "start",
    "end",
    "measured",
    "limit",
    "unit",
    "members_hold",
    "members_of",
    "rules",
    "source",
    "rows",
    "occurrences",
    "message",
    "audience",
];

/// Writes the findings.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write(report: &ScreenReport, out: impl Write) -> io::Result<()> {
    let mut writer = ::csv::WriterBuilder::new()
        .terminator(::csv::Terminator::CRLF)
        .from_writer(out);
    writer.write_record(COLUMNS)?;
    for finding in &report.findings {
        writer.write_record(cells(finding, report.audience.word()))?;
    }
    writer.flush()
}

fn cells(finding: &FindingRow, audience: &str) -> [String; 18] {
    let number = |value: Option<f64>| value.map(|v| v.to_string()).unwrap_or_default();
    let count = |value: Option<usize>| value.map(|v| v.to_string()).unwrap_or_default();
    let (hold, of) = finding.members.unzip();
    [
        finding.code.to_owned(),
        finding.attention.word().to_owned(),
        finding.kind.to_owned(),
        guarded(finding.worker.as_deref().unwrap_or_default()),
        finding.line.map(|l| l.to_string()).unwrap_or_default(),
        finding.start.clone(),
        finding.end.clone(),
        number(finding.measured),
        number(finding.limit),
        finding.unit.clone(),
        count(hold),
        count(of),
        finding.rules.join(" "),
        guarded(&finding.source),
        guarded(&finding.rows.join(" ")),
        finding.occurrences.to_string(),
        guarded(&finding.message),
        audience.to_owned(),
    ]
}

/// Text that a spreadsheet would take for a formula gets an apostrophe in front (advice of the OWASP community).
///
/// # Example
///
/// ```
/// use acroshift::render::csv::guarded;
/// assert_eq!(guarded("=cmd|' /C calc'!A0"), "'=cmd|' /C calc'!A0");
/// assert_eq!(guarded("A1"), "A1");
/// ```
pub fn guarded(text: &str) -> String {
    if text.starts_with(['=', '+', '-', '@', '\t', '\r']) {
        format!("'{text}")
    } else {
        text.to_owned()
    }
}
