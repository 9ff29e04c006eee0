//! Where is the phase read? `CBTmin` from the polar angle, never from a count of minima.

use super::Pacemaker;

/// Minutes after which a second passing of the marker angle is believed: one marker per cycle, never two.
const SHORTEST_CYCLE_MIN: f64 = 12.0 * 60.0;

/// A marker, minutes since the epoch.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    /// When the angle was passed.
    pub crossing_min: f64,
    /// The `CBTmin` that this announces.
    pub cbtmin_min: f64,
}

/// Finds `CBTmin` of one member as its state moves on.
#[derive(Debug, Clone, PartialEq)]
pub struct MarkerReader {
    last_crossing_min: f64,
}

impl MarkerReader {
    /// A reader that has seen no marker yet.
    pub fn new() -> Self {
        Self {
            last_crossing_min: f64::NEG_INFINITY,
        }
    }

    /// A reader that knows the last `CBTmin`, minutes since the epoch.
    pub fn after(pacemaker: &Pacemaker, cbtmin_min: f64) -> Self {
        Self {
            last_crossing_min: cbtmin_min - pacemaker.reading.cbtmin_offset_min,
        }
    }

    /// The marker, if the step of `length_min` from `minute` held the crossing that announces it.
    pub fn read(
        &mut self,
        pacemaker: &Pacemaker,
        (minute, length_min): (f64, f64),
        before: (f64, f64),
        after: (f64, f64),
    ) -> Option<Reading> {
        let crossing = minute + length_min * pacemaker.crossing(before, after)?;
        if crossing - self.last_crossing_min <= SHORTEST_CYCLE_MIN {
            return None;
        }
        self.last_crossing_min = crossing;
        Some(Reading {
            crossing_min: crossing,
            cbtmin_min: crossing + pacemaker.reading.cbtmin_offset_min,
        })
    }
}

impl Default for MarkerReader {
    fn default() -> Self {
        Self::new()
    }
}
