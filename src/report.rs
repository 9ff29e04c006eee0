//! What is handed over: one document for one audience, free of any format.
//!
//! Everything a renderer needs is here, rounded and worded; renderers compute nothing.
//! For planners, named rows hold roster facts, rest results and classes only; modelled physiology belongs to the generic adult on a line.

pub mod audience;
pub mod cautions;
pub mod diagnostics;
pub mod document;
pub mod explain;
pub mod figure;
pub mod figures;
pub mod findings;
pub mod lines;
pub mod pacemakers;
pub mod wording;
pub mod workers;

pub use audience::Audience;
pub use document::{
    BandValue, CasedBand, DayRow, FindingRow, LineSection, LineShiftRow, LineWindowRow, NumberRow,
    PacemakerRow, PackRow, Provenance, ScreenReport, ShiftRow, Summary, WindowRow, WorkerSection,
};

use crate::assessment::{Assessment, Attention, Criteria, Pack, WindowClass};
use crate::diagnostic::Diagnostic;
use crate::numeric::sun::Place;
use crate::physiology::{ModelSets, Simulation};
use crate::roster::Roster;
use crate::timeline::{Axis, HabitFile};
use crate::units::ClockHour;
use document::{InputRow, MethodRow};

/// What a report is made from.
#[derive(Debug, Clone, Copy)]
pub struct ReportInput<'a> {
    /// For whom.
    pub audience: Audience,
    /// The roster.
    pub roster: &'a Roster,
    /// The elapsed axis.
    pub axis: &'a Axis,
    /// Simulations of the lines, in the order of the assessment.
    pub simulations: &'a [Simulation],
    /// The assessment.
    pub assessment: &'a Assessment,
    /// Rule packs.
    pub packs: &'a [Pack],
    /// Limits of the windows.
    pub criteria: &'a Criteria,
    /// Parameter sets.
    pub sets: &'a ModelSets,
    /// The same lines on other pacemakers.
    pub beside: &'a [pacemakers::Beside],
    /// Defaults around duty.
    pub habits: &'a HabitFile,
    /// What was wrong or assumed in the files.
    pub diagnostics: &'a [Diagnostic],
    /// Names and hashes of the input files, in order.
    pub inputs: &'a [(String, String)],
    /// Facts of the run.
    pub run: &'a RunFacts,
}

/// Facts of the run that no other stage knows.
#[derive(Debug, Clone, PartialEq)]
pub struct RunFacts {
    /// Version of the program.
    pub version: String,
    /// Version of the time zone database.
    pub tzdb: String,
    /// Members of the ensemble.
    pub members: usize,
    /// Seed of the ensemble.
    pub seed: u64,
    /// What the site says of morning daylight on the way home.
    pub morning_daylight: Option<bool>,
    /// Workers whose light was measured.
    pub measured_light: usize,
    /// Where the workplace is, for daylight.
    pub place: Option<Place>,
}

/// Builds the document.
pub fn build(input: &ReportInput<'_>) -> ScreenReport {
    let mut workers: Vec<WorkerSection> = input
        .assessment
        .workers
        .iter()
        .map(|worker| workers::section(input, worker))
        .collect();
    audience::order_workers(input.audience, &mut workers);
    let lines = audience::ordered_lines(input.audience, &workers, lines::sections(input));
    let findings = findings::rows(input);
    ScreenReport {
        audience: input.audience,
        summary: summary(input, &findings),
        provenance: provenance(input),
        workers,
        lines,
        findings,
        diagnostics: diagnostics::rows(input.diagnostics),
        diagnostic_counts: diagnostics::counts(input.diagnostics),
        cautions: cautions::Cautions::fixed(),
        methods: methods(input),
        packs: packs(input.packs),
        numbers: numbers(input),
    }
}

fn summary(input: &ReportInput<'_>, findings: &[FindingRow]) -> Summary {
    let windows: Vec<_> = input
        .assessment
        .workers
        .iter()
        .flat_map(|worker| &worker.windows)
        .collect();
    let shared = |class: WindowClass| {
        windows
            .iter()
            .filter(|window| window.in_shares() && window.class == class)
            .count()
    };
    let all = |class: WindowClass| {
        windows
            .iter()
            .filter(|window| window.class == class)
            .count()
    };
    let with = |attention: Attention| findings.iter().filter(|f| f.attention == attention).count();
    let exposures = input.assessment.workers.iter().map(|w| &w.exposure);
    let compressed = shared(WindowClass::Compressed);
    let windows_counted = windows.iter().filter(|window| window.in_shares()).count();
    Summary {
        workers: input.assessment.workers.len(),
        incomplete_workers: exposures.clone().filter(|e| e.incomplete).count(),
        lines: input.assessment.lines.len(),
        shifts: input
            .roster
            .shifts
            .iter()
            .filter(|s| s.kind.counts())
            .count(),
        duty_h: document::hours(exposures.map(|e| e.duty_h).sum()),
        windows: windows_counted,
        compressed,
        narrow: shared(WindowClass::Narrow),
        unmarked: shared(WindowClass::Unmarked),
        not_judged: all(WindowClass::NotJudged),
        listed: all(WindowClass::Listed),
        assumed: windows.iter().filter(|w| w.is_set_aside()).count(),
        priority: with(Attention::Priority),
        review: with(Attention::Review),
        note: with(Attention::Note),
        statement: wording::statement(compressed, windows_counted),
    }
}

