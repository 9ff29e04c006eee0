//! Duties of one worker on the elapsed axis, with what the rules measure on them.

use crate::roster::{DutyBlock, Roster, Shift, WorkerId};
use crate::timeline::{Axis, Habits};
use crate::units::{Minute, minutes_to_hours};

/// One counted duty; parts of a split duty are one duty with pauses.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Duty {
    /// First minute.
    pub start: Minute,
    /// First minute after it.
    pub end: Minute,
    /// Parts, when it is split; otherwise one.
    pub parts: Vec<(Minute, Minute)>,
    /// Places of its shifts among the worker's shifts.
    pub shifts: Vec<usize>,
    /// Break minutes, pauses and joined gaps included, when every shift of it names its own.
    pub break_min: Option<i64>,
}

impl Duty {
    /// Hours from start to end, pauses included.
    pub fn span_h(&self) -> f64 {
        self.end.hours_since(self.start)
    }

    /// Hours on duty, pauses left out.
    pub fn duty_h(&self) -> f64 {
        minutes_to_hours(self.parts.iter().map(|(from, to)| *to - *from).sum())
    }

    /// Working hours: the span without breaks, pauses and joined gaps; without named breaks the hours on duty.
    pub fn work_h(&self) -> f64 {
        match self.break_min {
            Some(minutes) => self.span_h() - minutes_to_hours(minutes),
            None => self.duty_h(),
        }
    }

    /// Minutes of [from, to) on duty.
    pub fn minutes_inside(&self, from: Minute, to: Minute) -> i64 {
        self.parts
            .iter()
            .map(|(begins, ends)| (to.min(*ends) - from.max(*begins)).max(0))
            .sum()
    }
}

/// Everything the rules may ask about one worker.
#[derive(Debug, Clone, PartialEq)]
pub struct WorkerDuties {
    /// Who.
    pub worker: WorkerId,
    /// Duties, ascending, disjoint.
    pub duties: Vec<Duty>,
    /// Home standby and sleep-in.
    pub interruptions: Vec<(Minute, Minute)>,
}

/// The duties of a worker, joined and with split duties recognised.
pub fn worker_duties(
    roster: &Roster,
    worker: WorkerId,
    axis: &Axis,
    habits: &Habits,
) -> WorkerDuties {
    let shifts = roster.shifts_of(worker);
    let mut duties: Vec<Duty> = Vec::new();
    for block in roster.counted_duties(worker, habits.join_gap_min) {
        let part = (axis.minute(block.start), axis.minute(block.end));
        let break_min = break_min(shifts, &block, axis);
        match duties.last_mut() {
            Some(last) if is_pause(last, part, axis, habits) => {
                last.break_min = last
                    .break_min
                    .zip(break_min)
                    .map(|(a, b): (i64, i64)| a + b + (part.0 - last.end));
                last.end = part.1;
                last.parts.push(part);
                last.shifts.extend(block.shifts);
            }
            _ => duties.push(Duty {
                start: part.0,
                end: part.1,
                parts: vec![part],
                shifts: block.shifts,
                break_min,
            }),
        }
    }
    let interruptions = shifts
        .iter()
        .filter(|shift| shift.kind.interrupts())
        .map(|shift| (axis.minute(shift.start), axis.minute(shift.end)))
        .collect();
    WorkerDuties {
        worker,
        duties,
        interruptions,
    }
}

/// Named breaks and joined gaps of a block of shifts; `None` when a shift names none.
fn break_min(shifts: &[Shift], block: &DutyBlock, axis: &Axis) -> Option<i64> {
    let on_shift: i64 = block
        .shifts
        .iter()
        .map(|index| axis.minute(shifts[*index].end) - axis.minute(shifts[*index].start))
        .sum();
    let named: i64 = block
        .shifts
        .iter()
        .map(|index| shifts[*index].break_min.map(i64::from))
        .sum::<Option<i64>>()?;
    let joined_gaps = axis.minute(block.end) - axis.minute(block.start) - on_shift;
    Some(named + joined_gaps.max(0))
}

/// A gap inside a split duty: both parts start on one local date, the gap is short and the span is not too long.
fn is_pause(last: &Duty, part: (Minute, Minute), axis: &Axis, habits: &Habits) -> bool {
    axis.local(last.start).date_naive() == axis.local(part.0).date_naive()
        && part.0.hours_since(last.end) < habits.split_gap_h
        && part.1.hours_since(last.start) <= habits.split_span_h
}
