//! Sections of modelled physiology: the generic adult on a line, or a worker for clinicians.

use super::document::{
    BandValue, DayRow, HOUR_DECIMALS, LineSection, LineShiftRow, LineWindowRow, NMOL_DECIMALS,
    SHARE_DECIMALS, hours,
};
use super::{Audience, ReportInput, figures, wording};
use crate::assessment::estimate::{CbtminEstimate, DayEstimate, ShiftEstimate, WindowEstimate};
use crate::assessment::{LineAssessment, WorkerAssessment};
use crate::numeric::quantile::Quantiles;
use crate::numeric::rounding::round_to;
use crate::physiology::Simulation;
use crate::timeline::Axis;
use crate::units::{Minute, minutes_to_hours};

/// One section per line for planners, one per worker for clinicians.
pub(super) fn sections(input: &ReportInput<'_>) -> Vec<LineSection> {
    let lines = input.assessment.lines.iter().zip(input.simulations);
    match input.audience {
        Audience::Planner => lines
            .map(|(line, simulation)| section(input, line, simulation, None))
            .collect(),
        Audience::Clinician => lines
            .flat_map(|(line, simulation)| {
                line.line.workers.iter().map(move |worker| {
                    let name = &input.roster.workers[worker.index()].name;
                    section(input, line, simulation, Some(name))
                })
            })
            .collect(),
    }
}

fn section(
    input: &ReportInput<'_>,
    line: &LineAssessment,
    simulation: &Simulation,
    worker: Option<&String>,
) -> LineSection {
    let on_line: Vec<&WorkerAssessment> = input
        .assessment
        .workers
        .iter()
        .filter(|w| w.line == line.line.id)
        .collect();
    let subject = worker
        .cloned()
        .unwrap_or_else(|| "generic adult".to_owned());
    let id = worker.cloned().unwrap_or_else(|| line.line.id.to_string());
    let heading = match worker {
        Some(name) => name.clone(),
        None => format!(
            "Generic adult on {}, not the person who works it",
            line.line.id
        ),
    };
    let windows = window_rows(input, line, &on_line);
    LineSection {
        number: line.line.id.0,
        workers: match worker {
            Some(name) => vec![name.clone()],
            None => on_line
                .iter()
                .map(|w| input.roster.workers[w.worker.index()].name.clone())
                .collect(),
        },
        shifts: line
            .estimate
            .shifts
            .iter()
            .map(|shift| shift_row(input.axis, shift))
            .collect(),
        days: line
            .estimate
            .days
            .iter()
            .map(|day| day_row(input.axis, day))
            .collect(),
        evidence: evidence(input, &windows),
        raster: figures::raster(input, line, simulation, &heading),
        curve: figures::curve(input, line, simulation, &heading),
        clock: figures::clock(input, line, &heading),
        windows,
        id,
        subject,
    }
}

fn banded(q: Quantiles) -> BandValue {
    BandValue::rounded(q, HOUR_DECIMALS)
}

fn shift_row(axis: &Axis, shift: &ShiftEstimate) -> LineShiftRow {
    LineShiftRow {
        start: wording::stamp(axis, shift.start),
        sleep_prior_24h: banded(shift.sleep_prior_24h),
        sleep_prior_48h: banded(shift.sleep_prior_48h),
        awake_at_start_h: banded(shift.awake_at_start_h),
        awake_at_end_h: banded(shift.awake_at_end_h),
        quiescent_duty_h: banded(shift.quiescent_duty_h),
    }
}

/// Windows that touch a date that could not be read say nothing of sleep and are left out.
fn window_rows(
    input: &ReportInput<'_>,
    line: &LineAssessment,
    on_line: &[&WorkerAssessment],
) -> Vec<LineWindowRow> {
    line.estimate
        .windows
        .iter()
        .enumerate()
        .filter(|(index, _)| {
            on_line.iter().any(|worker| {
                worker
                    .windows
                    .get(*index)
                    .is_some_and(|w| w.class != crate::assessment::WindowClass::NotJudged)
            })
        })
        .map(|(index, window)| {
            let assumed = on_line
                .first()
                .and_then(|worker| worker.windows.get(index))
                .is_some_and(|w| w.history_assumed);
            window_row(input, window, assumed)
        })
        .collect()
}

