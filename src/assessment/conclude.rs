//! From outcomes and estimates to findings: one per worker or line and cause.

use super::finding::{Attention, Finding, FindingCode, FindingKind, MembersHold, SubjectOf};
use super::rules::{self, Outcome, SO_FAR, Verdict};
use super::window::{Reason, RecoveryWindow, WindowClass};
use super::{AssessmentInput, LineAssessment, WorkerAssessment};
use crate::numeric::quantile::ratio;
use crate::source::OriginId;
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
        let worker = workers.iter().find(|worker| worker.line == line.line.id);
        if let Some(worker) = worker {
            findings.extend(sleep_windows(line, worker, input));
            findings.extend(long_awake(line, input));
        }
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

fn is_short(outcome: &Outcome) -> bool {
    matches!(outcome.verdict, Verdict::NotMet | Verdict::WithinFloor(_))
}

fn rule_ids<'a>(outcomes: impl IntoIterator<Item = &'a Outcome>) -> Vec<String> {
    let ids: BTreeSet<&str> = outcomes.into_iter().map(|o| o.rule.as_str()).collect();
    ids.into_iter().map(str::to_owned).collect()
}

fn citations<'a>(outcomes: impl IntoIterator<Item = &'a Outcome>) -> String {
    let sources: BTreeSet<&str> = outcomes.into_iter().map(|o| o.citation.as_str()).collect();
    sources.into_iter().collect::<Vec<_>>().join("; ")
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
        .filter(|window| window.class == WindowClass::Compressed && !window.is_model_only())
        .map(|window| {
            let outcomes: Vec<&Outcome> = rows.on_window(window.after).collect();
            let law: Vec<&Outcome> = outcomes.iter().copied().filter(|o| o.is_law).collect();
            let estimate = line.and_then(|line| line.estimate.windows.get(window.after));
            let worst = law.first().or(outcomes.first());
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
                members: estimate.map(|e| MembersHold {
                    hold: e.short_24h,
                    of: e.members,
                }),
                rules: rule_ids(outcomes.iter().copied()),
                source: if outcomes.is_empty() {
                    format!("{} ({})", own.source, own.mark)
                } else {
                    citations(outcomes.iter().copied())
                },
                rows: rows.window_rows(window),
                occurrences: 1,
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
        .filter(|window| window.class == WindowClass::Narrow)
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
        .filter(|window| window.class == WindowClass::Narrow)
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
        let excess = |o: &Outcome| (o.value - o.limit).abs() / o.limit.abs().max(1.0);
        excess(a)
            .total_cmp(&excess(b))
            .then(b.start.cmp(&a.start))
            .then(b.rule.cmp(&a.rule))
    })?;
    let places: BTreeSet<_> = outcomes.iter().map(|o| (o.start, o.end)).collect();
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
        rules: rule_ids(outcomes.iter().copied()),
        source: citations(outcomes.iter().copied()),
        rows: rows.origins(outcomes.iter().flat_map(|o| o.shifts.iter().copied())),
        occurrences: places.len(),
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

/// Windows of a line that rest on the sleep test alone: compressed ones, then narrow ones.
fn sleep_windows(
    line: &LineAssessment,
    worker: &WorkerAssessment,
    input: &AssessmentInput<'_>,
) -> Vec<Finding> {
    let of = |code, reason: &Reason, usual| {
        let windows: Vec<&RecoveryWindow> = worker
            .windows
            .iter()
            .filter(|window| window.is_model_only() && window.reasons.contains(reason))
            .collect();
        sleep_finding(line, input, code, usual, &windows)
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
        occurrences: counted.len(),
        remark: None,
        history_assumed: known.is_empty(),
    })
}

/// Duties at whose end at least half of the members have been awake for long.
fn long_awake(line: &LineAssessment, input: &AssessmentInput<'_>) -> Option<Finding> {
    let members = line.estimate.windows.first().map_or_else(
        || input.simulations.first().map_or(0, |s| s.tracks.len()),
        |window| window.members,
    );
    let long: Vec<_> = line
        .estimate
        .shifts
        .iter()
        .filter(|shift| ratio(shift.long_awake, members) >= 0.5)
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
        occurrences: long.len(),
        remark: None,
        history_assumed: false,
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
            findings.push(not_judged_finding(input, rule, open.len(), missing));
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
    places: usize,
    missing: String,
) -> Finding {
    let days = input.axis.rostered_dates();
    Finding {
        code: FindingCode::RuleNotJudged,
        attention: Attention::Note,
        kind: FindingKind::NotJudged,
        subject: SubjectOf::Roster,
        start: days
            .first()
            .map_or(crate::units::Minute(0), |day| day.start),
        end: days.last().map_or(crate::units::Minute(0), |day| day.end),
        measured: None,
        limit: Some(rule.value),
        unit: rule.unit.clone(),
        members: None,
        rules: vec![rule.id.clone()],
        source: rule.citation(),
        rows: Vec::new(),
        occurrences: places.max(1),
        remark: Some(missing),
        history_assumed: false,
    }
}
