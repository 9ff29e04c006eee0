//! Directions on the clock: mean, scatter, and whether there is a common one.

use super::cosinor::as_f64;
use statrs::distribution::{ContinuousCDF, Normal};

/// Clock hours (or any angles of a period) as directions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Directions {
    /// How many.
    pub n: usize,
    /// Mean direction, in the unit of the period, in [0, period).
    pub mean: f64,
    /// Length of the mean vector, 0 to 1.
    pub length: f64,
    /// Circular standard deviation `sqrt(-2 ln R)`, in the unit of the period.
    pub sd: f64,
    /// Angular deviation `sqrt(2 (1 - R))`, in the unit of the period.
    pub deviation: f64,
    /// Rayleigh's z.
    pub z: f64,
    /// Its probability without a common direction.
    pub p: f64,
    /// Standard error of the mean direction, in the unit of the period.
    pub mean_se: f64,
}

/// Directions of values on a circle of the given period; none without values.
///
/// # Source
///
/// Mean and scatter: Mardia and Jupp 2000; Rayleigh's probability after Zar, in a form without cancellation; standard error of the mean: Fisher 1993 (from memory).
///
/// # Example
///
/// ```
/// use acroshift::rhythm::circular::directions;
/// // Zar, example 26.4: mean 99 degrees, R 0.82522, z 5.448.
/// let found = directions(&[45.0, 55.0, 81.0, 96.0, 110.0, 117.0, 132.0, 154.0], 360.0).expect("eight values");
/// assert!((found.mean - 98.98775).abs() < 1e-5 && (found.length - 0.82522).abs() < 1e-5);
/// ```
pub fn directions(values: &[f64], period: f64) -> Option<Directions> {
    if values.is_empty() {
        return None;
    }
    let n = as_f64(values.len());
    let turn = 2.0 * std::f64::consts::PI / period;
    let cosine = values.iter().map(|v| libm::cos(v * turn)).sum::<f64>() / n;
    let sine = values.iter().map(|v| libm::sin(v * turn)).sum::<f64>() / n;
    let length = cosine.hypot(sine);
    let mean = crate::numeric::circular::wrap(libm::atan2(sine, cosine) / turn, period);
    let doubled = values
        .iter()
        .map(|v| libm::cos(2.0 * (v - mean) * turn))
        .sum::<f64>()
        / n;
    let dispersion = (1.0 - doubled) / (2.0 * length * length);
    let resultant = n * length;
    let v = 1.0 + 2.0 * n;
    let p = libm::exp(
        -4.0 * resultant * resultant
            / ((1.0 + 4.0 * n + 4.0 * (n * n - resultant * resultant)).sqrt() + v),
    );
    Some(Directions {
        n: values.len(),
        mean,
        length,
        sd: (-2.0 * libm::log(length)).sqrt() / turn,
        deviation: (2.0 * (1.0 - length)).sqrt() / turn,
        z: n * length * length,
        p,
        mean_se: (dispersion / n).sqrt() / turn,
    })
}

/// V test for a direction known beforehand: u and its one-sided probability.
pub fn v_test(values: &[f64], expected: f64, period: f64) -> Option<(f64, f64)> {
    let found = directions(values, period)?;
    let turn = 2.0 * std::f64::consts::PI / period;
    let n = as_f64(found.n);
    let v = n * found.length * libm::cos((found.mean - expected) * turn);
    let u = v * (2.0 / n).sqrt();
    Some((u, Normal::standard().sf(u)))
}