fn window_row(
    input: &ReportInput<'_>,
    window: &WindowEstimate,
    history_assumed: bool,
) -> LineWindowRow {
    let shares = window.shares();
    let sleep = &input.criteria.sleep;
    LineWindowRow {
        start: wording::stamp(input.axis, window.start),
        start_text: wording::when(input.axis, window.start),
        hours: hours(window.end.hours_since(window.start)),
        main_sleep_h: banded(window.main_sleep_h),
        total_sleep_h: banded(window.total_sleep_h),
        k24: round_to(shares.k24, SHARE_DECIMALS),
        k48: round_to(shares.k48, SHARE_DECIMALS),
        sleep_test: if shares.k24 >= sleep.short_from_share.value {
            "short"
        } else if shares.k24 >= sleep.uncertain_from_share.value {
            "uncertain"
        } else {
            "not short"
        },
        phase_displacement_h: banded(window.phase_displacement_h),
        cbtmin_displacement_h: banded(window.cbtmin_displacement_h),
        quiescent_awake_excess_h: banded(window.quiescent_awake_excess_h),
        history_assumed,
    }
}

fn day_row(axis: &Axis, day: &DayEstimate) -> DayRow {
    let cortisol = &day.cortisol;
    let nmol = |q| BandValue::rounded(q, NMOL_DECIMALS);
    let clock = |q| clock_band(axis, q);
    DayRow {
        date: day.date.to_string(),
        cbtmin: day.cbtmin.iter().map(|c| marker(axis, c)).collect(),
        dlmo: day.dlmo.iter().map(|c| marker(axis, c)).collect(),
        sleep_h: banded(day.sleep_h),
        mesor: nmol(cortisol.mesor),
        amplitude: nmol(cortisol.amplitude),
        amplitude_ratio: BandValue::rounded(cortisol.amplitude_ratio, SHARE_DECIMALS),
        acrophase_h: clock(cortisol.acrophase_at),
        peak: nmol(cortisol.peak),
        peak_time: clock(cortisol.peak_at),
        nadir: nmol(cortisol.nadir),
        nadir_time: clock(cortisol.nadir_at),
        quiescent_start: clock(cortisol.quiescent_start),
        quiescent_end: clock(cortisol.quiescent_end),
    }
}

fn marker(axis: &Axis, marker: &CbtminEstimate) -> (BandValue, Option<&'static str>) {
    (
        clock_band(axis, marker.minute),
        marker.daylight_seen.map(daylight_case),
    )
}

/// The case of an entry, in words.
pub(super) fn daylight_case(seen: bool) -> &'static str {
    if seen {
        "if daylight is seen on the way home"
    } else {
        "if daylight is not seen on the way home"
    }
}

/// Instants as clock hours: the median in [0, 24), the band around it unwrapped, so it may run below 0 or above 24.
pub(super) fn clock_band(axis: &Axis, q: Quantiles) -> BandValue {
    let whole = whole_minute(q.median);
    let shown = minutes_to_hours(axis.clock.at(whole)) + (q.median - whole.as_f64()) / 60.0;
    let median = crate::numeric::circular::wrap(shown, 24.0);
    BandValue::rounded(
        Quantiles {
            median,
            p05: median - (q.median - q.p05) / 60.0,
            p95: median + (q.p95 - q.median) / 60.0,
        },
        HOUR_DECIMALS,
    )
}

#[expect(
    clippy::cast_possible_truncation,
    reason = "minutes of a roster fit an i64 by far"
)]
fn whole_minute(minute: f64) -> Minute {
    Minute(minute.floor() as i64)
}

/// What is worth a word beside the classes: displaced sleep, moved clock, hours awake in the quiescent interval.
fn evidence(input: &ReportInput<'_>, windows: &[LineWindowRow]) -> Vec<String> {
    let limits = &input.criteria.evidence;
    let over = limits.phase_displacement_over.value;
    let tolerance = limits.quiescent_tolerance.value;
    let mut lines = Vec::new();
    let displaced = windows
        .iter()
        .filter(|w| w.phase_displacement_h.median.abs() > over)
        .count();
    if displaced > 0 {
        lines.push(format!(
            "{displaced} of {} windows end with sleep at an unusual body-clock time (more than {over} h from the habitual phase angle); true of nearly all sleep after nights.",
            windows.len()
        ));
    }
    let furthest = windows
        .iter()
        .map(|w| w.cbtmin_displacement_h.median)
        .max_by(|a, b| a.abs().total_cmp(&b.abs()));
    if let Some(furthest) = furthest {
        lines.push(format!(
            "Furthest modelled CBTmin at the start of a duty: {} than on habitual days (median; a lower bound of the displacement left).",
            wording::shift_text(furthest)
        ));
    }
    let awake = windows
        .iter()
        .filter(|w| w.quiescent_awake_excess_h.median > tolerance)
        .count();
    if awake > 0 {
        lines.push(format!(
            "Before {awake} duties the generic adult is awake in the reference quiescent interval for more than {tolerance} h beyond the habitual hours."
        ));
    }
    lines.push(
        "No recovery time is computed from the cortisol curve. The modelled curve returns with the first ordinary night because the model has no slow component; this is not evidence of recovery. Published field recovery takes about 2 to 4 days on ordinary rotas and longer than 11 days after fourteen 12-h nights."
            .to_owned(),
    );
    lines
}
