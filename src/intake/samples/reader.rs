//! Rows of a table of samples to series.

use super::sample_time::{self, Way, Written};
use super::{Samples, factor_of};
use crate::diagnostic::{Code, Diagnostic};
use crate::intake::table::{Row, Table, short};
use crate::samples::{Matrix, Sample, Series};
use crate::source::Origin;
use std::collections::BTreeMap;

/// Salivary values above this are rather those of serum, nmol/L (this program's choice: three times the upper limits of published ranges).
const SALIVA_QUESTIONED_NMOL_L: f64 = 120.0;
/// A waking belongs to the samples of the day that follows it, hours.
const DAY_H: f64 = 24.0;

/// Meanings of columns and the words that files use for them. Common practice, no source.
const COLUMNS: [(&str, &[&str]); 8] = [
    (
        "subject",
        &["subject", "id", "person", "participant", "worker"],
    ),
    ("time", &["time", "sampled_at", "datetime", "t_h"]),
    ("value", &["value", "cortisol", "concentration"]),
    ("unit", &["unit", "units"]),
    ("matrix", &["matrix", "specimen"]),
    ("assay", &["assay", "method"]),
    ("group", &["group", "arm", "cohort"]),
    ("waking_time", &["waking_time", "waking", "wake_time"]),
];

pub(super) struct Reader<'a> {
    table: &'a Table,
    diagnostics: &'a mut Vec<Diagnostic>,
    columns: BTreeMap<&'static str, usize>,
    /// How the first readable time was written.
    way: Option<Way>,
}

/// What is fitted together.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
struct Key {
    subject: String,
    matrix: Option<Matrix>,
    assay: Option<String>,
    group: Option<String>,
}

/// A row that could be used.
struct ReadRow {
    time: Written,
    waking: Option<Written>,
    nmol_l: f64,
    below_limit: bool,
    origin: Origin,
    waking_origin: Origin,
}

