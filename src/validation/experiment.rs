//! Published experiments as data: what was done, what was observed, and how closely a model should come.
//!
//! The format is described in `src/validation/experiments.toml`, which holds the experiments that come with the program.

use super::quantity::Reading;
use serde::Deserialize;

/// Name and version of the format.
pub const FORMAT: &str = "acroshift.experiments/1";

/// The experiments of a file.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Experiments {
    format: String,
    /// Experiments, in the order in which they are shown.
    #[serde(default)]
    pub experiment: Vec<Experiment>,
    /// Experiments that cannot be run, with the reason.
    #[serde(default)]
    pub not_run: Vec<NotRun>,
}

/// An experiment that the models cannot run.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct NotRun {
    /// Its id.
    pub id: String,
    /// Why not.
    pub reason: String,
}

/// One published experiment.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Experiment {
    /// Short name.
    pub id: String,
    /// Where it was published.
    pub citation: String,
    /// What had to be assumed.
    #[serde(default)]
    pub assumed: String,
    /// Life before the experiment.
    pub baseline: Baseline,
    /// Groups or treatments.
    pub condition: Vec<Condition>,
    /// What was observed.
    pub outcome: Vec<Outcome>,
}

/// Habitual sleep and light, lived until entrained.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Baseline {
    /// Bedtime, clock hour; from 24 on after midnight.
    pub bed: f64,
    /// Waking, clock hour.
    pub wake: f64,
    /// Light while awake: lux from a clock hour on, ascending, over 24 h; the program's home light when absent.
    #[serde(default)]
    pub light: Vec<(f64, f64)>,
}

/// One group or treatment.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Condition {
    /// Short name.
    pub name: String,
    /// Prescribed days, from midnight of day 0.
    #[serde(default)]
    pub days: Vec<Days>,
    /// Prescribed days of another length than 24 h, from midnight of day 0.
    pub cycle: Option<Cycle>,
    /// Duties, where sleep is left to the model.
    #[serde(default)]
    pub duties: Vec<Duty>,
    /// Life before, where it differs from that of the experiment.
    pub baseline: Option<Baseline>,
    /// Light at the eye on duty, lux.
    pub work_lux: Option<f64>,
    /// Commute each way, hours; the member's own when absent.
    pub commute_h: Option<f64>,
    /// Longest personal time before and after sleep, hours; the program's when absent.
    pub personal_h: Option<f64>,
    /// Is morning daylight seen on the way home? Both halves of the members when absent.
    pub morning_daylight: Option<bool>,
    /// Light after the prescribed days, awake all the time, lux: a constant routine.
    #[serde(default = "constant_routine_lux")]
    pub after_lux: f64,
    /// Quantities read from each member.
    pub quantity: Vec<Quantity>,
}

/// Dim light of a constant routine, lux.
fn constant_routine_lux() -> f64 {
    10.0
}

/// The same blocks on some days.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Days {
    /// First and last day.
    pub on: (i64, i64),
    /// Clock hours from, to, state and lux; hours not covered are awake in the light of the baseline.
    pub blocks: Vec<(f64, f64, State, f64)>,
}

/// Prescribed days that are shorter or longer than 24 h: awake first, then asleep in the dark.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Cycle {
    /// Length of a day, hours.
    pub length_h: f64,
    /// Share of it asleep.
    pub asleep_share: f64,
    /// Light while awake, lux.
    pub lux: f64,
    /// Number of days.
    pub count: u32,
}

/// What a person does in a block.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum State {
    /// Asleep or in bed in the dark.
    Asleep,
    /// Awake.
    Awake,
}

/// The same duty on some days.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Duty {
    /// First and last day.
    pub on: (i64, i64),
    /// Start, clock hour.
    pub from: f64,
    /// End, clock hour; from 24 on the next day.
    pub to: f64,
    /// Light at the eye, lux, where it differs from that of the condition.
    pub lux: Option<f64>,
}

/// A quantity of each member.
#[derive(Debug, Clone, PartialEq, Deserialize)]
pub struct Quantity {
    /// Short name; outcomes call it `condition.name`.
    pub name: String,
    /// How it is read.
    #[serde(flatten)]
    pub reading: Reading,
}

