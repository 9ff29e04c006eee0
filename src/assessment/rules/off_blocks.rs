//! # What it measures
//! How many disjoint blocks of at least 24 h off duty lie in successive periods.
//! # Why it matters
//! The 14-day form of weekly rest.
//! # Units
//! Count.
//! # Limits and their source
//! In the packs: 2 in 14 days (Directive 2003/88/EC Art 16(a); UK reg 11(2)).
//! # Example
//! Off Saturday 08:00 to Monday 08:00 holds two blocks.
//! # Not covered
//! Periods that the roster does not hold completely.

use super::longest_off::{on_period, periods};
use super::{Measure, Rule, RuleKind, Subject};
use crate::units::{MINUTES_PER_DAY, Minute};

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "off_blocks_24h_count",
    about: "disjoint blocks of at least 24 h off duty inside the period",
    measure,
};

fn measure(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    let days = rule.window.as_ref().map_or(14, |w| i64::from(w.len));
    periods(subject, days)
        .into_iter()
        .map(|period| {
            let value = Minute(blocks(subject, period.from, period.to)).as_f64();
            on_period(subject, rule, period, value)
        })
        .collect()
}

fn blocks(subject: &Subject<'_>, from: Minute, to: Minute) -> i64 {
    let mut count = 0;
    let mut free_since = from;
    for duty in &subject.worker.duties {
        if duty.end <= from || duty.start >= to {
            continue;
        }
        count += ((duty.start.min(to) - free_since) / MINUTES_PER_DAY).max(0);
        free_since = free_since.max(duty.end);
    }
    count + ((to - free_since) / MINUTES_PER_DAY).max(0)
}
