//! Fits the constants of the sleep rules to the outcomes marked `fitted` in `src/validation/experiments.toml`.
//!
//! Four constants: lowering of the threshold by effort, share and cap of personal time, share of the need at stake.
//! The amplitude of process C is held: fitted freely it falls to 0.052, where the sleep of a 12-h break hardly depends on its onset
//! (experiment S03, at least 3 h between onsets, 2.6 h there).
//! Sum of squares of (modelled - observed) / 0.4 h over the fitted outcomes, 32 members, hilaire2007; a simplex search from the embedded constants.
//! Run with `cargo run --release --example sleep_constants`; it prints the optimum, and the constants in use beside it.

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
/// First steps of the search, as shares of the start.
const FIRST_STEP: f64 = 0.15;
const ROUNDS: usize = 150;
/// Tolerance of a fitted amount of sleep, h: that of validation.
const TOLERANCE_H: f64 = 0.4;

type Point = [f64; 4];

fn main() {
    let experiments = fitted_experiments();
    let start = embedded();
    report("in use", &start, &experiments);
    let best = search(start, |point| loss(point, &experiments));
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

/// Simplex search (Nelder and Mead 1965, Comput J 7:308): reflection 1, expansion 2, contraction 1/2, shrinkage 1/2.
fn search(start: Point, loss: impl Fn(&Point) -> f64) -> Point {
    let mut simplex: Vec<(f64, Point)> = (0..=start.len())
        .map(|corner| {
            let mut point = start;
            if let Some(value) = corner.checked_sub(1).and_then(|i| point.get_mut(i)) {
                *value *= 1.0 + FIRST_STEP;
            }
            (loss(&point), point)
        })
        .collect();
    for _ in 0..ROUNDS {
        simplex.sort_by(|a, b| a.0.total_cmp(&b.0));
        let last = simplex.len() - 1;
        let worst = simplex[last];
        let centre = mean(&simplex[..last]);
        let along = |by: f64| {
            let point = std::array::from_fn(|i| centre[i] + by * (centre[i] - worst.1[i]));
            (loss(&point), point)
        };
        let reflected = along(1.0);
        simplex[last] = if reflected.0 < simplex[0].0 {
            let expanded = along(2.0);
            if expanded.0 < reflected.0 {
                expanded
            } else {
                reflected
            }
        } else if reflected.0 < simplex[last - 1].0 {
            reflected
        } else {
            let contracted = along(if reflected.0 < worst.0 { 0.5 } else { -0.5 });
            if contracted.0 >= worst.0.min(reflected.0) {
                shrink(&mut simplex, &loss);
                continue;
            }
            contracted
        };
    }
    simplex.sort_by(|a, b| a.0.total_cmp(&b.0));
    simplex[0].1
}

fn mean(corners: &[(f64, Point)]) -> Point {
    let count = f64::from(u32::try_from(corners.len()).unwrap_or(1));
    std::array::from_fn(|i| corners.iter().map(|(_, point)| point[i]).sum::<f64>() / count)
}

fn shrink(simplex: &mut [(f64, Point)], loss: &impl Fn(&Point) -> f64) {
    let best = simplex[0].1;
    for corner in simplex.iter_mut().skip(1) {
        let point = std::array::from_fn(|i| f64::midpoint(best[i], corner.1[i]));
        *corner = (loss(&point), point);
    }
}
