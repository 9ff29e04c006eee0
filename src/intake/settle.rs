//! Rows of all files become one roster: duplicates, overlaps, order, zone.

use super::Reading;
use super::long_table::{RowShift, Rows};
use crate::diagnostic::{Code, Diagnostic, Level};
use crate::roster::{Roster, Shift, UnknownDates, Worker, WorkerId};
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
    rows.retain(|row| in_range(row, reading));
    rows.sort_by(|a, b| key(a).cmp(&key(b)));
    let duplicates = drop_duplicates(&mut rows, diagnostics);
    let mut names: BTreeSet<String> = rows.iter().map(|row| row.worker.clone()).collect();
    names.extend(lost.iter().map(|row| row.worker.clone()));
    note_near_twins(&names, files, diagnostics);
    let mut unknown: BTreeSet<(String, Option<chrono::NaiveDate>, Option<chrono::NaiveDate>)> =
        lost.into_iter()
            .map(|row| {
                let (first, last) = row.dates.unzip();
                (row.worker, first, last)
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
    let Some(zone) = zone(&rows, reading) else {
        return (None, duplicates);
    };
    note_first_rest(files, diagnostics);
    (Some(roster(rows, &names, unknown, zone)), duplicates)
}

type Key<'a> = (&'a str, i64, i64, crate::source::OriginId);

fn key(row: &RowShift) -> Key<'_> {
    (
        &row.worker,
        row.start.timestamp(),
        row.end.timestamp(),
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

fn note_near_twins(names: &BTreeSet<String>, files: &[&str], diagnostics: &mut Vec<Diagnostic>) {
    let mut folded: BTreeMap<String, &str> = BTreeMap::new();
    for name in names {
        let plain: String = name
            .chars()
            .filter(|c| !c.is_whitespace())
            .collect::<String>()
            .to_lowercase();
        if folded.insert(plain, name).is_some() {
            diagnostics.push(Diagnostic::new(
                Code::NearTwinWorkers,
                Origin::File {
                    file: files.first().copied().unwrap_or_default().to_owned(),
                },
                "two worker names differ only by case or spaces; they are kept apart",
            ));
        }
    }
}

/// The zone given, or the zone of most rows.
fn zone(rows: &[RowShift], reading: &Reading) -> Option<Tz> {
    let mut counts: BTreeMap<&'static str, (usize, Tz)> = BTreeMap::new();
    for row in rows {
        counts.entry(row.zone.name()).or_insert((0, row.zone)).0 += 1;
    }
    let most = counts
        .into_values()
        .max_by_key(|(count, _)| *count)
        .map(|(_, zone)| zone)?;
    Some(reading.zone.unwrap_or(most))
}

fn note_first_rest(files: &[&str], diagnostics: &mut Vec<Diagnostic>) {
    diagnostics.push(Diagnostic::new(
        Code::FirstRestUnknown,
        Origin::File {
            file: files.first().copied().unwrap_or_default().to_owned(),
        },
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
