//! Quantities that cross a module boundary: what is measured, in which unit, within which range?
//!
//! A newtype is used wherever a bare number could be taken for another one.
//! Points and differences are different types: `Phase - Phase` is a [`PhaseShift`], `Phase + Phase` does not exist.
//! Inside an equation plain `f64` with a unit suffix is used (`light_lux`, `tau_h`).

pub use sourced::{Mark, Sourced};

mod sourced;

use std::fmt;
use std::ops::{Add, Sub};

/// Minutes in one hour.
pub const MINUTES_PER_HOUR: f64 = 60.0;
/// Minutes in a day of 24 elapsed hours (a *civil* day may have 23 or 25 h).
pub const MINUTES_PER_DAY: i64 = 1440;

/// A number lies outside the range of its quantity.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
#[non_exhaustive]
#[error("{quantity} must lie in {low} to {high} {unit}, found {found}")]
pub struct OutOfRange {
    /// The quantity, in words.
    pub quantity: &'static str,
    /// The unit of all numbers here.
    pub unit: &'static str,
    /// Lowest value accepted.
    pub low: f64,
    /// Highest value accepted.
    pub high: f64,
    /// The value that was refused.
    pub found: f64,
}

fn within(
    quantity: &'static str,
    unit: &'static str,
    (low, high): (f64, f64),
    found: f64,
) -> Result<f64, OutOfRange> {
    if found.is_finite() && (low..=high).contains(&found) {
        Ok(found)
    } else {
        Err(OutOfRange {
            quantity,
            unit,
            low,
            high,
            found,
        })
    }
}

/// Elapsed minutes since the epoch of a timeline.
///
/// The epoch is the local midnight that begins the first date analysed.
/// Minutes are counted on UTC instants, so a night over a clock change has 7 or 9 times 60 of them.
///
/// # Example
///
/// ```
/// use acroshift::units::Minute;
/// assert_eq!(Minute(540) - Minute(60), 480);
/// assert!((Minute(540).hours_since(Minute(60)) - 8.0).abs() < 1e-12);
/// ```
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Minute(pub i64);

impl Minute {
    /// Hours from `earlier` to this minute; negative when `earlier` is later.
    pub fn hours_since(self, earlier: Self) -> f64 {
        minutes_to_hours(self.0 - earlier.0)
    }

    /// The whole minute nearest to a decimal one.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "minutes of a roster fit an i64 by far"
    )]
    pub fn nearest(minute: f64) -> Self {
        Self(minute.round() as i64)
    }

    /// The whole minute from which on a decimal one has passed.
    ///
    /// Rounding errors of a millionth of a minute do not cost a minute.
    pub fn from_which(minute: f64) -> Self {
        Self(Self::nearest((minute - 1e-6).ceil()).0)
    }

    /// The minute as decimal minutes, for equations.
    #[expect(
        clippy::cast_precision_loss,
        reason = "rosters span years, not 2^53 minutes"
    )]
    pub fn as_f64(self) -> f64 {
        self.0 as f64
    }
}

impl Sub for Minute {
    type Output = i64;

    fn sub(self, earlier: Self) -> i64 {
        self.0 - earlier.0
    }
}

impl Add<i64> for Minute {
    type Output = Self;

    fn add(self, minutes: i64) -> Self {
        Self(self.0 + minutes)
    }
}

/// Hours for a number of whole minutes.
#[expect(
    clippy::cast_precision_loss,
    reason = "rosters span years, not 2^53 minutes"
)]
pub fn minutes_to_hours(minutes: i64) -> f64 {
    minutes as f64 / MINUTES_PER_HOUR
}

/// An hour of the 24-h clock, in [0, 24).
///
/// # Example
///
/// ```
/// use acroshift::units::ClockHour;
/// assert_eq!(ClockHour::wrapping(47.5).to_string(), "23:30");
/// assert_eq!(ClockHour::wrapping(-0.25).to_string(), "23:45");
/// ```
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct ClockHour(f64);

impl ClockHour {
    /// The clock hour shown by a clock that has run `hours` past midnight, whatever their sign.
    pub fn wrapping(hours: f64) -> Self {
        Self(hours - 24.0 * (hours / 24.0).floor())
    }

    /// The hour as a number.
    pub fn get(self) -> f64 {
        self.0
    }
}

impl fmt::Display for ClockHour {
    #[expect(
        clippy::cast_possible_truncation,
        reason = "a clock hour has at most 1440 minutes"
    )]
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        let minutes = (self.0 * MINUTES_PER_HOUR).round() as i64 % MINUTES_PER_DAY;
        write!(formatter, "{:02}:{:02}", minutes / 60, minutes % 60)
    }
}

/// A point of the circadian cycle on the elapsed time axis: the hour at which a marker stands.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Phase(f64);

impl Phase {
    /// A marker at decimal `minutes` since the epoch.
    pub fn at_minute(minutes: f64) -> Self {
        Self(minutes / MINUTES_PER_HOUR)
    }

    /// Hours since the epoch.
    pub fn hours(self) -> f64 {
        self.0
    }
}

/// A displacement of phase, hours: positive is earlier (advance), negative is later (delay).
///
/// # Example
///
/// ```
/// use acroshift::units::{Phase, PhaseShift};
/// let habitual = Phase::at_minute(3.5 * 60.0);
/// let now = Phase::at_minute((24.0 + 5.0) * 60.0);
/// // `CBTmin` stands an hour and a half later than on habitual days.
/// assert!(((habitual - now).hours() - -1.5).abs() < 1e-12);
/// assert_eq!((habitual - now).to_string(), "1.5 h later");
/// ```
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct PhaseShift(f64);

impl PhaseShift {
    /// A displacement of `hours`, positive when earlier, moved by whole days into (-12, 12].
    pub fn earlier_by(hours: f64) -> Self {
        Self(crate::numeric::circular::wrap_half(hours, 24.0))
    }

    /// Hours, in (-12, 12]: positive is earlier.
    pub fn hours(self) -> f64 {
        self.0
    }
}

impl Sub for Phase {
    type Output = PhaseShift;

    fn sub(self, later: Self) -> PhaseShift {
        PhaseShift(crate::numeric::circular::wrap_half(self.0 - later.0, 24.0))
    }
}

impl fmt::Display for PhaseShift {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        let side = if self.0 < 0.0 { "later" } else { "earlier" };
        write!(formatter, "{:.1} h {side}", self.0.abs())
    }
}

/// Photopic illuminance at the eye, lux.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Lux(f64);

impl Lux {
    /// An illuminance.
    ///
    /// # Errors
    ///
    /// [`OutOfRange`] outside 0 to 200 000 lux; direct sun gives about 120 000.
    pub fn new(lux: f64) -> Result<Self, OutOfRange> {
        within("an illuminance", "lux", (0.0, 200_000.0), lux).map(Self)
    }

    /// Lux as a number.
    pub fn get(self) -> f64 {
        self.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_that_are_no_number_are_refused() {
        assert!(Lux::new(-1.0).is_err());
        assert!(Lux::new(f64::NAN).is_err());
    }

    #[test]
    fn clock_hours_round_to_the_minute_and_never_show_24() {
        assert_eq!(ClockHour::wrapping(23.999).to_string(), "00:00");
        assert_eq!(ClockHour::wrapping(49.5).to_string(), "01:30");
    }

    #[test]
    fn decimal_minutes_become_whole_ones() {
        assert_eq!(Minute::nearest(-0.4), Minute(0));
        assert_eq!(Minute::from_which(10.000_000_1), Minute(10));
        assert_eq!(Minute::from_which(10.1), Minute(11));
    }
}
