//! What the simulated members say of each duty, window and date of a line.

use super::criteria::Criteria;
use super::duties::Duty;
use super::window::SleepShares;
use crate::numeric::circular::wrap_half;
use crate::numeric::quantile::{Quantiles, circular_quantiles, quantiles, ratio};
use crate::physiology::coupled::REMEMBERED_DAYS;
use crate::physiology::{CortisolDay, MemberTrack, Simulation};
use crate::timeline::Axis;
use crate::units::{Minute, PhaseShift, minutes_to_hours};
use chrono::NaiveDate;

/// A quantity of the members. Where those who see morning daylight and those who do not are far apart,
/// one median would describe nobody: then both cases are given.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spread {
    /// All members.
    pub all: Quantiles,
    /// Members who see morning daylight, and members who do not, if their medians are far apart.
    pub cases: Option<[Quantiles; 2]>,
}

/// What the members say of sleep before a duty.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SleepTest {
    /// Short in most members.
    Short,
    /// Short in some.
    Uncertain,
    /// Short in few or none.
    NotShort,
}

impl SleepTest {
    /// The words as they are written everywhere.
    pub fn words(self) -> &'static str {
        match self {
            Self::Short => "short",
            Self::Uncertain => "uncertain",
            Self::NotShort => "not short",
        }
    }
}

/// The members around one duty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ShiftEstimate {
    /// First minute of the duty.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Sleep in the 24 h before the start, hours.
    pub sleep_prior_24h: Quantiles,
    /// Sleep in the 48 h before the start, hours.
    pub sleep_prior_48h: Quantiles,
    /// Hours awake at the start.
    pub awake_at_start_h: Quantiles,
    /// Hours awake at the end.
    pub awake_at_end_h: Quantiles,
    /// Members awake at least the limit at the end.
    pub long_awake: usize,
    /// Hours of duty inside the reference quiescent interval.
    pub quiescent_duty_h: Quantiles,
}

/// The members in one window.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WindowEstimate {
    /// First minute off duty.
    pub start: Minute,
    /// First minute of the next duty.
    pub end: Minute,
    /// Longest sleep of the window, hours.
    pub main_sleep_h: Quantiles,
    /// All sleep of the window, hours.
    pub total_sleep_h: Quantiles,
    /// Sleep in the 24 h before the next duty, hours.
    pub sleep_24h: Quantiles,
    /// Members below the 24-h limit.
    pub short_24h: usize,
    /// Members below the 48-h limit.
    pub short_48h: usize,
    /// Members.
    pub members: usize,
    /// Phase angle of the last main sleep minus the habitual one, hours; positive: later in the body's night than usual.
    /// Members who did not sleep in the last 24 h have none.
    pub phase_displacement_h: Option<Quantiles>,
    /// `CBTmin` at the next duty against the habitual clock hour, hours; positive is earlier.
    pub cbtmin_displacement_h: Spread,
    /// Members whose pacemaker has so small an amplitude at that `CBTmin` that its phase is ill-defined.
    pub ill_defined: usize,
    /// That `CBTmin`, minutes since the epoch, around the clock.
    pub cbtmin_at: Quantiles,
    /// Hours awake in the reference quiescent interval before the next duty beyond the habitual ones.
    pub quiescent_awake_excess_h: Quantiles,
}

impl WindowEstimate {
    /// Is the phase of at least half of the members ill-defined? Then a direction of its shift means nothing.
    pub fn phase_is_ill_defined(&self) -> bool {
        2 * self.ill_defined >= self.members
    }

    /// Shares of members whose sleep is short.
    pub fn shares(&self) -> SleepShares {
        SleepShares {
            k24: ratio(self.short_24h, self.members),
            k48: ratio(self.short_48h, self.members),
        }
    }

    /// The sleep test of the 24 h before the next duty.
    pub fn sleep_test(&self, criteria: &Criteria) -> SleepTest {
        let k24 = self.shares().k24;
        if k24 >= criteria.sleep.short_from_share.value {
            SleepTest::Short
        } else if k24 >= criteria.sleep.uncertain_from_share.value {
            SleepTest::Uncertain
        } else {
            SleepTest::NotShort
        }
    }
}

/// `CBTmin` of one date.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CbtminEstimate {
    /// Minutes since the epoch.
    pub minute: Quantiles,
    /// Said when members who see morning daylight and those who do not differ: does this entry hold for those who see it?
    pub daylight_seen: Option<bool>,
}

/// The members on one local date.
#[derive(Debug, Clone, PartialEq)]
pub struct DayEstimate {
    /// The date.
    pub date: NaiveDate,
    /// Local midnight that begins it.
    pub start: Minute,
    /// `CBTmin`s of the date: none, one, or several.
    pub cbtmin: Vec<CbtminEstimate>,
    /// DLMOs of the date, derived from the `CBTmin` that follows: about 1 h of unmodelled spread.
    pub dlmo: Vec<CbtminEstimate>,
    /// Sleep that ends on the date, hours.
    pub sleep_h: Quantiles,
    /// Cortisol of the date.
    pub cortisol: CortisolEstimate,
}

