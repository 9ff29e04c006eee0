//! Who works when: a roster that has been read and checked, and never changes afterwards.

pub mod duty;
pub mod line;

pub use duty::{DutyBlock, DutyKind};
pub use line::{DutyLine, LineId, lines};

use crate::source::OriginId;
use chrono::{DateTime, NaiveDate, Utc};
use chrono_tz::Tz;

/// A worker, by place in [`Roster::workers`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct WorkerId(pub u32);

impl WorkerId {
    /// The place in the list of workers.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// A person of the roster.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Worker {
    /// The name or number in the file, trimmed.
    pub name: String,
    /// Team, where the file has one.
    pub team: Option<String>,
}

/// One row of the roster.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Shift {
    /// Who.
    pub worker: WorkerId,
    /// First instant.
    pub start: DateTime<Utc>,
    /// First instant after it.
    pub end: DateTime<Utc>,
    /// Zone of the workplace.
    pub zone: Tz,
    /// What kind of duty.
    pub kind: DutyKind,
    /// Code in the file, if any.
    pub code: Option<String>,
    /// Break, minutes.
    pub break_min: Option<u16>,
    /// Commute of this shift each way, minutes.
    pub commute_min: Option<u16>,
    /// Which row.
    pub origin: OriginId,
}

/// Dates of a worker that the file names but that could not be read.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct UnknownDates {
    /// Who.
    pub worker: WorkerId,
    /// First date that is unknown; `None` when not even the date could be read, so that any date may be concerned.
    pub first: Option<NaiveDate>,
    /// Last date that is unknown.
    pub last: Option<NaiveDate>,
}

/// A validated roster. Shifts are ordered by worker and start.
#[derive(Debug, Clone, PartialEq)]
pub struct Roster {
    /// Workers, ordered by name.
    pub workers: Vec<Worker>,
    /// Shifts, ordered by worker and start.
    pub shifts: Vec<Shift>,
    /// What is missing.
    pub unknown: Vec<UnknownDates>,
    /// Zone of the workplace, in which dates and clock windows are read.
    pub zone: Tz,
}

impl Roster {
    /// Shifts of one worker, by start.
    pub fn shifts_of(&self, worker: WorkerId) -> &[Shift] {
        let from = self.shifts.partition_point(|s| s.worker < worker);
        let to = self.shifts.partition_point(|s| s.worker <= worker);
        &self.shifts[from..to]
    }

    /// Ids of all workers, in order.
    pub fn worker_ids(&self) -> impl Iterator<Item = WorkerId> + '_ {
        (0..self.workers.len()).map(|index| WorkerId(u32::try_from(index).unwrap_or(u32::MAX)))
    }

    /// The worker of a name.
    pub fn worker_named(&self, name: &str) -> Option<WorkerId> {
        self.worker_ids()
            .find(|worker| self.workers[worker.index()].name == name)
    }

    /// Counted duties of one worker, gaps of at most `join_gap_min` joined.
    pub fn counted_duties(&self, worker: WorkerId, join_gap_min: i64) -> Vec<DutyBlock> {
        duty::joined(self.shifts_of(worker), join_gap_min)
    }

    /// The same roster without what it says of the way to work.
    #[must_use]
    pub fn without_commutes(&self) -> Self {
        let mut roster = self.clone();
        for shift in &mut roster.shifts {
            shift.commute_min = None;
        }
        roster
    }

    /// Is any date of the worker missing from the file?
    pub fn is_incomplete(&self, worker: WorkerId) -> bool {
        self.unknown.iter().any(|gap| gap.worker == worker)
    }

    /// Does the stretch touch a date of the worker that could not be read?
    pub fn touches_unknown(
        &self,
        worker: WorkerId,
        from: DateTime<Utc>,
        to: DateTime<Utc>,
    ) -> bool {
        let first = from.with_timezone(&self.zone).date_naive();
        let last = to.with_timezone(&self.zone).date_naive();
        self.unknown
            .iter()
            .filter(|gap| gap.worker == worker)
            .any(|gap| match (gap.first, gap.last) {
                (Some(begins), Some(ends)) => begins <= last && first <= ends,
                _ => true,
            })
    }
}
