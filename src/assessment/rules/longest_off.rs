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
use crate::units::Minute;

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "longest_off_h",
    about: "longest unbroken time off duty inside the window of the rule",
    measure,
};

fn measure(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    match rule.window.as_ref().map(|w| (w.align.as_str(), w.len)) {
        Some(("from-duty-start", hours)) => from_duty_start(subject, rule, i64::from(hours) * 60),
        Some(("period", days)) => periods(subject, i64::from(days))
            .into_iter()
            .map(|period| {
                let value = longest_off_h(subject, period.from, period.to);
                on_period(subject, rule, period, value)
            })
            .collect(),
        _ => Vec::new(),
    }
}

fn from_duty_start(subject: &Subject<'_>, rule: &Rule, length: i64) -> Vec<Measure> {
    let duties = &subject.worker.duties;
    let known = |index: usize| !subject.has_gap(duties[index].start, duties[index].start + length);
    let rest_h = |index: usize| {
        let (from, to) = (duties[index].end, duties[index].start + length);
        longest_off_h(subject, from.min(to), to)
    };
    let Some(last) = duties.len().checked_sub(1) else {
        return Vec::new();
    };
    let mut measures: Vec<Measure> = (0..last)
        .filter(|index| known(*index))
        .map(|index| subject.on_window(index, rest_h(index)))
        .collect();
    // After the last duty no window is known; but a duty too long to leave room for the rest is judged at once.
    if known(last) && !rule.op.holds(rest_h(last), rule.value) {
        measures.push(subject.on_duty(last, rest_h(last)));
    }
    measures
}

/// The measure of a period. One that the roster does not hold completely is judged only when it is in order already.
pub(super) fn on_period(subject: &Subject<'_>, rule: &Rule, period: Period, value: f64) -> Measure {
    let in_order = rule.op.holds(value, rule.value);
    let missing = if in_order {
        None
    } else if subject.has_gap(period.from, period.to) {
        Some("a date of the period could not be read".to_owned())
    } else if !period.complete {
        Some("the roster does not hold the period completely".to_owned())
    } else {
        None
    };
    Measure {
        value,
        window: None,
        start: period.from,
        end: period.to,
        shifts: shifts_in(subject, period.from, period.to),
        missing,
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

/// One of successive periods.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Period {
    /// First minute.
    pub(super) from: Minute,
    /// First minute after it.
    pub(super) to: Minute,
    /// Does the roster hold all its dates?
    pub(super) complete: bool,
}

/// Successive periods of the given number of local dates from the first date of the roster; the last may be incomplete.
pub(super) fn periods(subject: &Subject<'_>, days: i64) -> Vec<Period> {
    let length = usize::try_from(days).unwrap_or(1).max(1);
    subject
        .axis
        .rostered_dates()
        .chunks(length)
        .map(|dates| Period {
            from: dates[0].start,
            to: dates[dates.len() - 1].end,
            complete: dates.len() == length,
        })
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
