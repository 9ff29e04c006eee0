//! Which recovery windows are compressed, which rules are not met, and what should be looked at first?
//!
//! Facts of the roster, rules of law, advice and model estimates are kept apart; nothing is turned into points.

pub mod clock_window;
pub mod criteria;
pub mod duties;
pub mod estimate;
pub mod exposure;
pub mod finding;
pub mod pack;
pub mod rules;
pub mod window;

mod conclude;

pub use criteria::Criteria;
pub use duties::{Duty, WorkerDuties};
pub use estimate::LineEstimate;
pub use exposure::{Exposure, ShiftClass, ShiftFacts};
pub use finding::{Attention, Finding, FindingCode, FindingKind, SubjectOf};
pub use pack::{Pack, RuleClass};
pub use window::{Reason, RecoveryWindow, WindowClass};

use crate::physiology::Simulation;
use crate::roster::{DutyLine, LineId, Roster, WorkerId};
use crate::timeline::{Axis, Habits};
use crate::units::Minute;
use rules::{Declared, Outcome, Subject};
use window::{SleepShares, WindowInput};

/// What is assessed.
#[derive(Debug, Clone, Copy)]
pub struct AssessmentInput<'a> {
    /// The roster.
    pub roster: &'a Roster,
    /// The elapsed axis.
    pub axis: &'a Axis,
    /// Joining and split duties.
    pub habits: &'a Habits,
    /// Duty lines.
    pub lines: &'a [DutyLine],
    /// One simulation per line, in the same order.
    pub simulations: &'a [Simulation],
    /// Rule packs.
    pub packs: &'a [Pack],
    /// Limits of the windows.
    pub criteria: &'a Criteria,
    /// Derogations that the site declares.
    pub declared: &'a Declared,
}

/// One worker: facts and rules.
#[derive(Debug, Clone, PartialEq)]
pub struct WorkerAssessment {
    /// Who.
    pub worker: WorkerId,
    /// On which line.
    pub line: LineId,
    /// Duties and interruptions.
    pub duties: WorkerDuties,
    /// Outcomes of the rules.
    pub outcomes: Vec<Outcome>,
    /// Recovery windows.
    pub windows: Vec<RecoveryWindow>,
    /// Register-type measures.
    pub exposure: Exposure,
}

/// One line: what the members say.
#[derive(Debug, Clone, PartialEq)]
pub struct LineAssessment {
    /// The line.
    pub line: DutyLine,
    /// Its duties.
    pub duties: Vec<Duty>,
    /// What the members say.
    pub estimate: LineEstimate,
}

/// Everything that is said of a roster.
#[derive(Debug, Clone, PartialEq)]
pub struct Assessment {
    /// Workers, in the order of the roster.
    pub workers: Vec<WorkerAssessment>,
    /// Lines, in the order of the input.
    pub lines: Vec<LineAssessment>,
    /// Findings, most urgent first.
    pub findings: Vec<Finding>,
}

/// Assesses a roster.
pub fn assess(input: &AssessmentInput<'_>) -> Assessment {
    let lines: Vec<LineAssessment> = input
        .lines
        .iter()
        .zip(input.simulations)
        .filter_map(|(line, simulation)| line_assessment(input, line, simulation))
        .collect();
    let mut workers: Vec<WorkerAssessment> = lines
        .iter()
        .flat_map(|line| {
            line.line
                .workers
                .iter()
                .map(|worker| worker_assessment(input, line, *worker))
        })
        .collect();
    workers.sort_by_key(|worker| worker.worker);
    let findings = conclude::findings(input, &workers, &lines);
    Assessment {
        workers,
        lines,
        findings,
    }
}

fn line_assessment(
    input: &AssessmentInput<'_>,
    line: &DutyLine,
    simulation: &Simulation,
) -> Option<LineAssessment> {
    let first = *line.workers.first()?;
    let duties = duties::worker_duties(input.roster, first, input.axis, input.habits).duties;
    Some(LineAssessment {
        line: line.clone(),
        estimate: estimate::estimate(simulation, &duties, input.axis, input.criteria)?,
        duties,
    })
}

fn worker_assessment(
    input: &AssessmentInput<'_>,
    line: &LineAssessment,
    worker: WorkerId,
) -> WorkerAssessment {
    let duties = duties::worker_duties(input.roster, worker, input.axis, input.habits);
    let register = register_pack();
    let subject = |pack| Subject {
        roster: input.roster,
        axis: input.axis,
        worker: &duties,
        criteria: input.criteria,
        pack,
    };
    let judged = input
        .packs
        .iter()
        .flat_map(|pack| rules::judge(&subject(pack), input.declared))
        .collect();
    let outcomes = rules::settle_alternatives(judged);
    let sleep: Vec<SleepShares> = line
        .estimate
        .windows
        .iter()
        .map(estimate::WindowEstimate::shares)
        .collect();
    let windows = window::windows(&WindowInput {
        roster: input.roster,
        axis: input.axis,
        duties: &duties,
        outcomes: &outcomes,
        sleep: &sleep,
        assumed_until: assumed_until(&subject(&register)),
        criteria: input.criteria,
    });
    let exposure = exposure::exposure(&subject(&register));
    WorkerAssessment {
        worker,
        line: line.line.id,
        outcomes,
        windows,
        exposure,
        duties,
    }
}

/// A pack without rules that carries the night definition of register studies.
fn register_pack() -> Pack {
    let nordic = pack::named(&["adv-nordic"]).unwrap_or_default();
    let mut pack = nordic
        .into_iter()
        .next()
        .expect("the pack is embedded; a test reads it");
    pack.rules.clear();
    pack
}

/// End of the days whose model rests on an assumed history: 7 days from the worker's first duty, 14 when that is a night.
fn assumed_until(subject: &Subject<'_>) -> Minute {
    let Some(first) = subject.worker.duties.first() else {
        return Minute(0);
    };
    let history = &subject.criteria.history;
    let days = if subject.is_night(first) {
        history.assumed_days_in_nights.value
    } else {
        history.assumed_days.value
    };
    first.start + Minute::nearest(days * 1440.0).0
}
