//! Do the models reproduce published experiments? Observed against modelled, misses included.
//!
//! ```text
//! experiments file -> protocol -> lives of the ensemble on each pacemaker -> quantities -> outcomes, held against bands
//! ```
//!
//! Light and sleep are prescribed where an experiment prescribed them; where only duties are known, sleep is left to the model, as in `screen`.

pub mod experiment;
pub mod lives;
pub mod outcome;
pub mod quantity;

pub use experiment::{ExperimentError, Experiments, NotRun};
pub use outcome::{Held, Modelled, Row};

use crate::physiology::{ModelSets, PacemakerName, Sampling};
use crate::timeline::{HabitFile, Habits};
use experiment::Experiment;
use rayon::prelude::*;

/// What is run.
#[derive(Debug, Clone, PartialEq)]
pub struct Validation {
    /// Pacemakers, the first one scored.
    pub pacemakers: Vec<PacemakerName>,
    /// Parameter sets; the pacemaker's is taken for its own.
    pub sets: ModelSets,
    /// Members of the ensemble.
    pub members: usize,
    /// Seed of the ensemble.
    pub seed: u64,
}

/// The experiments held against the models.
#[derive(Debug, Clone, PartialEq)]
pub struct ValidationReport {
    /// Version of the program.
    pub version: &'static str,
    /// What was run.
    pub validation: Validation,
    /// One row per outcome, in the order of the file.
    pub rows: Vec<Row>,
    /// Experiments that cannot be run, with the reason.
    pub not_run: Vec<NotRun>,
}

/// Runs every experiment of a file; one row per outcome, in the order of the file.
///
/// # Example
///
/// ```
/// use acroshift::physiology::{ModelSets, PacemakerName};
/// use acroshift::validation::{run, Experiments, Validation};
/// let text = r#"
/// format = "acroshift.experiments/1"
/// [[experiment]]
/// id = "my-study"
/// citation = "an invented protocol"
/// baseline = { bed = 23, wake = 7 }
/// [[experiment.condition]]
/// name = "two days of bright evenings"
/// days = [{ on = [0, 1], blocks = [[0, 7, "asleep", 0], [7, 19, "awake", 120], [19, 23, "awake", 2000], [23, 24, "asleep", 0]] }]
/// [[experiment.condition.quantity]]
/// name = "shift"
/// read = "cbtmin-shift"
/// at = 54
/// [[experiment.outcome]]
/// name = "DLMO shift"
/// unit = "h"
/// of = ["two days of bright evenings.shift"]
/// observed = -1.0
/// "#;
/// let experiments = Experiments::read(text)?;
/// let report = run(&experiments, Validation {
///     pacemakers: vec![PacemakerName::Hilaire2007],
///     sets: ModelSets::embedded(),
///     members: 8,
///     seed: 1,
/// });
/// // Bright evenings delay.
/// assert!(report.rows[0].modelled[0].1.median < 0.0);
/// # Ok::<(), acroshift::validation::ExperimentError>(())
/// ```
pub fn run(experiments: &Experiments, validation: Validation) -> ValidationReport {
    let rows = experiments
        .experiment
        .par_iter()
        .flat_map_iter(|experiment| rows(experiment, &validation))
        .collect();
    ValidationReport {
        version: env!("CARGO_PKG_VERSION"),
        validation,
        rows,
        not_run: experiments.not_run.clone(),
    }
}

impl ValidationReport {
    /// How many outcomes of the scored pacemaker stand how, in the order of [`Held`].
    pub fn counts(&self) -> Vec<(Held, usize)> {
        [
            Held::Inside,
            Held::Outside,
            Held::AsOrdered,
            Held::NotAsOrdered,
            Held::Shown,
        ]
        .into_iter()
        .map(|held| {
            let count = self
                .rows
                .iter()
                .filter(|row| row.scored().is_some_and(|m| m.held == held))
                .count();
            (held, count)
        })
        .collect()
    }
}

fn rows(experiment: &Experiment, validation: &Validation) -> Vec<Row> {
    let habits = HabitFile::embedded().habits();
    let models: Vec<Models> = validation
        .pacemakers
        .iter()
        .map(|name| Models {
            name: *name,
            sets: if validation.pacemakers[0] == *name {
                validation.sets.clone()
            } else {
                validation.sets.on(*name)
            },
            habits,
        })
        .collect();
    rows_of(experiment, &models, validation.members, validation.seed)
}

/// The numbers with which an experiment is run.
#[derive(Debug, Clone, PartialEq)]
pub struct Models {
    /// The pacemaker's name.
    pub name: PacemakerName,
    /// Parameter sets.
    pub sets: ModelSets,
    /// Time around duty.
    pub habits: Habits,
}

/// One experiment on models of one's choice, as the fit of the sleep rules needs it.
pub fn rows_of(experiment: &Experiment, models: &[Models], members: usize, seed: u64) -> Vec<Row> {
    let by_pacemaker: Vec<_> = models
        .iter()
        .map(|model| {
            let sampling = Sampling {
                members,
                seed,
                commute_min: model.habits.commute_h * 60.0,
                morning_daylight: None,
                habit: None,
            };
            let quantities = lives::quantities(experiment, &model.sets, sampling, model.habits);
            (model.name, quantities)
        })
        .collect();
    experiment
        .outcome
        .iter()
        .map(|outcome| outcome::row(experiment, outcome, &by_pacemaker))
        .collect()
}
