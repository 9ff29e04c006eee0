//! Total serum cortisol from phase and sleep: what does the group-mean curve look like?
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `x1` | CRH | pg/mL |
//! | `x2` | ACTH (not shown to users: its maximum is not validated) | pg/mL |
//! | `x3` | total serum cortisol | nmol/L |
//! | `D` | drive: circadian shape, sleep gate, waking pulse, sleep-debt term | 1 |
//!
//! A screening model of a group mean, not a predictor of one person's value.
//! It has no slow memory and says nothing about recovery.

use super::pacemaker::LANES;
use super::parameters::CascadeSet;
use super::track::MemberTrack;
use crate::numeric::lane;
use crate::numeric::periodic_table::PeriodicTable;
use crate::units::Minute;

/// The equations with the numbers of a parameter set.
#[derive(Debug, Clone, PartialEq)]
pub struct Cascade {
    k0: f64,
    k1: f64,
    k2: f64,
    w1: f64,
    w2: f64,
    w3: f64,
    feedback_crh: f64,
    feedback_acth: f64,
    cubed_constant: f64,
    shape: PeriodicTable,
    gate: GateNumbers,
    pulse: f64,
    pulse_min: i64,
    pulse_phase_min: f64,
    debt: DebtNumbers,
    start: [f64; 3],
}

#[derive(Debug, Clone, PartialEq)]
struct GateNumbers {
    strength: f64,
    full_min: i64,
    release_min: f64,
    by_phase: bool,
    fades_to_h: f64,
    returns_from_h: f64,
    returns_to_h: f64,
}

#[derive(Debug, Clone, PartialEq)]
struct DebtNumbers {
    saturation: f64,
    scale_h: f64,
    from_min: f64,
    to_min: f64,
}

/// State of the members of a unit.
#[derive(Debug, Clone, PartialEq)]
pub struct CascadeState {
    /// CRH, pg/mL.
    pub crh: [f64; LANES],
    /// ACTH, pg/mL.
    pub acth: [f64; LANES],
    /// Total serum cortisol, nmol/L.
    pub cortisol: [f64; LANES],
}

/// Does short sleep raise the evening drive?
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SleepDebt {
    /// As in `screen`.
    On,
    /// As in the reference scenarios.
    Off,
}