/// What was observed, and what of the model answers to it.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Outcome {
    /// In words.
    pub name: String,
    /// Unit of observed, band and modelled.
    #[serde(default)]
    pub unit: String,
    /// Quantities, as `condition.name`.
    pub of: Vec<String>,
    /// How the quantities are put together.
    #[serde(default)]
    pub combine: Combine,
    /// Weights of a sum; all 1 when absent.
    #[serde(default)]
    pub weights: Vec<f64>,
    /// What of the members is shown.
    #[serde(default)]
    pub statistic: Statistic,
    /// Observed value.
    pub observed: Option<f64>,
    /// Standard error of the observed value.
    pub se: Option<f64>,
    /// Standard deviation between people and their number, where no standard error is printed.
    pub sd: Option<(f64, f64)>,
    /// Band in which the modelled value should lie; otherwise two standard errors with the error of the model.
    pub band: Option<(f64, f64)>,
    /// Is it an amount of sleep? Its model error is smaller.
    #[serde(default)]
    pub sleep: bool,
    /// Shown, not held against anything.
    #[serde(default)]
    pub shown_only: bool,
    /// Were constants of the program fitted to it?
    #[serde(default)]
    pub fitted: bool,
    /// One line about a miss.
    #[serde(default)]
    pub note: String,
}

/// How quantities are put together, member by member.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Combine {
    /// Weighted sum.
    #[default]
    Sum,
    /// Highest.
    Max,
    /// Lowest.
    Min,
    /// Highest minus lowest.
    Range,
    /// First over second.
    Ratio,
    /// Ascending, each below the next?
    Ascending,
}

/// What of the members is shown.
#[derive(Debug, Clone, Copy, PartialEq, Default, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Statistic {
    /// Median.
    #[default]
    Median,
    /// Mean.
    Mean,
    /// Standard deviation.
    Sd,
    /// Lowest.
    Lowest,
    /// Share of members below this value.
    ShareBelow(f64),
}

/// The file of experiments cannot be used.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum ExperimentError {
    /// Not TOML, or an unknown key.
    #[error("the file of experiments cannot be read: {0}")]
    Unreadable(String),
    /// Another format.
    #[error("the file of experiments says format \"{0}\"; this version reads \"{FORMAT}\"")]
    Format(String),
    /// Something in an experiment cannot be.
    #[error("experiment {experiment}, {place}: {problem}")]
    Content {
        /// Id of the experiment.
        experiment: String,
        /// Condition or outcome.
        place: String,
        /// What is wrong.
        problem: String,
    },
}

impl Experiments {
    /// The experiments that come with the program.
    ///
    /// # Panics
    ///
    /// Never in a built program: a test reads the file.
    pub fn embedded() -> Self {
        Self::read(include_str!("experiments.toml")).expect("the embedded file is read by a test")
    }

    /// Reads a file of experiments.
    ///
    /// # Errors
    ///
    /// [`ExperimentError`] with the experiment and the place.
    pub fn read(text: &str) -> Result<Self, ExperimentError> {
        let file: Self =
            toml::from_str(text).map_err(|error| ExperimentError::Unreadable(error.to_string()))?;
        if file.format != FORMAT {
            return Err(ExperimentError::Format(file.format));
        }
        for experiment in &file.experiment {
            check(experiment).map_err(|(place, problem)| ExperimentError::Content {
                experiment: experiment.id.clone(),
                place,
                problem,
            })?;
        }
        Ok(file)
    }
}

/// Place and problem.
type Complaint = (String, String);

fn check(experiment: &Experiment) -> Result<(), Complaint> {
    check_baseline(&experiment.baseline).map_err(|problem| ("baseline".to_owned(), problem))?;
    if experiment.condition.iter().any(|c| {
        c.days.is_empty() && c.cycle.is_none() && sleeps_at_noon(c.life_before(experiment))
    }) {
        let problem = "habitual sleep covers noon, at which duties are entered awake".to_owned();
        return Err(("baseline".to_owned(), problem));
    }
    for condition in &experiment.condition {
        check_condition(condition)
            .map_err(|problem| (format!("condition \"{}\"", condition.name), problem))?;
    }
    let known: Vec<String> = experiment
        .condition
        .iter()
        .flat_map(|c| c.quantity.iter().map(|q| format!("{}.{}", c.name, q.name)))
        .collect();
    for outcome in &experiment.outcome {
        let place = || format!("outcome \"{}\"", outcome.name);
        if let Some(unknown) = outcome.of.iter().find(|name| !known.contains(name)) {
            return Err((place(), format!("no condition gives \"{unknown}\"")));
        }
        if outcome.of.is_empty() {
            return Err((place(), "`of` names no quantity".to_owned()));
        }
        if !outcome.weights.is_empty() && outcome.weights.len() != outcome.of.len() {
            return Err((
                place(),
                "there must be one weight for each of `of`".to_owned(),
            ));
        }
    }
    Ok(())
}

