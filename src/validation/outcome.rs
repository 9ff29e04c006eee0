//! Observed against modelled: one row per outcome.

use super::experiment::{Combine, Experiment, Outcome, Statistic};
use super::lives::Quantities;
use crate::numeric::quantile::quantiles;
use crate::physiology::PacemakerName;

/// Error of a modelled phase beside that of the observed one, h: marker and light (this program's choice after the experiments' own page).
const MODEL_ERROR_H: f64 = 0.5;
/// The same for amounts of sleep, h.
const MODEL_ERROR_SLEEP_H: f64 = 0.4;
/// Standard error taken where none is printed, h.
const UNPRINTED_ERROR_H: f64 = 0.5;
/// Distance from the observed value at which a modelled one is outside, in standard errors.
const LIMIT_Z: f64 = 2.0;

/// One outcome of one experiment.
#[derive(Debug, Clone, PartialEq)]
pub struct Row {
    /// Id of the experiment.
    pub experiment: String,
    /// Where it was published.
    pub citation: String,
    /// Conditions that take part.
    pub condition: String,
    /// In words.
    pub outcome: String,
    /// Unit.
    pub unit: String,
    /// Observed value.
    pub observed: Option<f64>,
    /// Its standard error; taken where none is printed.
    pub error: Option<f64>,
    /// Band in which the modelled value should lie.
    pub band: Option<(f64, f64)>,
    /// Modelled value by pacemaker.
    pub modelled: Vec<(PacemakerName, Modelled)>,
    /// Were constants of the program fitted to it?
    pub fitted: bool,
    /// One line about a miss or an assumption.
    pub note: String,
}

impl Row {
    /// What the scored pacemaker gives: the first.
    pub fn scored(&self) -> Option<&Modelled> {
        self.modelled.first().map(|(_, modelled)| modelled)
    }
}

/// A modelled outcome.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Modelled {
    /// The statistic asked for: most often the median of the members.
    pub median: f64,
    /// 5 % of the members.
    pub p05: f64,
    /// 95 % of the members.
    pub p95: f64,
    /// How it stands against the band.
    pub held: Held,
}

/// How a modelled value stands against the observed one.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Held {
    /// Inside the band.
    Inside,
    /// Outside the band.
    Outside,
    /// Order or direction as observed.
    AsOrdered,
    /// Order or direction not as observed.
    NotAsOrdered,
    /// Shown only.
    Shown,
}

impl Held {
    /// In words.
    pub fn word(self) -> &'static str {
        match self {
            Self::Inside => "inside",
            Self::Outside => "outside",
            Self::AsOrdered => "order as observed",
            Self::NotAsOrdered => "order not as observed",
            Self::Shown => "shown",
        }
    }

    /// Inside, outside, or not a matter of a band.
    pub fn inside(self) -> Option<bool> {
        match self {
            Self::Inside => Some(true),
            Self::Outside => Some(false),
            _ => None,
        }
    }
}

pub(super) fn row(
    experiment: &Experiment,
    outcome: &Outcome,
    by_pacemaker: &[(PacemakerName, Quantities)],
) -> Row {
    let error = standard_error(outcome);
    let band = (!outcome.shown_only && outcome.combine != Combine::Ascending)
        .then(|| band(outcome, error))
        .flatten();
    let modelled = by_pacemaker
        .iter()
        .map(|(name, quantities)| (*name, modelled(outcome, quantities, band)))
        .collect();
    let mut conditions: Vec<&str> = outcome
        .of
        .iter()
        .filter_map(|name| name.rsplit_once('.').map(|(condition, _)| condition))
        .collect();
    conditions.dedup();
    let note = [&outcome.note, &experiment.assumed]
        .into_iter()
        .filter(|text| !text.is_empty())
        .cloned()
        .collect::<Vec<_>>()
        .join(" ");
    Row {
        experiment: experiment.id.clone(),
        citation: experiment.citation.clone(),
        condition: conditions.join(", "),
        outcome: outcome.name.clone(),
        unit: outcome.unit.clone(),
        observed: outcome.observed,
        error: outcome.observed.and(error),
        band,
        modelled,
        fitted: outcome.fitted,
        note,
    }
}

