//! Sleep, light and pacemaker together: who sleeps when, and where does the clock stand?
//!
//! Each member of a unit lives its own life; the clocks of all move on together ([`super::unit`]).

use super::ensemble::Member;
use super::light::LightScenes;
use super::pacemaker::{Pacemaker, PacemakerState};
use super::sleep::{SleepModel, Sleeper, Surroundings};
use super::track::{MemberTrack, SleepEpisode};
use super::unit::{Clocks, Life, Marker, Scene};
use crate::timeline::plan::{Place, Segment, segments};
use crate::timeline::{Habits, Timeline};
use crate::units::Minute;

/// The roster is entered at noon of the day before the first date, awake after a habitual night.
pub const ENTRY: Minute = Minute(-720);
const DAY_MIN: i64 = 1440;
/// Habitual nights remembered before the entry, so that sleep in the last 48 h is known on the first date.
pub const REMEMBERED_DAYS: i64 = 5;

/// The models that act together.
#[derive(Debug, Clone, PartialEq)]
pub struct CoupledModels {
    /// Pacemaker.
    pub pacemaker: Pacemaker,
    /// Sleep rules.
    pub sleep: SleepModel,
    /// Light by scene.
    pub light: LightScenes,
    /// Habitual days lived before the roster.
    pub habitual_days: i64,
}

/// A unit of members after their habitual days, at the entry into the roster.
#[derive(Debug, Clone, PartialEq)]
pub struct WarmUnit {
    members: Vec<Member>,
    state: PacemakerState,
    /// Last `CBTmin` before the entry and radius of the oscillation there, per member.
    markers: Vec<Marker>,
    /// How much later than the day before the last `CBTmin` fell, minutes, per member.
    drift_min: Vec<f64>,
}

impl WarmUnit {
    /// The members of the unit, at most 16.
    pub fn members(&self) -> &[Member] {
        &self.members
    }

    /// State of the pacemaker at the entry.
    pub fn state(&self) -> &PacemakerState {
        &self.state
    }

    /// Last `CBTmin` before the entry, minutes since the epoch, and radius there, per member.
    pub fn markers(&self) -> &[Marker] {
        &self.markers
    }

    /// How much later than on the day before the last `CBTmin` fell, minutes: near 0 when entrained.
    pub fn drift_min(&self) -> &[f64] {
        &self.drift_min
    }
}

/// Lets the members of one unit live their habitual days off until noon of the day before the roster.
///
/// # Panics
///
/// Panics when more than 16 or no members are given; the caller cuts the ensemble into units.
pub fn warm_up(models: &CoupledModels, members: &[Member], habits: &Habits) -> WarmUnit {
    let minutes = models.habitual_days * DAY_MIN + DAY_MIN / 2;
    let entry = ENTRY.0 - minutes;
    let mut lives: Vec<HabitualLife> = members
        .iter()
        .map(|member| HabitualLife::of(models, member, habits))
        .collect();
    let mut clocks = Clocks::new(&models.pacemaker, members, models.pacemaker.start());
    // The epoch of the habitual days is a midnight, as that of the roster.
    clocks.live_through(&mut lives, entry, ENTRY.0);
    WarmUnit {
        members: members.to_vec(),
        state: clocks.state,
        markers: lives.iter().map(|life| life.last).collect(),
        drift_min: lives
            .iter()
            .map(|life| life.last.cbtmin_min - life.before_last_min - 1440.0)
            .collect(),
    }
}

/// A habitual day off, every day the same.
#[derive(Debug)]
struct HabitualLife {
    sensitivity: f64,
    asleep_lux: f64,
    day_lux: f64,
    evening_lux: f64,
    /// Minutes of the day.
    bed: i64,
    sleep_min: i64,
    daylight: (i64, i64),
    last: Marker,
    before_last_min: f64,
}

