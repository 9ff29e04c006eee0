//! For whom a report is, and in which order persons stand in it.

use super::document::{LineSection, WorkerSection};

/// Who reads the report. The planner's holds least and is the default.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Audience {
    /// Scheduler or manager: no physiology beside a name.
    Planner,
    /// Occupational health, bound to secrecy.
    Clinician,
}

impl Audience {
    /// The word as it is written everywhere.
    pub fn word(self) -> &'static str {
        match self {
            Self::Planner => "planner",
            Self::Clinician => "clinician",
        }
    }

    /// The heading over the list of workers.
    pub fn workers_heading(self) -> &'static str {
        match self {
            Self::Planner => "Workers, by line",
            Self::Clinician => {
                "Workers (order of reading; says nothing about health, performance or fitness)"
            }
        }
    }
}

/// Planner: by line, then name. Clinician: a reading order by priority findings, then compressed windows per 28 days seen, then name.
pub(super) fn order_workers(audience: Audience, workers: &mut [WorkerSection]) {
    match audience {
        Audience::Planner => workers.sort_by(|a, b| (a.line, &a.id).cmp(&(b.line, &b.id))),
        Audience::Clinician => workers.sort_by(|a, b| {
            b.priority_findings
                .cmp(&a.priority_findings)
                .then(
                    b.compressed_per_28_days
                        .total_cmp(&a.compressed_per_28_days),
                )
                .then(a.id.cmp(&b.id))
        }),
    }
}

/// Clinicians find the physiology in the order of the workers; planners in the order of the lines.
pub(super) fn ordered_lines(
    audience: Audience,
    workers: &[WorkerSection],
    mut lines: Vec<LineSection>,
) -> Vec<LineSection> {
    if audience == Audience::Clinician {
        lines.sort_by_key(|line| workers.iter().position(|worker| worker.id == line.id));
    }
    lines
}
