//! Clock vectors of users.md section 3.3, computed there with Python `zoneinfo`, tzdata 2025b.

use crate::rosters::read;
use acroshift::diagnostic::Code;

#[track_caller]
fn check(zone: &str, start: &str, end: &str, hours: f64, instants: Option<(&str, &str)>) {
    let read = read(&format!("worker,start,end\nA,{start},{end}\n"), zone);
    let roster = read
        .roster
        .unwrap_or_else(|| panic!("{:?}", read.diagnostics));
    let shift = &roster.shifts[0];
    let minutes = (shift.end - shift.start).num_minutes();
    let expected = format!("{:.0}", hours * 60.0).parse::<i64>().unwrap();
    assert_eq!(minutes, expected, "{zone} {start}");
    if let Some((from, to)) = instants {
        let text = |at: chrono::DateTime<chrono::Utc>| at.format("%d %H:%MZ").to_string();
        assert_eq!(
            (text(shift.start).as_str(), text(shift.end).as_str()),
            (from, to),
            "{zone}"
        );
    }
}

#[test]
fn nights_over_a_clock_change_keep_elapsed_hours_in_every_zone() {
    let night = |zone: &str, date: &str, next: &str, hours, instants| {
        check(
            zone,
            &format!("{date}T22:00"),
            &format!("{next}T06:00"),
            hours,
            instants,
        );
    };
    for zone in ["Europe/London", "Europe/Dublin"] {
        night(
            zone,
            "2026-03-28",
            "2026-03-29",
            7.0,
            Some(("28 22:00Z", "29 05:00Z")),
        );
        night(
            zone,
            "2026-10-24",
            "2026-10-25",
            9.0,
            Some(("24 21:00Z", "25 06:00Z")),
        );
    }
    night("Africa/Casablanca", "2026-02-14", "2026-02-15", 9.0, None);
    night("Africa/Casablanca", "2026-03-21", "2026-03-22", 7.0, None);
    night(
        "Australia/Lord_Howe",
        "2026-04-04",
        "2026-04-05",
        8.5,
        Some(("04 11:00Z", "04 19:30Z")),
    );
    night(
        "Australia/Lord_Howe",
        "2026-10-03",
        "2026-10-04",
        7.5,
        Some(("03 11:30Z", "03 19:00Z")),
    );
    night(
        "Pacific/Apia",
        "2011-12-29",
        "2011-12-31",
        8.0,
        Some(("30 08:00Z", "30 16:00Z")),
    );
    night("Asia/Kathmandu", "2026-07-01", "2026-07-02", 8.0, None);
    night("Asia/Kathmandu", "2026-12-01", "2026-12-02", 8.0, None);
    check(
        "America/New_York",
        "2026-03-07T23:00",
        "2026-03-08T07:00",
        7.0,
        None,
    );
    check(
        "America/New_York",
        "2026-10-31T23:00",
        "2026-11-01T07:00",
        9.0,
        None,
    );
}

#[test]
fn rests_over_a_clock_change_are_elapsed_hours() {
    let rest = |a: (&str, &str), b: (&str, &str)| {
        let csv = format!("worker,start,end\nA,{},{}\nA,{},{}\n", a.0, a.1, b.0, b.1);
        let report = crate::rosters::report(&csv, "Europe/London");
        (
            report.workers[0].windows[0].hours,
            report.workers[0]
                .exposure
                .iter()
                .find(|(name, ..)| *name == "quick_returns")
                .unwrap()
                .2,
        )
    };
    let spring = rest(
        ("2026-03-28T13:00", "2026-03-28T22:00"),
        ("2026-03-29T09:00", "2026-03-29T17:00"),
    );
    assert_eq!(spring, (10.0, Some(1.0)));
    let autumn = rest(
        ("2026-10-24T14:00", "2026-10-24T22:00"),
        ("2026-10-25T08:30", "2026-10-25T16:30"),
    );
    assert_eq!(autumn, (11.5, Some(0.0)));
}

#[test]
fn a_skipped_date_is_an_error_and_instants_around_it_are_right() {
    let read = read(
        "worker,start,end\nA,2011-12-30T08:00,2011-12-30T16:00\nA,2011-12-31T08:00,2011-12-31T16:00\n",
        "Pacific/Apia",
    );
    let skipped = read
        .diagnostics
        .iter()
        .find(|d| d.code == Code::SkippedDate)
        .unwrap();
    assert_eq!(skipped.origin.to_string(), "roster.csv:2:3 (start)");
    assert_eq!(read.roster.unwrap().shifts.len(), 1);
    // 2011-12-30 09:30Z is 23:30 on the 29th (-10), 10:00Z is 00:00 on the 31st (+14).
    check(
        "Pacific/Apia",
        "2011-12-29T23:30",
        "2011-12-31T00:30",
        1.0,
        Some(("30 09:30Z", "30 10:30Z")),
    );
}

