//! Elapsed minutes of a stretch inside a daily clock window of the workplace, over every clock change.

use crate::timeline::Axis;
use crate::units::{Minute, minutes_to_hours};

/// A window of the local clock that repeats every day: from an hour to an hour of the same or the next date.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ClockWindow {
    /// First clock hour.
    pub from_h: f64,
    /// Last clock hour; at or below `from_h` it lies on the next date.
    pub to_h: f64,
}

impl ClockWindow {
    /// The window written as `23:00` and `06:00`; an unreadable time is taken as midnight, which a test of the packs excludes.
    pub fn written(from: &str, to: &str) -> Self {
        let hour = |text: &str| {
            text.split_once(':')
                .and_then(|(hour, minute)| {
                    Some(hour.parse::<f64>().ok()? + minute.parse::<f64>().ok()? / 60.0)
                })
                .unwrap_or(0.0)
        };
        Self {
            from_h: hour(from),
            to_h: hour(to),
        }
    }

    /// The windows that begin on the dates of the axis.
    pub fn occurrences<'a>(
        &'a self,
        axis: &'a Axis,
    ) -> impl Iterator<Item = (Minute, Minute)> + 'a {
        axis.days.iter().map(|day| {
            let next = u64::from(self.to_h <= self.from_h);
            (
                axis.at_clock(day.date, 0, self.from_h),
                axis.at_clock(day.date, next, self.to_h),
            )
        })
    }

    /// Hours of [from, to) inside the window, elapsed.
    pub fn hours_inside(&self, axis: &Axis, from: Minute, to: Minute) -> f64 {
        let minutes: i64 = self
            .occurrences(axis)
            .map(|(begins, ends)| (to.min(ends) - from.max(begins)).max(0))
            .sum();
        minutes_to_hours(minutes)
    }

    /// How many occurrences have at least `needed_h` hours inside [from, to).
    pub fn count_inside(&self, axis: &Axis, (from, to): (Minute, Minute), needed_h: f64) -> usize {
        self.occurrences(axis)
            .filter(|(begins, ends)| {
                minutes_to_hours((to.min(*ends) - from.max(*begins)).max(0)) >= needed_h
            })
            .count()
    }
}
