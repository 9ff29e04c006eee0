//! # What it measures
//! The longest unbroken time off duty inside a window: 24 h from the start of each duty, or successive periods from the roster's first date.
//! # Why it matters
//! Daily and weekly rest of working-time law are written this way.
//! # Units
//! Hours, elapsed.
//! # Limits and their source
//! In the packs: 11 h in the 24 h from duty start (Directive 2003/88/EC Art 3; UK reg 10); 24 h in 7 days (UK reg 11), 35 h (Art 5 with Art 3).
//! # Example
//! 07:00-21:00 and 08:00 next day: the gap is 11 h, but only 10 h of it lie in the 24 h from 07:00.
//! # Not covered
//! Windows at every position: the least favourable one lies inside a rest and would accuse an ordinary day worker.

use super::{Measure, Rule, RuleKind, Subject};
use crate::units::{MINUTES_PER_DAY, Minute};

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "longest_off_h",
    about: "longest unbroken time off duty inside the window of the rule",
    measure,
};

fn measure(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    match rule.window.as_ref().map(|w| (w.align.as_str(), w.len)) {
        Some(("from-duty-start", hours)) => from_duty_start(subject, i64::from(hours) * 60),
        Some(("period", days)) => periods(subject, i64::from(days))
            .into_iter()
            .map(|(from, to)| in_period(subject, from, to))
            .collect(),
        _ => Vec::new(),
    }
}

fn from_duty_start(subject: &Subject<'_>, length: i64) -> Vec<Measure> {
    let duties = &subject.worker.duties;
    (0..duties.len().saturating_sub(1))
        .filter(|index| !subject.has_gap(duties[*index].start, duties[*index].start + length))
        .map(|index| {
            let (from, to) = (duties[index].end, duties[index].start + length);
            subject.on_window(index, longest_off_h(subject, from.min(to), to))
        })
        .collect()
}

fn in_period(subject: &Subject<'_>, from: Minute, to: Minute) -> Measure {
    Measure {
        value: longest_off_h(subject, from, to),
        window: None,
        start: from,
        end: to,
        shifts: shifts_in(subject, from, to),
        missing: subject
            .has_gap(from, to)
            .then(|| "a date of the period could not be read".to_owned()),
    }
}

/// Longest stretch without duty inside [from, to), hours.
fn longest_off_h(subject: &Subject<'_>, from: Minute, to: Minute) -> f64 {
    let mut longest = 0;
    let mut free_since = from;
    for duty in &subject.worker.duties {
        if duty.end <= from || duty.start >= to {
            continue;
        }
        longest = longest.max(duty.start.min(to) - free_since);
        free_since = free_since.max(duty.end);
    }
    crate::units::minutes_to_hours(longest.max(to - free_since).max(0))
}

/// Whole periods of the given number of local dates from the first date of the roster; the last, incomplete one is left out.
pub(super) fn periods(subject: &Subject<'_>, days: i64) -> Vec<(Minute, Minute)> {
    let Ok(length) = usize::try_from(days) else {
        return Vec::new();
    };
    subject
        .axis
        .rostered_dates()
        .chunks_exact(length.max(1))
        .map(|chunk| (chunk[0].start, chunk[chunk.len() - 1].end))
        .filter(|(from, to)| *to - *from > MINUTES_PER_DAY / 2)
        .collect()
}

/// Places of the shifts of duties inside [from, to).
pub(super) fn shifts_in(subject: &Subject<'_>, from: Minute, to: Minute) -> Vec<usize> {
    subject
        .worker
        .duties
        .iter()
        .filter(|duty| duty.start < to && from < duty.end)
        .flat_map(|duty| duty.shifts.iter().copied())
        .collect()
}
