//! # What it measures
//! Night duties in a row.
//! # Why it matters
//! Sleep lost by day adds up, and the risk of accidents rises along a run of nights.
//! # Units
//! Count; a run ends at any other duty or at a gap of 24 h or more.
//! # Limits and their source
//! In the packs: 3, Garde et al. 2020, the WOW summary and the HSE.
//! # Example
//! Four nights 22:00-06:00 on successive dates are a run of 4.
//! # Not covered
//! Nights before the roster's first date.

use super::{Measure, Rule, RuleKind, Subject};
use crate::units::Minute;

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "run_nights",
    about: "night duties in a row",
    measure,
};

fn measure(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    let duties = &subject.worker.duties;
    subject
        .night_runs()
        .into_iter()
        .map(|(first, last)| Measure {
            value: Minute(i64::try_from(last - first + 1).unwrap_or(i64::MAX)).as_f64(),
            window: None,
            start: duties[first].start,
            end: duties[last].end,
            shifts: duties[first..=last]
                .iter()
                .flat_map(|duty| duty.shifts.iter().copied())
                .collect(),
            missing: None,
        })
        .collect()
}
