//! A sample in biological time: text and JSON.

use crate::biological_time::{Placed, SampleBand, Standing};
use serde_json::{Value, json as value};
use std::io::{self, Write};

/// Words that stand beside every sample.
pub const FIXED_WORDS: [&str; 6] = [
    "Do not delay a sample, referral or treatment that is clinically needed because of this estimate. If adrenal crisis is suspected this is an emergency: treat first.",
    "A modelled time is not a validated test time; agree any re-timing with the laboratory and the treating doctor; the laboratory's own interval decides.",
    "Late-night saliva tests are not for current night workers without specialist advice.",
    "Never change steroid dosing from this.",
    "The model describes a group mean; the band adds published variation between and within persons. It is no reference interval.",
    "Not a medical device; not validated for clinical decisions.",
];

/// What is printed of a sample.
#[derive(Debug, Clone, PartialEq)]
pub struct SampleReport {
    /// Worker.
    pub worker: String,
    /// When, local.
    pub at: String,
    /// The sample.
    pub placed: Placed,
    /// A measured value, nmol/L.
    pub measured: Option<f64>,
    /// Was `CBTmin` stated instead of modelled?
    pub stated: bool,
    /// Next spans in which a sample would be comparable, local; none when not asked for.
    pub next: Option<Vec<(String, String)>>,
}

fn band(band: SampleBand) -> String {
    format!(
        "{:.0} to {:.0} nmol/L (median {:.0})",
        band.p05, band.p95, band.median
    )
}

fn saliva_band(band: SampleBand) -> String {
    format!(
        "{:.1} to {:.1} nmol/L (median {:.1})",
        band.p05, band.p95, band.median
    )
}

/// Lines for the terminal.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn text(report: &SampleReport, out: &mut impl Write) -> io::Result<()> {
    let placed = &report.placed;
    let shown = |b: SampleBand| match placed.matrix {
        crate::samples::Matrix::Serum => band(b),
        crate::samples::Matrix::Saliva => saliva_band(b),
    };
    writeln!(out, "{}", FIXED_WORDS[0])?;
    writeln!(
        out,
        "\n{}, {}, {}",
        report.worker,
        report.at,
        placed.matrix.word()
    )?;
    writeln!(
        out,
        "  modelled sample band, 5 to 95 %: {}",
        shown(placed.band)
    )?;
    writeln!(
        out,
        "  a day worker's at the same hour: {}",
        shown(placed.day_worker)
    )?;
    if placed.near_waking {
        writeln!(
            out,
            "  close to waking: the band is widened, since the waking response is modelled only on average"
        )?;
    }
    if let Some(measured) = report.measured {
        writeln!(
            out,
            "  measured {measured:.1} nmol/L: {}",
            against(measured, placed.band)
        )?;
    }
    text_of_standing(report, out)?;
    if let Some(next) = &report.next {
        match next.as_slice() {
            [] => writeln!(out, "  next comparable time: none in this roster")?,
            spans => {
                writeln!(out, "  next comparable times:")?;
                for (from, to) in spans.iter().take(10) {
                    writeln!(out, "    {from} to {to}")?;
                }
            }
        }
    }
    writeln!(out)?;
    for words in &FIXED_WORDS[1..] {
        writeln!(out, "{words}")?;
    }
    Ok(())
}

fn text_of_standing(report: &SampleReport, out: &mut impl Write) -> io::Result<()> {
    let standing = &report.placed.standing;
    let of = |q: crate::numeric::quantile::Quantiles| {
        format!("{:.1} h ({:.1} to {:.1})", q.median, q.p05, q.p95)
    };
    let source = if report.stated { "stated" } else { "modelled" };
    writeln!(
        out,
        "  {source} CBTmin: {} before the sample",
        of(standing.since_cbtmin_h)
    )?;
    writeln!(
        out,
        "  {source} waking: {} before the sample, after a main sleep of {}",
        of(standing.since_waking_h),
        of(standing.main_sleep_h)
    )?;
    writeln!(
        out,
        "  timing against 3 to 7 h after CBTmin: {} ({} of {} members)",
        standing.timing.word(),
        standing.hold,
        standing.of
    )?;
    writeln!(
        out,
        "  night duties that ended in the last 72 h: {}",
        standing.nights_before
    )?;
    writeln!(
        out,
        "  {}",
        if standing.comparable {
            "comparable with a day worker's sample"
        } else {
            "not comparable with a day worker's sample"
        }
    )
}

/// A measured value against the modelled sample band, in the fixed words.
fn against(measured: f64, band: SampleBand) -> &'static str {
    if measured < band.p05 {
        "below the modelled sample band"
    } else if measured > band.p95 {
        "above the modelled sample band"
    } else {
        "within the modelled sample band"
    }
}

/// Schema `acroshift.sample/1`.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn json(report: &SampleReport, version: &str, out: &mut impl Write) -> io::Result<()> {
    let placed = &report.placed;
    let band = |b: SampleBand| value!({ "median": b.median, "p05": b.p05, "p95": b.p95, "unit": "nmol/L" });
    let document = value!({
        "schema": "acroshift.sample/1",
        "tool": { "name": "acroshift", "version": version },
        "worker": report.worker,
        "at": report.at,
        "matrix": placed.matrix.word(),
        "sample_band": band(placed.band),
        "day_worker": band(placed.day_worker),
        "measured": report.measured,
        "measured_against_band": report.measured.map(|m| against(m, placed.band)),
        "timing": json_standing(&placed.standing, report.stated),
        "near_waking": placed.near_waking,
        "comparable": placed.standing.comparable,
        "next_comparable": report.next,
        "cautions": FIXED_WORDS,
    });
    serde_json::to_writer_pretty(&mut *out, &document)?;
    writeln!(out)
}

fn json_standing(standing: &Standing, stated: bool) -> Value {
    let hours = |q: crate::numeric::quantile::Quantiles| value!({ "median": q.median, "p05": q.p05, "p95": q.p95 });
    value!({
        "phase": standing.timing.word(),
        "members": { "hold": standing.hold, "of": standing.of },
        "stated": stated,
        "after_main_sleep": hours(standing.main_sleep_h),
        "hours_since_waking": hours(standing.since_waking_h),
        "hours_since_cbtmin": hours(standing.since_cbtmin_h),
        "nights_in_last_72h": standing.nights_before,
    })
}
