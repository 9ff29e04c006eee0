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
    /// The step in which a marker was last passed.
    pub last_passing: Passing,
}

/// The step in which at least one lane passed its marker.
#[derive(Debug, Clone, PartialEq)]
pub struct Passing {
    /// Its length, minutes.
    pub minutes: i64,
    /// First variable before the step.
    pub first: [f64; LANES],
    /// Second variable before the step.
    pub second: [f64; LANES],
    /// 1 in the lanes that passed, else 0.
    pub lanes: [f64; LANES],
}

impl PacemakerState {
    /// The same state in every lane.
    pub fn everywhere([first, second, n]: [f64; 3]) -> Self {
        Self {
            first: [first; LANES],
            second: [second; LANES],
            n: [n; LANES],
            last_passing: Passing {
                minutes: 0,
                first: [first; LANES],
                second: [second; LANES],
                lanes: [0.0; LANES],
            },
        }
    }
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
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Moved {
    /// Minutes moved; fewer than asked when a marker was passed on the way.
    pub minutes: i64,
    /// Did at least one lane pass its marker in the last step? The state tells more.
    pub passed: bool,
}

/// A unit to be moved by `minutes` from the minute `from`, or to the end of the step in which the first marker is passed.
pub(super) struct Advance<'a, O> {
    pub(super) oscillator: O,
    pub(super) state: &'a mut PacemakerState,
    pub(super) drive: &'a UnitDrive,
    pub(super) pace: &'a [f64; LANES],
    pub(super) from: i64,
    pub(super) minutes: i64,
    pub(super) longest_step: i64,
}

impl<O: Oscillator> Work for Advance<'_, O> {
    type Result = Moved;

    #[inline(always)]
    fn done(self) -> Moved {
        let mut minutes = 0;
        let mut passed = false;
        while minutes < self.minutes && !passed {
            let to_multiple =
                self.longest_step - (self.from + minutes).rem_euclid(self.longest_step);
            let step = (self.minutes - minutes).min(to_multiple);
            passed = step_lanes(self.oscillator, self.state, self.drive, self.pace, step);
            minutes += step;
        }
        Moved { minutes, passed }
    }
}

/// One step of all lanes; says whether any passed its marker.
#[inline(always)]
fn step_lanes(
    oscillator: impl Oscillator,
    state: &mut PacemakerState,
    drive: &UnitDrive,
    pace: &[f64; LANES],
    minutes: i64,
) -> bool {
    let (first, second, n) = (state.first, state.second, state.n);
    let (mut to_first, mut to_second, mut to_n) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
    let mut passed = [0.0; LANES];
    let step_h = crate::units::minutes_to_hours(minutes);
    let (half, whole) = drive.left_after(minutes);
    for lane in 0..LANES {
        // The photoreceptors relax towards their steady share: exact, whatever the step.
        let away = n[lane] - drive.steady[lane];
        let middle = drive.steady[lane] + away * half[lane];
        let end = drive.steady[lane] + away * whole[lane];
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
        let after = oscillator.step(before, input, step_h);
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
    let any = passed.iter().sum::<f64>() > 0.0;
    if any {
        state.last_passing = Passing {
            minutes,
            first,
            second,
            lanes: passed,
        };
    }
    any
}
