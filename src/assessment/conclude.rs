//! From outcomes and estimates to findings: one per worker or line and cause.

use super::finding::{
    Attention, BrokenRule, Finding, FindingCode, FindingKind, MembersHold, Occurrence, SubjectOf,
};
use super::rules::{self, Outcome, SO_FAR, Verdict};
use super::window::{Reason, RecoveryWindow, WindowClass};
use super::{AssessmentInput, LineAssessment, WorkerAssessment};
use crate::numeric::quantile::ratio;
use crate::source::OriginId;
use crate::units::Minute;
use std::collections::{BTreeMap, BTreeSet};

/// All findings, most urgent first, then by time and subject.
pub(super) fn findings(
    input: &AssessmentInput<'_>,
    workers: &[WorkerAssessment],
    lines: &[LineAssessment],
) -> Vec<Finding> {
    let mut findings = Vec::new();
    for worker in workers {
        let line = lines.iter().find(|line| line.line.id == worker.line);
        let rows = Rows { input, worker };
        findings.extend(compressed_rest(&rows, line));
        findings.extend(rest_after_nights(&rows));
        findings.extend(narrow_rest(&rows));
        findings.extend(run_of_nights(&rows));
        findings.extend(duty_length(&rows));
        findings.extend(break_length(&rows));
        findings.extend(period_limits(&rows));
    }
    for line in lines {
        let windows = line_windows(line, workers);
        findings.extend(sleep_windows(line, &windows, input));
        findings.extend(long_awake(line, &windows, input));
    }
    findings.extend(not_judged(input, workers));
    findings.sort_by(|a, b| {
        // Rules that were not judged say nothing of a time and stand last.
        let key = |f: &Finding| {
            let open = f.kind == FindingKind::NotJudged;
            (f.attention, open, f.start, f.code, f.subject)
        };
        key(a).cmp(&key(b))
    });
    findings
}

/// A worker and the rows behind it.
struct Rows<'a> {
    input: &'a AssessmentInput<'a>,
    worker: &'a WorkerAssessment,
}

impl Rows<'_> {
    fn origins(&self, shifts: impl IntoIterator<Item = usize>) -> Vec<OriginId> {
        let all = self.input.roster.shifts_of(self.worker.worker);
        let rows: BTreeSet<OriginId> = shifts
            .into_iter()
            .filter_map(|index| all.get(index))
            .map(|shift| shift.origin)
            .collect();
        rows.into_iter().collect()
    }

    fn on_window(&self, window: usize) -> impl Iterator<Item = &Outcome> {
        self.worker
            .outcomes
            .iter()
            .filter(move |outcome| outcome.window == Some(window))
            .filter(|outcome| is_short(outcome))
    }

    fn window_rows(&self, window: &RecoveryWindow) -> Vec<OriginId> {
        let duties = &self.worker.duties.duties;
        let shifts = duties[window.after]
            .shifts
            .iter()
            .chain(&duties[window.after + 1].shifts);
        self.origins(shifts.copied())
    }
}

fn is_judged(window: &RecoveryWindow) -> bool {
    !matches!(window.class, WindowClass::NotJudged | WindowClass::Listed)
}

fn is_short(outcome: &Outcome) -> bool {
    matches!(outcome.verdict, Verdict::NotMet | Verdict::WithinFloor(_))
}

/// The rules of outcomes, each once: law first, then by id.
fn broken_rules(outcomes: &[&Outcome]) -> Vec<BrokenRule> {
    let mut rules: BTreeMap<(bool, &str), BrokenRule> = BTreeMap::new();
    for outcome in outcomes {
        rules
            .entry((!outcome.is_law, outcome.rule.as_str()))
            .or_insert_with(|| BrokenRule {
                id: outcome.rule.clone(),
                is_law: outcome.is_law,
                within_floor: matches!(outcome.verdict, Verdict::WithinFloor(_)),
                metric: outcome.metric.clone(),
                op: outcome.op,
                limit: outcome.limit,
                unit: outcome.unit.clone(),
            });
    }
    rules.into_values().collect()
}

