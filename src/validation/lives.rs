//! The ensemble in an experiment: prescribed light and sleep, or duties with the model's own sleep.

use super::experiment::{Baseline, Condition, Cycle, Experiment, State};
use super::quantity::{self, Reading};
use crate::physiology::cascade::{Cascade, Load};
use crate::physiology::day::DayReader;
use crate::physiology::pacemaker::LANES;
use crate::physiology::unit::{Clocks, Life, Marker, Scene};
use crate::physiology::{
    CORTISOL_STEP_MIN, Engine, Member, MemberTrack, ModelSets, Sampling, SleepEpisode, members,
};
use crate::timeline::{CivilClock, CivilDay, DutySpan, Habits, MeasuredLight, Timeline};
use crate::units::{ClockHour, Lux, Minute, minutes_to_hours};
use chrono::{Days, NaiveDate};

const DAY_MIN: i64 = 1440;
/// Cortisol is run from this minute in prescribed lives; its start is forgotten at day 0.
const CORTISOL_FROM: Minute = Minute(-5 * DAY_MIN);

/// Quantities by `condition.name`, one value per member.
pub(super) type Quantities = Vec<(String, Vec<f64>)>;

/// Lives every condition of an experiment and reads its quantities.
pub(super) fn quantities(
    experiment: &Experiment,
    sets: &ModelSets,
    sampling: Sampling,
    habits: Habits,
) -> Quantities {
    experiment
        .condition
        .iter()
        .flat_map(|condition| {
            let before = condition.life_before(experiment);
            let values = if condition.days.is_empty() && condition.cycle.is_none() {
                on_duties(before, condition, sets, sampling, habits)
            } else {
                prescribed(before, condition, sets, sampling, habits)
            };
            condition
                .quantity
                .iter()
                .zip(values)
                .map(|(quantity, values)| (format!("{}.{}", condition.name, quantity.name), values))
        })
        .collect()
}

/// Reads the quantities of a condition from the tracks of all members, unit by unit.
fn read_all(
    condition: &Condition,
    sets: &ModelSets,
    tracks: &[MemberTrack],
    cortisol_from: Minute,
) -> Vec<Vec<f64>> {
    let cascade = Cascade::new(&sets.cascade);
    let days = DayReader::new(
        CORTISOL_STEP_MIN,
        sets.cascade.quiescence.share_of_mean.value,
    );
    let mut values = vec![Vec::new(); condition.quantity.len()];
    for unit in tracks.chunks(LANES) {
        let rows = reads_cortisol(condition).then(|| {
            let span = (cortisol_from, last_minute(condition));
            cascade.rows(unit, Load::DEBT, span, CORTISOL_STEP_MIN)
        });
        for (values, quantity) in values.iter_mut().zip(&condition.quantity) {
            values.extend(quantity::read(quantity.reading, unit, rows.as_ref(), &days));
        }
    }
    values
}

fn reads_cortisol(condition: &Condition) -> bool {
    condition.quantity.iter().any(|quantity| {
        matches!(
            quantity.reading,
            Reading::CortisolAcrophase { .. }
                | Reading::CortisolNadir { .. }
                | Reading::CortisolQuietEnd { .. }
                | Reading::CortisolAmplitude { .. }
        )
    })
}

/// The minute up to which a condition is lived: whole days.
fn last_minute(condition: &Condition) -> Minute {
    let prescribed = condition.days.iter().map(|days| (days.on.1 + 1) * DAY_MIN);
    let on_duty = condition
        .duty_hours()
        .iter()
        .map(|(_, to, _)| Minute::nearest(to * 60.0).0)
        .max();
    let read = condition
        .quantity
        .iter()
        .map(|quantity| Minute::from_which(quantity.reading.until_h() * 60.0).0);
    let last = prescribed.chain(on_duty).chain(read).max().unwrap_or(0);
    Minute((last.max(0) / DAY_MIN + 2) * DAY_MIN)
}

/// Members with the habits of the baseline; people of a laboratory keep its hours, others keep their distance from the mean.
fn with_habits(
    baseline: &Baseline,
    sets: &ModelSets,
    sampling: Sampling,
    exact: bool,
) -> Vec<Member> {
    let need_h = crate::numeric::circular::wrap(baseline.wake - baseline.bed, 24.0);
    let habit = &sets.ensemble.habit;
    members(&sets.ensemble, sampling)
        .into_iter()
        .map(|member| {
            if exact {
                Member {
                    bed_h: baseline.bed,
                    need_h,
                    ..member
                }
            } else {
                // Bedtimes after midnight are counted on from 24.
                let bed = baseline.bed + if baseline.bed < 12.0 { 24.0 } else { 0.0 };
                let later = bed - habit.bed.value;
                let longer = need_h - habit.need.value;
                Member {
                    bed_h: member.bed_h + later,
                    need_h: member.need_h + longer,
                    ..member
                }
            }
        })
        .collect()
}

