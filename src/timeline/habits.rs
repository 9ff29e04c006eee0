//! Defaults of time around duty, read from `defaults.toml`.

use crate::units::Sourced;
use serde::Deserialize;

/// Time around duty where neither the roster nor the site says otherwise.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Habits {
    /// Share of the time at home taken by personal time, before and after sleep each.
    pub personal_share: f64,
    /// Longest personal time before and after sleep each, hours.
    pub personal_cap_h: f64,
    /// Median commute each way, hours.
    pub commute_h: f64,
    /// Clock hour from which it is light outdoors, without a latitude.
    pub sunrise_h: f64,
    /// Clock hour from which it is dark outdoors, without a latitude.
    pub sunset_h: f64,
    /// Share of the horizontal daylight that reaches the eye on the way, where the sky is given.
    pub outdoor_eye_share: f64,
    /// Gaps of at most this many minutes between duties are joined.
    pub join_gap_min: i64,
    /// A shorter gap inside one date is a pause of a split duty, hours.
    pub split_gap_h: f64,
    /// Longest span of a split duty, hours.
    pub split_span_h: f64,
}

/// The file behind [`Habits`], with the source of each number.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct HabitFile {
    /// Personal time before and after sleep.
    pub personal_time: PersonalTime,
    /// Commute.
    pub commute: Commute,
    /// Daylight without a latitude.
    pub daylight: Daylight,
    /// When two duties count as one.
    pub joining: Joining,
}

/// Personal time before and after sleep.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PersonalTime {
    /// Share of the time at home.
    pub share: Sourced,
    /// Cap.
    pub cap: Sourced,
}

/// Commute.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Commute {
    /// Median, each way.
    pub median: Sourced,
}

/// Daylight without a latitude.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Daylight {
    /// From this clock hour.
    pub sunrise: Sourced,
    /// To this clock hour.
    pub sunset: Sourced,
    /// Share of the horizontal daylight at the eye.
    pub outdoor_eye_share: Sourced,
}

/// When two duties count as one.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Joining {
    /// Gap that is joined.
    pub gap: Sourced,
    /// Longest pause of a split duty.
    pub split_gap: Sourced,
    /// Longest span of a split duty.
    pub split_span: Sourced,
}

const DEFAULTS: &str = include_str!("defaults.toml");

impl HabitFile {
    /// The file embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads the file.
    pub fn embedded() -> Self {
        toml::from_str(DEFAULTS).expect("the embedded file is read by a test")
    }

    /// The numbers as they are used.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "the joined gap is a small whole number of minutes"
    )]
    pub fn habits(&self) -> Habits {
        Habits {
            personal_share: self.personal_time.share.value,
            personal_cap_h: self.personal_time.cap.value,
            commute_h: self.commute.median.value,
            sunrise_h: self.daylight.sunrise.value,
            sunset_h: self.daylight.sunset.value,
            outdoor_eye_share: self.daylight.outdoor_eye_share.value,
            join_gap_min: self.joining.gap.value as i64,
            split_gap_h: self.joining.split_gap.value,
            split_span_h: self.joining.split_span.value,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_embedded_file_is_read() {
        let habits = HabitFile::embedded().habits();
        assert_eq!(habits.join_gap_min, 15);
        assert!((habits.commute_h - 0.5).abs() < 1e-12);
    }
}
