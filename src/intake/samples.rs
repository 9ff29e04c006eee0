//! Tables of measured cortisol: one row per sample.
//!
//! Columns, in any order and case: `subject`, `time`, `value`, `unit`; optional `matrix`, `assay`, `waking_time`.
//! `time` is a local date-time or decimal hours; `unit` is nmol/L, ug/dL or ng/mL, one for the whole table.

use super::clock_text::{self, Moment};
use super::table::{Row, Table, short};
use super::{Input, table_of};
use crate::diagnostic::{self, Code, Diagnostic};
use crate::source::Origin;
use chrono::{NaiveDateTime, NaiveTime, Timelike};
use std::collections::BTreeMap;

/// nmol/L in one ug/dL of cortisol (molar mass 362.46 g/mol).
const NMOL_PER_UG_DL: f64 = 27.59;
/// Salivary values above this are rather those of serum, nmol/L (this program's choice: three times the upper limits of published ranges).
const SALIVA_QUESTIONED_NMOL_L: f64 = 120.0;

/// What was sampled.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Matrix {
    /// Saliva: free cortisol.
    Saliva,
    /// Serum or plasma: total cortisol.
    Serum,
    /// Not said.
    Unknown,
}

impl Matrix {
    /// In words.
    pub fn word(self) -> &'static str {
        match self {
            Self::Saliva => "saliva",
            Self::Serum => "serum",
            Self::Unknown => "not said",
        }
    }
}

/// One sample.
#[derive(Debug, Clone, PartialEq)]
pub struct Sample {
    /// Hours since the midnight that begins the subject's first date (or as written, where times are decimal hours).
    pub time_h: f64,
    /// Concentration, nmol/L; half the limit where it lies below it.
    pub nmol_l: f64,
    /// Was it below the limit of detection?
    pub below_limit: bool,
    /// Waking of that day, in the same hours.
    pub waking_h: Option<f64>,
}

/// The samples of one subject, ascending in time.
#[derive(Debug, Clone, PartialEq)]
pub struct Subject {
    /// Name or number as written.
    pub name: String,
    /// What was sampled.
    pub matrix: Matrix,
    /// Assay as written.
    pub assay: Option<String>,
    /// Samples.
    pub samples: Vec<Sample>,
}

/// What one table holds.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Samples {
    /// Subjects by name.
    pub subjects: Vec<Subject>,
    /// Unit in which the values were written.
    pub unit: String,
}

/// Reads a table of samples, and everything that is wrong with it in one pass.
///
/// # Example
///
/// ```
/// use acroshift::intake::{samples, Input};
/// let csv = b"subject,time,value,unit\nA,2026-03-09T07:00,10,nmol/L\nA,2026-03-09T23:00,2,nmol/L\n";
/// let (read, diagnostics) = samples::read(&Input { name: "saliva.csv", bytes: csv });
/// assert_eq!(read.subjects[0].samples[1].time_h, 23.0);
/// assert!(diagnostics.is_empty());
/// ```
pub fn read(input: &Input<'_>) -> (Samples, Vec<Diagnostic>) {
    let mut diagnostics = Vec::new();
    let samples = table_of(input, &mut diagnostics)
        .and_then(|table| Reader::new(&table, &mut diagnostics)?.read())
        .unwrap_or_default();
    diagnostic::sort(&mut diagnostics);
    (samples, diagnostics)
}

/// Meanings of columns and the words that files use for them. Common practice, no source.
const COLUMNS: [(&str, &[&str]); 7] = [
    (
        "subject",
        &["subject", "id", "person", "participant", "worker"],
    ),
    ("time", &["time", "sampled_at", "datetime", "t_h"]),
    ("value", &["value", "cortisol", "concentration"]),
    ("unit", &["unit", "units"]),
    ("matrix", &["matrix", "specimen"]),
    ("assay", &["assay", "method"]),
    ("waking_time", &["waking_time", "waking", "wake_time"]),
];

/// A time as it was written.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Written {
    Date(NaiveDateTime),
    Hours(f64),
}

struct Reader<'a> {
    table: &'a Table,
    diagnostics: &'a mut Vec<Diagnostic>,
    columns: BTreeMap<&'static str, usize>,
}

/// A row that could be used.
struct ReadRow {
    subject: String,
    time: Written,
    waking: Option<Written>,
    nmol_l: f64,
    below_limit: bool,
    matrix: Matrix,
    assay: Option<String>,
    origin: Origin,
}

impl<'a> Reader<'a> {
    fn new(table: &'a Table, diagnostics: &'a mut Vec<Diagnostic>) -> Option<Self> {
        let mut columns = BTreeMap::new();
        for (place, title) in table.header.cells.iter().enumerate() {
            let title = title.trim().to_lowercase().replace([' ', '-'], "_");
            if let Some((name, _)) = COLUMNS
                .iter()
                .find(|(_, words)| words.contains(&&title[..]))
            {
                columns.entry(*name).or_insert(place);
            }
        }
        let missing: Vec<&str> = ["subject", "time", "value"]
            .into_iter()
            .filter(|name| !columns.contains_key(name))
            .collect();
        if !missing.is_empty() {
            diagnostics.push(Diagnostic::new(
                Code::MissingColumn,
                table.origin(&table.header, 0),
                format!(
                    "a table of samples needs {}; its columns are subject, time, value, unit and, if known, matrix, assay, waking_time",
                    missing.join(", ")
                ),
            ));
            return None;
        }
        Some(Self {
            table,
            diagnostics,
            columns,
        })
    }