/// Duties are known, sleep is left to the model.
fn on_duties(
    before: &Baseline,
    condition: &Condition,
    sets: &ModelSets,
    sampling: Sampling,
    habits: Habits,
) -> Vec<Vec<f64>> {
    let sampling = Sampling {
        commute_min: condition
            .commute_h
            .map_or(sampling.commute_min, |hours| hours * 60.0),
        morning_daylight: condition.morning_daylight,
        ..sampling
    };
    let habits = Habits {
        personal_cap_h: condition.personal_h.unwrap_or(habits.personal_cap_h),
        ..habits
    };
    let members = with_habits(before, sets, sampling, false);
    let engine = Engine::new(sets);
    let warm = engine.warm_up(&members, &habits);
    let tracks = engine.tracks(&warm, &timeline(condition, habits));
    read_all(condition, sets, &tracks, Engine::CORTISOL_FROM)
}

/// The duties of a condition on the elapsed time axis, with the daylight hours of the habits.
fn timeline(condition: &Condition, habits: Habits) -> Timeline {
    let end = last_minute(condition);
    let clock = |minute: Minute| ClockHour::wrapping(minutes_to_hours(minute.0));
    let duties = condition
        .duty_hours()
        .iter()
        .map(|(from, to, lux)| {
            let (start, end) = (Minute::nearest(from * 60.0), Minute::nearest(to * 60.0));
            DutySpan {
                start,
                end,
                start_clock: clock(start),
                end_clock: clock(end),
                commute_min: None,
                light: lux.and_then(|lux| Lux::new(lux).ok()),
                way_light: [None; 2],
                stress: 1.0,
            }
        })
        .collect();
    let edge = |day: i64, hour: f64| Minute(day * DAY_MIN) + Minute::nearest(hour * 60.0).0;
    let days = (-1..end.0 / DAY_MIN)
        .map(|day| CivilDay {
            date: NaiveDate::default() + Days::new(day.unsigned_abs()),
            start: Minute(day * DAY_MIN),
            end: Minute((day + 1) * DAY_MIN),
            sunrise: edge(day, habits.sunrise_h),
            sunset: edge(day, habits.sunset_h),
        })
        .collect();
    Timeline {
        duties,
        days,
        clock: CivilClock::steady(),
        end,
        habits,
        measured: MeasuredLight::default(),
    }
}

/// Light and sleep are prescribed.
fn prescribed(
    before: &Baseline,
    condition: &Condition,
    sets: &ModelSets,
    sampling: Sampling,
    habits: Habits,
) -> Vec<Vec<f64>> {
    let members = with_habits(before, sets, sampling, true);
    let engine = Engine::new(sets);
    let pacemaker = engine.pacemaker();
    let from = -engine.habitual_days() * DAY_MIN;
    let plan = plan(before, condition, sets, habits, from);
    let mut tracks = Vec::new();
    for unit in members.chunks(LANES) {
        let mut lives: Vec<PrescribedLife<'_>> = unit
            .iter()
            .map(|member| PrescribedLife::new(&plan, member))
            .collect();
        let mut clocks = Clocks::new(pacemaker, unit, pacemaker.start());
        clocks.live_through(&mut lives, from, last_minute(condition).0);
        tracks.extend(lives.into_iter().map(|life| life.track));
    }
    read_all(condition, sets, &tracks, CORTISOL_FROM)
}

/// A stretch of prescribed life.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Stretch {
    from: i64,
    asleep: bool,
    lux: f64,
}

/// Baseline days, the days of the condition, then a constant routine.
fn plan(
    baseline: &Baseline,
    condition: &Condition,
    sets: &ModelSets,
    habits: Habits,
    from: i64,
) -> Vec<Stretch> {
    let last = condition
        .days
        .iter()
        .map(|days| days.on.1)
        .max()
        .unwrap_or(-1);
    let mut plan = Vec::new();
    for day in from / DAY_MIN..=last {
        let given = condition
            .days
            .iter()
            .rev()
            .find(|days| (days.on.0..=days.on.1).contains(&day));
        for (minute, asleep, lux) in day_of(baseline, given.map(|d| &d.blocks[..]), sets, habits) {
            plan.push(Stretch {
                from: day * DAY_MIN + minute,
                asleep,
                lux,
            });
        }
    }
    let mut end = (last + 1) * DAY_MIN;
    if let Some(cycle) = &condition.cycle {
        end = push_cycles(&mut plan, cycle);
    }
    plan.push(Stretch {
        from: end,
        asleep: false,
        lux: condition.after_lux,
    });
    plan
}

/// Days of another length from minute 0 on; gives the minute at which they end.
fn push_cycles(plan: &mut Vec<Stretch>, cycle: &Cycle) -> i64 {
    let length_min = cycle.length_h * 60.0;
    let start = |day: u32| Minute::nearest(f64::from(day) * length_min).0;
    for day in 0..cycle.count {
        let awake_min = length_min * (1.0 - cycle.asleep_share);
        plan.push(Stretch {
            from: start(day),
            asleep: false,
            lux: cycle.lux,
        });
        plan.push(Stretch {
            from: start(day) + Minute::nearest(awake_min).0,
            asleep: true,
            lux: 0.0,
        });
    }
    start(cycle.count)
}

