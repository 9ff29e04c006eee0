//! Sentences of the report: the same condition is worded the same way in every format.

use super::document::{MethodRow, RuleRow};
use crate::assessment::finding::BrokenRule;
use crate::assessment::pack::{Comparison, Rule};
use crate::assessment::{Finding, FindingCode, FindingKind, RecoveryWindow, rules};
use crate::timeline::Axis;
use crate::units::Minute;

/// Elapsed hours as a person reads them: `8 h 00`.
///
/// # Example
///
/// ```
/// use acroshift::report::wording::hours_text;
/// assert_eq!(hours_text(7.5), "7 h 30");
/// assert_eq!(hours_text(10.999), "11 h 00");
/// ```
#[expect(
    clippy::cast_possible_truncation,
    reason = "hours of a roster in minutes fit an i64"
)]
pub fn hours_text(hours: f64) -> String {
    let minutes = (hours * 60.0).round() as i64;
    format!("{} h {:02}", minutes / 60, (minutes % 60).abs())
}

/// Local time in words: `Tue 10 Mar 21:30`.
pub fn when(axis: &Axis, minute: Minute) -> String {
    axis.local(minute).format("%a %d %b %H:%M").to_string()
}

/// A count with its noun: `1 worker`, `3 workers`, `2 duties`.
pub fn counted(count: usize, noun: &str) -> String {
    match (count, noun.strip_suffix('y')) {
        (1, _) => format!("1 {noun}"),
        (_, Some(stem)) => format!("{count} {stem}ies"),
        (_, None) => format!("{count} {noun}s"),
    }
}

/// RFC 3339 with offset.
pub fn stamp(axis: &Axis, minute: Minute) -> String {
    axis.local(minute)
        .format("%Y-%m-%dT%H:%M:%S%:z")
        .to_string()
}

/// The sentence that stands wherever counts are printed.
pub fn statement(compressed: usize, windows: usize) -> String {
    const SECOND: &str = "This is not a finding of safety: fatigue, illness and individual differences are not seen.";
    if windows == 0 {
        format!("No window was judged. {SECOND}")
    } else if compressed == 0 {
        format!("No window met this program's criteria. {SECOND}")
    } else {
        format!(
            "{compressed} of {windows} windows met this program's criteria for compression. {SECOND}"
        )
    }
}

/// A finding in words: what was measured, then which rules it does not meet.
pub fn message(finding: &Finding, window: Option<&RecoveryWindow>, person: &str) -> String {
    let mut parts = vec![measured_text(finding, window, person)];
    parts.extend(rules_text(finding));
    if finding.code == FindingCode::LongAwake {
        parts.push("see the caution on driving after nights".to_owned());
    }
    if finding.code != FindingCode::RuleNotJudged {
        parts.extend(finding.remark.clone());
    }
    if finding.history_assumed && finding.kind == FindingKind::Model {
        parts.push("history: assumed".to_owned());
    }
    parts.join("; ")
}

/// What was measured.
fn measured_text(finding: &Finding, window: Option<&RecoveryWindow>, person: &str) -> String {
    let measured = finding.measured.unwrap_or(0.0);
    let limit = finding.limit.unwrap_or(0.0);
    let repeats = repeats(finding);
    match finding.code {
        FindingCode::CompressedRest => compressed_rest(finding, window),
        FindingCode::CompressedSleep => format!(
            "{person}: less than {limit} h of sleep fits into the 24 h before the next duty (median {}){repeats}",
            hours_text(measured)
        ),
        FindingCode::NarrowSleep => format!(
            "{person}: sleep before the next duty is close to short (median {} in 24 h; short is below {limit} h){repeats}",
            hours_text(measured)
        ),
        FindingCode::LongAwake => format!(
            "{person}, without a nap: awake for {} at the end of the duty (median); told from {limit} h on{repeats}",
            hours_text(measured)
        ),
        FindingCode::RunOfNights => format!("{measured:.0} nights in a row{repeats}"),
        FindingCode::RestAfterNights | FindingCode::NarrowRest if finding.unit == "count" => {
            format!("{} off at a change of duty{repeats}", nights_text(measured))
        }
        FindingCode::RestAfterNights => {
            format!("{} off after nights{repeats}", hours_text(measured))
        }
        FindingCode::NarrowRest => format!("{} between duties{repeats}", hours_text(measured)),
        FindingCode::DutyLength => {
            let night = finding
                .rules
                .iter()
                .any(|rule| rule.metric == "night_duty_h");
            let noun = if night { "night duty" } else { "duty" };
            format!("{noun} of {}{repeats}", hours_text(measured))
        }
        FindingCode::BreakLength => format!("break of {measured:.0} min{repeats}"),
        FindingCode::PeriodLimit if finding.unit == "h" => {
            format!("{} in the period{repeats}", hours_text(measured))
        }
        FindingCode::PeriodLimit => format!("{measured:.0} in the period{repeats}"),
        FindingCode::RuleNotJudged => format!(
            "not judged: {}",
            finding.remark.as_deref().unwrap_or("data are missing")
        ),
    }
}

