//! Recovery windows: the time between two duties, and what is said of it.

use super::criteria::Criteria;
use super::duties::WorkerDuties;
use super::rules::{Outcome, Verdict};
use crate::roster::Roster;
use crate::timeline::Axis;
use crate::units::Minute;

/// Class of a window.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum WindowClass {
    /// Law not met or only within a floor, or a gap below 11 h, or sleep short.
    Compressed,
    /// Another gap advice not met, or sleep close to short.
    Narrow,
    /// No criterion met. Never called adequate.
    Unmarked,
    /// The roster does not hold what is needed.
    NotJudged,
    /// Longer than 7 days: listed, left out of shares.
    Listed,
}

impl WindowClass {
    /// The word as it is written everywhere.
    pub fn word(self) -> &'static str {
        match self {
            Self::Compressed => "compressed",
            Self::Narrow => "narrow",
            Self::Unmarked => "unmarked",
            Self::NotJudged => "not-judged",
            Self::Listed => "listed",
        }
    }
}

/// Why a window has its class.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub enum Reason {
    /// The gap is below the one advice limit that marks compression.
    GapBelowLimit,
    /// A rule of law is not met.
    LawNotMet(String),
    /// A rule of law is met only under a derogation.
    WithinFloor(String),
    /// Another advice on the gap is not met.
    AdviceNotMet(String),
    /// Sleep in the 24 h before the next duty is short in most members.
    SleepShort,
    /// Sleep in the 24 h before the next duty is short in half the members, or in 48 h in most.
    SleepNearlyShort,
}

impl Reason {
    /// The reason as it is written in data files.
    pub fn text(&self) -> String {
        match self {
            Self::GapBelowLimit => "gap below 11 h".to_owned(),
            Self::LawNotMet(rule) => format!("law not met: {rule}"),
            Self::WithinFloor(rule) => format!("within a derogation: {rule}"),
            Self::AdviceNotMet(rule) => format!("advice not met: {rule}"),
            Self::SleepShort => "modelled sleep short".to_owned(),
            Self::SleepNearlyShort => "modelled sleep close to short".to_owned(),
        }
    }

    /// Does it rest on the model alone?
    pub fn is_model(&self) -> bool {
        matches!(self, Self::SleepShort | Self::SleepNearlyShort)
    }
}

/// Shares of members whose sleep before the next duty is short.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SleepShares {
    /// Share with less than the limit in 24 h.
    pub k24: f64,
    /// Share with less than the limit in 48 h.
    pub k48: f64,
}

/// One recovery window of one worker.
#[derive(Debug, Clone, PartialEq)]
pub struct RecoveryWindow {
    /// Place of the duty before it among the worker's duties; the next one follows it.
    pub after: usize,
    /// First minute off duty.
    pub start: Minute,
    /// First minute of the next duty.
    pub end: Minute,
    /// Class.
    pub class: WindowClass,
    /// Why, ordered.
    pub reasons: Vec<Reason>,
    /// Standby or sleep-in lies inside: sleep is less certain.
    pub interrupted: bool,
    /// The model rests on days before the roster that nobody knows.
    pub history_assumed: bool,
}

impl RecoveryWindow {
    /// Length, elapsed hours.
    pub fn hours(&self) -> f64 {
        self.end.hours_since(self.start)
    }

    /// Is it compressed by law or by its length, whatever the model says?
    pub fn is_compressed_by_rest(&self) -> bool {
        let rest: Vec<&Reason> = self.reasons.iter().filter(|r| !r.is_model()).collect();
        class(&rest) == WindowClass::Compressed
    }

    /// Would the class be another one if the model were asked in spite of an assumed history?
    pub fn is_set_aside(&self) -> bool {
        self.history_assumed
            && !matches!(self.class, WindowClass::NotJudged | WindowClass::Listed)
            && class(&self.reasons.iter().collect::<Vec<_>>()) != self.class
    }

    /// Does the window count in shares?
    pub fn in_shares(&self) -> bool {
        !matches!(self.class, WindowClass::NotJudged | WindowClass::Listed)
    }

    /// Is a rule of law not met?
    pub fn breaks_law(&self) -> bool {
        self.reasons
            .iter()
            .any(|reason| matches!(reason, Reason::LawNotMet(_)))
    }
}

