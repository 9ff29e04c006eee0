//! What is read from each member of the ensemble.

use crate::physiology::cascade::Rows;
use crate::physiology::day::{DayReader, Stretch};
use crate::physiology::{CortisolDay, MemberTrack};
use crate::units::Minute;
use serde::Deserialize;

/// How a quantity is read. Hours count from midnight of day 0; before it they are negative.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize)]
#[serde(tag = "read", rename_all = "kebab-case")]
pub enum Reading {
    /// How much earlier than before day 0 the `CBTmin` nearest to an hour falls, hours; later is negative.
    CbtminShift {
        /// Hour.
        at: f64,
    },
    /// Clock hour of the `CBTmin` nearest to an hour.
    CbtminClock {
        /// Hour.
        at: f64,
    },
    /// DLMO before the habitual bedtime, before day 0, hours.
    DlmoLead,
    /// Clock hour of the DLMO before day 0, counted past midnight from 24 on.
    DlmoHabitual,
    /// Mean distance of the `CBTmin`s between two hours.
    Period {
        /// From this hour.
        from: f64,
        /// To this hour.
        to: f64,
    },
    /// Hours asleep between two hours.
    Sleep {
        /// From this hour.
        from: f64,
        /// To this hour.
        to: f64,
    },
    /// Acrophase of cortisol in the 24 h from an hour, hours after that hour.
    CortisolAcrophase {
        /// From this hour.
        from: f64,
    },
    /// Nadir of cortisol in the 24 h from an hour, hours after that hour.
    CortisolNadir {
        /// From this hour.
        from: f64,
    },
    /// End of the quiescent interval of cortisol in the 24 h from an hour, hours after that hour.
    CortisolQuietEnd {
        /// From this hour.
        from: f64,
    },
    /// Amplitude of the cosine of cortisol in the 24 h from an hour, nmol/L.
    CortisolAmplitude {
        /// From this hour.
        from: f64,
    },
}

impl Reading {
    /// First minute of the 24 h of cortisol that are read.
    fn cortisol_from(self) -> Option<Minute> {
        match self {
            Self::CortisolAcrophase { from }
            | Self::CortisolNadir { from }
            | Self::CortisolQuietEnd { from }
            | Self::CortisolAmplitude { from } => Some(Minute::nearest(from * 60.0)),
            _ => None,
        }
    }

    /// The last hour that must have been lived.
    pub fn until_h(self) -> f64 {
        match self {
            Self::CbtminShift { at } | Self::CbtminClock { at } => at + 18.0,
            Self::Period { to, .. } | Self::Sleep { to, .. } => to,
            Self::DlmoLead | Self::DlmoHabitual => 0.0,
            Self::CortisolAcrophase { from }
            | Self::CortisolNadir { from }
            | Self::CortisolQuietEnd { from }
            | Self::CortisolAmplitude { from } => from + 36.0,
        }
    }
}

/// The quantity of each member of a unit, given cortisol where it is asked for.
pub(super) fn read(
    reading: Reading,
    tracks: &[MemberTrack],
    rows: Option<&Rows>,
    days: &DayReader,
) -> Vec<f64> {
    let cortisol = |from: Minute| -> Vec<CortisolDay> {
        rows.and_then(|rows| days.read(rows, tracks.len(), Stretch::whole(from, from + 1440)))
            .unwrap_or_default()
    };
    if let Some(from) = reading.cortisol_from() {
        return cortisol(from)
            .iter()
            .map(|day| of_cortisol(reading, day, from))
            .collect();
    }
    tracks
        .iter()
        .map(|track| of_track(reading, track))
        .collect()
}

fn of_cortisol(reading: Reading, day: &CortisolDay, from: Minute) -> f64 {
    match reading {
        Reading::CortisolNadir { .. } => day.nadir_at.hours_since(from),
        Reading::CortisolQuietEnd { .. } => day.quiescent.1.hours_since(from),
        Reading::CortisolAmplitude { .. } => day.amplitude,
        _ => day.acrophase_min / 60.0,
    }
}

fn of_track(reading: Reading, track: &MemberTrack) -> f64 {
    let dlmo_h = (track.habitual_cbtmin_min - 7.0 * 60.0) / 60.0;
    match reading {
        Reading::CbtminShift { at } => track.displacement(track.cbtmin_nearest(at * 60.0)).hours(),
        // Counted from the clock hour of `at`, so that midnight parts no members.
        Reading::CbtminClock { at } => {
            crate::numeric::circular::wrap(at, 24.0) + track.cbtmin_nearest(at * 60.0) / 60.0 - at
        }
        Reading::DlmoLead => crate::numeric::circular::wrap_half(track.member.bed_h - dlmo_h, 24.0),
        // DLMO lies in the evening or after midnight: hours from noon on.
        Reading::DlmoHabitual => 12.0 + crate::numeric::circular::wrap(dlmo_h - 12.0, 24.0),
        Reading::Period { from, to } => period(track, from * 60.0, to * 60.0),
        Reading::Sleep { from, to } => {
            track.sleep_h(Minute::nearest(from * 60.0), Minute::nearest(to * 60.0))
        }
        _ => f64::NAN,
    }
}

/// Mean distance of the `CBTmin`s between two minutes, hours.
fn period(track: &MemberTrack, from_min: f64, to_min: f64) -> f64 {
    let inside: Vec<f64> = track
        .cbtmin_min
        .iter()
        .copied()
        .filter(|cbtmin| (from_min..to_min).contains(cbtmin))
        .collect();
    match (inside.first(), inside.last()) {
        (Some(first), Some(last)) if inside.len() > 1 => {
            let cycles = u32::try_from(inside.len() - 1).unwrap_or(1);
            (last - first) / f64::from(cycles) / 60.0
        }
        _ => f64::NAN,
    }
}
