//! Fits the constants of the sleep rules to the outcomes marked `fitted` in `src/validation/experiments.toml`.
//!
//! Four constants: lowering of the threshold by effort, share and cap of personal time, share of the need at stake.
//! The amplitude of process C is held: fitted freely it falls to 0.052, where the sleep of a 12-h break hardly depends on its onset
//! (experiment S03, at least 3 h between onsets, 2.6 h there).
//! Sum of squares of (modelled - observed) / 0.4 h over the fitted outcomes, 32 members, hilaire2007; a simplex search from the embedded constants.
//! Run with `cargo run --release --example sleep_constants`; it prints the optimum, and the constants in use beside it.
#![expect(clippy::print_stdout, reason = "what is measured or fitted is printed")]

#[path = "simplex.rs"]
mod simplex;

use acroshift::physiology::{ModelSets, PacemakerName};
use acroshift::timeline::{HabitFile, Habits};
use acroshift::validation::{Experiments, Models, Row, rows_of};
use rayon::prelude::*;

/// Names of the constants, in the order of the search.
const NAMES: [&str; 4] = [
    "effort.lowering",
    "personal_time.share",
    "personal_time.cap",
    "effort.share_at_stake",
];
const ROUNDS: usize = 150;
/// Tolerance of a fitted amount of sleep, h: that of validation.
const TOLERANCE_H: f64 = 0.4;

type Point = [f64; 4];

fn main() {
    let experiments = fitted_experiments();
    let start = embedded();
    report("in use", &start, &experiments);
    let best = simplex::search(start, ROUNDS, |point| loss(point, &experiments));
    report("optimum", &best, &experiments);
}

fn fitted_experiments() -> Experiments {
    let mut experiments = Experiments::embedded();
    for experiment in &mut experiments.experiment {
        experiment.outcome.retain(|outcome| outcome.fitted);
        let used: Vec<String> = experiment
            .outcome
            .iter()
            .flat_map(|o| o.of.clone())
            .collect();
        experiment.condition.retain(|c| {
            used.iter()
                .any(|of| of.starts_with(&format!("{}.", c.name)))
        });
    }
    experiments.experiment.retain(|e| !e.outcome.is_empty());
    experiments
}

fn embedded() -> Point {
    let sets = ModelSets::embedded();
    let habits = HabitFile::embedded().habits();
    [
        sets.sleep.effort.lowering.value,
        habits.personal_share,
        habits.personal_cap_h,
        sets.sleep.effort.share_at_stake.value,
    ]
}

fn models(point: &Point) -> Models {
    let mut sets = ModelSets::embedded();
    sets.sleep.effort.lowering.value = point[0];
    sets.sleep.effort.share_at_stake.value = point[3];
    Models {
        name: PacemakerName::Hilaire2007,
        sets,
        habits: Habits {
            personal_share: point[1],
            personal_cap_h: point[2],
            ..HabitFile::embedded().habits()
        },
    }
}

fn rows(point: &Point, experiments: &Experiments) -> Vec<Row> {
    let models = [models(point)];
    experiments
        .experiment
        .par_iter()
        .flat_map_iter(|experiment| rows_of(experiment, &models, 32, 1))
        .collect()
}

fn loss(point: &Point, experiments: &Experiments) -> f64 {
    if point.iter().any(|value| *value <= 0.0) || point[3] > 1.0 || point[1] > 0.4 {
        return f64::INFINITY;
    }
    rows(point, experiments)
        .iter()
        .filter_map(|row| {
            let off = row.scored()?.median - row.observed?;
            Some((off / TOLERANCE_H).powi(2))
        })
        .sum()
}

fn report(title: &str, point: &Point, experiments: &Experiments) {
    println!("{title}: loss {:.3}", loss(point, experiments));
    for (name, value) in NAMES.iter().zip(point) {
        println!("  {name} = {value:.4}");
    }
    for row in rows(point, experiments) {
        let (Some(observed), Some(scored)) = (row.observed, row.scored()) else {
            continue;
        };
        println!(
            "    {:<55} {observed:6.2} {:6.2}",
            row.outcome, scored.median
        );
    }
}
