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

/// What is known of a person's habits; phase follows it, and the spread of phase shrinks to what is left.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Habit {
    /// Habitual bedtime and waking on free days, clock hours; bed from 24 on lies after midnight.
    Hours {
        /// Bedtime.
        bed_h: f64,
        /// Waking.
        wake_h: f64,
    },
    /// Mid-sleep on free days, corrected for sleep debt, clock hour.
    MidSleep(f64),
    /// Morningness-eveningness score, 16 to 86.
    Meq(f64),
}

impl Habit {
    /// Mid-sleep (clock hour) and sleep need (h, where it is known).
    fn mid_sleep_and_need(self, set: &EnsembleSet) -> (f64, Option<f64>) {
        match self {
            Self::Hours { bed_h, wake_h } => {
                let need_h = crate::numeric::circular::wrap(wake_h - bed_h, 24.0);
                (bed_h + need_h / 2.0, Some(need_h))
            }
            Self::MidSleep(clock_h) => (clock_h + 24.0, None),
            Self::Meq(score) => {
                let usual = set.habit.bed.value + set.habit.need.value / 2.0;
                let meq = &set.meq;
                (usual + meq.slope.value * (score - meq.neither.value), None)
            }
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
    /// The person's habits, where they are known.
    pub habit: Option<Habit>,
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
    let drawn_need_h = set.habit.need.value
        + set.habit.need_sd.value * clip(z[3], set.clipping.need_sd_units.value);
    let (mid_sleep_h, need_h) = match sampling.habit {
        None => {
            let usual = set.habit.bed.value + set.habit.need.value / 2.0;
            let away = set.habit.mid_sleep_sd.value * clip(z[2], limit);
            (usual + away, drawn_need_h)
        }
        Some(habit) => {
            let (mid_sleep_h, need_h) = habit.mid_sleep_and_need(set);
            let away = set.habit.residual_sd.value * clip(z[2], limit);
            (mid_sleep_h + away, need_h.unwrap_or(drawn_need_h))
        }
    };
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
            habit: None,
        }
    }

    #[test]
    fn phase_follows_what_is_known_of_the_habits() {
        let set = ModelSets::embedded().ensemble;
        let mean_bed = |habit: Option<Habit>| {
            let sampling = Sampling {
                habit,
                ..sampling(32)
            };
            let members = members(&set, sampling);
            members
                .iter()
                .map(|m| m.bed_h + m.need_h / 2.0)
                .sum::<f64>()
                / 32.0
        };
        let usual = mean_bed(None);
        let hours = Habit::Hours {
            bed_h: 25.0,
            wake_h: 9.0,
        };
        assert!((mean_bed(Some(hours)) - usual - 2.0).abs() < 0.1);
        assert!((mean_bed(Some(Habit::MidSleep(5.0))) - usual - 2.0).abs() < 0.1);
        // Baehr 2000: Tmin 03:50 in morning types (MEQ 60.5), 06:01 in evening types (40.8).
        let later = mean_bed(Some(Habit::Meq(40.8))) - mean_bed(Some(Habit::Meq(60.5)));
        assert!((later - 2.18).abs() < 0.05, "{later}");
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
