//! The people simulated: how do they differ?
//!
//! A fixed low-discrepancy sample over intrinsic period, light sensitivity, habitual phase, sleep need and commute,
//! and over whether morning daylight is seen on the way home, where the site does not say.

use super::parameters::EnsembleSet;
use crate::numeric::low_discrepancy::normal_sample;

/// Members are added in groups of this size.
pub const MEMBER_GROUP: usize = 8;

/// One simulated person.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Member {
    /// Intrinsic period, hours.
    pub tau_h: f64,
    /// Factor on lux at the eye.
    pub sensitivity: f64,
    /// Habitual bedtime, clock hour; from 24 on it lies after midnight.
    pub bed_h: f64,
    /// Sleep need, hours.
    pub need_h: f64,
    /// Commute each way, minutes.
    pub commute_min: f64,
    /// Does the person see morning daylight on the way home from a night?
    pub sees_morning_daylight: bool,
}

impl Member {
    /// The mean member: no spread at all.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::{Member, ModelSets};
    /// let member = Member::mean(&ModelSets::embedded().ensemble, 30.0);
    /// assert!((member.tau_h - 24.15).abs() < 1e-12);
    /// ```
    pub fn mean(set: &EnsembleSet, commute_min: f64) -> Self {
        Self {
            tau_h: set.period.mean.value,
            sensitivity: 1.0,
            bed_h: set.habit.bed.value,
            need_h: set.habit.need.value,
            commute_min,
            sees_morning_daylight: true,
        }
    }
}

/// How the ensemble is drawn.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sampling {
    /// Members wanted; rounded up to whole groups.
    pub members: usize,
    /// Seed of the rotation of the sample.
    pub seed: u64,
    /// Median commute each way, minutes.
    pub commute_min: f64,
    /// Is morning daylight seen on the way home? Unknown gives half the members each.
    pub morning_daylight: Option<bool>,
}

/// The members of a run.
///
/// # Source
///
/// Spreads and their sources: `parameters/ensemble.toml`.
pub fn members(set: &EnsembleSet, sampling: Sampling) -> Vec<Member> {
    let count = sampling
        .members
        .max(1)
        .div_ceil(MEMBER_GROUP)
        .saturating_mul(MEMBER_GROUP);
    // Unknown morning daylight: each person is lived in both cases, so that nothing but daylight tells them apart.
    let cases: &[bool] = match sampling.morning_daylight {
        Some(true) => &[true],
        Some(false) => &[false],
        None => &[true, false],
    };
    normal_sample(count / cases.len(), 5, sampling.seed)
        .iter()
        .flat_map(|z| cases.iter().map(|seen| member(set, sampling, z, *seen)))
        .collect()
}

fn member(set: &EnsembleSet, sampling: Sampling, z: &[f64], seen: bool) -> Member {
    let clip = |value: f64, limit: f64| value.clamp(-limit, limit);
    let limit = set.clipping.sd_units.value;
    let need_h = set.habit.need.value
        + set.habit.need_sd.value * clip(z[3], set.clipping.need_sd_units.value);
    let mid_sleep_h = set.habit.bed.value
        + set.habit.need.value / 2.0
        + set.habit.mid_sleep_sd.value * clip(z[2], limit);
    Member {
        tau_h: set.period.mean.value + set.period.sd.value * clip(z[0], limit),
        sensitivity: libm::pow(10.0, set.sensitivity.log10_sd.value * clip(z[1], limit)),
        bed_h: mid_sleep_h - need_h / 2.0,
        need_h,
        commute_min: sampling.commute_min * libm::exp(set.commute.ln_sd.value * clip(z[4], limit)),
        sees_morning_daylight: seen,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physiology::ModelSets;

    fn sampling(members: usize) -> Sampling {
        Sampling {
            members,
            seed: 1,
            commute_min: 30.0,
            morning_daylight: None,
        }
    }

    #[test]
    fn members_come_in_whole_groups() {
        let set = ModelSets::embedded().ensemble;
        assert_eq!(members(&set, sampling(1)).len(), 8);
        assert_eq!(members(&set, sampling(32)).len(), 32);
        assert_eq!(members(&set, sampling(33)).len(), 40);
    }

    #[test]
    fn unknown_daylight_lives_the_same_people_in_both_cases() {
        let set = ModelSets::embedded().ensemble;
        let members = members(&set, sampling(32));
        assert_eq!(members.len(), 32);
        for pair in members.chunks(2) {
            assert!(pair[0].sees_morning_daylight && !pair[1].sees_morning_daylight);
            let same = Member {
                sees_morning_daylight: true,
                ..pair[1]
            };
            assert_eq!(pair[0], same);
        }
    }
}
