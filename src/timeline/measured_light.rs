//! Light that was measured on a person, which takes the place of the scene while the person is awake.

use super::Axis;
use crate::units::{Lux, Minute};
use chrono::{DateTime, Utc};
use std::collections::BTreeMap;

/// Readings are put together over this long, minutes: the longest step of the pacemaker.
const BIN_MIN: i64 = 6;
/// A reading holds for at most this long after it, minutes (this program's choice, no source); later the scene holds again.
pub const HOLDS_MIN: i64 = 60;

/// Readings of workers by name, in any order.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct LightLogs {
    readings: BTreeMap<String, Vec<(DateTime<Utc>, Lux)>>,
}

impl LightLogs {
    /// Adds a reading of light at the eye.
    pub fn add(&mut self, worker: &str, at: DateTime<Utc>, light: Lux) {
        self.readings
            .entry(worker.to_owned())
            .or_default()
            .push((at, light));
    }

    /// Is there a log of this worker?
    pub fn hold(&self, worker: &str) -> bool {
        self.readings.contains_key(worker)
    }

    /// Workers with a log.
    pub fn workers(&self) -> usize {
        self.readings.len()
    }

    /// The light of a worker on an axis.
    pub fn of(&self, worker: &str, axis: &Axis) -> MeasuredLight {
        let readings = self.readings.get(worker).map_or(&[][..], Vec::as_slice);
        let readings = readings.iter().map(|(at, lux)| (axis.minute(*at), *lux));
        MeasuredLight::of(readings)
    }
}

/// Measured light of one person on the elapsed time axis.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct MeasuredLight {
    /// First minute, first minute after it, light; ascending and disjoint.
    spans: Vec<(Minute, Minute, Lux)>,
}

impl MeasuredLight {
    /// Readings, put together as means over 6 min; each holds until the next one, at most for [`HOLDS_MIN`].
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::timeline::MeasuredLight;
    /// use acroshift::units::{Lux, Minute};
    /// let readings = [(0, 100.0), (3, 300.0), (30, 50.0)];
    /// let readings = readings.map(|(at, lux)| (Minute(at), Lux::new(lux).expect("an illuminance")));
    /// let light = MeasuredLight::of(readings.into_iter());
    /// let at = |minute| light.at(Minute(minute)).map(Lux::get);
    /// assert_eq!((at(5), at(29), at(89), at(90)), (Some(200.0), Some(200.0), Some(50.0), None));
    /// ```
    pub fn of(readings: impl Iterator<Item = (Minute, Lux)>) -> Self {
        let mut bins: BTreeMap<i64, Vec<f64>> = BTreeMap::new();
        for (at, lux) in readings {
            let bin = at.0.div_euclid(BIN_MIN) * BIN_MIN;
            bins.entry(bin).or_default().push(lux.get());
        }
        let means: Vec<(i64, Lux)> = bins
            .into_iter()
            .filter_map(|(bin, values)| {
                let share = crate::numeric::quantile::ratio(1, values.len());
                Some((bin, Lux::new(values.iter().sum::<f64>() * share).ok()?))
            })
            .collect();
        let ends = means.iter().skip(1).map(|(bin, _)| *bin);
        let spans = means
            .iter()
            .zip(ends.chain([i64::MAX]))
            .map(|((from, lux), next)| {
                let to = next.min(from + HOLDS_MIN);
                (Minute(*from), Minute(to), *lux)
            })
            .collect();
        Self { spans }
    }

    /// The light that was measured at a minute.
    pub fn at(&self, minute: Minute) -> Option<Lux> {
        let next = self.spans.partition_point(|(_, to, _)| *to <= minute);
        let (from, _, lux) = self.spans.get(next)?;
        (*from <= minute).then_some(*lux)
    }

    /// Minutes at which the light changes.
    pub fn edges(&self) -> impl Iterator<Item = Minute> + '_ {
        self.spans.iter().flat_map(|(from, to, _)| [*from, *to])
    }
}
