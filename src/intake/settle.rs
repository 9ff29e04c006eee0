//! Rows of all files become one roster: duplicates, overlaps, order, zone.

use super::Reading;
use super::long_table::{RowShift, Rows};
use crate::diagnostic::{Code, Diagnostic, Level};
use crate::roster::{DutyKind, Roster, Shift, UnknownDates, Worker, WorkerId};
use crate::source::Origin;
use chrono_tz::Tz;
use std::collections::{BTreeMap, BTreeSet};

/// Overlaps of at most this many minutes are joined. Common practice, no source.
const JOINED_OVERLAP_MIN: i64 = 15;

/// Puts rows together; returns the roster, unless nothing is usable, and the number of exact duplicates.
pub(super) fn settle(
    tables: Vec<Rows>,
    files: &[&str],
    reading: &Reading,
    diagnostics: &mut Vec<Diagnostic>,
) -> (Option<Roster>, usize) {
    note_order(&tables, diagnostics);
    let mut rows: Vec<RowShift> = Vec::new();
    let mut lost = Vec::new();
    for table in tables {
        rows.extend(table.shifts);
        lost.extend(table.lost);
    }
    let rows_read = rows.len();
    rows.retain(|row| in_range(row, reading));
    rows.sort_by(|a, b| key(a).cmp(&key(b)));
    let duplicates = drop_duplicates(&mut rows, diagnostics);
    let mut names: BTreeSet<String> = rows.iter().map(|row| row.worker.clone()).collect();
    names.extend(lost.iter().map(|row| row.worker.clone()));
    note_near_twins(&rows, &names, files, diagnostics);
    let mut unknown: BTreeSet<(String, Option<chrono::NaiveDate>, Option<chrono::NaiveDate>)> =
        lost.into_iter()
            .flat_map(|row| {
                let unplaced = row.dates.is_empty().then_some((None, None));
                let dates = row
                    .dates
                    .into_iter()
                    .map(|(first, last)| (Some(first), Some(last)));
                let all: Vec<_> = dates.chain(unplaced).collect();
                all.into_iter()
                    .map(move |(first, last)| (row.worker.clone(), first, last))
            })
            .collect();
    let overlapping = overlaps(&rows, diagnostics);
    for &index in &overlapping {
        let row = &rows[index];
        let date =
            |at: chrono::DateTime<chrono::Utc>| Some(at.with_timezone(&row.zone).date_naive());
        unknown.insert((row.worker.clone(), date(row.start), date(row.end)));
    }
    let mut index = 0;
    rows.retain(|_| {
        index += 1;
        !overlapping.contains(&(index - 1))
    });
    if span_is_too_long(&rows, diagnostics) {
        return (None, duplicates);
    }
    let Some(zone) = zone(&rows, files, diagnostics) else {
        if rows_read > 0 && rows.is_empty() {
            diagnostics.push(Diagnostic::new(
                Code::NothingInRange,
                whole_input(files),
                "no shift lies between the first and the last date asked for",
            ));
        }
        return (None, duplicates);
    };
    note_first_rest(files, diagnostics);
    (Some(roster(rows, &names, unknown, zone)), duplicates)
}

/// Equal shifts stand together whatever the order of the rows; of two that differ by break only, the shorter break comes first.
type Key<'a> = (
    &'a str,
    i64,
    i64,
    DutyKind,
    Option<u16>,
    crate::source::OriginId,
);

fn key(row: &RowShift) -> Key<'_> {
    (
        &row.worker,
        row.start.timestamp(),
        row.end.timestamp(),
        row.kind,
        row.break_min,
        row.origin,
    )
}

fn in_range(row: &RowShift, reading: &Reading) -> bool {
    let date = row.start.with_timezone(&row.zone).date_naive();
    reading.first_date.is_none_or(|first| first <= date)
        && reading.last_date.is_none_or(|last| date <= last)
}

fn note_order(tables: &[Rows], diagnostics: &mut Vec<Diagnostic>) {
    for table in tables {
        let mut last: BTreeMap<&str, i64> = BTreeMap::new();
        let unsorted = table.shifts.iter().find(|row| {
            let at = row.start.timestamp();
            last.insert(&row.worker, at)
                .is_some_and(|before| at < before)
        });
        if let Some(row) = unsorted {
            diagnostics.push(Diagnostic::new(
                Code::UnsortedRows,
                row.place.clone(),
                "rows are not in order of time; they are sorted",
            ));
        }
    }
}

fn drop_duplicates(rows: &mut Vec<RowShift>, diagnostics: &mut Vec<Diagnostic>) -> usize {
    let before = rows.len();
    let mut kept: Vec<RowShift> = Vec::with_capacity(before);
    for row in rows.drain(..) {
        match kept.last() {
            Some(last) if same_shift(last, &row) => {
                diagnostics.push(Diagnostic::new(
                    Code::ExactDuplicate,
                    row.place.clone(),
                    format!("the same shift as in row {}; counted once", last.origin.row),
                ));
            }
            _ => kept.push(row),
        }
    }
    *rows = kept;
    before - rows.len()
}

fn same_shift(a: &RowShift, b: &RowShift) -> bool {
    a.worker == b.worker && a.start == b.start && a.end == b.end && a.kind == b.kind
}

