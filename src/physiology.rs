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
pub mod free_cortisol;
pub mod light;
pub mod pacemaker;
pub mod parameters;
pub mod sleep;
pub mod track;
pub mod unit;

pub use day::CortisolDay;
pub use ensemble::{Member, Sampling, members};
pub use parameters::{ModelSets, PacemakerName};
pub use track::{MemberTrack, SleepEpisode};

use crate::numeric::instruction_set::InstructionSet;
use crate::numeric::quantile::{Quantiles, quantiles};
use crate::timeline::{Habits, Timeline};
use crate::units::Minute;
use cascade::{Cascade, Load, Rows, SleepDebt, StressSpan};
use coupled::{CoupledModels, ENTRY, REMEMBERED_DAYS, WarmUnit};
use day::{DayReader, Stretch};
use pacemaker::LANES;
use rayon::prelude::*;

/// Distance of the points of the cortisol curve, minutes.
const CURVE_STEP_MIN: i64 = 30;
/// Step of the cascade and distance of its rows, minutes: cortisol differs from one-minute steps by less than 0.1 nmol/L.
pub const CORTISOL_STEP_MIN: i64 = 3;
/// Rows are kept this long before the date that is read, minutes.
const KEPT_BEFORE_MIN: i64 = 36 * 60;
/// Rows are run this long past the date that is read, so that its quiescent interval ends.
const RUN_PAST_MIN: i64 = 12 * 60;
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
    /// Share of the habitual amplitude below which phase is ill-defined.
    pub amplitude_floor: f64,
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
/// use acroshift::timeline::{CivilClock, HabitFile, MeasuredLight, Timeline};
/// use acroshift::units::Minute;
///
/// let sets = ModelSets::embedded();
/// let free = Timeline {
///     duties: Vec::new(),
///     days: Vec::new(),
///     clock: CivilClock::steady(),
///     end: Minute(1440),
///     habits: HabitFile::embedded().habits(),
///     measured: MeasuredLight::default(),
/// };
/// let simulations = simulate(&[free], &[Member::mean(&sets.ensemble, 30.0)], &sets);
/// // The mean member sleeps from 23:00 on the day before the first date.
/// assert!(simulations[0].tracks[0].sleeps.iter().any(|sleep| sleep.from == Minute(-60)));
/// ```
pub fn simulate(timelines: &[Timeline], members: &[Member], sets: &ModelSets) -> Vec<Simulation> {
    let Some(first) = timelines.first() else {
        return Vec::new();
    };
    let engine = Engine::new(sets);
    let warm = engine.warm_up(members, &first.habits);
    timelines
        .par_iter()
        .map(|timeline| engine.live(&warm, timeline))
        .collect()
}

/// Sleep and phase alone of an ensemble on each of the timelines, in parallel, results in the order of the input.
pub fn tracks(
    timelines: &[Timeline],
    members: &[Member],
    sets: &ModelSets,
) -> Vec<Vec<MemberTrack>> {
    let Some(first) = timelines.first() else {
        return Vec::new();
    };
    let engine = Engine::new(sets);
    let warm = engine.warm_up(members, &first.habits);
    timelines
        .par_iter()
        .map(|timeline| engine.tracks(&warm, timeline))
        .collect()
}

/// The models with the numbers of their sets, ready for any number of lines.
#[derive(Debug, Clone, PartialEq)]
pub struct Engine {
    coupled: CoupledModels,
    cascade: Cascade,
    reader: DayReader,
    melatonin: MelatoninMarkers,
    amplitude_floor: f64,
}

impl Engine {
    /// The models of the sets, on the best instruction set of this machine.
    pub fn new(sets: &ModelSets) -> Self {
        Self::on(InstructionSet::best(), sets)
    }

    /// The same on an instruction set of one's choice; the results have the same bits on all.
    pub fn on(instructions: InstructionSet, sets: &ModelSets) -> Self {
        let reading = sets.pacemaker.reading();
        Self {
            coupled: coupled_models_on(instructions, sets),
            cascade: Cascade::on(instructions, &sets.cascade),
            reader: DayReader::new(
                CORTISOL_STEP_MIN,
                sets.cascade.quiescence.share_of_mean.value,
            ),
            melatonin: MelatoninMarkers {
                onset_before_cbtmin_min: reading.dlmo_before_cbtmin_min,
                duration_min: reading.melatonin_duration_min,
            },
            amplitude_floor: reading.amplitude_floor,
        }
    }

    /// The same in steps of one minute throughout, for convergence tests.
    pub fn in_minutes(sets: &ModelSets) -> Self {
        let engine = Self::new(sets);
        let share = sets.cascade.quiescence.share_of_mean.value;
        Self {
            coupled: CoupledModels {
                pacemaker: engine.coupled.pacemaker.with_longest_step(1),
                sleep: sleep::SleepModel::on_grid(&sets.sleep, 1),
                ..engine.coupled
            },
            reader: DayReader::new(1, share),
            ..engine
        }
    }

    /// Lets the members live their habitual days, in units.
    pub fn warm_up(&self, members: &[Member], habits: &Habits) -> Vec<WarmUnit> {
        members
            .par_chunks(LANES)
            .map(|unit| coupled::warm_up(&self.coupled, unit, habits))
            .collect()
    }

