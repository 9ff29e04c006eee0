//! Sentences of the report: the same condition is worded the same way in every format.

use super::document::MethodRow;
use crate::assessment::{Finding, FindingCode, RecoveryWindow};
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

/// A count with its noun: `1 worker`, `3 workers`.
pub fn counted(count: usize, noun: &str) -> String {
    if count == 1 {
        format!("1 {noun}")
    } else {
        format!("{count} {noun}s")
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
    if compressed == 0 {
        format!("No window met this program's criteria. {SECOND}")
    } else {
        format!(
            "{compressed} of {windows} windows met this program's criteria for compression. {SECOND}"
        )
    }
}

/// A displacement in words, never as a bare sign: positive is earlier.
pub fn shift_text(earlier_h: f64) -> String {
    let side = if earlier_h < 0.0 { "later" } else { "earlier" };
    format!("{:.1} h {side}", earlier_h.abs())
}

/// A finding in words.
pub fn message(finding: &Finding, window: Option<&RecoveryWindow>, is_eu: bool) -> String {
    let measured = finding.measured.unwrap_or(0.0);
    let limit = finding.limit.unwrap_or(0.0);
    let repeats = repeats(finding);
    let mut text = match finding.code {
        FindingCode::CompressedRest => compressed_rest(finding, window),
        FindingCode::CompressedSleep => format!(
            "generic adult: less than {limit} h of sleep fits into the 24 h before the next duty (median {}){repeats}",
            hours_text(measured)
        ),
        FindingCode::NarrowSleep => format!(
            "generic adult: sleep before the next duty is close to short (median {} in 24 h){repeats}",
            hours_text(measured)
        ),
        FindingCode::LongAwake => format!(
            "generic adult: awake for {} at the end of the duty (median){repeats}; do not drive home tired: see the driving caution",
            hours_text(measured)
        ),
        FindingCode::RunOfNights => {
            format!("{measured:.0} nights in a row; advice has at most {limit:.0}{repeats}")
        }
        FindingCode::RestAfterNights if finding.unit == "count" => format!(
            "{} off between nights and the next other duty; advice has {limit:.0}{repeats}",
            nights_text(measured)
        ),
        FindingCode::RestAfterNights => format!(
            "{} off after nights; advice has {limit:.0} h{repeats}",
            hours_text(measured)
        ),
        FindingCode::NarrowRest if finding.unit == "count" => format!(
            "{} off at a change of duty; advice has {limit:.0}{repeats}",
            nights_text(measured)
        ),
        FindingCode::NarrowRest => format!(
            "{} between duties; advice has {limit:.0} h{repeats}",
            hours_text(measured)
        ),
        FindingCode::DutyLength => format!(
            "duty of {}; advice has at most {limit:.0} h{repeats}",
            hours_text(measured)
        ),
        FindingCode::BreakLength => {
            format!("break of {measured:.0} min; the law has {limit:.0} min{repeats}")
        }
        FindingCode::PeriodLimit => period_limit(finding),
        FindingCode::RuleNotJudged => format!(
            "not judged: {}",
            finding.remark.as_deref().unwrap_or("data are missing")
        ),
    };
    if let (Some(remark), false) = (&finding.remark, finding.code == FindingCode::RuleNotJudged) {
        text.push_str("; ");
        text.push_str(remark);
    }
    if finding.history_assumed && finding.kind == crate::assessment::FindingKind::Model {
        text.push_str("; history: assumed");
    }
    if is_eu && finding.code != FindingCode::RuleNotJudged {
        text.push_str("; EU minimum standard; the national law that implements it decides");
    }
    text
}

fn compressed_rest(finding: &Finding, window: Option<&RecoveryWindow>) -> String {
    let gap = window.map_or(finding.measured.unwrap_or(0.0), RecoveryWindow::hours);
    let limit = finding.limit.unwrap_or(0.0);
    let inside = finding
        .measured
        .filter(|measured| (gap - measured).abs() > 0.01)
        .map(|measured| {
            format!(
                ", of which {} in the 24 h from the start of the duty before",
                hours_text(measured)
            )
        })
        .unwrap_or_default();
    let by = match finding.kind {
        crate::assessment::FindingKind::Law => "the law has",
        _ => "advice has",
    };
    format!(
        "{} between duties{inside}; {by} {limit:.0} h",
        hours_text(gap)
    )
}

fn period_limit(finding: &Finding) -> String {
    let measured = finding.measured.unwrap_or(0.0);
    let limit = finding.limit.unwrap_or(0.0);
    match finding.unit.as_str() {
        "h" => format!(
            "{} in the period; the limit is {limit:.0} h{}",
            hours_text(measured),
            repeats(finding)
        ),
        unit => format!(
            "{measured:.0} in the period; the limit is {limit:.0} ({unit}){}",
            repeats(finding)
        ),
    }
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
    if finding.occurrences > 1 {
        format!(" (worst of {} occurrences)", finding.occurrences)
    } else {
        String::new()
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
            "Two-process model with published time constants, thresholds calibrated to habitual sleep, process C moved by the displacement of the pacemaker, effort before an alarm, and sleep only off duty, at home and past personal time. Three constants were fitted to published experiments; agreement with these is a fit, not a validation.",
        ),
        (
            "Circadian phase",
            "Pacemaker driven by light and by sleep and waking; CBTmin is read from the polar angle. DLMO is CBTmin minus 7 h and carries about 1 h of spread that is not modelled. Published models of the same week of nights differ by more than 2 h, even in direction: only one model is used here, so the bands are too narrow.",
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