fn provenance(input: &ReportInput<'_>) -> Provenance {
    let dates = input.axis.rostered_dates();
    let date = |day: Option<&crate::timeline::CivilDay>| {
        day.map(|d| d.date.to_string()).unwrap_or_default()
    };
    Provenance {
        tool: "acroshift".to_owned(),
        version: input.run.version.clone(),
        tzdb: input.run.tzdb.clone(),
        inputs: input
            .inputs
            .iter()
            .map(|(name, sha256)| InputRow {
                name: name.clone(),
                sha256: sha256.clone(),
            })
            .collect(),
        zone: input.axis.zone.name().to_owned(),
        from: date(dates.first()),
        to: date(dates.last()),
        rules: input.packs.iter().map(|pack| pack.pack.clone()).collect(),
        pacemaker: input.sets.pacemaker.name_and_publication().0.to_owned(),
        members: input.run.members,
        seed: input.run.seed,
        daylight: match input.run.place {
            Some(place) => format!(
                "sunrise to sunset at latitude {}, longitude {}",
                place.latitude_deg, place.longitude_deg
            ),
            None => format!(
                "{} to {} on the clock, no place given",
                ClockHour::wrapping(input.habits.daylight.sunrise.value),
                ClockHour::wrapping(input.habits.daylight.sunset.value)
            ),
        },
        morning_daylight: morning_daylight(input.run),
    }
}

/// What is known of the light after nights, in words.
fn morning_daylight(run: &RunFacts) -> String {
    let known = match run.morning_daylight {
        Some(true) => "seen on the way home after nights",
        Some(false) => "kept out on the way home after nights",
        None => "unknown: seen by half of the members, kept out by the other half",
    };
    match run.measured_light {
        0 => known.to_owned(),
        1 => format!("{known}; measured for 1 worker, where there are readings"),
        workers => format!("{known}; measured for {workers} workers, where there are readings"),
    }
}

fn methods(input: &ReportInput<'_>) -> Vec<MethodRow> {
    let mut rows = wording::methods();
    rows.extend(
        input
            .sets
            .publications()
            .into_iter()
            .map(|(name, publication)| MethodRow {
                title: format!("Parameter set {name}"),
                text: publication.to_owned(),
            }),
    );
    rows
}

fn packs(packs: &[Pack]) -> Vec<PackRow> {
    packs
        .iter()
        .map(|pack| PackRow {
            name: pack.pack.clone(),
            title: pack.title.clone(),
            reading: pack.reading.clone(),
            as_seen: pack.as_seen.clone(),
            left_out: pack.left_out.clone(),
            night: format!(
                "night duty: at least {} h between {} and {} ({}; {})",
                pack.night.at_least_h,
                pack.night.from,
                pack.night.to,
                pack.night.source,
                pack.night.tier
            ),
            rules: pack.rules.iter().map(wording::rule_row).collect(),
        })
        .collect()
}

fn numbers(input: &ReportInput<'_>) -> Vec<NumberRow> {
    let row = |set: &str, key: String, number: &crate::units::Sourced| NumberRow {
        set: set.to_owned(),
        key,
        value: number.value,
        unit: number.unit.clone(),
        source: format!("{} ({})", number.source, number.mark),
    };
    let criteria = input.criteria.listed();
    let around = &input.habits;
    let habits = [
        ("personal_time.share", &around.personal_time.share),
        ("personal_time.cap", &around.personal_time.cap),
        ("commute.median", &around.commute.median),
        ("daylight.sunrise", &around.daylight.sunrise),
        ("daylight.sunset", &around.daylight.sunset),
        (
            "daylight.outdoor_eye_share",
            &around.daylight.outdoor_eye_share,
        ),
        ("joining.gap", &around.joining.gap),
        ("joining.split_gap", &around.joining.split_gap),
        ("joining.split_span", &around.joining.split_span),
    ];
    criteria
        .into_iter()
        .map(|(key, number)| row("criteria", key, number))
        .chain(
            habits
                .into_iter()
                .map(|(key, number)| row("time around duty", key.to_owned(), number)),
        )
        .chain(
            input
                .sets
                .listed()
                .into_iter()
                .map(|(set, key, number)| row(&set, key, number)),
        )
        .collect()
}
