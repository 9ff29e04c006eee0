//! A table of subjects: each one's rhythm and saliva measures, and the population.

use super::cosinor::{Cosinor, Design, Observation, Refusal, fit};
use super::groups::{self, GroupComparison, GroupPopulation};
use super::saliva::{Areas, RESPONSE_MIN, SalivaSample, SlopeKind, Timing, areas, slope, timing};
use crate::samples::{Sample, Series};

/// What is asked of a table.
#[derive(Debug, Clone, PartialEq)]
pub struct Plan {
    /// Periods and level.
    pub design: Design,
    /// Fit the natural logarithm: geometric MESOR, peak over trough.
    pub log: bool,
    /// Hour of the clock from which phases are counted, 0 for midnight.
    pub reference_h: f64,
}

/// One subject's rhythm.
#[derive(Debug, Clone, PartialEq)]
pub struct SubjectRhythm {
    /// Name.
    pub subject: String,
    /// Matrix and assay in words.
    pub specimen: String,
    /// Group, where the table names any.
    pub group: Option<String>,
    /// Samples used.
    pub n: usize,
    /// Of these below the limit of detection.
    pub below_limit: usize,
    /// Days with samples.
    pub days: usize,
    /// Fit, or why there is none.
    pub cosinor: Result<Cosinor, Refusal>,
    /// Saliva measures by day.
    pub saliva: Vec<SalivaDay>,
}

impl SubjectRhythm {
    /// MESOR in the unit of the values: geometric on the log scale.
    pub fn mesor_nmol_l(&self, plan: &Plan) -> Option<f64> {
        let mesor = self.cosinor.as_ref().ok()?.mesor;
        Some(if plan.log { libm::exp(mesor) } else { mesor })
    }
}

/// Mean increase after waking over several days.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ResponseMean {
    /// Days with a waking response.
    pub days: usize,
    /// Mean of their mean increases, nmol/L; none without a day.
    pub mean_increase: Option<f64>,
}

impl SubjectRhythm {
    /// The waking response over all days, and over those alone whose first sample came within 5 min of waking.
    pub fn response_with_and_without(&self) -> (ResponseMean, ResponseMean) {
        let over = |kept: &dyn Fn(&SalivaDay) -> bool| {
            let days = self.saliva.iter().filter(|day| kept(day));
            let increases: Vec<f64> = days
                .filter_map(|day| Some(day.response?.mean_increase))
                .collect();
            let share = crate::numeric::quantile::ratio(1, increases.len().max(1));
            ResponseMean {
                days: increases.len(),
                mean_increase: (!increases.is_empty())
                    .then(|| increases.iter().sum::<f64>() * share),
            }
        };
        (over(&|_| true), over(&|day| day.first == Timing::Kept))
    }
}

/// Saliva measures of one day, with the timing of its first sample.
#[derive(Debug, Clone, PartialEq)]
pub struct SalivaDay {
    /// Number of the day from the first, 0.
    pub day: i64,
    /// Samples of the day.
    pub samples: usize,
    /// First sample after waking, minutes.
    pub first_delay_min: f64,
    /// How the first sample was kept.
    pub first: Timing,
    /// Areas of the first hour after waking: the waking response.
    pub response: Option<Areas>,
    /// Areas of the whole day.
    pub whole: Option<Areas>,
    /// Slopes by kind.
    pub slopes: Vec<(SlopeKind, f64)>,
}

/// A table of rhythms.
#[derive(Debug, Clone, PartialEq)]
pub struct RhythmTable {
    /// What was asked.
    pub plan: Plan,
    /// By subject.
    pub subjects: Vec<SubjectRhythm>,
    /// Of the first period, one for every specimen and group of which at least three subjects have a fit.
    pub populations: Vec<GroupPopulation>,
    /// Groups held against each other, by specimen.
    pub comparisons: Vec<GroupComparison>,
}

/// Rhythms of subjects and their population.
///
/// # Example
///
/// ```
/// use acroshift::rhythm::subjects::{analyse, Plan};
/// use acroshift::samples::{Matrix, Sample, Series};
/// use acroshift::rhythm::Design;
/// let samples: Vec<Sample> = [(7.0, 14.0), (11.0, 7.0), (15.0, 5.0), (19.0, 3.0), (23.0, 2.0)]
///     .map(|(time_h, nmol_l)| Sample { time_h, nmol_l, below_limit: false, waking_h: None })
///     .to_vec();
/// let plan = Plan { design: Design::of(&[24.0]), log: true, reference_h: 0.0 };
/// let series = Series { subject: "A".to_owned(), matrix: Some(Matrix::Saliva), assay: None, group: None, samples };
/// let table = analyse(&[series], plan);
/// assert!(table.subjects[0].cosinor.is_ok() && table.populations.is_empty());
/// ```
pub fn analyse(series: &[Series], plan: Plan) -> RhythmTable {
    let subjects: Vec<SubjectRhythm> = series.iter().map(|series| one(series, &plan)).collect();
    let populations = groups::populations(&subjects, plan.design.level);
    RhythmTable {
        comparisons: groups::comparisons(&subjects, &populations),
        populations,
        subjects,
        plan,
    }
}

fn one(series: &Series, plan: &Plan) -> SubjectRhythm {
    let samples = &series.samples[..];
    let observations: Vec<Observation> = samples
        .iter()
        .map(|sample| Observation {
            time_h: sample.time_h - plan.reference_h,
            value: if plan.log {
                libm::log(sample.nmol_l)
            } else {
                sample.nmol_l
            },
            weight: 1.0,
        })
        .collect();
    SubjectRhythm {
        subject: series.subject.clone(),
        specimen: series.specimen(),
        group: series.group.clone(),
        n: samples.len(),
        below_limit: samples.iter().filter(|s| s.below_limit).count(),
        days: days(samples).len(),
        cosinor: fit(&observations, &plan.design),
        saliva: days(samples)
            .into_iter()
            .filter_map(|day| saliva_day(&day))
            .collect(),
    }
}

/// Samples by waking where it is given, else by date.
fn days(samples: &[Sample]) -> Vec<Vec<Sample>> {
    let day = |sample: &Sample| {
        let start = sample.waking_h.unwrap_or(sample.time_h);
        (start / 24.0).floor()
    };
    samples
        .chunk_by(|a, b| (day(a) - day(b)).abs() < 0.5)
        .map(<[Sample]>::to_vec)
        .collect()
}

#[expect(clippy::cast_possible_truncation, reason = "a day number is small")]
fn saliva_day(samples: &[Sample]) -> Option<SalivaDay> {
    let waking_h = samples.iter().find_map(|sample| sample.waking_h)?;
    let after: Vec<SalivaSample> = samples
        .iter()
        .map(|sample| SalivaSample {
            after_waking_min: 60.0 * (sample.time_h - waking_h),
            nmol_l: sample.nmol_l,
        })
        .collect();
    let first_delay_min = after.first()?.after_waking_min;
    let early: Vec<SalivaSample> = after
        .iter()
        .copied()
        .filter(|sample| sample.after_waking_min <= RESPONSE_MIN + 1e-9)
        .collect();
    let slopes = SlopeKind::ALL
        .into_iter()
        .filter_map(|kind| Some((kind, slope(&after, kind)?)))
        .collect();
    Some(SalivaDay {
        day: (waking_h / 24.0).floor() as i64,
        samples: after.len(),
        first_delay_min,
        first: timing(first_delay_min),
        response: areas(&early),
        whole: areas(&after),
        slopes,
    })
}
