//! Where does a cortisol sample stand in the biological time of a person on a roster?
//!
//! The *sample band* is the range for one measured value of one person: the spread of the modelled members, widened by the variation
//! between and within persons. It is never the band of the modelled group mean.

use crate::numeric::quantile::{Quantiles, circular_quantiles, quantiles};
use crate::physiology::cascade::{Cascade, Load, SleepDebt, StressSpan};
use crate::physiology::free_cortisol::Binding;
use crate::physiology::pacemaker::LANES;
use crate::physiology::parameters::{BindingSet, SampleBandSet};
use crate::physiology::{CORTISOL_STEP_MIN, Engine, Member, MemberTrack, ModelSets, SleepEpisode};
use crate::samples::Matrix;
use crate::timeline::stress::hours_at_night;
use crate::timeline::{DutySpan, MeasuredLight, Timeline};
use crate::units::{Minute, minutes_to_hours};

/// A person's biological time, where it is known from outside: it takes the place of the model's.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stated {
    /// `CBTmin`, clock hour.
    pub cbtmin_h: f64,
    /// Habitual sleep from and to, clock hours.
    pub sleep_h: (f64, f64),
}

/// The 5, 50 and 95 % of one measured value, nmol/L.
pub type SampleBand = Quantiles;

/// Inside, outside or uncertain: does the sample stand where a day worker's morning sample stands?
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Timing {
    /// In at least 90 % of the members.
    Inside,
    /// In at most 10 %.
    Outside,
    /// In between.
    Uncertain,
}

impl Timing {
    /// In words.
    pub fn word(self) -> &'static str {
        match self {
            Self::Inside => "inside",
            Self::Outside => "outside",
            Self::Uncertain => "uncertain",
        }
    }
}

/// Where an instant stands in the biological time of a person.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Standing {
    /// Does it stand 3 to 7 h after `CBTmin`?
    pub timing: Timing,
    /// Members in which it does.
    pub hold: usize,
    /// Members.
    pub of: usize,
    /// Hours since waking.
    pub since_waking_h: Quantiles,
    /// Hours since `CBTmin`.
    pub since_cbtmin_h: Quantiles,
    /// Length of the last main sleep, hours.
    pub main_sleep_h: Quantiles,
    /// Night duties that ended in the last 72 h.
    pub nights_before: usize,
    /// Comparable with a day worker's sample?
    pub comparable: bool,
}

/// What is known of a sample.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Placed {
    /// What was sampled.
    pub matrix: Matrix,
    /// Where the sample stands.
    pub standing: Standing,
    /// Range for one value of this person.
    pub band: SampleBand,
    /// The same for a day worker at the same hour of the clock.
    pub day_worker: SampleBand,
    /// Was the band widened for the waking response?
    pub near_waking: bool,
}

/// Why a sample is not placed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum NotPlaced {
    /// The roster does not reach far enough back.
    #[error(
        "the roster holds {found} days before the sample; at least {needed} are needed, or state CBTmin and sleep"
    )]
    ShortHistory {
        /// Days before the sample.
        found: i64,
        /// Days needed.
        needed: i64,
    },
    /// No days without nights to start from.
    #[error(
        "no three consecutive days without night duty lie in the {looked} days before the sample; state CBTmin and sleep, from a measured DLMO for instance"
    )]
    NoStart {
        /// Days looked back.
        looked: i64,
    },
    /// The sample lies outside the roster.
    #[error("the sample lies outside the dates of the roster")]
    OutsideRoster,
}

/// What is needed to place a sample.
#[derive(Debug, Clone, Copy)]
pub struct Frame<'a> {
    /// The person's duties.
    pub timeline: &'a Timeline,
    /// End of the date on which the last shift of the roster ends.
    pub last: Minute,
    /// Members of the ensemble.
    pub members: &'a [Member],
    /// Parameter sets.
    pub sets: &'a ModelSets,
    /// Bands and limits.
    pub bands: &'a SampleBandSet,
}

