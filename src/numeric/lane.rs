//! Elementary functions for loops over lanes: branch-free, one formula for every instruction set.
//!
//! The functions of the system library differ in the last bit between machines and do not vectorise.
//! These use additions, multiplications, one division and bit operations only, so a loop over lanes gives the same bits everywhere.
//! They are always inlined: a function that is called is compiled for the baseline, whatever the caller is compiled for.
#![expect(
    clippy::inline_always,
    reason = "the instruction set of the calling loop must reach these functions"
)]

/// `e^y`, relative error below 1e-11 for |y| up to 700.
///
/// # Equation
///
/// ```text
/// y = k ln 2 + r, |r| <= ln 2 / 2;  e^y = 2^k * sum of r^i / i!, i = 0..9
/// ```
///
/// # Range
///
/// Values beyond +-700 are cut to it, where the result is about 1e304 or 1e-304.
///
/// # Source
///
/// Taylor series after range reduction in two parts (Cody and Waite 1980, from memory). Deviations: none.
///
/// # Example
///
/// ```
/// use acroshift::numeric::lane::exp;
/// assert!((exp(1.0) / std::f64::consts::E - 1.0).abs() < 1e-11);
/// ```
#[inline(always)]
pub fn exp(y: f64) -> f64 {
    const LN2_HIGH: f64 = 6.931_471_803_691_238e-1;
    const LN2_LOW: f64 = 1.908_214_929_270_587_7e-10;
    let y = y.clamp(-700.0, 700.0);
    let shifted = y * std::f64::consts::LOG2_E + ROUNDER;
    let k = shifted - ROUNDER;
    let r = (y - k * LN2_HIGH) - k * LN2_LOW;
    let mut sum = 1.0 / 362_880.0;
    for inverse in INVERSE_FACTORIALS {
        sum = sum * r + inverse;
    }
    // The low bits of `shifted` hold k; they become the exponent of 2^k.
    let exponent = shifted.to_bits().wrapping_add(1023) << 52;
    sum * f64::from_bits(exponent)
}

/// Adding and taking away 1.5 * 2^52 rounds to a whole number without a branch.
pub(super) const ROUNDER: f64 = 6755399441055744.0;

/// 1/8! down to 1/0!.
const INVERSE_FACTORIALS: [f64; 9] = [
    1.0 / 40_320.0,
    1.0 / 5_040.0,
    1.0 / 720.0,
    1.0 / 120.0,
    1.0 / 24.0,
    1.0 / 6.0,
    1.0 / 2.0,
    1.0,
    1.0,
];

/// `1 - tanh z`, absolute error below 1e-11.
///
/// # Equation
///
/// ```text
/// 1 - tanh z = 2 / (e^(2z) + 1)
/// ```
///
/// # Example
///
/// ```
/// use acroshift::numeric::lane::one_minus_tanh;
/// assert!((one_minus_tanh(0.3) - (1.0 - 0.3_f64.tanh())).abs() < 1e-11);
/// ```
#[inline(always)]
pub fn one_minus_tanh(z: f64) -> f64 {
    2.0 / (exp(2.0 * z) + 1.0)
}

/// Are all three true? Without a branch, unlike `&&`.
///
/// # Example
///
/// ```
/// use acroshift::numeric::lane::all;
/// assert!(all([true, true, true]) && !all([true, false, true]));
/// ```
#[inline(always)]
pub fn all(conditions: [bool; 3]) -> bool {
    let [a, b, c] = conditions.map(u8::from);
    a & b & c == 1
}

/// Whole turns taken away: the angle in [-pi, pi].
///
/// # Example
///
/// ```
/// use acroshift::numeric::lane::within_a_turn;
/// assert!((within_a_turn(7.0) - (7.0 - std::f64::consts::TAU)).abs() < 1e-12);
/// ```
#[inline(always)]
pub fn within_a_turn(angle: f64) -> f64 {
    const TURN_HIGH: f64 = 6.283_185_243_606_567;
    const TURN_LOW: f64 = 6.357_301_909_411_278e-8;
    let k = (angle * (1.0 / std::f64::consts::TAU) + ROUNDER) - ROUNDER;
    (angle - k * TURN_HIGH) - k * TURN_LOW
}

/// Sine and cosine, absolute error below 1e-11 for |angle| up to 1e5.
///
/// # Equation
///
/// ```text
/// angle = 2 pi k + r, |r| <= pi;  sin r and cos r by their Taylor series to the 25th and 24th power
/// ```
///
/// # Source
///
/// Taylor series after range reduction in two parts (Cody and Waite 1980, from memory). Deviations: none.
///
/// # Example
///
/// ```
/// use acroshift::numeric::lane::sin_cos;
/// let (sine, cosine) = sin_cos(1.0);
/// assert!((sine - 1.0_f64.sin()).abs() < 1e-11 && (cosine - 1.0_f64.cos()).abs() < 1e-11);
/// ```
#[inline(always)]
pub fn sin_cos(angle: f64) -> (f64, f64) {
    let r = within_a_turn(angle);
    let square = r * r;
    let (mut sine, mut cosine) = (1.0, 1.0);
    // Horner from the highest power down: sin r = r (1 - r^2/(2 3) (1 - r^2/(4 5) (...))).
    for (for_sine, for_cosine) in INVERSE_ORDERS {
        sine = 1.0 - square * for_sine * sine;
        cosine = 1.0 - square * for_cosine * cosine;
    }
    (r * sine, cosine)
}

/// `1 / (m (m + 1))` and `1 / (m (m - 1))` for m = 24 down to 2.
const INVERSE_ORDERS: [(f64, f64); 12] = [
    (1.0 / 600.0, 1.0 / 552.0),
    (1.0 / 506.0, 1.0 / 462.0),
    (1.0 / 420.0, 1.0 / 380.0),
    (1.0 / 342.0, 1.0 / 306.0),
    (1.0 / 272.0, 1.0 / 240.0),
    (1.0 / 210.0, 1.0 / 182.0),
    (1.0 / 156.0, 1.0 / 132.0),
    (1.0 / 110.0, 1.0 / 90.0),
    (1.0 / 72.0, 1.0 / 56.0),
    (1.0 / 42.0, 1.0 / 30.0),
    (1.0 / 20.0, 1.0 / 12.0),
    (1.0 / 6.0, 1.0 / 2.0),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn exp_agrees_with_the_libm_crate_over_its_range() {
        for i in -6990..=6990 {
            let y = f64::from(i) / 10.0;
            let relative = exp(y) / libm::exp(y) - 1.0;
            assert!(relative.abs() < 1e-11, "exp({y}) is off by {relative:e}");
        }
    }

    #[test]
    fn one_minus_tanh_agrees_with_the_libm_crate() {
        for i in -3000..=3000 {
            let z = f64::from(i) / 100.0;
            let difference = one_minus_tanh(z) - (1.0 - libm::tanh(z));
            assert!(
                difference.abs() < 1e-11,
                "1 - tanh({z}) is off by {difference:e}"
            );
        }
    }

    #[test]
    fn sine_and_cosine_agree_with_the_libm_crate() {
        for i in -20_000..=20_000 {
            let angle = f64::from(i) / 37.0;
            let (sine, cosine) = sin_cos(angle);
            let off = (sine - libm::sin(angle))
                .abs()
                .max((cosine - libm::cos(angle)).abs());
            assert!(off < 1e-11, "sin_cos({angle}) is off by {off:e}");
        }
    }
}
