//! Findings: what a person should look at, why, and how much.

use super::pack::Comparison;
use crate::roster::{LineId, WorkerId};
use crate::source::OriginId;
use crate::units::Minute;

/// How soon a finding should be looked at, in words.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Attention {
    /// First.
    Priority,
    /// Next.
    Review,
    /// For the record.
    Note,
}

impl Attention {
    /// The word as it is written everywhere.
    pub fn word(self) -> &'static str {
        match self {
            Self::Priority => "priority",
            Self::Review => "review",
            Self::Note => "note",
        }
    }
}

/// What a finding rests on. Kinds are never merged.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum FindingKind {
    /// Working-time law.
    Law,
    /// Advice; a departure, not a breach.
    Advice,
    /// A model estimate of the generic adult on the line.
    Model,
    /// A rule that the roster cannot answer.
    NotJudged,
}

impl FindingKind {
    /// The word as it is written everywhere.
    pub fn word(self) -> &'static str {
        match self {
            Self::Law => "law",
            Self::Advice => "advice",
            Self::Model => "model",
            Self::NotJudged => "not-judged",
        }
    }
}

/// The kinds of finding, by the condition they name.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum FindingCode {
    /// A window compressed by law or by the 11-h advice.
    CompressedRest,
    /// A window compressed by the sleep test alone.
    CompressedSleep,
    /// A run of nights above advice.
    RunOfNights,
    /// Rest after nights below advice.
    RestAfterNights,
    /// Weekly rest or hours outside the law.
    PeriodLimit,
    /// Windows narrow by advice.
    NarrowRest,
    /// Windows narrow by the sleep test alone.
    NarrowSleep,
    /// Duties longer than advice.
    DutyLength,
    /// Duties with too short a break.
    BreakLength,
    /// Awake for long at the end of a duty.
    LongAwake,
    /// A rule that could not be judged.
    RuleNotJudged,
}

impl FindingCode {
    /// Every code.
    pub const ALL: [Self; 11] = [
        Self::CompressedRest,
        Self::CompressedSleep,
        Self::RunOfNights,
        Self::RestAfterNights,
        Self::PeriodLimit,
        Self::NarrowRest,
        Self::NarrowSleep,
        Self::DutyLength,
        Self::BreakLength,
        Self::LongAwake,
        Self::RuleNotJudged,
    ];

    /// The code as it is written everywhere.
    pub fn name(self) -> &'static str {
        match self {
            Self::CompressedRest => "compressed-rest",
            Self::CompressedSleep => "compressed-sleep",
            Self::RunOfNights => "run-of-nights",
            Self::RestAfterNights => "rest-after-nights",
            Self::PeriodLimit => "period-limit",
            Self::NarrowRest => "narrow-rest",
            Self::NarrowSleep => "narrow-sleep",
            Self::DutyLength => "duty-length",
            Self::BreakLength => "break-length",
            Self::LongAwake => "long-awake",
            Self::RuleNotJudged => "rule-not-judged",
        }
    }

    /// What the code means, in one sentence.
    pub fn about(self) -> &'static str {
        match self {
            Self::CompressedRest => {
                "the time between two duties is below a legal rest period or below 11 h"
            }
            Self::CompressedSleep => {
                "in at least 80 % of the simulated members less than 5 h of sleep fit into the 24 h before the next duty"
            }
            Self::RunOfNights => "more nights in a row than advice has it",
            Self::RestAfterNights => "less time off after nights than advice has it",
            Self::PeriodLimit => "weekly rest or working hours outside a legal limit",
            Self::NarrowRest => {
                "the time between two duties is below an advice other than the 11 h"
            }
            Self::NarrowSleep => {
                "in at least half of the simulated members less than 5 h of sleep fit into the 24 h before the next duty, or in 80 % less than 12 h into 48 h"
            }
            Self::DutyLength => "a duty is longer than advice has it",
            Self::BreakLength => "a break is shorter than the law has it",
            Self::LongAwake => {
                "at the end of a duty half of the simulated members have been awake for 17 h or more"
            }
            Self::RuleNotJudged => "the roster does not hold what the rule needs",
        }
    }
}

/// Whom a finding concerns.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum SubjectOf {
    /// A worker: facts of the roster.
    Worker(WorkerId),
    /// A duty line: the generic adult on it.
    Line(LineId),
    /// The roster as a whole.
    Roster,
}

/// In how many members a model finding holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct MembersHold {
    /// Members in which it holds.
    pub hold: usize,
    /// Members.
    pub of: usize,
}

/// A rule that is not met.
#[derive(Debug, Clone, PartialEq)]
pub struct BrokenRule {
    /// Its id.
    pub id: String,
    /// Law or advice.
    pub is_law: bool,
    /// Met only within a derogation.
    pub within_floor: bool,
    /// Name of its metric.
    pub metric: String,
    /// Which side of the limit is in order.
    pub op: Comparison,
    /// Limit.
    pub limit: f64,
    /// Unit of the limit.
    pub unit: String,
}

/// One place of a finding.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Occurrence {
    /// First minute concerned.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Measured value, worst of the rules.
    pub measured: f64,
}

/// One finding.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// What.
    pub code: FindingCode,
    /// How soon.
    pub attention: Attention,
    /// What it rests on.
    pub kind: FindingKind,
    /// Whom it concerns.
    pub subject: SubjectOf,
    /// First minute concerned, of the first occurrence.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Measured value, worst of the occurrences.
    pub measured: Option<f64>,
    /// Limit.
    pub limit: Option<f64>,
    /// Unit of both.
    pub unit: String,
    /// Members in which it holds, for model findings.
    pub members: Option<MembersHold>,
    /// Rules concerned, each once: law first, then by id.
    pub rules: Vec<BrokenRule>,
    /// Sources with their marks.
    pub source: String,
    /// Rows of the input that caused it.
    pub rows: Vec<OriginId>,
    /// Where it occurs, ascending in time.
    pub occurrences: Vec<Occurrence>,
    /// What is missing, for rules that could not be judged; which derogation, for law within a floor.
    pub remark: Option<String>,
    /// The model behind it rests on an assumed history.
    pub history_assumed: bool,
}
