//! One person's day on a duty line: where is the person, and when is sleep possible?
//!
//! # Rules
//!
//! ```text
//! gap      = next duty start - this duty end           (personal time = its cap where there is no neighbour duty)
//! personal = min(cap, share * max(0, gap - 2 commute))
//! home     = duty end + commute + personal             earliest sleep after the duty
//! alarm    = duty start - commute - personal           latest waking before the duty
//! ```

use super::{DutySpan, Timeline};
use crate::units::{Lux, Minute};
use std::collections::BTreeSet;

/// Where the person is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Place {
    /// On duty; the number is the place of the duty in the timeline.
    Duty(usize),
    /// On the way to a duty (the number is its place in the timeline) or home from it.
    Way {
        /// Which duty.
        duty: usize,
        /// Home from it?
        home: bool,
    },
    /// At home.
    Home,
}

/// A stretch of elapsed time in which nothing changes but sleep.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Segment {
    /// First minute.
    pub from: Minute,
    /// First minute after it.
    pub to: Minute,
    /// Where the person is.
    pub place: Place,
    /// Is it light outdoors?
    pub daylight: bool,
    /// Light at the eye, where it was measured.
    pub measured: Option<Lux>,
    /// Sleep opportunity: off duty, home, and past personal time.
    pub sleep_possible: bool,
    /// Latest waking before the next duty, if there is one.
    pub alarm: Option<Minute>,
    /// End of the night duty on whose way home this stretch may lie: a duty that ended 04-12 and began at or after 16 or before 02.
    pub after_night_duty: Option<Minute>,
}

/// The segments of a person with the given commute, from `start` to the end of the timeline.
///
/// `on_grid` gives the first minute at or after a decimal one at which a person's own times take effect; duties keep their minutes.
pub fn segments(
    timeline: &Timeline,
    commute_min: f64,
    start: Minute,
    on_grid: impl Fn(f64) -> Minute,
) -> Vec<Segment> {
    let around: Vec<Around> = (0..timeline.duties.len())
        .map(|index| Around::of(timeline, index, commute_min, &on_grid))
        .collect();
    let edges = edges(timeline, &around, start, &on_grid);
    edges
        .iter()
        .zip(edges.iter().skip(1))
        .map(|(&from, &to)| segment(timeline, &around, from, to))
        .collect()
}

/// Times around one duty, rounded up to the minute of the grid at which they take effect.
#[derive(Debug, Clone, Copy)]
struct Around {
    leave_home: Minute,
    arrive_home: Minute,
    sleep_from: Minute,
    alarm: Minute,
}

impl Around {
    fn of(
        timeline: &Timeline,
        index: usize,
        commute_min: f64,
        on_grid: impl Fn(f64) -> Minute,
    ) -> Self {
        let duty = &timeline.duties[index];
        let before = index
            .checked_sub(1)
            .map(|earlier| duty.start - timeline.duties[earlier].end);
        let after = timeline
            .duties
            .get(index + 1)
            .map(|next| next.start - duty.end);
        let commute_min = duty.commute_min.unwrap_or(commute_min);
        let personal_before = personal_min(timeline, before, commute_min);
        let personal_after = personal_min(timeline, after, commute_min);
        Self {
            leave_home: on_grid(duty.start.as_f64() - commute_min - 0.5),
            arrive_home: on_grid(duty.end.as_f64() + commute_min - 0.5),
            sleep_from: on_grid(duty.end.as_f64() + commute_min + personal_after),
            alarm: on_grid(duty.start.as_f64() - commute_min - personal_before),
        }
    }
}

#[expect(
    clippy::cast_precision_loss,
    reason = "a gap has far fewer than 2^53 minutes"
)]
fn personal_min(timeline: &Timeline, gap: Option<i64>, commute_min: f64) -> f64 {
    let cap = timeline.habits.personal_cap_h * 60.0;
    match gap {
        None => cap,
        Some(gap) => {
            let at_home = (gap as f64 - 2.0 * commute_min).max(0.0);
            cap.min(timeline.habits.personal_share * at_home)
        }
    }
}

fn edges(
    timeline: &Timeline,
    around: &[Around],
    start: Minute,
    on_grid: impl Fn(f64) -> Minute,
) -> Vec<Minute> {
    let mut edges = BTreeSet::from([start, timeline.end]);
    for (duty, times) in timeline.duties.iter().zip(around) {
        edges.extend([
            duty.start,
            duty.end,
            times.leave_home,
            times.arrive_home,
            times.sleep_from,
            times.alarm,
        ]);
    }
    for day in &timeline.days {
        edges.extend([day.sunrise, day.sunset].map(|edge| on_grid(edge.as_f64())));
    }
    edges.extend(timeline.clock.changes());
    edges.extend(timeline.measured.edges());
    edges
        .into_iter()
        .filter(|edge| (start..=timeline.end).contains(edge))
        .collect()
}

fn segment(timeline: &Timeline, around: &[Around], from: Minute, to: Minute) -> Segment {
    // Duties that ended at or before `from`; the next one, if any, is running or ahead.
    let next = timeline.duties.partition_point(|duty| duty.end <= from);
    let previous = next.checked_sub(1);
    let on_duty = timeline
        .duties
        .get(next)
        .is_some_and(|duty| duty.start <= from);
    let leaving = around
        .get(next)
        .is_some_and(|times| times.leave_home <= from);
    let arriving = previous.is_some_and(|index| from < around[index].arrive_home);
    let place = if on_duty {
        Place::Duty(next)
    } else if leaving {
        Place::Way {
            duty: next,
            home: false,
        }
    } else if let Some(duty) = previous.filter(|_| arriving) {
        Place::Way { duty, home: true }
    } else {
        Place::Home
    };
    let alarm = around.get(next).map(|times| times.alarm);
    let home_again = previous.is_none_or(|index| around[index].sleep_from <= from);
    Segment {
        from,
        to,
        place,
        daylight: timeline.daylight_at(from),
        measured: timeline.measured.at(from),
        sleep_possible: !on_duty && home_again && alarm.is_none_or(|alarm| from < alarm),
        alarm,
        after_night_duty: previous
            .map(|index| &timeline.duties[index])
            .filter(|duty| ends_a_night(duty))
            .map(|duty| duty.end),
    }
}

/// A duty after which morning light may be kept out: it ended 04-12 and began at or after 16 or before 02 (clock hours, own choice, no source).
fn ends_a_night(duty: &DutySpan) -> bool {
    let (start, end) = (duty.start_clock.get(), duty.end_clock.get());
    (4.0..12.0).contains(&end) && !(2.0..16.0).contains(&start)
}
