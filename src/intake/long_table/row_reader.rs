//! One row of a long table: which worker, which instants, and what is wrong with it?

use super::{LostRow, RowShift};
use crate::diagnostic::{Code, Diagnostic, Level};
use crate::intake::Reading;
use crate::intake::clock_text::{self, DayTime, Moment};
use crate::intake::columns::{Column, Columns};
use crate::intake::table::{Row, Table, short};
use crate::intake::zone_name::zone_named;
use crate::roster::DutyKind;
use crate::source::{FileId, OriginId};
use chrono::{DateTime, Duration, NaiveDate, NaiveDateTime, NaiveTime, Offset, TimeZone, Utc};
use chrono_tz::Tz;

/// Reads one row; every problem of the row is told.
pub(super) struct RowReader<'a> {
    pub(super) table: &'a Table,
    pub(super) columns: &'a Columns,
    pub(super) row: &'a Row,
    pub(super) reading: &'a Reading,
    pub(super) diagnostics: &'a mut Vec<Diagnostic>,
}

impl RowReader<'_> {
    pub(super) fn shift(&mut self, file: FileId) -> Option<RowShift> {
        let counted = self.field_count();
        let worker = self.worker();
        let zone = self.zone();
        let kind = self.kind();
        let break_min = self.minutes(Column::Break);
        let commute_min = self.minutes(Column::Commute);
        let (start, end) = self.times(zone?)?;
        let (start_at, end_at) = (start.at, end.at);
        let break_min = self.checked_break(break_min?, end_at - start_at)?;
        // Leave and absence may last for weeks.
        if kind.is_none_or(|kind| kind.counts() || kind.interrupts()) {
            self.tell_length(start_at, end_at, zone?)?;
        }
        let text = |column| {
            self.columns
                .cell(self.row, column)
                .map(|(t, _)| t.to_owned())
        };
        counted.then_some(())?;
        Some(RowShift {
            worker: worker?,
            team: text(Column::Team),
            start: start_at,
            end: end_at,
            zone: zone?,
            kind: kind?,
            code: text(Column::Code),
            break_min,
            commute_min: commute_min?,
            origin: OriginId {
                file,
                row: self.row.number(),
            },
            place: self.table.origin(self.row, start.column),
        })
    }

    /// Leave, absence or rest without times of day: no duty, and nothing to read.
    pub(super) fn is_day_off_without_times(&self) -> bool {
        let kind = self
            .columns
            .cell(self.row, Column::Kind)
            .and_then(|(word, _)| DutyKind::named(word));
        let off = kind.is_some_and(|kind| !kind.counts() && !kind.interrupts());
        let whole_date = |column| match self.columns.cell(self.row, column) {
            None => true,
            Some((text, _)) => clock_text::date(text).is_some(),
        };
        off && whole_date(Column::Start) && whole_date(Column::End)
    }

    /// What is known of a row that is not used.
    pub(super) fn lost(&self) -> Option<LostRow> {
        let (worker, _) = self.columns.cell(self.row, Column::Worker)?;
        let named: Vec<NaiveDate> = [Column::Date, Column::Start, Column::End]
            .into_iter()
            .filter_map(|column| self.columns.cell(self.row, column))
            .filter_map(|(text, _)| clock_text::date(text.split(['T', 't', ' ']).next()?))
            .collect();
        Some(LostRow {
            worker: worker.to_owned(),
            // A night that begins on the date reaches into the next one.
            dates: named
                .into_iter()
                .map(|date| (date, date.succ_opt().unwrap_or(date)))
                .collect(),
        })
    }

    fn tell(&mut self, code: Code, column: usize, message: impl Into<String>) {
        let origin = self.table.origin(self.row, column);
        self.diagnostics
            .push(Diagnostic::new(code, origin, message));
    }

    fn field_count(&mut self) -> bool {
        let (found, expected) = (self.row.cells.len(), self.table.header.cells.len());
        if found == expected {
            return true;
        }
        self.tell(
            Code::RaggedRow,
            found.min(expected).max(1) - 1,
            format!("row has {found} fields, the header has {expected}; row not used; quote text that holds the delimiter"),
        );
        false
    }

    fn worker(&mut self) -> Option<String> {
        let Some((name, _)) = self.columns.cell(self.row, Column::Worker) else {
            let place = self.columns.place(Column::Worker).unwrap_or(0);
            self.tell(
                Code::MissingWorker,
                place,
                "shift without a worker; row not used",
            );
            return None;
        };
        Some(name.to_owned())
    }

    fn zone(&mut self) -> Option<Tz> {
        let Some((name, place)) = self.columns.cell(self.row, Column::Zone) else {
            if self.reading.zone.is_none() {
                let place = self.columns.place(Column::Zone).unwrap_or(0);
                self.tell(
                    Code::NoZone,
                    place,
                    "the row has no time zone and none was given by --zone; row not used",
                );
            }
            return self.reading.zone;
        };
        match zone_named(name) {
            Ok(zone) => Some(zone),
            Err(advice) => {
                let message = format!("{advice}; row not used");
                self.tell(Code::UnknownZone, place, message);
                None
            }
        }
    }

    fn kind(&mut self) -> Option<DutyKind> {
        let Some((word, place)) = self.columns.cell(self.row, Column::Kind) else {
            return Some(DutyKind::Work);
        };
        let kind = DutyKind::named(word);
        if kind.is_none() {
            let known: Vec<_> = DutyKind::words().collect();
            self.tell(
                Code::UnknownKind,
                place,
                format!(
                    "kind {:?} is not known; expected one of {}; row not used",
                    short(word),
                    known.join(", ")
                ),
            );
        }
        kind
    }

    /// A number of minutes; the outer `None` is an error, the inner one a blank.
    #[expect(
        clippy::option_option,
        reason = "a blank cell and a wrong one are different answers"
    )]
    fn minutes(&mut self, column: Column) -> Option<Option<u16>> {
        let Some((text, place)) = self.columns.cell(self.row, column) else {
            return Some(None);
        };
        let (code, longest) = match column {
            Column::Commute => (Code::BadCommute, 240),
            _ => (Code::BadBreak, u16::MAX),
        };
        let minutes = text.parse::<u16>().ok().filter(|m| *m <= longest);
        if minutes.is_none() {
            let text = short(text);
            let message =
                format!("{text:?} is no whole number of minutes that can be used; row not used");
            self.tell(code, place, message);
        }
        minutes.map(Some)
    }

    #[expect(
        clippy::option_option,
        reason = "a blank cell and a wrong one are different answers"
    )]
    fn checked_break(&mut self, break_min: Option<u16>, length: Duration) -> Option<Option<u16>> {
        match break_min {
            Some(minutes) if i64::from(minutes) >= length.num_minutes() => {
                let place = self.columns.place(Column::Break).unwrap_or(0);
                self.tell(
                    Code::BadBreak,
                    place,
                    format!(
                        "break of {minutes} min in a shift of {} min; row not used",
                        length.num_minutes()
                    ),
                );
                None
            }
            other => Some(other),
        }
    }

    /// Start and end as instants.
    fn times(&mut self, zone: Tz) -> Option<(Edge, Edge)> {
        let day = self.day();
        let start = self.moment(Column::Start, day);
        let end = self.moment(Column::End, day);
        let (start, end) = (start?, end?);
        self.tell_twenty_four(&start, Level::Warning);
        self.tell_twenty_four(&end, Level::Note);
        let one_date = matches!(day, Day::Read(_));
        let (end, moved) = end.on_the_next_date_if_before(&start, one_date);
        let start_at = self.instant(&start, zone);
        let end_at = self.instant(&end, zone);
        let (start_at, end_at) = (start_at?, end_at?);
        if moved {
            self.tell_next_day(end.column, end_at - start_at);
        }
        let written = |moment: &Written| short(&self.row.cells[moment.column]);
        if end_at == start_at {
            let message = format!(
                "start equals end ({}): 0 h and 24 h cannot be told apart; row not used; write the end as 24:00 or give two dates",
                written(&start)
            );
            self.tell(Code::StartEqualsEnd, end.column, message);
            return None;
        }
        if end_at < start_at {
            let message = format!(
                "end {} lies before start {}; row not used",
                written(&end),
                written(&start)
            );
            self.tell(Code::EndBeforeStartDated, end.column, message);
            return None;
        }
        Some((
            Edge {
                at: start_at,
                column: start.column,
            },
            Edge {
                at: end_at,
                column: end.column,
            },
        ))
    }

    fn tell_twenty_four(&mut self, written: &Written, level: Level) {
        if let Moment::Local(date, DayTime::EndOfDay) = written.moment {
            let origin = self.table.origin(self.row, written.column);
            let message = format!("24:00 read as 00:00 of the day after {date}");
            self.diagnostics
                .push(Diagnostic::new(Code::MidnightAsTwentyFour, origin, message).at(level));
        }
    }

    /// With one date for both times, an end before the start is on the next day.
    fn tell_next_day(&mut self, column: usize, length: Duration) {
        let minutes = length.num_minutes();
        let text = format!(
            "end before start; read as next day ({} h {:02})",
            minutes / 60,
            minutes % 60
        );
        let origin = self.table.origin(self.row, column);
        let level = if minutes > 14 * 60 {
            Level::Warning
        } else {
            Level::Note
        };
        self.diagnostics
            .push(Diagnostic::new(Code::EndBeforeStart, origin, text).at(level));
    }

    /// The date of a `date` column: absent, wrong, or read.
    fn day(&mut self) -> Day {
        let Some((text, place)) = self.columns.cell(self.row, Column::Date) else {
            return Day::Absent;
        };
        if let Some(date) = clock_text::date(text) {
            return Day::Read(date);
        }
        let message = unreadable_date(text);
        self.tell(Code::UnreadableDate, place, message);
        Day::Wrong
    }

    fn moment(&mut self, column: Column, day: Day) -> Option<Written> {
        let Some((text, place)) = self.columns.cell(self.row, column) else {
            let place = self.columns.place(column).unwrap_or(0);
            self.tell(
                Code::UnreadableTime,
                place,
                "the cell is blank; row not used",
            );
            return None;
        };
        let read = match day {
            Day::Absent => clock_text::moment(text),
            Day::Read(date) => clock_text::time(text)
                .map(|time| Moment::Local(date, time))
                .or_else(|| clock_text::moment(text)),
            Day::Wrong => return None,
        };
        if read.is_none() {
            let (code, message) = unreadable_moment(text, day);
            self.tell(code, place, message);
        }
        read.map(|moment| Written {
            moment,
            column: place,
        })
    }

    fn instant(&mut self, written: &Written, zone: Tz) -> Option<DateTime<Utc>> {
        match written.moment {
            Moment::Fixed(at) => Some(at.with_timezone(&Utc)),
            Moment::Local(date, time) => {
                self.local_instant(clock_text::local(date, time)?, written.column, zone)
            }
        }
    }

    fn local_instant(
        &mut self,
        local: NaiveDateTime,
        column: usize,
        zone: Tz,
    ) -> Option<DateTime<Utc>> {
        let at = crate::timeline::civil::instant_of(zone, local);
        match zone.from_local_datetime(&local) {
            chrono::MappedLocalTime::Single(_) => {}
            chrono::MappedLocalTime::Ambiguous(first, second) => self.tell(
                Code::ClockFold,
                column,
                format!(
                    "{local} occurs twice in {zone}; the first ({}) is used, the second would be {}",
                    zulu(first.with_timezone(&Utc)),
                    zulu(second.with_timezone(&Utc))
                ),
            ),
            chrono::MappedLocalTime::None if date_is_skipped(zone, local.date()) => {
                self.tell(
                    Code::SkippedDate,
                    column,
                    format!("{} did not exist in {zone}; row not used", local.date()),
                );
                return None;
            }
            chrono::MappedLocalTime::None => self.tell(
                Code::ClockGap,
                column,
                format!(
                    "{local} does not exist in {zone}; read as {} ({})",
                    at.with_timezone(&zone).format("%H:%M %Z"),
                    zulu(at)
                ),
            ),
        }
        Some(at)
    }

    /// Length checks; `None` when the row is not used.
    fn tell_length(&mut self, start: DateTime<Utc>, end: DateTime<Utc>, zone: Tz) -> Option<()> {
        let minutes = (end - start).num_minutes();
        let place = self.columns.place(Column::End).unwrap_or(0);
        let length = format!("{} h {:02}", minutes / 60, minutes % 60);
        if minutes > 36 * 60 {
            let origin = self.table.origin(self.row, place);
            let text = format!(
                "shift lasts {length}, above the limit of 36 h; row not used; check the dates"
            );
            self.diagnostics
                .push(Diagnostic::new(Code::LongShift, origin, text).at(Level::Error));
            return None;
        }
        if minutes > 16 * 60 {
            self.tell(
                Code::LongShift,
                place,
                format!("shift lasts {length}; used; check the dates and am/pm"),
            );
        }
        if minutes < 15 {
            self.tell(
                Code::ShortShift,
                place,
                format!("shift lasts only {minutes} min; used"),
            );
        }
        let offset = |at: DateTime<Utc>| {
            zone.offset_from_utc_datetime(&at.naive_utc())
                .fix()
                .local_minus_utc()
        };
        if offset(start) != offset(end) {
            self.tell(
                Code::CrossesClockChange,
                place,
                format!("{length} elapsed over a clock change"),
            );
        }
        Some(())
    }
}

