//! What one member lived through: sleep and `CBTmin`, including remembered habitual days before the roster.

use super::ensemble::Member;
use crate::units::{Minute, Phase, PhaseShift, minutes_to_hours};

/// One sleep.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct SleepEpisode {
    /// First minute asleep.
    pub from: Minute,
    /// First minute awake.
    pub to: Minute,
    /// Cut by the end of the simulated time: not a waking.
    pub cut: bool,
}

impl SleepEpisode {
    /// Minutes of this sleep inside [from, to).
    pub fn inside(&self, from: Minute, to: Minute) -> i64 {
        (self.to.min(to) - self.from.max(from)).max(0)
    }

    /// Length, hours.
    pub fn hours(&self) -> f64 {
        self.to.hours_since(self.from)
    }

    /// Middle, decimal minutes.
    pub fn middle_min(&self) -> f64 {
        f64::midpoint(self.from.as_f64(), self.to.as_f64())
    }
}

/// One member's sleep and phase, ascending in time.
#[derive(Debug, Clone, PartialEq)]
pub struct MemberTrack {
    /// Who.
    pub member: Member,
    /// Sleeps.
    pub sleeps: Vec<SleepEpisode>,
    /// `CBTmin`, minutes since the epoch.
    pub cbtmin_min: Vec<f64>,
    /// Radius of the pacemaker's oscillation at each `CBTmin` as a share of the habitual one.
    pub amplitude_ratio: Vec<f64>,
    /// `CBTmin` on habitual days, minutes since the epoch (of the day before the roster).
    pub habitual_cbtmin_min: f64,
}

impl MemberTrack {
    /// A track that holds only remembered habitual days, up to noon of the day before the roster.
    pub fn habitual(member: Member, cbtmin_min: f64, days: i64) -> Self {
        let sleeps = (0..days)
            .rev()
            .map(|back| {
                let bed = Minute(-1440 * (back + 1)).as_f64() + member.bed_h * 60.0 - 1440.0;
                SleepEpisode {
                    from: Minute::from_which(bed),
                    to: Minute::from_which(bed + member.need_h * 60.0),
                    cut: false,
                }
            })
            .collect();
        let cbtmins: Vec<f64> = (0..=days)
            .rev()
            .map(|back| cbtmin_min - 1440.0 * Minute(back).as_f64())
            .collect();
        Self {
            member,
            sleeps,
            amplitude_ratio: vec![1.0; cbtmins.len()],
            cbtmin_min: cbtmins,
            habitual_cbtmin_min: cbtmin_min,
        }
    }

    /// Hours asleep inside [from, to).
    pub fn sleep_h(&self, from: Minute, to: Minute) -> f64 {
        minutes_to_hours(self.sleeps.iter().map(|s| s.inside(from, to)).sum())
    }

    /// Hours awake up to `at`, since the last waking; 0 when asleep.
    pub fn awake_h(&self, at: Minute) -> f64 {
        match self.sleeps.iter().rev().find(|sleep| sleep.from < at) {
            Some(sleep) if sleep.to >= at => 0.0,
            Some(sleep) => at.hours_since(sleep.to),
            None => 0.0,
        }
    }

    /// The longest sleep that overlaps [from, to), the later one when equal.
    pub fn main_sleep(&self, from: Minute, to: Minute) -> Option<&SleepEpisode> {
        self.sleeps
            .iter()
            .filter(|sleep| sleep.inside(from, to) > 0)
            .max_by_key(|sleep| (sleep.inside(from, to), sleep.from))
    }

    /// The last `CBTmin` at or before `at`.
    pub fn cbtmin_before(&self, at: Minute) -> f64 {
        let index = self
            .cbtmin_min
            .partition_point(|cbtmin| *cbtmin <= at.as_f64());
        self.cbtmin_min[index.max(1) - 1]
    }

