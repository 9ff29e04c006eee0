//! The section of a worker: facts of the roster, rest results, classes.

use super::document::{ShiftRow, WindowRow, WorkerSection, hours};
use super::figure::{BarLook, LimitLine, RecoveryStrip, WindowBar};
use super::{Audience, ReportInput, wording};
use crate::assessment::exposure::shift_facts;
use crate::assessment::{
    Attention, Exposure, Reason, RecoveryWindow, SubjectOf, WindowClass, WorkerAssessment,
};
use crate::numeric::quantile::ratio;
use crate::roster::{DutyKind, Shift};
use crate::source::OriginId;

/// The section of one worker.
pub(super) fn section(input: &ReportInput<'_>, worker: &WorkerAssessment) -> WorkerSection {
    let person = &input.roster.workers[worker.worker.index()];
    let windows: Vec<WindowRow> = worker
        .windows
        .iter()
        .map(|window| window_row(input, worker, window))
        .collect();
    let compressed = worker
        .windows
        .iter()
        .filter(|w| w.in_shares() && w.class == WindowClass::Compressed)
        .count();
    WorkerSection {
        id: person.name.clone(),
        team: person.team.clone(),
        line: worker.line.0,
        incomplete: worker.exposure.incomplete,
        priority_findings: input
            .assessment
            .findings
            .iter()
            .filter(|f| {
                f.attention == Attention::Priority && f.subject == SubjectOf::Worker(worker.worker)
            })
            .count(),
        compressed_per_28_days: ratio(compressed, worker.exposure.dates_seen) * 28.0,
        shifts: input
            .roster
            .shifts_of(worker.worker)
            .iter()
            .map(|shift| shift_row(input, shift))
            .collect(),
        strip: strip(&person.name, worker, &windows),
        windows,
        exposure: exposure(&worker.exposure),
    }
}

/// Row of the input as it is cited: `ward.csv:17`.
pub(super) fn row_text(input: &ReportInput<'_>, origin: OriginId) -> String {
    let file = input
        .inputs
        .get(origin.file.0 as usize)
        .map_or("", |(name, _)| name.as_str());
    format!("{file}:{}", origin.row)
}

fn shift_row(input: &ReportInput<'_>, shift: &Shift) -> ShiftRow {
    let (start, end) = (input.axis.minute(shift.start), input.axis.minute(shift.end));
    let facts = shift_facts(input.axis, input.criteria, start, end);
    ShiftRow {
        start: wording::stamp(input.axis, start),
        end: wording::stamp(input.axis, end),
        hours: hours(end.hours_since(start)),
        class: if shift.kind.counts() {
            facts.class.word().to_owned()
        } else {
            kind_word(shift.kind).to_owned()
        },
        night_h: hours(facts.night_h),
        code: shift.code.clone(),
        origin: row_text(input, shift.origin),
    }
}

fn kind_word(kind: DutyKind) -> &'static str {
    match kind {
        DutyKind::Standby => "standby",
        DutyKind::SleepIn => "sleep-in",
        DutyKind::Leave => "leave",
        DutyKind::Absent => "absent",
        _ => "rest",
    }
}

fn window_row(
    input: &ReportInput<'_>,
    worker: &WorkerAssessment,
    window: &RecoveryWindow,
) -> WindowRow {
    let duties = &worker.duties.duties;
    let class_of = |index: usize| {
        let duty = &duties[index];
        shift_facts(input.axis, input.criteria, duty.start, duty.end)
            .class
            .word()
            .to_owned()
    };
    WindowRow {
        start: wording::stamp(input.axis, window.start),
        end: wording::stamp(input.axis, window.end),
        start_text: wording::when(input.axis, window.start),
        end_text: wording::when(input.axis, window.end),
        hours: hours(window.hours()),
        after: class_of(window.after),
        before: class_of(window.after + 1),
        class: window.class,
        reasons: reasons(input.audience, worker, window),
    }
}

