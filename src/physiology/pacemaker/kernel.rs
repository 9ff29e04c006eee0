//! The integration loop: sixteen members side by side, steps that end on the edges of their lives.
//!
//! Between two edges light and sleep are constant, so the photoreceptors are known exactly and only two variables are integrated.
//! The loop over lanes has no branch and calls nothing; it is compiled for each instruction set.

use super::LANES;
use super::drive::UnitDrive;
use crate::numeric::instruction_set::Work;

/// State of the members of a unit, structure of arrays.
#[derive(Debug, Clone, PartialEq)]
pub struct PacemakerState {
    /// `x`, or `R`.
    pub first: [f64; LANES],
    /// `xc`, or `psi` (radians, growing).
    pub second: [f64; LANES],
    /// Share of activated photoreceptors.
    pub n: [f64; LANES],
}

/// What drives one lane in one step.
#[derive(Debug, Clone, Copy)]
pub(super) struct LaneInput {
    /// `G alpha (1 - n)` at the start, in the middle and at the end of the step.
    pub(super) drive: [f64; 3],
    /// Sleep and waking.
    pub(super) arousal: f64,
    /// The constant that gives the member its period.
    pub(super) pace: f64,
}

/// Two variables that turn once a day.
pub(super) trait Oscillator: Copy {
    /// One step of one lane.
    fn step(&self, state: [f64; 2], input: LaneInput, step_h: f64) -> [f64; 2];
    /// Has the marker been passed between two states?
    fn passed(&self, before: [f64; 2], after: [f64; 2]) -> bool;
}

/// One classical Runge-Kutta step of two variables; the drive is given at the start, in the middle and at the end.
#[inline(always)]
pub(super) fn runge_kutta(
    state: [f64; 2],
    drive: [f64; 3],
    step: f64,
    rate: impl Fn([f64; 2], f64) -> [f64; 2],
) -> [f64; 2] {
    let moved = |by: f64, k: [f64; 2]| [state[0] + by * k[0], state[1] + by * k[1]];
    let half = step * 0.5;
    let a = rate(state, drive[0]);
    let b = rate(moved(half, a), drive[1]);
    let c = rate(moved(half, b), drive[1]);
    let d = rate(moved(step, c), drive[2]);
    let sixth = step * (1.0 / 6.0);
    [
        state[0] + sixth * ((a[0] + d[0]) + 2.0 * (b[0] + c[0])),
        state[1] + sixth * ((a[1] + d[1]) + 2.0 * (b[1] + c[1])),
    ]
}

/// How far a unit was moved.
#[derive(Debug, Clone, PartialEq)]
pub struct Moved {
    /// Minutes moved; fewer than asked when a marker was passed on the way.
    pub minutes: i64,
    /// The last step, where at least one lane passed its marker in it.
    pub passed: Option<LastStep>,
}

/// The step in which a marker was passed.
#[derive(Debug, Clone, PartialEq)]
pub struct LastStep {
    /// Its length, minutes.
    pub minutes: i64,
    /// First variable before the step.
    pub first: [f64; LANES],
    /// Second variable before the step.
    pub second: [f64; LANES],
}

/// A unit to be moved by `minutes`, or to the end of the step in which the first marker is passed.
pub(super) struct Advance<'a, O> {
    pub(super) oscillator: O,
    pub(super) state: &'a mut PacemakerState,
    pub(super) drive: &'a UnitDrive,
    pub(super) pace: &'a [f64; LANES],
    pub(super) minutes: i64,
    pub(super) longest_step: i64,
}

impl<O: Oscillator> Work for Advance<'_, O> {
    type Result = Moved;

    #[inline(always)]
    fn done(self) -> Moved {
        let mut done = 0;
        let mut ready = Ready::of(self.drive, 0);
        while done < self.minutes {
            let step = (self.minutes - done).min(self.longest_step);
            if step != ready.minutes {
                ready = Ready::of(self.drive, step);
            }
            let before = (self.state.first, self.state.second);
            let passed = step_lanes(self.oscillator, self.state, &ready, self.pace);
            done += step;
            if passed {
                return Moved {
                    minutes: done,
                    passed: Some(LastStep {
                        minutes: step,
                        first: before.0,
                        second: before.1,
                    }),
                };
            }
        }
        Moved {
            minutes: done,
            passed: None,
        }
    }
}

/// Constants of a step of a given length under constant light.
struct Ready<'a> {
    minutes: i64,
    step_h: f64,
    drive: &'a UnitDrive,
    half: [f64; LANES],
    whole: [f64; LANES],
}

impl<'a> Ready<'a> {
    #[inline(always)]
    fn of(drive: &'a UnitDrive, minutes: i64) -> Self {
        let mut half = [1.0; LANES];
        for _ in 0..minutes {
            for lane in 0..LANES {
                half[lane] *= drive.decay[lane];
            }
        }
        let mut whole = half;
        for lane in 0..LANES {
            whole[lane] *= half[lane];
        }
        Self {
            minutes,
            step_h: crate::units::minutes_to_hours(minutes),
            drive,
            half,
            whole,
        }
    }
}

/// One step of all lanes; says whether any passed its marker.
#[inline(always)]
fn step_lanes(
    oscillator: impl Oscillator,
    state: &mut PacemakerState,
    ready: &Ready<'_>,
    pace: &[f64; LANES],
) -> bool {
    let (first, second, n) = (state.first, state.second, state.n);
    let (mut to_first, mut to_second, mut to_n) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
    let mut passed = [0.0; LANES];
    let drive = ready.drive;
    for lane in 0..LANES {
        // The photoreceptors relax towards their steady share: exact, whatever the step.
        let away = n[lane] - drive.steady[lane];
        let middle = drive.steady[lane] + away * ready.half[lane];
        let end = drive.steady[lane] + away * ready.whole[lane];
        let gain = drive.gain_alpha[lane];
        let input = LaneInput {
            drive: [
                gain * (1.0 - n[lane]),
                gain * (1.0 - middle),
                gain * (1.0 - end),
            ],
            arousal: drive.arousal[lane],
            pace: pace[lane],
        };
        let before = [first[lane], second[lane]];
        let after = oscillator.step(before, input, ready.step_h);
        to_first[lane] = after[0];
        to_second[lane] = after[1];
        to_n[lane] = end;
        passed[lane] = if oscillator.passed(before, after) {
            1.0
        } else {
            0.0
        };
    }
    state.first = to_first;
    state.second = to_second;
    state.n = to_n;
    passed.iter().sum::<f64>() > 0.0
}