fn compressed_rest(finding: &Finding, window: Option<&RecoveryWindow>) -> String {
    let gap = window.map_or(finding.measured.unwrap_or(0.0), RecoveryWindow::hours);
    let inside = finding
        .measured
        .filter(|measured| (gap - measured).abs() > 0.01)
        .map(|measured| {
            let rest = hours_text(measured);
            if measured < gap {
                format!(", of which {rest} in the 24 h from the start of the duty before")
            } else {
                format!(
                    "; the longest rest in the 24 h from the start of the duty before is {rest}"
                )
            }
        })
        .unwrap_or_default();
    let own = if finding.rules.is_empty() {
        ", below 11 h"
    } else {
        ""
    };
    format!("{} between duties{inside}{own}", hours_text(gap))
}

/// Which rules are not met: `law not met: at least 11 h (uk-daily-rest)`, `advice: at least 11 h (garde-gap, hse-gap), at least 16 h (ka-gap)`.
fn rules_text(finding: &Finding) -> Vec<String> {
    if finding.code == FindingCode::RuleNotJudged {
        return Vec::new();
    }
    let parts = [
        ("law not met", true, false),
        ("law, only within a derogation", true, true),
        ("advice", false, false),
    ];
    parts
        .into_iter()
        .filter_map(|(head, is_law, within_floor)| {
            let rules: Vec<&BrokenRule> = finding
                .rules
                .iter()
                .filter(|r| r.is_law == is_law && (!is_law || r.within_floor == within_floor))
                .collect();
            (!rules.is_empty()).then(|| format!("{head}: {}", limits_text(&rules)))
        })
        .collect()
}

/// Limits with the rules that set them, equal limits together.
fn limits_text(rules: &[&BrokenRule]) -> String {
    let mut limits: Vec<(String, Vec<&str>)> = Vec::new();
    for rule in rules {
        let limit = limit_text(rule.op, rule.limit, &rule.unit);
        match limits.iter_mut().find(|(text, _)| *text == limit) {
            Some((_, ids)) => ids.push(&rule.id),
            None => limits.push((limit, vec![&rule.id])),
        }
    }
    limits
        .iter()
        .map(|(limit, ids)| format!("{limit} ({})", ids.join(", ")))
        .collect::<Vec<_>>()
        .join(", ")
}

/// `at least 11 h`.
fn limit_text(op: Comparison, limit: f64, unit: &str) -> String {
    let side = match op {
        Comparison::AtLeast => "at least",
        Comparison::AtMost => "at most",
        Comparison::Equal => "exactly",
    };
    match unit {
        "count" => format!("{side} {limit}"),
        unit => format!("{side} {limit} {unit}"),
    }
}

/// What a rule of a pack asks, in words.
pub fn rule_row(rule: &Rule) -> RuleRow {
    let measure = rules::KINDS
        .iter()
        .find(|kind| kind.metric == rule.metric)
        .map_or_else(
            || rule.metric.replace("duty.", "").replace(['_', '.'], " "),
            |kind| kind.about.to_owned(),
        );
    let window = rule.window.as_ref().map_or_else(String::new, |window| {
        let unit = if window.unit == "d" { "days" } else { "h" };
        match window.align.as_str() {
            "from-duty-start" => {
                format!(", in the {} {unit} from the start of each duty", window.len)
            }
            "period" => format!(", in each {} {unit}", window.len),
            other => format!(", in {} {unit} ({other})", window.len),
        }
    });
    let reference = rule
        .reference
        .as_ref()
        .filter(|reference| reference.len > 0)
        .map_or_else(String::new, |r| format!(", over {} {}s", r.len, r.unit));
    let above = rule
        .work_h_above
        .map_or_else(String::new, |hours| format!(", for duties over {hours} h"));
    let alternative = if rule.any_of.is_some() {
        "; one of several forms is enough"
    } else {
        ""
    };
    RuleRow {
        id: rule.id.clone(),
        asks: format!(
            "{measure}: {}{window}{reference}{above}{alternative}",
            limit_text(rule.op, rule.value, &rule.unit)
        ),
        scope: rule.scope.clone(),
        derogations: rule.derogations.join(", "),
        source: format!("{}; {}", rule.citation(), rule.source),
    }
}