    /// Amplitude of the pacemaker at the last `CBTmin` at or before `at`, as a share of the habitual one.
    pub fn amplitude_before(&self, at: Minute) -> f64 {
        let index = self
            .cbtmin_min
            .partition_point(|cbtmin| *cbtmin <= at.as_f64());
        self.amplitude_ratio[index.max(1) - 1]
    }

    /// The `CBTmin` nearest to `at_min`.
    pub fn cbtmin_nearest(&self, at_min: f64) -> f64 {
        let index = self.cbtmin_min.partition_point(|cbtmin| *cbtmin <= at_min);
        let before = self.cbtmin_min[index.max(1) - 1];
        match self.cbtmin_min.get(index) {
            Some(&after) if after - at_min < at_min - before => after,
            _ => before,
        }
    }

    /// How far a `CBTmin` stands from the habitual one, on the elapsed axis.
    pub fn displacement(&self, cbtmin_min: f64) -> PhaseShift {
        Phase::at_minute(self.habitual_cbtmin_min) - Phase::at_minute(cbtmin_min)
    }

    /// Sleep midpoint minus nearest `CBTmin`, hours in (-12, 12]; positive is sleep after `CBTmin`.
    pub fn phase_angle_h(&self, sleep: &SleepEpisode) -> f64 {
        let middle = sleep.middle_min();
        crate::numeric::circular::wrap_half(middle - self.cbtmin_nearest(middle), 1440.0) / 60.0
    }

    /// The phase angle of habitual sleep, hours.
    pub fn habitual_phase_angle_h(&self) -> f64 {
        let middle = (self.member.bed_h + self.member.need_h / 2.0) * 60.0;
        crate::numeric::circular::wrap_half(middle - self.habitual_cbtmin_min, 1440.0) / 60.0
    }

    /// Continuous phase at `minute`: minutes since `CBTmin`, in [0, 1440), stretched evenly between neighbouring `CBTmin`s.
    pub fn phase_min(&self, minute: f64) -> f64 {
        let index = self
            .cbtmin_min
            .partition_point(|cbtmin| *cbtmin <= minute)
            .max(1);
        let before = self.cbtmin_min[index - 1];
        let since = minute - before;
        let phase = if index < self.cbtmin_min.len() {
            since * self.phase_rate(index - 1)
        } else {
            since
        };
        crate::numeric::circular::wrap(phase, 1440.0)
    }

    /// Minutes of phase per minute in a cycle that has a next `CBTmin`: whole days are stretched evenly between the two.
    pub fn phase_rate(&self, cycle: usize) -> f64 {
        let length = self.cbtmin_min[cycle + 1] - self.cbtmin_min[cycle];
        1440.0 * (length / 1440.0).round().max(1.0) / length
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physiology::ModelSets;

    fn track() -> MemberTrack {
        let member = Member::mean(&ModelSets::embedded().ensemble, 30.0);
        MemberTrack::habitual(member, -1440.0 + 210.0, 3)
    }

    #[test]
    fn remembered_nights_end_before_the_entry() {
        let track = track();
        let last = track.sleeps.last().unwrap();
        assert_eq!((last.from, last.to), (Minute(-1500), Minute(-1020)));
        assert_eq!(track.sleeps.len(), 3);
    }

    #[test]
    fn habitual_phase_angle_is_mid_sleep_minus_cbtmin() {
        // Mid-sleep 03:00, CBTmin 03:30: sleep lies half an hour before CBTmin.
        assert!((track().habitual_phase_angle_h() - -0.5).abs() < 1e-9);
    }

    #[test]
    fn a_later_clock_has_a_negative_displacement() {
        let track = track();
        assert!((track.displacement(210.0 + 90.0).hours() - -1.5).abs() < 1e-9);
    }

    #[test]
    fn hours_awake_count_from_the_last_waking() {
        let track = track();
        assert!((track.awake_h(Minute(-720)) - 5.0).abs() < 1e-9);
        assert!(track.awake_h(Minute(-1100)).abs() < 1e-9);
    }
}
