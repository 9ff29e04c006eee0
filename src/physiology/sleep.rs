//! Two-process sleep inside the opportunities: when does a person fall asleep and wake?
//!
//! | symbol | meaning |
//! |---|---|
//! | `S` | homeostatic pressure, rising awake, falling asleep |
//! | `C` | circadian modulation of both thresholds, moved by the pacemaker's displacement |
//! | `H`, `L` | upper threshold (sleep onset) and lower threshold (waking), calibrated to the habitual sleep |
//! | effort | lowering of `H` when an alarm is ahead or the habitual night is still owed |
//!
//! One mechanism serves days off, early starts, short breaks and day sleep.

use super::ensemble::Member;
use super::parameters::SleepSet;
use crate::numeric::periodic_table::PeriodicTable;
use crate::units::Minute;

/// Comparisons of decimal minutes allow for rounding of the habitual times.
const TOLERANCE_MIN: f64 = 1e-6;
const DAY_MIN: f64 = 1440.0;

/// The numbers of the sleep rules, ready for use.
#[derive(Debug, Clone, PartialEq)]
pub struct SleepModel {
    tau_rise_min: f64,
    tau_fall_min: f64,
    amplitude: f64,
    after_mid_sleep_min: f64,
    lowering: f64,
    share_at_stake: f64,
    shortest_min: f64,
    process_c: PeriodicTable,
    rise: f64,
    fall: f64,
}

impl SleepModel {
    /// The rules with the numbers of a parameter set.
    pub fn new(set: &SleepSet) -> Self {
        let c = &set.process_c;
        let sines = [&c.sine1, &c.sine2, &c.sine3, &c.sine4, &c.sine5].map(|s| s.value);
        let process_c = PeriodicTable::of(|minute| {
            let angle = minute * 2.0 * std::f64::consts::PI / DAY_MIN;
            (1..)
                .zip(sines)
                .map(|(order, weight)| weight * libm::sin(f64::from(order) * angle))
                .sum()
        });
        let tau_rise_min = set.homeostat.tau_rise.value * 60.0;
        let tau_fall_min = set.homeostat.tau_fall.value * 60.0;
        Self {
            tau_rise_min,
            tau_fall_min,
            amplitude: c.amplitude.value,
            after_mid_sleep_min: c.after_mid_sleep.value * 60.0,
            lowering: set.effort.lowering.value,
            share_at_stake: set.effort.share_at_stake.value,
            shortest_min: set.effort.shortest_sleep.value * 60.0,
            process_c,
            rise: libm::exp(-1.0 / tau_rise_min),
            fall: libm::exp(-1.0 / tau_fall_min),
        }
    }

    /// Pressure at habitual bedtime and waking, when every day is the same.
    ///
    /// # Equation
    ///
    /// ```text
    /// a = exp(-(24 - N)/tau_r),  e = exp(-N/tau_d);  S_bed = (1 - a)/(1 - a e);  S_wake = S_bed e
    /// ```
    ///
    /// # Units
    ///
    /// `need_h` hours of sleep a day, above 0 and below 24; results without unit, in (0, 1).
    ///
    /// # Source
    ///
    /// Daan, Beersma and Borbely 1984, Am J Physiol 246:R161 (asymptotes 1 and 0); steady state computed by this project.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::{ModelSets, sleep::SleepModel};
    /// let model = SleepModel::new(&ModelSets::embedded().sleep);
    /// let (bed, wake) = model.habitual_pressure(8.0);
    /// assert!((bed - 0.6234).abs() < 1e-4 && (wake - 0.0928).abs() < 1e-4);
    /// ```
    pub fn habitual_pressure(&self, need_h: f64) -> (f64, f64) {
        let a = libm::exp(-(24.0 - need_h) * 60.0 / self.tau_rise_min);
        let e = libm::exp(-need_h * 60.0 / self.tau_fall_min);
        let bed = (1.0 - a) / (1.0 - a * e);
        (bed, bed * e)
    }
}

/// What the surroundings allow at a minute.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Surroundings {
    /// Elapsed minute.
    pub minute: i64,
    /// Minute shown by the local clock, from the epoch's midnight.
    pub clock_min: i64,
    /// Off duty, home and past personal time.
    pub sleep_possible: bool,
    /// Latest waking before the next duty.
    pub alarm: Option<i64>,
}

/// A change of state.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Transition {
    /// Fell asleep at this minute.
    FellAsleep,
    /// Woke at this minute.
    Woke,
}

/// One person's sleep regulation.
#[derive(Debug, Clone, PartialEq)]
pub struct Sleeper {
    bed_min: f64,
    need_min: f64,
    upper: f64,
    lower: f64,
    /// Zero of process C at the habitual phase, minutes since the epoch's midnight.
    zero_min: f64,
    /// Pressure S.
    pressure: f64,
    asleep_since: Option<i64>,
    last_wake: i64,
    slept_in_night_min: f64,
    night: f64,
}

impl Sleeper {
    /// A person at `start`, minutes since the epoch, who has lived habitual days and is awake.
    pub fn habitual(model: &SleepModel, member: &Member, start: i64) -> Self {
        let bed_min = member.bed_h * 60.0;
        let need_min = member.need_h * 60.0;
        let zero_min = bed_min + need_min / 2.0 + model.after_mid_sleep_min;
        let (bed_pressure, wake_pressure) = model.habitual_pressure(member.need_h);
        let c_at = |minute: f64| model.process_c.at(minute - zero_min);
        let awake_min =
            crate::numeric::circular::wrap(Minute(start).as_f64() - bed_min - need_min, DAY_MIN);
        let night = ((Minute(start).as_f64() - bed_min + need_min / 2.0) / DAY_MIN).floor();
        Self {
            bed_min,
            need_min,
            upper: bed_pressure - model.amplitude * c_at(bed_min),
            lower: wake_pressure - model.amplitude * c_at(bed_min + need_min),
            zero_min,
            pressure: 1.0 - (1.0 - wake_pressure) * libm::exp(-awake_min / model.tau_rise_min),
            asleep_since: None,
            last_wake: start - Minute::nearest(awake_min).0,
            slept_in_night_min: need_min,
            night,
        }
    }

