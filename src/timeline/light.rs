//! What the site says about light: kind of workplace, sky, glasses, home.

use crate::units::{Lux, Sourced};
use serde::Deserialize;
use std::collections::BTreeMap;

/// Settings of light that replace the defaults; everything is optional.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct SiteLight {
    /// Light on the task, lux.
    pub task: Option<Lux>,
    /// Share of the task's light that reaches the eye.
    pub eye_factor: Option<f64>,
    /// Light at the eye at home by day, lux.
    pub home_day: Option<Lux>,
    /// Light at the eye at home after sunset, lux.
    pub home_evening: Option<Lux>,
    /// Is the way to and from work in daylight while the sun is up?
    pub commute_outdoors: Option<bool>,
    /// Are sunglasses worn on the way in daylight?
    pub sunglasses: bool,
}

/// The kinds of workplace, with the light on the task.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Areas {
    area: BTreeMap<String, Sourced>,
}

impl Areas {
    /// The file embedded in the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads the file.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::timeline::light::Areas;
    /// let areas = Areas::embedded();
    /// assert!((areas.task_light("office").expect("known").value - 500.0).abs() < 1e-9);
    /// assert!(areas.task_light("moon base").is_none());
    /// ```
    pub fn embedded() -> Self {
        toml::from_str(include_str!("areas.toml")).expect("the embedded file is read by a test")
    }

    /// Light on the task of a kind of workplace.
    pub fn task_light(&self, name: &str) -> Option<&Sourced> {
        self.area.get(name)
    }

    /// Every kind, by name.
    pub fn listed(&self) -> impl Iterator<Item = (&str, &Sourced)> {
        self.area.iter().map(|(name, light)| (name.as_str(), light))
    }
}
