//! `acroshift` reads work rosters, estimates each duty line's sleep, circadian phase and cortisol rhythm with published models,
//! finds recovery windows that are compressed, holds the roster against working-time law and advice, and reports with sources and bands.
//!
//! The modules stand in the order in which the data flow:
//!
//! ```text
//! bytes -> intake -> Roster -> timeline -> physiology -> assessment -> report -> render -> bytes
//! ```
//!
//! Each stage takes the value of the former one and returns a new one; nothing is changed upstream.
//! [`screen`] puts the stages together.
//! The library never reads the clock, the environment or the network, and never prints.

pub mod units;

pub mod numeric;

pub mod source;

pub mod diagnostic;

pub mod roster;

pub mod samples;

pub mod intake;

pub mod timeline;

pub mod physiology;

pub mod validation;

pub mod rhythm;

pub mod biological_time;

pub mod assessment;

pub mod report;

pub mod render;

use assessment::{AssessmentInput, Criteria, Pack};
use biological_time::{NotPlaced, Placed, Stated};
use intake::site::Site;
use physiology::light::LightScenes;
use physiology::parameters::SampleBandSet;
use physiology::{ModelSets, PacemakerName, Sampling};
use report::pacemakers::Beside;
use report::{Audience, ReportInput, RunFacts, ScreenReport};
use roster::{Roster, WorkerId};
use samples::Matrix;
use timeline::{Axis, HabitFile, LightLogs, SiteScene, Timeline};

/// How a roster is screened.
#[derive(Debug, Clone, PartialEq)]
pub struct Screening {
    /// For whom the report is.
    pub audience: Audience,
    /// Rule packs.
    pub packs: Vec<Pack>,
    /// What the workplace adds.
    pub site: Site,
    /// Members of the ensemble; rounded up to a multiple of 8.
    pub members: usize,
    /// Seed of the ensemble.
    pub seed: u64,
    /// Pacemaker and every other parameter set.
    pub sets: ModelSets,
    /// Pacemakers whose phase is shown beside it.
    pub beside: Vec<PacemakerName>,
    /// Light measured on workers: personal, and not used for the planner.
    pub light_logs: LightLogs,
}

/// Names and SHA-256 of the input files, in the order in which they were read.
pub type InputHashes = [(String, String)];

/// From a roster to a report: timelines, physiology, assessment, document.
///
/// Returns `None` for a roster without shifts.
///
/// # Example
///
/// ```
/// use acroshift::{Screening, assessment::pack, intake, physiology::ModelSets, report::Audience, screen};
///
/// let csv = b"worker,start,end\nA1,2026-03-09T14:00,2026-03-09T22:00\nA1,2026-03-10T06:00,2026-03-10T14:00\n";
/// let reading = intake::Reading { zone: Some(chrono_tz::Europe::London), ..intake::Reading::default() };
/// let read = intake::read(&[intake::Input { name: "two.csv", bytes: csv }], &reading);
/// let screening = Screening {
///     audience: Audience::Planner,
///     packs: pack::named(&pack::DEFAULT_PACKS)?,
///     site: intake::site::Site::default(),
///     members: 8,
///     seed: 1,
///     sets: ModelSets::embedded(),
///     beside: Vec::new(),
///     light_logs: acroshift::timeline::LightLogs::default(),
/// };
/// let roster = read.roster.expect("the file is in order");
/// let report = screen(&roster, &read.diagnostics, &[], &screening).expect("there are shifts");
/// // Eight hours between a late and an early shift: one compressed window.
/// assert_eq!(report.summary.compressed, 1);
/// # Ok::<(), acroshift::assessment::pack::UnknownPack>(())
/// ```
pub fn screen(
    roster: &Roster,
    diagnostics: &[diagnostic::Diagnostic],
    inputs: &InputHashes,
    screening: &Screening,
) -> Option<ScreenReport> {
    let habit_file = HabitFile::embedded();
    let criteria = Criteria::embedded();

    // Commute and measured light are the worker's own: the planner's generic adult does not have them.
    let (generic, logs) = match screening.audience {
        Audience::Planner => (Some(roster.without_commutes()), &LightLogs::default()),
        Audience::Clinician => (None, &screening.light_logs),
    };
    let roster = generic.as_ref().unwrap_or(roster);

    // Civil time becomes elapsed time.
    let Setting {
        sets,
        scene,
        axis,
        members,
    } = &setting(roster, screening)?;
    let name = |worker: WorkerId| roster.workers[worker.index()].name.as_str();
    let lines = roster::lines(roster, scene.habits.join_gap_min, |worker| {
        logs.hold(name(worker))
    });
    let timelines: Vec<Timeline> = lines
        .iter()
        .map(|line| {
            let worker = line.workers[0];
            timeline::timeline(roster, worker, axis, scene).under(logs.of(name(worker), axis))
        })
        .collect();

    // Each line is lived by the same ensemble.
    let simulations = physiology::simulate(&timelines, members, sets);
    let beside = lived_beside(screening, sets, &timelines, members);

    // Law, advice and model are held against the windows, side by side.
    let assessment = assessment::assess(&AssessmentInput {
        roster,
        axis,
        habits: &scene.habits,
        lines: &lines,
        simulations: &simulations,
        packs: &screening.packs,
        criteria: &criteria,
        declared: &screening.site.derogations,
    });

    // One document, whatever the format.
    Some(report::build(&ReportInput {
        audience: screening.audience,
        roster,
        axis,
        simulations: &simulations,
        assessment: &assessment,
        packs: &screening.packs,
        criteria: &criteria,
        sets,
        beside: &beside,
        habits: &habit_file,
        diagnostics,
        inputs,
        run: &RunFacts {
            version: env!("CARGO_PKG_VERSION").to_owned(),
            tzdb: chrono_tz::IANA_TZDB_VERSION.to_owned(),
            members: members.len(),
            seed: screening.seed,
            morning_daylight: screening.site.morning_daylight,
            measured_light: logs.workers(),
            place: screening.site.place,
        },
    }))
}