/// Sources of the rules, and for law not met the derogations that the instrument knows.
fn citations(outcomes: &[&Outcome]) -> String {
    let sources: BTreeSet<&str> = outcomes.iter().map(|o| o.citation.as_str()).collect();
    let derogations: BTreeSet<&str> = outcomes
        .iter()
        .filter(|o| o.is_law && o.verdict == Verdict::NotMet)
        .flat_map(|o| o.derogations.iter().map(String::as_str))
        .collect();
    let mut text = sources.into_iter().collect::<Vec<_>>().join("; ");
    if !derogations.is_empty() {
        let known = derogations.into_iter().collect::<Vec<_>>().join(", ");
        text.push_str("; no derogation declared, the instrument knows ");
        text.push_str(&known);
    }
    text
}

/// Places of outcomes, each once with the value furthest from its limit.
fn occurrences(outcomes: &[&Outcome]) -> Vec<Occurrence> {
    let mut places: BTreeMap<(Minute, Minute), &Outcome> = BTreeMap::new();
    for outcome in outcomes {
        let place = places
            .entry((outcome.start, outcome.end))
            .or_insert(outcome);
        if excess(outcome) > excess(place) {
            *place = outcome;
        }
    }
    places
        .into_iter()
        .map(|((start, end), outcome)| Occurrence {
            start,
            end,
            measured: outcome.value,
        })
        .collect()
}

/// Distance from the limit as a share of it.
fn excess(outcome: &Outcome) -> f64 {
    (outcome.value - outcome.limit).abs() / outcome.limit.abs().max(1.0)
}

/// Which derogation allows what is otherwise not met, and what is due.
fn floor_remark(outcomes: &[&Outcome]) -> Option<String> {
    outcomes.iter().find_map(|outcome| match &outcome.verdict {
        Verdict::WithinFloor(text) => Some(text.clone()),
        _ => None,
    })
}

/// One finding per window that is compressed by law or by its length.
fn compressed_rest(rows: &Rows<'_>, line: Option<&LineAssessment>) -> Vec<Finding> {
    rows.worker
        .windows
        .iter()
        .filter(|window| is_judged(window) && window.is_compressed_by_rest())
        .map(|window| {
            let outcomes: Vec<&Outcome> = rows.on_window(window.after).collect();
            let law: Vec<&Outcome> = outcomes.iter().copied().filter(|o| o.is_law).collect();
            let estimate = line.and_then(|line| line.estimate.windows.get(window.after));
            let worst = law
                .iter()
                .max_by(|a, b| excess(a).total_cmp(&excess(b)).then(b.rule.cmp(&a.rule)));
            let own = &rows.input.criteria.rest.compressed_below;
            Finding {
                code: FindingCode::CompressedRest,
                attention: rest_attention(rows.input, window, estimate.map(|e| e.shares().k24)),
                kind: if law.is_empty() {
                    FindingKind::Advice
                } else {
                    FindingKind::Law
                },
                subject: SubjectOf::Worker(rows.worker.worker),
                start: window.start,
                end: window.end,
                measured: Some(worst.map_or(window.hours(), |o| o.value)),
                limit: Some(worst.map_or(own.value, |o| o.limit)),
                unit: "h".to_owned(),
                members: None,
                rules: broken_rules(&outcomes),
                source: if outcomes.is_empty() {
                    format!("{} ({})", own.source, own.mark)
                } else {
                    citations(&outcomes)
                },
                rows: rows.window_rows(window),
                occurrences: vec![Occurrence {
                    start: window.start,
                    end: window.end,
                    measured: window.hours(),
                }],
                remark: floor_remark(&outcomes),
                history_assumed: window.history_assumed,
            }
        })
        .collect()
}

/// Law not met, a gap under 8 h, or short rest with sleep short in half the members: priority; otherwise review.
fn rest_attention(
    input: &AssessmentInput<'_>,
    window: &RecoveryWindow,
    k24: Option<f64>,
) -> Attention {
    let sleep_short = !window.history_assumed
        && k24.is_some_and(|share| share >= input.criteria.sleep.narrow_from_share.value);
    if window.breaks_law()
        || window.hours() < input.criteria.rest.very_short_below.value
        || sleep_short
    {
        Attention::Priority
    } else {
        Attention::Review
    }
}

