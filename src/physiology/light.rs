//! Light at the eye: which scene is the person in?

use super::parameters::LightSet;
use crate::timeline::Timeline;
use crate::timeline::plan::{Place, Segment};

/// Lux at the eye by scene.
#[derive(Debug, Clone, PartialEq)]
#[expect(
    clippy::struct_field_names,
    reason = "every number in an equation bears its unit"
)]
pub struct LightScenes {
    asleep_lux: f64,
    home_day_lux: f64,
    home_evening_lux: f64,
    work_lux: f64,
    commute_day_lux: f64,
    commute_dark_lux: f64,
    morning_kept_out_lux: f64,
}

impl LightScenes {
    /// The scenes of a parameter set.
    pub fn new(set: &LightSet) -> Self {
        Self {
            asleep_lux: set.scene.asleep.value,
            home_day_lux: set.scene.home_day.value,
            home_evening_lux: set.scene.home_evening.value,
            work_lux: set.scene.work.value,
            commute_day_lux: set.scene.commute_day.value,
            commute_dark_lux: set.scene.commute_dark.value,
            morning_kept_out_lux: set.scene.morning_kept_out.value,
        }
    }

    /// Behind closed eyelids.
    pub fn asleep(&self) -> f64 {
        self.asleep_lux
    }

    /// At home, by day or in the evening and at night.
    pub fn home(&self, daylight: bool) -> f64 {
        if daylight {
            self.home_day_lux
        } else {
            self.home_evening_lux
        }
    }

    /// Morning light after a night when it is kept out.
    pub fn morning_kept_out(&self) -> f64 {
        self.morning_kept_out_lux
    }

    /// The light of a waking stretch.
    pub fn awake(&self, segment: &Segment, timeline: &Timeline) -> f64 {
        match segment.place {
            Place::Duty(index) => timeline.duties[index]
                .light
                .map_or(self.work_lux, crate::units::Lux::get),
            Place::Commute if segment.daylight => self.commute_day_lux,
            Place::Commute => self.commute_dark_lux,
            Place::Home => self.home(segment.daylight),
        }
    }
}
