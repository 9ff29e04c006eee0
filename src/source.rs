//! Where did a value come from? Every shift and every message can name its place.
//!
//! An [`Origin`] is rebuilt from a compact [`OriginId`] when a message is printed, so that ten million shifts stay small.
//! Lines and columns are 1-based; they are converted once, at the reader.

use std::fmt;

/// A file of the run, by its place in the list of inputs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct FileId(pub u32);

/// The row of an input file that a shift was read from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct OriginId {
    /// The file.
    pub file: FileId,
    /// 1-based line (text) or row (workbook) in the file.
    pub row: u32,
}

/// The place of a value, as it is printed.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub enum Origin {
    /// A whole file.
    File {
        /// File name as given, without its folder.
        file: String,
    },
    /// A place in a text file.
    Text {
        /// File name as given, without its folder.
        file: String,
        /// 1-based line.
        line: u32,
        /// 1-based column in characters.
        column: u32,
        /// Name of the table column, where there is one.
        name: Option<String>,
        /// The line itself, for the drawing with carets.
        text: String,
        /// Number of characters to underline.
        width: u32,
    },
    /// A cell of a workbook.
    Cell {
        /// File name as given, without its folder.
        file: String,
        /// Sheet.
        sheet: String,
        /// 1-based row.
        row: u32,
        /// 1-based column.
        column: u32,
    },
    /// An option of the command line or a key of the site file.
    Setting {
        /// The option or key.
        name: String,
    },
}

impl fmt::Display for Origin {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::File { file } => write!(formatter, "{file}"),
            Self::Text {
                file,
                line,
                column,
                name,
                ..
            } => {
                write!(formatter, "{file}:{line}:{column}")?;
                match name {
                    Some(name) => write!(formatter, " ({name})"),
                    None => Ok(()),
                }
            }
            Self::Cell {
                file,
                sheet,
                row,
                column,
            } => write!(formatter, "{file}!{sheet}!{}{row}", column_letters(*column)),
            Self::Setting { name } => write!(formatter, "{name}"),
        }
    }
}

/// Spreadsheet letters of a 1-based column: 1 is A, 27 is AA.
fn column_letters(mut column: u32) -> String {
    let mut letters = Vec::new();
    while column > 0 {
        let rest = (column - 1) % 26;
        letters.push(char::from_u32(u32::from('A') + rest).unwrap_or('?'));
        column = (column - 1) / 26;
    }
    letters.iter().rev().collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_are_lettered_as_spreadsheets_do() {
        assert_eq!(column_letters(1), "A");
        assert_eq!(column_letters(26), "Z");
        assert_eq!(column_letters(27), "AA");
        assert_eq!(column_letters(703), "AAA");
    }

    #[test]
    fn text_places_print_line_column_and_name() {
        let origin = Origin::Text {
            file: "ward.csv".into(),
            line: 7,
            column: 12,
            name: Some("end".into()),
            text: String::new(),
            width: 1,
        };
        assert_eq!(origin.to_string(), "ward.csv:7:12 (end)");
    }
}
