//! Sleep, light and pacemaker in one minute loop: who sleeps when, and where does the clock stand?
//!
//! The members of a unit are the lanes. Each minute the scalar part of a member decides on sleep and light,
//! then all lanes take one integration step together.

use super::ensemble::Member;
use super::light::LightScenes;
use super::pacemaker::{LANES, MarkerReader, Pacemaker, PacemakerInput, PacemakerState};
use super::sleep::{SleepModel, Sleeper, Surroundings, Transition};
use super::track::{MemberTrack, SleepEpisode};
use crate::timeline::plan::{Segment, segments};
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
    /// Last `CBTmin` before the entry, minutes since the epoch, per member.
    cbtmin_min: Vec<f64>,
}

impl WarmUnit {
    /// The members of the unit, at most [`LANES`].
    pub fn members(&self) -> &[Member] {
        &self.members
    }

    /// State of the pacemaker at the entry.
    pub fn state(&self) -> &PacemakerState {
        &self.state
    }

    /// Last `CBTmin` before the entry, minutes since the epoch.
    pub fn cbtmin_min(&self) -> &[f64] {
        &self.cbtmin_min
    }
}

/// Lets the members of one unit live their habitual days off until noon of the day before the roster.
///
/// # Panics
///
/// Panics when more than [`LANES`] or no members are given; the caller cuts the ensemble into units.
pub fn warm_up(models: &CoupledModels, members: &[Member], habits: &Habits) -> WarmUnit {
    assert!(
        (1..=LANES).contains(&members.len()),
        "a unit holds 1 to 16 members"
    );
    let lane_members = lanes_of(members);
    let pacemaker = &models.pacemaker;
    let pace = lane_members.map(|m| pacemaker.pace(m.tau_h));
    let mut state = pacemaker.start();
    let mut readers: [MarkerReader; LANES] = std::array::from_fn(|_| MarkerReader::new());
    let mut last_cbtmin = [0.0; LANES];
    let mut drive = LightDrive::dark();
    let minutes = models.habitual_days * DAY_MIN + DAY_MIN / 2;
    for minute in 0..minutes {
        let daylight = is_daylight(habits, minute);
        for (lane, member) in lane_members.iter().enumerate() {
            let asleep = sleeps_by_habit(member, minute);
            let lux = if asleep {
                models.light.asleep()
            } else {
                models.light.home(daylight)
            };
            drive.set(pacemaker, lane, lux * member.sensitivity, asleep);
        }
        let before = state.clone();
        pacemaker.step(&mut state, &drive.input, &pace);
        for lane in 0..LANES {
            let from = (before.first[lane], before.second[lane]);
            let to = (state.first[lane], state.second[lane]);
            let at = Minute(minute).as_f64();
            if let Some(cbtmin) = readers[lane].read(pacemaker, at, from, to) {
                last_cbtmin[lane] = cbtmin;
            }
        }
    }
    let entry = Minute(minutes).as_f64() - ENTRY.as_f64();
    WarmUnit {
        members: members.to_vec(),
        state,
        cbtmin_min: last_cbtmin[..members.len()]
            .iter()
            .map(|cbtmin| cbtmin - entry)
            .collect(),
    }
}

/// Fills the lanes of a unit; spare lanes repeat the last member and are dropped afterwards.
fn lanes_of(members: &[Member]) -> [Member; LANES] {
    std::array::from_fn(|lane| members[lane.min(members.len() - 1)])
}

fn is_daylight(habits: &Habits, minute: i64) -> bool {
    let clock_h = crate::units::minutes_to_hours(minute.rem_euclid(DAY_MIN));
    (habits.sunrise_h..habits.sunset_h).contains(&clock_h)
}

fn sleeps_by_habit(member: &Member, minute: i64) -> bool {
    let since_bed = Minute(minute).as_f64() - member.bed_h * 60.0;
    let phase = since_bed - 1440.0 * (since_bed / 1440.0 + 1e-9).floor();
    phase < member.need_h * 60.0 - 1e-6
}

/// Light and arousal of the lanes; the power of the light is taken only when it changes.
#[derive(Debug, Clone)]
struct LightDrive {
    input: PacemakerInput,
    lux: [f64; LANES],
}

impl LightDrive {
    fn dark() -> Self {
        Self {
            input: PacemakerInput {
                alpha: [0.0; LANES],
                arousal: [0.0; LANES],
            },
            lux: [0.0; LANES],
        }
    }

    fn set(&mut self, pacemaker: &Pacemaker, lane: usize, lux: f64, asleep: bool) {
        if self.lux[lane].to_bits() != lux.to_bits() {
            self.lux[lane] = lux;
            self.input.alpha[lane] = pacemaker.alpha(lux);
        }
        self.input.arousal[lane] = pacemaker.arousal(asleep);
    }
}

