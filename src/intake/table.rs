//! A table of text cells, each of which knows its place in the file.

use crate::source::Origin;

/// Where the cells of a row stand.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Place {
    /// A line of a text file: its number, its text, and the column and width of each cell in characters.
    Line {
        /// 1-based line.
        line: u32,
        /// The line as it stands in the file.
        text: String,
        /// Column (1-based) and width of each cell.
        spans: Vec<(u32, u32)>,
    },
    /// A row of a sheet.
    Sheet {
        /// Name of the sheet.
        sheet: String,
        /// 1-based row.
        row: u32,
        /// 1-based column of the first cell.
        first_column: u32,
    },
}

/// One row.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Row {
    /// Cells, trimmed.
    pub cells: Vec<String>,
    /// Where it stands.
    pub place: Place,
}

/// A header and its rows.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Table {
    /// File name without its folder.
    pub file: String,
    /// The header.
    pub header: Row,
    /// Data rows, blank ones left out.
    pub rows: Vec<Row>,
}

impl Row {
    /// 1-based line or row number.
    pub fn number(&self) -> u32 {
        match &self.place {
            Place::Line { line, .. } => *line,
            Place::Sheet { row, .. } => *row,
        }
    }
}

impl Table {
    /// The place of a cell; `column` counts from 0.
    pub fn origin(&self, row: &Row, column: usize) -> Origin {
        let name = self.header.cells.get(column).cloned();
        match &row.place {
            Place::Line { line, text, spans } => {
                let (at, width) = spans.get(column).copied().unwrap_or((1, 1));
                Origin::Text {
                    file: self.file.clone(),
                    line: *line,
                    column: at,
                    name: name.filter(|_| !std::ptr::eq(row, &raw const self.header)),
                    text: text.clone(),
                    width: width.max(1),
                }
            }
            Place::Sheet {
                sheet,
                row,
                first_column,
            } => Origin::Cell {
                file: self.file.clone(),
                sheet: sheet.clone(),
                row: *row,
                column: first_column + u32::try_from(column).unwrap_or(0),
            },
        }
    }

    /// The whole file.
    pub fn file_origin(&self) -> Origin {
        Origin::File {
            file: self.file.clone(),
        }
    }
}

/// Cell text for a message: at most 40 characters, control characters shown as escapes by the caller's `{:?}`.
pub(super) fn short(text: &str) -> String {
    let mut cut: String = text.chars().take(40).collect();
    if text.chars().count() > 40 {
        cut.push('\u{2026}');
    }
    cut
}