fn standard_error(outcome: &Outcome) -> Option<f64> {
    outcome
        .se
        .or_else(|| outcome.sd.map(|(sd, n)| sd / n.sqrt()))
}

fn band(outcome: &Outcome, error: Option<f64>) -> Option<(f64, f64)> {
    outcome.band.or_else(|| {
        let observed = outcome.observed?;
        let model = if outcome.sleep {
            MODEL_ERROR_SLEEP_H
        } else {
            MODEL_ERROR_H
        };
        let reach = LIMIT_Z * error.unwrap_or(UNPRINTED_ERROR_H).hypot(model);
        Some((observed - reach, observed + reach))
    })
}

fn modelled(outcome: &Outcome, quantities: &Quantities, band: Option<(f64, f64)>) -> Modelled {
    let values: Vec<&[f64]> = outcome
        .of
        .iter()
        .filter_map(|name| {
            quantities
                .iter()
                .find(|(known, _)| known == name)
                .map(|(_, values)| &values[..])
        })
        .collect();
    let medians: Vec<f64> = values
        .iter()
        .filter_map(|values| quantiles(values).map(|q| q.median))
        .collect();
    let count = values.iter().map(|values| values.len()).min().unwrap_or(0);
    let members: Vec<f64> = (0..count)
        .map(|member| combined(outcome, values.iter().map(|values| values[member])))
        .collect();
    let spread = quantiles(&members);
    let central = match (outcome.combine, outcome.statistic) {
        (Combine::Sum | Combine::Ratio | Combine::Ascending, statistic) => {
            of_members(statistic, &members)
        }
        // The curve of the ensemble's medians, not the extremes of each member.
        (_, _) => combined(outcome, medians.iter().copied()),
    };
    let held = if outcome.combine == Combine::Ascending {
        if medians.windows(2).all(|pair| pair[0] < pair[1]) {
            Held::AsOrdered
        } else {
            Held::NotAsOrdered
        }
    } else {
        match band {
            Some((low, high)) if (low..=high).contains(&central) => Held::Inside,
            Some(_) => Held::Outside,
            None => Held::Shown,
        }
    };
    Modelled {
        median: central,
        p05: spread.map_or(f64::NAN, |q| q.p05),
        p95: spread.map_or(f64::NAN, |q| q.p95),
        held,
    }
}

fn combined(outcome: &Outcome, values: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut low, mut high) = (0.0, f64::INFINITY, f64::NEG_INFINITY);
    let mut ratio = f64::NAN;
    for (index, value) in values.enumerate() {
        ratio = if index == 0 { value } else { ratio / value };
        sum += value * outcome.weights.get(index).copied().unwrap_or(1.0);
        low = value.min(low);
        high = value.max(high);
    }
    match outcome.combine {
        Combine::Ratio => ratio,
        Combine::Sum => sum,
        Combine::Max => high,
        Combine::Min => low,
        // Of an order the distance of its ends is shown.
        Combine::Range | Combine::Ascending => high - low,
    }
}

#[expect(
    clippy::cast_precision_loss,
    reason = "members are counted in tens or hundreds"
)]
fn of_members(statistic: Statistic, members: &[f64]) -> f64 {
    let count = members.len() as f64;
    let mean = members.iter().sum::<f64>() / count;
    match statistic {
        Statistic::Median => quantiles(members).map_or(f64::NAN, |q| q.median),
        Statistic::Mean => mean,
        Statistic::Sd => {
            let squares: f64 = members.iter().map(|value| (value - mean).powi(2)).sum();
            (squares / (count - 1.0)).sqrt()
        }
        Statistic::Lowest => members.iter().copied().fold(f64::INFINITY, f64::min),
        Statistic::ShareBelow(limit) => {
            members.iter().filter(|value| **value < limit).count() as f64 / count
        }
    }
}
