//! The coupled sleep and pacemaker simulation against thirteen reference cases.
//!
//! Source: reference cases of the sleep mechanism (mean member, `hilaire2007`, default light), computed by a prototype in Python
//! and confirmed by a second one written from the rules alone.
//! Tolerance as suggested there: sleep times 2 min (undisturbed waking sits exactly on the threshold), `CBTmin` 0.005 h.

use acroshift::physiology::coupled::{CoupledModels, live, warm_up};
use acroshift::physiology::sleep::{SLEEP_GRID_MIN, SleepModel};
use acroshift::physiology::{Member, ModelSets, PacemakerName, coupled_models};
use acroshift::timeline::{
    CivilClock, CivilDay, DutySpan, HabitFile, Habits, MeasuredLight, Timeline,
};
use acroshift::units::{ClockHour, Minute, minutes_to_hours};
use chrono::{Days, NaiveDate};
use serde_json::Value;

const CASES: &str = include_str!("data/reference_cases.json");

/// `d2 08:00` in minutes since midnight of day 0.
fn minute(text: &str) -> i64 {
    let (day, clock) = text.split_once(' ').unwrap();
    let (hour, min) = clock.split_once(':').unwrap();
    let number = |part: &str| part.parse::<i64>().unwrap();
    number(&day[1..]) * 1440 + number(hour) * 60 + number(min)
}

fn timeline(duties: &[(i64, i64)]) -> Timeline {
    let last = duties.iter().map(|d| d.1).max().unwrap_or(0);
    let end = (last / 1440 + 4) * 1440;
    let clock = |at: i64| ClockHour::wrapping(minutes_to_hours(at));
    let date = NaiveDate::from_ymd_opt(2026, 1, 5).unwrap();
    let days = (-1..end / 1440)
        .map(|day| CivilDay {
            date: date + Days::new(u64::try_from(day + 1).unwrap()),
            start: Minute(day * 1440),
            end: Minute((day + 1) * 1440),
            sunrise: Minute(day * 1440 + 420),
            sunset: Minute(day * 1440 + 1140),
        })
        .collect();
    Timeline {
        duties: duties
            .iter()
            .map(|&(start, stop)| DutySpan {
                start: Minute(start),
                end: Minute(stop),
                start_clock: clock(start),
                end_clock: clock(stop),
                commute_min: None,
                light: None,
                way_light: [None; 2],
                stress: 1.0,
            })
            .collect(),
        days,
        clock: CivilClock::steady(),
        measured: MeasuredLight::default(),
        end: Minute(end),
        habits: Habits {
            personal_share: 0.13,
            personal_cap_h: 1.0,
            ..HabitFile::embedded().habits()
        },
    }
}

fn pair(value: &Value) -> (i64, i64) {
    (
        minute(value[0].as_str().unwrap()),
        minute(value[1].as_str().unwrap()),
    )
}

/// State and `CBTmin` of the mean member at noon after its habitual days, for every pacemaker.
#[test]
fn the_entry_state_agrees_with_the_reference() {
    let file: Value = serde_json::from_str(CASES).unwrap();
    let models = [
        ("hilaire2007", PacemakerName::Hilaire2007),
        ("forger1999(L-1999)", PacemakerName::Forger1999),
        ("jewett1999", PacemakerName::Jewett1999),
        ("hannay2019", PacemakerName::Hannay2019),
    ];
    for (label, name) in models {
        let sets = ModelSets::with_pacemaker(name);
        let member = Member::mean(&sets.ensemble, 30.0);
        let habits = HabitFile::embedded().habits();
        let warm = warm_up(&coupled_models(&sets), &[member], &habits);
        let facts = &file["facts"][label];
        let state = warm.state();
        let found = [state.first[0], state.second[0], state.n[0]];
        for (index, found) in found.iter().enumerate() {
            let expected = facts["state_noon"][index].as_f64().unwrap();
            assert!(
                (found - expected).abs() < 1e-6 * expected.abs().max(1.0),
                "{label}: {found}, expected {expected}"
            );
        }
        let cbtmin_h = warm.markers()[0].cbtmin_min / 60.0 + 24.0;
        let expected = facts["cbtmin_clock"].as_f64().unwrap();
        assert!(
            (cbtmin_h - expected).abs() < 1e-4,
            "{label}: {cbtmin_h}, expected {expected}"
        );
    }
}

#[test]
fn sleep_and_phase_of_every_reference_case_are_reproduced() {
    check_cases(SLEEP_GRID_MIN, 2);
}

#[track_caller]
fn check_cases(grid_min: i64, tolerance_min: i64) {
    let mut sets = ModelSets::embedded();
    // The constants with which the reference cases were computed.
    sets.sleep.process_c.amplitude.value = 0.065;
    sets.sleep.effort.lowering.value = 0.09;
    sets.sleep.effort.share_at_stake.value = 0.5;
    let models = CoupledModels {
        sleep: SleepModel::on_grid(&sets.sleep, grid_min),
        ..coupled_models(&sets)
    };
    let file: Value = serde_json::from_str(CASES).unwrap();
    let cases = file["cases"].as_object().unwrap();
    assert_eq!(cases.len(), 13);
    for (name, case) in cases {
        let member = Member {
            sees_morning_daylight: !name.contains("avoided"),
            ..Member::mean(&sets.ensemble, 30.0)
        };
        let duties: Vec<_> = case["duties"]
            .as_array()
            .unwrap()
            .iter()
            .map(pair)
            .collect();
        let timeline = timeline(&duties);
        let warm = warm_up(&models, &[member], &timeline.habits);
        let track = live(&models, &warm, &timeline).remove(0);
        check_sleeps(name, case, &track.sleeps, tolerance_min);
        let expected = case["cbtmin"].as_array().unwrap();
        // The track begins with remembered days; the list begins on day 0.
        let found: Vec<f64> = track
            .cbtmin_min
            .iter()
            .map(|minute| minute / 60.0)
            .filter(|hour| *hour > 0.0)
            .take(expected.len())
            .collect();
        assert_eq!(found.len(), expected.len(), "{name}");
        for (found, expected) in found.iter().zip(expected) {
            let expected = expected.as_f64().unwrap();
            assert!(
                (found - expected).abs() < 0.005,
                "{name}: CBTmin {found}, expected {expected}"
            );
        }
    }
}

#[track_caller]
fn check_sleeps(
    name: &str,
    case: &Value,
    sleeps: &[acroshift::physiology::SleepEpisode],
    tolerance_min: i64,
) {
    let expected: Vec<_> = case["sleeps"]
        .as_array()
        .unwrap()
        .iter()
        .map(pair)
        .collect();
    let first = expected[0].0;
    let last = expected[expected.len() - 1].1;
    let found: Vec<_> = sleeps
        .iter()
        .filter(|sleep| (first - 3..=last).contains(&sleep.from.0))
        .collect();
    assert_eq!(found.len(), expected.len(), "{name}: {found:?}");
    for ((from, to), sleep) in expected.iter().zip(found) {
        assert!(
            (sleep.from.0 - from).abs() <= tolerance_min
                && (sleep.to.0 - to).abs() <= tolerance_min,
            "{name}: slept {:?}-{:?}, expected {from}-{to}",
            sleep.from,
            sleep.to
        );
    }
}
