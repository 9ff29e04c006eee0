//! One or several cosines through one subject's samples, with the limits of everything that is estimated.
//!
//! # Equation
//!
//! ```text
//! y = M + sum over h of beta_h cos(2 pi t / tau_h) + gamma_h sin(2 pi t / tau_h) + e
//! A = sqrt(beta^2 + gamma^2),  acrophase phi = -atan2(gamma, beta) in (-2 pi, 0]
//! var A   = V_bb cos^2 phi - 2 V_bg sin phi cos phi + V_gg sin^2 phi
//! var phi = (V_bb sin^2 phi + 2 V_bg sin phi cos phi + V_gg cos^2 phi) / A^2
//! ```
//!
//! Source: Nelson, Tong, Lee and Halberg 1979, Chronobiologia 6:305; Bingham et al. 1982, Chronobiologia 9:397 (from memory),
//! in the form of the authors' own programs; checked against two statistics libraries to 1e-9.

use super::ellipse::{Ellipse, TurnLimits};
use super::shape::Shape;
use nalgebra::{DMatrix, DVector, Matrix2, Vector2};
use statrs::distribution::{ContinuousCDF, FisherSnedecor};

/// One sample.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Observation {
    /// Hours since the reference time.
    pub time_h: f64,
    /// Value.
    pub value: f64,
    /// Weight: proportional to one over the variance; 1 when all are alike.
    pub weight: f64,
}

/// What is fitted.
#[derive(Debug, Clone, PartialEq)]
pub struct Design {
    /// Periods, hours; the fundamental is the longest.
    pub periods_h: Vec<f64>,
    /// Share covered by the limits, such as 0.95.
    pub level: f64,
}

impl Design {
    /// Periods with limits of 95 %.
    pub fn of(periods_h: &[f64]) -> Self {
        Self {
            periods_h: periods_h.to_vec(),
            level: 0.95,
        }
    }
}

/// Why nothing is fitted.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum Refusal {
    /// More parameters than the samples can tell.
    #[error("{found} samples cannot tell {parameters} parameters: at least {needed} are needed")]
    TooFew {
        /// Samples.
        found: usize,
        /// Parameters.
        parameters: usize,
        /// Fewest samples.
        needed: usize,
    },
    /// The times do not tell a rhythm from a level.
    #[error(
        "the times do not tell the rhythm from the level: condition number {condition:.1}, at most {limit} is accepted; spread the samples over the period"
    )]
    Design {
        /// Condition number of the design.
        condition: f64,
        /// Highest accepted.
        limit: f64,
    },
    /// All values are alike.
    #[error("all values are alike: there is no rhythm to be fitted")]
    Constant,
    /// A value or a time is no number.
    #[error("sample {index}: {what} is not a finite number")]
    NotFinite {
        /// Which sample, from 1.
        index: usize,
        /// Value, time or weight.
        what: &'static str,
    },
}

/// A fitted cosinor.
#[derive(Debug, Clone, PartialEq)]
pub struct Cosinor {
    /// Samples.
    pub n: usize,
    /// Degrees of freedom of the residual.
    pub df: f64,
    /// M, beta and gamma of each period.
    pub coefficients: Vec<f64>,
    /// Their covariance, row by row.
    pub covariance: Vec<Vec<f64>>,
    /// Residual sum of squares.
    pub rss: f64,
    /// Residual standard deviation.
    pub sigma: f64,
    /// Sum of squares around the (weighted) mean.
    pub tss: f64,
    /// Share of the variance explained; times 100 the percent rhythm.
    pub r2: f64,
    /// Test of all amplitudes at once.
    pub f: f64,
    /// Its probability when there is no rhythm.
    pub p: f64,
    /// Midline estimating statistic of rhythm.
    pub mesor: f64,
    /// Its standard error.
    pub mesor_se: f64,
    /// Its limits.
    pub mesor_limits: (f64, f64),
    /// By period, as in the design.
    pub components: Vec<Component>,
    /// Peak, trough and magnitude of the fitted curve, where the periods are harmonics of the longest.
    pub shape: Option<Shape>,
    /// How well the times tell the rhythm from the level.
    pub sampling: Sampling,
}

