//! Tables of measured cortisol: one row per sample.
//!
//! Columns, in any order and case: `subject`, `time`, `value`, `unit`; optional `matrix`, `assay`, `group`, `waking_time`.
//! `time` is a local date-time, one with its offset, or decimal hours: one way for the whole table.
//! `unit` is nmol/L, ug/dL or ng/mL, one for the whole table.

mod reader;
mod sample_time;

use super::{Input, table_of};
use crate::diagnostic::{self, Diagnostic};
use crate::samples::Series;
use reader::Reader;

/// nmol/L in one ug/dL of cortisol (molar mass 362.46 g/mol).
const NMOL_PER_UG_DL: f64 = 27.59;

/// What one table holds.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Samples {
    /// Series by subject, matrix, assay and group: what differs in one of them is never fitted together.
    pub series: Vec<Series>,
    /// Unit in which the values were written.
    pub unit: String,
}

/// Reads a table of samples, and everything that is wrong with it in one pass.
///
/// # Example
///
/// ```
/// use acroshift::intake::{samples, Input};
/// let csv = b"subject,time,value,unit\nA,2026-03-09T07:00,10,nmol/L\nA,2026-03-09T23:00,2,nmol/L\n";
/// let (read, diagnostics) = samples::read(&Input { name: "saliva.csv", bytes: csv });
/// assert_eq!(read.series[0].samples[1].time_h, 23.0);
/// assert!(diagnostics.is_empty());
/// ```
pub fn read(input: &Input<'_>) -> (Samples, Vec<Diagnostic>) {
    let mut diagnostics = Vec::new();
    let samples = table_of(input, &mut diagnostics)
        .and_then(|table| Reader::new(&table, &mut diagnostics)?.read())
        .unwrap_or_default();
    diagnostic::sort(&mut diagnostics);
    (samples, diagnostics)
}

/// nmol/L in one of a unit: nmol/L, ug/dL, ng/mL; none for another.
pub fn factor_of(unit: &str) -> Option<f64> {
    match unit
        .to_lowercase()
        .replace(['\u{b5}', '\u{3bc}'], "u")
        .as_str()
    {
        "nmol/l" => Some(1.0),
        "ug/dl" | "mcg/dl" => Some(NMOL_PER_UG_DL),
        "ng/ml" | "ug/l" => Some(NMOL_PER_UG_DL / 10.0),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read_text(csv: &str) -> (Samples, Vec<&'static str>) {
        let input = Input {
            name: "s.csv",
            bytes: csv.as_bytes(),
        };
        let (samples, diagnostics) = read(&input);
        (samples, diagnostics.iter().map(|d| d.code.name()).collect())
    }

    #[test]
    fn units_become_nanomoles() {
        let (read, _) = read_text("subject,time,value,unit\nA,8,10,ug/dL\nA,20,<1,ug/dL\n");
        let samples = &read.series[0].samples;
        assert!((samples[0].nmol_l - 275.9).abs() < 1e-9);
        assert!((samples[1].nmol_l - 13.795).abs() < 1e-9 && samples[1].below_limit);
    }

    #[test]
    fn what_cannot_be_read_is_told() {
        for (csv, told) in [
            ("subject,time,value\nA,8,10\n", "sample-unit-missing"),
            (
                "subject,time,value,unit\nA,8,10,mol\n",
                "sample-unit-missing",
            ),
            (
                "subject,time,value,unit\nA,8,10,nmol/L\nA,9,1,ug/dL\n",
                "sample-units-mixed",
            ),
            (
                "subject,time,value,unit\nA,8,-3,nmol/L\n",
                "sample-value-unusable",
            ),
            (
                "subject,time,value,unit\nA,8,3,nmol/L\nA,8,4,nmol/L\n",
                "sample-time-repeated",
            ),
            (
                "subject,time,value,unit\nA,noon,3,nmol/L\n",
                "unreadable-time",
            ),
            (
                "subject,time,value,unit,matrix\nA,8,400,nmol/L,saliva\n",
                "sample-matrix-questioned",
            ),
            ("subject,value,unit\nA,3,nmol/L\n", "missing-column"),
            (
                "subject,time,value,unit\nA,0700,3,nmol/L\n",
                "unreadable-time",
            ),
            (
                "subject,time,value,unit\nA,7,3,nmol/L\nA,2026-03-09T09:00,3,nmol/L\n",
                "sample-times-mixed",
            ),
            (
                "subject,time,value,unit,waking_time\nA,7,3,nmol/L,7.5\n",
                "sample-waking-apart",
            ),
            (
                "subject,time,value,unit,waking_time\nA,33,3,nmol/L,7\n",
                "sample-waking-apart",
            ),
            (
                "subject,time,value,unit,matrix\nA,7,3,nmol/L,spit\n",
                "sample-matrix-unknown",
            ),
        ] {
            let (_, codes) = read_text(csv);
            assert!(codes.contains(&told), "{csv}: {codes:?}");
        }
    }

    #[test]
    fn one_waking_serves_the_samples_of_its_day() {
        let (read, codes) = read_text(
            "subject,time,value,unit,waking_time\nA,7,9,nmol/L,7\nA,11,5,nmol/L,\nA,32,9,nmol/L,\n",
        );
        let wakings: Vec<_> = read.series[0].samples.iter().map(|s| s.waking_h).collect();
        assert_eq!(wakings, [Some(7.0), Some(7.0), None]);
        assert!(codes.is_empty());
    }

    #[test]
    fn two_matrices_and_two_assays_are_series_of_their_own() {
        let (read, _) = read_text(
            "subject,time,value,unit,matrix,assay\nA,8,300,nmol/L,serum,X\nA,8,10,nmol/L,saliva,X\nA,9,8,nmol/L,saliva,Y\n",
        );
        let specimens: Vec<_> = read.series.iter().map(Series::specimen).collect();
        assert_eq!(specimens, ["saliva, X", "saliva, Y", "serum, X"]);
    }
}
