//! Rhythms as one row per subject and period.

use crate::render::csv::guarded;
use crate::rhythm::subjects::RhythmTable;
use crate::rhythm::{Component, Cosinor};
use std::io::{self, Write};

/// One row per subject and period, RFC 4180.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn csv(table: &RhythmTable, out: &mut impl Write) -> io::Result<()> {
    let mut writer = ::csv::WriterBuilder::new()
        .terminator(::csv::Terminator::CRLF)
        .from_writer(out);
    writer.write_record([
        "subject",
        "specimen",
        "group",
        "n",
        "days",
        "below_limit",
        "refused",
        "mesor",
        "mesor_se",
        "r2",
        "p",
        "period_h",
        "amplitude",
        "amplitude_se",
        "acrophase_deg",
        "acrophase_h",
        "acrophase_se_h",
        "component_p",
    ])?;
    for subject in &table.subjects {
        let head = [
            guarded(&subject.subject),
            guarded(&subject.specimen),
            guarded(subject.group.as_deref().unwrap_or_default()),
            subject.n.to_string(),
            subject.days.to_string(),
            subject.below_limit.to_string(),
        ];
        let rows: Vec<[String; 12]> = match &subject.cosinor {
            Err(refusal) => {
                let mut row: [String; 12] = Default::default();
                row[0] = refusal.to_string();
                vec![row]
            }
            Ok(cosinor) => cosinor
                .components
                .iter()
                .map(|component| cells_of(table, cosinor, component))
                .collect(),
        };
        for row in rows {
            writer.write_record(head.iter().chain(&row))?;
        }
    }
    writer.flush()
}

fn cells_of(table: &RhythmTable, cosinor: &Cosinor, component: &Component) -> [String; 12] {
    let numbers = [
        cosinor.mesor,
        cosinor.mesor_se,
        cosinor.r2,
        cosinor.p,
        component.period_h,
        component.amplitude,
        component.amplitude_se,
        component.acrophase_deg(),
        crate::numeric::circular::wrap(
            component.peak_h() + table.plan.reference_h,
            component.period_h,
        ),
        component.peak_se_h(),
        component.p,
    ];
    let mut cells: [String; 12] = Default::default();
    for (cell, number) in cells.iter_mut().skip(1).zip(numbers) {
        *cell = number.to_string();
    }
    cells
}
