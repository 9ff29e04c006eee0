//! Register-type measures of one worker: facts of the roster, no model.

use super::clock_window::ClockWindow;
use super::criteria::Criteria;
use super::rules::Subject;
use crate::timeline::Axis;
use crate::units::{Minute, minutes_to_hours};

/// Kind of shift by the clock; the first that matches, in this order.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum ShiftClass {
    /// At least 3 h between 23:00 and 06:00 (Nordic register studies).
    Night,
    /// Starts from 03:00 and before 06:00.
    Early,
    /// Starts from 12:00 and ends after 18:00.
    Evening,
    /// The rest.
    Day,
}

impl ShiftClass {
    /// The word as it is written everywhere.
    pub fn word(self) -> &'static str {
        match self {
            Self::Night => "night",
            Self::Early => "early",
            Self::Evening => "evening",
            Self::Day => "day",
        }
    }
}

/// Clock facts of one stretch of duty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ShiftFacts {
    /// Kind by the clock.
    pub class: ShiftClass,
    /// Hours between 23:00 and 06:00.
    pub night_h: f64,
}

/// The night of the register definition, clock hours; Finnish period-based work, Working Time Act; also Nordic register studies (from memory).
const REGISTER_NIGHT: ClockWindow = ClockWindow {
    from_h: 23.0,
    to_h: 6.0,
};
/// Hours inside it from which a shift is a night shift; source as of the window.
const NIGHT_FROM_H: f64 = 3.0;

/// Clock facts of [start, end).
pub fn shift_facts(axis: &Axis, criteria: &Criteria, start: Minute, end: Minute) -> ShiftFacts {
    let night_h = REGISTER_NIGHT.hours_inside(axis, start, end);
    let register = &criteria.register;
    let clock_h = |minute: Minute| {
        crate::numeric::circular::wrap(minutes_to_hours(axis.clock.at(minute)), 24.0)
    };
    let start_h = clock_h(start);
    let ends_late = clock_h(end) > register.evening_ends_after.value
        || axis.local(start).date_naive() != axis.local(end).date_naive();
    let class = if night_h >= NIGHT_FROM_H {
        ShiftClass::Night
    } else if (register.early_from.value..register.early_until.value).contains(&start_h) {
        ShiftClass::Early
    } else if start_h >= register.evening_from.value && ends_late {
        ShiftClass::Evening
    } else {
        ShiftClass::Day
    };
    ShiftFacts { class, night_h }
}

/// Register-type measures of one worker over the roster.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Exposure {
    /// Duties, joined.
    pub duties: usize,
    /// Hours on duty.
    pub duty_h: f64,
    /// Night duties.
    pub nights: usize,
    /// Duties that start early in the morning.
    pub early: usize,
    /// Evening duties.
    pub evenings: usize,
    /// Day duties.
    pub days: usize,
    /// Hours between 23:00 and 06:00.
    pub night_h: f64,
    /// Gaps strictly below 11 h.
    pub quick_returns: usize,
    /// Gaps of at most 11 h.
    pub quick_returns_inclusive: usize,
    /// Longest run of night duties.
    pub longest_night_spell: usize,
    /// Most dates in a row on which a duty starts.
    pub longest_run_of_days: usize,
    /// Duties of 12 h or more.
    pub long_duties: usize,
    /// Shortest gap, hours.
    pub shortest_gap_h: Option<f64>,
    /// Dates from the first to the last duty.
    pub dates_seen: usize,
    /// Dates that could not be read, or `None` when not even their number is known.
    pub incomplete: bool,
}

/// The measures of one worker. `subject` must carry a pack whose night is the register definition.
pub fn exposure(subject: &Subject<'_>) -> Exposure {
    let duties = &subject.worker.duties;
    let register = &subject.criteria.register;
    let gaps: Vec<f64> = duties
        .windows(2)
        .map(|pair| pair[1].start.hours_since(pair[0].end))
        .collect();
    let facts: Vec<ShiftFacts> = duties
        .iter()
        .map(|duty| shift_facts(subject.axis, subject.criteria, duty.start, duty.end))
        .collect();
    let of = |class: ShiftClass| facts.iter().filter(|f| f.class == class).count();
    let date = |minute: Minute| subject.axis.local(minute).date_naive();
    Exposure {
        duties: duties.len(),
        duty_h: duties.iter().map(super::duties::Duty::duty_h).sum(),
        nights: of(ShiftClass::Night),
        early: of(ShiftClass::Early),
        evenings: of(ShiftClass::Evening),
        days: of(ShiftClass::Day),
        night_h: facts.iter().map(|f| f.night_h).sum(),
        quick_returns: gaps
            .iter()
            .filter(|gap| **gap < register.quick_return_below.value)
            .count(),
        quick_returns_inclusive: gaps
            .iter()
            .filter(|gap| **gap <= register.quick_return_below.value)
            .count(),
        longest_night_spell: subject
            .night_runs()
            .iter()
            .map(|(first, last)| last - first + 1)
            .max()
            .unwrap_or(0),
        longest_run_of_days: longest_run_of_days(subject),
        long_duties: duties
            .iter()
            .filter(|duty| duty.duty_h() >= register.long_shift_from.value)
            .count(),
        shortest_gap_h: gaps.iter().copied().min_by(f64::total_cmp),
        dates_seen: match (duties.first(), duties.last()) {
            (Some(first), Some(last)) => {
                let days = (date(last.end) - date(first.start)).num_days() + 1;
                usize::try_from(days).unwrap_or(0)
            }
            _ => 0,
        },
        incomplete: subject.roster.is_incomplete(subject.worker.worker),
    }
}

fn longest_run_of_days(subject: &Subject<'_>) -> usize {
    let dates: std::collections::BTreeSet<chrono::NaiveDate> = subject
        .worker
        .duties
        .iter()
        .map(|duty| subject.axis.local(duty.start).date_naive())
        .collect();
    let (mut longest, mut run) = (0, 0);
    let mut last: Option<chrono::NaiveDate> = None;
    for date in dates {
        run = if last.and_then(|d| d.succ_opt()) == Some(date) {
            run + 1
        } else {
            1
        };
        longest = longest.max(run);
        last = Some(date);
    }
    longest
}
