//! The rhythm of a group of subjects, and the difference between groups.
//!
//! Source: Bingham et al. 1982, Chronobiologia 9:397 (from memory), as printed in manuals that quote it and in Cornelissen's program of 1980 (seen).
//! The tests of acrophase and amplitude between groups are those of the derivation, with the weights of the groups
//! and the product of amplitude and sine: two public packages have them wrong.

use super::cosinor::{as_f64, fisher_quantile_2, fisher_tail, fisher_tail_2, student_quantile};
use super::ellipse::Ellipse;
use nalgebra::{Matrix2, Vector2};

/// What one subject gives to a population.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Vector {
    /// MESOR.
    pub mesor: f64,
    /// Coefficient of the cosine.
    pub beta: f64,
    /// Coefficient of the sine.
    pub gamma: f64,
}

impl Vector {
    /// From amplitude and acrophase (radians, negative).
    pub fn of_amplitude(mesor: f64, amplitude: f64, acrophase_rad: f64) -> Self {
        Self {
            mesor,
            beta: amplitude * libm::cos(acrophase_rad),
            gamma: -amplitude * libm::sin(acrophase_rad),
        }
    }
}

/// The population-mean cosinor of a group.
#[derive(Debug, Clone, PartialEq)]
pub struct Population {
    /// Subjects.
    pub k: usize,
    /// MESOR.
    pub mesor: f64,
    /// Its limits.
    pub mesor_limits: (f64, f64),
    /// Coefficient of the cosine.
    pub beta: f64,
    /// Coefficient of the sine.
    pub gamma: f64,
    /// Length of the mean vector: at most the mean of the amplitudes.
    pub amplitude: f64,
    /// Its limits.
    pub amplitude_limits: (f64, f64),
    /// Mean of the subjects' amplitudes: above the population's where phases scatter.
    pub mean_amplitude: f64,
    /// Acrophase, radians in (-2 pi, 0].
    pub acrophase_rad: f64,
    /// Its limits, radians; none when the group may have no common rhythm.
    pub acrophase_limits: Option<(f64, f64)>,
    /// Limits of the amplitude from the joint ellipse.
    pub amplitude_conservative: (f64, f64),
    /// Limits of the acrophase from the joint ellipse, radians.
    pub acrophase_conservative: Option<(f64, f64)>,
    /// Zero-amplitude test.
    pub f: f64,
    /// Degrees of freedom: 2 and this.
    pub df: f64,
    /// Probability without a common rhythm.
    pub p: f64,
    spread: Spread,
}

/// Sample variances and covariances over the subjects.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Spread {
    mesor: f64,
    beta: f64,
    gamma: f64,
    between: f64,
}

impl Spread {
    fn of(vectors: &[Vector]) -> Self {
        let k = as_f64(vectors.len());
        let mean = |value: fn(&Vector) -> f64| vectors.iter().map(value).sum::<f64>() / k;
        let (m, b, g) = (mean(|v| v.mesor), mean(|v| v.beta), mean(|v| v.gamma));
        let sum =
            |product: &dyn Fn(&Vector) -> f64| vectors.iter().map(product).sum::<f64>() / (k - 1.0);
        Self {
            mesor: sum(&|v| (v.mesor - m) * (v.mesor - m)),
            beta: sum(&|v| (v.beta - b) * (v.beta - b)),
            gamma: sum(&|v| (v.gamma - g) * (v.gamma - g)),
            between: sum(&|v| (v.beta - b) * (v.gamma - g)),
        }
    }
}

/// Fewest subjects of a population.
pub const FEWEST_SUBJECTS: usize = 3;
/// Below this number of subjects a population is a description (this program's choice).
pub const DESCRIPTIVE_BELOW: usize = 5;

