//! When is a person on duty, and when can sleep happen? Civil time becomes elapsed time here and nowhere else.
//!
//! A [`Timeline`] is one duty line: duties in elapsed minutes, the local dates they span, and the clock.
//! [`plan::segments`] lays a person with a given commute on it.

pub mod civil;
pub mod habits;
pub mod light;
pub mod measured_light;
pub mod plan;
pub mod stress;

pub use civil::{CivilClock, CivilDay, DaylightSource};
pub use habits::{HabitFile, Habits};
pub use light::SiteLight;
pub use measured_light::{LightLogs, MeasuredLight};
pub use stress::Stress;

use crate::numeric::sun::{Place, Sky, elevation_deg, horizontal_illuminance_lux};
use crate::roster::{DutyBlock, Roster, WorkerId};
use crate::units::{ClockHour, Lux, Minute, minutes_to_hours};
use chrono::{DateTime, Datelike, Days, Duration, NaiveDate, Timelike, Utc};
use chrono_tz::Tz;

/// One counted duty on the elapsed time axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DutySpan {
    /// First minute.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Clock hour of the start, local.
    pub start_clock: ClockHour,
    /// Clock hour of the end, local.
    pub end_clock: ClockHour,
    /// Commute of this duty from the roster, minutes each way; otherwise the member's own.
    pub commute_min: Option<f64>,
    /// Light at the eye on this duty, where it differs from that of all duties.
    pub light: Option<Lux>,
    /// Daylight at the eye on the way to and from this duty, where place and sky are known.
    pub way_light: [Option<Lux>; 2],
    /// Factor of stress on the drive of cortisol on this duty; 1 for none.
    pub stress: f64,
}

/// One duty line in elapsed time.
#[derive(Debug, Clone, PartialEq)]
pub struct Timeline {
    /// Duties, ascending, disjoint.
    pub duties: Vec<DutySpan>,
    /// Local dates from the day before the first date to the one after the last end, ascending.
    pub days: Vec<CivilDay>,
    /// Local clock against elapsed time.
    pub clock: CivilClock,
    /// End of the simulated time.
    pub end: Minute,
    /// Time around duty.
    pub habits: Habits,
    /// Light measured on this person, which takes the place of the scene.
    pub measured: MeasuredLight,
}

impl Timeline {
    /// The same person with measured light.
    #[must_use]
    pub fn under(self, measured: MeasuredLight) -> Self {
        Self { measured, ..self }
    }

    /// Is it light outdoors at `minute`?
    pub fn daylight_at(&self, minute: Minute) -> bool {
        let index = self.days.partition_point(|day| day.end <= minute);
        self.days
            .get(index)
            .is_some_and(|day| (day.sunrise..day.sunset).contains(&minute))
    }
}

/// What the site adds to a roster.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SiteScene {
    /// Where the workplace is, for daylight.
    pub place: Option<Place>,
    /// What the sky is like.
    pub sky: Option<Sky>,
    /// Stress by kind of duty.
    pub stress: Stress,
    /// Time around duty.
    pub habits: Habits,
}

impl SiteScene {
    /// Daylight at the eye on the way at an instant, lux.
    fn way_light(&self, instant: DateTime<Utc>) -> Option<Lux> {
        let (place, sky) = (self.place?, self.sky?);
        let of_day = f64::from(instant.num_seconds_from_midnight()) / 86_400.0;
        let moment = f64::from(instant.num_days_from_ce()) + of_day;
        let elevation = elevation_deg(moment, place);
        let outdoors = horizontal_illuminance_lux(elevation, instant.ordinal(), sky);
        Lux::new(outdoors * self.habits.outdoor_eye_share).ok()
    }

    /// Where daylight comes from.
    fn daylight(&self) -> DaylightSource {
        match self.place {
            Some(place) => DaylightSource::Sun(place),
            None => DaylightSource::ClockHours {
                sunrise_h: self.habits.sunrise_h,
                sunset_h: self.habits.sunset_h,
            },
        }
    }
}

/// The elapsed-time axis that all workers of a roster share.
#[derive(Debug, Clone, PartialEq)]
pub struct Axis {
    /// Instant of minute 0: local midnight that begins the first date analysed.
    pub epoch: DateTime<Utc>,
    /// Local dates from the day before the first date to the one after the last end.
    pub days: Vec<CivilDay>,
    /// Local clock against elapsed time.
    pub clock: CivilClock,
    /// Zone of the workplace.
    pub zone: Tz,
    /// Instant at which the last shift begins.
    pub last_start: DateTime<Utc>,
}

