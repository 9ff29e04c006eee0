//! What the simulated members say of each duty, window and date of a line.

use super::criteria::Criteria;
use super::duties::Duty;
use super::window::SleepShares;
use crate::numeric::quantile::{Quantiles, quantiles, ratio};
use crate::physiology::coupled::REMEMBERED_DAYS;
use crate::physiology::{CortisolDay, MemberTrack, Simulation};
use crate::timeline::Axis;
use crate::units::{Minute, minutes_to_hours};
use chrono::NaiveDate;

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
    pub phase_displacement_h: Quantiles,
    /// `CBTmin` at the next duty against the habitual one, hours; positive is earlier.
    pub cbtmin_displacement_h: Quantiles,
    /// Hours awake in the reference quiescent interval before the next duty beyond the habitual ones.
    pub quiescent_awake_excess_h: Quantiles,
}

impl WindowEstimate {
    /// Shares of members whose sleep is short.
    pub fn shares(&self) -> SleepShares {
        SleepShares {
            k24: ratio(self.short_24h, self.members),
            k48: ratio(self.short_48h, self.members),
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
    pub acrophase_at: Quantiles,
    /// Highest value, nmol/L.
    pub peak: Quantiles,
    /// When, minutes since the epoch.
    pub peak_at: Quantiles,
    /// Lowest value, nmol/L.
    pub nadir: Quantiles,
    /// When, minutes since the epoch.
    pub nadir_at: Quantiles,
    /// The quiescent interval begins, minutes since the epoch.
    pub quiescent_start: Quantiles,
    /// The quiescent interval ends, minutes since the epoch.
    pub quiescent_end: Quantiles,
}

/// Medians of the habitual day, before the roster.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HabitualEstimate {
    /// `CBTmin`, clock minutes of the habitual day (local clock at the epoch).
    pub cbtmin_clock_min: Quantiles,
    /// Reference quiescent interval begins, hours from `CBTmin`.
    pub quiescent_from_h: Quantiles,
    /// Reference quiescent interval ends, hours from `CBTmin`.
    pub quiescent_to_h: Quantiles,
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
    /// The habitual day.
    pub habitual: HabitualEstimate,
}

/// Medians further apart than this are printed apart, never pooled.
const CASES_APART_MIN: f64 = 60.0;

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
        .map(|pair| window(simulation, pair[0].end, pair[1].start, criteria))
        .collect::<Option<_>>()?;
    Some(LineEstimate {
        shifts,
        windows,
        days: days(simulation, axis),
        habitual: habitual(simulation)?,
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
    start: Minute,
    end: Minute,
    criteria: &Criteria,
) -> Option<WindowEstimate> {
    let (sleep_24h, in_24h) = over(simulation, |t| t.sleep_h(end + -1440, end))?;
    let (_, in_48h) = over(simulation, |t| t.sleep_h(end + -2880, end))?;
    let excess: Vec<f64> = (0..simulation.tracks.len())
        .map(|member| quiescent_awake_excess_h(simulation, member, end))
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
        phase_displacement_h: over(simulation, |t| phase_displacement_h(t, end))?.0,
        cbtmin_displacement_h: over(simulation, |t| t.earlier_h(t.cbtmin_before(end)))?.0,
        quiescent_awake_excess_h: quantiles(&excess)?,
    })
}

/// Phase angle of the last main sleep before `end` minus the habitual one, in (-12, 12].
///
/// The main sleep is the longest of the last 24 h.
fn phase_displacement_h(track: &MemberTrack, end: Minute) -> f64 {
    track.main_sleep(end + -1440, end).map_or(0.0, |sleep| {
        crate::numeric::circular::wrap_half(
            track.phase_angle_h(sleep) - track.habitual_phase_angle_h(),
            24.0,
        )
    })
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
                whole(cbtmin + reference.from_min),
                whole(cbtmin + reference.to_min),
            )
        })
}

/// Hours awake in the intervals of the `CBTmin`s of the last 24 h before `end`, minus the habitual hours.
fn quiescent_awake_excess_h(simulation: &Simulation, member: usize, end: Minute) -> f64 {
    let track = &simulation.tracks[member];
    let reference = &simulation.habitual[member];
    laid_intervals(simulation, member)
        .zip(&track.cbtmin_min)
        .filter(|(_, cbtmin)| ((end + -1440).as_f64()..end.as_f64()).contains(*cbtmin))
        .map(|((from, to), _)| {
            let to = to.min(end);
            let asleep: i64 = track.sleeps.iter().map(|s| s.inside(from, to)).sum();
            (Minute(to - from - asleep).as_f64() - reference.awake_min) / 60.0
        })
        .sum()
}