fn sleeps_at_noon(baseline: &Baseline) -> bool {
    let wrap = |hours: f64| crate::numeric::circular::wrap(hours, 24.0);
    wrap(12.0 - baseline.bed) < wrap(baseline.wake - baseline.bed)
}

fn check_baseline(baseline: &Baseline) -> Result<(), String> {
    let hours = baseline.wake
        + if baseline.wake < baseline.bed {
            24.0
        } else {
            0.0
        }
        - baseline.bed;
    if !(0.0..=36.0).contains(&baseline.bed) || !(2.0..=16.0).contains(&hours) {
        return Err(format!(
            "bed and wake must be clock hours with 2 to 16 h of sleep between them, found {} and {}",
            baseline.bed, baseline.wake
        ));
    }
    for (hour, lux) in &baseline.light {
        check_hour(*hour)?;
        check_lux(*lux)?;
    }
    Ok(())
}

fn check_condition(condition: &Condition) -> Result<(), String> {
    let prescribed = !condition.days.is_empty() || condition.cycle.is_some();
    if prescribed && !condition.duties.is_empty() {
        return Err(
            "`days` and `cycle` prescribe sleep, `duties` leave it to the model: give one"
                .to_owned(),
        );
    }
    if let Some(cycle) = &condition.cycle {
        check_lux(cycle.lux)?;
        let sound = (1.0..=72.0).contains(&cycle.length_h)
            && (0.0..1.0).contains(&cycle.asleep_share)
            && cycle.count <= 400;
        if !sound {
            return Err(
                "a cycle has 1 to 72 h, a share asleep below 1 and at most 400 days".to_owned(),
            );
        }
    }
    if let Some(baseline) = &condition.baseline {
        check_baseline(baseline)?;
    }
    check_lux(condition.after_lux)?;
    condition.work_lux.map_or(Ok(()), check_lux)?;
    for duty in &condition.duties {
        duty.lux.map_or(Ok(()), check_lux)?;
    }
    for days in &condition.days {
        check_days(days)?;
    }
    let mut ends = f64::NEG_INFINITY;
    for (from, to, _) in condition.duty_hours() {
        if !from.is_finite() || !to.is_finite() || from < ends || to <= from {
            return Err(format!(
                "duties overlap or end before they start at {from} h"
            ));
        }
        ends = to;
    }
    Ok(())
}

fn check_days(days: &Days) -> Result<(), String> {
    let (first, last) = days.on;
    if first > last || last > 400 || first < 0 {
        return Err(format!("days {first} to {last} do not lie in 0 to 400"));
    }
    let mut ends = 0.0;
    for (from, to, _, lux) in &days.blocks {
        check_hour(*from)?;
        check_hour(*to)?;
        check_lux(*lux)?;
        if *from < ends || to <= from {
            return Err(format!(
                "the block from {from} to {to} overlaps the one before it or ends before it starts"
            ));
        }
        ends = *to;
    }
    Ok(())
}

fn check_lux(lux: f64) -> Result<(), String> {
    crate::units::Lux::new(lux)
        .map(|_| ())
        .map_err(|error| error.to_string())
}

fn check_hour(hour: f64) -> Result<(), String> {
    if (0.0..=24.0).contains(&hour) {
        Ok(())
    } else {
        Err(format!("a clock hour must lie in 0 to 24, found {hour}"))
    }
}

impl Condition {
    /// The life before the condition.
    pub fn life_before<'a>(&'a self, experiment: &'a Experiment) -> &'a Baseline {
        self.baseline.as_ref().unwrap_or(&experiment.baseline)
    }

    /// Duties from and to, hours since midnight of day 0, with their light, ascending.
    pub fn duty_hours(&self) -> Vec<(f64, f64, Option<f64>)> {
        let mut hours: Vec<(f64, f64, Option<f64>)> = self
            .duties
            .iter()
            .flat_map(|duty| {
                (duty.on.0..=duty.on.1).map(|day| {
                    let midnight = crate::units::minutes_to_hours(day * 1440);
                    let lux = duty.lux.or(self.work_lux);
                    (midnight + duty.from, midnight + duty.to, lux)
                })
            })
            .collect();
        hours.sort_by(|a, b| a.0.total_cmp(&b.0));
        hours
    }
}
