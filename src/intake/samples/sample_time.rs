//! When a sample was taken, as its table writes it.

use crate::intake::clock_text::{self, Moment};
use crate::units::minutes_to_hours;
use chrono::{DateTime, FixedOffset, NaiveDateTime, NaiveTime, TimeDelta};

/// Decimal hours that a study can hold, hours: 400 days.
const LONGEST_H: f64 = 9600.0;
/// A sample before the first midnight, hours.
const EARLIEST_H: f64 = -24.0;

/// A time as it was written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Written {
    /// By the local clock.
    Clock(NaiveDateTime),
    /// With its offset from UTC.
    Offset(DateTime<FixedOffset>),
    /// Decimal hours.
    Hours(f64),
}

/// The ways in which a table can write its times.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Way {
    Clock,
    Offset,
    Hours,
}

impl Way {
    /// In words, after "is".
    pub(super) fn word(self) -> &'static str {
        match self {
            Self::Clock => "a date-time",
            Self::Offset => "a date-time with its offset",
            Self::Hours => "in decimal hours",
        }
    }
}

/// A time; none for what is no time, and for digits that may be a clock time (`0700`) or a date (`20260309`).
pub(super) fn read(text: &str) -> Option<Written> {
    match clock_text::moment(text) {
        Some(Moment::Local(date, time)) => clock_text::local(date, time).map(Written::Clock),
        Some(Moment::Fixed(at)) => Some(Written::Offset(at)),
        None => hours(text).map(Written::Hours),
    }
}

fn hours(text: &str) -> Option<f64> {
    let ambiguous = matches!(text.len(), 4 | 8) && text.bytes().all(|byte| byte.is_ascii_digit());
    let hours = text.parse::<f64>().ok().filter(|_| !ambiguous)?;
    (EARLIEST_H..=LONGEST_H).contains(&hours).then_some(hours)
}

/// The midnight from which the hours of a series count: that which begins its first date; none for decimal hours.
pub(super) fn origin(times: impl Iterator<Item = Written>) -> Option<NaiveDateTime> {
    times
        .filter_map(Written::clock)
        .min()
        .map(|first| first.date().and_time(NaiveTime::MIN))
}

impl Written {
    pub(super) fn way(self) -> Way {
        match self {
            Self::Clock(_) => Way::Clock,
            Self::Offset(_) => Way::Offset,
            Self::Hours(_) => Way::Hours,
        }
    }

    fn clock(self) -> Option<NaiveDateTime> {
        match self {
            Self::Clock(at) => Some(at),
            Self::Offset(at) => Some(at.naive_local()),
            Self::Hours(_) => None,
        }
    }

    /// Hours by the clock since the midnight of a series.
    pub(super) fn hours_since(self, origin: Option<NaiveDateTime>) -> f64 {
        match (self, origin) {
            (Self::Hours(hours), _) => hours,
            (written, Some(origin)) => written.clock().map_or(f64::NAN, |at| of(at - origin)),
            (_, None) => f64::NAN,
        }
    }
}

fn of(delta: TimeDelta) -> f64 {
    let seconds = i32::try_from(delta.num_seconds() % 60).unwrap_or(0);
    minutes_to_hours(delta.num_minutes()) + f64::from(seconds) / 3600.0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_that_may_be_a_clock_time_are_no_hours() {
        for text in ["0700", "20260309", "9601", "-25", "inf", "NaN", "noon"] {
            assert_eq!(read(text), None, "{text}");
        }
        assert_eq!(read("7.5"), Some(Written::Hours(7.5)));
        assert_eq!(read("700"), Some(Written::Hours(700.0)));
    }

    #[test]
    fn hours_count_from_the_midnight_of_the_first_date() {
        let times = ["2026-03-09T23:30", "2026-03-10T00:15:30"].map(|text| read(text).unwrap());
        let origin = origin(times.into_iter());
        assert!((times[1].hours_since(origin) - (24.25 + 30.0 / 3600.0)).abs() < 1e-12);
    }
}
