//! The parts of a screen report.

use super::Audience;
use super::cautions::Cautions;
use super::diagnostics::DiagnosticRow;
use super::figure::{CortisolCurve, PhaseClock, Raster, RecoveryStrip};
use crate::assessment::{Attention, WindowClass};
use crate::numeric::quantile::Quantiles;
use crate::numeric::rounding::round_to;

/// A modelled number: median and 5-95 % of the members, rounded.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BandValue {
    /// Median.
    pub median: f64,
    /// 5th percentile.
    pub p05: f64,
    /// 95th percentile.
    pub p95: f64,
}

impl BandValue {
    /// Quantiles rounded to `decimals`.
    pub fn rounded(q: Quantiles, decimals: u32) -> Self {
        Self {
            median: round_to(q.median, decimals),
            p05: round_to(q.p05, decimals),
            p95: round_to(q.p95, decimals),
        }
    }
}

/// A modelled number that may have two cases: morning daylight seen on the way home, and not.
///
/// Where the cases are apart there is no common median, for it would describe nobody.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CasedBand {
    /// All members.
    pub all: BandValue,
    /// Daylight seen, daylight not seen, where their medians are more than the limit apart.
    pub cases: Option<[BandValue; 2]>,
}

impl CasedBand {
    /// The median that may be written: none where the cases are apart.
    pub fn median(&self) -> Option<f64> {
        self.cases.is_none().then_some(self.all.median)
    }

    /// The entries with the case of each, in words.
    pub fn entries(&self) -> Vec<(BandValue, Option<&'static str>)> {
        match self.cases {
            None => vec![(self.all, None)],
            Some([seen, not_seen]) => vec![
                (seen, Some(DAYLIGHT_SEEN)),
                (not_seen, Some(DAYLIGHT_NOT_SEEN)),
            ],
        }
    }
}

/// The case of members who see morning daylight.
pub const DAYLIGHT_SEEN: &str = "if daylight is seen on the way home";
/// The case of members who do not.
pub const DAYLIGHT_NOT_SEEN: &str = "if daylight is not seen on the way home";

/// Hours, rounded to a hundredth.
pub fn hours(value: f64) -> f64 {
    round_to(value, HOUR_DECIMALS)
}

/// Decimals of hours in every format.
pub const HOUR_DECIMALS: u32 = 2;
/// Decimals of concentrations in every format.
pub const NMOL_DECIMALS: u32 = 1;
/// Decimals of shares in every format.
pub const SHARE_DECIMALS: u32 = 3;

/// A screen report.
#[derive(Debug, Clone, PartialEq)]
pub struct ScreenReport {
    /// For whom.
    pub audience: Audience,
    /// Counts and the fixed statement.
    pub summary: Summary,
    /// What the run was made of.
    pub provenance: Provenance,
    /// Workers, in the order of the audience.
    pub workers: Vec<WorkerSection>,
    /// Duty lines (planner) or workers (clinician) with modelled physiology.
    pub lines: Vec<LineSection>,
    /// Findings, most urgent first.
    pub findings: Vec<FindingRow>,
    /// Problems and assumptions of the input.
    pub diagnostics: Vec<DiagnosticRow>,
    /// How many of each level.
    pub diagnostic_counts: String,
    /// Cautions.
    pub cautions: Cautions,
    /// Methods in words.
    pub methods: Vec<MethodRow>,
    /// Rule packs used.
    pub packs: Vec<PackRow>,
    /// Every number used, with unit and source.
    pub numbers: Vec<NumberRow>,
}

/// Counts of the report.
#[derive(Debug, Clone, PartialEq)]
pub struct Summary {
    /// Workers.
    pub workers: usize,
    /// Workers with dates that could not be read.
    pub incomplete_workers: usize,
    /// Different duty lines.
    pub lines: usize,
    /// Counted shifts.
    pub shifts: usize,
    /// Hours on duty.
    pub duty_h: f64,
    /// Windows that count in shares.
    pub windows: usize,
    /// Of these, compressed.
    pub compressed: usize,
    /// Of these, narrow.
    pub narrow: usize,
    /// Of these, unmarked.
    pub unmarked: usize,
    /// Windows that could not be judged.
    pub not_judged: usize,
    /// Windows over 7 days.
    pub listed: usize,
    /// Windows in which the model was set aside because it rests on an assumed history.
    pub assumed: usize,
    /// Findings at `priority`.
    pub priority: usize,
    /// Findings at `review`.
    pub review: usize,
    /// Findings at `note`.
    pub note: usize,
    /// The fixed sentence beside every count.
    pub statement: String,
}

/// What the run was made of.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Provenance {
    /// Program.
    pub tool: String,
    /// Its version.
    pub version: String,
    /// Time zone database.
    pub tzdb: String,
    /// Input files.
    pub inputs: Vec<InputRow>,
    /// Zone of the workplace.
    pub zone: String,
    /// First date.
    pub from: String,
    /// Last date.
    pub to: String,
    /// Rule packs.
    pub rules: Vec<String>,
    /// Pacemaker.
    pub pacemaker: String,
    /// Members.
    pub members: usize,
    /// Seed.
    pub seed: u64,
    /// Hours of daylight.
    pub daylight: String,
    /// Morning daylight.
    pub morning_daylight: String,
}