/// What is needed to judge the windows of one worker.
#[derive(Debug, Clone, Copy)]
pub struct WindowInput<'a> {
    /// The roster, for dates that could not be read.
    pub roster: &'a Roster,
    /// The elapsed axis.
    pub axis: &'a Axis,
    /// The worker's duties.
    pub duties: &'a WorkerDuties,
    /// Outcomes of the rules for this worker.
    pub outcomes: &'a [Outcome],
    /// Shares of members by window, in order.
    pub sleep: &'a [SleepShares],
    /// Minute up to which the model rests on an assumed history.
    pub assumed_until: Minute,
    /// Limits.
    pub criteria: &'a Criteria,
}

/// The windows of one worker, ascending.
pub fn windows(input: &WindowInput<'_>) -> Vec<RecoveryWindow> {
    input
        .duties
        .duties
        .windows(2)
        .enumerate()
        .map(|(after, pair)| window(input, after, pair[0].end, pair[1].start))
        .collect()
}

fn window(input: &WindowInput<'_>, after: usize, start: Minute, end: Minute) -> RecoveryWindow {
    let unknown = input.roster.touches_unknown(
        input.duties.worker,
        input.axis.instant(start),
        input.axis.instant(end),
    );
    let hours = end.hours_since(start);
    let interrupted = input
        .duties
        .interruptions
        .iter()
        .any(|(from, to)| *from < end && start < *to);
    let mut window = RecoveryWindow {
        after,
        start,
        end,
        class: WindowClass::Unmarked,
        reasons: Vec::new(),
        interrupted,
        history_assumed: end < input.assumed_until,
    };
    if unknown {
        window.class = WindowClass::NotJudged;
    } else if hours > input.criteria.rest.listed_above.value {
        window.class = WindowClass::Listed;
    } else {
        window.reasons = reasons(input, after, hours, interrupted);
        // An assumed history sets no class: the model's reasons are told in a note, on the line.
        let counted: Vec<&Reason> = window
            .reasons
            .iter()
            .filter(|reason| !(window.history_assumed && reason.is_model()))
            .collect();
        window.class = class(&counted);
    }
    window
}

fn reasons(input: &WindowInput<'_>, after: usize, hours: f64, interrupted: bool) -> Vec<Reason> {
    let mut reasons = Vec::new();
    if hours < input.criteria.rest.compressed_below.value {
        reasons.push(Reason::GapBelowLimit);
    }
    for outcome in input.outcomes.iter().filter(|o| o.window == Some(after)) {
        let rule = outcome.rule.clone();
        match (&outcome.verdict, outcome.is_law) {
            (Verdict::NotMet, true) => reasons.push(Reason::LawNotMet(rule)),
            (Verdict::WithinFloor(_), true) => reasons.push(Reason::WithinFloor(rule)),
            (Verdict::NotMet | Verdict::WithinFloor(_), false) => {
                reasons.push(Reason::AdviceNotMet(rule));
            }
            (Verdict::Met | Verdict::NotJudged(_), _) => {}
        }
    }
    // Standby or sleep-in inside leaves it open how much sleep there was.
    let sleep = input.sleep.get(after).filter(|_| !interrupted);
    if let Some(shares) = sleep {
        let sleep = &input.criteria.sleep;
        if shares.k24 >= sleep.short_from_share.value {
            reasons.push(Reason::SleepShort);
        } else if shares.k24 >= sleep.narrow_from_share.value
            || shares.k48 >= sleep.short_from_share.value
        {
            reasons.push(Reason::SleepNearlyShort);
        }
    }
    reasons.sort();
    reasons.dedup();
    reasons
}

fn class(reasons: &[&Reason]) -> WindowClass {
    let compressed = reasons.iter().any(|reason| {
        matches!(
            reason,
            Reason::GapBelowLimit
                | Reason::LawNotMet(_)
                | Reason::WithinFloor(_)
                | Reason::SleepShort
        )
    });
    if compressed {
        WindowClass::Compressed
    } else if reasons.is_empty() {
        WindowClass::Unmarked
    } else {
        WindowClass::Narrow
    }
}
