//! What does a duty line do to sleep, circadian phase and cortisol?
//!
//! Timelines go in, simulated members come out: sleep and `CBTmin` of each member, features of the cortisol of each local date,
//! and the curve with its band. Nothing here knows a shift, a name, a time zone or a rule.
//!
//! ```text
//! members --habitual days--> warm units --+--> coupled minute loop (sleep, light, pacemaker) --> tracks --> cascade --> days, curve
//!                            timelines ---+
//! ```

pub mod cascade;
pub mod coupled;
pub mod day;
pub mod ensemble;
pub mod light;
pub mod pacemaker;
pub mod parameters;
pub mod sleep;
pub mod track;

pub use day::CortisolDay;
pub use ensemble::{Member, Sampling, members};
pub use parameters::{ModelSets, PacemakerName};
pub use track::{MemberTrack, SleepEpisode};

use crate::numeric::quantile::{Quantiles, quantiles};
use crate::timeline::Timeline;
use crate::units::Minute;
use cascade::{Cascade, SleepDebt};
use coupled::{CoupledModels, ENTRY, REMEMBERED_DAYS, WarmUnit};
use day::{CortisolSeries, Stretch, cortisol_day};
use pacemaker::LANES;
use rayon::prelude::*;

/// Distance of the points of the cortisol curve, minutes.
const CURVE_STEP_MIN: i64 = 30;
/// Cortisol is run from this minute, so that its start is forgotten at the entry.
const CASCADE_FROM: Minute = Minute(ENTRY.0 - (REMEMBERED_DAYS - 1) * 1440);

/// The quiescent interval of a member's habitual day, as phase from `CBTmin`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct QuiescentReference {
    /// Begins, minutes from `CBTmin` (negative: before).
    pub from_min: f64,
    /// Ends, minutes from `CBTmin`.
    pub to_min: f64,
    /// Minutes of it that the member is awake on a habitual day.
    pub awake_min: f64,
    /// Features of the habitual day.
    pub day: CortisolDay,
}

/// One point of the cortisol curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurveSample {
    /// When.
    pub at: Minute,
    /// Total serum cortisol of the members, nmol/L.
    pub nmol_l: Quantiles,
}

/// What one duty line does to the ensemble.
#[derive(Debug, Clone, PartialEq)]
pub struct Simulation {
    /// Sleep and phase, one per member.
    pub tracks: Vec<MemberTrack>,
    /// Cortisol by local date (outer, in the order of the timeline's days; empty where the date was not simulated) and member.
    pub days: Vec<Vec<CortisolDay>>,
    /// The habitual day of each member.
    pub habitual: Vec<QuiescentReference>,
    /// Curve and band over the roster.
    pub curve: Vec<CurveSample>,
    /// Where melatonin stands against `CBTmin`.
    pub melatonin: MelatoninMarkers,
}

/// Markers derived from `CBTmin`; never a second result.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MelatoninMarkers {
    /// DLMO before `CBTmin`, minutes.
    pub onset_before_cbtmin_min: f64,
    /// From DLMO to melatonin offset, minutes: the biological night.
    pub duration_min: f64,
}

/// Simulates an ensemble on each of the timelines, in parallel, results in the order of the input.
///
/// All timelines must share their dates and habits, as those of one roster do.
///
/// # Example
///
/// ```
/// use acroshift::physiology::{simulate, Member, ModelSets};
/// use acroshift::timeline::{CivilClock, HabitFile, Timeline};
/// use acroshift::units::Minute;
///
/// let sets = ModelSets::embedded();
/// let free = Timeline {
///     duties: Vec::new(),
///     days: Vec::new(),
///     clock: CivilClock::steady(),
///     end: Minute(1440),
///     habits: HabitFile::embedded().habits(),
/// };
/// let simulations = simulate(&[free], &[Member::mean(&sets.ensemble, 30.0)], &sets);
/// // The mean member sleeps from 23:00 on the day before the first date.
/// assert!(simulations[0].tracks[0].sleeps.iter().any(|sleep| sleep.from == Minute(-60)));
/// ```
pub fn simulate(timelines: &[Timeline], members: &[Member], sets: &ModelSets) -> Vec<Simulation> {
    let Some(first) = timelines.first() else {
        return Vec::new();
    };
    let models = coupled_models(sets);
    let cascade = Cascade::new(&sets.cascade);
    let reading = sets.pacemaker.reading();
    let melatonin = MelatoninMarkers {
        onset_before_cbtmin_min: reading.dlmo_before_cbtmin_min,
        duration_min: reading.melatonin_duration_min,
    };
    let units: Vec<WarmUnit> = members
        .par_chunks(LANES)
        .map(|unit| coupled::warm_up(&models, unit, &first.habits))
        .collect();
    timelines
        .par_iter()
        .map(|timeline| {
            let parts = units
                .iter()
                .map(|unit| simulate_unit(&models, &cascade, sets, unit, timeline))
                .collect();
            joined(parts, melatonin)
        })
        .collect()
}

