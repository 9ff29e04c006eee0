//! # What it measures
//! Local nights inside the gap when duty changes between night and other duty.
//! # Why it matters
//! Sleep by night is longer than sleep by day.
//! # Units
//! Count; a local night is 8 h within 22:00-08:00 (from memory).
//! # Limits and their source
//! In the packs: 2, good practice guidelines of the HSE.
//! # Example
//! Off Monday 07:00 to Wednesday 07:00 holds two local nights; to Wednesday 05:00 only one.
//! # Not covered
//! Gaps of more than 7 days, which hold more than enough.

use super::{Measure, Rule, RuleKind, Subject};
use crate::assessment::clock_window::ClockWindow;
use crate::units::Minute;

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "full_night_sleeps_at_switch",
    about: "local nights inside the gap when duty changes between night and other duty",
    measure,
};

fn measure(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    let register = &subject.criteria.register;
    let band = ClockWindow {
        from_h: register.local_night_from.value,
        to_h: register.local_night_to.value,
    };
    subject
        .worker
        .duties
        .windows(2)
        .enumerate()
        .filter(|(_, pair)| subject.is_night(&pair[0]) != subject.is_night(&pair[1]))
        .filter(|(_, pair)| !subject.has_gap(pair[0].end, pair[1].start))
        .map(|(after, pair)| {
            let gap = (pair[0].end, pair[1].start);
            let nights = band.count_inside(subject.axis, gap, register.local_night_h.value);
            let nights = i64::try_from(nights).unwrap_or(i64::MAX);
            subject.on_window(after, Minute(nights).as_f64())
        })
        .collect()
}
