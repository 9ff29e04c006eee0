//! Cortisol of the members over one local date.
#![expect(
    clippy::inline_always,
    reason = "loops over lanes are compiled for several instruction sets; what they call must be inlined"
)]

use super::cascade::Rows;
use super::pacemaker::LANES;
use crate::numeric::cosine::{CosineFit, fit_from_normal};
use crate::numeric::instruction_set::{InstructionSet, Work};
use crate::units::Minute;

/// Features of the modelled total serum cortisol of one stretch of time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CortisolDay {
    /// Mean, nmol/L.
    pub mean: f64,
    /// MESOR of the 24-h cosine, nmol/L.
    pub mesor: f64,
    /// Amplitude of the 24-h cosine, nmol/L.
    pub amplitude: f64,
    /// Acrophase of the 24-h cosine, minutes after the first minute of the stretch. Depends on sleep timing; no phase marker in shift work.
    pub acrophase_min: f64,
    /// Highest value, nmol/L.
    pub peak: f64,
    /// When.
    pub peak_at: Minute,
    /// Lowest value of the stretch in which the nadir is looked for, nmol/L.
    pub nadir: f64,
    /// When.
    pub nadir_at: Minute,
    /// Unbroken interval around the nadir below the share of the mean: first minute below, first minute above.
    pub quiescent: (Minute, Minute),
}

/// Where features are looked for, first minute and first minute after.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Stretch {
    /// Mean, cosine and peak.
    pub day: (Minute, Minute),
    /// Nadir: a date has it at both ends, a window from noon to noon in its middle.
    pub night: (Minute, Minute),
}

impl Stretch {
    /// The same stretch for every feature.
    pub fn whole(from: Minute, to: Minute) -> Self {
        Self {
            day: (from, to),
            night: (from, to),
        }
    }

    /// A date, with the nadir of the night that leads into it.
    pub fn date(from: Minute, to: Minute) -> Self {
        Self {
            day: (from, to),
            night: (from + -720, to + -720),
        }
    }
}

/// Reads the features of stretches of time from the rows of a run.
#[derive(Debug, Clone, PartialEq)]
pub struct DayReader {
    step_min: i64,
    share_of_mean: f64,
    /// Cosine and sine of the 24-h turn, row by row from the start of a stretch.
    waves: Vec<[f64; 2]>,
    instructions: InstructionSet,
}

/// Longest stretch, minutes: a local date over a clock change, and room for more.
const LONGEST_MIN: i64 = 2 * 1440;

impl DayReader {
    /// A reader of rows that stand `step_min` apart; quiescence lies below `share_of_mean` of the mean.
    pub fn new(step_min: i64, share_of_mean: f64) -> Self {
        let waves = (0..=LONGEST_MIN / step_min)
            .map(|row| {
                let turn = 2.0 * std::f64::consts::PI * Minute(row * step_min).as_f64() / 1440.0;
                [libm::cos(turn), libm::sin(turn)]
            })
            .collect();
        Self {
            step_min,
            share_of_mean,
            waves,
            instructions: InstructionSet::best(),
        }
    }

    /// Features of a stretch for the first `members` lanes: mean, 24-h cosine, peak, nadir and the quiescent interval around it.
    ///
    /// The quiescent interval may reach beyond the stretch on either side, as far as rows are held.
    /// Returns `None` when the rows do not hold the stretch or it is longer than two days.
    ///
    /// # Units
    ///
    /// nmol/L and minutes; `share_of_mean` without unit.
    ///
    /// # Source
    ///
    /// Quiescence: own definition after the idea of Griefahn 2006, below 60 % of the mean.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::physiology::cascade::{Cascade, Load};
    /// use acroshift::physiology::day::{DayReader, Stretch};
    /// use acroshift::physiology::{Member, MemberTrack, ModelSets};
    /// use acroshift::units::Minute;
    /// let sets = ModelSets::embedded();
    /// let cascade = Cascade::new(&sets.cascade);
    /// let track = MemberTrack::habitual(Member::mean(&sets.ensemble, 30.0), -1200.0, 5);
    /// let rows = cascade.rows(&[track], Load::NONE, (Minute(-6480), Minute(-720)), 2);
    /// let noon_to_noon = Stretch::whole(Minute(-2160), Minute(-720));
    /// let days = DayReader::new(2, 0.6).read(&rows, 1, noon_to_noon).expect("the rows hold the day");
    /// assert!((days[0].mean - 210.6).abs() < 1.0);
    /// ```
    pub fn read(&self, rows: &Rows, members: usize, stretch: Stretch) -> Option<Vec<CortisolDay>> {
        let index = |minute| rows.index(minute);
        let day = index(stretch.day.0)?..index(stretch.day.1)?;
        let night = index(stretch.night.0)?..index(stretch.night.1)?;
        let held = rows.held();
        let (day_rows, night_rows) = (held.get(day.clone())?, held.get(night.clone())?);
        let waves = self.waves.get(..day_rows.len())?;
        let Read { sums, peak, nadir } = self.instructions.run(Reading {
            day: day_rows,
            night: night_rows,
            waves,
        });
        (0..members)
            .map(|lane| {
                let fit = sums.fit(lane)?;
                let mean = sums.value[lane] / sums.rows;
                let nadir_row = night.start + nadir.row(lane);
                let threshold = self.share_of_mean * mean;
                let quiescent = below(held, lane, nadir_row, threshold);
                Some(CortisolDay {
                    mean,
                    mesor: fit.mesor,
                    amplitude: fit.amplitude,
                    acrophase_min: fit.acrophase,
                    peak: peak.value[lane],
                    peak_at: rows.minute(day.start + peak.row(lane)),
                    nadir: -nadir.value[lane],
                    nadir_at: rows.minute(nadir_row),
                    quiescent: (rows.minute(quiescent.start), rows.minute(quiescent.end)),
                })
            })
            .collect()
    }