/// Rules about the time after nights, on windows that are not compressed already.
fn rest_after_nights(rows: &Rows<'_>) -> Option<Finding> {
    let outcomes: Vec<&Outcome> = rows
        .worker
        .windows
        .iter()
        .filter(|window| is_judged(window) && !window.is_compressed_by_rest())
        .flat_map(|window| rows.on_window(window.after))
        .filter(|outcome| is_after_nights(rows, outcome))
        .collect();
    let too_few_nights = outcomes
        .iter()
        .any(|outcome| outcome.metric == "full_night_sleeps_at_switch");
    let attention = if too_few_nights {
        Attention::Review
    } else {
        Attention::Note
    };
    grouped(rows, FindingCode::RestAfterNights, attention, &outcomes)
}

fn is_after_nights(rows: &Rows<'_>, outcome: &Outcome) -> bool {
    match outcome.metric.as_str() {
        "gap_after_nights_h" => true,
        // The same rule also looks at changes from day to night; those are narrow windows.
        "full_night_sleeps_at_switch" => outcome.window.is_some_and(|window| {
            let duty = &rows.worker.duties.duties[window];
            let facts = super::exposure::shift_facts(
                rows.input.axis,
                rows.input.criteria,
                duty.start,
                duty.end,
            );
            facts.class == super::ShiftClass::Night
        }),
        _ => false,
    }
}

fn narrow_rest(rows: &Rows<'_>) -> Option<Finding> {
    let outcomes: Vec<&Outcome> = rows
        .worker
        .windows
        .iter()
        .filter(|window| is_judged(window) && !window.is_compressed_by_rest())
        .flat_map(|window| rows.on_window(window.after))
        .filter(|outcome| !is_after_nights(rows, outcome))
        .collect();
    grouped(rows, FindingCode::NarrowRest, Attention::Note, &outcomes)
}

fn run_of_nights(rows: &Rows<'_>) -> Option<Finding> {
    let outcomes = short_of_metric(rows, &["run_nights"]);
    grouped(rows, FindingCode::RunOfNights, Attention::Review, &outcomes)
}

fn duty_length(rows: &Rows<'_>) -> Option<Finding> {
    let outcomes = short_of_metric(rows, &["duty_h", "night_duty_h"]);
    grouped(rows, FindingCode::DutyLength, Attention::Note, &outcomes)
}

fn break_length(rows: &Rows<'_>) -> Option<Finding> {
    let outcomes = short_of_metric(rows, &["break_min"]);
    grouped(
        rows,
        FindingCode::BreakLength,
        Attention::Priority,
        &outcomes,
    )
}

fn short_of_metric<'a>(rows: &'a Rows<'_>, metrics: &[&str]) -> Vec<&'a Outcome> {
    rows.worker
        .outcomes
        .iter()
        .filter(|outcome| metrics.contains(&outcome.metric.as_str()) && is_short(outcome))
        .collect()
}

/// Repeats of one cause are one finding with its worst value and the number of places.
fn grouped(
    rows: &Rows<'_>,
    code: FindingCode,
    attention: Attention,
    outcomes: &[&Outcome],
) -> Option<Finding> {
    let worst = *outcomes.iter().max_by(|a, b| {
        excess(a)
            .total_cmp(&excess(b))
            .then(b.start.cmp(&a.start))
            .then(b.rule.cmp(&a.rule))
    })?;
    Some(Finding {
        code,
        attention,
        kind: if outcomes.iter().any(|o| o.is_law) {
            FindingKind::Law
        } else {
            FindingKind::Advice
        },
        subject: SubjectOf::Worker(rows.worker.worker),
        start: worst.start,
        end: worst.end,
        measured: Some(worst.value),
        limit: Some(worst.limit),
        unit: worst.unit.clone(),
        members: None,
        rules: broken_rules(outcomes),
        source: citations(outcomes),
        rows: rows.origins(outcomes.iter().flat_map(|o| o.shifts.iter().copied())),
        occurrences: occurrences(outcomes),
        remark: floor_remark(outcomes),
        history_assumed: false,
    })
}

