//! `result.json`, schema `acroshift.screen/1`: hours are decimal, instants RFC 3339 with offset, missing is null.

use crate::report::document::{
    BandValue, CasedBand, DayRow, FindingRow, LineSection, LineShiftRow, LineWindowRow,
    ScreenReport, WorkerSection,
};
use serde::Serialize;
use std::collections::BTreeMap;
use std::io::{self, Write};

/// Name and version of the schema.
pub const SCHEMA: &str = "acroshift.screen/1";

/// Writes the report as one JSON document with a final line break.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn write(report: &ScreenReport, mut out: impl Write) -> io::Result<()> {
    serde_json::to_writer_pretty(&mut out, &document(report))?;
    out.write_all(b"\n")
}

#[derive(Serialize)]
struct Document<'a> {
    schema: &'static str,
    tool: Tool<'a>,
    run: Run<'a>,
    summary: Summary<'a>,
    workers: Vec<Worker<'a>>,
    lines: Vec<Line<'a>>,
    findings: Vec<Finding<'a>>,
    diagnostics: Vec<Diagnostic<'a>>,
    cautions: Vec<&'a str>,
}

#[derive(Serialize)]
struct Tool<'a> {
    name: &'a str,
    version: &'a str,
    tzdb: &'a str,
}

#[derive(Serialize)]
struct Run<'a> {
    inputs: Vec<Input<'a>>,
    zone: &'a str,
    from: &'a str,
    to: &'a str,
    rules: &'a [String],
    audience: &'a str,
    pacemaker: &'a str,
    members: usize,
    seed: u64,
    daylight: &'a str,
    morning_daylight: &'a str,
}

#[derive(Serialize)]
struct Input<'a> {
    name: &'a str,
    sha256: &'a str,
}

#[derive(Serialize)]
struct Summary<'a> {
    workers: usize,
    incomplete_workers: usize,
    lines: usize,
    shifts: usize,
    duty_h: f64,
    windows: usize,
    compressed: usize,
    narrow: usize,
    unmarked: usize,
    not_judged: usize,
    listed: usize,
    history_assumed: usize,
    findings: Counts,
    statement: &'a str,
}

#[derive(Serialize)]
struct Counts {
    priority: usize,
    review: usize,
    note: usize,
}

#[derive(Serialize)]
struct Worker<'a> {
    id: &'a str,
    team: Option<&'a str>,
    line: u32,
    incomplete: bool,
    shifts: Vec<Shift<'a>>,
    windows: Vec<Window<'a>>,
    exposure: BTreeMap<&'a str, Option<f64>>,
}

#[derive(Serialize)]
struct Shift<'a> {
    start: &'a str,
    end: &'a str,
    hours: f64,
    class: &'a str,
    night_h: f64,
    code: Option<&'a str>,
    origin: &'a str,
}

#[derive(Serialize)]
struct Window<'a> {
    start: &'a str,
    end: &'a str,
    hours: f64,
    after: &'a str,
    before: &'a str,
    class: &'a str,
    reasons: &'a [String],
}

#[derive(Serialize)]
struct Line<'a> {
    id: &'a str,
    number: u32,
    subject: &'a str,
    workers: &'a [String],
    shifts: Vec<LineShift<'a>>,
    windows: Vec<LineWindow<'a>>,
    days: Vec<Day<'a>>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pacemakers: Vec<LinePacemaker<'a>>,
}

#[derive(Serialize)]
struct LinePacemaker<'a> {
    pacemaker: &'a str,
    at: &'a str,
    cbtmin_displacement_h: Band,
    sleep_24h: Band,
}

#[derive(Serialize)]
struct Band {
    median: f64,
    p05: f64,
    p95: f64,
}

/// A number with two daylight cases has no common median: `median` is null and `cases` holds both.
#[derive(Serialize)]
struct Cased<'a> {
    median: Option<f64>,
    p05: f64,
    p95: f64,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    cases: Vec<CaseBand<'a>>,
}

#[derive(Serialize)]
struct CaseBand<'a> {
    median: f64,
    p05: f64,
    p95: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    case: Option<&'a str>,
}

#[derive(Serialize)]
struct LineShift<'a> {
    start: &'a str,
    sleep_prior_24h: Band,
    sleep_prior_48h: Band,
    awake_at_start_h: Band,
    awake_at_end_h: Band,
    quiescent_duty_h: Band,
}