impl<'a> Reader<'a> {
    pub(super) fn new(table: &'a Table, diagnostics: &'a mut Vec<Diagnostic>) -> Option<Self> {
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
                    "a table of samples needs {}; its columns are subject, time, value, unit and, if known, matrix, assay, group, waking_time",
                    missing.join(", ")
                ),
            ));
            return None;
        }
        Some(Self {
            table,
            diagnostics,
            columns,
            way: None,
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

    pub(super) fn read(mut self) -> Option<Samples> {
        let (unit, factor) = self.unit()?;
        let mut rows: BTreeMap<Key, Vec<ReadRow>> = BTreeMap::new();
        for row in &self.table.rows {
            if let Some((key, row)) = self.row(row, factor) {
                rows.entry(key).or_default().push(row);
            }
        }
        let series = rows
            .into_iter()
            .map(|(key, rows)| self.series(key, rows))
            .collect();
        Some(Samples { series, unit })
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

    fn row(&mut self, row: &Row, factor: f64) -> Option<(Key, ReadRow)> {
        let Some((subject, _)) = self.cell(row, "subject") else {
            self.tell(
                Code::MissingWorker,
                row,
                "subject",
                "the row has no subject".to_owned(),
            );
            return None;
        };
        let subject = subject.to_owned();
        let time = self.time(row, "time")?;
        let (value, below_limit) = self.value(row)?;
        let nmol_l = value * factor;
        let matrix = self.matrix(row, nmol_l);
        let waking = self
            .cell(row, "waking_time")
            .is_some()
            .then(|| self.time(row, "waking_time"))
            .flatten();
        let words = |column| self.cell(row, column).map(|(text, _)| text.to_owned());
        let key = Key {
            subject,
            matrix,
            assay: words("assay"),
            group: words("group"),
        };
        let place = |column| self.columns.get(column).copied().unwrap_or(0);
        let read = ReadRow {
            time,
            waking,
            nmol_l,
            below_limit,
            origin: self.table.origin(row, place("time")),
            waking_origin: self.table.origin(row, place("waking_time")),
        };
        Some((key, read))
    }

    /// What was sampled; a word that is not known counts as not said, and is told.
    fn matrix(&mut self, row: &Row, nmol_l: f64) -> Option<Matrix> {
        let text = self
            .cell(row, "matrix")
            .map_or(String::new(), |(text, _)| text.to_lowercase());
        match text.as_str() {
            "saliva" if nmol_l > SALIVA_QUESTIONED_NMOL_L => {
                let message = format!(
                    "{nmol_l:.0} nmol/L lies in the range of serum; is it saliva, and is the unit right?"
                );
                self.tell(Code::SampleMatrix, row, "value", message);
                Some(Matrix::Saliva)
            }
            "saliva" => Some(Matrix::Saliva),
            "serum" | "plasma" => Some(Matrix::Serum),
            "" => None,
            other => {
                let message = format!(
                    "{:?} is no matrix that is read, and counts as not said; write saliva, serum or plasma",
                    short(other)
                );
                self.tell(Code::SampleMatrixUnknown, row, "matrix", message);
                None
            }
        }
    }

    /// A time, written in the way of the table's first.
    fn time(&mut self, row: &Row, column: &str) -> Option<Written> {
        let text = self.cell(row, column).map_or("", |(text, _)| text);
        let Some(written) = sample_time::read(text) else {
            let message = format!(
                "{:?} is no time of a sample; write a date-time such as 2026-03-09T07:30, or decimal hours such as 7.5",
                short(text)
            );
            self.tell(Code::UnreadableTime, row, column, message);
            return None;
        };
        let way = *self.way.get_or_insert(written.way());
        if way != written.way() {
            let message = format!(
                "{:?} is {}, but the first time of the table is {}; write all times in one way",
                short(text),
                written.way().word(),
                way.word()
            );
            self.tell(Code::SampleTimesMixed, row, column, message);
            return None;
        }
        Some(written)
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

    fn series(&mut self, key: Key, mut rows: Vec<ReadRow>) -> Series {
        let origin = sample_time::origin(rows.iter().map(|row| row.time));
        let hours = |written: Written| written.hours_since(origin);
        rows.sort_by(|a, b| hours(a.time).total_cmp(&hours(b.time)));
        let mut samples: Vec<Sample> = Vec::new();
        for row in &rows {
            let time_h = hours(row.time);
            let last = samples.last();
            if last.is_some_and(|last| (last.time_h - time_h).abs() < 1e-9) {
                let message = format!(
                    "subject {:?} has two samples at one time; the first is used",
                    short(&key.subject)
                );
                self.tell_at(Code::SampleTwice, row.origin.clone(), message);
                continue;
            }
            let waking_h = match row.waking.map(hours) {
                Some(waking_h) => self.own_waking(row, time_h, waking_h),
                // The table says it once for the samples of a day.
                None => last
                    .and_then(|last| last.waking_h)
                    .filter(|waking_h| time_h - waking_h < DAY_H),
            };
            samples.push(Sample {
                time_h,
                nmol_l: row.nmol_l,
                below_limit: row.below_limit,
                waking_h,
            });
        }
        Series {
            subject: key.subject,
            matrix: key.matrix,
            assay: key.assay,
            group: key.group,
            samples,
        }
    }

    /// The waking of a row, where it can be that of its sample.
    fn own_waking(&mut self, row: &ReadRow, time_h: f64, waking_h: f64) -> Option<f64> {
        let after = time_h - waking_h;
        if (0.0..DAY_H).contains(&after) {
            return Some(waking_h);
        }
        let message = if after < 0.0 {
            "the sample was taken before its waking time; give the waking that came before it"
                .to_owned()
        } else {
            format!("the waking time lies {after:.0} h before the sample; give that of its own day")
        };
        self.tell_at(Code::SampleWaking, row.waking_origin.clone(), message);
        None
    }

    fn tell_at(&mut self, code: Code, origin: Origin, message: String) {
        self.diagnostics
            .push(Diagnostic::new(code, origin, message));
    }
}
