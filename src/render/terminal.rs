//! Text for a terminal of 80 columns, readable without colour and by a screen reader.

use crate::report::diagnostics::DiagnosticRow;
use crate::report::document::{FindingRow, ScreenReport};
use crate::report::explain::Explanation;
use crate::report::wording::counted;
use std::collections::BTreeMap;
use std::io::{self, Write};

/// Columns of the text.
const WIDTH: usize = 80;
/// Findings shown before they are only counted.
const SHOWN_FINDINGS: usize = 20;

/// Writes the summary of a report.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write(report: &ScreenReport, out: &mut dyn Write) -> io::Result<()> {
    let (summary, provenance) = (&report.summary, &report.provenance);
    let files: Vec<&str> = provenance.inputs.iter().map(|i| i.name.as_str()).collect();
    writeln!(
        out,
        "acroshift {} screen: {}",
        provenance.version,
        files.join(", ")
    )?;
    paragraph(
        out,
        &format!(
            "{} on {}, {}, {:.1} h, {} to {}, {}. Rules: {}. Audience: {}.",
            counted(summary.workers, "worker"),
            counted(summary.lines, "duty line"),
            counted(summary.shifts, "shift"),
            summary.duty_h,
            provenance.from,
            provenance.to,
            provenance.zone,
            provenance.rules.join(", "),
            report.audience.word()
        ),
    )?;
    if summary.incomplete_workers > 0 {
        paragraph(
            out,
            &format!(
                "{} workers are incomplete: dates could not be read, and the windows that touch them are not judged. Results are partial.",
                summary.incomplete_workers
            ),
        )?;
    }
    writeln!(out)?;
    writeln!(
        out,
        "Recovery windows {:>5}   compressed {:>4}   narrow {:>4}   unmarked {:>4}",
        summary.windows, summary.compressed, summary.narrow, summary.unmarked
    )?;
    writeln!(
        out,
        "Not counted      {:>5}   not judged {:>4}   over 7 days {:>2}",
        summary.not_judged + summary.listed,
        summary.not_judged,
        summary.listed
    )?;
    writeln!(
        out,
        "Findings         {:>5}   priority {:>6}   review {:>4}   note {:>8}",
        summary.priority + summary.review + summary.note,
        summary.priority,
        summary.review,
        summary.note
    )?;
    writeln!(out)?;
    paragraph(out, &summary.statement)?;
    if summary.assumed > 0 {
        paragraph(
            out,
            &format!(
                "In {} the model was set aside, because it rests on an assumed history.",
                counted(summary.assumed, "window")
            ),
        )?;
    }
    paragraph(out, &format!("Input: {}.", report.diagnostic_counts))?;
    findings(report, out)?;
    writeln!(out)?;
    paragraph(out, &report.cautions.device)?;
    for caution in &report.cautions.list {
        paragraph(out, &caution.short)?;
    }
    Ok(())
}

fn findings(report: &ScreenReport, out: &mut dyn Write) -> io::Result<()> {
    if report.findings.is_empty() {
        return Ok(());
    }
    let (judged, open): (Vec<&FindingRow>, Vec<&FindingRow>) =
        report.findings.iter().partition(|f| f.kind != "not-judged");
    if !judged.is_empty() {
        writeln!(out)?;
        writeln!(out, "Findings, most urgent first")?;
    }
    for finding in judged.iter().take(SHOWN_FINDINGS) {
        let head = format!(
            "{:<8}  {:<6}  {}  {}",
            finding.attention.word(),
            finding.kind,
            finding.start_text,
            whom(finding)
        );
        writeln!(out, "{}", head.trim_end())?;
        indented(out, &finding.message)?;
    }
    let mut counts: BTreeMap<(&str, &str), usize> = BTreeMap::new();
    for finding in judged.iter().skip(SHOWN_FINDINGS) {
        *counts
            .entry((finding.attention.word(), finding.code))
            .or_insert(0) += 1;
    }
    if !counts.is_empty() {
        writeln!(out, "and, not shown here:")?;
        for ((attention, code), count) in counts {
            writeln!(out, "{count:>6}  {attention:<8}  {code}")?;
        }
    }
    not_judged(&open, out)
}

