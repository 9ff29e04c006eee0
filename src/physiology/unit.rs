//! One unit of members on the elapsed time axis: everybody moves on together, to the next edge of anybody's life.

use super::ensemble::Member;
use super::pacemaker::{
    LANES, LONGEST_STEP_MIN, MarkerReader, Pacemaker, PacemakerState, UnitDrive,
};
use crate::units::Minute;

/// What a life is like from a minute on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Scene {
    /// Photopic light at the eye, lux.
    pub lux: f64,
    /// Asleep?
    pub asleep: bool,
    /// The minute at which the life must be asked again.
    pub until: i64,
}

/// Where the clock of a member stands.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Marker {
    /// `CBTmin`, minutes since the epoch.
    pub cbtmin_min: f64,
    /// Radius of the oscillation when the marker was read.
    pub radius: f64,
}

/// The life of one member: light, sleep, and what it learns about its clock.
pub trait Life {
    /// The scene from `minute` on, which holds until its end or until a marker is met.
    fn scene(&mut self, minute: i64) -> Scene;
    /// Meets a marker; the scene is asked for again.
    fn meet(&mut self, marker: Marker);
}

/// The clocks of a unit.
#[derive(Debug, Clone, PartialEq)]
pub struct Clocks<'a> {
    pacemaker: &'a Pacemaker,
    pace: [f64; LANES],
    readers: Vec<MarkerReader>,
    /// Markers read and the minutes at which they are met.
    coming: Vec<Option<(Marker, i64)>>,
    /// State of the pacemaker.
    pub state: PacemakerState,
}

impl<'a> Clocks<'a> {
    /// Clocks that have seen no marker yet.
    pub fn new(pacemaker: &'a Pacemaker, members: &[Member], state: PacemakerState) -> Self {
        let pace = lanes_of(members).map(|member| pacemaker.pace(member.tau_h));
        Self {
            pacemaker,
            pace,
            readers: vec![MarkerReader::new(); members.len()],
            coming: vec![None; members.len()],
            state,
        }
    }

    /// Clocks that know their last `CBTmin`, minutes since the epoch.
    #[must_use]
    pub fn after(mut self, cbtmin_min: &[f64]) -> Self {
        self.readers = cbtmin_min
            .iter()
            .map(|cbtmin| MarkerReader::after(self.pacemaker, *cbtmin))
            .collect();
        self
    }

    /// Lets the lives go on from one minute to another.
    ///
    /// A step never straddles an edge of any life.
    /// A life meets its marker at the first multiple of [`LONGEST_STEP_MIN`] after the angle was passed, whatever the length of the steps.
    pub fn live_through(&mut self, lives: &mut [impl Life], from: i64, to: i64) {
        let mut drive = UnitDrive::dark(self.pacemaker);
        let mut until = [i64::MIN; LANES];
        let mut now = from;
        while now < to {
            for (lane, life) in lives.iter_mut().enumerate() {
                if let Some((marker, met_at)) = self.coming[lane]
                    && met_at <= now
                {
                    self.coming[lane] = None;
                    life.meet(marker);
                    until[lane] = now;
                }
                if until[lane] <= now {
                    let scene = life.scene(now);
                    drive.set(self.pacemaker, lane, scene.lux, scene.asleep);
                    until[lane] = scene.until;
                }
            }
            let edge = until[..lives.len()].iter().fold(to, |a, b| a.min(*b));
            let edge = self.coming.iter().flatten().fold(edge, |a, b| a.min(b.1));
            let span = (now, edge.max(now + 1) - now);
            let moved = self
                .pacemaker
                .advance(&mut self.state, &drive, &self.pace, span);
            now += moved.minutes;
            if moved.passed {
                self.read_markers(now);
            }
        }
    }

    fn read_markers(&mut self, now: i64) {
        let passing = &self.state.last_passing;
        let step = (
            Minute(now - passing.minutes).as_f64(),
            Minute(passing.minutes).as_f64(),
        );
        for (lane, reader) in self.readers.iter_mut().enumerate() {
            if passing.lanes[lane] < 0.5 {
                continue;
            }
            let before = (passing.first[lane], passing.second[lane]);
            let after = (self.state.first[lane], self.state.second[lane]);
            if let Some(reading) = reader.read(self.pacemaker, step, before, after) {
                let marker = Marker {
                    cbtmin_min: reading.cbtmin_min,
                    radius: self.pacemaker.radius(after),
                };
                let multiple = Minute::from_which(reading.crossing_min).0;
                let met_at = -(-multiple).div_euclid(LONGEST_STEP_MIN) * LONGEST_STEP_MIN;
                self.coming[lane] = Some((marker, met_at.max(now)));
            }
        }
    }
}

/// Fills the lanes of a unit; spare lanes repeat the last member and are dropped afterwards.
///
/// # Panics
///
/// Panics when more than [`LANES`] or no members are given; the caller cuts the ensemble into units.
pub fn lanes_of(members: &[Member]) -> [Member; LANES] {
    assert!(
        (1..=LANES).contains(&members.len()),
        "a unit holds 1 to 16 members"
    );
    std::array::from_fn(|lane| members[lane.min(members.len() - 1)])
}