/// Places of rows that overlap another counted row of the same worker by more than a handover.
fn overlaps(rows: &[RowShift], diagnostics: &mut Vec<Diagnostic>) -> BTreeSet<usize> {
    let mut both = BTreeSet::new();
    let mut reach: Option<usize> = None;
    for (index, row) in rows.iter().enumerate() {
        if !row.kind.counts() {
            continue;
        }
        if let Some(earlier) = reach.filter(|earlier| rows[*earlier].worker == row.worker) {
            let before = &rows[earlier];
            let minutes = (before.end.min(row.end) - row.start).num_minutes();
            if minutes > JOINED_OVERLAP_MIN {
                both.extend([earlier, index]);
                diagnostics.push(Diagnostic::new(
                    Code::Overlap,
                    row.place.clone(),
                    format!(
                        "overlaps the shift of row {} by {minutes} min; neither is used",
                        before.origin.row
                    ),
                ));
            } else if minutes > 0 {
                diagnostics.push(
                    Diagnostic::new(
                        Code::Overlap,
                        row.place.clone(),
                        format!(
                            "overlaps the shift of row {} by {minutes} min; the two are joined",
                            before.origin.row
                        ),
                    )
                    .at(Level::Warning),
                );
            }
            if row.end <= before.end {
                continue;
            }
        }
        reach = Some(index);
    }
    both
}

/// Names that differ only by case or spaces, each with its first row.
fn note_near_twins(
    rows: &[RowShift],
    names: &BTreeSet<String>,
    files: &[&str],
    diagnostics: &mut Vec<Diagnostic>,
) {
    let mut folded: BTreeMap<String, Vec<&str>> = BTreeMap::new();
    for name in names {
        let plain: String = name.chars().filter(|c| !c.is_whitespace()).collect();
        folded.entry(plain.to_lowercase()).or_default().push(name);
    }
    for twins in folded.into_values().filter(|twins| twins.len() > 1) {
        let said: Vec<String> = twins
            .iter()
            .map(|name| {
                let row = rows
                    .iter()
                    .filter(|row| row.worker == *name)
                    .map(|row| row.origin.row)
                    .min();
                match row {
                    Some(row) => format!("{name:?} (row {row})"),
                    None => format!("{name:?}"),
                }
            })
            .collect();
        diagnostics.push(Diagnostic::new(
            Code::NearTwinWorkers,
            whole_input(files),
            format!(
                "{} differ only by case or spaces and are kept apart: rest between their shifts is not judged; if they are one person, write the name one way",
                said.join(" and ")
            ),
        ));
    }
}

/// Years between the first and the last shift that are believed.
const LONGEST_SPAN_YEARS: i64 = 20;

/// A slip in a year would make a roster of decades: refused, with the row that lies furthest from the middle one.
fn span_is_too_long(rows: &[RowShift], diagnostics: &mut Vec<Diagnostic>) -> bool {
    let mut starts: Vec<&RowShift> = rows.iter().collect();
    starts.sort_by_key(|row| row.start);
    let (Some(first), Some(last)) = (starts.first(), starts.last()) else {
        return false;
    };
    let years = (last.start - first.start).num_days() / 365;
    if years <= LONGEST_SPAN_YEARS {
        return false;
    }
    let middle = starts[starts.len() / 2].start;
    let far = if middle - first.start > last.start - middle {
        first
    } else {
        last
    };
    diagnostics.push(Diagnostic::new(
        Code::SpanTooLong,
        far.place.clone(),
        format!("the roster spans {years} years, more than {LONGEST_SPAN_YEARS}; check the year of this row"),
    ));
    true
}

/// The zone of most rows; a zone given from outside has already filled the rows that name none.
fn zone(rows: &[RowShift], files: &[&str], diagnostics: &mut Vec<Diagnostic>) -> Option<Tz> {
    let mut counts: BTreeMap<&'static str, (usize, Tz)> = BTreeMap::new();
    for row in rows {
        counts.entry(row.zone.name()).or_insert((0, row.zone)).0 += 1;
    }
    let names: Vec<&str> = counts.keys().copied().collect();
    let several = names.len() > 1;
    let most = counts
        .values()
        .max_by_key(|(count, _)| *count)
        .map(|(_, zone)| *zone)?;
    if several {
        diagnostics.push(Diagnostic::new(
            Code::SeveralZones,
            whole_input(files),
            format!(
                "rows name several zones ({}); instants are right, but dates and clock windows are read in {most}",
                names.join(", ")
            ),
        ));
    }
    Some(most)
}

fn whole_input(files: &[&str]) -> Origin {
    Origin::File {
        file: files.first().copied().unwrap_or_default().to_owned(),
    }
}

fn note_first_rest(files: &[&str], diagnostics: &mut Vec<Diagnostic>) {
    diagnostics.push(Diagnostic::new(
        Code::FirstRestUnknown,
        whole_input(files),
        "no shifts before the first day are known; the rest before each worker's first shift is not judged",
    ));
}

fn roster(
    rows: Vec<RowShift>,
    names: &BTreeSet<String>,
    unknown: BTreeSet<(String, Option<chrono::NaiveDate>, Option<chrono::NaiveDate>)>,
    zone: Tz,
) -> Roster {
    let ids: BTreeMap<&str, WorkerId> = (0..)
        .zip(names)
        .map(|(index, name)| (name.as_str(), WorkerId(index)))
        .collect();
    let mut workers: Vec<Worker> = names
        .iter()
        .map(|name| Worker {
            name: name.clone(),
            team: None,
        })
        .collect();
    let mut shifts = Vec::with_capacity(rows.len());
    for row in rows {
        let worker = ids[row.worker.as_str()];
        if let Some(team) = row.team {
            workers[worker.index()].team.get_or_insert(team);
        }
        shifts.push(Shift {
            worker,
            start: row.start,
            end: row.end,
            zone: row.zone,
            kind: row.kind,
            code: row.code,
            break_min: row.break_min,
            commute_min: row.commute_min,
            origin: row.origin,
        });
    }
    let unknown = unknown
        .into_iter()
        .map(|(name, first, last)| UnknownDates {
            worker: ids[name.as_str()],
            first,
            last,
        })
        .collect();
    Roster {
        workers,
        shifts,
        unknown,
        zone,
    }
}