    fn cell<'r>(&self, row: &'r Row, name: &str) -> Option<(&'r str, usize)> {
        let place = *self.columns.get(name)?;
        let text = row.cells.get(place)?.trim();
        (!text.is_empty()).then_some((text, place))
    }

    fn tell(&mut self, code: Code, row: &Row, column: &str, message: String) {
        let place = self.columns.get(column).copied().unwrap_or(0);
        let origin = self.table.origin(row, place);
        self.diagnostics
            .push(Diagnostic::new(code, origin, message));
    }

    fn read(mut self) -> Option<Samples> {
        let (unit, factor) = self.unit()?;
        let rows: Vec<ReadRow> = (0..self.table.rows.len())
            .filter_map(|index| self.row(&self.table.rows[index], factor))
            .collect();
        let mut by_subject: BTreeMap<String, Vec<ReadRow>> = BTreeMap::new();
        for row in rows {
            by_subject.entry(row.subject.clone()).or_default().push(row);
        }
        let subjects = by_subject
            .into_iter()
            .map(|(name, rows)| self.subject(name, rows))
            .collect();
        Some(Samples { subjects, unit })
    }

    /// The unit of the table, which must be one, and its factor to nmol/L.
    fn unit(&mut self) -> Option<(String, f64)> {
        let mut found: Option<(String, f64)> = None;
        for row in &self.table.rows {
            let Some((text, _)) = self.cell(row, "unit") else {
                self.tell(
                    Code::SampleUnitMissing,
                    row,
                    "unit",
                    "the sample has no unit; write nmol/L, ug/dL or ng/mL in a column unit"
                        .to_owned(),
                );
                return None;
            };
            let Some(factor) = factor_of(text) else {
                let message = format!(
                    "{:?} is no unit of cortisol that is read; write nmol/L, ug/dL or ng/mL",
                    short(text)
                );
                self.tell(Code::SampleUnitMissing, row, "unit", message);
                return None;
            };
            match &found {
                Some((first, known)) if (known - factor).abs() > 1e-12 => {
                    let message = format!(
                        "the table holds two units, {first} and {}; convert one of them, or split the table",
                        short(text)
                    );
                    self.tell(Code::SampleUnitsMixed, row, "unit", message);
                    return None;
                }
                Some(_) => {}
                None => found = Some((text.to_owned(), factor)),
            }
        }
        found
    }

    fn row(&mut self, row: &Row, factor: f64) -> Option<ReadRow> {
        let Some((subject, _)) = self.cell(row, "subject") else {
            self.tell(
                Code::MissingWorker,
                row,
                "subject",
                "the row has no subject".to_owned(),
            );
            return None;
        };
        let time = self.time(row, "time")?;
        let (value, below_limit) = self.value(row)?;
        let matrix = match self
            .cell(row, "matrix")
            .map(|(text, _)| text.to_lowercase())
        {
            Some(text) if text == "saliva" => Matrix::Saliva,
            Some(text) if text == "serum" || text == "plasma" => Matrix::Serum,
            _ => Matrix::Unknown,
        };
        let nmol_l = value * factor;
        if matrix == Matrix::Saliva && nmol_l > SALIVA_QUESTIONED_NMOL_L {
            let message = format!(
                "{nmol_l:.0} nmol/L lies in the range of serum; is it saliva, and is the unit right?"
            );
            self.tell(Code::SampleMatrix, row, "value", message);
        }
        let waking = self
            .cell(row, "waking_time")
            .is_some()
            .then(|| self.time(row, "waking_time"))
            .flatten();
        Some(ReadRow {
            subject: subject.to_owned(),
            time,
            waking,
            nmol_l,
            below_limit,
            matrix,
            assay: self.cell(row, "assay").map(|(text, _)| text.to_owned()),
            origin: self.table.origin(row, self.columns["time"]),
        })
    }

    fn time(&mut self, row: &Row, column: &str) -> Option<Written> {
        let text = self.cell(row, column).map_or("", |(text, _)| text);
        let read = match clock_text::moment(text) {
            Some(Moment::Local(date, time)) => clock_text::local(date, time).map(Written::Date),
            Some(Moment::Fixed(fixed)) => Some(Written::Date(fixed.naive_local())),
            None => text
                .parse::<f64>()
                .ok()
                .filter(|hours| hours.is_finite())
                .map(Written::Hours),
        };
        if read.is_none() {
            let message = format!(
                "{:?} is no time; write a date-time such as 2026-03-09T07:30, or decimal hours",
                short(text)
            );
            self.tell(Code::UnreadableTime, row, column, message);
        }
        read
    }

    /// The value, and whether it was below the limit of detection; half the limit stands for it then.
    fn value(&mut self, row: &Row) -> Option<(f64, bool)> {
        let text = self.cell(row, "value").map_or("", |(text, _)| text);
        let (number, below) = match text.strip_prefix('<') {
            Some(limit) => (limit.trim(), true),
            None => (text, false),
        };
        let value = number
            .parse::<f64>()
            .ok()
            .filter(|value| value.is_finite() && *value > 0.0);
        let Some(value) = value else {
            let message = format!("{:?} is no concentration above 0", short(text));
            self.tell(Code::SampleValue, row, "value", message);
            return None;
        };
        if below {
            let message =
                format!("below the limit of {value}: half of it is used, and the sample is marked");
            self.tell(Code::BelowLimit, row, "value", message);
        }
        Some((if below { value / 2.0 } else { value }, below))
    }

    fn subject(&mut self, name: String, mut rows: Vec<ReadRow>) -> Subject {
        let first = rows.iter().filter_map(|row| match row.time {
            Written::Date(at) => Some(at.date().and_time(NaiveTime::MIN)),
            Written::Hours(_) => None,
        });
        let origin = first.min();
        let hours = |written: Written| match (written, origin) {
            (Written::Date(at), Some(origin)) => {
                let whole = (at - origin).num_minutes();
                crate::units::minutes_to_hours(whole) + f64::from(at.second()) / 3600.0
            }
            (Written::Hours(hours), _) => hours,
            (Written::Date(_), None) => f64::NAN,
        };
        rows.sort_by(|a, b| hours(a.time).total_cmp(&hours(b.time)));
        let mut samples: Vec<Sample> = Vec::new();
        for row in &rows {
            let time_h = hours(row.time);
            if samples
                .last()
                .is_some_and(|last| (last.time_h - time_h).abs() < 1e-9)
            {
                self.diagnostics.push(Diagnostic::new(
                    Code::SampleTwice,
                    row.origin.clone(),
                    format!(
                        "subject {:?} has two samples at one time; the first is used",
                        short(&name)
                    ),
                ));
                continue;
            }
            samples.push(Sample {
                time_h,
                nmol_l: row.nmol_l,
                below_limit: row.below_limit,
                waking_h: row.waking.map(hours),
            });
        }
        Subject {
            matrix: rows.first().map_or(Matrix::Unknown, |row| row.matrix),
            assay: rows.first().and_then(|row| row.assay.clone()),
            name,
            samples,
        }
    }
}