type Block = (f64, f64, State, f64);

/// Minute of the day, asleep and lux of one day, ascending.
fn day_of(
    baseline: &Baseline,
    given: Option<&[Block]>,
    sets: &ModelSets,
    habits: Habits,
) -> Vec<(i64, bool, f64)> {
    // Hours become minutes before anything is compared.
    let minute_of = |hour: f64| Minute::nearest(hour * 60.0).0;
    let at = |minute: i64| -> (bool, f64) {
        let block = given.and_then(|blocks| {
            blocks
                .iter()
                .find(|(from, to, ..)| (minute_of(*from)..minute_of(*to)).contains(&minute))
        });
        match block {
            Some((_, _, state, lux)) => (*state == State::Asleep, *lux),
            None if given.is_none() && sleeps(baseline, minute) => (true, 0.0),
            None => (false, baseline_lux(baseline, sets, habits, minute)),
        }
    };
    let mut edges = vec![
        0.0,
        baseline.bed,
        baseline.wake,
        habits.sunrise_h,
        habits.sunset_h,
    ];
    edges.extend(baseline.light.iter().map(|(hour, _)| *hour));
    edges.extend(given.unwrap_or_default().iter().flat_map(|b| [b.0, b.1]));
    let mut minutes: Vec<i64> = edges
        .iter()
        .map(|hour| minute_of(*hour).rem_euclid(DAY_MIN))
        .collect();
    minutes.sort_unstable();
    minutes.dedup();
    minutes
        .into_iter()
        .map(|minute| {
            let (asleep, lux) = at(minute);
            (minute, asleep, lux)
        })
        .collect()
}

fn sleeps(baseline: &Baseline, minute: i64) -> bool {
    let minute_of = |hour: f64| Minute::nearest(hour * 60.0).0;
    let (bed, wake) = (minute_of(baseline.bed), minute_of(baseline.wake));
    (minute - bed).rem_euclid(DAY_MIN) < (wake - bed).rem_euclid(DAY_MIN)
}

fn baseline_lux(baseline: &Baseline, sets: &ModelSets, habits: Habits, minute: i64) -> f64 {
    let minute_of = |hour: f64| Minute::nearest(hour * 60.0).0;
    if let Some(last) = baseline.light.last() {
        // Before the first hour of the list the light of its last one holds.
        return baseline
            .light
            .iter()
            .rev()
            .find(|(from, _)| minute_of(*from) <= minute)
            .map_or(last.1, |(_, lux)| *lux);
    }
    let scene = &sets.light.scene;
    if (minute_of(habits.sunrise_h)..minute_of(habits.sunset_h)).contains(&minute) {
        scene.home_day.value
    } else {
        scene.home_evening.value
    }
}

/// One member who lives as prescribed.
#[derive(Debug)]
struct PrescribedLife<'a> {
    plan: &'a [Stretch],
    here: usize,
    track: MemberTrack,
    habitual_radius: f64,
}

impl<'a> PrescribedLife<'a> {
    fn new(plan: &'a [Stretch], member: &Member) -> Self {
        Self {
            plan,
            here: 0,
            track: MemberTrack {
                member: *member,
                sleeps: Vec::new(),
                cbtmin_min: Vec::new(),
                amplitude_ratio: Vec::new(),
                habitual_cbtmin_min: 0.0,
            },
            habitual_radius: 1.0,
        }
    }

    fn note_sleep(&mut self, minute: i64, asleep: bool) {
        let sleeps = &mut self.track.sleeps;
        match sleeps.last_mut().filter(|sleep| sleep.cut) {
            Some(sleep) if !asleep => {
                sleep.to = Minute(minute);
                sleep.cut = false;
            }
            None if asleep => sleeps.push(SleepEpisode {
                from: Minute(minute),
                to: Minute(i64::MAX / 2),
                cut: true,
            }),
            _ => {}
        }
    }
}

impl Life for PrescribedLife<'_> {
    fn scene(&mut self, minute: i64) -> Scene {
        while self
            .plan
            .get(self.here + 1)
            .is_some_and(|next| next.from <= minute)
        {
            self.here += 1;
        }
        let stretch = self.plan[self.here];
        self.note_sleep(minute, stretch.asleep);
        Scene {
            lux: stretch.lux * self.track.member.sensitivity,
            asleep: stretch.asleep,
            until: self
                .plan
                .get(self.here + 1)
                .map_or(i64::MAX, |next| next.from),
        }
    }

    fn meet(&mut self, marker: Marker) {
        let track = &mut self.track;
        if marker.cbtmin_min <= 0.0 {
            track.habitual_cbtmin_min = marker.cbtmin_min;
            self.habitual_radius = marker.radius;
        }
        track.cbtmin_min.push(marker.cbtmin_min);
        track
            .amplitude_ratio
            .push(marker.radius / self.habitual_radius);
    }
}
