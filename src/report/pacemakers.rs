//! What the other pacemakers say: the spread between published models is part of the uncertainty.

use super::document::{BandValue, PacemakerRow};
use super::{ReportInput, lines, wording};
use crate::assessment::LineAssessment;
use crate::assessment::estimate::WindowEstimate;
use crate::numeric::quantile::{circular_quantiles, quantiles};
use crate::physiology::{MemberTrack, PacemakerName, Simulation};
use crate::units::{Minute, PhaseShift, minutes_to_hours};

/// The lines lived again on another pacemaker, in the order of the assessment.
#[derive(Debug, Clone, PartialEq)]
pub struct Beside {
    /// The pacemaker.
    pub pacemaker: PacemakerName,
    /// Members by line.
    pub tracks: Vec<Vec<MemberTrack>>,
}

/// One row per pacemaker for the duty at which `CBTmin` stands furthest from habit; none where only one was asked for.
pub(super) fn rows(
    input: &ReportInput<'_>,
    line: &LineAssessment,
    simulation: &Simulation,
) -> Vec<PacemakerRow> {
    if input.beside.is_empty() {
        return Vec::new();
    }
    let size = |window: &&WindowEstimate| window.cbtmin_displacement_h.all.median.abs();
    let windows = line.estimate.windows.iter();
    let Some(window) = windows.max_by(|a, b| size(a).total_cmp(&size(b))) else {
        return Vec::new();
    };
    let own = input.sets.pacemaker.name_and_publication().0;
    let index = input
        .assessment
        .lines
        .iter()
        .position(|other| other.line.id == line.line.id);
    let others = input.beside.iter().filter_map(|beside| {
        let tracks = beside.tracks.get(index?)?;
        row(input, beside.pacemaker.word(), tracks, window.end)
    });
    row(input, own, &simulation.tracks, window.end)
        .into_iter()
        .chain(others)
        .collect()
}

fn row(
    input: &ReportInput<'_>,
    pacemaker: &str,
    tracks: &[MemberTrack],
    at: Minute,
) -> Option<PacemakerRow> {
    // Habits follow the clock: a clock change alone is no displacement.
    let clock_moved_h = minutes_to_hours(input.axis.clock.at(at) - at.0);
    let displacements: Vec<f64> = tracks
        .iter()
        .map(|t| t.displacement(t.cbtmin_before(at)).hours() - clock_moved_h)
        .collect();
    let slept: Vec<f64> = tracks.iter().map(|t| t.sleep_h(at + -1440, at)).collect();
    Some(PacemakerRow {
        pacemaker: pacemaker.to_owned(),
        at: wording::stamp(input.axis, at),
        cbtmin_displacement_h: lines::banded(circular_quantiles(&displacements, 24.0, -12.0)?),
        sleep_24h: lines::banded(quantiles(&slept)?),
    })
}

/// The rows as one sentence.
pub(super) fn sentence(rows: &[PacemakerRow]) -> Option<String> {
    let first = rows.first()?;
    let said: Vec<String> = rows
        .iter()
        .map(|row| {
            let shift = PhaseShift::earlier_by(row.cbtmin_displacement_h.median);
            format!("{shift} on {}", row.pacemaker)
        })
        .collect();
    let medians = || rows.iter().map(|row| row.cbtmin_displacement_h.median);
    let spread = medians().fold(f64::MIN, f64::max) - medians().fold(f64::MAX, f64::min);
    Some(format!(
        "Published models at the duty from {}: {} (medians, {:.1} h apart). The spread between models is part of the uncertainty; hannay2019 stands early with indoor light.",
        first.at.replace('T', " ").get(..16).unwrap_or(&first.at),
        said.join(", "),
        spread
    ))
}

/// A band as it is written, for tables.
pub fn written(band: BandValue) -> String {
    format!("{:.1} ({:.1} to {:.1})", band.median, band.p05, band.p95)
}