/// Weekly rest and averages: one finding per rule, or per group of rules of which one would do.
fn period_limits(rows: &Rows<'_>) -> Vec<Finding> {
    let mut groups: BTreeMap<&str, Vec<&Outcome>> = BTreeMap::new();
    for outcome in &rows.worker.outcomes {
        let elsewhere = ["run_nights", "duty_h", "night_duty_h", "break_min"];
        let is_period = outcome.window.is_none() && !elsewhere.contains(&outcome.metric.as_str());
        if is_period && is_short(outcome) {
            let group = outcome.any_of.as_deref().unwrap_or(&outcome.rule);
            groups.entry(group).or_default().push(outcome);
        }
    }
    groups
        .into_values()
        .filter_map(|outcomes| {
            let broken = outcomes.iter().any(|o| o.verdict == Verdict::NotMet);
            let attention = match (outcomes.iter().any(|o| o.is_law), broken) {
                (true, true) => Attention::Priority,
                (true, false) => Attention::Review,
                (false, _) => Attention::Note,
            };
            grouped(rows, FindingCode::PeriodLimit, attention, &outcomes)
        })
        .collect()
}

/// The windows of a line, each as judged for the first worker on it whose dates are known.
fn line_windows<'a>(
    line: &LineAssessment,
    workers: &'a [WorkerAssessment],
) -> Vec<&'a RecoveryWindow> {
    let on_line: Vec<&WorkerAssessment> =
        workers.iter().filter(|w| w.line == line.line.id).collect();
    (0..line.estimate.windows.len())
        .filter_map(|index| {
            let mut windows = on_line.iter().filter_map(|w| w.windows.get(index));
            let first = windows.clone().next();
            windows.find(|window| is_judged(window)).or(first)
        })
        .collect()
}

/// Windows of a line that the sleep test marks and the rest test does not.
fn sleep_windows(
    line: &LineAssessment,
    windows: &[&RecoveryWindow],
    input: &AssessmentInput<'_>,
) -> Vec<Finding> {
    let of = |code, reason: &Reason, usual| {
        let marked: Vec<&RecoveryWindow> = windows
            .iter()
            .copied()
            .filter(|w| is_judged(w) && w.reasons.contains(reason) && !w.is_compressed_by_rest())
            // A window that is narrow by advice is told there.
            .filter(|w| *reason == Reason::SleepShort || w.reasons.iter().all(Reason::is_model))
            .collect();
        sleep_finding(line, input, code, usual, &marked)
    };
    let short = of(
        FindingCode::CompressedSleep,
        &Reason::SleepShort,
        Attention::Review,
    );
    let nearly = of(
        FindingCode::NarrowSleep,
        &Reason::SleepNearlyShort,
        Attention::Note,
    );
    short.into_iter().chain(nearly).collect()
}

fn sleep_finding(
    line: &LineAssessment,
    input: &AssessmentInput<'_>,
    code: FindingCode,
    usual: Attention,
    windows: &[&RecoveryWindow],
) -> Option<Finding> {
    let known: Vec<&RecoveryWindow> = windows
        .iter()
        .copied()
        .filter(|window| !window.history_assumed)
        .collect();
    // While nothing but assumed history speaks, the finding stays a note.
    let (counted, attention) = if known.is_empty() {
        (windows, Attention::Note)
    } else {
        (known.as_slice(), usual)
    };
    let worst = counted
        .iter()
        .filter_map(|window| line.estimate.windows.get(window.after))
        .max_by_key(|estimate| (estimate.short_24h, estimate.short_48h, -estimate.start.0))?;
    let limit = &input.criteria.sleep.short_24h_below;
    Some(Finding {
        code,
        attention,
        kind: FindingKind::Model,
        subject: SubjectOf::Line(line.line.id),
        start: worst.start,
        end: worst.end,
        measured: Some(worst.sleep_24h.median),
        limit: Some(limit.value),
        unit: "h".to_owned(),
        members: Some(MembersHold {
            hold: worst.short_24h,
            of: worst.members,
        }),
        rules: Vec::new(),
        source: format!("{} ({})", limit.source, limit.mark),
        rows: Vec::new(),
        occurrences: counted
            .iter()
            .filter_map(|window| line.estimate.windows.get(window.after))
            .map(|estimate| Occurrence {
                start: estimate.start,
                end: estimate.end,
                measured: estimate.sleep_24h.median,
            })
            .collect(),
        remark: None,
        history_assumed: known.is_empty(),
    })
}