/// Places a sample in the biological time of a person on a roster.
///
/// # Errors
///
/// [`NotPlaced`] where the roster does not hold the sample, or does not tell enough of the days before and nothing is stated.
pub fn place(
    frame: Frame<'_>,
    at: Minute,
    matrix: Matrix,
    stated: Option<Stated>,
) -> Result<Placed, NotPlaced> {
    let lived = Lived::of(frame, at, stated)?;
    let standing = standing(frame, at, &lived.tracks);
    let near_waking = standing.since_waking_h.p05 * 60.0 < frame.bands.waking.lasts.value
        && lived.tracks.iter().any(|track| track.awake_h(at) > 0.0);
    let stress = crate::physiology::stress_spans(frame.timeline);
    Ok(Placed {
        matrix,
        standing,
        band: sample_band(frame, at, matrix, &lived.tracks, &stress, near_waking),
        day_worker: sample_band(frame, at, matrix, &lived.day_worker, &[], false),
        near_waking,
    })
}

/// The next spans, from `from` to the end of the roster, in which a sample would be comparable with a day worker's.
///
/// # Errors
///
/// As [`place`].
pub fn comparable_spans(
    frame: Frame<'_>,
    from: Minute,
    stated: Option<Stated>,
) -> Result<Vec<(Minute, Minute)>, NotPlaced> {
    /// Instants are looked at this far apart, minutes.
    const STEP_MIN: i64 = 15;
    let lived = Lived::of(frame, from, stated)?;
    let mut spans: Vec<(Minute, Minute)> = Vec::new();
    let mut at = from;
    while at < frame.last {
        if standing(frame, at, &lived.tracks).comparable {
            match spans.last_mut() {
                Some(last) if last.1 == at => last.1 = at + STEP_MIN,
                _ => spans.push((at, at + STEP_MIN)),
            }
        }
        at = at + STEP_MIN;
    }
    Ok(spans)
}

/// The person as modelled or stated, and day workers on the same dates.
struct Lived {
    tracks: Vec<MemberTrack>,
    day_worker: Vec<MemberTrack>,
}

impl Lived {
    fn of(frame: Frame<'_>, at: Minute, stated: Option<Stated>) -> Result<Self, NotPlaced> {
        let timeline = frame.timeline;
        if at < Minute(0) || at >= frame.last {
            return Err(NotPlaced::OutsideRoster);
        }
        if stated.is_none() {
            check_history(frame, at)?;
        }
        let engine = Engine::new(frame.sets);
        let warm = engine.warm_up(frame.members, &timeline.habits);
        let free = Timeline {
            duties: Vec::new(),
            measured: MeasuredLight::default(),
            ..timeline.clone()
        };
        Ok(Self {
            tracks: match stated {
                Some(stated) => vec![stated_track(frame, stated)],
                None => engine.tracks(&warm, timeline),
            },
            day_worker: engine.tracks(&warm, &free),
        })
    }
}

/// The same sleep and `CBTmin` by the local clock every day, from a week before the roster to its end.
fn stated_track(frame: Frame<'_>, stated: Stated) -> MemberTrack {
    const DAYS_BEFORE: i64 = 8;
    let need_h = crate::numeric::circular::wrap(stated.sleep_h.1 - stated.sleep_h.0, 24.0);
    let last = frame.timeline.end.0.div_euclid(1440) + 2;
    let at_clock =
        |day: i64, hour: f64| elapsed(frame.timeline, day * 1440 + Minute::nearest(hour * 60.0).0);
    let cbtmin_min: Vec<f64> = (-DAYS_BEFORE..=last)
        .map(|day| at_clock(day, stated.cbtmin_h).as_f64())
        .collect();
    MemberTrack {
        member: Member {
            need_h,
            ..frame.members[0]
        },
        sleeps: (-DAYS_BEFORE..=last)
            .map(|day| {
                let from = at_clock(day, stated.sleep_h.0);
                SleepEpisode {
                    from,
                    to: from + Minute::nearest(need_h * 60.0).0,
                    cut: false,
                }
            })
            .collect(),
        amplitude_ratio: vec![1.0; cbtmin_min.len()],
        habitual_cbtmin_min: cbtmin_min[0],
        cbtmin_min,
    }
}

