//! Sections of modelled physiology: the generic adult on a line, or a worker for clinicians.

use super::document::{
    BandValue, CasedBand, DAYLIGHT_NOT_SEEN, DAYLIGHT_SEEN, DayRow, HOUR_DECIMALS, LineSection,
    LineShiftRow, LineWindowRow, NMOL_DECIMALS, PacemakerRow, SHARE_DECIMALS, hours,
};
use super::{Audience, ReportInput, figures, pacemakers, wording};
use crate::assessment::estimate::{
    CbtminEstimate, DayEstimate, ShiftEstimate, Spread, WindowEstimate,
};
use crate::assessment::{LineAssessment, WorkerAssessment};
use crate::numeric::quantile::Quantiles;
use crate::numeric::rounding::round_to;
use crate::physiology::Simulation;
use crate::timeline::Axis;
use crate::units::{Minute, PhaseShift, minutes_to_hours};

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
        Some(name) => {
            format!("Average adult on the roster of {name}, whose own habits were not used")
        }
        None => format!(
            "Generic adult on {}, not the person who works it",
            line.line.id
        ),
    };
    let person = if worker.is_some() {
        "average adult"
    } else {
        "generic adult"
    };
    let windows = window_rows(input, line, &on_line);
    let pacemakers = pacemakers::rows(input, line, simulation);
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
        evidence: evidence(input, &windows, person, &pacemakers),
        raster: figures::raster(input, line, simulation, &heading),
        curve: figures::curve(input, line, simulation, &heading),
        clock: figures::clock(input, line, &heading),
        pacemakers,
        windows,
        id,
        subject,
    }
}

pub(super) fn banded(q: Quantiles) -> BandValue {
    BandValue::rounded(q, HOUR_DECIMALS)
}

fn cased(spread: Spread, band: impl Fn(Quantiles) -> BandValue) -> CasedBand {
    CasedBand {
        all: band(spread.all),
        cases: spread.cases.map(|cases| cases.map(band)),
    }
}

fn shift_row(axis: &Axis, shift: &ShiftEstimate) -> LineShiftRow {
    LineShiftRow {
        start: wording::stamp(axis, shift.start),
        start_text: wording::when(axis, shift.start),
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
    LineWindowRow {
        start: wording::stamp(input.axis, window.start),
        start_text: wording::when(input.axis, window.start),
        hours: hours(window.end.hours_since(window.start)),
        main_sleep_h: banded(window.main_sleep_h),
        total_sleep_h: banded(window.total_sleep_h),
        k24: round_to(shares.k24, SHARE_DECIMALS),
        k48: round_to(shares.k48, SHARE_DECIMALS),
        sleep_test: window.sleep_test(input.criteria).words(),
        phase_displacement_h: window.phase_displacement_h.map(banded),
        cbtmin_displacement_h: cased(window.cbtmin_displacement_h, banded),
        phase_ill_defined: ill_defined(input.axis, window),
        quiescent_awake_excess_h: banded(window.quiescent_awake_excess_h),
        history_assumed,
    }
}

/// A range of clock times where a direction means nothing.
fn ill_defined(axis: &Axis, window: &WindowEstimate) -> Option<String> {
    window.phase_is_ill_defined().then(|| {
        let clock = |minute: f64| {
            let hours = clock_band(
                axis,
                Quantiles {
                    median: minute,
                    p05: minute,
                    p95: minute,
                },
            );
            crate::units::ClockHour::wrapping(hours.median).to_string()
        };
        format!(
            "phase ill-defined: amplitude low in {} of {} members; CBTmin between {} and {}",
            window.ill_defined,
            window.members,
            clock(window.cbtmin_at.p05),
            clock(window.cbtmin_at.p95)
        )
    })
}

fn day_row(axis: &Axis, day: &DayEstimate) -> DayRow {
    let cortisol = &day.cortisol;
    let nmol = |q| BandValue::rounded(q, NMOL_DECIMALS);
    let clock = |spread| cased(spread, |q| clock_band(axis, q));
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
        DAYLIGHT_SEEN
    } else {
        DAYLIGHT_NOT_SEEN
    }
}

/// Instants as clock hours: the median in [0, 24), the band around it unwrapped, so it may run below 0 or above 24.
pub(super) fn clock_band(axis: &Axis, q: Quantiles) -> BandValue {
    let whole = Minute::nearest(q.median.floor());
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

/// What is worth a word beside the classes: displaced sleep, moved clock, hours awake in the quiescent interval.
///
/// Windows over 7 days and windows that rest on an assumed history are left out, as in shares.
fn evidence(
    input: &ReportInput<'_>,
    windows: &[LineWindowRow],
    subject: &str,
    pacemakers: &[PacemakerRow],
) -> Vec<String> {
    let limits = &input.criteria.evidence;
    let longest = input.criteria.rest.listed_above.value;
    let counted: Vec<&LineWindowRow> = windows
        .iter()
        .filter(|window| !window.history_assumed && window.hours <= longest)
        .collect();
    let over = limits.phase_displacement_over.value;
    let tolerance = limits.quiescent_tolerance.value;
    let mut lines = Vec::new();
    let displaced = counted
        .iter()
        .filter_map(|w| w.phase_displacement_h)
        .filter(|band| band.median.abs() > over)
        .count();
    if displaced > 0 {
        lines.push(format!(
            "{displaced} of {} windows end with sleep at an unusual body-clock time (more than {over} h from the habitual phase angle); true of nearly all sleep after nights.",
            counted.len()
        ));
    }
    lines.extend(furthest(&counted));
    lines.extend(pacemakers::sentence(pacemakers));
    let awake = counted
        .iter()
        .filter(|w| w.quiescent_awake_excess_h.median > tolerance)
        .count();
    if awake > 0 {
        lines.push(format!(
            "Before {} the {subject} is awake in the reference quiescent interval for more than {tolerance} h beyond the habitual hours.",
            wording::counted(awake, "duty")
        ));
    }
    lines.push(
        "No recovery time is computed from the cortisol curve. The modelled curve returns with the first ordinary night because the model has no slow component; this is not evidence of recovery. Published field recovery takes about 2 to 4 days on ordinary rotas and longer than 11 days after fourteen 12-h nights."
            .to_owned(),
    );
    lines
}

/// The furthest displacement of `CBTmin` at the start of a duty, by case where the cases are apart.
fn furthest(windows: &[&LineWindowRow]) -> Option<String> {
    let size = |window: &&&LineWindowRow| {
        let entries = window.cbtmin_displacement_h.entries();
        entries
            .iter()
            .map(|(band, _)| band.median.abs())
            .fold(0.0, f64::max)
    };
    let window = windows.iter().max_by(|a, b| size(a).total_cmp(&size(b)))?;
    if let Some(range) = &window.phase_ill_defined {
        return Some(format!(
            "At the duty after {}: {range}. No direction is given.",
            window.start_text
        ));
    }
    let said: Vec<String> = window
        .cbtmin_displacement_h
        .entries()
        .iter()
        .map(|(band, case)| {
            let shift = PhaseShift::earlier_by(band.median);
            match case {
                Some(case) => format!("{shift} {case}"),
                None => shift.to_string(),
            }
        })
        .collect();
    Some(format!(
        "Furthest modelled CBTmin at the start of a duty: {} than on habitual days (median; a lower bound of the displacement left).",
        said.join(", ")
    ))
}
