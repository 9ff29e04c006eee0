//! One row per shift: which columns are there, and which instants do they mean?
//!
//! Columns, in any order and case: `worker`, then `start` and `end` as date-times, or `date` with `start` and `end` as times of day.
//! Optional: `team`, `code`, `kind`, `break_min`, `zone`, `commute_min`.

mod row_reader;

use super::Reading;
use super::columns::Columns;
use super::table::{Row, Table};
use crate::diagnostic::{Code, Diagnostic};
use crate::roster::DutyKind;
use crate::source::{FileId, Origin, OriginId};
use chrono::{DateTime, NaiveDate, Utc};
use chrono_tz::Tz;
use row_reader::RowReader;

/// A shift as it stands in one row.
#[derive(Debug, Clone, PartialEq)]
pub struct RowShift {
    /// Worker as written, trimmed.
    pub worker: String,
    /// Team as written.
    pub team: Option<String>,
    /// First instant.
    pub start: DateTime<Utc>,
    /// First instant after it.
    pub end: DateTime<Utc>,
    /// Zone of the row.
    pub zone: Tz,
    /// What kind of duty.
    pub kind: DutyKind,
    /// Code as written.
    pub code: Option<String>,
    /// Break, minutes.
    pub break_min: Option<u16>,
    /// Commute each way, minutes.
    pub commute_min: Option<u16>,
    /// Which row.
    pub origin: OriginId,
    /// Its place in words.
    pub place: Origin,
}

/// A row that could not be used.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LostRow {
    /// Worker as written.
    pub worker: String,
    /// First and last date around each end that the row names; none when no date can be read.
    pub dates: Vec<(NaiveDate, NaiveDate)>,
}

/// What one table holds.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Rows {
    /// Shifts.
    pub shifts: Vec<RowShift>,
    /// Rows that could not be used.
    pub lost: Vec<LostRow>,
}

/// Reads a long table.
pub fn read(
    table: &Table,
    file: FileId,
    reading: &Reading,
    diagnostics: &mut Vec<Diagnostic>,
) -> Rows {
    let mut rows = Rows::default();
    let Some(columns) = Columns::find(table, reading, diagnostics) else {
        return rows;
    };
    if !columns.times_have_dates(table, diagnostics) {
        return rows;
    }
    for row in &table.rows {
        let mut reader = RowReader {
            table,
            columns: &columns,
            row,
            reading,
            diagnostics,
        };
        if reader.is_day_off_without_times() {
            continue;
        }
        match reader.shift(file) {
            Some(shift) => rows.shifts.push(shift),
            None => rows.lost.extend(reader.lost()),
        }
    }
    note_formula_text(table, diagnostics);
    rows
}

fn note_formula_text(table: &Table, diagnostics: &mut Vec<Diagnostic>) {
    let cells: Vec<(&Row, usize)> = table
        .rows
        .iter()
        .flat_map(|row| (0..row.cells.len()).map(move |place| (row, place)))
        .filter(|(row, place)| {
            let text = &row.cells[*place];
            text.starts_with(['=', '+', '-', '@']) && text.parse::<f64>().is_err()
        })
        .collect();
    if let Some((row, place)) = cells.first() {
        diagnostics.push(Diagnostic::new(
            Code::FormulaText,
            table.origin(row, *place),
            format!(
                "{} cells begin with a formula sign; they are text here and are quoted on output",
                cells.len()
            ),
        ));
    }
}