/// What every line of a roster shares.
struct Setting {
    sets: ModelSets,
    scene: SiteScene,
    axis: Axis,
    members: Vec<physiology::Member>,
}

/// Site, axis and ensemble of a roster; none without shifts.
fn setting(roster: &Roster, screening: &Screening) -> Option<Setting> {
    let site = &screening.site;
    let sets = ModelSets {
        light: LightScenes::at_site(&screening.sets.light, &site.light),
        ..screening.sets.clone()
    };
    let scene = SiteScene {
        place: site.place,
        sky: site.sky,
        stress: site.stress,
        habits: HabitFile::embedded().habits(),
    };
    let sampling = Sampling {
        members: screening.members,
        seed: screening.seed,
        commute_min: site.commute_min.unwrap_or(scene.habits.commute_h * 60.0),
        morning_daylight: site.morning_daylight,
        habit: None,
    };
    Some(Setting {
        axis: Axis::of(roster, &scene)?,
        members: physiology::members(&sets.ensemble, sampling),
        scene,
        sets,
    })
}

/// A cortisol sample to be placed in the biological time of a worker.
#[derive(Debug, Clone, PartialEq)]
pub struct SampleQuestion {
    /// Worker as the roster names it.
    pub worker: String,
    /// Local date and time of the workplace.
    pub at: chrono::NaiveDateTime,
    /// What was sampled.
    pub matrix: Matrix,
    /// `CBTmin` and sleep, where they are known from outside.
    pub stated: Option<Stated>,
    /// Are the next comparable times asked for?
    pub next: bool,
}

/// A span of local time.
pub type LocalSpan = (
    chrono::DateTime<chrono_tz::Tz>,
    chrono::DateTime<chrono_tz::Tz>,
);

/// Why a sample is not placed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum SampleRefusal {
    /// The roster has no such worker.
    #[error("the roster has no worker {0:?}")]
    UnknownWorker(String),
    /// The roster has no shifts.
    #[error("the roster has no shifts")]
    Empty,
    /// The roster does not tell enough.
    #[error(transparent)]
    NotPlaced(#[from] NotPlaced),
}

/// Places a cortisol sample in the biological time of a worker on a roster.
///
/// # Errors
///
/// [`SampleRefusal`] with the reason.
pub fn sample(
    roster: &Roster,
    screening: &Screening,
    question: &SampleQuestion,
) -> Result<(Placed, Option<Vec<LocalSpan>>), SampleRefusal> {
    let Setting {
        sets,
        scene,
        axis,
        members,
    } = &setting(roster, screening).ok_or(SampleRefusal::Empty)?;
    let worker = roster
        .worker_named(&question.worker)
        .ok_or_else(|| SampleRefusal::UnknownWorker(question.worker.clone()))?;
    let timeline = timeline::timeline(roster, worker, axis, scene)
        .under(screening.light_logs.of(&question.worker, axis));
    let frame = biological_time::Frame {
        timeline: &timeline,
        last: axis.last_end(),
        members,
        sets,
        bands: &SampleBandSet::embedded(),
    };
    let at = axis.minute(timeline::civil::instant_of(axis.zone, question.at));
    let placed = biological_time::place(frame, at, question.matrix, question.stated)?;
    if !question.next {
        return Ok((placed, None));
    }
    let spans = biological_time::comparable_spans(frame, at, question.stated)?;
    let local = |(from, to): (units::Minute, units::Minute)| (axis.local(from), axis.local(to));
    Ok((placed, Some(spans.into_iter().map(local).collect())))
}

/// The same lines lived on the other pacemakers asked for.
fn lived_beside(
    screening: &Screening,
    sets: &ModelSets,
    timelines: &[Timeline],
    members: &[physiology::Member],
) -> Vec<Beside> {
    screening
        .beside
        .iter()
        .map(|pacemaker| Beside {
            pacemaker: *pacemaker,
            tracks: physiology::tracks(timelines, members, &sets.on(*pacemaker)),
        })
        .collect()
}
