//! `acroshift rhythm`: a table of samples to rhythms.

use super::arguments::{RhythmFormat, RhythmOptions};
use super::{Ending, Stop, output};
use acroshift::diagnostic::has_errors;
use acroshift::intake::Input;
use acroshift::intake::samples;
use acroshift::render::{rhythm as render, terminal};
use acroshift::report::diagnostics;
use acroshift::rhythm::Design;
use acroshift::rhythm::subjects::{Plan, analyse};
use anyhow::Context;
use std::io::{Read, Write};

/// Runs the command.
pub(super) fn run(options: &RhythmOptions) -> Result<Ending, Stop> {
    let plan = plan(options)?;
    let bytes = read(options)?;
    let name = options.samples.file_name().map_or_else(
        || "samples".to_owned(),
        |name| name.to_string_lossy().into_owned(),
    );
    let input = Input {
        name: &name,
        bytes: &bytes,
    };
    let (samples, told) = samples::read(&input);
    let mut messages = Vec::new();
    terminal::write_diagnostics(&diagnostics::rows(&told), &mut messages)
        .context("writing messages")?;
    output::tell(&messages);
    let unusable = has_errors(&told) && !options.allow_partial;
    if unusable || samples.series.is_empty() {
        return Ok(Ending::Input);
    }
    let table = analyse(&samples.series, plan);
    let mut results = output::results();
    match options.format {
        RhythmFormat::Text => render::text(&table, &mut results),
        RhythmFormat::Json => render::json(&table, env!("CARGO_PKG_VERSION"), &mut results),
        RhythmFormat::Csv => render::csv(&table, &mut results),
    }
    .and_then(|()| results.flush())
    .context("writing the rhythms")?;
    Ok(Ending::Done)
}

fn plan(options: &RhythmOptions) -> Result<Plan, Stop> {
    let sound = |period: &f64| (0.5..=24.0 * 400.0).contains(period);
    if !options.periods.iter().all(sound) {
        return Err(Stop::usage(
            "periods are hours from 0.5 to 9600, such as 24,12",
        ));
    }
    Ok(Plan {
        design: Design::of(&options.periods),
        log: options.log,
        reference_h: options.reference,
    })
}

fn read(options: &RhythmOptions) -> Result<Vec<u8>, Stop> {
    let told = |error: std::io::Error| Stop {
        ending: Ending::Input,
        error: anyhow::Error::from(error).context(format!("{}", options.samples.display())),
    };
    if options.samples.as_os_str() == "-" {
        let mut bytes = Vec::new();
        std::io::stdin().read_to_end(&mut bytes).map_err(told)?;
        return Ok(bytes);
    }
    std::fs::read(&options.samples).map_err(told)
}
