//! What is wrong or assumed in the user's data, where, and what follows?
//!
//! Diagnostics are collected, never thrown: one pass over a file reports everything.
//! Each has a short id from the trap table (`T21`) and a readable code (`end-before-start-dated`); both are stable.

pub use code::Code;

mod code;

use crate::source::Origin;
use std::fmt;

/// How far a diagnostic reaches.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Level {
    /// The file cannot be used.
    Fatal,
    /// The row or cell is not used; its worker is incomplete.
    Error,
    /// The value is used under a stated assumption.
    Warning,
    /// A harmless reading, counted only.
    Note,
}

impl fmt::Display for Level {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(match self {
            Self::Fatal => "fatal",
            Self::Error => "error",
            Self::Warning => "warning",
            Self::Note => "note",
        })
    }
}

/// One problem or assumption, with its place.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// What kind of problem.
    pub code: Code,
    /// How far it reaches.
    pub level: Level,
    /// Where.
    pub origin: Origin,
    /// What is wrong, what follows, what to do.
    pub message: String,
}

impl Diagnostic {
    /// A diagnostic at the level that its code usually has.
    pub fn new(code: Code, origin: Origin, message: impl Into<String>) -> Self {
        Self {
            code,
            level: code.level(),
            origin,
            message: message.into(),
        }
    }

    /// The same at another level, where the trap table knows two.
    #[must_use]
    pub fn at(mut self, level: Level) -> Self {
        self.level = level;
        self
    }
}

/// Sorts by place, then by code, so that the order never depends on how the file was read.
pub fn sort(diagnostics: &mut [Diagnostic]) {
    diagnostics.sort_by(|a, b| {
        place(&a.origin)
            .cmp(&place(&b.origin))
            .then(a.code.id().cmp(b.code.id()))
            .then(a.message.cmp(&b.message))
    });
}

fn place(origin: &Origin) -> (&str, u32, u32) {
    match origin {
        Origin::File { file } => (file, 0, 0),
        Origin::Text {
            file, line, column, ..
        } => (file, *line, *column),
        Origin::Cell {
            file, row, column, ..
        } => (file, *row, *column),
        Origin::Setting { name } => (name, 0, 0),
    }
}

/// Is a row missing or the file unusable?
pub fn has_errors(diagnostics: &[Diagnostic]) -> bool {
    diagnostics.iter().any(|d| d.level <= Level::Error)
}