/// How well the times of the samples tell the rhythm from the level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sampling {
    /// Condition number of the design: 1.4 when evenly spread.
    pub condition: f64,
    /// Largest gap on the circle of the longest period, hours.
    pub largest_gap_h: f64,
}

impl Sampling {
    /// Above this condition number, or with a larger gap than 8 h, the design is weak (this program's choice).
    const WEAK_CONDITION: f64 = 3.0;
    const WEAK_GAP_H: f64 = 8.0;

    /// Should the reader be warned?
    pub fn is_weak(&self) -> bool {
        self.condition > Self::WEAK_CONDITION || self.largest_gap_h > Self::WEAK_GAP_H
    }
}

/// One period of a fit.
#[derive(Debug, Clone, PartialEq)]
pub struct Component {
    /// Period, hours.
    pub period_h: f64,
    /// Coefficient of the cosine.
    pub beta: f64,
    /// Coefficient of the sine.
    pub gamma: f64,
    /// Amplitude.
    pub amplitude: f64,
    /// Its standard error (delta method).
    pub amplitude_se: f64,
    /// Acrophase, radians in (-2 pi, 0].
    pub acrophase_rad: f64,
    /// Its standard error, radians.
    pub acrophase_se_rad: f64,
    /// Covariance of amplitude and acrophase.
    pub covariance: f64,
    /// Test of this amplitude beside the other periods.
    pub f: f64,
    /// Its probability when this amplitude is 0.
    pub p: f64,
    /// Percent rhythm of this period; the shares of all periods add up, one may be negative when sampling is uneven.
    pub percent: f64,
    /// Delta limits of the amplitude: only far from 0.
    pub amplitude_delta: (f64, f64),
    /// Delta limits of the acrophase, radians.
    pub acrophase_delta: (f64, f64),
    /// Fieller limits of the acrophase, radians; none when the rhythm may be absent.
    pub acrophase_fieller: Option<(f64, f64)>,
    /// Conservative limits of the amplitude, from the joint ellipse.
    pub amplitude_conservative: (f64, f64),
    /// Conservative limits of the acrophase, radians; none when the ellipse covers the pole.
    pub acrophase_conservative: Option<(f64, f64)>,
}

impl Component {
    /// Acrophase in degrees, in (-360, 0].
    pub fn acrophase_deg(&self) -> f64 {
        self.acrophase_rad.to_degrees()
    }

    /// Time of the peak after the reference time, hours in [0, period).
    pub fn peak_h(&self) -> f64 {
        let turns = -self.acrophase_rad / (2.0 * std::f64::consts::PI);
        crate::numeric::circular::wrap(turns * self.period_h, self.period_h)
    }

    /// Standard error of the time of the peak, hours.
    pub fn peak_se_h(&self) -> f64 {
        self.acrophase_se_rad * self.period_h / (2.0 * std::f64::consts::PI)
    }
}

/// Highest condition number that is fitted (this program's choice).
const HIGHEST_CONDITION: f64 = 10.0;

/// Fits the cosines of a design by least squares (QR), weighted.
///
/// # Errors
///
/// [`Refusal`] when the samples are too few, not finite, or badly spread.
///
/// # Example
///
/// ```
/// use acroshift::rhythm::{fit, Design, Observation};
/// let samples: Vec<Observation> = (0..8)
///     .map(|i| f64::from(i) * 3.0)
///     .map(|time_h| Observation {
///         time_h,
///         value: 200.0 + 150.0 * ((time_h - 8.0) * std::f64::consts::PI / 12.0).cos() + if time_h > 12.0 { 1.0 } else { -1.0 },
///         weight: 1.0,
///     })
///     .collect();
/// let cosinor = fit(&samples, &Design::of(&[24.0]))?;
/// assert!((cosinor.components[0].peak_h() - 8.0).abs() < 0.1);
/// assert!(cosinor.p < 1e-6);
/// # Ok::<(), acroshift::rhythm::Refusal>(())
/// ```
pub fn fit(samples: &[Observation], design: &Design) -> Result<Cosinor, Refusal> {
    check(samples)?;
    let parameters = 1 + 2 * design.periods_h.len();
    if samples.len() <= parameters {
        return Err(Refusal::TooFew {
            found: samples.len(),
            parameters,
            needed: parameters + 1,
        });
    }
    let largest = samples.iter().map(|s| s.value.abs()).fold(0.0, f64::max);
    if total(samples) <= 1e-20 * largest * largest * as_f64(samples.len()) {
        return Err(Refusal::Constant);
    }
    let plain = matrix(samples, &design.periods_h);
    let sampling = sampling(&plain, samples, &design.periods_h);
    if sampling.condition.is_nan() || sampling.condition > HIGHEST_CONDITION {
        return Err(Refusal::Design {
            condition: sampling.condition,
            limit: HIGHEST_CONDITION,
        });
    }
    Ok(solved(samples, design, &plain, sampling))
}

