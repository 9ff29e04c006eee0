//! Median and 5-95 % range of a small sample.

/// Median and 5-95 % range.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quantiles {
    /// Median.
    pub median: f64,
    /// 5th percentile.
    pub p05: f64,
    /// 95th percentile.
    pub p95: f64,
}

/// Median, 5th and 95th percentile; `None` for an empty sample.
///
/// # Source
///
/// Linear interpolation of order statistics, type 7 of Hyndman and Fan (1996), Am Stat 50:361 (from memory).
///
/// # Example
///
/// ```
/// use acroshift::numeric::quantile::quantiles;
/// let q = quantiles(&[3.0, 1.0, 2.0]).expect("three values have quantiles");
/// assert!((q.median - 2.0).abs() < 1e-12);
/// assert!((q.p05 - 1.1).abs() < 1e-12);
/// ```
pub fn quantiles(values: &[f64]) -> Option<Quantiles> {
    if values.is_empty() {
        return None;
    }
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    Some(Quantiles {
        median: of_sorted(&sorted, 0.5),
        p05: of_sorted(&sorted, 0.05),
        p95: of_sorted(&sorted, 0.95),
    })
}

#[expect(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the rank lies between 0 and the length of a small sample"
)]
fn of_sorted(sorted: &[f64], share: f64) -> f64 {
    let rank = share * (sorted.len() - 1) as f64;
    let below = rank.floor() as usize;
    let above = (below + 1).min(sorted.len() - 1);
    sorted[below] + (rank - rank.floor()) * (sorted[above] - sorted[below])
}

/// Share of the values for which `holds` is true.
pub fn share(values: &[f64], holds: impl Fn(f64) -> bool) -> f64 {
    if values.is_empty() {
        return 0.0;
    }
    let count = values.iter().filter(|value| holds(**value)).count();
    ratio(count, values.len())
}

/// `part / whole` for counts.
#[expect(
    clippy::cast_precision_loss,
    reason = "counts of members are far below 2^53"
)]
pub fn ratio(part: usize, whole: usize) -> f64 {
    if whole == 0 {
        0.0
    } else {
        part as f64 / whole as f64
    }
}
