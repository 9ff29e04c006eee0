//! # What it measures
//! Elapsed hours from the end of one duty to the start of the next.
//! # Why it matters
//! Sleep, the way home and meals must fit into it.
//! # Units
//! Hours, elapsed.
//! # Limits and their source
//! In the packs: 11 h Garde et al. 2020; 16 h Kecklund and Akerstedt 1995.
//! # Example
//! Off at 22:00 on 28 March 2026 in London, on again at 09:00: the clock says 11 h, the gap is 10 h.
//! # Not covered
//! Pauses inside a split duty.

use super::{Measure, Rule, RuleKind, Subject};

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "gap_h",
    about: "elapsed hours from the end of one duty to the start of the next",
    measure,
};

fn measure(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    subject
        .worker
        .duties
        .windows(2)
        .enumerate()
        .filter(|(_, pair)| !subject.has_gap(pair[0].end, pair[1].start))
        .map(|(after, pair)| subject.on_window(after, pair[1].start.hours_since(pair[0].end)))
        .collect()
}
