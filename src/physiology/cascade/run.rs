//! The integration loop of the cascade: sixteen members side by side, steps that end on the edges of their drives.

use super::drive::DriveReader;
use super::{Cascade, Load};
use crate::numeric::instruction_set::Work;
use crate::physiology::pacemaker::LANES;
use crate::physiology::track::MemberTrack;
use crate::units::Minute;

/// Cortisol of the members of a unit at even distances, nmol/L, one row of lanes for each.
#[derive(Debug, Clone, PartialEq)]
pub struct Rows {
    from: Minute,
    step_min: i64,
    held: Vec<[f64; LANES]>,
}

impl Rows {
    /// No rows yet; the first will stand at `from`.
    pub fn new(from: Minute, step_min: i64) -> Self {
        Self {
            from,
            step_min,
            held: Vec::new(),
        }
    }

    /// Minutes between two rows.
    pub fn step_min(&self) -> i64 {
        self.step_min
    }

    /// Minute of a row.
    pub fn minute(&self, index: usize) -> Minute {
        self.from + i64::try_from(index).unwrap_or(i64::MAX) * self.step_min
    }

    /// Index of the first row at or after `minute`, if it is held.
    pub fn index(&self, minute: Minute) -> Option<usize> {
        let steps = -(self.from - minute).div_euclid(self.step_min);
        let index = usize::try_from(steps).ok()?;
        (index <= self.held.len()).then_some(index)
    }

    /// The row at or just after `minute`.
    pub fn at(&self, minute: Minute) -> Option<&[f64; LANES]> {
        self.held.get(self.index(minute)?)
    }

    /// The rows held, ascending in time.
    pub fn held(&self) -> &[[f64; LANES]] {
        &self.held
    }

    /// Forgets the rows before `minute`, once they are two thirds of those held: moving the rest costs time.
    pub fn forget_before(&mut self, minute: Minute) {
        let Some(index) = self.index(minute) else {
            return;
        };
        if index < 2 * (self.held.len() - index) {
            return;
        }
        self.from = self.minute(index);
        self.held.drain(..index);
    }
}

/// A run of the cascade on the tracks of one unit.
#[derive(Debug)]
pub struct CascadeRun<'a> {
    cascade: &'a Cascade,
    tracks: &'a [MemberTrack],
    load: Load<'a>,
    now: i64,
    readers: Vec<DriveReader<'a>>,
    until: [i64; LANES],
    state: State,
    scene: UnitScene,
}

/// CRH (pg/mL), ACTH (pg/mL) and total serum cortisol (nmol/L) of the lanes.
#[derive(Debug, Clone, Copy)]
struct State {
    crh: [f64; LANES],
    acth: [f64; LANES],
    cortisol: [f64; LANES],
}

/// The drives of the lanes, structure of arrays.
#[derive(Debug, Clone, Copy)]
struct UnitScene {
    phase: [f64; LANES],
    /// Circadian shape at that phase.
    shape: [f64; LANES],
    phase_rate: [f64; LANES],
    gate: [f64; LANES],
    gate_decay: [f64; LANES],
    pulse: [f64; LANES],
    factor: [f64; LANES],
}

impl<'a> CascadeRun<'a> {
    pub(super) fn new(
        cascade: &'a Cascade,
        tracks: &'a [MemberTrack],
        load: Load<'a>,
        from: Minute,
    ) -> Self {
        let [crh, acth, cortisol] = cascade.start;
        Self {
            cascade,
            tracks,
            load,
            now: from.0,
            readers: Vec::new(),
            until: [i64::MAX; LANES],
            state: State {
                crh: [crh; LANES],
                acth: [acth; LANES],
                cortisol: [cortisol; LANES],
            },
            scene: UnitScene {
                phase: [0.0; LANES],
                shape: [0.0; LANES],
                phase_rate: [1.0; LANES],
                gate: [0.0; LANES],
                gate_decay: [1.0; LANES],
                pulse: [0.0; LANES],
                factor: [1.0; LANES],
            },
        }
    }

    /// Goes on to `to` and appends a row for each step of `rows`, the one at `to` included.
    ///
    /// Steps have the length of the rows' distance, but for a shorter one before an edge off their minutes.
    pub fn advance(&mut self, to: Minute, rows: &mut Rows) {
        let step_min = rows.step_min;
        if self.readers.is_empty() {
            let start = (Minute(self.now), step_min);
            self.readers = self
                .tracks
                .iter()
                .map(|track| DriveReader::new(self.cascade, track, self.load, start))
                .collect();
            self.until = [i64::MIN; LANES];
        }
        if rows.held.is_empty() {
            rows.held.push(self.state.cortisol);
        }
        while self.now < to.0 {
            let edge = self.ask_scenes().min(to.0);
            self.cascade.instructions.run(Advance {
                cascade: self.cascade,
                state: &mut self.state,
                scene: &mut self.scene,
                now: &mut self.now,
                edge,
                rows,
            });
        }
    }

