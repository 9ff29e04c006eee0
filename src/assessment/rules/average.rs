//! # What it measures
//! Average hours over a reference period: per week, or per 24 h for night workers.
//! # Why it matters
//! The main limits of working-time law are averages over months.
//! # Units
//! Hours a week: A / C with C in weeks; hours a day: A / (D - R) with R one day of weekly rest per started week.
//! # Limits and their source
//! In the packs: 48 h a week over 17 weeks (UK reg 4) or 4 months (Directive Art 6 and 16(b)); 8 h over 17 weeks (UK reg 6).
//! # Example
//! 4 weeks of 40 h in a reference period of 17 weeks are not judged; the value so far is 40 h a week.
//! # Not covered
//! Less than a week; excluded days (leave, sickness) and opt-outs, which the roster does not show.

use super::{Measure, Rule, RuleKind, SO_FAR, Subject};
use crate::assessment::duties::Duty;
use crate::assessment::pack::ReferencePeriod;
use crate::timeline::CivilDay;
use crate::units::{MINUTES_PER_DAY, Minute};

/// Weeks of an average month, 365.2425 / 12 / 7.
const WEEKS_PER_MONTH: f64 = 4.348;

/// Hours a week.
pub(super) const WEEK: RuleKind = RuleKind {
    metric: "work_h_avg_week",
    about: "average working hours a week over the reference period",
    measure: week,
};

/// Hours a day of night workers.
pub(super) const NIGHT_WORKER: RuleKind = RuleKind {
    metric: "night_worker_h_avg_24",
    about: "average working hours per 24 h of a night worker over the reference period",
    measure: night_worker,
};

fn week(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    average(
        subject,
        rule,
        |hours, days| hours / (days / 7.0),
        "h a week so far",
    )
    .into_iter()
    .collect()
}

fn night_worker(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    let nights = subject
        .worker
        .duties
        .iter()
        .filter(|duty| subject.is_night(duty))
        .count();
    if nights == 0 {
        return Vec::new();
    }
    average(
        subject,
        rule,
        |hours, days| hours / (days - (days / 7.0).ceil()),
        "h a day so far (night worker assumed from less than three months)",
    )
    .into_iter()
    .collect()
}

fn average(
    subject: &Subject<'_>,
    rule: &Rule,
    mean: impl Fn(f64, f64) -> f64,
    unit: &str,
) -> Option<Measure> {
    let dates = dates_of_worker(subject)?;
    let (first, last) = (dates.first()?, dates.last()?);
    let days = whole_days(last.end - first.start);
    if days < 7.0 {
        // Less than a week has no weekly average.
        return None;
    }
    let hours = work_h(subject, first.start, last.end);
    let (value, missing) = match days_of(rule.reference.as_ref()) {
        None => {
            let text =
                format!("needs the reference period that national law sets: {SO_FAR} {unit}");
            (mean(hours, days), Some(text))
        }
        // Not even weeks without any work could bring the average down: judged at once.
        Some(needed) if days < needed && !rule.op.holds(mean(hours, needed), rule.value) => {
            (mean(hours, needed), None)
        }
        Some(needed) if days < needed => {
            let text = format!(
                "{:.0} of {:.0} weeks seen: {SO_FAR} {unit}",
                days / 7.0,
                needed / 7.0
            );
            (mean(hours, days), Some(text))
        }
        Some(needed) => (mean(highest_h(subject, dates, needed), needed), None),
    };
    let unread = subject
        .has_gap(first.start, last.end)
        .then(|| "a date of the period could not be read".to_owned());
    Some(Measure {
        value,
        window: None,
        start: first.start,
        end: last.end,
        shifts: Vec::new(),
        missing: missing.or(unread),
    })
}

/// Working hours of the duties that start inside [from, to).
fn work_h(subject: &Subject<'_>, from: Minute, to: Minute) -> f64 {
    subject
        .worker
        .duties
        .iter()
        .filter(|duty| (from..to).contains(&duty.start))
        .map(Duty::work_h)
        // An empty sum of floats is -0.
        .sum::<f64>()
        + 0.0
}

/// Dates of the roster, for somebody who joins later than in its first week from the first duty on.
fn dates_of_worker<'a>(subject: &Subject<'a>) -> Option<&'a [CivilDay]> {
    let dates = subject.axis.rostered_dates();
    let first_duty = subject.worker.duties.first()?.start;
    let joined = dates.partition_point(|day| day.end <= first_duty);
    Some(if joined < 7 { dates } else { &dates[joined..] })
}

/// The most working hours in any stretch of `days` that begins a whole number of weeks after the first date.
fn highest_h(subject: &Subject<'_>, dates: &[CivilDay], days: f64) -> f64 {
    dates
        .iter()
        .step_by(7)
        .map(|day| (day.start, day.start + Minute::nearest(days * 1440.0).0))
        .filter(|(_, to)| dates.last().is_some_and(|last| *to <= last.end + 60))
        .map(|(from, to)| work_h(subject, from, to))
        .fold(0.0, f64::max)
}

fn days_of(reference: Option<&ReferencePeriod>) -> Option<f64> {
    let reference = reference?;
    let length = f64::from(reference.len);
    match reference.unit.as_str() {
        "week" => Some(length * 7.0),
        // Whole weeks, so that no period holds more Mondays than Sundays: 4 months are 17 weeks. This program's reading.
        "month" => Some((length * WEEKS_PER_MONTH).floor() * 7.0),
        "d" => Some(length),
        _ => None,
    }
}

/// Local dates in a stretch of elapsed minutes; a clock change of an hour does not make or lose a date.
fn whole_days(minutes: i64) -> f64 {
    Minute((minutes + MINUTES_PER_DAY / 2) / MINUTES_PER_DAY).as_f64()
}
