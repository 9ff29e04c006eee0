//! `acroshift sample`: a cortisol sample in the biological time of a worker.

use super::arguments::{AudienceName, Format, MatrixName, SampleOptions};
use super::{Ending, Stop, files, output};
use acroshift::biological_time::Stated;
use acroshift::diagnostic::has_errors;
use acroshift::intake::clock_text::{self, Moment};
use acroshift::intake::{Reading, samples, zone_name};
use acroshift::physiology::ModelSets;
use acroshift::render::sample::{self as render, SampleReport};
use acroshift::render::terminal;
use acroshift::report::{Audience, diagnostics};
use acroshift::samples::Matrix;
use acroshift::{SampleQuestion, Screening, sample};
use anyhow::Context;
use chrono::{NaiveDateTime, Timelike};
use std::io::Write;

/// Runs the command.
pub(super) fn run(options: &SampleOptions) -> Result<Ending, Stop> {
    if options.audience != AudienceName::Clinician {
        return Err(Stop::usage(
            "a sample is physiology of a person: it is told to those bound to secrecy only; give --audience clinician",
        ));
    }
    let question = question(options)?;
    let measured = measured(options)?;
    let site = files::site(options.site.as_deref())?;
    let zone = options
        .zone
        .as_deref()
        .map(zone_name::zone_named)
        .transpose()
        .map_err(|advice| Stop::usage(format!("--zone: {advice}")))?;
    let reading = Reading {
        zone: zone.or(site.zone),
        ..Reading::default()
    };
    let mut read = files::rosters(&files::read(&options.rosters), &reading);
    let light = files::light_log(options.light_log.as_deref(), read.roster.as_ref());
    read.diagnostics.extend(light.diagnostics);
    let mut messages = Vec::new();
    let urgent: Vec<_> = diagnostics::rows(&read.diagnostics)
        .into_iter()
        .filter(|row| row.level != "note" && row.level != "warning")
        .collect();
    terminal::write_diagnostics(&urgent, &mut messages).context("writing messages")?;
    output::tell(&messages);
    let Some(roster) = read.roster.filter(|_| !has_errors(&read.diagnostics)) else {
        return Ok(Ending::Input);
    };
    let screening = Screening {
        audience: Audience::Clinician,
        packs: Vec::new(),
        site,
        members: usize::from(options.members),
        seed: options.seed,
        sets: ModelSets::embedded(),
        beside: Vec::new(),
        light_logs: light.logs,
    };
    let (placed, next) = sample(&roster, &screening, &question).map_err(|refusal| Stop {
        ending: Ending::Input,
        error: refusal.into(),
    })?;
    let local = |at: chrono::DateTime<chrono_tz::Tz>| at.format("%a %d %b %H:%M").to_string();
    let report = SampleReport {
        worker: question.worker.clone(),
        at: question.at.format("%Y-%m-%dT%H:%M").to_string(),
        placed,
        measured,
        stated: question.stated.is_some(),
        next: next.map(|spans| {
            spans
                .into_iter()
                .map(|(from, to)| (local(from), local(to)))
                .collect()
        }),
    };
    let mut results = output::results();
    match options.format {
        Format::Text => render::text(&report, &mut results),
        Format::Json => render::json(&report, env!("CARGO_PKG_VERSION"), &mut results),
    }
    .and_then(|()| results.flush())
    .context("writing the sample")?;
    Ok(Ending::Done)
}

fn question(options: &SampleOptions) -> Result<SampleQuestion, Stop> {
    let stated = match (&options.cbtmin, &options.sleep) {
        (Some(cbtmin), Some(sleep)) => {
            let (from, to) = sleep
                .split_once('-')
                .ok_or_else(|| Stop::usage("--sleep is written 08:00-16:00"))?;
            Some(Stated {
                cbtmin_h: clock_hour("--cbtmin", cbtmin)?,
                sleep_h: (clock_hour("--sleep", from)?, clock_hour("--sleep", to)?),
            })
        }
        _ => None,
    };
    Ok(SampleQuestion {
        worker: options.worker.clone(),
        at: moment(&options.at)?,
        matrix: match options.matrix {
            MatrixName::Serum => Matrix::Serum,
            MatrixName::Saliva => Matrix::Saliva,
        },
        stated,
        next: options.next_window,
    })
}

fn moment(text: &str) -> Result<NaiveDateTime, Stop> {
    match clock_text::moment(text) {
        Some(Moment::Local(date, time)) => clock_text::local(date, time),
        _ => None,
    }
    .ok_or_else(|| {
        Stop::usage(format!(
            "--at {text:?} is no local time such as 2026-03-27T09:00"
        ))
    })
}

fn clock_hour(option: &str, text: &str) -> Result<f64, Stop> {
    match clock_text::time(text.trim()) {
        Some(clock_text::DayTime::At(time)) => {
            Ok(f64::from(time.num_seconds_from_midnight()) / 3600.0)
        }
        _ => Err(Stop::usage(format!(
            "{option}: {text:?} is no clock time such as 08:00"
        ))),
    }
}

/// A measured value in nmol/L.
fn measured(options: &SampleOptions) -> Result<Option<f64>, Stop> {
    let (Some(value), Some(unit)) = (options.value, &options.unit) else {
        return Ok(None);
    };
    let factor = samples::factor_of(unit).ok_or_else(|| {
        Stop::usage(format!(
            "--unit {unit:?} is not read; write nmol/L, ug/dL or ng/mL"
        ))
    })?;
    if !value.is_finite() || value <= 0.0 {
        return Err(Stop::usage(format!(
            "--value {value} is no concentration above 0"
        )));
    }
    let nmol_l = value * factor;
    if options.matrix == MatrixName::Saliva && nmol_l > 120.0 {
        return Err(Stop::usage(format!(
            "{nmol_l:.0} nmol/L lies in the range of serum; is it saliva, and is the unit right?"
        )));
    }
    Ok(Some(nmol_l))
}