/// A date-time and the column it was written in.
#[derive(Debug, Clone, Copy)]
struct Written {
    moment: Moment,
    column: usize,
}

/// One end of a shift.
#[derive(Debug, Clone, Copy)]
struct Edge {
    at: DateTime<Utc>,
    column: usize,
}

/// What the `date` column says.
#[derive(Debug, Clone, Copy)]
enum Day {
    Absent,
    Wrong,
    Read(NaiveDate),
}

impl Written {
    /// Moved to the next date when both times share one date and this one lies before the start; was it moved?
    ///
    /// Civil times are compared, so that a clock change on the start's date does not touch an end on the next one.
    fn on_the_next_date_if_before(self, start: &Self, one_date: bool) -> (Self, bool) {
        let (Moment::Local(from, since), Moment::Local(date, until)) = (start.moment, self.moment)
        else {
            return (self, false);
        };
        let before = clock_text::local(date, until) < clock_text::local(from, since);
        match date.succ_opt() {
            Some(next) if one_date && before => (
                Self {
                    moment: Moment::Local(next, until),
                    ..self
                },
                true,
            ),
            _ => (self, false),
        }
    }
}

fn date_is_skipped(zone: Tz, date: NaiveDate) -> bool {
    let noon = date.and_time(NaiveTime::from_hms_opt(12, 0, 0).unwrap_or(NaiveTime::MIN));
    matches!(
        zone.from_local_datetime(&noon),
        chrono::MappedLocalTime::None
    )
}

fn zulu(at: DateTime<Utc>) -> String {
    at.format("%H:%MZ").to_string()
}

fn unreadable_date(text: &str) -> String {
    format!(
        "{:?} is no date that can be read; expected year-month-day such as 2026-03-09; row not used",
        short(text)
    )
}

fn unreadable_moment(text: &str, day: Day) -> (Code, String) {
    let date_part = text.split(['T', ' ']).next().unwrap_or(text);
    match day {
        Day::Absent if clock_text::date(date_part).is_none() => {
            (Code::UnreadableDate, unreadable_date(text))
        }
        Day::Absent => (
            Code::UnreadableTime,
            format!(
                "{:?} is no date and time that can be read; expected such as 2026-03-09T22:00; row not used",
                short(text)
            ),
        ),
        Day::Read(_) | Day::Wrong => (
            Code::UnreadableTime,
            format!(
                "{:?} is no time of day that can be read; expected such as 22:00; row not used",
                short(text)
            ),
        ),
    }
}