#[test]
fn gaps_and_folds_are_read_as_rfc_5545_says_and_told() {
    // RFC 5545, 3.3.5: 2007-03-11 02:30 New York is 07:30Z; 2007-11-04 01:30 is 05:30Z, the first of two.
    let gap = read(
        "worker,start,end\nA,2007-03-11T02:30,2007-03-11T10:00\n",
        "America/New_York",
    );
    assert!(gap.diagnostics.iter().any(|d| d.code == Code::ClockGap));
    assert_eq!(
        gap.roster.unwrap().shifts[0]
            .start
            .format("%H:%MZ")
            .to_string(),
        "07:30Z"
    );
    let fold = read(
        "worker,start,end\nA,2007-11-04T01:30,2007-11-04T09:00\n",
        "America/New_York",
    );
    assert!(fold.diagnostics.iter().any(|d| d.code == Code::ClockFold));
    assert_eq!(
        fold.roster.unwrap().shifts[0]
            .start
            .format("%H:%MZ")
            .to_string(),
        "05:30Z"
    );
}

#[test]
fn hours_inside_night_windows_agree_with_the_edge_vectors() {
    // users.md 2.2: hours inside 23-06.
    let cases = [
        ("22:00", "06:00", 7.0, "night"),
        ("19:00", "07:00", 7.0, "night"),
        ("15:00", "01:30", 2.5, "evening"),
        ("15:00", "02:00", 3.0, "night"),
        ("03:00", "11:00", 3.0, "night"),
        ("03:30", "11:30", 2.5, "early"),
        ("04:00", "12:00", 2.0, "early"),
        ("23:00", "02:59", 3.98, "night"),
    ];
    for (start, end, night_h, class) in cases {
        let report = crate::rosters::report(
            &format!("worker,date,start,end\nA,2026-01-05,{start},{end}\n"),
            "UTC",
        );
        let shift = &report.workers[0].shifts[0];
        assert!(
            (shift.night_h - night_h).abs() < 0.005,
            "{start}: {}",
            shift.night_h
        );
        assert_eq!(shift.class, class, "{start}");
    }
}

/// Habits follow the clock: after a clock change a day worker is as displaced as one in a zone without changes.
#[test]
fn a_clock_change_alone_displaces_nobody() {
    let first = chrono::NaiveDate::from_ymd_opt(2026, 3, 9).unwrap();
    let rows: Vec<String> = (0..42)
        .filter(|day| day % 7 < 5)
        .map(|day| format!("A,{},08:00,16:00", first + chrono::Days::new(day)))
        .collect();
    let csv = format!("worker,date,start,end\n{}\n", rows.join("\n"));
    let last = |zone: &str| {
        let report = crate::rosters::report(&csv, zone);
        let windows = &report.lines[0].windows;
        windows[windows.len() - 1].cbtmin_displacement_h.all.median
    };
    let (london, utc) = (last("Europe/London"), last("UTC"));
    assert!((london - utc).abs() < 0.15, "London {london}, UTC {utc}");
}

#[test]
fn an_end_on_the_next_date_is_not_held_against_the_change_on_the_first() {
    // The clocks of London changed at 01:00 on the 29th; the duty ends at 01:30 on the 30th.
    let read = read(
        "worker,date,start,end\nA,2026-03-29,22:00,01:30\n",
        "Europe/London",
    );
    assert!(read.diagnostics.iter().all(|d| d.code != Code::ClockGap));
    let shift = &read.roster.unwrap().shifts[0];
    assert_eq!((shift.end - shift.start).num_minutes(), 210);
}

#[test]
fn a_zone_given_fills_rows_without_one_and_never_overrides_the_file() {
    let csv = "worker,start,end,zone\nA,2026-06-01T22:00,2026-06-02T06:00,America/New_York\n";
    let report = crate::rosters::report(csv, "Europe/London");
    assert_eq!(report.provenance.zone, "America/New_York");
    assert!((report.workers[0].shifts[0].night_h - 7.0).abs() < 1e-9);
}
