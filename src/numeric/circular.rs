//! Numbers on a circle: how far apart are two hours of the clock?

/// `value` moved by whole periods into (-period/2, period/2].
///
/// # Example
///
/// ```
/// use acroshift::numeric::circular::wrap_half;
/// assert!((wrap_half(23.0, 24.0) - -1.0).abs() < 1e-12);
/// assert!((wrap_half(12.0, 24.0) - 12.0).abs() < 1e-12);
/// ```
pub fn wrap_half(value: f64, period: f64) -> f64 {
    let wrapped = value - period * (value / period).floor();
    if wrapped > period / 2.0 {
        wrapped - period
    } else {
        wrapped
    }
}

/// `value` moved by whole periods into [0, period).
///
/// # Example
///
/// ```
/// use acroshift::numeric::circular::wrap;
/// assert!((wrap(-1.0, 24.0) - 23.0).abs() < 1e-12);
/// ```
pub fn wrap(value: f64, period: f64) -> f64 {
    value - period * (value / period).floor()
}

/// The values moved by whole periods so that each lies within half a period of `anchor`.
///
/// Quantiles of hours around midnight are taken of the result, not of the clock hours themselves.
pub fn unwrap_near(values: &[f64], anchor: f64, period: f64) -> Vec<f64> {
    values
        .iter()
        .map(|value| anchor + wrap_half(value - anchor, period))
        .collect()
}

/// Direction of the mean vector of the values, in [0, period).
///
/// # Source
///
/// Mardia and Jupp (2000), Directional Statistics, section 2.2 (from memory).
pub fn mean(values: &[f64], period: f64) -> f64 {
    let turn = 2.0 * std::f64::consts::PI / period;
    let (mut sine, mut cosine) = (0.0, 0.0);
    for value in values {
        sine += libm::sin(value * turn);
        cosine += libm::cos(value * turn);
    }
    wrap(libm::atan2(sine, cosine) / turn, period)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_mean_of_hours_around_midnight_is_not_noon() {
        assert!(wrap_half(mean(&[23.0, 1.0], 24.0), 24.0).abs() < 1e-9);
    }

    #[test]
    fn unwrapped_values_lie_within_half_a_period_of_the_anchor() {
        assert_eq!(unwrap_near(&[23.0, 1.0], 0.0, 24.0), vec![-1.0, 1.0]);
    }
}
