//! Numbers that would make nonsense of every result are refused.

use super::{ModelSets, ParameterError};
use crate::units::Sourced;

impl ModelSets {
    /// Numbers that would make nonsense of every result are refused.
    pub(super) fn check(&self) -> Result<(), ParameterError> {
        if let Some((set, key, number)) = self
            .listed()
            .into_iter()
            .find(|(_, _, number)| !number.value.is_finite())
        {
            return Err(ParameterError::OutOfRange {
                key: format!("{set} {key}"),
                low: f64::MIN,
                high: f64::MAX,
                found: number.value,
            });
        }
        let days = self.pacemaker.reading().habitual_days;
        within("start.habitual_days", days, (10.0, 1000.0))?;
        for (key, number, bounds) in self.bounded() {
            within(key, number.value, bounds)?;
        }
        Ok(())
    }

    /// Numbers with the bounds within which the equations keep their sense. This program's choice, no source.
    fn bounded(&self) -> Vec<(&'static str, &Sourced, (f64, f64))> {
        let (scene, sleep, people) = (&self.light.scene, &self.sleep, &self.ensemble);
        let rates = &self.cascade.rates;
        let lux = (0.0, 200_000.0);
        let minutes = (0.5, 1000.0);
        vec![
            (
                "two-process homeostat.tau_rise",
                &sleep.homeostat.tau_rise,
                (1.0, 100.0),
            ),
            (
                "two-process homeostat.tau_fall",
                &sleep.homeostat.tau_fall,
                (0.5, 50.0),
            ),
            (
                "two-process effort.share_at_stake",
                &sleep.effort.share_at_stake,
                (0.05, 1.0),
            ),
            (
                "two-process effort.shortest_sleep",
                &sleep.effort.shortest_sleep,
                (0.05, 4.0),
            ),
            ("ensemble period.sd", &people.period.sd, (0.0, 1.0)),
            (
                "ensemble habit.mid_sleep_sd",
                &people.habit.mid_sleep_sd,
                (0.0, 6.0),
            ),
            ("ensemble habit.need_sd", &people.habit.need_sd, (0.0, 2.0)),
            (
                "ensemble clipping.sd_units",
                &people.clipping.sd_units,
                (0.0, 5.0),
            ),
            (
                "ensemble clipping.need_sd_units",
                &people.clipping.need_sd_units,
                (0.0, 5.0),
            ),
            (
                "hpa-cascade rates.half_life_crh",
                &rates.half_life_crh,
                minutes,
            ),
            (
                "hpa-cascade rates.half_life_acth",
                &rates.half_life_acth,
                minutes,
            ),
            (
                "hpa-cascade rates.half_life_cortisol",
                &rates.half_life_cortisol,
                minutes,
            ),
            ("ensemble period.mean", &people.period.mean, (23.0, 25.5)),
            ("ensemble habit.need", &people.habit.need, (4.0, 12.0)),
            ("light scene.home_day", &scene.home_day, lux),
            ("light scene.home_evening", &scene.home_evening, lux),
            ("light scene.work", &scene.work, lux),
            ("light scene.commute_day", &scene.commute_day, lux),
            ("light scene.commute_dark", &scene.commute_dark, lux),
            ("light eye.factor", &self.light.eye.factor, (0.0, 1.0)),
        ]
    }
}

/// A number within its bounds, or the error that names them.
fn within(key: &str, found: f64, (low, high): (f64, f64)) -> Result<(), ParameterError> {
    if (low..=high).contains(&found) {
        return Ok(());
    }
    Err(ParameterError::OutOfRange {
        key: key.to_owned(),
        low,
        high,
        found,
    })
}