/// nmol/L in one of a unit: nmol/L, ug/dL, ng/mL; none for another.
pub fn factor_of(unit: &str) -> Option<f64> {
    match unit
        .to_lowercase()
        .replace(['\u{b5}', '\u{3bc}'], "u")
        .as_str()
    {
        "nmol/l" => Some(1.0),
        "ug/dl" | "mcg/dl" => Some(NMOL_PER_UG_DL),
        "ng/ml" | "ug/l" => Some(NMOL_PER_UG_DL / 10.0),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read_text(csv: &str) -> (Samples, Vec<&'static str>) {
        let input = Input {
            name: "s.csv",
            bytes: csv.as_bytes(),
        };
        let (samples, diagnostics) = read(&input);
        (samples, diagnostics.iter().map(|d| d.code.name()).collect())
    }

    #[test]
    fn units_become_nanomoles() {
        let (read, _) = read_text("subject,time,value,unit\nA,8,10,ug/dL\nA,20,<1,ug/dL\n");
        let samples = &read.subjects[0].samples;
        assert!((samples[0].nmol_l - 275.9).abs() < 1e-9);
        assert!((samples[1].nmol_l - 13.795).abs() < 1e-9 && samples[1].below_limit);
    }

    #[test]
    fn what_cannot_be_read_is_told() {
        for (csv, told) in [
            ("subject,time,value\nA,8,10\n", "sample-unit-missing"),
            (
                "subject,time,value,unit\nA,8,10,mol\n",
                "sample-unit-missing",
            ),
            (
                "subject,time,value,unit\nA,8,10,nmol/L\nA,9,1,ug/dL\n",
                "sample-units-mixed",
            ),
            (
                "subject,time,value,unit\nA,8,-3,nmol/L\n",
                "sample-value-unusable",
            ),
            (
                "subject,time,value,unit\nA,8,3,nmol/L\nA,8,4,nmol/L\n",
                "sample-time-repeated",
            ),
            (
                "subject,time,value,unit\nA,noon,3,nmol/L\n",
                "unreadable-time",
            ),
            (
                "subject,time,value,unit,matrix\nA,8,400,nmol/L,saliva\n",
                "sample-matrix-questioned",
            ),
            ("subject,value,unit\nA,3,nmol/L\n", "missing-column"),
        ] {
            let (_, codes) = read_text(csv);
            assert!(codes.contains(&told), "{csv}: {codes:?}");
        }
    }
}
