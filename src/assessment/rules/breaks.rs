//! # What it measures
//! Break minutes of duties longer than the rule says.
//! # Why it matters
//! Law fixes a shortest break.
//! # Units
//! Minutes.
//! # Limits and their source
//! In the packs: 20 min above 6 h, UK reg 12.
//! # Example
//! A duty of 8 h with 30 min of break meets 20 min.
//! # Not covered
//! When in the duty the break lies; duties whose rows name no break are not judged.

use super::{Measure, Rule, RuleKind, Subject};
use crate::units::Minute;

/// The kind.
pub(super) const KIND: RuleKind = RuleKind {
    metric: "break_min",
    about: "break minutes of duties longer than the rule says",
    measure,
};

fn measure(subject: &Subject<'_>, rule: &Rule) -> Vec<Measure> {
    let above = rule.work_h_above.unwrap_or(0.0);
    subject
        .worker
        .duties
        .iter()
        .enumerate()
        .filter(|(_, duty)| duty.work_h() > above)
        .map(|(index, duty)| {
            let mut measure = subject.on_duty(index, Minute(duty.break_min.unwrap_or(0)).as_f64());
            if duty.break_min.is_none() {
                measure.missing = Some("needs break minutes".to_owned());
            }
            measure
        })
        .collect()
}