impl Cascade {
    /// The equations with the numbers of a parameter set.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "durations are small whole minutes"
    )]
    pub fn new(set: &CascadeSet) -> Self {
        let rates = &set.rates;
        let w3 = std::f64::consts::LN_2 / rates.half_life_cortisol.value;
        let constant = rates.feedback_cortisol.value;
        Self {
            k0: rates.k0.value,
            k1: rates.k1.value,
            k2: w3 * constant / rates.acth_at_equilibrium.value,
            w1: std::f64::consts::LN_2 / rates.half_life_crh.value,
            w2: std::f64::consts::LN_2 / rates.half_life_acth.value,
            w3,
            feedback_crh: rates.feedback_crh.value,
            feedback_acth: rates.feedback_acth.value,
            cubed_constant: constant * constant * constant,
            shape: circadian_shape(set),
            gate: GateNumbers {
                strength: set.gate.strength.value,
                full_min: set.gate.full_for.value as i64,
                release_min: set.gate.release.value,
                by_phase: set.gate.biological_night.value > 0.5,
                fades_to_h: set.gate.fades_to.value,
                returns_from_h: set.gate.returns_from.value,
                returns_to_h: set.gate.returns_to.value,
            },
            pulse: set.waking.pulse.value,
            pulse_min: set.waking.duration.value as i64,
            pulse_phase_min: set.waking.best_phase.value,
            debt: DebtNumbers {
                saturation: set.debt.saturation.value,
                scale_h: set.debt.scale.value,
                from_min: set.debt.from_phase.value,
                to_min: set.debt.to_phase.value,
            },
            start: [
                set.start.crh.value,
                set.start.acth.value,
                set.start.cortisol.value,
            ],
        }
    }

    /// The state from which habitual days are lived.
    pub fn start(&self) -> CascadeState {
        CascadeState {
            crh: [self.start[0]; LANES],
            acth: [self.start[1]; LANES],
            cortisol: [self.start[2]; LANES],
        }
    }

    /// Cortisol of the tracks at each minute of [from, to], nmol/L, one row of lanes per minute.
    ///
    /// `state` is the state at `from` and afterwards the state at `to`.
    ///
    /// # Units
    ///
    /// nmol/L of total serum cortisol; one value per minute, the first at `from`.
    ///
    /// # Range
    ///
    /// The start is forgotten after three days. Tracks must hold the sleeps and `CBTmin`s of the stretch.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::cascade::{Cascade, SleepDebt};
    /// use acroshift::physiology::{Member, MemberTrack, ModelSets};
    /// use acroshift::units::Minute;
    /// let sets = ModelSets::embedded();
    /// let cascade = Cascade::new(&sets.cascade);
    /// // Five habitual nights 23-07 with CBTmin at 04:00, up to noon of the day before minute 0.
    /// let track = MemberTrack::habitual(Member::mean(&sets.ensemble, 30.0), -1200.0, 5);
    /// let mut state = cascade.start();
    /// let rows = cascade.run(&[track], SleepDebt::Off, (Minute(-6480), Minute(-720)), &mut state);
    /// // At 08:00 of the last morning the curve is near its peak of 428 nmol/L.
    /// let eight = rows[usize::try_from(-960 + 6480).unwrap()][0];
    /// assert!((eight - 427.4).abs() < 1.0);
    /// ```
    ///
    /// # Panics
    ///
    /// Panics when more than [`LANES`] tracks are given; the caller cuts the ensemble into units.
    pub fn run(
        &self,
        tracks: &[MemberTrack],
        debt: SleepDebt,
        (from, to): (Minute, Minute),
        state: &mut CascadeState,
    ) -> Vec<[f64; LANES]> {
        assert!(tracks.len() <= LANES, "a unit holds at most 16 members");
        let mut drives: Vec<DriveReader<'_>> = tracks
            .iter()
            .map(|track| DriveReader::new(self, track, debt, from))
            .collect();
        let mut rows = vec![state.cortisol];
        for minute in from.0..to.0 {
            // Drive at the start, in the middle and at the end of the minute.
            let mut at = [[0.0; 3]; LANES];
            for (lane, reader) in at.iter_mut().zip(&mut drives) {
                *lane = reader.minute(minute);
            }
            self.step(state, &at);
            rows.push(state.cortisol);
        }
        rows
    }

    /// One minute of classical Runge-Kutta; the drive at the end of the step is its left limit.
    ///
    /// # Equation
    ///
    /// ```text
    /// h   = x3^3 / (c^3 + x3^3)
    /// x1' = k0 D (1 - 0.5 h) - w1 x1;  x2' = k1 (1 - 0.5 h) x1 - w2 x2;  x3' = k2 x2 - w3 x3
    /// ```
    ///
    /// # Source
    ///
    /// Vinther, Andersen and Ottesen 2011, J Math Biol 63:663 (equations from memory; they reproduce the published equilibrium), with a drive D in the place of its constant.
    pub fn step(&self, state: &mut CascadeState, drive: &[[f64; 3]; LANES]) {
        for (i, [start, middle, end]) in drive.iter().enumerate() {
            let x = [state.crh[i], state.acth[i], state.cortisol[i]];
            let a = self.rate(x, *start);
            let b = self.rate(moved(x, a, 0.5), *middle);
            let c = self.rate(moved(x, b, 0.5), *middle);
            let d = self.rate(moved(x, c, 1.0), *end);
            state.crh[i] = x[0] + (a[0] + 2.0 * b[0] + 2.0 * c[0] + d[0]) / 6.0;
            state.acth[i] = x[1] + (a[1] + 2.0 * b[1] + 2.0 * c[1] + d[1]) / 6.0;
            state.cortisol[i] = x[2] + (a[2] + 2.0 * b[2] + 2.0 * c[2] + d[2]) / 6.0;
        }
    }

    #[inline]
    fn rate(&self, [crh, acth, cortisol]: [f64; 3], drive: f64) -> [f64; 3] {
        let cubed = cortisol * cortisol * cortisol;
        let feedback = cubed / (self.cubed_constant + cubed);
        [
            self.k0 * drive * (1.0 - self.feedback_crh * feedback) - self.w1 * crh,
            self.k1 * (1.0 - self.feedback_acth * feedback) * crh - self.w2 * acth,
            self.k2 * acth - self.w3 * cortisol,
        ]
    }

    /// How strongly a sleep gates the drive, by the phase of its onset: hours from `CBTmin`, in [-12, 12).
    ///
    /// # Source
    ///
    /// Weibel 1995: night sleep lowers secretion, sleep begun at the habitual waking time does not. Corners: this program's choice.
    fn gate_weight(&self, onset_phase_min: f64) -> f64 {
        if !self.gate.by_phase {
            return 1.0;
        }
        let hours = crate::numeric::circular::wrap_half(onset_phase_min, 1440.0) / 60.0;
        let gate = &self.gate;
        if hours <= 0.0 {
            1.0
        } else if hours < gate.fades_to_h {
            1.0 - hours / gate.fades_to_h
        } else if hours <= gate.returns_from_h {
            0.0
        } else {
            ((hours - gate.returns_from_h) / (gate.returns_to_h - gate.returns_from_h)).min(1.0)
        }
    }

    /// Size of the waking pulse by the phase of waking.
    fn pulse_at(&self, phase_min: f64) -> f64 {
        let angle = 2.0 * std::f64::consts::PI * (phase_min - self.pulse_phase_min) / 1440.0;
        self.pulse * (1.0 + libm::cos(angle)) / 2.0
    }
}

#[inline]
fn moved(x: [f64; 3], rate: [f64; 3], minutes: f64) -> [f64; 3] {
    [
        x[0] + minutes * rate[0],
        x[1] + minutes * rate[1],
        x[2] + minutes * rate[2],
    ]
}

