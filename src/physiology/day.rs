//! Cortisol of one member over one local date.

use crate::numeric::cosine::fit_cosine;
use crate::units::Minute;

/// Features of the modelled total serum cortisol of one stretch of time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CortisolDay {
    /// Mean, nmol/L.
    pub mean: f64,
    /// MESOR of the 24-h cosine, nmol/L.
    pub mesor: f64,
    /// Amplitude of the 24-h cosine, nmol/L.
    pub amplitude: f64,
    /// Acrophase of the 24-h cosine, minutes after the first minute of the stretch. Depends on sleep timing; no phase marker in shift work.
    pub acrophase_min: f64,
    /// Highest value, nmol/L.
    pub peak: f64,
    /// When.
    pub peak_at: Minute,
    /// Lowest value of the stretch in which the nadir is looked for, nmol/L.
    pub nadir: f64,
    /// When.
    pub nadir_at: Minute,
    /// Unbroken interval around the nadir below the share of the mean: first minute below, first minute above.
    pub quiescent: (Minute, Minute),
}

/// One lane of a run, minute by minute.
#[derive(Debug, Clone, Copy)]
pub struct CortisolSeries<'a> {
    /// Minute of the first value.
    pub from: Minute,
    /// Values, nmol/L.
    pub values: &'a [f64],
}

/// Where features are looked for, first minute and first minute after.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Stretch {
    /// Mean, cosine and peak.
    pub day: (Minute, Minute),
    /// Nadir: a date has it at both ends, a window from noon to noon in its middle.
    pub night: (Minute, Minute),
}

impl Stretch {
    /// The same stretch for every feature.
    pub fn whole(from: Minute, to: Minute) -> Self {
        Self {
            day: (from, to),
            night: (from, to),
        }
    }

    /// A date, with the nadir of the night that leads into it.
    pub fn date(from: Minute, to: Minute) -> Self {
        Self {
            day: (from, to),
            night: (from + -720, to + -720),
        }
    }
}

/// Features of a stretch: mean, 24-h cosine, peak, nadir and the quiescent interval around it.
///
/// # Units
///
/// nmol/L and minutes; `share_of_mean` without unit.
///
/// # Example
///
/// ```
/// use acroshift::physiology::day::{cortisol_day, CortisolSeries, Stretch};
/// use acroshift::units::Minute;
/// let values: Vec<f64> = (0..2880)
///     .map(|minute| 200.0 - 150.0 * (f64::from(minute) * std::f64::consts::TAU / 1440.0).cos())
///     .collect();
/// let series = CortisolSeries { from: Minute(0), values: &values };
/// let day = cortisol_day(series, Stretch::whole(Minute(720), Minute(2160)), 0.6).expect("the stretch lies inside");
/// assert_eq!((day.nadir_at, day.peak_at), (Minute(1440), Minute(720)));
/// assert!((day.mean - 200.0).abs() < 1e-9);
/// ```
///
///
/// The quiescent interval may reach beyond the stretch on either side.
/// Returns `None` when the stretch does not lie inside the series.
///
/// # Source
///
/// Quiescence: own definition after the idea of Griefahn 2006, below 60 % of the mean.
pub fn cortisol_day(
    series: CortisolSeries<'_>,
    stretch: Stretch,
    share_of_mean: f64,
) -> Option<CortisolDay> {
    let (from, to) = stretch.day;
    let first = usize::try_from(from - series.from).ok()?;
    let last = usize::try_from(to - series.from).ok()?;
    let values = series.values.get(first..last)?;
    let hours: Vec<f64> = (0..values.len()).map(minute_as_hours).collect();
    let fit = fit_cosine(&hours, values, 24.0)?;
    let mean = values.iter().sum::<f64>() / Minute(signed(values.len())).as_f64();
    let (peak_index, peak) = extreme(values, |a, b| a > b)?;
    let evening = usize::try_from(stretch.night.0 - series.from).ok()?;
    let morning = usize::try_from(stretch.night.1 - series.from).ok()?;
    let night = series.values.get(evening..morning)?;
    let (nadir_index, nadir) = extreme(night, |a, b| a < b)?;
    let threshold = share_of_mean * mean;
    let (mut begins, mut ends) = (evening + nadir_index, evening + nadir_index);
    while begins > 0 && series.values[begins - 1] < threshold {
        begins -= 1;
    }
    while ends < series.values.len() && series.values[ends] < threshold {
        ends += 1;
    }
    Some(CortisolDay {
        mean,
        mesor: fit.mesor,
        amplitude: fit.amplitude,
        acrophase_min: fit.acrophase * 60.0,
        peak,
        peak_at: from + signed(peak_index),
        nadir,
        nadir_at: series.from + signed(evening + nadir_index),
        quiescent: (series.from + signed(begins), series.from + signed(ends)),
    })
}

fn extreme(values: &[f64], better: impl Fn(f64, f64) -> bool) -> Option<(usize, f64)> {
    let mut best = (0, *values.first()?);
    for (index, &value) in values.iter().enumerate() {
        if better(value, best.1) {
            best = (index, value);
        }
    }
    Some(best)
}

fn minute_as_hours(index: usize) -> f64 {
    Minute(signed(index)).as_f64() / 60.0
}

fn signed(index: usize) -> i64 {
    i64::try_from(index).unwrap_or(i64::MAX)
}
