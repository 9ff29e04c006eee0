//! Light logs: measured light at the eye, one row per reading.
//!
//! Columns, in any order and case: `worker`, `time`, `lux`.
//! `time` is a date-time by the local clock of the roster, or one with its offset; `lux` is photopic illuminance at the eye.

use super::clock_text::{self, Moment};
use super::table::{Row, Table, short};
use super::{Input, table_of};
use crate::diagnostic::{self, Code, Diagnostic};
use crate::roster::Roster;
use crate::timeline::{LightLogs, civil};
use crate::units::Lux;
use chrono::{DateTime, Utc};

/// The columns, each with the words that files use for it. Common practice, no source.
const COLUMNS: [&[&str]; 3] = [
    &["worker", "subject", "id", "participant"],
    &["time", "datetime", "timestamp"],
    &["lux", "light", "illuminance"],
];

/// Reads a light log of workers of a roster, and everything that is wrong with it in one pass.
///
/// # Example
///
/// ```
/// use acroshift::intake::{light_log, read, Input, Reading};
/// let csv = b"worker,start,end\nA,2026-03-09T22:00,2026-03-10T06:00\n";
/// let reading = Reading { zone: Some(chrono_tz::UTC), ..Reading::default() };
/// let roster = read(&[Input { name: "ward.csv", bytes: csv }], &reading).roster.expect("the file is in order");
/// let log = b"worker,time,lux\nA,2026-03-09T22:00,180\nA,2026-03-09T23:00,-5\n";
/// let (logs, diagnostics) = light_log::read(&Input { name: "light.csv", bytes: log }, &roster);
/// assert!(logs.hold("A"));
/// assert_eq!(diagnostics[0].code.name(), "light-unusable");
/// ```
pub fn read(input: &Input<'_>, roster: &Roster) -> (LightLogs, Vec<Diagnostic>) {
    let mut diagnostics = Vec::new();
    let mut logs = LightLogs::default();
    if let Some(table) = table_of(input, &mut diagnostics)
        && let Some(places) = places(&table, &mut diagnostics)
    {
        for row in &table.rows {
            match reading(row, places, roster) {
                Ok((worker, at, lux)) => logs.add(worker, at, lux),
                Err((code, column, message)) => {
                    let origin = table.origin(row, places[column]);
                    diagnostics.push(Diagnostic::new(code, origin, message));
                }
            }
        }
    }
    diagnostic::sort(&mut diagnostics);
    (logs, diagnostics)
}

/// Where the three columns stand.
fn places(table: &Table, diagnostics: &mut Vec<Diagnostic>) -> Option<[usize; 3]> {
    let titles: Vec<String> = table
        .header
        .cells
        .iter()
        .map(|title| title.trim().to_lowercase())
        .collect();
    let found = COLUMNS.map(|words| {
        titles
            .iter()
            .position(|title| words.contains(&title.as_str()))
    });
    if let [Some(worker), Some(time), Some(lux)] = found {
        return Some([worker, time, lux]);
    }
    diagnostics.push(Diagnostic::new(
        Code::MissingColumn,
        table.origin(&table.header, 0),
        "a light log needs the columns worker, time and lux".to_owned(),
    ));
    None
}

type Refused = (Code, usize, String);

fn reading<'r>(
    row: &'r Row,
    places: [usize; 3],
    roster: &Roster,
) -> Result<(&'r str, DateTime<Utc>, Lux), Refused> {
    let cell = |column: usize| row.cells.get(places[column]).map_or("", |text| text.trim());
    let worker = cell(0);
    if roster.worker_named(worker).is_none() {
        let message = format!(
            "the roster has no worker {:?}; the reading is not used",
            short(worker)
        );
        return Err((Code::LightWorker, 0, message));
    }
    let at = match clock_text::moment(cell(1)) {
        Some(Moment::Fixed(at)) => Some(at.with_timezone(&Utc)),
        Some(Moment::Local(date, time)) => {
            clock_text::local(date, time).map(|local| civil::instant_of(roster.zone, local))
        }
        None => None,
    };
    let at = at.ok_or_else(|| {
        let message = format!(
            "{:?} is no date-time; write one such as 2026-03-09T22:06",
            short(cell(1))
        );
        (Code::UnreadableTime, 1, message)
    })?;
    let lux = cell(2).parse::<f64>().ok();
    let lux = lux.and_then(|lux| Lux::new(lux).ok()).ok_or_else(|| {
        let message = format!(
            "{:?} is no illuminance from 0 to 200000 lux",
            short(cell(2))
        );
        (Code::LightUnusable, 2, message)
    })?;
    Ok((worker, at, lux))
}
