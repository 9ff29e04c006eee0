//! The drive of one member: circadian shape, sleep gate, waking pulse, sleep-debt term, stress.
//!
//! Between two edges (onset and end of a sleep, end of the gate's full depth, end of the pulse, `CBTmin`, evening) only the phase runs on.

use super::StressSpan;
use super::{Cascade, Load};
use crate::physiology::track::MemberTrack;
use crate::units::Minute;

/// The drive of a member from one minute to the next edge.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct DriveScene {
    /// Minutes since `CBTmin` at the start, and per minute.
    pub(super) phase: f64,
    pub(super) phase_rate: f64,
    /// Share of the drive taken by sleep at the start, and what half a minute leaves of it.
    pub(super) gate: f64,
    pub(super) gate_decay: f64,
    /// Waking pulse.
    pub(super) pulse: f64,
    /// Stress and sleep-debt factors.
    pub(super) factor: f64,
    /// First minute at which the scene must be asked for again.
    pub(super) until: i64,
}

/// Reads the drive of one member edge by edge.
#[derive(Debug)]
pub(super) struct DriveReader<'a> {
    cascade: &'a Cascade,
    track: &'a MemberTrack,
    /// Index of the first sleep that has not ended.
    sleep: usize,
    /// Gate weight of that sleep.
    weight: f64,
    /// Pulse of the last waking and the minute at which it ends.
    pulse: (f64, i64),
    /// Cycle of the last `CBTmin` met.
    cycle: usize,
    /// Debt multiplier by cycle; empty when the term is off.
    debt: Vec<f64>,
    /// Stretches of a higher or lower drive, ascending.
    stress: &'a [StressSpan],
    /// A new `CBTmin` counts from the next multiple of this many minutes on: phase is continuous there.
    step_min: i64,
}

impl<'a> DriveReader<'a> {
    pub(super) fn new(
        cascade: &'a Cascade,
        track: &'a MemberTrack,
        load: Load<'a>,
        (from, step_min): (Minute, i64),
    ) -> Self {
        let sleep = track.sleeps.partition_point(|s| s.to <= from);
        let mut reader = Self {
            cascade,
            track,
            sleep,
            weight: 0.0,
            pulse: (0.0, i64::MIN),
            cycle: 0,
            debt: debt_by_cycle(cascade, track, load.debt),
            stress: load.stress,
            step_min,
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

    /// First step minute at or after a decimal minute.
    fn step_from(&self, minute: f64) -> i64 {
        -(-Minute::from_which(minute).0).div_euclid(self.step_min) * self.step_min
    }

    /// The scene from `minute` on.
    pub(super) fn scene(&mut self, minute: i64) -> DriveScene {
        self.pass_sleeps(minute);
        let mut until = i64::MAX;
        let mut edge_at = |edge: i64| {
            if edge > minute {
                until = until.min(edge);
            }
        };
        let (phase, phase_rate, next_cbtmin) = self.phase(minute);
        edge_at(next_cbtmin);
        let (gate, gate_decay) = match self.track.sleeps.get(self.sleep) {
            Some(sleep) => {
                let full_to = sleep.from.0 + self.cascade.gate.full_min;
                edge_at(sleep.from.0);
                edge_at(full_to);
                edge_at(sleep.to.0);
                self.gate(minute, sleep.from.0, full_to)
            }
            None => (0.0, 1.0),
        };
        let pulse = if minute < self.pulse.1 {
            edge_at(self.pulse.1);
            self.pulse.0
        } else {
            0.0
        };
        let next_stress = self.stress.partition_point(|span| span.to.0 <= minute);
        let stress = self.stress.get(next_stress).map_or(1.0, |span| {
            edge_at(span.from.0);
            edge_at(span.to.0);
            if span.from.0 <= minute {
                span.factor
            } else {
                1.0
            }
        });
        let debt = if self.debt.is_empty() {
            1.0
        } else {
            let numbers = &self.cascade.debt;
            for edge in [numbers.from_min, numbers.to_min] {
                let wait = (edge - phase) / phase_rate;
                edge_at(Minute::from_which(Minute(minute).as_f64() + wait).0);
            }
            // A phase that reaches the edge within a millionth of a minute has reached it.
            if (numbers.from_min..numbers.to_min).contains(&(phase + 1e-6)) {
                1.0 + self.debt[self.cycle]
            } else {
                1.0
            }
        };
        DriveScene {
            phase,
            phase_rate,
            gate,
            gate_decay,
            pulse,
            factor: stress * debt,
            until,
        }
    }

    fn pass_sleeps(&mut self, minute: i64) {
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
    }

    /// Depth of the gate and its decay in half a minute.
    fn gate(&self, minute: i64, onset: i64, full_to: i64) -> (f64, f64) {
        let gate = &self.cascade.gate;
        let depth = gate.strength * self.weight;
        if minute < onset {
            (0.0, 1.0)
        } else if minute < full_to {
            (depth, 1.0)
        } else {
            let late = Minute(minute - full_to).as_f64();
            (
                depth * libm::exp(-late / gate.release_min),
                libm::exp(-0.5 / gate.release_min),
            )
        }
    }

    /// Minutes since `CBTmin`, their rate, and the step minute at which the next `CBTmin` has passed.
    fn phase(&mut self, minute: i64) -> (f64, f64, i64) {
        let cbtmins = &self.track.cbtmin_min;
        let now = Minute(minute).as_f64();
        while cbtmins.get(self.cycle + 1).is_some_and(|next| *next <= now) {
            self.cycle += 1;
        }
        let since = now - cbtmins[self.cycle];
        match cbtmins.get(self.cycle + 1) {
            Some(next) => {
                let rate = self.track.phase_rate(self.cycle);
                let wraps = 1440.0 * (since * rate / 1440.0).floor();
                (since * rate - wraps, rate, self.step_from(*next))
            }
            None => (since - 1440.0 * (since / 1440.0).floor(), 1.0, i64::MAX),
        }
    }
}

/// `q(L)` of each cycle; L = sleep need minus sleep in the 24 h that end 13 h after `CBTmin`. Empty when the term is off.
fn debt_by_cycle(cascade: &Cascade, track: &MemberTrack, debt: super::SleepDebt) -> Vec<f64> {
    if debt == super::SleepDebt::Off {
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
