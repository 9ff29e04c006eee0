//! Total serum cortisol from phase and sleep: what does the group-mean curve look like?
//!
//! ```text
//! h   = x3^3 / (c^3 + x3^3)
//! x1' = k0 D (1 - 0.5 h) - w1 x1;  x2' = k1 (1 - 0.5 h) x1 - w2 x2;  x3' = k2 x2 - w3 x3
//! ```
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `x1` | CRH | pg/mL |
//! | `x2` | ACTH (not shown to users: its maximum is not validated) | pg/mL |
//! | `x3` | total serum cortisol | nmol/L |
//! | `D` | drive: circadian shape, sleep gate, waking pulse, sleep-debt term | 1 |
//!
//! Source: Vinther, Andersen and Ottesen 2011, J Math Biol 63:663 (equations from memory; they reproduce the published equilibrium), with a drive D in the place of its constant.
//!
//! A screening model of a group mean, not a predictor of one person's value.
//! It has no slow memory and says nothing about recovery.
#![expect(
    clippy::inline_always,
    reason = "the loop over lanes is compiled for several instruction sets; what it calls must be inlined"
)]

mod drive;
mod run;

pub use run::{CascadeRun, Rows};

use super::pacemaker::LANES;
use super::parameters::CascadeSet;
use super::track::MemberTrack;
use crate::numeric::instruction_set::InstructionSet;
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
    instructions: InstructionSet,
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

/// Does short sleep raise the evening drive?
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SleepDebt {
    /// As in `screen`.
    On,
    /// As in the reference scenarios.
    Off,
}

/// A stretch in which the drive is higher or lower than without stress.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StressSpan {
    /// First minute.
    pub from: Minute,
    /// First minute after it.
    pub to: Minute,
    /// Factor on the drive; 1 without stress.
    pub factor: f64,
}

/// What acts on the drive beside phase and sleep.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Load<'a> {
    /// Lost sleep.
    pub debt: SleepDebt,
    /// Stress, ascending and disjoint; no stretch means none.
    pub stress: &'a [StressSpan],
}

impl Load<'_> {
    /// Nothing at all, as in the reference scenarios.
    pub const NONE: Self = Self {
        debt: SleepDebt::Off,
        stress: &[],
    };
    /// Lost sleep alone, as in `screen` without a stress setting.
    pub const DEBT: Self = Self {
        debt: SleepDebt::On,
        stress: &[],
    };
}

impl Cascade {
    /// The equations with the numbers of a parameter set, on the best instruction set of this machine.
    pub fn new(set: &CascadeSet) -> Self {
        Self::on(InstructionSet::best(), set)
    }

    /// The same on an instruction set of one's choice; the results have the same bits on all.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "durations are small whole minutes"
    )]
    pub fn on(instructions: InstructionSet, set: &CascadeSet) -> Self {
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
            instructions,
        }
    }

    /// Cortisol of the tracks from `from` on, ready to be advanced.
    ///
    /// # Panics
    ///
    /// Panics when more than [`LANES`] tracks are given; the caller cuts the ensemble into units.
    pub fn begin<'a>(
        &'a self,
        tracks: &'a [MemberTrack],
        load: Load<'a>,
        from: Minute,
    ) -> CascadeRun<'a> {
        assert!(tracks.len() <= LANES, "a unit holds at most 16 members");
        CascadeRun::new(self, tracks, load, from)
    }

    /// Rows of a whole stretch, one every `step_min` minutes from `from` to `to`.
    ///
    /// # Units
    ///
    /// nmol/L of total serum cortisol.
    ///
    /// # Range
    ///
    /// The start is forgotten after three days. Tracks must hold the sleeps and `CBTmin`s of the stretch.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::cascade::{Cascade, Load};
    /// use acroshift::physiology::{Member, MemberTrack, ModelSets};
    /// use acroshift::units::Minute;
    /// let sets = ModelSets::embedded();
    /// let cascade = Cascade::new(&sets.cascade);
    /// // Five habitual nights 23-07 with CBTmin at 04:00, up to noon of the day before minute 0.
    /// let track = MemberTrack::habitual(Member::mean(&sets.ensemble, 30.0), -1200.0, 5);
    /// let rows = cascade.rows(&[track], Load::NONE, (Minute(-6480), Minute(-720)), 2);
    /// // At 08:00 of the last morning the curve is near its peak of 428 nmol/L.
    /// let eight = rows.at(Minute(-960)).expect("inside the stretch")[0];
    /// assert!((eight - 427.4).abs() < 1.0);
    /// ```
    ///
    /// # Panics
    ///
    /// As [`Cascade::begin`].
    pub fn rows(
        &self,
        tracks: &[MemberTrack],
        load: Load<'_>,
        (from, to): (Minute, Minute),
        step_min: i64,
    ) -> Rows {
        let mut rows = Rows::new(from, step_min);
        self.begin(tracks, load, from).advance(to, &mut rows);
        rows
    }

    /// Right-hand side of the equations, per minute.
    #[inline(always)]
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