/// Duties at whose end at least half of the members have been awake for long.
fn long_awake(
    line: &LineAssessment,
    windows: &[&RecoveryWindow],
    input: &AssessmentInput<'_>,
) -> Option<Finding> {
    let members = line.estimate.windows.first().map_or_else(
        || input.simulations.first().map_or(0, |s| s.tracks.len()),
        |window| window.members,
    );
    let long: Vec<_> = line
        .estimate
        .shifts
        .iter()
        .filter(|shift| ratio(shift.long_awake, members) >= input.criteria.awake.from_share.value)
        .collect();
    let worst = long.iter().max_by(|a, b| {
        let median = |s: &super::estimate::ShiftEstimate| s.awake_at_end_h.median;
        median(a).total_cmp(&median(b)).then(b.start.cmp(&a.start))
    })?;
    let limit = &input.criteria.awake.long_from;
    Some(Finding {
        code: FindingCode::LongAwake,
        attention: Attention::Note,
        kind: FindingKind::Model,
        subject: SubjectOf::Line(line.line.id),
        start: worst.start,
        end: worst.end,
        measured: Some(worst.awake_at_end_h.median),
        limit: Some(limit.value),
        unit: "h".to_owned(),
        members: Some(MembersHold {
            hold: worst.long_awake,
            of: members,
        }),
        rules: Vec::new(),
        source: format!("{} ({})", limit.source, limit.mark),
        rows: Vec::new(),
        occurrences: long
            .iter()
            .map(|shift| Occurrence {
                start: shift.start,
                end: shift.end,
                measured: shift.awake_at_end_h.median,
            })
            .collect(),
        remark: None,
        history_assumed: windows
            .iter()
            .filter(|window| window.history_assumed)
            .map(|window| window.end)
            .max()
            .is_some_and(|last| long.iter().all(|shift| shift.start <= last)),
    })
}

/// One note per rule that the roster cannot answer, for all workers together.
fn not_judged(input: &AssessmentInput<'_>, workers: &[WorkerAssessment]) -> Vec<Finding> {
    let mut findings = Vec::new();
    for rule in input.packs.iter().flat_map(|pack| &pack.rules) {
        let open: Vec<&Outcome> = workers
            .iter()
            .flat_map(|worker| &worker.outcomes)
            .filter(|o| o.rule == rule.id && matches!(o.verdict, Verdict::NotJudged(_)))
            .collect();
        let missing = rules::needs(rule).or_else(|| {
            let values = || open.iter().map(|o| o.value);
            let low = values().min_by(f64::total_cmp)?;
            let high = values().max_by(f64::total_cmp)?;
            match &open.first()?.verdict {
                Verdict::NotJudged(text) => Some(text.replace(SO_FAR, &range(low, high))),
                _ => None,
            }
        });
        if let Some(missing) = missing {
            findings.push(not_judged_finding(input, rule, missing));
        }
    }
    findings
}

/// `31.6`, or `27.2 to 38.0` over several workers.
fn range(low: f64, high: f64) -> String {
    if (high - low).abs() < 0.05 {
        format!("{low:.1}")
    } else {
        format!("{low:.1} to {high:.1}")
    }
}

fn not_judged_finding(
    input: &AssessmentInput<'_>,
    rule: &super::pack::Rule,
    missing: String,
) -> Finding {
    let days = input.axis.rostered_dates();
    Finding {
        code: FindingCode::RuleNotJudged,
        attention: Attention::Note,
        kind: FindingKind::NotJudged,
        subject: SubjectOf::Roster,
        start: days.first().map_or(Minute(0), |day| day.start),
        end: days.last().map_or(Minute(0), |day| day.end),
        measured: None,
        limit: Some(rule.value),
        unit: rule.unit.clone(),
        members: None,
        rules: vec![BrokenRule {
            id: rule.id.clone(),
            is_law: false,
            within_floor: false,
            metric: rule.metric.clone(),
            op: rule.op,
            limit: rule.value,
            unit: rule.unit.clone(),
        }],
        source: rule.citation(),
        rows: Vec::new(),
        occurrences: Vec::new(),
        remark: Some(missing),
        history_assumed: false,
    }
}
