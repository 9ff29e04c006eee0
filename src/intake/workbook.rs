//! A long table on the only filled sheet of an Excel workbook.
//!
//! Formulas are never evaluated; their stored values are read. Colour, notes and hidden rows mean nothing here.

use super::Input;
use super::table::{Place, Row, Table};
use crate::diagnostic::{Code, Diagnostic};
use crate::source::Origin;
use calamine::{Data, Range, Reader, Xlsx};
use chrono::{Datelike, NaiveDate, NaiveDateTime};
use std::io::Cursor;

/// Reads a workbook into a table; `None` when nothing is usable.
pub fn read(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<Table> {
    let mut fail = |code, message: String| {
        let origin = Origin::File {
            file: input.name.to_owned(),
        };
        diagnostics.push(Diagnostic::new(code, origin, message));
        None
    };
    let mut workbook: Xlsx<_> = match Xlsx::new(Cursor::new(input.bytes)) {
        Ok(workbook) => workbook,
        Err(error) => {
            return fail(
                Code::Unreadable,
                format!("the workbook cannot be opened ({error}); save it again as .xlsx or .csv"),
            );
        }
    };
    let filled: Vec<(String, Range<Data>)> = workbook
        .worksheets()
        .into_iter()
        .filter(|(_, range)| !range.is_empty())
        .collect();
    match filled.as_slice() {
        [] => fail(
            Code::NoRows,
            "no sheet of the workbook has any cell".to_owned(),
        ),
        [(name, range)] => table(input.name, name, range).or_else(|| {
            fail(
                Code::NoRows,
                format!("sheet {name:?} has a header and no data rows"),
            )
        }),
        several => {
            let names: Vec<&str> = several.iter().map(|(name, _)| name.as_str()).collect();
            fail(
                Code::SeveralTables,
                format!(
                    "several sheets have data ({}); keep one in the file",
                    names.join(", ")
                ),
            )
        }
    }
}

fn table(file: &str, sheet: &str, range: &Range<Data>) -> Option<Table> {
    let (first_row, first_column) = range.start()?;
    let mut rows = (first_row + 1..)
        .zip(range.rows())
        .map(|(number, cells)| Row {
            cells: cells.iter().map(cell_text).collect(),
            place: Place::Sheet {
                sheet: sheet.to_owned(),
                row: number,
                first_column: first_column + 1,
            },
        });
    let header = rows.next()?;
    let rows: Vec<Row> = rows
        .filter(|row| row.cells.iter().any(|cell| !cell.is_empty()))
        .collect();
    (!rows.is_empty()).then(|| Table {
        file: file.to_owned(),
        header,
        rows,
    })
}

/// A cell as the text that a CSV file would hold.
fn cell_text(cell: &Data) -> String {
    match cell {
        Data::DateTime(stamp) => stamp
            .to_ymd_hms_milli_text()
            .unwrap_or_else(|| cell.to_string()),
        Data::Float(number) => number.to_string(),
        other => other.to_string().trim().to_owned(),
    }
}

/// Text of a stored date, rounded to the minute: dates alone, times alone, or both.
trait StampText {
    fn to_ymd_hms_milli_text(&self) -> Option<String>;
}

impl StampText for calamine::ExcelDateTime {
    fn to_ymd_hms_milli_text(&self) -> Option<String> {
        let (year, month, day, hour, minute, second, milli) = self.to_ymd_hms_milli();
        let base = NaiveDate::from_ymd_opt(i32::from(year), u32::from(month), u32::from(day))?;
        let at: NaiveDateTime = base.and_hms_milli_opt(
            u32::from(hour),
            u32::from(minute),
            u32::from(second),
            u32::from(milli),
        )? + chrono::Duration::seconds(30);
        let serial = self.as_f64();
        Some(if serial < 1.0 {
            at.format("%H:%M").to_string()
        } else if serial.fract() == 0.0 {
            at.format("%Y-%m-%d").to_string()
        } else {
            debug_assert!(at.year() > 1899);
            at.format("%Y-%m-%dT%H:%M").to_string()
        })
    }
}
