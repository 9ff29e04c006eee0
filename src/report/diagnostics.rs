//! Diagnostics as rows: capped per code, worded, with the line they point to.

use crate::diagnostic::{Code, Diagnostic, Level};
use crate::source::Origin;
use std::collections::BTreeMap;

/// Messages printed per code; the rest is counted.
const SHOWN_PER_CODE: usize = 20;
/// Notes printed per code.
const SHOWN_NOTES: usize = 2;

/// A line of the input with the part that is meant.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Excerpt {
    /// 1-based line.
    pub line: u32,
    /// The line.
    pub text: String,
    /// 1-based column in characters.
    pub column: u32,
    /// Characters to underline.
    pub width: u32,
}

/// One problem or assumption.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DiagnosticRow {
    /// Short id: `T21`.
    pub id: &'static str,
    /// Readable code.
    pub code: &'static str,
    /// `fatal`, `error`, `warning` or `note`.
    pub level: String,
    /// Place.
    pub location: String,
    /// What is wrong, what follows, what to do.
    pub message: String,
    /// The line in the input.
    pub excerpt: Option<Excerpt>,
}

/// Rows of the diagnostics, what asks for a decision first, with repeats of a code beyond the cap counted in one row.
pub fn rows(diagnostics: &[Diagnostic]) -> Vec<DiagnosticRow> {
    let mut seen: BTreeMap<(Code, Level), usize> = BTreeMap::new();
    let mut rows = Vec::new();
    for diagnostic in diagnostics {
        let count = seen.entry((diagnostic.code, diagnostic.level)).or_insert(0);
        *count += 1;
        if *count <= shown(diagnostic.level) {
            rows.push(row(diagnostic));
        }
    }
    for ((code, level), count) in seen {
        if count > shown(level) {
            rows.push(DiagnosticRow {
                id: code.id(),
                code: code.name(),
                level: level.to_string(),
                location: "(more)".to_owned(),
                message: format!("and {} more: {}", count - shown(level), code.about()),
                excerpt: None,
            });
        }
    }
    rows.sort_by_key(|row| row.level == "note");
    rows
}

fn shown(level: Level) -> usize {
    match level {
        Level::Note => SHOWN_NOTES,
        _ => SHOWN_PER_CODE,
    }
}

fn row(diagnostic: &Diagnostic) -> DiagnosticRow {
    DiagnosticRow {
        id: diagnostic.code.id(),
        code: diagnostic.code.name(),
        level: diagnostic.level.to_string(),
        location: diagnostic.origin.to_string(),
        message: diagnostic.message.clone(),
        excerpt: match &diagnostic.origin {
            Origin::Text {
                line,
                text,
                column,
                width,
                ..
            } if diagnostic.level < Level::Note => Some(Excerpt {
                line: *line,
                text: text.clone(),
                column: *column,
                width: *width,
            }),
            _ => None,
        },
    }
}

/// `2 errors, 1 warning, 3 notes`.
pub fn counts(diagnostics: &[Diagnostic]) -> String {
    let of = |level: Level, word: &str| {
        let count = diagnostics.iter().filter(|d| d.level == level).count();
        let plural = if count == 1 { "" } else { "s" };
        (count > 0).then(|| format!("{count} {word}{plural}"))
    };
    let parts: Vec<String> = [
        of(Level::Fatal, "fatal problem"),
        of(Level::Error, "error"),
        of(Level::Warning, "warning"),
        of(Level::Note, "note"),
    ]
    .into_iter()
    .flatten()
    .collect();
    if parts.is_empty() {
        "nothing to say".to_owned()
    } else {
        parts.join(", ")
    }
}
