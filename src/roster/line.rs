//! Duty lines: workers with identical duties share one.

use super::{Roster, WorkerId};
use chrono::{DateTime, Utc};
use std::collections::BTreeMap;

/// A duty line; printed as `line 7`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct LineId(pub u32);

impl std::fmt::Display for LineId {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(formatter, "line {}", self.0)
    }
}

/// One line and who works it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DutyLine {
    /// Its number, from 1, in order of the first duty and then of all later ones.
    pub id: LineId,
    /// Workers on it, in order of name.
    pub workers: Vec<WorkerId>,
}

/// What makes a duty of one line the same as that of another: times, and the commute where the roster names it.
type DutyKey = (DateTime<Utc>, DateTime<Utc>, Option<u16>);

/// Groups workers by their counted duties; those of whom more is known stay `apart`. The order of rows in the file does not matter.
///
/// # Example
///
/// ```
/// use acroshift::intake::{read, Input, Reading};
/// let csv = b"worker,start,end\nA,2026-03-09T08:00,2026-03-09T16:00\nB,2026-03-09T08:00,2026-03-09T16:00\nC,2026-03-09T22:00,2026-03-10T06:00\n";
/// let reading = Reading { zone: Some(chrono_tz::UTC), ..Reading::default() };
/// let roster = read(&[Input { name: "ward.csv", bytes: csv }], &reading).roster.expect("the file is in order");
/// let lines = acroshift::roster::lines(&roster, 15, |_| false);
/// assert_eq!(lines.len(), 2);
/// assert_eq!(lines[0].workers.len(), 2);
/// ```
pub fn lines(
    roster: &Roster,
    join_gap_min: i64,
    apart: impl Fn(WorkerId) -> bool,
) -> Vec<DutyLine> {
    let mut groups: BTreeMap<(Vec<DutyKey>, Option<WorkerId>), Vec<WorkerId>> = BTreeMap::new();
    for worker in roster.worker_ids() {
        let duties: Vec<_> = roster
            .counted_duties(worker, join_gap_min)
            .iter()
            .map(|block| (block.start, block.end, block.commute_min))
            .collect();
        let own = apart(worker).then_some(worker);
        groups.entry((duties, own)).or_default().push(worker);
    }
    (1..)
        .zip(groups.into_values())
        .map(|(number, workers)| DutyLine {
            id: LineId(number),
            workers,
        })
        .collect()
}