/// Lives the roster with one unit of members, from [`ENTRY`] to the end of the timeline.
///
/// # Example
///
/// ```
/// use acroshift::physiology::coupled::{live, warm_up};
/// use acroshift::physiology::{coupled_models, Member, ModelSets};
/// use acroshift::timeline::{CivilClock, HabitFile, Timeline};
/// use acroshift::units::Minute;
/// let sets = ModelSets::embedded();
/// let models = coupled_models(&sets);
/// let habits = HabitFile::embedded().habits();
/// let warm = warm_up(&models, &[Member::mean(&sets.ensemble, 30.0)], &habits);
/// let free = Timeline { duties: Vec::new(), days: Vec::new(), clock: CivilClock::steady(), end: Minute(1440), habits };
/// let track = &live(&models, &warm, &free)[0];
/// // The last CBTmin before the entry stands at 03:32 (reference case of the sleep mechanism).
/// assert!((track.habitual_cbtmin_min / 60.0 + 24.0 - 3.5326).abs() < 0.01);
/// ```
pub fn live(models: &CoupledModels, warm: &WarmUnit, timeline: &Timeline) -> Vec<MemberTrack> {
    let lane_members = lanes_of(&warm.members);
    let pace = lane_members.map(|m| models.pacemaker.pace(m.tau_h));
    let mut people: Vec<Person> = warm
        .members
        .iter()
        .zip(&warm.cbtmin_min)
        .map(|(member, cbtmin)| Person::enter(models, member, *cbtmin, timeline))
        .collect();
    let mut state = warm.state.clone();
    let mut drive = LightDrive::dark();
    for minute in ENTRY.0..timeline.end.0 {
        let clock_min = timeline.clock.at(Minute(minute));
        for (lane, person) in people.iter_mut().enumerate() {
            person.decide(models, minute, clock_min);
            let lux = person.lux(models, timeline) * person.member.sensitivity;
            drive.set(&models.pacemaker, lane, lux, person.sleeper.asleep());
        }
        let before = state.clone();
        models.pacemaker.step(&mut state, &drive.input, &pace);
        for (lane, person) in people.iter_mut().enumerate() {
            person.sleeper.live_a_minute(&models.sleep);
            let from = (before.first[lane], before.second[lane]);
            let to = (state.first[lane], state.second[lane]);
            person.read_marker(&models.pacemaker, minute, from, to);
        }
    }
    people
        .into_iter()
        .map(|person| person.leave(timeline.end))
        .collect()
}

/// The scalar part of one member.
#[derive(Debug)]
struct Person {
    member: Member,
    sleeper: Sleeper,
    segments: Vec<Segment>,
    here: usize,
    reader: MarkerReader,
    habitual_cbtmin_min: f64,
    cbtmin_min: f64,
    track: MemberTrack,
}

impl Person {
    fn enter(
        models: &CoupledModels,
        member: &Member,
        cbtmin_min: f64,
        timeline: &Timeline,
    ) -> Self {
        Self {
            member: *member,
            sleeper: Sleeper::habitual(&models.sleep, member, ENTRY.0),
            segments: segments(timeline, member.commute_min, ENTRY),
            here: 0,
            reader: MarkerReader::after(&models.pacemaker, cbtmin_min),
            habitual_cbtmin_min: cbtmin_min,
            cbtmin_min,
            track: MemberTrack::habitual(*member, cbtmin_min, REMEMBERED_DAYS),
        }
    }

    fn segment(&self) -> &Segment {
        &self.segments[self.here]
    }

    fn decide(&mut self, models: &CoupledModels, minute: i64, clock_min: i64) {
        while self.segments[self.here].to.0 <= minute && self.here + 1 < self.segments.len() {
            self.here += 1;
        }
        let around = Surroundings {
            minute,
            clock_min,
            sleep_possible: self.segment().sleep_possible,
            alarm: self.segment().alarm.map(|alarm| alarm.0),
        };
        let displacement = self.cbtmin_min - self.habitual_cbtmin_min;
        match self.sleeper.decide(&models.sleep, around, displacement) {
            Some(Transition::FellAsleep) => self.track.sleeps.push(SleepEpisode {
                from: Minute(minute),
                to: Minute(minute),
                cut: true,
            }),
            Some(Transition::Woke) => self.end_sleep(minute, false),
            None => {}
        }
    }

    fn end_sleep(&mut self, minute: i64, cut: bool) {
        if let Some(episode) = self.track.sleeps.last_mut() {
            episode.to = Minute(minute);
            episode.cut = cut;
        }
    }

    fn lux(&self, models: &CoupledModels, timeline: &Timeline) -> f64 {
        if self.sleeper.asleep() {
            return models.light.asleep();
        }
        let segment = self.segment();
        let lux = models.light.awake(segment, timeline);
        let on_the_way_home = segment
            .after_night_duty
            .is_some_and(|end| self.sleeper.last_wake() < end.0);
        let at_work = matches!(segment.place, crate::timeline::plan::Place::Duty(_));
        if on_the_way_home && !at_work && !self.member.sees_morning_daylight {
            lux.min(models.light.morning_kept_out())
        } else {
            lux
        }
    }

    fn read_marker(
        &mut self,
        pacemaker: &Pacemaker,
        minute: i64,
        from: (f64, f64),
        to: (f64, f64),
    ) {
        let at = Minute(minute).as_f64();
        if let Some(cbtmin) = self.reader.read(pacemaker, at, from, to) {
            self.cbtmin_min = cbtmin;
            self.track.cbtmin_min.push(cbtmin);
        }
    }

    fn leave(mut self, end: Minute) -> MemberTrack {
        if self.sleeper.asleep() {
            self.end_sleep(end.0, true);
        }
        self.track
    }
}