impl Axis {
    /// The axis of a roster: from the date of its first shift to the date on which its last shift ends.
    ///
    /// Returns `None` for a roster without shifts.
    pub fn of(roster: &Roster, scene: &SiteScene) -> Option<Self> {
        let first = roster.shifts.iter().map(|shift| shift.start).min()?;
        let last = roster.shifts.iter().map(|shift| shift.end).max()?;
        let zone = roster.zone;
        let first_date = first.with_timezone(&zone).date_naive();
        // One date more than the roster, so that the last night and its `CBTmin` are complete in every member.
        let last_date = last.with_timezone(&zone).date_naive();
        let last_date = last_date.succ_opt().unwrap_or(last_date);
        let epoch = civil::midnight(zone, first_date);
        Some(Self {
            epoch,
            days: civil::days(zone, epoch, (first_date, last_date), scene.daylight()),
            clock: CivilClock::of(zone, epoch, last + Duration::days(3)),
            zone,
            last_start: roster.shifts.iter().map(|shift| shift.start).max()?,
        })
    }

    /// Dates of the roster: from that of the first start to that of the last start.
    pub fn rostered_dates(&self) -> &[CivilDay] {
        let last = self.minute(self.last_start);
        // The days begin with the one before the first date.
        let dates = self.days.get(1..).unwrap_or_default();
        &dates[..dates.partition_point(|day| day.start <= last)]
    }

    /// End of the date on which the last shift ends: later the roster tells nothing.
    pub fn last_end(&self) -> Minute {
        let before_last = self.days.len().checked_sub(2);
        before_last.map_or(Minute(0), |place| self.days[place].end)
    }

    /// Elapsed minute of an instant, cut to whole minutes.
    pub fn minute(&self, instant: DateTime<Utc>) -> Minute {
        Minute((instant - self.epoch).num_minutes())
    }

    /// Elapsed minute of a clock hour on a date, or on the date `days_later` after it.
    pub fn at_clock(&self, date: NaiveDate, days_later: u64, hour: f64) -> Minute {
        let date = date.checked_add_days(Days::new(days_later)).unwrap_or(date);
        self.minute(civil::instant_of(
            self.zone,
            date.and_time(civil::time_of(hour)),
        ))
    }

    /// Local civil time of an elapsed minute.
    pub fn local(&self, minute: Minute) -> DateTime<Tz> {
        self.instant(minute).with_timezone(&self.zone)
    }

    /// Instant of an elapsed minute.
    pub fn instant(&self, minute: Minute) -> DateTime<Utc> {
        self.epoch + Duration::minutes(minute.0)
    }
}

/// The duty line of one worker.
pub fn timeline(roster: &Roster, worker: WorkerId, axis: &Axis, scene: &SiteScene) -> Timeline {
    let duties = roster
        .counted_duties(worker, scene.habits.join_gap_min)
        .iter()
        .map(|block| duty_span(block, axis, scene))
        .collect();
    let end = axis.days.last().map_or(Minute(0), |day| day.end);
    Timeline {
        duties,
        days: axis.days.clone(),
        clock: axis.clock.clone(),
        end,
        habits: with_daylight_of_first_date(scene.habits, axis),
        measured: MeasuredLight::default(),
    }
}

/// Habitual days before the roster have the daylight of its first date.
fn with_daylight_of_first_date(habits: Habits, axis: &Axis) -> Habits {
    let Some(day) = axis.days.get(1) else {
        return habits;
    };
    let clock_h = |minute: Minute| minutes_to_hours(axis.clock.at(minute));
    Habits {
        sunrise_h: clock_h(day.sunrise),
        sunset_h: clock_h(day.sunset),
        ..habits
    }
}

fn duty_span(block: &DutyBlock, axis: &Axis, scene: &SiteScene) -> DutySpan {
    let start = axis.minute(block.start);
    let end = axis.minute(block.end);
    let clock = |minute: Minute| ClockHour::wrapping(minutes_to_hours(axis.clock.at(minute)));
    // The light of the way is that of its middle with the median commute.
    let half_way = Duration::seconds(Minute::nearest(scene.habits.commute_h * 1800.0).0);
    DutySpan {
        start,
        end,
        start_clock: clock(start),
        end_clock: clock(end),
        commute_min: block.commute_min.map(f64::from),
        light: None,
        way_light: [
            scene.way_light(block.start - half_way),
            scene.way_light(block.end + half_way),
        ],
        stress: scene.stress.on(clock(start), end.hours_since(start)),
    }
}
