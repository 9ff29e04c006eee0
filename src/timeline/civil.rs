//! Local dates and the local clock on the elapsed time axis.

use crate::numeric::sun::{Daylight, Place, daylight};
use crate::units::Minute;
use chrono::{
    DateTime, Datelike, Duration, NaiveDate, NaiveDateTime, NaiveTime, Offset, TimeZone, Utc,
};
use chrono_tz::Tz;

/// One local date on the elapsed time axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct CivilDay {
    /// The date.
    pub date: NaiveDate,
    /// Local midnight that begins it.
    pub start: Minute,
    /// Local midnight that ends it: 23, 24 or 25 h later.
    pub end: Minute,
    /// First minute of daylight.
    pub sunrise: Minute,
    /// First minute after daylight.
    pub sunset: Minute,
}

/// The local clock as steps of its offset against elapsed time.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct CivilClock {
    /// From this minute on the clock shows elapsed minutes plus this many.
    steps: Vec<(Minute, i64)>,
}

impl CivilClock {
    /// A clock that never changes.
    pub fn steady() -> Self {
        Self {
            steps: vec![(Minute(i64::MIN), 0)],
        }
    }

    /// The clock of a zone between two instants; minute 0 is `epoch`, a local midnight.
    pub fn of(zone: Tz, epoch: DateTime<Utc>, until: DateTime<Utc>) -> Self {
        let base = offset_min(zone, epoch);
        let mut steps = vec![(Minute(i64::MIN), 0)];
        let mut shown = 0;
        let last = (until - epoch).num_minutes();
        // Zones change their offset on whole quarter hours of UTC in all rules since 1970 that rosters can meet.
        let mut minute = -2 * 1440;
        while minute <= last {
            let offset = offset_min(zone, epoch + Duration::minutes(minute)) - base;
            if offset != shown {
                steps.push((Minute(minute), offset));
                shown = offset;
            }
            minute += 15;
        }
        Self { steps }
    }

    /// Minutes at which the clock is changed.
    pub fn changes(&self) -> impl Iterator<Item = Minute> {
        self.steps.iter().skip(1).map(|(from, _)| *from)
    }

    /// Minutes shown by the clock at `minute`, counted from the epoch's midnight.
    pub fn at(&self, minute: Minute) -> i64 {
        let index = self.steps.partition_point(|(from, _)| *from <= minute);
        minute.0 + self.steps[index.max(1) - 1].1
    }
}

fn offset_min(zone: Tz, instant: DateTime<Utc>) -> i64 {
    let offset = zone.offset_from_utc_datetime(&instant.naive_utc()).fix();
    i64::from(offset.local_minus_utc()) / 60
}

/// Instant at which a local date begins; where midnight is skipped, the first instant after it.
pub fn midnight(zone: Tz, date: NaiveDate) -> DateTime<Utc> {
    instant_of(zone, date.and_time(NaiveTime::MIN))
}

/// Instant of a local time: the first of two readings; a skipped time is read with the offset before the gap (RFC 5545, 3.3.5).
pub fn instant_of(zone: Tz, local: NaiveDateTime) -> DateTime<Utc> {
    if let Some(instant) = zone.from_local_datetime(&local).earliest() {
        instant.with_timezone(&Utc)
    } else {
        let before = offset_before_gap(zone, local);
        DateTime::from_naive_utc_and_offset(local - before, Utc)
    }
}

/// Offset in force just before a local time that was skipped.
fn offset_before_gap(zone: Tz, local: NaiveDateTime) -> Duration {
    // The longest gaps are a whole date (Apia 2011); an hour at a time finds the last local time before the gap.
    for hours in 1..=26 {
        if let Some(before) = zone
            .from_local_datetime(&(local - Duration::hours(hours)))
            .latest()
        {
            return Duration::seconds(i64::from(before.offset().fix().local_minus_utc()));
        }
    }
    Duration::zero()
}

/// Where daylight comes from: the sun over the workplace, or clock hours where no place is known.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum DaylightSource {
    /// The sun over a place.
    Sun(Place),
    /// The same clock hours all year round.
    ClockHours {
        /// Sunrise.
        sunrise_h: f64,
        /// Sunset.
        sunset_h: f64,
    },
}

/// Local dates from the day before `first` to `last`, on the axis that begins at `epoch`.
pub fn days(
    zone: Tz,
    epoch: DateTime<Utc>,
    (first, last): (NaiveDate, NaiveDate),
    source: DaylightSource,
) -> Vec<CivilDay> {
    let minute = |instant: DateTime<Utc>| Minute((instant - epoch).num_minutes());
    let before = first.pred_opt().unwrap_or(first);
    before
        .iter_days()
        .take_while(|date| *date <= last)
        .map(|date| {
            let next = date.succ_opt().unwrap_or(date);
            let (start, end) = (minute(midnight(zone, date)), minute(midnight(zone, next)));
            let at = |hour: f64| minute(instant_of(zone, date.and_time(time_of(hour))));
            let utc_date = match source {
                DaylightSource::Sun(place) => utc_date_of_noon(date, (start, end), place, minute),
                DaylightSource::ClockHours { .. } => date,
            };
            let (sunrise, sunset) = match source {
                DaylightSource::ClockHours {
                    sunrise_h,
                    sunset_h,
                } => (at(sunrise_h), at(sunset_h)),
                DaylightSource::Sun(place) => match daylight(utc_date.num_days_from_ce(), place) {
                    Daylight::Between {
                        sunrise_min,
                        sunset_min,
                    } => {
                        let midnight = minute(midnight(Tz::UTC, utc_date));
                        let after = |m: f64| Minute::nearest(midnight.as_f64() + m);
                        (after(sunrise_min), after(sunset_min))
                    }
                    Daylight::AllDay => (start, end),
                    Daylight::None => (start, start),
                },
            };
            CivilDay {
                date,
                start,
                end,
                sunrise,
                sunset,
            }
        })
        .filter(|day| day.start < day.end)
        .collect()
}

