//! The site file: what the workplace adds to every roster.

use super::zone_name::zone_named;
use crate::numeric::sun::{Place, Sky};
use crate::timeline::Stress;
use crate::timeline::light::{Areas, SiteLight};
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
    /// Light at work, at home and on the way.
    pub light: SiteLight,
    /// Where the workplace is, for daylight.
    pub place: Option<Place>,
    /// What the sky is like on the way.
    pub sky: Option<Sky>,
    /// Stress by kind of duty.
    pub stress: Stress,
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
    work_area: Option<String>,
    eye_factor: Option<f64>,
    home_day_lux: Option<f64>,
    home_evening_lux: Option<f64>,
    commute_outdoors: Option<bool>,
    #[serde(default)]
    sunglasses: bool,
    sky: Option<String>,
    #[serde(default)]
    stress: StressTable,
    latitude: Option<f64>,
    longitude: Option<f64>,
    commute_min: Option<f64>,
    morning_daylight: Option<bool>,
    #[serde(default)]
    derogations: BTreeSet<String>,
}

/// Factors by kind of duty, as they are written.
#[derive(Debug, Default, Deserialize)]
#[serde(deny_unknown_fields)]
struct StressTable {
    day: Option<f64>,
    early: Option<f64>,
    evening: Option<f64>,
    night: Option<f64>,
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
    let light = light(&file)?;
    let sky = sky(&file)?;
    let stress = stress(&file.stress)?;
    let zone = file
        .zone
        .map(|name| zone_named(&name).map_err(SiteError::Zone))
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
        light,
        sky,
        stress,
        place: place(file.latitude, file.longitude)?,
        commute_min: file.commute_min,
        morning_daylight: file.morning_daylight,
        derogations: file.derogations,
    })
}

/// Everything about light, in the units of the file.
fn light(file: &SiteFile) -> Result<SiteLight, SiteError> {
    let lux = |key: &str, value: Option<f64>| {
        value
            .map(|lux| Lux::new(lux).map_err(|error| SiteError::Number(format!("{key}: {error}"))))
            .transpose()
    };
    if let Some(factor) = file.eye_factor
        && !(0.0..=1.0).contains(&factor)
    {
        return Err(SiteError::Number(format!(
            "eye_factor must lie in 0 to 1, found {factor}"
        )));
    }
    Ok(SiteLight {
        task: lux("task_light_lux", file.task_light_lux)?
            .or(area_light(file.work_area.as_deref())?),
        eye_factor: file.eye_factor,
        home_day: lux("home_day_lux", file.home_day_lux)?,
        home_evening: lux("home_evening_lux", file.home_evening_lux)?,
        commute_outdoors: file.commute_outdoors,
        sunglasses: file.sunglasses,
    })
}

fn area_light(name: Option<&str>) -> Result<Option<Lux>, SiteError> {
    let Some(name) = name else { return Ok(None) };
    let areas = Areas::embedded();
    let known = || {
        areas
            .listed()
            .map(|(name, _)| name)
            .collect::<Vec<_>>()
            .join(", ")
    };
    let light = areas.task_light(name).ok_or_else(|| {
        SiteError::Number(format!(
            "work_area \"{name}\" is not known; known are {}",
            known()
        ))
    })?;
    Ok(Lux::new(light.value).ok())
}

fn sky(file: &SiteFile) -> Result<Option<Sky>, SiteError> {
    let Some(name) = &file.sky else {
        return Ok(None);
    };
    if file.latitude.is_none() {
        return Err(SiteError::Number(
            "sky needs latitude and longitude, from which the height of the sun follows".to_owned(),
        ));
    }
    Sky::named(name).map(Some).ok_or_else(|| {
        SiteError::Number(format!(
            "sky must be clear, partly-cloudy or overcast, found \"{name}\""
        ))
    })
}

fn stress(table: &StressTable) -> Result<Stress, SiteError> {
    let factor = |kind: &str, factor: Option<f64>| match factor {
        Some(factor) if !(0.5..=3.0).contains(&factor) => Err(SiteError::Number(format!(
            "stress.{kind} must lie in 0.5 to 3, found {factor}"
        ))),
        given => Ok(given.unwrap_or(1.0)),
    };
    Ok(Stress {
        day: factor("day", table.day)?,
        early: factor("early", table.early)?,
        evening: factor("evening", table.evening)?,
        night: factor("night", table.night)?,
    })
}

fn place(latitude: Option<f64>, longitude: Option<f64>) -> Result<Option<Place>, SiteError> {
    match (latitude, longitude) {
        (None, None) => Ok(None),
        (Some(latitude_deg), Some(longitude_deg)) => {
            let within = |name: &str, value: f64, limit: f64| {
                if value.is_finite() && value.abs() <= limit {
                    Ok(())
                } else {
                    Err(SiteError::Number(format!(
                        "{name} must lie in -{limit} to {limit} degrees, found {value}"
                    )))
                }
            };
            within("latitude", latitude_deg, 90.0)?;
            within("longitude", longitude_deg, 180.0)?;
            Ok(Some(Place {
                latitude_deg,
                longitude_deg,
            }))
        }
        _ => Err(SiteError::Number(
            "latitude and longitude go together; give both, in degrees, north and east positive"
                .to_owned(),
        )),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn light_is_read_with_its_place_in_the_file() {
        let site = read("work_area = \"office\"\neye_factor = 0.5\nsunglasses = true").unwrap();
        assert_eq!(site.light.task.map(Lux::get), Some(500.0));
        for (wrong, told) in [
            ("work_area = \"moon\"", "ward-night"),
            ("eye_factor = 2.0", "eye_factor"),
            ("home_day_lux = -1.0", "home_day_lux"),
            ("task_light_lux = nan", "task_light_lux"),
            ("sky = \"clear\"", "latitude"),
            ("[stress]\nnight = 9.0", "stress.night"),
            ("sky = \"blue\"\nlatitude = 50\nlongitude = 0", "overcast"),
        ] {
            let error = read(wrong).unwrap_err().to_string();
            assert!(error.contains(told), "{wrong}: {error}");
        }
    }

    #[test]
    fn places_are_whole_and_on_earth() {
        let place = |text: &str| read(text).map(|site| site.place);
        assert_eq!(place("").unwrap(), None);
        assert!(
            place("latitude = 51.5\nlongitude = -0.1")
                .unwrap()
                .is_some()
        );
        for wrong in [
            "latitude = 91\nlongitude = 0",
            "latitude = 1",
            "latitude = nan\nlongitude = 0",
        ] {
            assert!(place(wrong).is_err(), "{wrong}");
        }
    }
}