impl HabitualLife {
    fn of(models: &CoupledModels, member: &Member, habits: &Habits) -> Self {
        let minute = |hour: f64| models.sleep.on_or_after(hour * 60.0);
        let bed = minute(member.bed_h);
        Self {
            sensitivity: member.sensitivity,
            asleep_lux: models.light.asleep(),
            day_lux: models.light.home(true),
            evening_lux: models.light.home(false),
            bed,
            sleep_min: minute(member.bed_h + member.need_h) - bed,
            daylight: (minute(habits.sunrise_h), minute(habits.sunset_h)),
            last: Marker {
                cbtmin_min: 0.0,
                radius: 1.0,
            },
            before_last_min: 0.0,
        }
    }
}

impl Life for HabitualLife {
    fn scene(&mut self, minute: i64) -> Scene {
        let of_day = minute.rem_euclid(DAY_MIN);
        let asleep = (minute - self.bed).rem_euclid(DAY_MIN) < self.sleep_min;
        let lux = if asleep {
            self.asleep_lux
        } else if (self.daylight.0..self.daylight.1).contains(&of_day) {
            self.day_lux
        } else {
            self.evening_lux
        };
        let wait = [
            self.bed,
            self.bed + self.sleep_min,
            self.daylight.0,
            self.daylight.1,
        ]
        .map(|edge| (edge - minute - 1).rem_euclid(DAY_MIN) + 1);
        Scene {
            lux: lux * self.sensitivity,
            asleep,
            until: minute + wait.into_iter().min().unwrap_or(DAY_MIN),
        }
    }

    fn meet(&mut self, marker: Marker) {
        self.before_last_min = self.last.cbtmin_min;
        self.last = marker;
    }
}

/// Lives the roster with one unit of members, from [`ENTRY`] to the end of the timeline.
///
/// # Example
///
/// ```
/// use acroshift::physiology::coupled::{live, warm_up};
/// use acroshift::physiology::{coupled_models, Member, ModelSets};
/// use acroshift::timeline::{CivilClock, HabitFile, MeasuredLight, Timeline};
/// use acroshift::units::Minute;
/// let sets = ModelSets::embedded();
/// let models = coupled_models(&sets);
/// let habits = HabitFile::embedded().habits();
/// let warm = warm_up(&models, &[Member::mean(&sets.ensemble, 30.0)], &habits);
/// let free = Timeline { duties: Vec::new(), days: Vec::new(), clock: CivilClock::steady(), end: Minute(1440), habits, measured: MeasuredLight::default() };
/// let track = &live(&models, &warm, &free)[0];
/// // The last CBTmin before the entry stands at 03:32 (reference case of the sleep mechanism).
/// assert!((track.habitual_cbtmin_min / 60.0 + 24.0 - 3.5326).abs() < 0.01);
/// ```
pub fn live(models: &CoupledModels, warm: &WarmUnit, timeline: &Timeline) -> Vec<MemberTrack> {
    let mut people: Vec<Person<'_>> = warm
        .members
        .iter()
        .zip(&warm.markers)
        .map(|(member, marker)| Person::enter(models, timeline, member, *marker))
        .collect();
    let cbtmin_min: Vec<f64> = warm.markers.iter().map(|m| m.cbtmin_min).collect();
    let mut clocks =
        Clocks::new(&models.pacemaker, &warm.members, warm.state.clone()).after(&cbtmin_min);
    clocks.live_through(&mut people, ENTRY.0, timeline.end.0);
    people
        .into_iter()
        .map(|person| person.leave(timeline.end))
        .collect()
}

/// One member on the roster.
#[derive(Debug)]
struct Person<'a> {
    models: &'a CoupledModels,
    timeline: &'a Timeline,
    member: Member,
    sleeper: Sleeper,
    segments: Vec<Segment>,
    here: usize,
    /// The minute at which the person falls asleep or wakes, if it does in this segment.
    planned: Option<i64>,
    habitual: Marker,
    cbtmin_min: f64,
    track: MemberTrack,
}

