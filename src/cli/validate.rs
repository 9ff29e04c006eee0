//! `acroshift validate`: published experiments to a table of observed against modelled.

use super::arguments::{TableFormat, ValidateOptions};
use super::{Ending, Stop, output, parameters};
use acroshift::render::validation as render;
use acroshift::validation::{Experiments, Validation, run as run_experiments};
use anyhow::Context;
use std::io::Write;

/// Runs the command.
pub(super) fn run(options: &ValidateOptions) -> Result<Ending, Stop> {
    let experiments = experiments(options)?;
    let validation = Validation {
        pacemakers: options.pacemaker.names(),
        sets: parameters::sets(options.pacemaker, &options.parameters)?,
        members: usize::from(options.members),
        seed: options.seed,
    };
    let report = run_experiments(&experiments, validation);
    let mut results = output::results();
    match options.format {
        TableFormat::Text => render::text(&report, &mut results),
        TableFormat::Markdown => render::markdown(&report, &mut results),
        TableFormat::Json => render::json(&report, &mut results),
        TableFormat::Csv => render::csv(&report, &mut results),
        TableFormat::Html => render::html(&report, &mut results),
    }
    .and_then(|()| results.flush())
    .context("writing the table")?;
    Ok(Ending::Done)
}

fn experiments(options: &ValidateOptions) -> Result<Experiments, Stop> {
    let Some(path) = &options.experiments else {
        return Ok(Experiments::embedded());
    };
    let unusable = |error: anyhow::Error| Stop {
        ending: Ending::Input,
        error: error.context(format!("{}", path.display())),
    };
    let text = std::fs::read_to_string(path).map_err(|error| unusable(error.into()))?;
    Experiments::read(&text).map_err(|error| unusable(error.into()))
}
