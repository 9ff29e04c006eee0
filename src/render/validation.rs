//! The table of `validate`: observed against modelled, as text, Markdown, JSON, CSV and HTML.

use crate::render::csv::guarded;
use crate::validation::{Held, Modelled, Row, ValidationReport};
use maud::{DOCTYPE, html as markup};
use serde_json::{Map, Value, json as value};
use std::io::{self, Write};

/// What every rendering says first.
const ABOUT: &str = "Published experiments run through the models. Light and hours that the abstracts do not give are assumed. \
Inside means that the statistic of the default ensemble lies in the band; a miss stays in the table. \
Outcomes marked fitted were used to set constants of the sleep rules: there agreement is a fit, not a validation.";
/// The caution of every rendering.
const CAUTION: &str = "Group means of small studies, not predictions for a person. Not a medical device; not validated for clinical decisions.";

/// Two decimals, or a dash.
fn number(number: Option<f64>) -> String {
    number
        .filter(|n| n.is_finite())
        .map_or_else(|| "-".to_owned(), |n| format!("{:.2}", n + 0.0))
}

fn observed(row: &Row) -> String {
    match (row.observed, row.error) {
        (Some(_), Some(error)) => format!("{} \u{b1} {error:.2}", number(row.observed)),
        _ => number(row.observed),
    }
}

fn band(row: &Row) -> String {
    row.band.map_or_else(
        || "-".to_owned(),
        |(low, high)| format!("{low:.2} to {high:.2}"),
    )
}

fn modelled(modelled: &Modelled) -> String {
    format!(
        "{} ({} to {})",
        number(Some(modelled.median)),
        number(Some(modelled.p05)),
        number(Some(modelled.p95))
    )
}

fn held(row: &Row) -> &'static str {
    row.scored().map_or("-", |scored| scored.held.word())
}

fn name(row: &Row) -> String {
    let unit = if row.unit.is_empty() {
        String::new()
    } else {
        format!(", {}", row.unit)
    };
    let fitted = if row.fitted { " (fitted)" } else { "" };
    format!("{}{unit}{fitted}", row.outcome)
}

fn counts(report: &ValidationReport) -> String {
    let scored = report.validation.pacemakers[0].word();
    let counts: Vec<String> = report
        .counts()
        .into_iter()
        .map(|(held, count)| format!("{count} {}", held.word()))
        .collect();
    format!(
        "{} outcomes on {scored}: {}. Members {}, seed {}.",
        report.rows.len(),
        counts.join(", "),
        report.validation.members,
        report.validation.seed
    )
}

/// Lines for the terminal.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn text(report: &ValidationReport, out: &mut impl Write) -> io::Result<()> {
    writeln!(out, "{ABOUT}\n{CAUTION}")?;
    let mut last = "";
    for row in &report.rows {
        if row.experiment != last {
            writeln!(out, "\n{}: {}", row.experiment, row.citation)?;
            last = &row.experiment;
        }
        writeln!(
            out,
            "  {}: observed {}, band {}: {}",
            name(row),
            observed(row),
            band(row),
            held(row)
        )?;
        for (pacemaker, outcome) in &row.modelled {
            writeln!(
                out,
                "    {:<12} {} {}",
                pacemaker.word(),
                modelled(outcome),
                outcome.held.word()
            )?;
        }
        if !row.note.is_empty() {
            writeln!(out, "    {}", row.note)?;
        }
    }
    for not_run in &report.not_run {
        writeln!(out, "\n{}: not run: {}", not_run.id, not_run.reason)?;
    }
    writeln!(out, "\n{}", counts(report))
}

/// A table for documents.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn markdown(report: &ValidationReport, out: &mut impl Write) -> io::Result<()> {
    for sentence in [ABOUT, CAUTION] {
        writeln!(out, "{}\n", sentence.replace(". ", ".\n"))?;
    }
    writeln!(out, "{}\n", counts(report).replace(". ", ".\n"))?;
    write!(out, "| experiment | outcome | observed | band |")?;
    for pacemaker in &report.validation.pacemakers {
        write!(out, " {} |", pacemaker.word())?;
    }
    writeln!(out, " held |")?;
    let columns = 5 + report.validation.pacemakers.len();
    writeln!(out, "{}|", "|---".repeat(columns))?;
    for row in &report.rows {
        write!(
            out,
            "| {} | {} | {} | {} |",
            row.experiment,
            name(row),
            observed(row),
            band(row)
        )?;
        for (_, outcome) in &row.modelled {
            write!(out, " {} |", modelled(outcome))?;
        }
        writeln!(out, " {} |", held(row))?;
    }
    writeln!(out, "\n## Misses and assumptions\n")?;
    for row in report.rows.iter().filter(|row| !row.note.is_empty()) {
        writeln!(
            out,
            "- {}, {}: {}: {}",
            row.experiment,
            row.outcome,
            held(row),
            row.note
        )?;
    }
    writeln!(out, "\n## Not run\n")?;
    for not_run in &report.not_run {
        writeln!(out, "- {}: {}.", not_run.id, not_run.reason)?;
    }
    writeln!(out, "\n## Sources\n")?;
    let mut last = "";
    for row in &report.rows {
        if row.experiment != last {
            writeln!(out, "- {}: {}.", row.experiment, row.citation)?;
            last = &row.experiment;
        }
    }
    Ok(())
}