fn check(samples: &[Observation]) -> Result<(), Refusal> {
    for (sample, index) in samples.iter().zip(1..) {
        let numbers = [
            (sample.time_h, "the time"),
            (sample.value, "the value"),
            (sample.weight, "the weight"),
        ];
        if let Some((_, what)) = numbers.iter().find(|(number, _)| !number.is_finite()) {
            return Err(Refusal::NotFinite { index, what });
        }
    }
    Ok(())
}

/// One row per sample: 1, cosine and sine of each period.
fn matrix(samples: &[Observation], periods_h: &[f64]) -> DMatrix<f64> {
    let mut matrix = DMatrix::from_element(samples.len(), 1 + 2 * periods_h.len(), 1.0);
    for (row, sample) in samples.iter().enumerate() {
        for (component, period) in periods_h.iter().enumerate() {
            let turn = 2.0 * std::f64::consts::PI * sample.time_h / period;
            matrix[(row, 1 + 2 * component)] = libm::cos(turn);
            matrix[(row, 2 + 2 * component)] = libm::sin(turn);
        }
    }
    matrix
}

fn sampling(matrix: &DMatrix<f64>, samples: &[Observation], periods_h: &[f64]) -> Sampling {
    let singular = matrix.clone().qr().r().singular_values();
    let longest = periods_h.iter().copied().fold(0.0, f64::max);
    let mut phases: Vec<f64> = samples
        .iter()
        .map(|sample| crate::numeric::circular::wrap(sample.time_h, longest))
        .collect();
    phases.sort_by(f64::total_cmp);
    let around = phases.first().map_or(longest, |first| first + longest);
    let next = phases.iter().skip(1).copied().chain([around]);
    Sampling {
        condition: singular.max() / singular.min(),
        largest_gap_h: phases
            .iter()
            .zip(next)
            .map(|(from, to)| to - from)
            .fold(0.0, f64::max),
    }
}

fn solved(
    samples: &[Observation],
    design: &Design,
    plain: &DMatrix<f64>,
    sampling: Sampling,
) -> Cosinor {
    let root_weights: Vec<f64> = samples.iter().map(|s| s.weight.sqrt()).collect();
    let mut rows = plain.clone();
    for (row, root) in root_weights.iter().enumerate() {
        rows.row_mut(row).scale_mut(*root);
    }
    let values = DVector::from_iterator(
        samples.len(),
        samples
            .iter()
            .zip(&root_weights)
            .map(|(s, root)| s.value * root),
    );
    let qr = rows.clone().qr();
    let r = qr.r();
    let parameters = r.ncols();
    let inverse = r
        .solve_upper_triangular(&DMatrix::identity(parameters, parameters))
        .unwrap_or_else(|| DMatrix::from_element(parameters, parameters, f64::NAN));
    let coefficients = &inverse * (qr.q().transpose() * &values);
    let residual = &values - &rows * &coefficients;
    let rss = residual.norm_squared();
    let df = as_f64(samples.len() - parameters);
    let covariance = (&inverse * inverse.transpose()) * (rss / df);
    let tss = total(samples);
    let f = (tss - rss) / as_f64(parameters - 1) / (rss / df);
    let t = student_quantile(design.level, df);
    let mesor_se = covariance[(0, 0)].sqrt();
    let mesor = coefficients[0];
    let frame = Frame {
        coefficients: &coefficients,
        covariance: &covariance,
        samples,
        plain,
        tss,
        df,
        t,
        level: design.level,
    };
    Cosinor {
        n: samples.len(),
        df,
        rss,
        sigma: (rss / df).sqrt(),
        tss,
        r2: 1.0 - rss / tss,
        f,
        p: fisher_tail(f, as_f64(parameters - 1), df),
        mesor,
        mesor_se,
        mesor_limits: (mesor - t * mesor_se, mesor + t * mesor_se),
        components: (0..design.periods_h.len())
            .map(|index| frame.component(index, design.periods_h[index]))
            .collect(),
        shape: Shape::of(coefficients.as_slice(), &covariance, &design.periods_h),
        coefficients: coefficients.as_slice().to_vec(),
        covariance: covariance
            .row_iter()
            .map(|row| row.iter().copied().collect())
            .collect(),
        sampling,
    }
}