/// The UTC date whose solar noon lies nearest to the middle of a local date: beside the date line the two differ.
fn utc_date_of_noon(
    date: NaiveDate,
    (start, end): (Minute, Minute),
    place: Place,
    minute: impl Fn(DateTime<Utc>) -> Minute,
) -> NaiveDate {
    let middle = f64::midpoint(start.as_f64(), end.as_f64());
    let off = |candidate: &NaiveDate| {
        let noon =
            minute(midnight(Tz::UTC, *candidate)).as_f64() + 720.0 - 4.0 * place.longitude_deg;
        (noon - middle).abs()
    };
    [date.pred_opt(), Some(date), date.succ_opt()]
        .into_iter()
        .flatten()
        .min_by(|a, b| off(a).total_cmp(&off(b)))
        .unwrap_or(date)
}

#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a clock hour has at most 86 400 s"
)]
pub(super) fn time_of(hour: f64) -> NaiveTime {
    let seconds = (hour * 3600.0).round().clamp(0.0, 86_399.0) as u32;
    NaiveTime::from_num_seconds_from_midnight_opt(seconds, 0).unwrap_or(NaiveTime::MIN)
}

#[cfg(test)]
mod tests {
    use super::*;

    const CLOCK: DaylightSource = DaylightSource::ClockHours {
        sunrise_h: 7.0,
        sunset_h: 19.0,
    };

    #[test]
    fn the_sun_over_the_place_gives_daylight_and_its_absence() {
        let of = |zone: Tz, day: &str, latitude_deg: f64, longitude_deg: f64| {
            let first = date(day);
            let source = DaylightSource::Sun(Place {
                latitude_deg,
                longitude_deg,
            });
            days(zone, midnight(zone, first), (first, first), source)[1]
        };
        // London 2024-06-21: 03:43 and 20:22 UTC, 04:43 and 21:22 on the clock.
        let london = of(chrono_tz::Europe::London, "2024-06-21", 51.5074, -0.1278);
        assert_eq!((london.sunrise, london.sunset), (Minute(283), Minute(1282)));
        // Sydney 2024-12-21: sunrise 18:40:53 UTC on the day before, 05:41 on the clock.
        let sydney = of(
            chrono_tz::Australia::Sydney,
            "2024-12-21",
            -33.8688,
            151.2093,
        );
        assert_eq!(sydney.sunrise, Minute(341));
        let summer = of(chrono_tz::Europe::Oslo, "2024-06-21", 69.6492, 18.9553);
        assert_eq!((summer.sunrise, summer.sunset), (summer.start, summer.end));
        let winter = of(chrono_tz::Europe::Oslo, "2024-12-21", 69.6492, 18.9553);
        assert_eq!(winter.sunrise, winter.sunset);
    }

    fn date(text: &str) -> NaiveDate {
        text.parse().unwrap()
    }

    #[test]
    fn the_day_of_the_spring_change_has_23_hours() {
        let zone = chrono_tz::Europe::London;
        let first = date("2026-03-28");
        let epoch = midnight(zone, first);
        let days = days(zone, epoch, (first, date("2026-03-30")), CLOCK);
        let hours: Vec<_> = days.iter().map(|d| (d.end - d.start) / 60).collect();
        assert_eq!(hours, [24, 24, 23, 24]);
        assert_eq!(days[1].start, Minute(0));
    }

    #[test]
    fn a_date_that_the_zone_skipped_is_no_day() {
        let zone = chrono_tz::Pacific::Apia;
        let first = date("2011-12-29");
        let range = (first, date("2011-12-31"));
        let days = days(zone, midnight(zone, first), range, CLOCK);
        let dates: Vec<_> = days.iter().map(|d| d.date.to_string()).collect();
        assert_eq!(dates, ["2011-12-28", "2011-12-29", "2011-12-31"]);
    }

    #[test]
    fn the_clock_jumps_where_the_zone_does() {
        let zone = chrono_tz::Europe::London;
        let epoch = midnight(zone, date("2026-03-28"));
        let clock = CivilClock::of(zone, epoch, epoch + Duration::days(3));
        // 01:00 UTC on the 29th is minute 1500.
        assert_eq!(clock.at(Minute(1499)), 1499);
        assert_eq!(clock.at(Minute(1500)), 1560);
    }
}
