//! The sets of the pacemakers, and what they have in common.

use super::{ParameterError, READ_BY_A_TEST, whole};
use crate::units::Sourced;
use serde::Deserialize;

shared_section! {
    /// Where phase is read.
    PacemakerMarker { angle, cbtmin_offset, dlmo_before_cbtmin, melatonin_duration, amplitude_floor }
}

shared_section! {
    /// State at the first habitual midnight.
    HabitualStart { first, second, n, habitual_days }
}

parameter_set! {
    /// `forger1999`: pacemaker driven by light, simpler model.
    ForgerSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: ForgerLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        process_p: ForgerOscillator { mu, k, f }
    }
}

parameter_set! {
    /// `jewett1999`: pacemaker driven by light, revised limit cycle.
    JewettSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: JewettLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        process_p: JewettOscillator { mu, q, k, f }
    }
}

parameter_set! {
    /// `hilaire2007`: pacemaker driven by light and by sleep and waking.
    HilaireSet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: HilaireLight { alpha0, beta, gain, exponent, i0, i1 }
        /// The oscillator.
        process_p: HilaireOscillator { mu, q, k, f }
        /// Drive of sleep and waking.
        non_photic: HilaireArousal { rho, awake_share, steepness }
    }
}

parameter_set! {
    /// `hannay2019`: macroscopic pacemaker, single population.
    HannaySet with marker: PacemakerMarker, start: HabitualStart {
        /// Light to drive.
        process_l: HannayLight { alpha0, beta, gain, exponent, i0 }
        /// The oscillator.
        oscillator: HannayOscillator { coupling, gamma, beta1, a1, a2, beta_l1, beta_l2, sigma }
    }
}

/// A pacemaker by the publication it comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum PacemakerName {
    /// Light and sleep-wake drive; the default.
    Hilaire2007,
    /// Light drive, simpler model.
    Forger1999,
    /// Light drive, revised limit cycle.
    Jewett1999,
    /// Light drive, macroscopic; its clock times stand early.
    Hannay2019,
}

impl PacemakerName {
    /// Every pacemaker, the default first.
    pub const ALL: [Self; 4] = [
        Self::Hilaire2007,
        Self::Forger1999,
        Self::Jewett1999,
        Self::Hannay2019,
    ];

    /// Its name in files and options.
    pub fn word(self) -> &'static str {
        match self {
            Self::Hilaire2007 => "hilaire2007",
            Self::Forger1999 => "forger1999",
            Self::Jewett1999 => "jewett1999",
            Self::Hannay2019 => "hannay2019",
        }
    }
}

/// The whole parameter set of one pacemaker.
#[derive(Debug, Clone, PartialEq)]
pub enum PacemakerSet {
    /// `hilaire2007`.
    Hilaire(HilaireSet),
    /// `forger1999`.
    Forger(ForgerSet),
    /// `jewett1999`.
    Jewett(JewettSet),
    /// `hannay2019`.
    Hannay(HannaySet),
}

/// Where phase is read and where habitual days begin, whatever the model.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PacemakerReading {
    /// Polar angle of the marker, radians.
    pub angle_rad: f64,
    /// `CBTmin` after the marker, minutes.
    pub cbtmin_offset_min: f64,
    /// DLMO before `CBTmin`, minutes.
    pub dlmo_before_cbtmin_min: f64,
    /// From DLMO to melatonin offset, minutes.
    pub melatonin_duration_min: f64,
    /// Share of the habitual amplitude below which phase is ill-defined.
    pub amplitude_floor: f64,
    /// First two state variables and `n` at the first habitual midnight.
    pub start: [f64; 3],
    /// Habitual days lived before the roster.
    pub habitual_days: f64,
}

impl PacemakerReading {
    fn new(marker: &PacemakerMarker, start: &HabitualStart) -> Self {
        Self {
            angle_rad: marker.angle.value.to_radians(),
            cbtmin_offset_min: marker.cbtmin_offset.value * 60.0,
            dlmo_before_cbtmin_min: marker.dlmo_before_cbtmin.value * 60.0,
            melatonin_duration_min: marker.melatonin_duration.value * 60.0,
            amplitude_floor: marker.amplitude_floor.value,
            start: [start.first.value, start.second.value, start.n.value],
            habitual_days: start.habitual_days.value,
        }
    }
}

impl PacemakerSet {
    /// The embedded set of a pacemaker.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads every file.
    pub fn embedded(name: PacemakerName) -> Self {
        match name {
            PacemakerName::Hilaire2007 => Self::Hilaire(
                toml::from_str(include_str!("hilaire2007.toml")).expect(READ_BY_A_TEST),
            ),
            PacemakerName::Forger1999 => {
                Self::Forger(toml::from_str(include_str!("forger1999.toml")).expect(READ_BY_A_TEST))
            }
            PacemakerName::Jewett1999 => {
                Self::Jewett(toml::from_str(include_str!("jewett1999.toml")).expect(READ_BY_A_TEST))
            }
            PacemakerName::Hannay2019 => {
                Self::Hannay(toml::from_str(include_str!("hannay2019.toml")).expect(READ_BY_A_TEST))
            }
        }
    }

    /// Replaces the numbers by those of a file of the same model.
    pub(super) fn replace(&mut self, text: &str) -> Result<(), ParameterError> {
        match self {
            Self::Hilaire(set) => *set = whole(text)?,
            Self::Forger(set) => *set = whole(text)?,
            Self::Jewett(set) => *set = whole(text)?,
            Self::Hannay(set) => *set = whole(text)?,
        }
        Ok(())
    }

    /// Where phase is read and where habitual days begin.
    pub fn reading(&self) -> PacemakerReading {
        match self {
            Self::Hilaire(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Forger(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Jewett(set) => PacemakerReading::new(&set.marker, &set.start),
            Self::Hannay(set) => PacemakerReading::new(&set.marker, &set.start),
        }
    }

    /// Name of the set and its publication.
    pub fn name_and_publication(&self) -> (&str, &str) {
        match self {
            Self::Hilaire(set) => (&set.name, &set.publication),
            Self::Forger(set) => (&set.name, &set.publication),
            Self::Jewett(set) => (&set.name, &set.publication),
            Self::Hannay(set) => (&set.name, &set.publication),
        }
    }

    /// Every number of the set with the key under which it stands.
    pub fn listed(&self) -> Vec<(String, &Sourced)> {
        match self {
            Self::Hilaire(set) => set.listed(),
            Self::Forger(set) => set.listed(),
            Self::Jewett(set) => set.listed(),
            Self::Hannay(set) => set.listed(),
        }
    }
}
