//! Laws that hold for any roster.

use crate::rosters::{read, report_with, screening};
use acroshift::Screening;
use proptest::prelude::*;
use std::fmt::Write;

/// A few duties of one worker: gap before and length, quarter hours.
fn duties() -> impl Strategy<Value = Vec<(i64, i64)>> {
    prop::collection::vec((20_i64..160, 8_i64..60), 2..7)
}

fn small() -> Screening {
    Screening {
        members: 8,
        ..screening(&["eu-wtd", "adv-nordic"])
    }
}

/// A roster in UTC whose first duty begins the given number of days after 5 January 2026.
fn csv(duties: &[(i64, i64)], days_later: i64, reversed: bool) -> String {
    let start = chrono::DateTime::parse_from_rfc3339("2026-01-05T06:00:00Z").unwrap();
    let mut at = start + chrono::Duration::days(days_later);
    let mut rows: Vec<String> = Vec::new();
    for (gap, length) in duties {
        let from = at + chrono::Duration::minutes(15 * gap);
        let to = from + chrono::Duration::minutes(15 * length);
        let mut row = String::new();
        let text =
            |t: chrono::DateTime<chrono::FixedOffset>| t.format("%Y-%m-%dT%H:%M").to_string();
        write!(row, "P,{},{}", text(from), text(to)).unwrap();
        rows.push(row);
        at = to;
    }
    if reversed {
        rows.reverse();
    }
    format!("worker,start,end\n{}\n", rows.join("\n"))
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 12, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn prop_row_order_does_not_matter(duties in duties()) {
        let forward = report_with(&csv(&duties, 0, false), "UTC", &small());
        let backward = report_with(&csv(&duties, 0, true), "UTC", &small());
        prop_assert_eq!(&forward.lines, &backward.lines);
        prop_assert_eq!(&forward.workers[0].windows, &backward.workers[0].windows);
    }

    #[test]
    fn prop_a_roster_moved_by_a_day_moves_the_result(duties in duties()) {
        let here = report_with(&csv(&duties, 0, false), "UTC", &small());
        let there = report_with(&csv(&duties, 1, false), "UTC", &small());
        let numbers = |report: &acroshift::report::ScreenReport| -> Vec<String> {
            report.lines[0].windows.iter().map(|w| {
                format!("{:?} {:?} {} {} {:?}", w.main_sleep_h, w.total_sleep_h, w.k24, w.k48, w.cbtmin_displacement_h)
            }).collect()
        };
        prop_assert_eq!(numbers(&here), numbers(&there));
        prop_assert_eq!(here.summary, there.summary);
    }

    #[test]
    fn prop_sleep_lies_only_inside_windows_and_phases_stay_in_range(duties in duties()) {
        let report = report_with(&csv(&duties, 0, false), "UTC", &small());
        for window in &report.lines[0].windows {
            prop_assert!(window.total_sleep_h.p95 <= window.hours);
            prop_assert!(window.main_sleep_h.median <= window.total_sleep_h.median);
            prop_assert!((0.0..=1.0).contains(&window.k24) && (0.0..=1.0).contains(&window.k48));
            prop_assert!((-12.0..=12.0).contains(&window.cbtmin_displacement_h.all.median));
        }
        for day in &report.lines[0].days {
            prop_assert!(day.nadir.median > 0.0 && day.nadir.median < day.peak.median);
            prop_assert!(day.cbtmin.len() <= 3);
        }
    }

    #[test]
    fn prop_any_bytes_give_diagnostics_and_no_panic(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        let input = acroshift::intake::Input { name: "any.csv", bytes: &bytes };
        let reading = acroshift::intake::Reading { zone: Some(chrono_tz::UTC), ..acroshift::intake::Reading::default() };
        let read = acroshift::intake::read(&[input], &reading);
        prop_assert!(read.roster.is_some() || acroshift::diagnostic::has_errors(&read.diagnostics));
    }

    #[test]
    fn prop_any_cells_are_read_or_told(cells in prop::collection::vec("[ -~]{0,20}", 6)) {
        let text = format!("worker,start,end\n{},{},{}\n{},{},{}\n", cells[0], cells[1], cells[2], cells[3], cells[4], cells[5]);
        let intake = read(&text, "Europe/London");
        prop_assert!(intake.roster.is_some() || acroshift::diagnostic::has_errors(&intake.diagnostics));
    }
}