/// The population-mean cosinor; none with fewer than [`FEWEST_SUBJECTS`].
///
/// # Example
///
/// ```
/// use acroshift::rhythm::populations::{population, Vector};
/// let group: Vec<Vector> = [(6.1, 4.2, -121.0), (5.4, 3.55, -128.5), (7.25, 4.9, -117.0), (6.0, 4.0, -120.0)]
///     .iter()
///     .map(|(m, a, degrees)| Vector::of_amplitude(*m, *a, f64::to_radians(*degrees)))
///     .collect();
/// let population = population(&group, 0.95).expect("four subjects");
/// assert!(population.amplitude <= population.mean_amplitude);
/// ```
pub fn population(vectors: &[Vector], level: f64) -> Option<Population> {
    if vectors.len() < FEWEST_SUBJECTS {
        return None;
    }
    let k = as_f64(vectors.len());
    let mean = |value: fn(&Vector) -> f64| vectors.iter().map(value).sum::<f64>() / k;
    let spread = Spread::of(vectors);
    let ellipse = Ellipse {
        vector: Vector2::new(mean(|v| v.beta), mean(|v| v.gamma)),
        covariance: Matrix2::new(spread.beta, spread.between, spread.between, spread.gamma) / k,
    };
    let t = student_quantile(level, k - 1.0);
    let mesor = mean(|v| v.mesor);
    let mesor_reach = t * (spread.mesor / k).sqrt();
    let amplitude = ellipse.vector.norm();
    let amplitude_reach = t * ellipse.delta().amplitude_se;
    let acrophase = ellipse.acrophase_rad();
    let f = (k - 2.0) / (2.0 * (k - 1.0)) * ellipse.distance_of_pole();
    let joint = 2.0 * (k - 1.0) / (k - 2.0) * fisher_quantile_2(level, k - 2.0);
    let turned = |squared: f64| {
        let limits = ellipse.tangents(squared)?;
        Some((acrophase + limits.from, acrophase + limits.to))
    };
    Some(Population {
        k: vectors.len(),
        mesor,
        mesor_limits: (mesor - mesor_reach, mesor + mesor_reach),
        beta: ellipse.vector.x,
        gamma: ellipse.vector.y,
        amplitude,
        amplitude_limits: (amplitude - amplitude_reach, amplitude + amplitude_reach),
        mean_amplitude: mean(|v| v.beta.hypot(v.gamma)),
        acrophase_rad: acrophase,
        acrophase_limits: turned(t * t),
        amplitude_conservative: ellipse.distances(joint),
        acrophase_conservative: turned(joint),
        f,
        df: k - 2.0,
        p: fisher_tail_2(f, k - 2.0),
        spread,
    })
}

/// A test with its degrees of freedom.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Test {
    /// F.
    pub f: f64,
    /// Degrees of freedom.
    pub df: (f64, f64),
    /// Probability when the groups do not differ.
    pub p: f64,
}

impl Test {
    fn new(f: f64, a: f64, b: f64) -> Self {
        Self {
            f,
            df: (a, b),
            p: fisher_tail(f, a, b),
        }
    }
}

/// Groups side by side.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Comparison {
    /// Are the MESORs alike?
    pub mesor: Test,
    /// Are the acrophases alike?
    pub acrophase: Test,
    /// Are the amplitudes alike? Not to be read when the acrophases differ.
    pub amplitude: Test,
    /// Are amplitude and acrophase alike at once? Two groups only.
    pub joint: Option<Test>,
}

