//! Dates and times as they are written in rosters.

use chrono::{DateTime, FixedOffset, NaiveDate, NaiveDateTime, NaiveTime};

/// A time of day; `24:00` is told apart from `00:00`.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum DayTime {
    /// A time from 00:00 to 23:59.
    At(NaiveTime),
    /// 24:00, the end of the day.
    EndOfDay,
}

/// A date and time, with or without its offset from UTC.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Moment {
    /// Local to the workplace.
    Local(NaiveDate, DayTime),
    /// An instant with its own offset.
    Fixed(DateTime<FixedOffset>),
}

/// An ISO 8601 calendar date: `2026-03-09` or `20260309`.
pub fn date(text: &str) -> Option<NaiveDate> {
    NaiveDate::parse_from_str(text, "%Y-%m-%d")
        .or_else(|_| {
            if text.len() == 8 && text.bytes().all(|b| b.is_ascii_digit()) {
                NaiveDate::parse_from_str(text, "%Y%m%d")
            } else {
                NaiveDate::parse_from_str("", "%Y-%m-%d")
            }
        })
        .ok()
        .filter(|date| in_range(*date))
}

/// Years that rosters have.
fn in_range(date: NaiveDate) -> bool {
    (1900..=2200).contains(&chrono::Datelike::year(&date))
}

/// A time of day: `22:00`, `22:00:00`, `2200`, `7:30`, `24:00`.
///
/// # Example
///
/// ```
/// use acroshift::intake::clock_text::{time, DayTime};
/// assert_eq!(time("24:00"), Some(DayTime::EndOfDay));
/// assert_eq!(time("25:00"), None);
/// assert_eq!(time("0730"), time("07:30"));
/// ```
pub fn time(text: &str) -> Option<DayTime> {
    let digits = |part: &str| {
        (!part.is_empty() && part.len() <= 2 && part.bytes().all(|b| b.is_ascii_digit()))
            .then(|| part.parse::<u32>().ok())
            .flatten()
    };
    let parts: Vec<&str> = if text.len() == 4 && text.bytes().all(|b| b.is_ascii_digit()) {
        vec![&text[..2], &text[2..]]
    } else {
        text.split(':').collect()
    };
    let (hour, minute, second) = match parts.as_slice() {
        [hour, minute] => (digits(hour)?, digits(minute)?, 0),
        [hour, minute, second] => (digits(hour)?, digits(minute)?, digits(second)?),
        _ => return None,
    };
    if (hour, minute, second) == (24, 0, 0) {
        return Some(DayTime::EndOfDay);
    }
    NaiveTime::from_hms_opt(hour, minute, second).map(DayTime::At)
}

/// A date-time: `2026-03-09T22:00`, `2026-03-09 22:00:00`, with `Z` or `+01:00` if wished.
pub fn moment(text: &str) -> Option<Moment> {
    let text = text.trim();
    if let Ok(fixed) = DateTime::parse_from_rfc3339(&with_seconds(text)) {
        return in_range(fixed.date_naive()).then_some(Moment::Fixed(fixed));
    }
    let (day, clock) = text.split_once(['T', 't', ' '])?;
    Some(Moment::Local(date(day.trim())?, time(clock.trim())?))
}

/// RFC 3339 wants seconds; rosters often leave them out before an offset.
fn with_seconds(text: &str) -> String {
    let split = text
        .char_indices()
        .skip(11)
        .find(|(_, c)| matches!(c, 'Z' | 'z' | '+' | '-'));
    match split {
        Some((at, _)) if text[..at].matches(':').count() == 1 => {
            format!("{}:00{}", &text[..at], &text[at..])
        }
        _ => text.to_owned(),
    }
}

/// The local date-time of a date and a time of day; 24:00 is 00:00 of the next date.
pub fn local(date: NaiveDate, time: DayTime) -> Option<NaiveDateTime> {
    match time {
        DayTime::At(time) => Some(date.and_time(time)),
        DayTime::EndOfDay => date.succ_opt().map(|next| next.and_time(NaiveTime::MIN)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn offsets_are_kept_with_or_without_seconds() {
        for text in ["2026-03-09T22:00+01:00", "2026-03-09T21:00:00Z"] {
            match moment(text) {
                Some(Moment::Fixed(at)) => assert_eq!(at.timestamp(), 1_773_090_000),
                other => panic!("{text} was read as {other:?}"),
            }
        }
    }

    #[test]
    fn what_is_no_date_is_refused() {
        for text in ["2026-13-01", "09/03/2026", "2026-02-30", "12026-01-01", ""] {
            assert_eq!(date(text), None, "{text}");
        }
    }

    #[test]
    fn what_is_no_time_is_refused() {
        for text in ["24:01", "7", "12:60", "+1:00", "noon", "1:2:3:4", ""] {
            assert_eq!(time(text), None, "{text}");
        }
    }
}
