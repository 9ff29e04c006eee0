//! Rule kinds: what is measured, and what a limit makes of it.
//!
//! A kind is code, one file each; a rule is data in a pack. [`KINDS`] is the only list of kinds.

mod average;
mod breaks;
mod duty_length;
mod gap;
mod gap_after_nights;
mod longest_off;
mod nights_of_sleep;
mod off_blocks;
mod run_nights;

use super::clock_window::ClockWindow;
use super::criteria::Criteria;
use super::duties::{Duty, WorkerDuties};
use super::pack::{Comparison, Pack, Rule, RuleClass};
use crate::roster::Roster;
use crate::timeline::Axis;
use crate::units::Minute;
use std::collections::BTreeSet;

/// What a rule says of one place.
#[derive(Debug, Clone, PartialEq)]
pub enum Verdict {
    /// In order.
    Met,
    /// Not met, but a derogation allows it: which one, and what is due.
    WithinFloor(String),
    /// Not met.
    NotMet,
    /// The roster does not hold what is needed: what is missing, and the value so far.
    NotJudged(String),
}

/// Place of the value so far in the words of what is missing.
pub const SO_FAR: &str = "{value}";

/// A measured value and its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Measure {
    /// Measured value in the unit of the rule.
    pub value: f64,
    /// Place of the window among the worker's windows, for rules measured on a gap.
    pub window: Option<usize>,
    /// First minute concerned.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Places of the worker's shifts concerned.
    pub shifts: Vec<usize>,
    /// What is missing, if the value cannot be judged; [`SO_FAR`] stands for the value so far.
    pub missing: Option<String>,
}

/// The outcome of one rule at one place.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Id of the rule.
    pub rule: String,
    /// Group of rules of which one would do.
    pub any_of: Option<String>,
    /// Law or advice.
    pub is_law: bool,
    /// Name of the metric.
    pub metric: String,
    /// Measured value.
    pub value: f64,
    /// Limit.
    pub limit: f64,
    /// Unit of both.
    pub unit: String,
    /// Which side of the limit is in order.
    pub op: Comparison,
    /// Instrument, article, tier.
    pub citation: String,
    /// Derogations that the instrument knows.
    pub derogations: Vec<String>,
    /// What follows.
    pub verdict: Verdict,
    /// Window, for rules measured on a gap.
    pub window: Option<usize>,
    /// First minute concerned.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Places of the worker's shifts concerned.
    pub shifts: Vec<usize>,
}

/// What a kind may ask.
#[derive(Debug, Clone, Copy)]
pub struct Subject<'a> {
    /// The roster.
    pub roster: &'a Roster,
    /// The elapsed axis.
    pub axis: &'a Axis,
    /// The worker's duties.
    pub worker: &'a WorkerDuties,
    /// Limits that the kinds share.
    pub criteria: &'a Criteria,
    /// The pack whose rule is measured.
    pub pack: &'a Pack,
}