    /// Asks the lanes whose scene has ended for the next one; gives the next edge of any lane.
    fn ask_scenes(&mut self) -> i64 {
        let mut edge = i64::MAX;
        for (lane, reader) in self.readers.iter_mut().enumerate() {
            if self.until[lane] <= self.now {
                let scene = reader.scene(self.now);
                self.scene.phase[lane] = scene.phase;
                self.scene.shape[lane] = self.cascade.shape.at(scene.phase);
                self.scene.phase_rate[lane] = scene.phase_rate;
                self.scene.gate[lane] = scene.gate;
                self.scene.gate_decay[lane] = scene.gate_decay;
                self.scene.pulse[lane] = scene.pulse;
                self.scene.factor[lane] = scene.factor;
                self.until[lane] = scene.until;
            }
            edge = edge.min(self.until[lane]);
        }
        edge
    }
}

/// A unit to be moved to the next edge of any lane.
struct Advance<'a> {
    cascade: &'a Cascade,
    state: &'a mut State,
    scene: &'a mut UnitScene,
    now: &'a mut i64,
    edge: i64,
    rows: &'a mut Rows,
}

impl Work for Advance<'_> {
    type Result = ();

    #[inline(always)]
    fn done(self) {
        let step_min = self.rows.step_min;
        while *self.now < self.edge {
            let next = (self.now.div_euclid(step_min) + 1) * step_min;
            let end = next.min(self.edge);
            step_lanes(self.cascade, self.state, self.scene, end - *self.now);
            *self.now = end;
            if end == next {
                self.rows.held.push(self.state.cortisol);
            }
        }
    }
}

/// One classical Runge-Kutta step of all lanes; the drive at the end of the step is its left limit.
#[inline(always)]
fn step_lanes(cascade: &Cascade, state: &mut State, scene: &mut UnitScene, minutes: i64) {
    let length = Minute(minutes).as_f64();
    let half = length * 0.5;
    let sixth = length * (1.0 / 6.0);
    let (crh, acth, cortisol) = (state.crh, state.acth, state.cortisol);
    let (phase, shape, gate) = (scene.phase, scene.shape, scene.gate);
    let (mut to_crh, mut to_acth, mut to_cortisol) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
    let (mut to_phase, mut to_shape, mut to_gate) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
    let mut decay = scene.gate_decay;
    for _ in 1..minutes {
        for (decay, per_half_minute) in decay.iter_mut().zip(&scene.gate_decay) {
            *decay *= per_half_minute;
        }
    }
    for lane in 0..LANES {
        let middle_phase = phase[lane] + half * scene.phase_rate[lane];
        let end_phase = phase[lane] + length * scene.phase_rate[lane];
        let middle_gate = gate[lane] * decay[lane];
        let end_gate = middle_gate * decay[lane];
        let end_shape = cascade.shape.at(end_phase);
        let drive =
            |shape: f64, gate: f64| (shape * (1.0 - gate) + scene.pulse[lane]) * scene.factor[lane];
        let start = drive(shape[lane], gate[lane]);
        let middle = drive(cascade.shape.at(middle_phase), middle_gate);
        let end = drive(end_shape, end_gate);
        let x = [crh[lane], acth[lane], cortisol[lane]];
        let a = cascade.rate(x, start);
        let b = cascade.rate(moved(x, a, half), middle);
        let c = cascade.rate(moved(x, b, half), middle);
        let d = cascade.rate(moved(x, c, length), end);
        let sum = |i: usize| x[i] + sixth * ((a[i] + d[i]) + 2.0 * (b[i] + c[i]));
        to_crh[lane] = sum(0);
        to_acth[lane] = sum(1);
        to_cortisol[lane] = sum(2);
        to_phase[lane] = end_phase;
        to_shape[lane] = end_shape;
        to_gate[lane] = end_gate;
    }
    state.crh = to_crh;
    state.acth = to_acth;
    state.cortisol = to_cortisol;
    scene.phase = to_phase;
    scene.shape = to_shape;
    scene.gate = to_gate;
}

#[inline(always)]
fn moved(x: [f64; 3], rate: [f64; 3], minutes: f64) -> [f64; 3] {
    [
        x[0] + minutes * rate[0],
        x[1] + minutes * rate[1],
        x[2] + minutes * rate[2],
    ]
}