impl<'a> Person<'a> {
    fn enter(
        models: &'a CoupledModels,
        timeline: &'a Timeline,
        member: &Member,
        habitual: Marker,
    ) -> Self {
        let on_grid = |minute| Minute(models.sleep.on_or_after(minute));
        Self {
            models,
            timeline,
            member: *member,
            sleeper: Sleeper::habitual(&models.sleep, member, ENTRY.0),
            segments: segments(timeline, member.commute_min, ENTRY, on_grid),
            here: 0,
            planned: None,
            habitual,
            cbtmin_min: habitual.cbtmin_min,
            track: MemberTrack::habitual(*member, habitual.cbtmin_min, REMEMBERED_DAYS),
        }
    }

    fn segment(&self) -> &Segment {
        &self.segments[self.here]
    }

    fn surroundings(&self) -> Surroundings {
        let segment = self.segment();
        Surroundings {
            sleep_possible: segment.sleep_possible,
            alarm: segment.alarm.map(|alarm| alarm.0),
            until: segment.to.0,
            clock_shift_min: self.timeline.clock.at(segment.from) - segment.from.0,
        }
    }

    /// Looks for the next change of state from `from` on.
    fn plan(&mut self, from: i64, around: &Surroundings) {
        let sleep = &self.models.sleep;
        let from = sleep.on_or_after(Minute(from).as_f64()).max(from);
        let displacement_min = self.cbtmin_min - self.habitual.cbtmin_min;
        self.planned = self
            .sleeper
            .next_change(sleep, from, around, displacement_min);
    }

    /// Falls asleep or wakes at `minute`; one change of state at a minute.
    fn turn(&mut self, minute: i64, around: &Surroundings) {
        if self.sleeper.asleep() {
            self.end_sleep(minute, false);
        } else {
            self.track.sleeps.push(SleepEpisode {
                from: Minute(minute),
                to: Minute(minute),
                cut: true,
            });
        }
        self.sleeper
            .turn(&self.models.sleep, minute, around.clock_shift_min);
        self.plan(minute + 1, around);
    }

    fn end_sleep(&mut self, minute: i64, cut: bool) {
        if let Some(episode) = self.track.sleeps.last_mut() {
            episode.to = Minute(minute);
            episode.cut = cut;
        }
    }

    fn lux(&self) -> f64 {
        let light = &self.models.light;
        if self.sleeper.asleep() {
            return light.asleep();
        }
        let segment = self.segment();
        let lux = light.awake(segment, self.timeline);
        let on_the_way_home = segment
            .after_night_duty
            .is_some_and(|end| self.sleeper.last_wake() < end.0);
        let at_work = matches!(segment.place, Place::Duty(_));
        let measured = segment.measured.is_some();
        if on_the_way_home && !at_work && !measured && !self.member.sees_morning_daylight {
            lux.min(light.morning_kept_out())
        } else {
            lux
        }
    }

    fn leave(mut self, end: Minute) -> MemberTrack {
        if self.sleeper.asleep() {
            self.end_sleep(end.0, true);
        }
        self.track
    }
}

impl Life for Person<'_> {
    fn scene(&mut self, minute: i64) -> Scene {
        while self.segments[self.here].to.0 <= minute && self.here + 1 < self.segments.len() {
            self.here += 1;
        }
        let around = self.surroundings();
        let rung = self.sleeper.asleep() && !around.sleep_possible;
        if rung || self.planned == Some(minute) {
            self.turn(minute, &around);
        } else {
            self.plan(minute, &around);
            if self.planned == Some(minute) {
                self.turn(minute, &around);
            }
        }
        Scene {
            lux: self.lux() * self.member.sensitivity,
            asleep: self.sleeper.asleep(),
            until: self.planned.unwrap_or(around.until),
        }
    }

    fn meet(&mut self, marker: Marker) {
        self.cbtmin_min = marker.cbtmin_min;
        self.track.cbtmin_min.push(marker.cbtmin_min);
        self.track
            .amplitude_ratio
            .push(marker.radius / self.habitual.radius);
    }
}