/// Rules that were not judged, together where the reason is the same.
fn not_judged(open: &[&FindingRow], out: &mut dyn Write) -> io::Result<()> {
    if open.is_empty() {
        return Ok(());
    }
    writeln!(out)?;
    writeln!(out, "Rules not judged ({})", open.len())?;
    let mut reasons: BTreeMap<&str, Vec<&str>> = BTreeMap::new();
    for finding in open {
        let rules = finding.rules.iter().map(String::as_str);
        reasons.entry(&finding.message).or_default().extend(rules);
    }
    for (reason, rules) in reasons {
        paragraph(out, &rules.join(", "))?;
        indented(out, reason)?;
    }
    Ok(())
}

/// Whom a finding concerns.
fn whom(finding: &FindingRow) -> String {
    match (&finding.worker, finding.line) {
        (Some(worker), _) => worker.clone(),
        (None, Some(line)) => format!("line {line}"),
        (None, None) => String::new(),
    }
}

/// Writes an explanation.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write_explanation(explanation: &Explanation, out: &mut dyn Write) -> io::Result<()> {
    paragraph(out, &explanation.head)?;
    for text in &explanation.paragraphs {
        writeln!(out)?;
        paragraph(out, text)?;
    }
    Ok(())
}

/// Writes diagnostics with the lines they point to.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write_diagnostics(rows: &[DiagnosticRow], out: &mut dyn Write) -> io::Result<()> {
    for row in rows {
        writeln!(
            out,
            "{}: {} {} {}",
            row.location,
            row.level,
            row.id,
            printable(&row.message)
        )?;
        if let Some(excerpt) = &row.excerpt {
            let (text, column, width) = shown_part(&excerpt.text, excerpt.column, excerpt.width);
            let number = excerpt.line.to_string();
            writeln!(out, "  {number} | {text}")?;
            writeln!(
                out,
                "  {} | {}{}",
                " ".repeat(number.len()),
                " ".repeat(column - 1),
                "^".repeat(width)
            )?;
        }
    }
    Ok(())
}

/// The part of a line around the place that is meant: at most 100 characters.
fn shown_part(text: &str, column: u32, width: u32) -> (String, usize, usize) {
    const LONGEST: usize = 100;
    let column = usize::try_from(column).unwrap_or(1).max(1);
    let from = if column > LONGEST - 20 {
        column - 20
    } else {
        0
    };
    let part: String = printable(text).chars().skip(from).take(LONGEST).collect();
    let at = column - from;
    let room = part.chars().count().saturating_sub(at - 1).max(1);
    let width = usize::try_from(width).unwrap_or(1).clamp(1, room);
    (part, at, width)
}

/// Control characters are shown as a replacement mark, so that a file cannot steer the terminal.
fn printable(text: &str) -> String {
    text.chars()
        .map(|c| if c.is_control() { '\u{fffd}' } else { c })
        .collect()
}

fn paragraph(out: &mut dyn Write, text: &str) -> io::Result<()> {
    wrapped(out, text, "")
}

fn indented(out: &mut dyn Write, text: &str) -> io::Result<()> {
    wrapped(out, text, "          ")
}

fn wrapped(out: &mut dyn Write, text: &str, indent: &str) -> io::Result<()> {
    let mut line = String::new();
    for word in text.split_whitespace() {
        let length = indent.len() + line.chars().count() + 1 + word.chars().count();
        if !line.is_empty() && length > WIDTH {
            writeln!(out, "{indent}{line}")?;
            line.clear();
        }
        if !line.is_empty() {
            line.push(' ');
        }
        line.push_str(word);
    }
    if line.is_empty() {
        Ok(())
    } else {
        writeln!(out, "{indent}{line}")
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::diagnostics::Excerpt;

    #[test]
    fn carets_stand_under_the_field() {
        let rows = [DiagnosticRow {
            id: "T21",
            code: "end-before-start-dated",
            level: "error".to_owned(),
            location: "w.csv:2:4 (end)".to_owned(),
            message: "end lies before start".to_owned(),
            excerpt: Some(Excerpt {
                line: 2,
                text: "A1,2026-03-09".to_owned(),
                column: 4,
                width: 10,
            }),
        }];
        let mut text = Vec::new();
        write_diagnostics(&rows, &mut text).unwrap();
        let text = String::from_utf8(text).unwrap();
        assert_eq!(
            text,
            "w.csv:2:4 (end): error T21 end lies before start\n  2 | A1,2026-03-09\n    |    ^^^^^^^^^^\n"
        );
    }

    #[test]
    fn control_characters_never_reach_the_terminal() {
        assert_eq!(printable("a\u{1b}[31m"), "a\u{fffd}[31m");
    }
}
