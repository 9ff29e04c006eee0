//! The one place where a number loses digits before it is written.

/// `value` rounded half away from zero to `decimals`, never negative zero.
///
/// # Example
///
/// ```
/// use acroshift::numeric::rounding::round_to;
/// assert_eq!(round_to(7.96, 1).to_string(), "8");
/// assert!(round_to(-0.001, 2).is_sign_positive());
/// ```
pub fn round_to(value: f64, decimals: u32) -> f64 {
    let scale = libm::pow(10.0, f64::from(decimals));
    let rounded = (value * scale).round() / scale;
    if rounded.abs() < f64::MIN_POSITIVE {
        0.0
    } else {
        rounded
    }
}
