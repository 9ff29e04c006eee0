//! The site file: what the workplace adds to every roster.

use super::zone_name::zone_named;
use crate::units::Lux;
use chrono_tz::Tz;
use serde::Deserialize;
use std::collections::BTreeSet;

/// What the workplace adds. Everything is optional.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Site {
    /// Zone of the workplace.
    pub zone: Option<Tz>,
    /// Rule packs.
    pub rules: Vec<String>,
    /// Light on the task, lux; the eye gets a share of it.
    pub task_light: Option<Lux>,
    /// Median commute each way, minutes.
    pub commute_min: Option<f64>,
    /// Is morning daylight seen on the way home from nights?
    pub morning_daylight: Option<bool>,
    /// Derogations that the site declares, by the ids of the packs.
    pub derogations: BTreeSet<String>,
}

/// The file as it is written.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct SiteFile {
    zone: Option<String>,
    #[serde(default)]
    rules: Vec<String>,
    task_light_lux: Option<f64>,
    commute_min: Option<f64>,
    morning_daylight: Option<bool>,
    #[serde(default)]
    derogations: BTreeSet<String>,
}

/// The site file cannot be used.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum SiteError {
    /// Not TOML, or an unknown key.
    #[error("the site file cannot be read: {0}")]
    Unreadable(String),
    /// The zone is not known.
    #[error("{0}")]
    Zone(String),
    /// A number is out of range.
    #[error("{0}")]
    Number(String),
}

/// Reads a site file.
///
/// # Errors
///
/// [`SiteError`] with what is wrong and where.
///
/// # Example
///
/// ```
/// let site = acroshift::intake::site::read("zone = \"Europe/London\"\ncommute_min = 40\n")?;
/// assert_eq!(site.zone, Some(chrono_tz::Europe::London));
/// assert!(acroshift::intake::site::read("zonee = 1").is_err());
/// # Ok::<(), acroshift::intake::site::SiteError>(())
/// ```
pub fn read(text: &str) -> Result<Site, SiteError> {
    let file: SiteFile =
        toml::from_str(text).map_err(|error| SiteError::Unreadable(error.to_string()))?;
    let zone = file
        .zone
        .map(|name| zone_named(&name).map_err(SiteError::Zone))
        .transpose()?;
    let task_light = file
        .task_light_lux
        .map(|lux| Lux::new(lux).map_err(|error| SiteError::Number(error.to_string())))
        .transpose()?;
    if let Some(commute) = file.commute_min
        && !(0.0..=240.0).contains(&commute)
    {
        return Err(SiteError::Number(format!(
            "commute_min must lie in 0 to 240 min, found {commute}"
        )));
    }
    Ok(Site {
        zone,
        rules: file.rules,
        task_light,
        commute_min: file.commute_min,
        morning_daylight: file.morning_daylight,
        derogations: file.derogations,
    })
}
