//! Kinds of duty, and duties that touch counted as one.

use super::Shift;
use chrono::{DateTime, Utc};

/// What a row of the roster stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum DutyKind {
    /// Work.
    Work,
    /// On call at the workplace.
    OnCallSite,
    /// On call at home.
    Standby,
    /// Called out from standby.
    CalledOut,
    /// Paid sleep at the workplace.
    SleepIn,
    /// Training.
    Training,
    /// Travel for work.
    Travel,
    /// Leave.
    Leave,
    /// Absent, whatever the reason: reasons are health data.
    Absent,
    /// Rest day.
    Rest,
}

impl DutyKind {
    /// Words of the file for each kind.
    const WORDS: [(&'static str, Self); 14] = [
        ("work", Self::Work),
        ("duty", Self::Work),
        ("shift", Self::Work),
        ("on-call-site", Self::OnCallSite),
        ("on-call-home", Self::Standby),
        ("standby", Self::Standby),
        ("called-out", Self::CalledOut),
        ("sleep-in", Self::SleepIn),
        ("training", Self::Training),
        ("travel", Self::Travel),
        ("leave", Self::Leave),
        ("absent", Self::Absent),
        ("sick", Self::Absent),
        ("rest", Self::Rest),
    ];

    /// Every word that a file may use.
    pub fn words() -> impl Iterator<Item = &'static str> {
        Self::WORDS.iter().map(|(word, _)| *word)
    }

    /// The kind named by a word, case-insensitively.
    pub fn named(word: &str) -> Option<Self> {
        let word = word.to_lowercase().replace([' ', '_'], "-");
        Self::WORDS
            .iter()
            .find(|(known, _)| *known == word)
            .map(|(_, kind)| *kind)
    }

    /// Does it count as duty? Common practice, no source; home standby and sleep-in are shown and do not end a recovery window.
    pub fn counts(self) -> bool {
        matches!(
            self,
            Self::Work | Self::OnCallSite | Self::CalledOut | Self::Training | Self::Travel
        )
    }

    /// Does it lie inside a recovery window and make its sleep uncertain?
    pub fn interrupts(self) -> bool {
        matches!(self, Self::Standby | Self::SleepIn)
    }
}

/// A counted duty: one shift, or several whose gaps are short enough to be joined.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DutyBlock {
    /// First instant.
    pub start: DateTime<Utc>,
    /// First instant after it.
    pub end: DateTime<Utc>,
    /// Places of its shifts among the worker's shifts.
    pub shifts: Vec<usize>,
    /// Commute from the roster, minutes each way.
    pub commute_min: Option<u16>,
}

/// Counted shifts with gaps of at most `join_gap_min` joined.
pub fn joined(shifts: &[Shift], join_gap_min: i64) -> Vec<DutyBlock> {
    let mut blocks: Vec<DutyBlock> = Vec::new();
    for (index, shift) in shifts.iter().enumerate() {
        if !shift.kind.counts() {
            continue;
        }
        match blocks.last_mut() {
            Some(block) if (shift.start - block.end).num_minutes() <= join_gap_min => {
                block.end = block.end.max(shift.end);
                block.shifts.push(index);
            }
            _ => blocks.push(DutyBlock {
                start: shift.start,
                end: shift.end,
                shifts: vec![index],
                commute_min: shift.commute_min,
            }),
        }
    }
    blocks
}
