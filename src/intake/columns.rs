//! Which column of a long table means what?

use super::table::{Row, Table};
use super::{Reading, clock_text};
use crate::diagnostic::{Code, Diagnostic, Level};

/// Meanings of columns and the words that files use for them. Common practice, no source.
const COLUMNS: [(Column, &[&str]); 10] = [
    (
        Column::Worker,
        &["worker", "name", "employee", "staff", "person", "worker_id"],
    ),
    (Column::Date, &["date", "day"]),
    (Column::Start, &["start", "begin", "from", "start_time"]),
    (Column::End, &["end", "finish", "to", "end_time"]),
    (Column::Team, &["team", "group", "crew"]),
    (Column::Code, &["code", "shift_code"]),
    (Column::Kind, &["kind", "type", "duty_kind"]),
    (Column::Break, &["break_min", "break", "break_minutes"]),
    (Column::Zone, &["zone", "tz", "time_zone", "timezone"]),
    (Column::Commute, &["commute_min", "commute"]),
];

#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Column {
    Worker,
    Date,
    Start,
    End,
    Team,
    Code,
    Kind,
    Break,
    Zone,
    Commute,
}

/// Which column stands where.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Columns {
    places: Vec<(Column, usize)>,
}

impl Columns {
    /// The place of a column.
    pub(super) fn place(&self, wanted: Column) -> Option<usize> {
        self.places
            .iter()
            .find(|(column, _)| *column == wanted)
            .map(|(_, place)| *place)
    }

    /// Start and end that hold times of day only need a date beside them.
    pub(super) fn times_have_dates(
        &self,
        table: &Table,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> bool {
        let cell = |row| self.cell(row, Column::Start);
        let only_times = table
            .rows
            .iter()
            .filter_map(cell)
            .take(10)
            .all(|(text, _)| clock_text::time(text).is_some());
        if self.place(Column::Date).is_some()
            || !only_times
            || table.rows.iter().all(|row| cell(row).is_none())
        {
            return true;
        }
        diagnostics.push(Diagnostic::new(
            Code::MissingColumn,
            table.origin(&table.header, 0),
            format!(
                "no column date: start holds times of day only; found {}; name the column with the day date",
                table.header.cells.join(", ")
            ),
        ));
        false
    }

    /// The cell of a column, unless it is blank.
    pub(super) fn cell<'a>(&self, row: &'a Row, column: Column) -> Option<(&'a str, usize)> {
        let place = self.place(column)?;
        let text = row.cells.get(place)?.as_str();
        (!text.is_empty()).then_some((text, place))
    }

    /// Finds the columns of a header; `None` when one that is needed is missing or doubled.
    pub(super) fn find(
        table: &Table,
        reading: &Reading,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<Columns> {
        let mut columns = Columns { places: Vec::new() };
        let mut unused = Vec::new();
        let mut usable = true;
        for (place, title) in table.header.cells.iter().enumerate() {
            let word = title.to_lowercase().replace([' ', '-'], "_");
            let known = COLUMNS
                .iter()
                .find(|(_, words)| words.contains(&word.as_str()));
            match known {
                None if word.is_empty() => {}
                None => unused.push(title.clone()),
                Some((column, _)) if columns.place(*column).is_some() => {
                    usable = false;
                    diagnostics.push(Diagnostic::new(
                    Code::DuplicateColumn,
                    table.origin(&table.header, place),
                    format!("column {title:?} has the same meaning as an earlier one; remove one of them"),
                ));
                }
                Some((column, _)) => columns.places.push((*column, place)),
            }
        }
        usable &= needed_columns(table, &columns, &unused, diagnostics);
        if columns.place(Column::Zone).is_none() && reading.zone.is_none() {
            usable = false;
            diagnostics.push(
            Diagnostic::new(
                Code::NoZone,
                table.file_origin(),
                "no time zone: the file has no column zone and none was given; give one, e.g. --zone Europe/London",
            )
            .at(Level::Fatal),
        );
        }
        tell_unused(table, &unused, diagnostics);
        usable.then_some(columns)
    }
}

/// Columns that are left out; a name close to a known one is more than a note.
fn tell_unused(table: &Table, unused: &[String], diagnostics: &mut Vec<Diagnostic>) {
    let mut near_any = false;
    let said: Vec<String> = unused
        .iter()
        .map(|title| match near_word(title) {
            Some(word) => {
                near_any = true;
                format!("{title} (did you mean {word}?)")
            }
            None => title.clone(),
        })
        .collect();
    if said.is_empty() {
        return;
    }
    let level = if near_any {
        Level::Warning
    } else {
        Level::Note
    };
    let origin = table.origin(&table.header, 0);
    let message = format!("columns left out: {}", said.join(", "));
    diagnostics.push(Diagnostic::new(Code::UnusedColumns, origin, message).at(level));
}

/// The known word that a title is probably a slip of.
fn near_word(title: &str) -> Option<&'static str> {
    let word = title.to_lowercase().replace([' ', '-'], "_");
    COLUMNS
        .iter()
        .flat_map(|(_, words)| words.iter().copied())
        .map(|known| (strsim::damerau_levenshtein(known, &word), known))
        .filter(|(distance, known)| *distance <= 2 && known.len() > 2 * distance)
        .min()
        .map(|(_, known)| known)
}

fn needed_columns(
    table: &Table,
    columns: &Columns,
    unused: &[String],
    diagnostics: &mut Vec<Diagnostic>,
) -> bool {
    let needed = [
        (Column::Worker, "worker"),
        (Column::Start, "start"),
        (Column::End, "end"),
    ];
    let mut complete = true;
    for (column, name) in needed {
        if columns.place(column).is_none() {
            complete = false;
            let near = unused
                .iter()
                .find(|title| strsim::damerau_levenshtein(&title.to_lowercase(), name) <= 2)
                .map(|title| format!("; rename {title:?} to {name}"))
                .unwrap_or_default();
            diagnostics.push(Diagnostic::new(
                Code::MissingColumn,
                table.origin(&table.header, 0),
                format!(
                    "no column {name}; expected worker, start, end (or date with start and end), found {}{near}",
                    table.header.cells.join(", ")
                ),
            ));
        }
    }
    complete
}
