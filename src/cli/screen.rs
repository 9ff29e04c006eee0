//! `acroshift screen`: files to a report.

use super::arguments::{AudienceName, Format, Level, ScreenOptions};
use super::{Ending, Stop, output, parameters};
use acroshift::assessment::{Attention, Pack, pack};
use acroshift::diagnostic::{Code, Diagnostic, has_errors};
use acroshift::intake::site::Site;
use acroshift::intake::{self, Input, Intake, Reading, site, zone_name};
use acroshift::render::{json, terminal};
use acroshift::report::{Audience, ScreenReport, diagnostics};
use acroshift::source::Origin;
use acroshift::{Screening, screen};
use anyhow::Context;
use sha2::{Digest, Sha256};
use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::io::{Read, Write};
use std::path::Path;

/// Runs the command.
pub(super) fn run(options: &ScreenOptions) -> Result<Ending, Stop> {
    use_threads(options)?;
    let site = read_site(options)?;
    let packs = packs(options, &site)?;
    check_derogations(&site, &packs)?;
    let reading = reading(options, &site)?;
    if let Some(folder) = &options.out {
        output::check_folder(folder, options.force, audience(options))?;
    }
    let files = read_files(options);
    // Files that could not be read have no place among the inputs, here as in the intake.
    let hashes: Vec<(String, String)> = files
        .iter()
        .filter(|file| file.refused.is_none())
        .map(|file| (file.name.clone(), sha256(&file.bytes)))
        .collect();
    let read = read_rosters(&files, &reading);
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

fn read_site(options: &ScreenOptions) -> Result<Site, Stop> {
    let Some(path) = &options.site else {
        return Ok(Site::default());
    };
    let text = std::fs::read_to_string(path)
        .map_err(|error| Stop::usage(format!("{}: {error}", path.display())))?;
    site::read(&text).map_err(|error| Stop::usage(format!("{}: {error}", path.display())))
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

/// A file, or why it could not be read.
struct File {
    name: String,
    bytes: Vec<u8>,
    refused: Option<String>,
}

fn read_files(options: &ScreenOptions) -> Vec<File> {
    options.rosters.iter().map(|path| read_file(path)).collect()
}

fn read_file(path: &Path) -> File {
    if path.as_os_str() == "-" {
        let mut bytes = Vec::new();
        let refused = std::io::stdin().read_to_end(&mut bytes).err();
        return File {
            name: "standard input".to_owned(),
            bytes,
            refused: refused.map(|error| error.to_string()),
        };
    }
    let name = path.file_name().map_or_else(
        || path.display().to_string(),
        |name| name.to_string_lossy().into_owned(),
    );
    let (bytes, refused) = if path.is_dir() {
        (
            Vec::new(),
            Some("is a folder; name the roster files in it".to_owned()),
        )
    } else {
        match std::fs::read(path) {
            Ok(bytes) => (bytes, None),
            Err(error) => (Vec::new(), Some(error.to_string())),
        }
    };
    File {
        name,
        bytes,
        refused,
    }
}

fn read_rosters(files: &[File], reading: &Reading) -> Intake {
    let inputs: Vec<Input<'_>> = files
        .iter()
        .filter(|file| file.refused.is_none())
        .map(|file| Input {
            name: &file.name,
            bytes: &file.bytes,
        })
        .collect();
    let mut read = intake::read(&inputs, reading);
    for file in files {
        if let Some(reason) = &file.refused {
            let origin = Origin::File {
                file: file.name.clone(),
            };
            let message = format!("cannot be read: {reason}");
            read.diagnostics
                .insert(0, Diagnostic::new(Code::Unreadable, origin, message));
        }
    }
    read
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