impl Subject<'_> {
    /// Hours of a duty inside the night of the pack.
    pub fn night_h(&self, duty: &Duty) -> f64 {
        let night = ClockWindow::written(&self.pack.night.from, &self.pack.night.to);
        duty.parts
            .iter()
            .map(|(from, to)| night.hours_inside(self.axis, *from, *to))
            .sum()
    }

    /// Is it a night duty under the pack's definition?
    pub fn is_night(&self, duty: &Duty) -> bool {
        self.night_h(duty) >= self.pack.night.at_least_h
    }

    /// Runs of night duties: places of first and last duty. A run ends at any other duty or at a gap of 24 h or more.
    pub fn night_runs(&self) -> Vec<(usize, usize)> {
        let longest_gap = self.criteria.register.run_ends_with_gap.value;
        let duties = &self.worker.duties;
        let mut runs: Vec<(usize, usize)> = Vec::new();
        for (index, duty) in duties.iter().enumerate() {
            if !self.is_night(duty) {
                continue;
            }
            match runs.last_mut() {
                Some((_, last))
                    if *last + 1 == index
                        && duty.start.hours_since(duties[*last].end) < longest_gap =>
                {
                    *last = index;
                }
                _ => runs.push((index, index)),
            }
        }
        runs
    }

    /// Does [from, to) touch a date of the worker that could not be read?
    pub fn has_gap(&self, from: Minute, to: Minute) -> bool {
        self.roster.touches_unknown(
            self.worker.worker,
            self.axis.instant(from),
            self.axis.instant(to),
        )
    }

    /// The measure of a window, with the duties around it as its rows.
    pub fn on_window(&self, after: usize, value: f64) -> Measure {
        let (before, next) = (&self.worker.duties[after], &self.worker.duties[after + 1]);
        let mut shifts = before.shifts.clone();
        shifts.extend(&next.shifts);
        Measure {
            value,
            window: Some(after),
            start: before.end,
            end: next.start,
            shifts,
            missing: None,
        }
    }

    /// The measure of one duty.
    pub fn on_duty(&self, index: usize, value: f64) -> Measure {
        let duty = &self.worker.duties[index];
        Measure {
            value,
            window: None,
            start: duty.start,
            end: duty.end,
            shifts: duty.shifts.clone(),
            missing: None,
        }
    }
}

