//! Tables of lines, shifts, windows and findings as Parquet, written by polars.
//!
//! Column names are those of `result.json`; a modelled number is three columns: median, `_p05`, `_p95`.

use crate::report::document::{BandValue, CasedBand, DayRow, ScreenReport};
use polars::prelude::{Column, DataFrame, NamedFrom, ParquetWriter, PolarsError, Series};
use std::io::Write;

/// Makes one table of a report.
pub type TableOf = fn(&ScreenReport) -> Result<DataFrame, PolarsError>;

/// A modelled number of a date.
type DayBand = fn(&DayRow) -> BandValue;
/// A modelled number of a date that may have two daylight cases.
type DayCasedBand = fn(&DayRow) -> CasedBand;
/// Markers of a date.
type DayMarkers = fn(&DayRow) -> &[(BandValue, Option<&'static str>)];

/// The tables, each with its file name.
pub const TABLES: [(&str, TableOf); 4] = [
    ("lines.parquet", lines),
    ("shifts.parquet", shifts),
    ("windows.parquet", windows),
    ("findings.parquet", findings),
];

/// A table could not be written.
#[derive(Debug, thiserror::Error)]
#[error("the table cannot be written as Parquet: {0}")]
pub struct TableError(#[from] PolarsError);

/// Writes one of the tables.
///
/// # Errors
///
/// [`TableError`] with the reason that polars gives, which may be the writer's.
pub fn write(table: TableOf, report: &ScreenReport, out: impl Write) -> Result<(), TableError> {
    let mut frame = table(report)?;
    ParquetWriter::new(out)
        .with_row_group_size(Some(100_000))
        .finish(&mut frame)?;
    Ok(())
}

fn column<'a, T, Phantom: ?Sized>(name: &str, values: T) -> Column
where
    Series: NamedFrom<T, Phantom>,
    T: 'a,
{
    Series::new(name.into(), values).into()
}

fn frame(columns: Vec<Column>) -> Result<DataFrame, PolarsError> {
    let height = columns.first().map_or(0, Column::len);
    DataFrame::new(height, columns)
}

/// Three columns of a modelled number.
fn banded(name: &str, values: &[BandValue]) -> [Column; 3] {
    let of = |part: fn(&BandValue) -> f64| values.iter().map(part).collect::<Vec<f64>>();
    [
        column(name, of(|v| v.median)),
        column(&format!("{name}_p05"), of(|v| v.p05)),
        column(&format!("{name}_p95"), of(|v| v.p95)),
    ]
}

/// Three columns of a number that may have two daylight cases; then its median is missing.
fn cased(name: &str, values: &[CasedBand]) -> [Column; 3] {
    let of =
        |part: fn(&BandValue) -> f64| values.iter().map(|v| part(&v.all)).collect::<Vec<f64>>();
    [
        column(
            name,
            values.iter().map(CasedBand::median).collect::<Vec<_>>(),
        ),
        column(&format!("{name}_p05"), of(|v| v.p05)),
        column(&format!("{name}_p95"), of(|v| v.p95)),
    ]
}

fn count(value: usize) -> i64 {
    i64::try_from(value).unwrap_or(i64::MAX)
}

/// One row per line and date.
fn lines(report: &ScreenReport) -> Result<DataFrame, PolarsError> {
    let rows: Vec<_> = report
        .lines
        .iter()
        .flat_map(|line| line.days.iter().map(move |day| (line, day)))
        .collect();
    let text = |value: fn(&(&crate::report::LineSection, &DayRow)) -> String| {
        rows.iter().map(value).collect::<Vec<String>>()
    };
    let of = |value: DayBand| rows.iter().map(|(_, day)| value(day)).collect::<Vec<_>>();
    // One median where the date has one marker in one case; otherwise the JSON holds them all.
    let marker = |markers: DayMarkers| {
        rows.iter()
            .map(|(_, day)| match markers(day) {
                [(value, None)] => Some(value.median),
                _ => None,
            })
            .collect::<Vec<Option<f64>>>()
    };
    let mut columns = vec![
        column(
            "line",
            rows.iter()
                .map(|(line, _)| i64::from(line.number))
                .collect::<Vec<i64>>(),
        ),
        column("subject", text(|(line, _)| line.subject.clone())),
        column("date", text(|(_, day)| day.date.clone())),
        column("cbtmin", marker(|day| &day.cbtmin)),
        column("dlmo", marker(|day| &day.dlmo)),
    ];
    let values: [(&str, DayBand); 6] = [
        ("sleep_h", |d| d.sleep_h),
        ("mesor", |d| d.mesor),
        ("amplitude", |d| d.amplitude),
        ("amplitude_ratio", |d| d.amplitude_ratio),
        ("peak", |d| d.peak),
        ("nadir", |d| d.nadir),
    ];
    for (name, value) in values {
        columns.extend(banded(name, &of(value)));
    }
    let times: [(&str, DayCasedBand); 5] = [
        ("acrophase_h", |d| d.acrophase_h),
        ("peak_time", |d| d.peak_time),
        ("nadir_time", |d| d.nadir_time),
        ("quiescent_start", |d| d.quiescent_start),
        ("quiescent_end", |d| d.quiescent_end),
    ];
    for (name, value) in times {
        let values: Vec<CasedBand> = rows.iter().map(|(_, day)| value(day)).collect();
        columns.extend(cased(name, &values));
    }
    frame(columns)
}

/// One row per worker and shift.
fn shifts(report: &ScreenReport) -> Result<DataFrame, PolarsError> {
    let rows: Vec<_> = report
        .workers
        .iter()
        .flat_map(|worker| worker.shifts.iter().map(move |shift| (worker, shift)))
        .collect();
    frame(vec![
        column(
            "worker",
            rows.iter().map(|(w, _)| w.id.clone()).collect::<Vec<_>>(),
        ),
        column(
            "team",
            rows.iter().map(|(w, _)| w.team.clone()).collect::<Vec<_>>(),
        ),
        column(
            "line",
            rows.iter()
                .map(|(w, _)| i64::from(w.line))
                .collect::<Vec<_>>(),
        ),
        column(
            "start",
            rows.iter()
                .map(|(_, s)| s.start.clone())
                .collect::<Vec<_>>(),
        ),
        column(
            "end",
            rows.iter().map(|(_, s)| s.end.clone()).collect::<Vec<_>>(),
        ),
        column(
            "hours",
            rows.iter().map(|(_, s)| s.hours).collect::<Vec<_>>(),
        ),
        column(
            "class",
            rows.iter()
                .map(|(_, s)| s.class.clone())
                .collect::<Vec<_>>(),
        ),
        column(
            "night_h",
            rows.iter().map(|(_, s)| s.night_h).collect::<Vec<_>>(),
        ),
        column(
            "code",
            rows.iter().map(|(_, s)| s.code.clone()).collect::<Vec<_>>(),
        ),
        column(
            "origin",
            rows.iter()
                .map(|(_, s)| s.origin.clone())
                .collect::<Vec<_>>(),
        ),
    ])
}

/// One row per worker and recovery window.
fn windows(report: &ScreenReport) -> Result<DataFrame, PolarsError> {
    let rows: Vec<_> = report
        .workers
        .iter()
        .flat_map(|worker| worker.windows.iter().map(move |window| (worker, window)))
        .collect();
    frame(vec![
        column(
            "worker",
            rows.iter().map(|(w, _)| w.id.clone()).collect::<Vec<_>>(),
        ),
        column(
            "line",
            rows.iter()
                .map(|(w, _)| i64::from(w.line))
                .collect::<Vec<_>>(),
        ),
        column(
            "start",
            rows.iter()
                .map(|(_, r)| r.start.clone())
                .collect::<Vec<_>>(),
        ),
        column(
            "end",
            rows.iter().map(|(_, r)| r.end.clone()).collect::<Vec<_>>(),
        ),
        column(
            "hours",
            rows.iter().map(|(_, r)| r.hours).collect::<Vec<_>>(),
        ),
        column(
            "after",
            rows.iter()
                .map(|(_, r)| r.after.clone())
                .collect::<Vec<_>>(),
        ),
        column(
            "before",
            rows.iter()
                .map(|(_, r)| r.before.clone())
                .collect::<Vec<_>>(),
        ),
        column(
            "class",
            rows.iter()
                .map(|(_, r)| r.class.word().to_owned())
                .collect::<Vec<_>>(),
        ),
        column(
            "reasons",
            rows.iter()
                .map(|(_, r)| r.reasons.join("; "))
                .collect::<Vec<_>>(),
        ),
    ])
}

/// One row per finding.
fn findings(report: &ScreenReport) -> Result<DataFrame, PolarsError> {
    let rows = &report.findings;
    let text = |value: fn(&crate::report::FindingRow) -> String| {
        rows.iter().map(value).collect::<Vec<String>>()
    };
    frame(vec![
        column("code", text(|f| f.code.to_owned())),
        column("attention", text(|f| f.attention.word().to_owned())),
        column("kind", text(|f| f.kind.to_owned())),
        column(
            "worker",
            rows.iter().map(|f| f.worker.clone()).collect::<Vec<_>>(),
        ),
        column(
            "line",
            rows.iter()
                .map(|f| f.line.map(i64::from))
                .collect::<Vec<_>>(),
        ),
        column("start", text(|f| f.start.clone())),
        column("end", text(|f| f.end.clone())),
        column(
            "measured",
            rows.iter().map(|f| f.measured).collect::<Vec<_>>(),
        ),
        column("limit", rows.iter().map(|f| f.limit).collect::<Vec<_>>()),
        column("unit", text(|f| f.unit.clone())),
        column(
            "members_hold",
            rows.iter()
                .map(|f| f.members.map(|m| count(m.0)))
                .collect::<Vec<_>>(),
        ),
        column(
            "members_of",
            rows.iter()
                .map(|f| f.members.map(|m| count(m.1)))
                .collect::<Vec<_>>(),
        ),
        column("rules", text(|f| f.rules.join(" "))),
        column("source", text(|f| f.source.clone())),
        column("rows", text(|f| f.rows.join(" "))),
        column(
            "occurrences",
            rows.iter()
                .map(|f| count(f.occurrences))
                .collect::<Vec<_>>(),
        ),
        column("message", text(|f| f.message.clone())),
    ])
}