fn days(simulation: &Simulation, axis: &Axis) -> Vec<DayEstimate> {
    let cycles = cycles(simulation);
    let earlier = simulation.melatonin.onset_before_cbtmin_min;
    let onsets: Vec<CbtminEstimate> = cycles
        .iter()
        .map(|cycle| CbtminEstimate {
            minute: Quantiles {
                median: cycle.minute.median - earlier,
                p05: cycle.minute.p05 - earlier,
                p95: cycle.minute.p95 - earlier,
            },
            ..*cycle
        })
        .collect();
    axis.days
        .iter()
        .zip(&simulation.days)
        // The axis begins with the day before the first date.
        .skip(1)
        .filter_map(|(day, members)| {
            let inside = |cycle: &&CbtminEstimate| {
                (day.start.as_f64()..day.end.as_f64()).contains(&cycle.minute.median)
            };
            Some(DayEstimate {
                dlmo: onsets.iter().filter(inside).copied().collect(),
                date: day.date,
                start: day.start,
                cbtmin: cycles.iter().filter(inside).copied().collect(),
                sleep_h: over(simulation, |track| {
                    sleep_ending_in(track, day.start, day.end)
                })?
                .0,
                cortisol: cortisol(simulation, members, day.start)?,
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

/// `CBTmin` by cycle over the members; two cases where morning daylight seen or kept out makes more than an hour.
fn cycles(simulation: &Simulation) -> Vec<CbtminEstimate> {
    // Every track begins with the same number of remembered habitual days.
    let remembered = usize::try_from(REMEMBERED_DAYS).unwrap_or(0) + 1;
    let longest = simulation
        .tracks
        .iter()
        .map(|track| track.cbtmin_min.len())
        .max()
        .unwrap_or(0);
    (remembered..longest)
        .flat_map(|cycle| {
            let of = |seen: Option<bool>| {
                let values: Vec<f64> = simulation
                    .tracks
                    .iter()
                    .filter(|t| seen.is_none_or(|s| t.member.sees_morning_daylight == s))
                    .filter_map(|track| track.cbtmin_min.get(cycle).copied())
                    .collect();
                quantiles(&values).map(|minute| CbtminEstimate {
                    minute,
                    daylight_seen: seen,
                })
            };
            match (of(Some(true)), of(Some(false))) {
                (Some(seen), Some(kept_out))
                    if (seen.minute.median - kept_out.minute.median).abs() > CASES_APART_MIN =>
                {
                    vec![seen, kept_out]
                }
                _ => of(None).into_iter().collect(),
            }
        })
        .collect()
}

fn cortisol(
    simulation: &Simulation,
    members: &[CortisolDay],
    day_start: Minute,
) -> Option<CortisolEstimate> {
    let of =
        |value: fn(&CortisolDay) -> f64| quantiles(&members.iter().map(value).collect::<Vec<_>>());
    let ratios: Vec<f64> = members
        .iter()
        .zip(&simulation.habitual)
        .map(|(day, habitual)| day.amplitude / habitual.day.amplitude)
        .collect();
    let acrophases: Vec<f64> = members.iter().map(|day| day.acrophase_min).collect();
    let anchor = crate::numeric::circular::mean(&acrophases, 1440.0);
    let near: Vec<f64> = crate::numeric::circular::unwrap_near(&acrophases, anchor, 1440.0)
        .into_iter()
        .map(|minute| minute + day_start.as_f64())
        .collect();
    Some(CortisolEstimate {
        mesor: of(|d| d.mesor)?,
        amplitude: of(|d| d.amplitude)?,
        amplitude_ratio: quantiles(&ratios)?,
        acrophase_at: quantiles(&near)?,
        peak: of(|d| d.peak)?,
        peak_at: of(|d| d.peak_at.as_f64())?,
        nadir: of(|d| d.nadir)?,
        nadir_at: of(|d| d.nadir_at.as_f64())?,
        quiescent_start: of(|d| d.quiescent.0.as_f64())?,
        quiescent_end: of(|d| d.quiescent.1.as_f64())?,
    })
}

fn habitual(simulation: &Simulation) -> Option<HabitualEstimate> {
    let of = |value: fn(&crate::physiology::QuiescentReference) -> f64| {
        quantiles(&simulation.habitual.iter().map(value).collect::<Vec<_>>())
    };
    Some(HabitualEstimate {
        cbtmin_clock_min: over(simulation, |t| t.habitual_cbtmin_min + 1440.0)?.0,
        quiescent_from_h: of(|h| h.from_min / 60.0)?,
        quiescent_to_h: of(|h| h.to_min / 60.0)?,
    })
}

#[expect(
    clippy::cast_possible_truncation,
    reason = "minutes of a roster fit an i64 by far"
)]
fn whole(minute: f64) -> Minute {
    Minute(minute.round() as i64)
}
