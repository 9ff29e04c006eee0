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

impl Quantiles {
    /// The same, all moved by `by`.
    #[must_use]
    pub fn moved(self, by: f64) -> Self {
        Self {
            median: self.median + by,
            p05: self.p05 + by,
            p95: self.p95 + by,
        }
    }
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

/// Quantiles of values on a circle: taken around their mean direction, the median moved into [low, low + period) and the band with it.
///
/// # Example
///
/// ```
/// use acroshift::numeric::quantile::circular_quantiles;
/// // Clock hours around midnight: the median is not noon.
/// let q = circular_quantiles(&[23.0, 0.5, 1.0], 24.0, 0.0).expect("three values have quantiles");
/// assert!((q.median - 0.5).abs() < 1e-9);
/// assert!((q.p05 - -0.85).abs() < 1e-9);
/// ```
pub fn circular_quantiles(values: &[f64], period: f64, low: f64) -> Option<Quantiles> {
    let anchor = super::circular::mean(values, period);
    let q = quantiles(&super::circular::unwrap_near(values, anchor, period))?;
    Some(q.moved(-period * ((q.median - low) / period).floor()))
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
