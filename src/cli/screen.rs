//! `acroshift screen`: files to a report.

use super::arguments::{AudienceName, Format, Level, ScreenOptions};
use super::{Ending, Stop, files, output, parameters};
use acroshift::assessment::{Attention, Pack, pack};
use acroshift::diagnostic::has_errors;
use acroshift::intake::site::Site;
use acroshift::intake::{Intake, Reading, zone_name};
use acroshift::render::{json, terminal};
use acroshift::report::{Audience, ScreenReport, diagnostics};
use acroshift::{Screening, screen};
use anyhow::Context;
use sha2::{Digest, Sha256};
use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::io::Write;

/// Runs the command.
pub(super) fn run(options: &ScreenOptions) -> Result<Ending, Stop> {
    use_threads(options)?;
    if options.light_log.is_some() && options.audience == AudienceName::Planner {
        return Err(Stop::usage(
            "measured light is of a person, and the planner's generic adult has none; give --audience clinician",
        ));
    }
    let site = files::site(options.site.as_deref())?;
    let packs = packs(options, &site)?;
    check_derogations(&site, &packs)?;
    let reading = reading(options, &site)?;
    if let Some(folder) = &options.out {
        output::check_folder(folder, options.force, audience(options))?;
    }
    let files = files::read(&options.rosters);
    // Files that could not be read have no place among the inputs, here as in the intake.
    let mut read = files::rosters(&files, &reading);
    let light = files::light_log(options.light_log.as_deref(), read.roster.as_ref());
    read.diagnostics.extend(light.diagnostics);
    let hashes: Vec<(String, String)> = files
        .iter()
        .chain(&light.file)
        .filter(|file| file.refused.is_none())
        .map(|file| (file.name.clone(), sha256(&file.bytes)))
        .collect();
    let rows = diagnostics::rows(&read.diagnostics);
    let unusable = has_errors(&read.diagnostics) && !options.allow_partial;
    // Notes are told in the report; on the terminal only what asks for a decision.
    let urgent: Vec<_> = rows
        .iter()
        .filter(|row| row.level != "note")
        .cloned()
        .collect();
    let mut messages = Vec::new();
    terminal::write_diagnostics(&urgent, &mut messages).context("writing messages")?;
    output::tell(&messages);
    let screening = Screening {
        audience: audience(options),
        packs,
        site,
        members: usize::from(options.members),
        seed: options.seed,
        sets: parameters::sets(options.pacemaker, &options.parameters)?,
        beside: options.pacemaker.names().split_off(1),
        light_logs: light.logs,
    };
    let usable = read.roster.as_ref().filter(|_| !unusable);
    let report = usable.and_then(|roster| screen(roster, &read.diagnostics, &hashes, &screening));
    let Some(report) = report else {
        return Err(cannot_screen(&read));
    };
    hand_over(options, &report)
}

fn audience(options: &ScreenOptions) -> Audience {
    match options.audience {
        AudienceName::Planner => Audience::Planner,
        AudienceName::Clinician => Audience::Clinician,
    }
}

fn cannot_screen(read: &Intake) -> Stop {
    let counts = diagnostics::counts(&read.diagnostics);
    let advice = if read.roster.is_some() {
        "nothing was written; mend the rows, or give --allow-partial to report on the rest"
    } else {
        "nothing in the input can be screened"
    };
    Stop {
        ending: Ending::Input,
        error: anyhow::anyhow!("{counts}; {advice}"),
    }
}

fn hand_over(options: &ScreenOptions, report: &ScreenReport) -> Result<Ending, Stop> {
    if let Some(folder) = &options.out {
        output::write_folder(folder, report)?;
    }
    let mut results = output::results();
    match options.format {
        Format::Text => {
            terminal::write(report, &mut results).context("writing the summary")?;
            if let Some(folder) = &options.out {
                writeln!(
                    results,
                    "\nReport: {}",
                    folder.join("report.html").display()
                )
                .context("writing the summary")?;
            }
        }
        Format::Json => json::write(report, &mut results).context("writing the result")?,
    }
    results.flush().context("writing the result")?;
    Ok(ending(options.fail_on, report))
}

fn ending(fail_on: Option<Level>, report: &ScreenReport) -> Ending {
    let limit = match fail_on {
        None => return Ending::Done,
        Some(Level::Priority) => Attention::Priority,
        Some(Level::Review) => Attention::Review,
        Some(Level::Note) => Attention::Note,
    };
    if report.findings.iter().any(|f| f.attention <= limit) {
        Ending::Findings
    } else {
        Ending::Done
    }
}

fn use_threads(options: &ScreenOptions) -> Result<(), Stop> {
    if let Some(threads) = options.threads {
        rayon::ThreadPoolBuilder::new()
            .num_threads(usize::from(threads))
            .build_global()
            .context("starting threads")?;
    }
    Ok(())
}

fn packs(options: &ScreenOptions, site: &Site) -> Result<Vec<Pack>, Stop> {
    let names: Vec<String> = match (options.rules.is_empty(), site.rules.is_empty()) {
        (false, _) => options.rules.clone(),
        (true, false) => site.rules.clone(),
        (true, true) => pack::DEFAULT_PACKS
            .iter()
            .map(|n| (*n).to_owned())
            .collect(),
    };
    pack::named(&names).map_err(Stop::usage)
}

/// A derogation that no chosen pack knows would be a declaration without effect.
fn check_derogations(site: &Site, packs: &[Pack]) -> Result<(), Stop> {
    let known: BTreeSet<&str> = packs
        .iter()
        .flat_map(|pack| &pack.rules)
        .flat_map(|rule| rule.derogations.iter().map(String::as_str))
        .collect();
    let unknown = site
        .derogations
        .iter()
        .find(|id| !known.contains(id.as_str()));
    match unknown {
        None => Ok(()),
        Some(id) => Err(Stop::usage(format!(
            "site file: derogation {id:?} is in no chosen pack; known: {}",
            known.into_iter().collect::<Vec<_>>().join(", ")
        ))),
    }
}

fn reading(options: &ScreenOptions, site: &Site) -> Result<Reading, Stop> {
    let zone = match &options.zone {
        Some(name) => Some(
            zone_name::zone_named(name)
                .map_err(|advice| Stop::usage(format!("--zone: {advice}")))?,
        ),
        None => site.zone,
    };
    if let (Some(from), Some(to)) = (options.from, options.to)
        && to < from
    {
        return Err(Stop::usage(format!("--to {to} lies before --from {from}")));
    }
    Ok(Reading {
        zone,
        first_date: options.from,
        last_date: options.to,
    })
}

fn sha256(bytes: &[u8]) -> String {
    Sha256::digest(bytes)
        .iter()
        .fold(String::new(), |mut text, byte| {
            // Writing to a String cannot fail.
            let _ = write!(text, "{byte:02x}");
            text
        })
}