/// For planners a reason that rests on the model only points to the line.
fn reasons(audience: Audience, worker: &WorkerAssessment, window: &RecoveryWindow) -> Vec<String> {
    let mut reasons: Vec<String> = Vec::new();
    let told = |reason: &&Reason| !(window.history_assumed && reason.is_model());
    for reason in window.reasons.iter().filter(told) {
        let text = if reason.is_model() && audience == Audience::Planner {
            format!("see {}", worker.line)
        } else {
            reason.text()
        };
        reasons.push(text);
    }
    if window.interrupted {
        reasons.push("standby or sleep-in inside: sleep not judged".to_owned());
    }
    if window.class == WindowClass::NotJudged {
        reasons.push("a date of the window could not be read".to_owned());
    }
    if window.class == WindowClass::Listed {
        reasons.push("over 7 days".to_owned());
    }
    reasons
}

fn strip(name: &str, worker: &WorkerAssessment, windows: &[WindowRow]) -> RecoveryStrip {
    let count = |class: WindowClass| windows.iter().filter(|w| w.class == class).count();
    RecoveryStrip {
        title: format!("Recovery windows of {name}, {}", worker.line),
        description: format!(
            "{} windows: {} compressed, {} narrow, {} unmarked, {} not judged, {} over 7 days. Limits at 11 h and 16 h.",
            windows.len(),
            count(WindowClass::Compressed),
            count(WindowClass::Narrow),
            count(WindowClass::Unmarked),
            count(WindowClass::NotJudged),
            count(WindowClass::Listed)
        ),
        bars: windows
            .iter()
            .map(|window| WindowBar {
                start: window.start_text.clone(),
                hours: window.hours,
                look: match window.class {
                    WindowClass::Compressed => BarLook::Compressed,
                    WindowClass::Narrow => BarLook::Narrow,
                    WindowClass::Unmarked | WindowClass::Listed => BarLook::Unmarked,
                    WindowClass::NotJudged => BarLook::NotJudged,
                },
            })
            .collect(),
        limits: [11.0, 16.0, 48.0]
            .into_iter()
            .map(|hours| LimitLine {
                hours,
                label: format!("{hours} h"),
            })
            .collect(),
    }
}

fn exposure(exposure: &Exposure) -> Vec<(&'static str, &'static str, Option<f64>)> {
    let count = |value: usize| u32::try_from(value).ok().map(f64::from);
    vec![
        ("duties", "duties", count(exposure.duties)),
        ("duty_h", "hours on duty", Some(hours(exposure.duty_h))),
        (
            "nights",
            "night duties (at least 3 h in 23:00-06:00)",
            count(exposure.nights),
        ),
        (
            "early",
            "early duties (start 03:00 to before 06:00)",
            count(exposure.early),
        ),
        (
            "evenings",
            "evening duties (start from 12:00, end after 18:00)",
            count(exposure.evenings),
        ),
        ("days", "day duties", count(exposure.days)),
        (
            "night_h",
            "hours on duty between 23:00 and 06:00",
            Some(hours(exposure.night_h)),
        ),
        (
            "quick_returns",
            "quick returns (gap under 11 h)",
            count(exposure.quick_returns),
        ),
        (
            "quick_returns_inclusive",
            "gaps of 11 h or less",
            count(exposure.quick_returns_inclusive),
        ),
        (
            "longest_night_spell",
            "longest run of night duties",
            count(exposure.longest_night_spell),
        ),
        (
            "longest_run_of_days",
            "most dates in a row with a start",
            count(exposure.longest_run_of_days),
        ),
        (
            "long_duties",
            "duties of 12 h or more",
            count(exposure.long_duties),
        ),
        (
            "shortest_gap_h",
            "shortest gap, h",
            exposure.shortest_gap_h.map(hours),
        ),
        (
            "dates_seen",
            "dates from first to last duty",
            count(exposure.dates_seen),
        ),
    ]
}