/// Cortisol features of the members on one date.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CortisolEstimate {
    /// MESOR of the 24-h cosine, nmol/L.
    pub mesor: Quantiles,
    /// Amplitude of the 24-h cosine, nmol/L.
    pub amplitude: Quantiles,
    /// Amplitude divided by that of the member's habitual day.
    pub amplitude_ratio: Quantiles,
    /// Acrophase, minutes since the epoch; depends on sleep timing, no phase marker in shift work.
    pub acrophase_at: Spread,
    /// Highest value, nmol/L.
    pub peak: Quantiles,
    /// When, minutes since the epoch.
    pub peak_at: Spread,
    /// Lowest value, nmol/L.
    pub nadir: Quantiles,
    /// When, minutes since the epoch.
    pub nadir_at: Spread,
    /// The quiescent interval begins, minutes since the epoch.
    pub quiescent_start: Spread,
    /// The quiescent interval ends, minutes since the epoch.
    pub quiescent_end: Spread,
}

/// Everything the members say of one line.
#[derive(Debug, Clone, PartialEq)]
pub struct LineEstimate {
    /// By duty.
    pub shifts: Vec<ShiftEstimate>,
    /// By window.
    pub windows: Vec<WindowEstimate>,
    /// By date.
    pub days: Vec<DayEstimate>,
    /// `CBTmin` of the habitual day, clock minutes.
    pub habitual_cbtmin_min: Quantiles,
}

/// Summarises a simulation over the duties and dates of its line.
///
/// Returns `None` for a simulation without members.
pub fn estimate(
    simulation: &Simulation,
    duties: &[Duty],
    axis: &Axis,
    criteria: &Criteria,
) -> Option<LineEstimate> {
    let shifts = duties
        .iter()
        .map(|duty| shift(simulation, duty, criteria))
        .collect::<Option<_>>()?;
    let windows = duties
        .windows(2)
        .map(|pair| window(simulation, axis, (pair[0].end, pair[1].start), criteria))
        .collect::<Option<_>>()?;
    Some(LineEstimate {
        shifts,
        windows,
        days: days(simulation, axis, criteria),
        habitual_cbtmin_min: over(simulation, |t| t.habitual_cbtmin_min + 1440.0)?.0,
    })
}

fn over(
    simulation: &Simulation,
    value: impl Fn(&MemberTrack) -> f64,
) -> Option<(Quantiles, Vec<f64>)> {
    let values: Vec<f64> = simulation.tracks.iter().map(value).collect();
    Some((quantiles(&values)?, values))
}

fn count(values: &[f64], holds: impl Fn(f64) -> bool) -> usize {
    values.iter().filter(|value| holds(**value)).count()
}

fn shift(simulation: &Simulation, duty: &Duty, criteria: &Criteria) -> Option<ShiftEstimate> {
    let (start, end) = (duty.start, duty.end);
    let (awake_at_end_h, at_end) = over(simulation, |t| t.awake_h(end))?;
    let quiescent: Vec<f64> = (0..simulation.tracks.len())
        .map(|member| {
            let on_duty: i64 = laid_intervals(simulation, member)
                .map(|(from, to)| duty.minutes_inside(from, to))
                .sum();
            minutes_to_hours(on_duty)
        })
        .collect();
    Some(ShiftEstimate {
        start,
        end,
        sleep_prior_24h: over(simulation, |t| t.sleep_h(start + -1440, start))?.0,
        sleep_prior_48h: over(simulation, |t| t.sleep_h(start + -2880, start))?.0,
        awake_at_start_h: over(simulation, |t| t.awake_h(start))?.0,
        awake_at_end_h,
        long_awake: count(&at_end, |h| h >= criteria.awake.long_from.value),
        quiescent_duty_h: quantiles(&quiescent)?,
    })
}