/// The coupled models with the numbers of the sets.
#[expect(
    clippy::cast_possible_truncation,
    reason = "habitual days are a small whole number"
)]
pub fn coupled_models(sets: &ModelSets) -> CoupledModels {
    CoupledModels {
        pacemaker: pacemaker::Pacemaker::new(&sets.pacemaker),
        sleep: sleep::SleepModel::new(&sets.sleep),
        light: light::LightScenes::new(&sets.light),
        habitual_days: sets.pacemaker.reading().habitual_days as i64,
    }
}

/// What one unit of members contributes.
struct UnitPart {
    tracks: Vec<MemberTrack>,
    days: Vec<Vec<CortisolDay>>,
    habitual: Vec<QuiescentReference>,
    /// Values at the points of the curve, one row per point.
    samples: Vec<(Minute, Vec<f64>)>,
}

fn simulate_unit(
    models: &CoupledModels,
    cascade: &Cascade,
    sets: &ModelSets,
    unit: &WarmUnit,
    timeline: &Timeline,
) -> UnitPart {
    let tracks = coupled::live(models, unit, timeline);
    let mut state = cascade.start();
    let span = (CASCADE_FROM, timeline.end);
    let rows = cascade.run(&tracks, SleepDebt::On, span, &mut state);
    let lanes: Vec<Vec<f64>> = (0..tracks.len())
        .map(|lane| rows.iter().map(|row| row[lane]).collect())
        .collect();
    let share = sets.cascade.quiescence.share_of_mean.value;
    let series = |values| CortisolSeries {
        from: CASCADE_FROM,
        values,
    };
    let days = timeline
        .days
        .iter()
        .map(|day| {
            lanes
                .iter()
                .filter_map(|values| {
                    cortisol_day(series(values), Stretch::date(day.start, day.end), share)
                })
                .collect()
        })
        .collect();
    let habitual = tracks
        .iter()
        .zip(&lanes)
        .filter_map(|(track, values)| quiescent_reference(track, series(values), share))
        .collect();
    let samples = (0..timeline.end.0)
        .step_by(usize::try_from(CURVE_STEP_MIN).unwrap_or(30))
        .map(|minute| (Minute(minute), sample(&lanes, Minute(minute))))
        .collect();
    UnitPart {
        tracks,
        days,
        habitual,
        samples,
    }
}

fn sample(lanes: &[Vec<f64>], minute: Minute) -> Vec<f64> {
    let index = usize::try_from(minute - CASCADE_FROM).unwrap_or(0);
    lanes.iter().map(|values| values[index]).collect()
}

/// The last habitual day, noon to noon, before the entry.
fn quiescent_reference(
    track: &MemberTrack,
    series: CortisolSeries<'_>,
    share: f64,
) -> Option<QuiescentReference> {
    let day = cortisol_day(series, Stretch::whole(ENTRY + -1440, ENTRY), share)?;
    let (from, to) = day.quiescent;
    let cbtmin = track.habitual_cbtmin_min;
    let asleep: i64 = track.sleeps.iter().map(|s| s.inside(from, to)).sum();
    Some(QuiescentReference {
        from_min: from.as_f64() - cbtmin,
        to_min: to.as_f64() - cbtmin,
        awake_min: Minute(to - from - asleep).as_f64(),
        day,
    })
}

/// Puts the units of one timeline together, members in order.
fn joined(parts: Vec<UnitPart>, melatonin: MelatoninMarkers) -> Simulation {
    let mut simulation = Simulation {
        tracks: Vec::new(),
        days: Vec::new(),
        habitual: Vec::new(),
        curve: Vec::new(),
        melatonin,
    };
    let mut samples: Vec<(Minute, Vec<f64>)> = Vec::new();
    for part in parts {
        simulation.tracks.extend(part.tracks);
        simulation.habitual.extend(part.habitual);
        append_rows(&mut simulation.days, part.days);
        if samples.is_empty() {
            samples = part.samples;
        } else {
            for (row, more) in samples.iter_mut().zip(part.samples) {
                row.1.extend(more.1);
            }
        }
    }
    simulation.curve = samples
        .into_iter()
        .filter_map(|(at, values)| quantiles(&values).map(|nmol_l| CurveSample { at, nmol_l }))
        .collect();
    simulation
}

fn append_rows(rows: &mut Vec<Vec<CortisolDay>>, more: Vec<Vec<CortisolDay>>) {
    if rows.is_empty() {
        *rows = more;
    } else {
        for (row, extra) in rows.iter_mut().zip(more) {
            row.extend(extra);
        }
    }
}