#[derive(Serialize)]
struct LineWindow<'a> {
    start: &'a str,
    main_sleep_h: Band,
    total_sleep_h: Band,
    k24: f64,
    k48: f64,
    sleep: &'a str,
    phase_displacement_h: Option<Band>,
    cbtmin_displacement_h: Cased<'a>,
    phase_ill_defined: Option<&'a str>,
    quiescent_awake_excess_h: Band,
    history_assumed: bool,
}

#[derive(Serialize)]
struct Day<'a> {
    date: &'a str,
    cbtmin: Vec<CaseBand<'a>>,
    dlmo: Vec<CaseBand<'a>>,
    cbtmin_reading: &'static str,
    pacemaker: &'a str,
    sleep_h: Band,
    cortisol: Cortisol,
}

#[derive(Serialize)]
struct Cortisol {
    unit: &'static str,
    mesor: Band,
    amplitude: Band,
    amplitude_ratio: Band,
    acrophase_h: Cased<'static>,
    peak: Band,
    peak_time: Cased<'static>,
    nadir: Band,
    nadir_time: Cased<'static>,
    quiescent_start: Cased<'static>,
    quiescent_end: Cased<'static>,
}

#[derive(Serialize)]
struct Finding<'a> {
    code: &'a str,
    attention: &'a str,
    kind: &'a str,
    worker: Option<&'a str>,
    line: Option<u32>,
    start: &'a str,
    end: &'a str,
    measured: Option<f64>,
    limit: Option<f64>,
    unit: &'a str,
    members: Option<Members>,
    rules: &'a [String],
    source: &'a str,
    rows: &'a [String],
    occurrences: usize,
    places: &'a [String],
    message: &'a str,
}

#[derive(Serialize)]
struct Members {
    hold: usize,
    of: usize,
}

#[derive(Serialize)]
struct Diagnostic<'a> {
    id: &'a str,
    code: &'a str,
    level: &'a str,
    location: &'a str,
    message: &'a str,
}

fn document(report: &ScreenReport) -> Document<'_> {
    let provenance = &report.provenance;
    Document {
        schema: SCHEMA,
        tool: Tool {
            name: &provenance.tool,
            version: &provenance.version,
            tzdb: &provenance.tzdb,
        },
        run: run(report),
        summary: summary(report),
        workers: report.workers.iter().map(worker).collect(),
        lines: report
            .lines
            .iter()
            .map(|section| line(section, &provenance.pacemaker))
            .collect(),
        findings: report.findings.iter().map(finding).collect(),
        diagnostics: report
            .diagnostics
            .iter()
            .map(|row| Diagnostic {
                id: row.id,
                code: row.code,
                level: &row.level,
                location: &row.location,
                message: &row.message,
            })
            .collect(),
        cautions: std::iter::once(report.cautions.device.as_str())
            .chain(report.cautions.list.iter().map(|c| c.text.as_str()))
            .collect(),
    }
}

fn run(report: &ScreenReport) -> Run<'_> {
    let provenance = &report.provenance;
    Run {
        inputs: provenance
            .inputs
            .iter()
            .map(|input| Input {
                name: &input.name,
                sha256: &input.sha256,
            })
            .collect(),
        zone: &provenance.zone,
        from: &provenance.from,
        to: &provenance.to,
        rules: &provenance.rules,
        audience: report.audience.word(),
        pacemaker: &provenance.pacemaker,
        members: provenance.members,
        seed: provenance.seed,
        daylight: &provenance.daylight,
        morning_daylight: &provenance.morning_daylight,
    }
}

fn summary(report: &ScreenReport) -> Summary<'_> {
    let summary = &report.summary;
    Summary {
        workers: summary.workers,
        incomplete_workers: summary.incomplete_workers,
        lines: summary.lines,
        shifts: summary.shifts,
        duty_h: summary.duty_h,
        windows: summary.windows,
        compressed: summary.compressed,
        narrow: summary.narrow,
        unmarked: summary.unmarked,
        not_judged: summary.not_judged,
        listed: summary.listed,
        history_assumed: summary.assumed,
        findings: Counts {
            priority: summary.priority,
            review: summary.review,
            note: summary.note,
        },
        statement: &summary.statement,
    }
}

