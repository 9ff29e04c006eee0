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
    shortest_min: i64,
    process_c: PeriodicTable,
    /// Farthest that process C moves a threshold.
    reach: f64,
    /// Distance of the minutes at which sleep is decided.
    grid_min: i64,
    /// What a step of the grid leaves of the distance from 1, and of the pressure.
    rise: f64,
    fall: f64,
}

/// Distance of the minutes at which members decide on sleep.
pub const SLEEP_GRID_MIN: i64 = 1;

impl SleepModel {
    /// The rules with the numbers of a parameter set.
    pub fn new(set: &SleepSet) -> Self {
        Self::on_grid(set, SLEEP_GRID_MIN)
    }

    /// The same with decisions at whole multiples of `grid_min` minutes, for convergence tests.
    pub fn on_grid(set: &SleepSet, grid_min: i64) -> Self {
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
            shortest_min: Minute::nearest(set.effort.shortest_sleep.value * 60.0).0,
            reach: c.amplitude.value * farthest(&process_c),
            process_c,
            grid_min,
            rise: libm::exp(-Minute(grid_min).as_f64() / tau_rise_min),
            fall: libm::exp(-Minute(grid_min).as_f64() / tau_fall_min),
        }
    }

    /// The first minute at or after a decimal one at which sleep is decided.
    pub fn on_or_after(&self, minute: f64) -> i64 {
        let whole = Minute::from_which(minute).0;
        -(-whole).div_euclid(self.grid_min) * self.grid_min
    }

    fn next_decision(&self, minute: i64) -> i64 {
        (minute.div_euclid(self.grid_min) + 1) * self.grid_min
    }

    /// What the minutes from `from` to `to` leave of a distance that falls with `tau_min`; `step` is what one step of the grid leaves.
    fn left(&self, from: i64, to: i64, tau_min: f64, step: f64) -> f64 {
        if to - from == self.grid_min {
            step
        } else {
            libm::exp(-Minute(to - from).as_f64() / tau_min)
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

/// Farthest value of a table from 0, with room for what lies between its entries.
fn farthest(table: &PeriodicTable) -> f64 {
    const ROOM: f64 = 1.001;
    (0..1440)
        .map(|minute| table.at(Minute(minute).as_f64()).abs())
        .fold(0.0, f64::max)
        * ROOM
}

/// What the surroundings allow for a while.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Surroundings {
    /// Off duty, home and past personal time.
    pub sleep_possible: bool,
    /// Latest waking before the next duty.
    pub alarm: Option<i64>,
    /// They hold up to this minute.
    pub until: i64,
    /// What the local clock shows beyond elapsed minutes.
    pub clock_shift_min: i64,
}

/// One person's sleep regulation.
///
/// Between two changes of state the pressure is an exponential, so the next change is looked for ahead and nothing is done on the way.
#[derive(Debug, Clone, PartialEq)]
pub struct Sleeper {
    bed_min: f64,
    need_min: f64,
    upper: f64,
    lower: f64,
    /// Zero of process C at the habitual phase, minutes since the epoch's midnight.
    zero_min: f64,
    /// Pressure S at the last change.
    pressure: f64,
    changed_at: i64,
    asleep: bool,
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
            changed_at: start,
            asleep: false,
            last_wake: start - Minute::nearest(awake_min).0,
            slept_in_night_min: need_min,
            night,
        }
    }

    /// Is the person asleep?
    pub fn asleep(&self) -> bool {
        self.asleep
    }

    /// Minute of the last waking.
    pub fn last_wake(&self) -> i64 {
        self.last_wake
    }

    /// Falls asleep or wakes.
    pub fn turn(&mut self, model: &SleepModel, minute: i64, clock_shift_min: i64) {
        self.pressure = self.pressure_at(model, minute);
        let (night, into_night) = self.place_in_night(Minute(minute + clock_shift_min).as_f64());
        if night > self.night {
            self.night = night;
            self.slept_in_night_min = 0.0;
        }
        if self.asleep {
            // What was slept before this sleep-counting day began does not count.
            self.slept_in_night_min += Minute(minute - self.changed_at).as_f64().min(into_night);
            self.last_wake = minute;
        }
        self.asleep = !self.asleep;
        self.changed_at = minute;
    }

    /// The minute, from `from` on and while the surroundings hold, at which the person falls asleep or wakes by itself.
    ///
    /// `displacement_min` is how much later `CBTmin` stands than on habitual days.
    pub fn next_change(
        &self,
        model: &SleepModel,
        from: i64,
        around: &Surroundings,
        displacement_min: f64,
    ) -> Option<i64> {
        let zero_min = self.zero_min + displacement_min;
        if self.asleep {
            self.next_waking(model, from, around, zero_min)
        } else {
            self.next_onset(model, from, around, zero_min)
        }
    }

    fn pressure_at(&self, model: &SleepModel, minute: i64) -> f64 {
        let since = Minute(minute - self.changed_at).as_f64();
        if self.asleep {
            self.pressure * libm::exp(-since / model.tau_fall_min)
        } else {
            1.0 - (1.0 - self.pressure) * libm::exp(-since / model.tau_rise_min)
        }
    }

    fn next_waking(
        &self,
        model: &SleepModel,
        from: i64,
        around: &Surroundings,
        zero_min: f64,
    ) -> Option<i64> {
        let mut minute =
            from.max(model.on_or_after(Minute(self.changed_at + model.shortest_min).as_f64()));
        // Above this pressure no phase lets the person wake.
        let highest = self.lower + model.reach;
        let now = self.pressure_at(model, minute);
        if now > highest {
            let wait = model.tau_fall_min * libm::log(now / highest);
            minute = minute.max(model.on_or_after(Minute(minute).as_f64() + wait) - model.grid_min);
        }
        let mut pressure = self.pressure_at(model, minute);
        while minute < around.until {
            let c = model.process_c.at(Minute(minute).as_f64() - zero_min);
            if pressure <= self.lower + model.amplitude * c {
                return Some(minute);
            }
            let next = model.next_decision(minute);
            pressure *= model.left(minute, next, model.tau_fall_min, model.fall);
            minute = next;
        }
        None
    }

    fn next_onset(
        &self,
        model: &SleepModel,
        from: i64,
        around: &Surroundings,
        zero_min: f64,
    ) -> Option<i64> {
        if !around.sleep_possible {
            return None;
        }
        let until = around.alarm.map_or(around.until, |alarm| {
            around.until.min(alarm - model.shortest_min + 1)
        });
        let mut minute = from;
        // Below this pressure no phase and no effort lets the person fall asleep.
        let lowest = self.upper - model.reach - model.lowering;
        let now = self.pressure_at(model, minute);
        if now < lowest {
            let wait = model.tau_rise_min * libm::log((1.0 - now) / (1.0 - lowest));
            minute = minute.max(model.on_or_after(Minute(minute).as_f64() + wait) - model.grid_min);
        }
        let mut deficit = 1.0 - self.pressure_at(model, minute);
        while minute < until {
            if self.falls_asleep(model, minute, around, 1.0 - deficit, zero_min) {
                return Some(minute);
            }
            let next = model.next_decision(minute);
            deficit *= model.left(minute, next, model.tau_rise_min, model.rise);
            minute = next;
        }
        None
    }

    /// The sleep-counting day of a clock minute and the minutes since it began, 4 h before a habitual bedtime of 8 h of sleep.
    fn place_in_night(&self, clock_min: f64) -> (f64, f64) {
        let from_start = clock_min - self.bed_min + self.need_min / 2.0;
        let night = ((from_start + TOLERANCE_MIN) / DAY_MIN).floor();
        (night, from_start - night * DAY_MIN)
    }

    fn falls_asleep(
        &self,
        model: &SleepModel,
        minute: i64,
        around: &Surroundings,
        pressure: f64,
        zero_min: f64,
    ) -> bool {
        let until_alarm = around
            .alarm
            .map_or(f64::INFINITY, |alarm| Minute(alarm - minute).as_f64());
        let clock_min = Minute(minute + around.clock_shift_min).as_f64();
        let (night, into_night) = self.place_in_night(clock_min);
        let slept = if night > self.night {
            0.0
        } else {
            self.slept_in_night_min
        };
        let (allowed, effort) = self.intention(model, into_night, until_alarm, slept);
        // Not allowed: asleep only when overwhelmed.
        let threshold = if allowed {
            self.upper - model.lowering * effort
        } else {
            self.upper + model.lowering
        };
        pressure >= threshold - model.reach && {
            let c = model.process_c.at(Minute(minute).as_f64() - zero_min);
            pressure >= threshold + model.amplitude * c
        }
    }

    /// Does the person want to sleep, and how much effort is made?
    ///
    /// A habitual night that has begun and of which less than half was slept is *owed*: sleep is wanted at full effort, until the middle of the waking day.
    /// Otherwise bedtime is the habitual one, advanced by the share of the night that an alarm would take.
    fn intention(
        &self,
        model: &SleepModel,
        into_night: f64,
        until_alarm: f64,
        slept_min: f64,
    ) -> (bool, f64) {
        let half = self.need_min / 2.0;
        let begun = into_night >= half - TOLERANCE_MIN;
        if begun
            && into_night < 720.0 + self.need_min - TOLERANCE_MIN
            && slept_min < self.need_min * model.share_at_stake
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
        // Reference cases of the sleep mechanism, computed with amplitude 0.065: H0 0.629785, L0 0.156991.
        let mut sets = ModelSets::embedded();
        sets.sleep.process_c.amplitude.value = 0.065;
        let model = SleepModel::new(&sets.sleep);
        let sleeper = Sleeper::habitual(&model, &Member::mean(&sets.ensemble, 30.0), -720);
        assert!((sleeper.upper - 0.629785).abs() < 1e-6);
        assert!((sleeper.lower - 0.156991).abs() < 1e-6);
        assert_eq!(sleeper.last_wake, -1020);
    }
}
