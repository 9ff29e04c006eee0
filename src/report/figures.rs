//! From estimates to figures.

use super::ReportInput;
use super::figure::{
    Band, CortisolCurve, CurvePoint, DayTick, PhaseClock, PhaseDay, Raster, RasterRow, Span,
};
use super::lines::{clock_band, daylight_case};
use crate::assessment::LineAssessment;
use crate::numeric::rounding::round_to;
use crate::physiology::{MemberTrack, Simulation};
use crate::timeline::CivilDay;
use crate::units::{Minute, minutes_to_hours};
use std::collections::BTreeSet;

/// Stretches in which at least half of the members sleep.
fn common_sleep(tracks: &[MemberTrack], from: Minute, to: Minute) -> Vec<(Minute, Minute)> {
    let mut steps: Vec<(Minute, i64)> = tracks
        .iter()
        .flat_map(|track| &track.sleeps)
        .filter(|sleep| sleep.from < to && from < sleep.to)
        .flat_map(|sleep| [(sleep.from, 1), (sleep.to, -1)])
        .collect();
    steps.sort_unstable();
    let half = i64::try_from(tracks.len().div_ceil(2)).unwrap_or(i64::MAX);
    let (mut asleep, mut begins, mut spans) = (0, None, Vec::new());
    for (minute, step) in steps {
        asleep += step;
        match begins {
            None if asleep >= half => begins = Some(minute),
            Some(start) if asleep < half => {
                if minute > start {
                    spans.push((start, minute));
                }
                begins = None;
            }
            _ => {}
        }
    }
    spans
}

/// Parts of the stretches inside [from, to), hours after `from`.
fn clipped(spans: &[(Minute, Minute)], from: Minute, to: Minute) -> Vec<Span> {
    spans
        .iter()
        .map(|(begins, ends)| ((*begins).max(from), (*ends).min(to)))
        .filter(|(begins, ends)| begins < ends)
        .map(|(begins, ends)| Span {
            from_h: begins.hours_since(from),
            to_h: ends.hours_since(from),
        })
        .collect()
}

fn work(line: &LineAssessment) -> Vec<(Minute, Minute)> {
    line.duties
        .iter()
        .flat_map(|duty| duty.parts.iter().copied())
        .collect()
}

/// Median DLMO to melatonin offset. Where the two daylight cases are apart, both are drawn.
fn biological_nights(line: &LineAssessment, simulation: &Simulation) -> Vec<(Minute, Minute)> {
    let melatonin = simulation.melatonin;
    let before_cbtmin = |minute: f64| minute - melatonin.onset_before_cbtmin_min;
    let onsets: BTreeSet<Minute> = line
        .estimate
        .days
        .iter()
        .flat_map(|day| {
            let from_cbtmin = day.cbtmin.iter().map(|c| before_cbtmin(c.minute.median));
            from_cbtmin.chain(day.dlmo.iter().map(|d| d.minute.median))
        })
        .map(Minute::nearest)
        .collect();
    onsets
        .into_iter()
        .map(|onset| {
            (
                onset,
                Minute::nearest(onset.as_f64() + melatonin.duration_min),
            )
        })
        .collect()
}

/// Work, sleep and biological night by date.
pub(super) fn raster(
    input: &ReportInput<'_>,
    line: &LineAssessment,
    simulation: &Simulation,
    heading: &str,
) -> Raster {
    let days = input.axis.rostered_dates();
    let (from, to) = span_of(days);
    let sleep = common_sleep(&simulation.tracks, from, to);
    let (work, nights) = (work(line), biological_nights(line, simulation));
    Raster {
        title: format!("Work, sleep and biological night. {heading}"),
        description: format!(
            "Double-plotted raster of {} dates: {} duties hatched, modelled sleep of at least half of the members solid, median biological night outlined (both where morning daylight seen or not makes more than an hour). The table of days holds the numbers.",
            days.len(),
            line.duties.len()
        ),
        rows: days
            .iter()
            .map(|day| RasterRow {
                label: day.date.format("%a %d %b").to_string(),
                day_h: day.end.hours_since(day.start),
                work: clipped(&work, day.start, day.end),
                sleep: clipped(&sleep, day.start, day.end),
                biological_night: clipped(&nights, day.start, day.end),
            })
            .collect(),
    }
}

fn span_of(days: &[CivilDay]) -> (Minute, Minute) {
    (
        days.first().map_or(Minute(0), |day| day.start),
        days.last().map_or(Minute(0), |day| day.end),
    )
}

/// Cortisol over the roster.
pub(super) fn curve(
    input: &ReportInput<'_>,
    line: &LineAssessment,
    simulation: &Simulation,
    heading: &str,
) -> CortisolCurve {
    let days = input.axis.rostered_dates();
    let (from, to) = span_of(days);
    let sleep = common_sleep(&simulation.tracks, from, to);
    CortisolCurve {
        title: format!("Modelled total serum cortisol. {heading}"),
        description: format!(
            "Median and 5-95 % of the members over {} dates in nmol/L: spread of the modelled group mean, not the range of a person. The table of days holds peak, nadir and times.",
            days.len()
        ),
        points: simulation
            .curve
            .iter()
            .filter(|sample| (from..to).contains(&sample.at))
            .map(|sample| CurvePoint {
                at_h: sample.at.hours_since(from),
                nmol_l: Band {
                    median: round_to(sample.nmol_l.median, 1),
                    p05: round_to(sample.nmol_l.p05, 1),
                    p95: round_to(sample.nmol_l.p95, 1),
                },
            })
            .collect(),
        work: clipped(&work(line), from, to),
        sleep: clipped(&sleep, from, to),
        days: days
            .iter()
            .map(|day| DayTick {
                at_h: day.start.hours_since(from),
                label: day.date.format("%a %d %b").to_string(),
            })
            .collect(),
    }
}

/// `CBTmin` by date on the clock face.
pub(super) fn clock(input: &ReportInput<'_>, line: &LineAssessment, heading: &str) -> PhaseClock {
    let days: Vec<PhaseDay> = line
        .estimate
        .days
        .iter()
        .flat_map(|day| {
            day.cbtmin.iter().map(|cbtmin| {
                let band = clock_band(input.axis, cbtmin.minute);
                PhaseDay {
                    label: day.date.format("%a %d %b").to_string(),
                    clock_h: Band {
                        median: band.median,
                        p05: band.p05,
                        p95: band.p95,
                    },
                    case: cbtmin
                        .daylight_seen
                        .map(|seen| daylight_case(seen).to_owned()),
                }
            })
        })
        .collect();
    let habitual = &line.estimate.habitual_cbtmin_min;
    PhaseClock {
        title: format!("Modelled CBTmin by date on the 24-h clock. {heading}"),
        description: format!(
            "{} markers, first date innermost, arc 5-95 % of the members. The table of days holds the numbers.",
            days.len()
        ),
        habitual_h: crate::numeric::circular::wrap(
            minutes_to_hours(Minute::nearest(habitual.median).0),
            24.0,
        ),
        days,
    }
}