    /// Minutes between the rows that are read.
    pub fn step_min(&self) -> i64 {
        self.step_min
    }
}

/// Rows to be read.
struct Reading<'a> {
    day: &'a [[f64; LANES]],
    night: &'a [[f64; LANES]],
    waves: &'a [[f64; 2]],
}

/// What was read from them.
struct Read {
    sums: Sums,
    peak: Extreme,
    nadir: Extreme,
}

impl Work for Reading<'_> {
    type Result = Read;

    #[inline(always)]
    fn done(self) -> Read {
        Read {
            sums: Sums::of(self.day, self.waves),
            peak: extreme(self.day, 1.0),
            nadir: extreme(self.night, -1.0),
        }
    }
}

/// Sums of the normal equations of the 24-h cosine, by lane where the values take part.
struct Sums {
    rows: f64,
    design: [[f64; 2]; 3],
    wave: [f64; 2],
    value: [f64; LANES],
    cosine: [f64; LANES],
    sine: [f64; LANES],
}

impl Sums {
    #[inline(always)]
    fn of(rows: &[[f64; LANES]], waves: &[[f64; 2]]) -> Self {
        let mut sums = Self {
            rows: 0.0,
            design: [[0.0; 2]; 3],
            wave: [0.0; 2],
            value: [0.0; LANES],
            cosine: [0.0; LANES],
            sine: [0.0; LANES],
        };
        let (mut value, mut cosine, mut sine) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
        for (row, [cos, sin]) in rows.iter().zip(waves) {
            sums.rows += 1.0;
            sums.wave[0] += cos;
            sums.wave[1] += sin;
            sums.design[0][0] += cos * cos;
            sums.design[0][1] += cos * sin;
            sums.design[1][1] += sin * sin;
            for lane in 0..LANES {
                value[lane] += row[lane];
                cosine[lane] += row[lane] * cos;
                sine[lane] += row[lane] * sin;
            }
        }
        sums.value = value;
        sums.cosine = cosine;
        sums.sine = sine;
        sums
    }

    /// The fitted cosine of a lane; times in minutes from the start of the stretch.
    fn fit(&self, lane: usize) -> Option<CosineFit> {
        let [cos, sin] = self.wave;
        let [[cos_cos, cos_sin], [_, sin_sin], _] = self.design;
        fit_from_normal(
            [
                [self.rows, cos, sin, self.value[lane]],
                [cos, cos_cos, cos_sin, self.cosine[lane]],
                [sin, cos_sin, sin_sin, self.sine[lane]],
            ],
            1440.0,
        )
    }
}

/// Highest value of each lane and the row in which it stands first.
struct Extreme {
    value: [f64; LANES],
    row: [f64; LANES],
}

impl Extreme {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a row number is a small whole number"
    )]
    fn row(&self, lane: usize) -> usize {
        self.row[lane] as usize
    }
}

/// Highest value of `sign` times the rows.
#[inline(always)]
fn extreme(rows: &[[f64; LANES]], sign: f64) -> Extreme {
    let (mut value, mut at) = ([f64::NEG_INFINITY; LANES], [0.0; LANES]);
    let mut number = 0.0;
    for row in rows {
        for lane in 0..LANES {
            let better = sign * row[lane] > value[lane];
            value[lane] = if better {
                sign * row[lane]
            } else {
                value[lane]
            };
            at[lane] = if better { number } else { at[lane] };
        }
        number += 1.0;
    }
    Extreme { value, row: at }
}

/// Rows around `nadir` in which a lane stays below a threshold.
fn below(
    rows: &[[f64; LANES]],
    lane: usize,
    nadir: usize,
    threshold: f64,
) -> std::ops::Range<usize> {
    let (mut start, mut end) = (nadir, nadir);
    while start > 0 && rows[start - 1][lane] < threshold {
        start -= 1;
    }
    while end + 1 < rows.len() && rows[end][lane] < threshold {
        end += 1;
    }
    start..end
}