/// An input file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct InputRow {
    /// Name without folder.
    pub name: String,
    /// SHA-256 of its bytes.
    pub sha256: String,
}

/// A worker.
#[derive(Debug, Clone, PartialEq)]
pub struct WorkerSection {
    /// Name or number in the roster.
    pub id: String,
    /// Team.
    pub team: Option<String>,
    /// Number of the duty line.
    pub line: u32,
    /// Dates are missing; results are partial.
    pub incomplete: bool,
    /// Findings at `priority`, for the clinician's reading order.
    pub priority_findings: usize,
    /// Compressed windows per 28 days seen, for the clinician's reading order.
    pub compressed_per_28_days: f64,
    /// Shifts.
    pub shifts: Vec<ShiftRow>,
    /// Recovery windows.
    pub windows: Vec<WindowRow>,
    /// Register-type measures: name in data, name in words, value; `None` is not known.
    pub exposure: Vec<(&'static str, &'static str, Option<f64>)>,
    /// The windows as a figure.
    pub strip: RecoveryStrip,
}

/// A shift of a worker.
#[derive(Debug, Clone, PartialEq)]
pub struct ShiftRow {
    /// RFC 3339 with offset.
    pub start: String,
    /// RFC 3339 with offset.
    pub end: String,
    /// Elapsed hours.
    pub hours: f64,
    /// `night`, `early`, `evening`, `day`, or the kind of row that does not count.
    pub class: String,
    /// Hours between 23:00 and 06:00.
    pub night_h: f64,
    /// Code in the file.
    pub code: Option<String>,
    /// Row of the input.
    pub origin: String,
}

/// A recovery window of a worker.
#[derive(Debug, Clone, PartialEq)]
pub struct WindowRow {
    /// RFC 3339 with offset.
    pub start: String,
    /// RFC 3339 with offset.
    pub end: String,
    /// Start in words: `Tue 10 Mar 21:30`.
    pub start_text: String,
    /// End in words.
    pub end_text: String,
    /// Elapsed hours.
    pub hours: f64,
    /// Class of the duty before it.
    pub after: String,
    /// Class of the duty that ends it.
    pub before: String,
    /// Class.
    pub class: WindowClass,
    /// Why.
    pub reasons: Vec<String>,
}

/// Modelled physiology of a line or, for clinicians, of a worker.
#[derive(Debug, Clone, PartialEq)]
pub struct LineSection {
    /// `line 7`, or the worker.
    pub id: String,
    /// Number of the line.
    pub number: u32,
    /// `generic adult`, or the worker.
    pub subject: String,
    /// Workers on the line.
    pub workers: Vec<String>,
    /// By duty.
    pub shifts: Vec<LineShiftRow>,
    /// By window.
    pub windows: Vec<LineWindowRow>,
    /// By date.
    pub days: Vec<DayRow>,
    /// Evidence in words.
    pub evidence: Vec<String>,
    /// Work, sleep and biological night.
    pub raster: Raster,
    /// Cortisol.
    pub curve: CortisolCurve,
    /// `CBTmin` by day.
    pub clock: PhaseClock,
    /// The furthest `CBTmin` at the start of a duty on each pacemaker, where several were asked for.
    pub pacemakers: Vec<PacemakerRow>,
}

/// What one pacemaker says of the duty at which `CBTmin` stands furthest from habit.
#[derive(Debug, Clone, PartialEq)]
pub struct PacemakerRow {
    /// The pacemaker.
    pub pacemaker: String,
    /// Start of that duty, RFC 3339 with offset.
    pub at: String,
    /// `CBTmin` displacement there, hours, positive earlier.
    pub cbtmin_displacement_h: BandValue,
    /// Sleep in the 24 h before it, hours.
    pub sleep_24h: BandValue,
}

/// The members around a duty.
#[derive(Debug, Clone, PartialEq)]
pub struct LineShiftRow {
    /// RFC 3339 with offset.
    pub start: String,
    /// Start in words.
    pub start_text: String,
    /// Sleep in the 24 h before, hours.
    pub sleep_prior_24h: BandValue,
    /// Sleep in the 48 h before, hours.
    pub sleep_prior_48h: BandValue,
    /// Hours awake at the start.
    pub awake_at_start_h: BandValue,
    /// Hours awake at the end.
    pub awake_at_end_h: BandValue,
    /// Hours of duty in the reference quiescent interval.
    pub quiescent_duty_h: BandValue,
}