/// One kind of rule.
#[derive(Debug, Clone, Copy)]
pub struct RuleKind {
    /// Name of the metric in the packs.
    pub metric: &'static str,
    /// What it measures, in one sentence.
    pub about: &'static str,
    /// Measures it for one worker.
    pub measure: fn(&Subject<'_>, &Rule) -> Vec<Measure>,
}

/// Every kind of rule that the program measures.
pub const KINDS: &[RuleKind] = &[
    gap::KIND,
    longest_off::KIND,
    off_blocks::KIND,
    gap_after_nights::KIND,
    nights_of_sleep::KIND,
    run_nights::KIND,
    duty_length::DUTY,
    duty_length::NIGHT_DUTY,
    breaks::KIND,
    average::WEEK,
    average::NIGHT_WORKER,
];

/// Why a rule cannot be measured on any roster of this kind.
pub fn needs(rule: &Rule) -> Option<String> {
    let scope = rule.scope.as_str();
    if scope.starts_with("young") || scope == "pregnant" {
        return Some("needs clinician audience and attributes (age, pregnancy)".to_owned());
    }
    if scope.contains("special-hazard") {
        return Some("needs the risk assessment that names work with special hazard".to_owned());
    }
    if rule.metric.starts_with("duty.") {
        return Some(
            "needs the employer's records: a duty of the employer, not visible in a roster"
                .to_owned(),
        );
    }
    if rule.metric == "break_given" {
        return Some("needs the agreed length of the break".to_owned());
    }
    if KINDS.iter().all(|kind| kind.metric != rule.metric) {
        return Some(format!(
            "needs the measure {}, which this version does not have",
            rule.metric
        ));
    }
    None
}

/// Derogations that the site declares, by id as in the packs.
pub type Declared = BTreeSet<String>;

/// Outcomes of all packs for one worker. Rules that are never measurable here are left out; see [`needs`].
pub fn judge(subject: &Subject<'_>, declared: &Declared) -> Vec<Outcome> {
    let mut outcomes = Vec::new();
    for rule in &subject.pack.rules {
        if needs(rule).is_some() {
            continue;
        }
        let Some(kind) = KINDS.iter().find(|kind| kind.metric == rule.metric) else {
            continue;
        };
        let measures = (kind.measure)(subject, rule);
        outcomes.extend(
            measures
                .into_iter()
                .map(|measure| outcome(subject.pack, rule, measure, declared)),
        );
    }
    outcomes
}

fn outcome(pack: &Pack, rule: &Rule, measure: Measure, declared: &Declared) -> Outcome {
    let verdict = match measure.missing {
        Some(missing) => Verdict::NotJudged(missing),
        None if rule.op.holds(measure.value, rule.value) => Verdict::Met,
        None => short_of(rule, measure.value, declared),
    };
    Outcome {
        rule: rule.id.clone(),
        any_of: rule.any_of.clone(),
        is_law: pack.class == RuleClass::Law,
        metric: rule.metric.clone(),
        value: measure.value,
        limit: rule.value,
        unit: rule.unit.clone(),
        op: rule.op,
        citation: rule.citation(),
        derogations: rule.derogations.clone(),
        verdict,
        window: measure.window,
        start: measure.start,
        end: measure.end,
        shifts: measure.shifts,
    }
}

/// Not met: does a derogation still allow it? Without a numeric floor only one that the site declares.
fn short_of(rule: &Rule, value: f64, declared: &Declared) -> Verdict {
    let named = rule.derogations.iter().find(|id| declared.contains(*id));
    let within = match rule.floor {
        Some(floor) => rule.op.holds(value, floor) && !rule.derogations.is_empty(),
        None => named.is_some(),
    };
    if !within {
        return Verdict::NotMet;
    }
    let which = named.map_or_else(
        || format!("only under a derogation: {}", rule.derogations.join(", ")),
        |id| format!("under {id}, declared by the site"),
    );
    Verdict::WithinFloor(format!(
        "{which}; equivalent compensatory rest is due, as a rule at once after the duty"
    ))
}

/// Rules with the same `any_of` are met when one of them is: what another rule mends is left out,
/// and what another rule might still mend, because its period is not complete, is not judged.
pub fn settle_alternatives(outcomes: Vec<Outcome>) -> Vec<Outcome> {
    let settled: Vec<Option<Verdict>> = outcomes
        .iter()
        .map(|outcome| settled_verdict(&outcomes, outcome))
        .collect();
    outcomes
        .into_iter()
        .zip(settled)
        .filter_map(|(outcome, verdict)| verdict.map(|verdict| Outcome { verdict, ..outcome }))
        .collect()
}

/// The verdict of an outcome in the light of its alternatives; `None` when one of them is met instead.
fn settled_verdict(all: &[Outcome], this: &Outcome) -> Option<Verdict> {
    let short = matches!(this.verdict, Verdict::NotMet | Verdict::WithinFloor(_));
    let Some(group) = this.any_of.as_ref().filter(|_| short) else {
        return Some(this.verdict.clone());
    };
    let others: BTreeSet<&str> = all
        .iter()
        .filter(|other| other.any_of.as_ref() == Some(group) && other.rule != this.rule)
        .map(|other| other.rule.as_str())
        .collect();
    let states: Vec<Alternative> = others
        .into_iter()
        .map(|rule| alternative(all, rule, this))
        .collect();
    if states.contains(&Alternative::Met) {
        None
    } else if states.contains(&Alternative::Open) {
        Some(Verdict::NotJudged(
            "another form of the rule has a period that the roster does not hold completely"
                .to_owned(),
        ))
    } else {
        Some(this.verdict.clone())
    }
}

/// What another rule of the group says of a stretch.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Alternative {
    Met,
    Open,
    NotMet,
}

fn alternative(all: &[Outcome], rule: &str, this: &Outcome) -> Alternative {
    let overlapping: Vec<&Outcome> = all
        .iter()
        .filter(|other| other.rule == rule && other.start < this.end && this.start < other.end)
        .collect();
    let covered: i64 = overlapping
        .iter()
        .map(|other| other.end.min(this.end) - other.start.max(this.start))
        .sum();
    let broken = overlapping
        .iter()
        .any(|other| matches!(other.verdict, Verdict::NotMet | Verdict::WithinFloor(_)));
    let open = overlapping
        .iter()
        .any(|other| matches!(other.verdict, Verdict::NotJudged(_)));
    match (broken, open || covered < this.end - this.start) {
        (true, _) => Alternative::NotMet,
        (false, true) => Alternative::Open,
        (false, false) => Alternative::Met,
    }
}