/// Weighted sum of squares around the weighted mean.
fn total(samples: &[Observation]) -> f64 {
    let weight: f64 = samples.iter().map(|s| s.weight).sum();
    let mean = samples.iter().map(|s| s.weight * s.value).sum::<f64>() / weight;
    samples
        .iter()
        .map(|s| s.weight * (s.value - mean) * (s.value - mean))
        .sum()
}

/// What every component is read from.
struct Frame<'a> {
    coefficients: &'a DVector<f64>,
    covariance: &'a DMatrix<f64>,
    samples: &'a [Observation],
    plain: &'a DMatrix<f64>,
    tss: f64,
    df: f64,
    t: f64,
    level: f64,
}

impl Frame<'_> {
    fn component(&self, index: usize, period_h: f64) -> Component {
        let at = 1 + 2 * index;
        let vector = Vector2::new(self.coefficients[at], self.coefficients[at + 1]);
        let v = self.covariance;
        let covariance = Matrix2::new(
            v[(at, at)],
            v[(at, at + 1)],
            v[(at + 1, at)],
            v[(at + 1, at + 1)],
        );
        let ellipse = Ellipse { vector, covariance };
        let delta = ellipse.delta();
        let f = ellipse.distance_of_pole() / 2.0;
        let joint = 2.0 * fisher_quantile_2(self.level, self.df);
        let amplitude = vector.norm();
        let acrophase = ellipse.acrophase_rad();
        let turned = |limits: Option<TurnLimits>| {
            limits.map(|limits| (acrophase + limits.from, acrophase + limits.to))
        };
        Component {
            period_h,
            beta: vector.x,
            gamma: vector.y,
            amplitude,
            amplitude_se: delta.amplitude_se,
            acrophase_rad: acrophase,
            acrophase_se_rad: delta.acrophase_se,
            covariance: delta.covariance,
            f,
            p: fisher_tail_2(f, self.df),
            percent: self.percent(at),
            amplitude_delta: around(amplitude, self.t * delta.amplitude_se),
            acrophase_delta: around(acrophase, self.t * delta.acrophase_se),
            acrophase_fieller: turned(ellipse.tangents(self.t * self.t)),
            amplitude_conservative: ellipse.distances(joint),
            acrophase_conservative: turned(ellipse.tangents(joint)),
        }
    }

    /// `100 [beta sum (y - mean) x + gamma sum (y - mean) z] / TSS`.
    fn percent(&self, at: usize) -> f64 {
        let weight: f64 = self.samples.iter().map(|s| s.weight).sum();
        let mean = self.samples.iter().map(|s| s.weight * s.value).sum::<f64>() / weight;
        let with = |column: usize| -> f64 {
            let column = self.plain.column(column);
            self.samples
                .iter()
                .zip(column.iter())
                .map(|(s, x)| s.weight * (s.value - mean) * x)
                .sum()
        };
        100.0 * (self.coefficients[at] * with(at) + self.coefficients[at + 1] * with(at + 1))
            / self.tss
    }
}

fn around(middle: f64, reach: f64) -> (f64, f64) {
    (middle - reach, middle + reach)
}