/// The members in a window.
#[derive(Debug, Clone, PartialEq)]
pub struct LineWindowRow {
    /// RFC 3339 with offset.
    pub start: String,
    /// Start in words.
    pub start_text: String,
    /// Elapsed hours of the window.
    pub hours: f64,
    /// Longest sleep, hours.
    pub main_sleep_h: BandValue,
    /// All sleep, hours.
    pub total_sleep_h: BandValue,
    /// Share of members below 5 h in the last 24 h.
    pub k24: f64,
    /// Share of members below 12 h in the last 48 h.
    pub k48: f64,
    /// `short`, `uncertain` or `not short`.
    pub sleep_test: &'static str,
    /// Phase displacement of the last main sleep, hours.
    ///
    /// Positive: later in the body's night than usual; none without any sleep in the last 24 h.
    pub phase_displacement_h: Option<BandValue>,
    /// `CBTmin` displacement at the next duty, hours, positive earlier.
    pub cbtmin_displacement_h: CasedBand,
    /// Said where the phase is ill-defined: a range of clock times takes the place of a direction.
    pub phase_ill_defined: Option<String>,
    /// Hours awake in the reference quiescent interval beyond the habitual ones.
    pub quiescent_awake_excess_h: BandValue,
    /// The model rests on an assumed history.
    pub history_assumed: bool,
}

/// The members on a date.
#[derive(Debug, Clone, PartialEq)]
pub struct DayRow {
    /// ISO date.
    pub date: String,
    /// `CBTmin`, clock hours, with the daylight case where two differ.
    pub cbtmin: Vec<(BandValue, Option<&'static str>)>,
    /// DLMO, clock hours, likewise.
    pub dlmo: Vec<(BandValue, Option<&'static str>)>,
    /// Sleep that ends on the date, hours.
    pub sleep_h: BandValue,
    /// MESOR, nmol/L.
    pub mesor: BandValue,
    /// Amplitude, nmol/L.
    pub amplitude: BandValue,
    /// Amplitude over that of the habitual day.
    pub amplitude_ratio: BandValue,
    /// Acrophase of the fitted cosine, clock hour; depends on sleep timing.
    pub acrophase_h: CasedBand,
    /// Highest value, nmol/L.
    pub peak: BandValue,
    /// When, clock hour.
    pub peak_time: CasedBand,
    /// Lowest value, nmol/L.
    pub nadir: BandValue,
    /// When, clock hour.
    pub nadir_time: CasedBand,
    /// Quiescent interval begins, clock hour.
    pub quiescent_start: CasedBand,
    /// Quiescent interval ends, clock hour.
    pub quiescent_end: CasedBand,
}

/// A finding.
#[derive(Debug, Clone, PartialEq)]
pub struct FindingRow {
    /// Stable code.
    pub code: &'static str,
    /// How soon.
    pub attention: Attention,
    /// What it rests on.
    pub kind: &'static str,
    /// Worker, unless it concerns a line or the roster.
    pub worker: Option<String>,
    /// Line, when the generic adult on it is meant.
    pub line: Option<u32>,
    /// RFC 3339 with offset.
    pub start: String,
    /// RFC 3339 with offset.
    pub end: String,
    /// Start in words.
    pub start_text: String,
    /// Measured value.
    pub measured: Option<f64>,
    /// Limit.
    pub limit: Option<f64>,
    /// Unit of both.
    pub unit: String,
    /// Members in which it holds, and members.
    pub members: Option<(usize, usize)>,
    /// Rules.
    pub rules: Vec<String>,
    /// Sources with marks.
    pub source: String,
    /// Every place of a finding that occurs more than once, in words.
    pub places: Vec<String>,
    /// Rows of the input, as data: `ward.csv:192`.
    pub rows: Vec<String>,
    /// Rows of the input, as a person reads them: `rows 192, 193 of ward.csv`.
    pub rows_text: String,
    /// How often.
    pub occurrences: usize,
    /// The finding in words.
    pub message: String,
}

/// A paragraph of the methods.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct MethodRow {
    /// Title.
    pub title: String,
    /// Text.
    pub text: String,
}

/// A rule pack.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct PackRow {
    /// Name.
    pub name: String,
    /// Title.
    pub title: String,
    /// How its findings are to be read.
    pub reading: String,
    /// State in which it was seen.
    pub as_seen: String,
    /// Rules of the same documents that this version does not measure.
    pub left_out: Vec<String>,
    /// Night definition.
    pub night: String,
    /// Its rules.
    pub rules: Vec<RuleRow>,
}

/// A rule of a pack, in words.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RuleRow {
    /// Stable id.
    pub id: String,
    /// What it asks.
    pub asks: String,
    /// Whom it concerns.
    pub scope: String,
    /// Derogations that the instrument knows.
    pub derogations: String,
    /// Instrument, article, source and mark.
    pub source: String,
}

/// A number with unit and source.
#[derive(Debug, Clone, PartialEq)]
pub struct NumberRow {
    /// Set.
    pub set: String,
    /// Key.
    pub key: String,
    /// Value.
    pub value: f64,
    /// Unit.
    pub unit: String,
    /// Source and mark.
    pub source: String,
}