/// Schema `acroshift.validate/1`.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn json(report: &ValidationReport, out: &mut impl Write) -> io::Result<()> {
    let experiments: Vec<Value> = report.rows.iter().map(json_row).collect();
    let document = value!({
        "schema": "acroshift.validate/1",
        "tool": { "name": "acroshift", "version": report.version },
        "run": { "members": report.validation.members, "seed": report.validation.seed },
        "experiments": experiments,
        "not_run": report.not_run.iter().map(|n| value!({ "id": n.id, "reason": n.reason })).collect::<Vec<_>>(),
        "cautions": [ABOUT, CAUTION],
    });
    serde_json::to_writer_pretty(&mut *out, &document)?;
    writeln!(out)
}

fn json_row(row: &Row) -> Value {
    let modelled: Map<String, Value> = row
        .modelled
        .iter()
        .map(|(name, m)| {
            let held = m.held.word();
            let numbers = value!({ "median": m.median, "p05": m.p05, "p95": m.p95, "held": held });
            (name.word().to_owned(), numbers)
        })
        .collect();
    value!({
        "id": row.experiment,
        "citation": row.citation,
        "condition": row.condition,
        "outcome": row.outcome,
        "unit": row.unit,
        "observed": row.observed,
        "error": row.error,
        "band": row.band.map(|(low, high)| [low, high]),
        "modelled": modelled,
        "inside": row.scored().and_then(|scored| scored.held.inside()),
        "held": row.scored().map(|scored| scored.held.word()),
        "fitted": row.fitted,
        "note": row.note,
    })
}

/// One row per outcome and pacemaker, RFC 4180.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn csv(report: &ValidationReport, out: &mut impl Write) -> io::Result<()> {
    let mut writer = ::csv::WriterBuilder::new()
        .terminator(::csv::Terminator::CRLF)
        .from_writer(out);
    writer.write_record([
        "id",
        "condition",
        "outcome",
        "unit",
        "observed",
        "error",
        "band_low",
        "band_high",
        "pacemaker",
        "median",
        "p05",
        "p95",
        "held",
        "fitted",
        "note",
    ])?;
    let cell = |number: Option<f64>| number.map(|n| n.to_string()).unwrap_or_default();
    for row in &report.rows {
        for (pacemaker, modelled) in &row.modelled {
            writer.write_record([
                guarded(&row.experiment),
                guarded(&row.condition),
                guarded(&row.outcome),
                guarded(&row.unit),
                cell(row.observed),
                cell(row.error),
                cell(row.band.map(|band| band.0)),
                cell(row.band.map(|band| band.1)),
                pacemaker.word().to_owned(),
                modelled.median.to_string(),
                modelled.p05.to_string(),
                modelled.p95.to_string(),
                modelled.held.word().to_owned(),
                row.fitted.to_string(),
                guarded(&row.note),
            ])?;
        }
    }
    writer.flush()
}

const STYLE: &str = "body{font-family:sans-serif;max-width:100rem;margin:1rem auto;padding:0 1rem;color-scheme:light dark}\
table{border-collapse:collapse;width:100%}th,td{border-bottom:1px solid #8888;padding:.25rem .5rem;text-align:left;vertical-align:top}\
td.number{font-variant-numeric:tabular-nums;min-width:4.5rem}td:nth-child(2){min-width:9rem}td:last-child{min-width:14rem}.scroll{overflow-x:auto}thead{display:table-header-group}tr{break-inside:avoid}\
@media print{@page{size:A4 landscape;margin:12mm}body{font-size:8pt;margin:0;padding:0}.scroll{overflow:visible}td.number,td:nth-child(2),td:last-child{min-width:0}}";

/// A page of its own, without external references.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn html(report: &ValidationReport, out: &mut impl Write) -> io::Result<()> {
    let page = markup! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta name="viewport" content="width=device-width, initial-scale=1";
                meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'";
                title { "acroshift: published experiments" }
                style { (maud::PreEscaped(STYLE)) }
            }
            body { main {
                h1 { "Published experiments: observed and modelled" }
                p { (ABOUT) }
                p { strong { (CAUTION) } }
                p { (counts(report)) }
                div class="scroll" tabindex="0" { table {
                    caption { "Statistic of the members, 5 to 95 % of the members in brackets" }
                    thead { tr {
                        th scope="col" { "Experiment" } th scope="col" { "Outcome" } th scope="col" { "Observed" } th scope="col" { "Band" }
                        @for pacemaker in &report.validation.pacemakers { th scope="col" { (pacemaker.word()) } }
                        th scope="col" { "Held" } th scope="col" { "Note" }
                    } }
                    tbody { @for row in &report.rows { tr {
                        th scope="row" { abbr title=(row.citation) { (row.experiment) } }
                        td { (name(row)) }
                        td class="number" { (observed(row)) }
                        td class="number" { (band(row)) }
                        @for (_, outcome) in &row.modelled {
                            td class="number" { (modelled(outcome)) @if outcome.held == Held::Outside { " outside" } }
                        }
                        td { (held(row)) }
                        td { (row.note) }
                    } } }
                } }
                h2 { "Not run" }
                ul { @for not_run in &report.not_run { li { (not_run.id) ": " (not_run.reason) } } }
            } }
        }
    };
    writeln!(out, "{}", page.into_string())
}
