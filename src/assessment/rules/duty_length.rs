//! # What it measures
//! Elapsed hours of a duty, of any duty or of night duties.
//! # Why it matters
//! Accident risk and sleepiness grow with hours on duty, most at night.
//! # Units
//! Hours, elapsed; pauses of a split duty are left out.
//! # Limits and their source
//! In the packs: 9 h at night, Garde et al. 2020; 8 h at night and 12 h by day, HSE.
//! # Example
//! 22:00-06:00 on the night of the spring clock change lasts 7 h.
//! # Not covered
//! Overtime that the roster does not show.

use super::{Measure, Rule, RuleKind, Subject};

/// Any duty.
pub(super) const DUTY: RuleKind = RuleKind {
    metric: "duty_h",
    about: "elapsed hours of a duty",
    measure: any_duty,
};

/// Night duties of the pack's definition.
pub(super) const NIGHT_DUTY: RuleKind = RuleKind {
    metric: "night_duty_h",
    about: "elapsed hours of a night duty",
    measure: night_duty,
};

fn any_duty(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    (0..subject.worker.duties.len())
        .map(|index| subject.on_duty(index, subject.worker.duties[index].duty_h()))
        .collect()
}

fn night_duty(subject: &Subject<'_>, _rule: &Rule) -> Vec<Measure> {
    (0..subject.worker.duties.len())
        .filter(|index| subject.is_night(&subject.worker.duties[*index]))
        .map(|index| subject.on_duty(index, subject.worker.duties[index].duty_h()))
        .collect()
}