    /// Is the person asleep?
    pub fn asleep(&self) -> bool {
        self.asleep_since.is_some()
    }

    /// Minute of the last waking.
    pub fn last_wake(&self) -> i64 {
        self.last_wake
    }

    /// Decides at a whole minute; `displacement_min` is how much later `CBTmin` stands than on habitual days.
    pub fn decide(
        &mut self,
        model: &SleepModel,
        around: Surroundings,
        displacement_min: f64,
    ) -> Option<Transition> {
        let into_night = self.minutes_into_night(around.clock_min);
        let c = model
            .process_c
            .at(Minute(around.minute).as_f64() - self.zero_min - displacement_min);
        if let Some(onset) = self.asleep_since {
            let natural = self.pressure <= self.lower + model.amplitude * c
                && Minute(around.minute - onset).as_f64() >= model.shortest_min - TOLERANCE_MIN;
            if !around.sleep_possible || natural {
                self.asleep_since = None;
                self.last_wake = around.minute;
                return Some(Transition::Woke);
            }
            return None;
        }
        if self.falls_asleep(model, around, into_night, c) {
            self.asleep_since = Some(around.minute);
            return Some(Transition::FellAsleep);
        }
        None
    }

    /// Minutes since the sleep-counting day began, 4 h before a habitual bedtime of 8 h of sleep; a new one empties the count of sleep.
    fn minutes_into_night(&mut self, clock_min: i64) -> f64 {
        let from_start = Minute(clock_min).as_f64() - self.bed_min + self.need_min / 2.0;
        let night = ((from_start + TOLERANCE_MIN) / DAY_MIN).floor();
        if night > self.night {
            self.night = night;
            self.slept_in_night_min = 0.0;
        }
        from_start - night * DAY_MIN
    }

    fn falls_asleep(
        &self,
        model: &SleepModel,
        around: Surroundings,
        into_night: f64,
        c: f64,
    ) -> bool {
        let until_alarm = around.alarm.map_or(f64::INFINITY, |alarm| {
            Minute(alarm - around.minute).as_f64()
        });
        if !around.sleep_possible || until_alarm < model.shortest_min - TOLERANCE_MIN {
            return false;
        }
        let (allowed, effort) = self.intention(model, into_night, until_alarm);
        let upper = self.upper + model.amplitude * c;
        (allowed && self.pressure >= upper - model.lowering * effort)
            || self.pressure >= upper + model.lowering
    }

    /// Does the person want to sleep, and how much effort is made?
    ///
    /// A habitual night that has begun and of which less than half was slept is *owed*: sleep is wanted at full effort, until the middle of the waking day.
    /// Otherwise bedtime is the habitual one, advanced by the share of the night that an alarm would take.
    fn intention(&self, model: &SleepModel, into_night: f64, until_alarm: f64) -> (bool, f64) {
        let half = self.need_min / 2.0;
        let begun = into_night >= half - TOLERANCE_MIN;
        if begun
            && into_night < 720.0 + self.need_min - TOLERANCE_MIN
            && self.slept_in_night_min < self.need_min * model.share_at_stake
        {
            return (true, 1.0);
        }
        let until_bed = half - into_night + if begun { DAY_MIN } else { 0.0 };
        let wish = (until_bed + self.need_min - until_alarm).max(0.0);
        let advance = wish * (wish / self.need_min).min(1.0);
        let effort = ((self.need_min - until_alarm) / (model.share_at_stake * self.need_min))
            .clamp(0.0, 1.0);
        (until_bed <= advance + TOLERANCE_MIN, effort)
    }

    /// Lives one minute in the present state.
    pub fn live_a_minute(&mut self, model: &SleepModel) {
        if self.asleep() {
            self.slept_in_night_min += 1.0;
            self.pressure *= model.fall;
        } else {
            self.pressure = 1.0 - (1.0 - self.pressure) * model.rise;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physiology::ModelSets;

    #[test]
    fn habitual_pressure_agrees_with_the_reference() {
        // Fixed 23-07 sleep, asymptotes 1 and 0: circadian-models.md 2.4, computed there.
        let model = SleepModel::new(&ModelSets::embedded().sleep);
        let (bed, wake) = model.habitual_pressure(8.0);
        assert!((bed - 0.623376).abs() < 1e-6);
        assert!((wake - 0.092795).abs() < 1e-6);
    }

    #[test]
    fn thresholds_of_the_mean_member_agree_with_the_reference() {
        // Reference cases of the sleep mechanism: H0 0.629785, L0 0.156991.
        let sets = ModelSets::embedded();
        let model = SleepModel::new(&sets.sleep);
        let sleeper = Sleeper::habitual(&model, &Member::mean(&sets.ensemble, 30.0), -720);
        assert!((sleeper.upper - 0.629785).abs() < 1e-6);
        assert!((sleeper.lower - 0.156991).abs() < 1e-6);
        assert_eq!(sleeper.last_wake, -1020);
    }
}
