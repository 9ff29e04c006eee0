//! How regular are rest and activity, sleep, and its times?

use super::cosinor::as_f64;
use crate::numeric::circular::wrap_half;

/// Interdaily stability and intradaily variability of evenly spaced values over whole days.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stability {
    /// Interdaily stability: 0 for noise, 1 for days that are all alike.
    pub interdaily: f64,
    /// Intradaily variability: about 0 for a sine, about 2 for noise.
    pub intradaily: f64,
}

/// IS and IV; none without at least two whole days of `per_day` values.
///
/// # Equation
///
/// ```text
/// IS = n sum (hourly mean - mean)^2 / [p sum (x - mean)^2];  IV = n sum (x_i - x_(i-1))^2 / [(n - 1) sum (x - mean)^2]
/// ```
///
/// # Source
///
/// Witting 1990; van Someren 1999 (variances over n, as defined there).
pub fn stability(values: &[f64], per_day: usize) -> Option<Stability> {
    let whole = per_day > 0 && values.len().is_multiple_of(per_day) && values.len() >= 2 * per_day;
    if !whole {
        return None;
    }
    let n = as_f64(values.len());
    let mean = values.iter().sum::<f64>() / n;
    let around: f64 = values.iter().map(|x| (x - mean).powi(2)).sum();
    let profile = profile(values, per_day);
    let between: f64 = profile.iter().map(|h| (h - mean).powi(2)).sum();
    let steps: f64 = values
        .windows(2)
        .map(|pair| (pair[1] - pair[0]).powi(2))
        .sum();
    Some(Stability {
        interdaily: n * between / (as_f64(per_day) * around),
        intradaily: n * steps / ((n - 1.0) * around),
    })
}

/// Mean of each place in the day.
pub fn profile(values: &[f64], per_day: usize) -> Vec<f64> {
    let days = as_f64(values.len() / per_day);
    (0..per_day)
        .map(|place| values.iter().skip(place).step_by(per_day).sum::<f64>() / days)
        .collect()
}

/// The least and most active stretches of the mean day.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LeastAndMost {
    /// Mean of the lowest 5 h.
    pub l5: f64,
    /// Place at which they begin, hours.
    pub l5_onset_h: f64,
    /// Mean of the highest 10 h.
    pub m10: f64,
    /// Place at which they begin, hours.
    pub m10_onset_h: f64,
    /// `(M10 - L5) / (M10 + L5)`.
    pub relative_amplitude: f64,
}

/// L5, M10 and RA of a mean day of hourly values.
pub fn least_and_most(hourly: &[f64; 24]) -> LeastAndMost {
    let mean_from = |from: usize, hours: usize| {
        (0..hours).map(|h| hourly[(from + h) % 24]).sum::<f64>() / as_f64(hours)
    };
    let best = |hours: usize, sign: f64| {
        (0..24)
            .map(|from| (sign * mean_from(from, hours), from))
            .max_by(|a, b| a.0.total_cmp(&b.0).then(b.1.cmp(&a.1)))
            .map_or((0.0, 0.0), |(value, from)| (sign * value, as_f64(from)))
    };
    let (l5, l5_onset_h) = best(5, -1.0);
    let (m10, m10_onset_h) = best(10, 1.0);
    LeastAndMost {
        l5,
        l5_onset_h,
        m10,
        m10_onset_h,
        relative_amplitude: (m10 - l5) / (m10 + l5),
    }
}

/// Sleep regularity index: 100 when every epoch has the state of the day before, 0 for chance, -100 reversed.
///
/// `None` epochs are missing; pairs with one are left out.
///
/// # Source
///
/// Phillips 2017, with the sum over pairs of neighbouring days.
pub fn sleep_regularity(asleep: &[Option<bool>], per_day: usize) -> Option<f64> {
    let pairs: Vec<bool> = asleep
        .iter()
        .zip(asleep.iter().skip(per_day))
        .filter_map(|(today, tomorrow)| {
            Some(*today == *tomorrow && today.is_some())
                .filter(|_| today.is_some() && tomorrow.is_some())
        })
        .collect();
    if pairs.is_empty() {
        return None;
    }
    let same = pairs.iter().filter(|same| **same).count();
    Some(100.0 * (2.0 * as_f64(same) / as_f64(pairs.len()) - 1.0))
}

/// Social jetlag: mid-sleep on free days minus on workdays, hours by the shorter way round the clock.
///
/// # Source
///
/// Wittmann 2006 (from memory), with the rule of the shorter interval as in published code.
pub fn social_jetlag(mid_sleep_work_h: f64, mid_sleep_free_h: f64) -> f64 {
    wrap_half(mid_sleep_free_h - mid_sleep_work_h, 24.0)
}

/// Composite phase deviation, hours: how far mid-sleeps lie from a reference and from the day before, the first day left out.
///
/// # Equation
///
/// ```text
/// d_i = sqrt((mid_i - reference)^2 + (mid_i - mid_(i-1))^2);  CPD = mean of d_i over the days from the second
/// ```
///
/// # Source
///
/// Fischer, Vetter and Roenneberg 2016 (abstract and start of the text); both differences on the circle, this program's choice.
pub fn composite_phase_deviation(mid_sleeps_h: &[f64], reference_h: f64) -> Option<f64> {
    let days: Vec<f64> = mid_sleeps_h
        .windows(2)
        .map(|pair| {
            let from_reference = wrap_half(pair[1] - reference_h, 24.0);
            from_reference.hypot(wrap_half(pair[1] - pair[0], 24.0))
        })
        .collect();
    (!days.is_empty()).then(|| days.iter().sum::<f64>() / as_f64(days.len()))
}