/// Circadian shape of the drive over minutes since `CBTmin`, already scaled.
fn circadian_shape(set: &CascadeSet) -> PeriodicTable {
    let drive = &set.drive;
    let hill = |value: f64, at: f64, power: f64| {
        let raised = libm::pow(value, power);
        raised / (raised + libm::pow(at, power))
    };
    PeriodicTable::of(|phase_min| {
        let s = crate::numeric::circular::wrap(phase_min - drive.offset.value, 1440.0);
        let rise = hill(s, drive.rise_at.value, drive.rise_power.value);
        let fall = hill(1440.0 - s, drive.fall_at.value, drive.fall_power.value);
        drive.scale.value * (rise * fall + drive.floor.value)
    })
}

/// Reads the drive of one member minute by minute.
#[derive(Debug)]
struct DriveReader<'a> {
    cascade: &'a Cascade,
    track: &'a MemberTrack,
    /// Index of the first sleep that has not ended.
    sleep: usize,
    /// Gate weight of that sleep.
    weight: f64,
    /// Pulse of the last waking and the minute at which it ends.
    pulse: (f64, i64),
    /// Debt multiplier by cycle.
    debt: Vec<f64>,
}

impl<'a> DriveReader<'a> {
    fn new(cascade: &'a Cascade, track: &'a MemberTrack, debt: SleepDebt, from: Minute) -> Self {
        let sleep = track.sleeps.partition_point(|s| s.to <= from);
        let mut reader = Self {
            cascade,
            track,
            sleep,
            weight: 0.0,
            pulse: (0.0, i64::MIN),
            debt: debt_by_cycle(cascade, track, debt),
        };
        reader.weigh();
        if let Some(last) = sleep.checked_sub(1) {
            reader.wake(track.sleeps[last].to);
        }
        reader
    }

    fn weigh(&mut self) {
        if let Some(sleep) = self.track.sleeps.get(self.sleep) {
            let phase = self.track.phase_min(sleep.from.as_f64());
            self.weight = self.cascade.gate_weight(phase);
        }
    }

    fn wake(&mut self, at: Minute) {
        let size = self.cascade.pulse_at(self.track.phase_min(at.as_f64()));
        self.pulse = (size, at.0 + self.cascade.pulse_min);
    }

    /// Drive at the start, in the middle and at the end of a minute.
    fn minute(&mut self, minute: i64) -> [f64; 3] {
        while let Some(sleep) = self.track.sleeps.get(self.sleep) {
            if sleep.to.0 > minute {
                break;
            }
            let (woke, cut) = (sleep.to, sleep.cut);
            self.sleep += 1;
            self.weigh();
            if !cut {
                self.wake(woke);
            }
        }
        let onset = self
            .track
            .sleeps
            .get(self.sleep)
            .map(|sleep| sleep.from.0)
            .filter(|onset| *onset <= minute);
        let pulse = if minute < self.pulse.1 {
            self.pulse.0
        } else {
            0.0
        };
        let start = Minute(minute).as_f64();
        [0.0, 0.5, 1.0].map(|part| self.at(start + part, onset, pulse))
    }

    fn at(&self, minute: f64, onset: Option<i64>, pulse: f64) -> f64 {
        let phase = self.track.phase_min(minute);
        let circadian = self.cascade.shape.at(phase);
        let gate = onset.map_or(1.0, |onset| self.gate(minute - Minute(onset).as_f64()));
        (circadian * gate + pulse) * self.debt_factor(minute, phase)
    }

    fn gate(&self, since_onset_min: f64) -> f64 {
        let gate = &self.cascade.gate;
        let late = (since_onset_min - Minute(gate.full_min).as_f64()).max(0.0);
        1.0 - gate.strength * self.weight * lane::exp(-late / gate.release_min)
    }

    fn debt_factor(&self, minute: f64, phase: f64) -> f64 {
        let debt = &self.cascade.debt;
        if self.debt.is_empty() || !(debt.from_min..debt.to_min).contains(&phase) {
            return 1.0;
        }
        let cycle = self
            .track
            .cbtmin_min
            .partition_point(|cbtmin| *cbtmin <= minute)
            .max(1)
            - 1;
        1.0 + self.debt[cycle]
    }
}

/// `q(L)` of each cycle; L = sleep need minus sleep in the 24 h that end 13 h after `CBTmin`. Empty when the term is off.
fn debt_by_cycle(cascade: &Cascade, track: &MemberTrack, debt: SleepDebt) -> Vec<f64> {
    if debt == SleepDebt::Off {
        return Vec::new();
    }
    let numbers = &cascade.debt;
    track
        .cbtmin_min
        .iter()
        .map(|cbtmin| {
            let end = Minute::nearest(cbtmin + numbers.from_min);
            let known = track.sleeps.first().is_some_and(|s| s.from <= end + -1440);
            if !known {
                return 0.0;
            }
            let slept = track.sleep_h(end + -1440, end);
            let lost = (track.member.need_h - slept).max(0.0);
            numbers.saturation * (1.0 - libm::exp(-lost / numbers.scale_h))
        })
        .collect()
}