fn window(
    simulation: &Simulation,
    axis: &Axis,
    (start, end): (Minute, Minute),
    criteria: &Criteria,
) -> Option<WindowEstimate> {
    let (sleep_24h, in_24h) = over(simulation, |t| t.sleep_h(end + -1440, end))?;
    let (_, in_48h) = over(simulation, |t| t.sleep_h(end + -2880, end))?;
    let excess: Vec<f64> = (0..simulation.tracks.len())
        .map(|member| quiescent_awake_excess_h(simulation, member, end))
        .collect();
    // Habits follow the clock: a clock change alone is no displacement.
    let clock_moved_h = minutes_to_hours(axis.clock.at(end) - end.0);
    let displacements: Vec<f64> = simulation
        .tracks
        .iter()
        .map(|t| t.displacement(t.cbtmin_before(end)).hours() - clock_moved_h)
        .map(|hours| PhaseShift::earlier_by(hours).hours())
        .collect();
    let displaced_sleep: Vec<f64> = simulation
        .tracks
        .iter()
        .filter_map(|track| phase_displacement_h(track, end))
        .collect();
    Some(WindowEstimate {
        start,
        end,
        main_sleep_h: over(simulation, |t| {
            t.main_sleep(start, end)
                .map_or(0.0, |sleep| minutes_to_hours(sleep.inside(start, end)))
        })?
        .0,
        total_sleep_h: over(simulation, |t| t.sleep_h(start, end))?.0,
        sleep_24h,
        short_24h: count(&in_24h, |h| h < criteria.sleep.short_24h_below.value),
        short_48h: count(&in_48h, |h| h < criteria.sleep.short_48h_below.value),
        members: simulation.tracks.len(),
        phase_displacement_h: circular_quantiles(&displaced_sleep, 24.0, -12.0),
        cbtmin_displacement_h: spread(
            simulation,
            &displacements,
            Circle {
                period: 24.0,
                low: -12.0,
            },
            criteria.evidence.cases_apart.value,
        )?,
        ill_defined: simulation
            .tracks
            .iter()
            .filter(|track| track.amplitude_before(end) < simulation.amplitude_floor)
            .count(),
        cbtmin_at: over(simulation, |t| t.cbtmin_before(end))?.0,
        quiescent_awake_excess_h: quantiles(&excess)?,
    })
}

/// A circle on which values are summarised.
#[derive(Debug, Clone, Copy)]
struct Circle {
    period: f64,
    /// Lowest median that is written.
    low: f64,
}

/// A circular quantity, one value per member, with the two daylight cases where they are further apart than `apart`.
fn spread(simulation: &Simulation, values: &[f64], circle: Circle, apart: f64) -> Option<Spread> {
    let of = |seen: Option<bool>| {
        let values: Vec<f64> = simulation
            .tracks
            .iter()
            .zip(values)
            .filter(|(t, _)| seen.is_none_or(|s| t.member.sees_morning_daylight == s))
            .map(|(_, value)| *value)
            .collect();
        circular_quantiles(&values, circle.period, circle.low)
    };
    let cases = of(Some(true))
        .zip(of(Some(false)))
        .map(<[Quantiles; 2]>::from);
    Some(Spread {
        all: of(None)?,
        cases: cases.filter(|[seen, kept_out]| {
            wrap_half(seen.median - kept_out.median, circle.period).abs() > apart
        }),
    })
}

/// Phase angle of the last main sleep before `end` minus the habitual one, in (-12, 12]; `None` without any sleep.
///
/// The main sleep is the longest of the last 24 h.
fn phase_displacement_h(track: &MemberTrack, end: Minute) -> Option<f64> {
    let sleep = track.main_sleep(end + -1440, end)?;
    Some(wrap_half(
        track.phase_angle_h(sleep) - track.habitual_phase_angle_h(),
        24.0,
    ))
}

/// The reference quiescent interval laid on each `CBTmin` of a member.
fn laid_intervals(
    simulation: &Simulation,
    member: usize,
) -> impl Iterator<Item = (Minute, Minute)> + '_ {
    let reference = &simulation.habitual[member];
    simulation.tracks[member]
        .cbtmin_min
        .iter()
        .map(move |cbtmin| {
            (
                Minute::nearest(cbtmin + reference.from_min),
                Minute::nearest(cbtmin + reference.to_min),
            )
        })
}

/// Hours awake in the interval of the last `CBTmin` before `end`, minus the habitual hours.
fn quiescent_awake_excess_h(simulation: &Simulation, member: usize, end: Minute) -> f64 {
    let track = &simulation.tracks[member];
    let reference = &simulation.habitual[member];
    let cbtmin = track.cbtmin_before(end);
    let from = Minute::nearest(cbtmin + reference.from_min);
    let to = Minute::nearest(cbtmin + reference.to_min).min(end);
    let asleep: i64 = track.sleeps.iter().map(|s| s.inside(from, to)).sum();
    (Minute(to - from - asleep).as_f64() - reference.awake_min) / 60.0
}

