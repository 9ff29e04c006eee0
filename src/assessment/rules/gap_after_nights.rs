//! # What it measures
//! Elapsed hours off duty after the last duty of a run of nights.
//! # Why it matters
//! The first sleep after nights is short and by day; two nights of sleep fit into 48 h.
//! # Units
//! Hours, elapsed.
//! # Limits and their source
//! In the packs: 48 h, Kecklund and Akerstedt 1995.
//! # Example
//! Nights end Monday 07:00, next duty Wednesday 07:00: 48 h, met.
//! # Not covered
//! The last run of the roster, after which no duty is known.

use super::{Measure, Rule, RuleKind, Subject};

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "gap_after_nights_h",
    about: "elapsed hours off duty after the last duty of a run of nights",
    measure,
};

fn measure(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    let duties = &subject.worker.duties;
    subject
        .night_runs()
        .into_iter()
        .filter(|(_, last)| last + 1 < duties.len())
        .map(|(_, last)| (last, duties[last].end, duties[last + 1].start))
        .filter(|(_, from, to)| !subject.has_gap(*from, *to))
        .map(|(last, from, to)| subject.on_window(last, to.hours_since(from)))
        .collect()
}