/// The elapsed minute at which the local clock shows a minute.
fn elapsed(timeline: &Timeline, shown: i64) -> Minute {
    let beyond = |minute: i64| timeline.clock.at(Minute(minute)) - minute;
    Minute(shown - beyond(shown - beyond(shown)))
}

/// Complete days back to the last three consecutive days without night duty.
fn check_history(frame: Frame<'_>, at: Minute) -> Result<(), NotPlaced> {
    let limits = &frame.bands.comparable;
    let whole = |number: f64| Minute::nearest(number).0;
    let (needed, looked) = (
        whole(limits.history_from.value),
        whole(limits.history_to.value),
    );
    let before = frame
        .timeline
        .days
        .iter()
        .filter(|day| day.start >= Minute(0) && day.end <= at)
        .count();
    let found = i64::try_from(before).unwrap_or(i64::MAX);
    if found < needed {
        return Err(NotPlaced::ShortHistory { found, needed });
    }
    let nights: Vec<bool> = frame
        .timeline
        .days
        .iter()
        .filter(|day| day.start >= Minute(0) && day.end <= at)
        .map(|day| {
            let starts = |duty: &&DutySpan| (day.start..day.end).contains(&duty.start);
            frame.timeline.duties.iter().filter(starts).any(is_night)
        })
        .collect();
    let from = nights
        .len()
        .saturating_sub(usize::try_from(looked).unwrap_or(28));
    let free_run = nights[from..]
        .windows(3)
        .any(|days| days.iter().all(|night| !night));
    if free_run {
        Ok(())
    } else {
        Err(NotPlaced::NoStart { looked })
    }
}

/// At least 3 h between 23:00 and 06:00, as in register studies.
fn is_night(duty: &DutySpan) -> bool {
    hours_at_night(duty.start_clock, duty.end.hours_since(duty.start)) >= 3.0
}

fn standing(frame: Frame<'_>, at: Minute, tracks: &[MemberTrack]) -> Standing {
    let bands = frame.bands;
    let of_members = |value: fn(&MemberTrack, Minute) -> f64| {
        let values: Vec<f64> = tracks.iter().map(|track| value(track, at)).collect();
        quantiles(&values).unwrap_or(Quantiles {
            median: f64::NAN,
            p05: f64::NAN,
            p95: f64::NAN,
        })
    };
    let since_waking_h = of_members(MemberTrack::awake_h);
    let main_sleep_h = of_members(|track, at| {
        track
            .main_sleep(at + -1440, at)
            .map_or(0.0, |sleep| minutes_to_hours(sleep.inside(at + -1440, at)))
    });
    let phases: Vec<f64> = tracks
        .iter()
        .map(|track| track.phase_min(at.as_f64()) / 60.0)
        .collect();
    let since_cbtmin_h = circular_quantiles(&phases, 24.0, 0.0).unwrap_or(since_waking_h);
    let (from, to) = (bands.timing.from.value, bands.timing.to.value);
    let hold = phases
        .iter()
        .filter(|phase| (from..=to).contains(*phase))
        .count();
    let timing = timing(hold, tracks.len(), bands);
    let since = at + -Minute::nearest(bands.comparable.no_night.value * 60.0).0;
    let nights_before = frame
        .timeline
        .duties
        .iter()
        .filter(|duty| is_night(duty) && (since..=at).contains(&duty.end))
        .count();
    let awake = bands.comparable.awake_from.value..=bands.comparable.awake_to.value;
    let on_duty_at_night = frame
        .timeline
        .duties
        .iter()
        .any(|duty| is_night(duty) && (duty.start..duty.end).contains(&at));
    Standing {
        timing,
        hold,
        of: tracks.len(),
        comparable: timing == Timing::Inside
            && awake.contains(&since_waking_h.median)
            && main_sleep_h.median >= bands.comparable.main_sleep.value
            && nights_before == 0
            && !on_duty_at_night,
        since_waking_h,
        since_cbtmin_h,
        main_sleep_h,
        nights_before,
    }
}

