//! Definitions held against members made by hand.

use super::*;
use crate::physiology::{MelatoninMarkers, Member, ModelSets, QuiescentReference, SleepEpisode};

/// A member with the given `CBTmin`s after the remembered ones, and habitual `CBTmin` at 03:30.
fn track(seen: bool, cbtmins: &[f64]) -> MemberTrack {
    let member = Member {
        sees_morning_daylight: seen,
        ..Member::mean(&ModelSets::embedded().ensemble, 30.0)
    };
    let mut track = MemberTrack::habitual(member, 210.0 - 1440.0, REMEMBERED_DAYS);
    track.cbtmin_min.extend(cbtmins);
    track
}

/// A simulation of which only sleep, phase and the habitual quiescent interval (8 h before `CBTmin`, 4 h of them awake) matter.
fn simulation(tracks: Vec<MemberTrack>) -> Simulation {
    let day = CortisolDay {
        mean: 200.0,
        mesor: 200.0,
        amplitude: 150.0,
        acrophase_min: 600.0,
        peak: 400.0,
        peak_at: Minute(480),
        nadir: 50.0,
        nadir_at: Minute(0),
        quiescent: (Minute(-300), Minute(180)),
    };
    let reference = QuiescentReference {
        from_min: -480.0,
        to_min: 0.0,
        awake_min: 240.0,
        day,
    };
    Simulation {
        habitual: vec![reference; tracks.len()],
        tracks,
        days: Vec::new(),
        curve: Vec::new(),
        amplitude_floor: 0.4,
        melatonin: MelatoninMarkers {
            onset_before_cbtmin_min: 420.0,
            duration_min: 600.0,
        },
    }
}

#[test]
fn members_who_went_round_in_opposite_directions_agree_on_the_clock() {
    // 01:40 and 01:30 of the next day are ten minutes apart on the clock, not 23.8 h.
    let simulation = simulation(vec![
        track(true, &[100.0]),
        track(true, &[95.0]),
        track(true, &[1530.0]),
    ]);
    let cycle = cycle_of(&simulation, 6, None).unwrap().minute;
    assert!((cycle.p95 - cycle.p05) < 10.0, "{cycle:?}");
    assert!((cycle.median - 95.0).abs() < 5.0, "{cycle:?}");
}

#[test]
fn a_marker_that_few_members_have_reached_is_not_told() {
    let simulation = simulation(vec![
        track(true, &[100.0]),
        track(true, &[]),
        track(true, &[]),
    ]);
    assert_eq!(cycle_of(&simulation, 6, None), None);
}

#[test]
fn daylight_cases_far_apart_are_told_apart_and_near_ones_together() {
    let criteria = Criteria::embedded();
    let apart = simulation(vec![track(true, &[100.0]), track(false, &[190.0])]);
    let entries = cycles(&apart, &criteria);
    let cases: Vec<_> = entries.iter().map(|e| e.daylight_seen).collect();
    assert_eq!(cases, [Some(true), Some(false)]);
    let near = simulation(vec![track(true, &[100.0]), track(false, &[130.0])]);
    let entries = cycles(&near, &criteria);
    assert_eq!(entries.len(), 1);
    assert!((entries[0].minute.median - 115.0).abs() < 1e-6);
}

#[test]
fn a_later_clock_is_a_negative_displacement_and_sleep_after_it_a_positive_angle() {
    let mut later = track(true, &[210.0 + 120.0]);
    // Two hours later than on habitual days.
    assert!((later.displacement(later.cbtmin_before(Minute(900))).hours() - -2.0).abs() < 1e-9);
    // Habitual sleep lies half an hour before CBTmin; this one four hours after it.
    later.sleeps.push(SleepEpisode {
        from: Minute(480),
        to: Minute(660),
        cut: false,
    });
    let displaced = phase_displacement_h(&later, Minute(900)).unwrap();
    assert!((displaced - 4.5).abs() < 1e-9, "{displaced}");
    assert_eq!(phase_displacement_h(&later, Minute(4000)), None);
}

#[test]
fn hours_awake_in_the_quiescent_interval_are_told_against_habit() {
    // CBTmin at 03:30, so the interval is 19:30 to 03:30; the member sleeps from 02:30 on.
    let mut late = track(true, &[210.0]);
    late.sleeps.push(SleepEpisode {
        from: Minute(150),
        to: Minute(500),
        cut: false,
    });
    let simulation = simulation(vec![late]);
    // Seven hours awake instead of four.
    let excess = quiescent_awake_excess_h(&simulation, 0, Minute(600));
    assert!((excess - 3.0).abs() < 1e-9, "{excess}");
}