/// Lack of fit against replicates at the same times.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LackOfFit {
    /// Sum of squares within replicates.
    pub pure_error: f64,
    /// Sum of squares of the means around the curve.
    pub lack: f64,
    /// Test: large when the shape of the curve is inadequate.
    pub f: f64,
    /// Degrees of freedom.
    pub df: (f64, f64),
    /// Probability when the shape is adequate.
    pub p: f64,
}

/// Tests whether the curve has the shape of the means at replicated times; none without enough replicates.
pub fn lack_of_fit(samples: &[Observation], cosinor: &Cosinor) -> Option<LackOfFit> {
    let mut sorted: Vec<&Observation> = samples.iter().collect();
    sorted.sort_by(|a, b| a.time_h.total_cmp(&b.time_h));
    let mut pure_error = 0.0;
    let mut distinct = 0;
    for group in sorted.chunk_by(|a, b| (a.time_h - b.time_h).abs() < 1e-9) {
        let mean = group.iter().map(|s| s.value).sum::<f64>() / as_f64(group.len());
        pure_error += group.iter().map(|s| (s.value - mean).powi(2)).sum::<f64>();
        distinct += 1;
    }
    let df_lack = as_f64(distinct) - as_f64(cosinor.coefficients.len());
    let df_error = as_f64(samples.len()) - as_f64(distinct);
    if df_lack < 1.0 || df_error < 1.0 {
        return None;
    }
    let lack = cosinor.rss - pure_error;
    let f = lack / df_lack / (pure_error / df_error);
    Some(LackOfFit {
        pure_error,
        lack,
        f,
        df: (df_lack, df_error),
        p: fisher_tail(f, df_lack, df_error),
    })
}

/// Counts as numbers.
#[expect(
    clippy::cast_precision_loss,
    reason = "samples are counted in millions at most"
)]
pub(super) fn as_f64(count: usize) -> f64 {
    count as f64
}

/// Probability that an F of (a, b) degrees of freedom is at least `f`.
pub fn fisher_tail(f: f64, a: f64, b: f64) -> f64 {
    if f.is_nan() {
        return f64::NAN;
    }
    if f <= 0.0 {
        return 1.0;
    }
    if f.is_infinite() {
        return 0.0;
    }
    if (a - 2.0).abs() < 1e-12 {
        return fisher_tail_2(f, b);
    }
    FisherSnedecor::new(a, b).map_or(f64::NAN, |distribution| distribution.sf(f))
}

/// The same for (2, b) degrees of freedom: `(1 + 2 F / b)^(-b/2)`.
pub(super) fn fisher_tail_2(f: f64, b: f64) -> f64 {
    libm::pow(1.0 + 2.0 * f / b, -b / 2.0)
}

/// The F of (2, b) degrees of freedom that is not exceeded with probability `level`: `(b/2)(alpha^(-2/b) - 1)`.
pub(super) fn fisher_quantile_2(level: f64, b: f64) -> f64 {
    b / 2.0 * (libm::pow(1.0 - level, -2.0 / b) - 1.0)
}

/// The t of `df` degrees of freedom between whose signs a share of `level` lies.
pub fn student_quantile(level: f64, df: f64) -> f64 {
    // t^2 is an F of (1, df); Newton's rule on its tail from the normal quantile's neighbourhood.
    let tail = |t: f64| statrs::function::beta::beta_reg(df / 2.0, 0.5, df / (df + t * t));
    let constant = libm::exp(
        statrs::function::gamma::ln_gamma(df.midpoint(1.0))
            - statrs::function::gamma::ln_gamma(df / 2.0),
    ) / (df * std::f64::consts::PI).sqrt();
    let density = |t: f64| constant * libm::pow(1.0 + t * t / df, -df.midpoint(1.0));
    let (mut low, mut high) = (0.0, 1.0);
    while tail(high) > 1.0 - level {
        high *= 2.0;
    }
    let mut t = high / 2.0;
    for _ in 0..200 {
        let off = tail(t) - (1.0 - level);
        if off > 0.0 {
            low = t;
        } else {
            high = t;
        }
        let newton = t + off / (2.0 * density(t));
        let next = if (low..=high).contains(&newton) {
            newton
        } else {
            f64::midpoint(low, high)
        };
        if (next - t).abs() <= 1e-15 * t {
            return next;
        }
        t = next;
    }
    t
}