fn days(simulation: &Simulation, axis: &Axis, criteria: &Criteria) -> Vec<DayEstimate> {
    let cycles = cycles(simulation, criteria);
    let earlier = simulation.melatonin.onset_before_cbtmin_min;
    let onsets: Vec<CbtminEstimate> = cycles
        .iter()
        .map(|cycle| CbtminEstimate {
            minute: cycle.minute.moved(-earlier),
            ..*cycle
        })
        .collect();
    // The axis begins with the day before the first date; dates after the last start are not the roster's.
    let dates = axis.days.iter().zip(&simulation.days).skip(1);
    dates
        .take(axis.rostered_dates().len())
        .filter_map(|(day, members)| {
            let inside = |cycle: &&CbtminEstimate| {
                (day.start.as_f64()..day.end.as_f64()).contains(&cycle.minute.median)
            };
            Some(DayEstimate {
                date: day.date,
                start: day.start,
                cbtmin: cycles.iter().filter(inside).copied().collect(),
                dlmo: onsets.iter().filter(inside).copied().collect(),
                sleep_h: over(simulation, |track| {
                    sleep_ending_in(track, day.start, day.end)
                })?
                .0,
                cortisol: cortisol(simulation, members, day.start, criteria)?,
            })
        })
        .collect()
}

fn sleep_ending_in(track: &MemberTrack, from: Minute, to: Minute) -> f64 {
    track
        .sleeps
        .iter()
        .filter(|sleep| from < sleep.to && sleep.to <= to && !sleep.cut)
        .map(crate::physiology::SleepEpisode::hours)
        .sum()
}

/// `CBTmin` by cycle over the members; two entries where morning daylight seen or kept out makes more than the limit.
fn cycles(simulation: &Simulation, criteria: &Criteria) -> Vec<CbtminEstimate> {
    // Every track begins with the same number of remembered habitual days.
    let remembered = usize::try_from(REMEMBERED_DAYS).unwrap_or(0) + 1;
    let longest = simulation
        .tracks
        .iter()
        .map(|track| track.cbtmin_min.len())
        .max()
        .unwrap_or(0);
    let apart = criteria.evidence.cases_apart.value * 60.0;
    (remembered..longest)
        .flat_map(|cycle| {
            let seen = cycle_of(simulation, cycle, Some(true));
            let kept_out = cycle_of(simulation, cycle, Some(false));
            match (seen, kept_out) {
                (Some(seen), Some(kept_out))
                    if (seen.minute.median - kept_out.minute.median).abs() > apart =>
                {
                    vec![seen, kept_out]
                }
                _ => cycle_of(simulation, cycle, None).into_iter().collect(),
            }
        })
        .collect()
}

/// One cycle of the members of a daylight case.
///
/// Members who went round the clock in opposite directions are up to a day apart at the same hour of the clock:
/// the hours are summarised on the circle, and the instant is the one nearest to the median of the instants.
fn cycle_of(
    simulation: &Simulation,
    cycle: usize,
    daylight_seen: Option<bool>,
) -> Option<CbtminEstimate> {
    let case: Vec<&MemberTrack> = simulation
        .tracks
        .iter()
        .filter(|t| daylight_seen.is_none_or(|s| t.member.sees_morning_daylight == s))
        .collect();
    let minutes: Vec<f64> = case
        .iter()
        .filter_map(|track| track.cbtmin_min.get(cycle).copied())
        .collect();
    // A marker that most members have not reached would be that of the early ones only.
    if minutes.len() * 2 <= case.len() {
        return None;
    }
    let middle = quantiles(&minutes)?.median;
    Some(CbtminEstimate {
        minute: circular_quantiles(&minutes, 1440.0, middle - 720.0)?,
        daylight_seen,
    })
}

fn cortisol(
    simulation: &Simulation,
    members: &[CortisolDay],
    day_start: Minute,
    criteria: &Criteria,
) -> Option<CortisolEstimate> {
    let of =
        |value: fn(&CortisolDay) -> f64| quantiles(&members.iter().map(value).collect::<Vec<_>>());
    let ratios: Vec<f64> = members
        .iter()
        .zip(&simulation.habitual)
        .map(|(day, habitual)| day.amplitude / habitual.day.amplitude)
        .collect();
    // Clock times are spread on a circle; the median is put on the date.
    let circle = Circle {
        period: 1440.0,
        low: day_start.as_f64(),
    };
    let apart = criteria.evidence.cases_apart.value * 60.0;
    let at = |value: &dyn Fn(&CortisolDay) -> f64| {
        let minutes: Vec<f64> = members.iter().map(value).collect();
        spread(simulation, &minutes, circle, apart)
    };
    Some(CortisolEstimate {
        mesor: of(|d| d.mesor)?,
        amplitude: of(|d| d.amplitude)?,
        amplitude_ratio: quantiles(&ratios)?,
        acrophase_at: at(&|d| d.acrophase_min + day_start.as_f64())?,
        peak: of(|d| d.peak)?,
        peak_at: at(&|d| d.peak_at.as_f64())?,
        nadir: of(|d| d.nadir)?,
        nadir_at: at(&|d| d.nadir_at.as_f64())?,
        quiescent_start: at(&|d| d.quiescent.0.as_f64())?,
        quiescent_end: at(&|d| d.quiescent.1.as_f64())?,
    })
}

#[cfg(test)]
mod tests;