/// Compares groups of subjects; none with fewer than two groups.
pub fn compare(groups: &[Population]) -> Option<Comparison> {
    if groups.len() < 2 {
        return None;
    }
    let m = as_f64(groups.len());
    let weights: Vec<f64> = groups.iter().map(|group| as_f64(group.k)).collect();
    let all: f64 = weights.iter().sum();
    let pooled = |of: fn(&Spread) -> f64| {
        groups
            .iter()
            .zip(&weights)
            .map(|(group, k)| (k - 1.0) * of(&group.spread))
            .sum::<f64>()
            / (all - m)
    };
    let spread = Spread {
        mesor: pooled(|s| s.mesor),
        beta: pooled(|s| s.beta),
        gamma: pooled(|s| s.gamma),
        between: pooled(|s| s.between),
    };
    let weighted = |of: &dyn Fn(&Population) -> f64| {
        groups
            .iter()
            .zip(&weights)
            .map(|(group, k)| k * of(group))
            .sum::<f64>()
    };
    let mean_mesor = weighted(&|g| g.mesor) / all;
    let mesor = weighted(&|g| (g.mesor - mean_mesor).powi(2)) / (m - 1.0) / spread.mesor;
    let test = |f: f64| Test::new(f, m - 1.0, all - m);
    Some(Comparison {
        mesor: test(mesor),
        acrophase: test(acrophase_f(&weighted, &spread, m)),
        amplitude: test(amplitude_f(&weighted, &spread, m, all)),
        joint: joint(groups, &spread, all),
    })
}

type Weighted<'a> = dyn Fn(&dyn Fn(&Population) -> f64) -> f64 + 'a;

/// `[sum k A^2 sin^2(phi - phi~) / (m - 1)] / [s_b sin^2 + 2 s_bg cos sin + s_g cos^2]`, `tan 2 phi~ = sum k A^2 sin 2 phi / sum k A^2 cos 2 phi`.
fn acrophase_f(weighted: &Weighted<'_>, spread: &Spread, m: f64) -> f64 {
    let squared = |g: &Population| g.amplitude * g.amplitude;
    let sines = weighted(&|g| squared(g) * libm::sin(2.0 * g.acrophase_rad));
    let cosines = weighted(&|g| squared(g) * libm::cos(2.0 * g.acrophase_rad));
    let common = libm::atan2(sines, cosines) / 2.0;
    let (sine, cosine) = (libm::sin(common), libm::cos(common));
    let apart = weighted(&|g| squared(g) * libm::sin(g.acrophase_rad - common).powi(2));
    apart
        / (m - 1.0)
        / (spread.beta * sine * sine
            + 2.0 * spread.between * cosine * sine
            + spread.gamma * cosine * cosine)
}

/// `[sum k (A - mean A)^2 / (m - 1)] / [s_b cos^2 - 2 s_bg cos sin + s_g sin^2]` at the weighted mean acrophase.
fn amplitude_f(weighted: &Weighted<'_>, spread: &Spread, m: f64, all: f64) -> f64 {
    let mean = weighted(&|g| g.amplitude) / all;
    let anchor = libm::atan2(
        weighted(&|g| libm::sin(g.acrophase_rad)),
        weighted(&|g| libm::cos(g.acrophase_rad)),
    );
    let turn = 2.0 * std::f64::consts::PI;
    let unwrapped =
        |g: &Population| crate::numeric::circular::wrap_half(g.acrophase_rad - anchor, turn);
    let common = anchor + weighted(&unwrapped) / all;
    let (sine, cosine) = (libm::sin(common), libm::cos(common));
    weighted(&|g| (g.amplitude - mean).powi(2))
        / (m - 1.0)
        / (spread.beta * cosine * cosine - 2.0 * spread.between * cosine * sine
            + spread.gamma * sine * sine)
}

/// Two-sample Hotelling test of the vectors.
fn joint(groups: &[Population], spread: &Spread, all: f64) -> Option<Test> {
    let [a, b] = groups else { return None };
    let apart = Vector2::new(a.beta - b.beta, a.gamma - b.gamma);
    let covariance = Matrix2::new(spread.beta, spread.between, spread.between, spread.gamma);
    let squared = apart.dot(&(covariance.try_inverse()? * apart));
    let t2 = as_f64(a.k) * as_f64(b.k) / all * squared;
    let f = (all - 3.0) / (2.0 * (all - 2.0)) * t2;
    Some(Test::new(f, 2.0, all - 3.0))
}