    /// Cortisol of a lived line is known from this minute on; its start is forgotten at the entry.
    pub const CORTISOL_FROM: Minute = CASCADE_FROM;

    /// The pacemaker.
    pub fn pacemaker(&self) -> &pacemaker::Pacemaker {
        &self.coupled.pacemaker
    }

    /// Habitual days lived before anything else.
    pub fn habitual_days(&self) -> i64 {
        self.coupled.habitual_days
    }

    /// Sleep and phase of the units on one duty line, without cortisol.
    pub fn tracks(&self, warm: &[WarmUnit], timeline: &Timeline) -> Vec<MemberTrack> {
        warm.iter()
            .flat_map(|unit| coupled::live(&self.coupled, unit, timeline))
            .collect()
    }

    /// Lets the units live one duty line.
    pub fn live(&self, warm: &[WarmUnit], timeline: &Timeline) -> Simulation {
        let parts = warm
            .iter()
            .map(|unit| self.live_unit(unit, timeline))
            .collect();
        joined(parts, self.melatonin, self.amplitude_floor)
    }

    /// Cortisol is read date by date and its rows are forgotten: memory does not grow with the roster.
    fn live_unit(&self, unit: &WarmUnit, timeline: &Timeline) -> UnitPart {
        let tracks = coupled::live(&self.coupled, unit, timeline);
        let reader = &self.reader;
        let stress = stress_spans(timeline);
        let load = Load {
            debt: SleepDebt::On,
            stress: &stress,
        };
        let mut run = self.cascade.begin(&tracks, load, CASCADE_FROM);
        let mut rows = Rows::new(CASCADE_FROM, reader.step_min());
        run.advance(ENTRY + RUN_PAST_MIN, &mut rows);
        let habitual = quiescent_references(&tracks, &rows, reader);
        let mut samples = Vec::new();
        let mut days = Vec::with_capacity(timeline.days.len());
        for day in &timeline.days {
            let to = timeline.end.min(day.end + RUN_PAST_MIN);
            run.advance(to, &mut rows);
            sample_to(to, tracks.len(), &rows, &mut samples);
            let stretch = Stretch::date(day.start, day.end);
            days.push(
                reader
                    .read(&rows, tracks.len(), stretch)
                    .unwrap_or_default(),
            );
            rows.forget_before(day.end + -KEPT_BEFORE_MIN);
        }
        run.advance(timeline.end, &mut rows);
        sample_to(timeline.end, tracks.len(), &rows, &mut samples);
        UnitPart {
            tracks,
            days,
            habitual,
            samples,
        }
    }
}

/// The coupled models with the numbers of the sets.
pub fn coupled_models(sets: &ModelSets) -> CoupledModels {
    coupled_models_on(InstructionSet::best(), sets)
}

#[expect(
    clippy::cast_possible_truncation,
    reason = "habitual days are a small whole number"
)]
fn coupled_models_on(instructions: InstructionSet, sets: &ModelSets) -> CoupledModels {
    CoupledModels {
        pacemaker: pacemaker::Pacemaker::on(instructions, &sets.pacemaker),
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

/// Duties on which the site assumes another drive of the stress axis.
pub fn stress_spans(timeline: &Timeline) -> Vec<StressSpan> {
    timeline
        .duties
        .iter()
        .filter(|duty| (duty.stress - 1.0).abs() > 1e-9)
        .map(|duty| StressSpan {
            from: duty.start,
            to: duty.end,
            factor: duty.stress,
        })
        .collect()
}

/// Takes the points of the curve that lie before `to` and were not taken yet.
fn sample_to(to: Minute, members: usize, rows: &Rows, samples: &mut Vec<(Minute, Vec<f64>)>) {
    let mut next = samples
        .last()
        .map_or(Minute(0), |(at, _)| *at + CURVE_STEP_MIN);
    while next < to {
        if let Some(row) = rows.at(next) {
            samples.push((next, row[..members].to_vec()));
        }
        next = next + CURVE_STEP_MIN;
    }
}

/// The last habitual day, noon to noon, before the entry.
fn quiescent_references(
    tracks: &[MemberTrack],
    rows: &Rows,
    reader: &DayReader,
) -> Vec<QuiescentReference> {
    let stretch = Stretch::whole(ENTRY + -1440, ENTRY);
    let days = reader.read(rows, tracks.len(), stretch).unwrap_or_default();
    tracks
        .iter()
        .zip(days)
        .map(|(track, day)| {
            let (from, to) = day.quiescent;
            let cbtmin = track.habitual_cbtmin_min;
            let asleep: i64 = track.sleeps.iter().map(|s| s.inside(from, to)).sum();
            QuiescentReference {
                from_min: from.as_f64() - cbtmin,
                to_min: to.as_f64() - cbtmin,
                awake_min: Minute(to - from - asleep).as_f64(),
                day,
            }
        })
        .collect()
}

/// Puts the units of one timeline together, members in order.
fn joined(parts: Vec<UnitPart>, melatonin: MelatoninMarkers, amplitude_floor: f64) -> Simulation {
    let mut simulation = Simulation {
        tracks: Vec::new(),
        days: Vec::new(),
        habitual: Vec::new(),
        curve: Vec::new(),
        melatonin,
        amplitude_floor,
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
