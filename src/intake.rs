//! What does the file say, and what is wrong with it?
//!
//! Bytes go in, a roster and diagnostics come out: every problem of the file in one pass, with its place.
//! A bad row takes its worker's dates out of judgement, never another worker's.

pub mod clock_text;
pub mod light_log;
pub mod long_table;
pub mod samples;
pub mod site;
pub mod table;
pub mod text;
#[cfg(feature = "xlsx")]
pub mod workbook;
pub mod zone_name;

mod columns;
mod settle;

use crate::diagnostic::{self, Code, Diagnostic};
use crate::roster::Roster;
use crate::source::{FileId, Origin};
use chrono_tz::Tz;
use table::Table;

/// One input file, as the binary read it.
#[derive(Debug, Clone, Copy)]
pub struct Input<'a> {
    /// File name without its folder.
    pub name: &'a str,
    /// Its content.
    pub bytes: &'a [u8],
}

/// What the person who runs the program adds to the file.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Reading {
    /// Zone of the workplace, where the file has none.
    pub zone: Option<Tz>,
    /// First date to use, inclusive.
    pub first_date: Option<chrono::NaiveDate>,
    /// Last date to use, inclusive.
    pub last_date: Option<chrono::NaiveDate>,
}

/// What was read.
#[derive(Debug, Clone, PartialEq)]
pub struct Intake {
    /// The roster, unless nothing is usable.
    pub roster: Option<Roster>,
    /// Everything wrong or assumed, ordered by place.
    pub diagnostics: Vec<Diagnostic>,
    /// Shifts that were repeated exactly and counted once.
    pub duplicates: usize,
}

/// Reads rosters and puts their shifts together.
///
/// # Example
///
/// ```
/// use acroshift::intake::{read, Input, Reading};
/// let csv = b"worker,start,end\nA1,2026-03-28T22:00,2026-03-29T06:00\n";
/// let reading = Reading { zone: Some(chrono_tz::Europe::London), ..Reading::default() };
/// let intake = read(&[Input { name: "ward.csv", bytes: csv }], &reading);
/// let roster = intake.roster.expect("the file is in order");
/// // The clocks went forward that night: seven elapsed hours.
/// assert_eq!((roster.shifts[0].end - roster.shifts[0].start).num_hours(), 7);
/// ```
pub fn read(inputs: &[Input<'_>], reading: &Reading) -> Intake {
    let mut diagnostics = Vec::new();
    let mut rows = Vec::new();
    for (index, input) in inputs.iter().enumerate() {
        let file = FileId(u32::try_from(index).unwrap_or(u32::MAX));
        if let Some(table) = table_of(input, &mut diagnostics) {
            rows.push(long_table::read(&table, file, reading, &mut diagnostics));
        }
    }
    let names: Vec<&str> = inputs.iter().map(|input| input.name).collect();
    let (roster, duplicates) = settle::settle(rows, &names, reading, &mut diagnostics);
    diagnostic::sort(&mut diagnostics);
    Intake {
        roster,
        diagnostics,
        duplicates,
    }
}

/// First bytes of files that are no text and no workbook this program reads.
const FOREIGN: [(&[u8], &str); 3] = [
    (&[0xD0, 0xCF, 0x11, 0xE0], "an old Excel workbook"),
    (b"PAR1", "a Parquet file"),
    (b"%PDF", "a PDF document"),
];

fn table_of(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<Table> {
    let file = || Origin::File {
        file: input.name.to_owned(),
    };
    if let Some((_, what)) = FOREIGN
        .iter()
        .find(|(magic, _)| input.bytes.starts_with(magic))
    {
        diagnostics.push(Diagnostic::new(
            Code::Unsupported,
            file(),
            format!("{what} is not read; save the roster as .xlsx or .csv"),
        ));
        return None;
    }
    if input.bytes.starts_with(b"PK\x03\x04") {
        return workbook_table(input, diagnostics);
    }
    text::read(input, diagnostics)
}

#[cfg(feature = "xlsx")]
fn workbook_table(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<Table> {
    workbook::read(input, diagnostics)
}

#[cfg(not(feature = "xlsx"))]
fn workbook_table(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<Table> {
    diagnostics.push(Diagnostic::new(
        Code::Unsupported,
        Origin::File {
            file: input.name.to_owned(),
        },
        "this build reads no workbooks; save the roster as .csv, or build with the feature xlsx",
    ));
    None
}