fn worker(section: &WorkerSection) -> Worker<'_> {
    Worker {
        id: &section.id,
        team: section.team.as_deref(),
        line: section.line,
        incomplete: section.incomplete,
        shifts: section
            .shifts
            .iter()
            .map(|shift| Shift {
                start: &shift.start,
                end: &shift.end,
                hours: shift.hours,
                class: &shift.class,
                night_h: shift.night_h,
                code: shift.code.as_deref(),
                origin: &shift.origin,
            })
            .collect(),
        windows: section
            .windows
            .iter()
            .map(|window| Window {
                start: &window.start,
                end: &window.end,
                hours: window.hours,
                after: &window.after,
                before: &window.before,
                class: window.class.word(),
                reasons: &window.reasons,
            })
            .collect(),
        exposure: section
            .exposure
            .iter()
            .map(|(name, _, value)| (*name, *value))
            .collect(),
    }
}

fn line<'a>(section: &'a LineSection, pacemaker: &'a str) -> Line<'a> {
    Line {
        id: &section.id,
        number: section.number,
        subject: &section.subject,
        workers: &section.workers,
        shifts: section.shifts.iter().map(line_shift).collect(),
        windows: section.windows.iter().map(line_window).collect(),
        days: section.days.iter().map(|row| day(row, pacemaker)).collect(),
        pacemakers: section
            .pacemakers
            .iter()
            .map(|row| LinePacemaker {
                pacemaker: &row.pacemaker,
                at: &row.at,
                cbtmin_displacement_h: band(row.cbtmin_displacement_h),
                sleep_24h: band(row.sleep_24h),
            })
            .collect(),
    }
}

fn band(value: BandValue) -> Band {
    Band {
        median: value.median,
        p05: value.p05,
        p95: value.p95,
    }
}

fn cased(value: &CasedBand) -> Cased<'static> {
    Cased {
        median: value.median(),
        p05: value.all.p05,
        p95: value.all.p95,
        cases: value
            .cases
            .iter()
            .flat_map(|_| case_bands(&value.entries()))
            .collect(),
    }
}

fn case_bands<'a>(entries: &[(BandValue, Option<&'a str>)]) -> Vec<CaseBand<'a>> {
    entries
        .iter()
        .map(|(value, case)| CaseBand {
            median: value.median,
            p05: value.p05,
            p95: value.p95,
            case: *case,
        })
        .collect()
}

fn line_shift(row: &LineShiftRow) -> LineShift<'_> {
    LineShift {
        start: &row.start,
        sleep_prior_24h: band(row.sleep_prior_24h),
        sleep_prior_48h: band(row.sleep_prior_48h),
        awake_at_start_h: band(row.awake_at_start_h),
        awake_at_end_h: band(row.awake_at_end_h),
        quiescent_duty_h: band(row.quiescent_duty_h),
    }
}

fn line_window(row: &LineWindowRow) -> LineWindow<'_> {
    LineWindow {
        start: &row.start,
        main_sleep_h: band(row.main_sleep_h),
        total_sleep_h: band(row.total_sleep_h),
        k24: row.k24,
        k48: row.k48,
        sleep: row.sleep_test,
        phase_displacement_h: row.phase_displacement_h.map(band),
        cbtmin_displacement_h: cased(&row.cbtmin_displacement_h),
        phase_ill_defined: row.phase_ill_defined.as_deref(),
        quiescent_awake_excess_h: band(row.quiescent_awake_excess_h),
        history_assumed: row.history_assumed,
    }
}

fn day<'a>(row: &'a DayRow, pacemaker: &'a str) -> Day<'a> {
    Day {
        date: &row.date,
        cbtmin: case_bands(&row.cbtmin),
        dlmo: case_bands(&row.dlmo),
        cbtmin_reading: "polar-angle",
        pacemaker,
        sleep_h: band(row.sleep_h),
        cortisol: Cortisol {
            unit: "nmol/L",
            mesor: band(row.mesor),
            amplitude: band(row.amplitude),
            amplitude_ratio: band(row.amplitude_ratio),
            acrophase_h: cased(&row.acrophase_h),
            peak: band(row.peak),
            peak_time: cased(&row.peak_time),
            nadir: band(row.nadir),
            nadir_time: cased(&row.nadir_time),
            quiescent_start: cased(&row.quiescent_start),
            quiescent_end: cased(&row.quiescent_end),
        },
    }
}

fn finding(row: &FindingRow) -> Finding<'_> {
    Finding {
        code: row.code,
        attention: row.attention.word(),
        kind: row.kind,
        worker: row.worker.as_deref(),
        line: row.line,
        start: &row.start,
        end: &row.end,
        measured: row.measured,
        limit: row.limit,
        unit: &row.unit,
        members: row.members.map(|(hold, of)| Members { hold, of }),
        rules: &row.rules,
        source: &row.source,
        rows: &row.rows,
        occurrences: row.occurrences,
        places: &row.places,
        message: &row.message,
    }
}
