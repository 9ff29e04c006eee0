//! Light at the eye: which scene is the person in?

use super::parameters::LightSet;
use crate::timeline::plan::{Place, Segment};
use crate::timeline::{SiteLight, Timeline};
use crate::units::{Mark, Sourced};

/// Lux at the eye by scene.
#[derive(Debug, Clone, PartialEq)]
pub struct LightScenes {
    asleep_lux: f64,
    home_day_lux: f64,
    home_evening_lux: f64,
    work_lux: f64,
    commute_day_lux: f64,
    commute_dark_lux: f64,
    morning_kept_out_lux: f64,
    /// Share of the daylight on the way that reaches the eye beside glasses: 1 without them.
    way_share: f64,
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
            way_share: set.way.share.value,
        }
    }

    /// The set with what a site says in the place of the defaults.
    pub fn at_site(set: &LightSet, site: &SiteLight) -> LightSet {
        let mut set = set.clone();
        let said = |number: &mut Sourced, value: Option<f64>| {
            if let Some(value) = value {
                number.value = value;
                number.mark = Mark::Own;
                "the site file".clone_into(&mut number.source);
            }
        };
        // The default light at work stands for a task light times the default factor.
        let usual_task = set.scene.work.value / set.eye.factor.value;
        said(&mut set.eye.factor, site.eye_factor);
        let factor = set.eye.factor.value;
        let task = site.task.map(crate::units::Lux::get);
        let task = task.or(site.eye_factor.map(|_| usual_task));
        said(&mut set.scene.work, task.map(|lux| lux * factor));
        said(
            &mut set.scene.home_day,
            site.home_day.map(crate::units::Lux::get),
        );
        said(
            &mut set.scene.home_evening,
            site.home_evening.map(crate::units::Lux::get),
        );
        if site.sunglasses {
            let glasses = set.way.sunglasses.value;
            let day = set.scene.commute_day.value * glasses;
            said(&mut set.scene.commute_day, Some(day));
            said(&mut set.way.share, Some(glasses));
        }
        if site.commute_outdoors == Some(false) {
            let dark = set.scene.commute_dark.value;
            said(&mut set.scene.commute_day, Some(dark));
            said(&mut set.way.share, Some(0.0));
        }
        set
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

    /// The light of a waking stretch: as measured, else that of the scene.
    pub fn awake(&self, segment: &Segment, timeline: &Timeline) -> f64 {
        if let Some(measured) = segment.measured {
            return measured.get();
        }
        match segment.place {
            Place::Duty(index) => timeline.duties[index]
                .light
                .map_or(self.work_lux, crate::units::Lux::get),
            Place::Way { duty, home } if segment.daylight => {
                let known = timeline.duties[duty].way_light[usize::from(home)];
                known.map_or(self.commute_day_lux, |outdoors| {
                    // Glasses and closed ways dim known daylight as they dim the default.
                    let dimmed = outdoors.get() * self.way_share;
                    dimmed.max(self.commute_dark_lux)
                })
            }
            Place::Way { .. } => self.commute_dark_lux,
            Place::Home => self.home(segment.daylight),
        }
    }
}
