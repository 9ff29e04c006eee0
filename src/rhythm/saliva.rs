//! Saliva measures: the waking response, areas, slopes, and whether the samples were taken when they should have been.

use super::cosinor::as_f64;

/// One saliva sample of a day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SalivaSample {
    /// Minutes after waking.
    pub after_waking_min: f64,
    /// Concentration, nmol/L.
    pub nmol_l: f64,
}

/// Areas under the curve of a stretch of samples.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Areas {
    /// With respect to ground: trapezoids of the values, nmol/L times min.
    pub ground: f64,
    /// With respect to increase: above the first value; may be negative.
    pub increase: f64,
    /// Mean of the later samples minus the first, nmol/L.
    pub mean_increase: f64,
    /// Highest of the later samples minus the first, nmol/L.
    pub highest_increase: f64,
}

/// Areas of samples in order of time; none with fewer than two.
///
/// # Equation
///
/// ```text
/// AUCg = sum (m_i + m_(i+1)) (t_(i+1) - t_i) / 2;  AUCi = AUCg - m_1 (t_n - t_1);  mean increase = mean(m_2 ... m_n) - m_1
/// ```
///
/// # Source
///
/// Pruessner, Kirschbaum, Meinlschmid and Hellhammer 2003, Psychoneuroendocrinology 28:916.
///
/// # Example
///
/// ```
/// use acroshift::rhythm::saliva::{areas, SalivaSample};
/// let samples = [(0.0, 10.0), (30.0, 16.0), (45.0, 15.0), (60.0, 12.0)]
///     .map(|(after_waking_min, nmol_l)| SalivaSample { after_waking_min, nmol_l });
/// let areas = areas(&samples).expect("four samples");
/// assert_eq!((areas.ground, areas.increase), (825.0, 225.0));
/// ```
pub fn areas(samples: &[SalivaSample]) -> Option<Areas> {
    let (first, later) = samples.split_first()?;
    let last = later.last()?;
    let ground: f64 = samples
        .windows(2)
        .map(|pair| {
            f64::midpoint(pair[0].nmol_l, pair[1].nmol_l)
                * (pair[1].after_waking_min - pair[0].after_waking_min)
        })
        .sum();
    let mean = later.iter().map(|s| s.nmol_l).sum::<f64>() / as_f64(later.len());
    let highest = later.iter().map(|s| s.nmol_l).fold(f64::MIN, f64::max);
    Some(Areas {
        ground,
        increase: ground - first.nmol_l * (last.after_waking_min - first.after_waking_min),
        mean_increase: mean - first.nmol_l,
        highest_increase: highest - first.nmol_l,
    })
}

/// Samples of the first hour after waking, in which the waking response lies.
pub const RESPONSE_MIN: f64 = 60.0;

/// Which slope of the day: the type moderates results (Adam 2017), so it is always named.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SlopeKind {
    /// Line through the samples without those of the waking response.
    Fitted,
    /// The same of the natural logarithm, per hour.
    FittedLog,
    /// First to last sample.
    WakeToBed,
    /// Highest to last sample.
    PeakToBed,
}

impl SlopeKind {
    /// Every kind.
    pub const ALL: [Self; 4] = [
        Self::Fitted,
        Self::FittedLog,
        Self::WakeToBed,
        Self::PeakToBed,
    ];

    /// In words.
    pub fn word(self) -> &'static str {
        match self {
            Self::Fitted => "fitted without the waking response",
            Self::FittedLog => "fitted to the natural logarithm (per h)",
            Self::WakeToBed => "waking to bed",
            Self::PeakToBed => "peak to bed",
        }
    }
}

/// Slope of a day, nmol/L per hour (per hour of the logarithm); none where the samples do not give it.
pub fn slope(samples: &[SalivaSample], kind: SlopeKind) -> Option<f64> {
    let first = samples.first()?;
    let last = samples.last()?;
    let between = |a: &SalivaSample, b: &SalivaSample| {
        let hours = (b.after_waking_min - a.after_waking_min) / 60.0;
        (hours > 0.0).then(|| (b.nmol_l - a.nmol_l) / hours)
    };
    match kind {
        SlopeKind::WakeToBed => between(first, last),
        SlopeKind::PeakToBed => {
            let peak = samples
                .iter()
                .max_by(|a, b| a.nmol_l.total_cmp(&b.nmol_l))?;
            between(peak, last)
        }
        SlopeKind::Fitted => line(samples, |value| value),
        SlopeKind::FittedLog => line(samples, libm::log),
    }
}

/// Least-squares line through the samples at waking and after the response.
fn line(samples: &[SalivaSample], scale: impl Fn(f64) -> f64) -> Option<f64> {
    let used: Vec<(f64, f64)> = samples
        .iter()
        .filter(|s| s.after_waking_min <= 5.0 || s.after_waking_min > RESPONSE_MIN)
        .map(|s| (s.after_waking_min / 60.0, scale(s.nmol_l)))
        .collect();
    if used.len() < 3 {
        return None;
    }
    let n = as_f64(used.len());
    let (x, y) = (
        used.iter().map(|p| p.0).sum::<f64>() / n,
        used.iter().map(|p| p.1).sum::<f64>() / n,
    );
    let both: f64 = used.iter().map(|p| (p.0 - x) * (p.1 - y)).sum();
    let across: f64 = used.iter().map(|p| (p.0 - x).powi(2)).sum();
    (across > 0.0).then(|| both / across)
}

/// How a sample stands against its time.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Timing {
    /// Within 5 min.
    Kept,
    /// More than 5 min off.
    Off,
    /// More than 15 min off.
    FarOff,
}

/// The timing of a sample: minutes from when it should have been taken.
///
/// # Source
///
/// Smyth 2013 (seen): a first sample delayed by 5 to 15 min overestimates the waking response, by more than 15 min underestimates it.
pub fn timing(off_min: f64) -> Timing {
    match off_min.abs() {
        off if off > 15.0 => Timing::FarOff,
        off if off > 5.0 => Timing::Off,
        _ => Timing::Kept,
    }
}

/// Days needed for a reliable measure: between persons, within a person.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct DayCount {
    /// What is measured.
    pub measure: &'static str,
    /// Days to tell persons apart.
    pub between: u32,
    /// Days to tell a change within a person, where it is known.
    pub within: Option<u32>,
}

/// Segerstrom 2014 (seen): days of sampling for a reliable mean, area and slope.
pub const DAY_COUNTS: [DayCount; 3] = [
    DayCount {
        measure: "mean",
        between: 3,
        within: Some(3),
    },
    DayCount {
        measure: "area under the curve",
        between: 8,
        within: Some(3),
    },
    DayCount {
        measure: "slope",
        between: 10,
        within: Some(8),
    },
];
