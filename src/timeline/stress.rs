//! Stress by kind of duty: a factor that the site may set, 1 unless it does.

use crate::units::ClockHour;

/// Factors on the drive of cortisol by kind of duty.
///
/// What a factor does (mean, peak and nadir of the modelled day) stands in the reference scenarios; none is known for a workplace.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stress {
    /// Duties that are none of the others.
    pub day: f64,
    /// Duties that begin before 06:00 and are no nights.
    pub early: f64,
    /// Duties that end after 20:00 and are no nights.
    pub evening: f64,
    /// Duties with at least 3 h between 23:00 and 06:00.
    pub night: f64,
}

impl Default for Stress {
    fn default() -> Self {
        Self {
            day: 1.0,
            early: 1.0,
            evening: 1.0,
            night: 1.0,
        }
    }
}

impl Stress {
    /// The factor of a duty by the clock hour of its start and its length.
    ///
    /// # Source
    ///
    /// Night: at least 3 h between 23:00 and 06:00, as in register studies (Specht 2019); the other kinds are this program's choice.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::timeline::Stress;
    /// use acroshift::units::ClockHour;
    /// let stress = Stress { night: 1.2, early: 1.1, ..Stress::default() };
    /// assert_eq!(stress.on(ClockHour::wrapping(22.0), 8.0), 1.2);
    /// assert_eq!(stress.on(ClockHour::wrapping(5.5), 8.0), 1.1);
    /// assert_eq!(stress.on(ClockHour::wrapping(8.0), 8.0), 1.0);
    /// ```
    pub fn on(&self, start: ClockHour, hours: f64) -> f64 {
        let (from, to) = (start.get(), start.get() + hours);
        let at_night = hours_at_night(start, hours);
        if at_night >= 3.0 {
            self.night
        } else if from < 6.0 {
            self.early
        } else if to > 20.0 {
            self.evening
        } else {
            self.day
        }
    }
}

/// Hours of a duty between 23:00 and 06:00, by the clock hour of its start and its length of at most two days.
///
/// # Example
///
/// ```
/// use acroshift::timeline::stress::hours_at_night;
/// use acroshift::units::ClockHour;
/// assert_eq!(hours_at_night(ClockHour::wrapping(19.0), 12.0), 7.0);
/// assert_eq!(hours_at_night(ClockHour::wrapping(5.0), 8.0), 1.0);
/// ```
pub fn hours_at_night(start: ClockHour, hours: f64) -> f64 {
    let (from, to) = (start.get(), start.get() + hours);
    [-1.0, 23.0, 47.0]
        .iter()
        .map(|night| (to.min(night + 7.0) - from.max(*night)).max(0.0))
        .sum()
}
