//! Rhythms of a table of samples: text, JSON and CSV.

mod csv;
mod json;
mod text;

pub use csv::csv;
pub use json::json;
pub use text::text;

use crate::rhythm::subjects::RhythmTable;

/// What every rendering says.
pub const CAUTION: &str = "A fitted curve describes the samples; it is no diagnosis. The laboratory's own interval and the treating doctor decide. Not a medical device; not validated for clinical decisions.";

fn hours(hours: f64) -> String {
    let minutes = (hours * 60.0).round();
    let of_day = crate::numeric::circular::wrap(minutes, 1440.0);
    format!("{:02.0}:{:02.0}", (of_day / 60.0).floor(), of_day % 60.0)
}

/// A time after the reference: a clock time within a day, hours where the period is longer.
fn when(after_h: f64, table: &RhythmTable, period_h: f64) -> String {
    if period_h > 24.0 + 1e-9 {
        format!("{:.1} h", crate::numeric::circular::wrap(after_h, period_h))
    } else {
        hours(after_h + table.plan.reference_h)
    }
}

fn longest(table: &RhythmTable) -> f64 {
    table
        .plan
        .design
        .periods_h
        .iter()
        .copied()
        .fold(0.0, f64::max)
}