fn timing(hold: usize, of: usize, bands: &SampleBandSet) -> Timing {
    let share = crate::numeric::quantile::ratio(hold, of);
    if share >= bands.timing.inside.value {
        Timing::Inside
    } else if share <= bands.timing.outside.value {
        Timing::Outside
    } else {
        Timing::Uncertain
    }
}

/// The members' modelled values, widened by the variation between and within persons.
fn sample_band(
    frame: Frame<'_>,
    at: Minute,
    matrix: Matrix,
    tracks: &[MemberTrack],
    stress: &[StressSpan],
    near_waking: bool,
) -> SampleBand {
    let binding = Binding::new(&BindingSet::embedded());
    let logs: Vec<f64> = totals_at(frame.sets, tracks, stress, at)
        .into_iter()
        .map(|total| match matrix {
            Matrix::Serum => total,
            Matrix::Saliva => binding.saliva(total),
        })
        .map(libm::log)
        .collect();
    let (between, within) = match matrix {
        Matrix::Serum => (&frame.bands.serum.between, &frame.bands.serum.within),
        Matrix::Saliva => (&frame.bands.saliva.between, &frame.bands.saliva.within),
    };
    let further = if near_waking {
        frame.bands.waking.further.value
    } else {
        0.0
    };
    let spread = between.value.hypot(within.value).hypot(further);
    let of = |share: f64| libm::exp(mixture_quantile(&logs, spread, share));
    Quantiles {
        median: of(0.5),
        p05: of(0.05),
        p95: of(0.95),
    }
}

/// Total serum cortisol of the tracks at a minute, nmol/L.
fn totals_at(
    sets: &ModelSets,
    tracks: &[MemberTrack],
    stress: &[StressSpan],
    at: Minute,
) -> Vec<f64> {
    let cascade = Cascade::new(&sets.cascade);
    let load = Load {
        debt: SleepDebt::On,
        stress,
    };
    let from = tracks
        .iter()
        .filter_map(|track| track.cbtmin_min.first())
        .fold(f64::MIN, |a, b| a.max(*b));
    let from = Minute::from_which(from.max(Engine::CORTISOL_FROM.as_f64()));
    let from = Minute(from.0.div_euclid(CORTISOL_STEP_MIN) * CORTISOL_STEP_MIN + CORTISOL_STEP_MIN);
    tracks
        .chunks(LANES)
        .flat_map(|unit| {
            let span = (from, at + CORTISOL_STEP_MIN);
            let rows = cascade.rows(unit, load, span, CORTISOL_STEP_MIN);
            rows.at(at)
                .map_or(Vec::new(), |row| row[..unit.len()].to_vec())
        })
        .collect()
}

/// Quantile of equal parts of normal distributions around `centres`.
fn mixture_quantile(centres: &[f64], spread: f64, share: f64) -> f64 {
    let below = |x: f64| {
        let tail =
            |centre: &f64| 0.5 * libm::erfc((centre - x) / (spread * std::f64::consts::SQRT_2));
        let count = crate::numeric::quantile::ratio(1, centres.len());
        centres.iter().map(tail).sum::<f64>() * count
    };
    let (mut low, mut high) = centres.iter().fold((f64::MAX, f64::MIN), |(low, high), c| {
        (low.min(*c), high.max(*c))
    });
    low -= 8.0 * spread;
    high += 8.0 * spread;
    for _ in 0..80 {
        let middle = f64::midpoint(low, high);
        if below(middle) < share {
            low = middle;
        } else {
            high = middle;
        }
    }
    f64::midpoint(low, high)
}