/// The places of a finding that occurs more than once: `Mon 09 Mar 19:30 12 h 00`.
pub fn places(axis: &Axis, finding: &Finding) -> Vec<String> {
    if finding.occurrences.len() < 2 {
        return Vec::new();
    }
    finding
        .occurrences
        .iter()
        .map(|place| match finding.unit.as_str() {
            "h" => format!("{} {}", when(axis, place.start), hours_text(place.measured)),
            _ => format!("{} {:.0}", when(axis, place.start), place.measured),
        })
        .collect()
}

fn nights_text(nights: f64) -> String {
    let noun = if nights > 0.5 && nights < 1.5 {
        "local night"
    } else {
        "local nights"
    };
    format!("{nights:.0} {noun}")
}

fn repeats(finding: &Finding) -> String {
    match finding.occurrences.len() {
        0 | 1 => String::new(),
        count => format!(" (worst of {count} occurrences)"),
    }
}

/// The methods in words.
pub fn methods() -> Vec<MethodRow> {
    const TEXTS: [(&str, &str); 7] = [
        (
            "Recovery windows",
            "A window is the elapsed time from the end of a counted duty to the start of the next; gaps of at most 15 min are joined, pauses inside a split duty are no windows. No window stands before a worker's first known duty. Compressed: a rule of law not met or met only within a derogation, or a gap below 11 h, or sleep short in at least 80 % of the members. Narrow: another advice on the gap not met, or sleep short in at least half of the members, or short over 48 h in at least 80 %. Otherwise unmarked, which is no statement that the window is enough.",
        ),
        (
            "Sleep test",
            "For each member all sleep in the 24 h and 48 h that end at the next duty's start is summed. k24 is the share of members below 5 h, k48 the share below 12 h (Dawson and McCulloch 2005, called preliminary by their authors; the figures from memory).",
        ),
        (
            "Sleep",
            "Two-process model with published time constants, thresholds calibrated to habitual sleep, process C moved by the displacement of the pacemaker, effort before an alarm, and sleep only off duty, at home and past personal time. Four constants were fitted to published experiments and one was held; agreement with these is a fit, not a validation.",
        ),
        (
            "Circadian phase",
            "Pacemaker driven by light and by sleep and waking; CBTmin is read from the polar angle. DLMO is CBTmin minus 7 h and carries about 1 h of spread that is not modelled. Published models of the same week of nights differ by more than 2 h, even in direction: the bands are those of one model and too narrow; with all pacemakers asked for the others stand beside it.",
        ),
        (
            "Cortisol",
            "Three-stage cascade (CRH, ACTH, total serum cortisol) driven by phase, gated by sleep in the biological night, pulsed at waking, with a term for lost sleep in the evening. The curve band is the spread of the modelled group mean; it is never to be compared with a person's value. Sleep, phase and cortisol come from one simulation and are not independent evidence.",
        ),
        (
            "Reference quiescent interval",
            "On the member's habitual day: the unbroken interval around the nadir with modelled total cortisol below 60 % of the day's mean (own definition after the idea of Griefahn 2006), kept as phase from CBTmin and laid on each later day's CBTmin. The modelled interval begins too early and lasts too long against most measured groups.",
        ),
        (
            "Assumed history",
            "Days before the roster are taken as habitual days off. Model findings of a worker's first 7 days (14 when the roster starts with a night) rest on this assumption, stay at note and are left out of shares.",
        ),
    ];
    TEXTS
        .iter()
        .map(|(title, text)| MethodRow {
            title: (*title).to_owned(),
            text: (*text).to_owned(),
        })
        .collect()
}
