//! Rules against worked examples of rules.md sections 1.3 to 1.5 and users.md 2.

use crate::rosters::{report_with, screening};
use acroshift::Screening;
use acroshift::assessment::{Attention, WindowClass};
use acroshift::report::{FindingRow, ScreenReport};

fn two(first: (&str, &str), second: (&str, &str), packs: &[&str]) -> ScreenReport {
    let csv = format!(
        "worker,start,end\nA,{},{}\nA,{},{}\n",
        first.0, first.1, second.0, second.1
    );
    report_with(&csv, "UTC", &screening(packs))
}

fn finding<'a>(report: &'a ScreenReport, code: &str) -> Option<&'a FindingRow> {
    report.findings.iter().find(|f| f.code == code)
}

/// rules.md 1.3: the duty-start form of 11 h, with its test vectors.
#[test]
fn daily_rest_is_measured_in_the_24_hours_from_duty_start() {
    let met = two(
        ("2026-01-05T08:00", "2026-01-05T20:00"),
        ("2026-01-06T07:00", "2026-01-06T15:00"),
        &["uk-wtr"],
    );
    assert_eq!(met.summary.priority, 0);
    let short = two(
        ("2026-01-05T07:00", "2026-01-05T21:00"),
        ("2026-01-06T08:00", "2026-01-06T16:00"),
        &["uk-wtr"],
    );
    let found = finding(&short, "compressed-rest").unwrap();
    assert_eq!((found.measured, found.limit), (Some(10.0), Some(11.0)));
    assert_eq!(found.attention, Attention::Priority);
    assert!(
        found
            .message
            .contains("11 h 00 between duties, of which 10 h 00"),
        "{}",
        found.message
    );
}

#[test]
fn at_exactly_eleven_hours_nothing_is_compressed() {
    let report = two(
        ("2026-01-05T08:00", "2026-01-05T20:00"),
        ("2026-01-06T07:00", "2026-01-06T15:00"),
        &["adv-nordic"],
    );
    assert_eq!(report.workers[0].windows[0].class, WindowClass::Unmarked);
    let minute_less = two(
        ("2026-01-05T08:00", "2026-01-05T20:00"),
        ("2026-01-06T06:59", "2026-01-06T15:00"),
        &["adv-nordic"],
    );
    assert_eq!(
        minute_less.workers[0].windows[0].class,
        WindowClass::Compressed
    );
}

/// rules.md 1.1: without a numeric floor only a derogation that the site declares softens a law.
#[test]
fn a_declared_derogation_turns_a_breach_into_review_with_compensatory_rest() {
    let csv = "worker,start,end\nA,2026-01-05T14:00,2026-01-05T22:30\nA,2026-01-06T07:00,2026-01-06T15:00\n";
    let mut declared: Screening = screening(&["uk-wtr"]);
    declared
        .site
        .derogations
        .insert("reg22-shift-changeover".to_owned());
    let report = report_with(csv, "UTC", &declared);
    let found = finding(&report, "compressed-rest").unwrap();
    assert_eq!(found.attention, Attention::Review);
    assert!(
        found.message.contains("compensatory rest is due"),
        "{}",
        found.message
    );
    let plain = report_with(csv, "UTC", &screening(&["uk-wtr"]));
    assert_eq!(
        finding(&plain, "compressed-rest").unwrap().attention,
        Attention::Priority
    );
}

/// rules.md 1.5: off Monday 07:00 to Wednesday 07:00 holds two local nights, to Wednesday 05:00 only one.
#[test]
fn local_nights_after_nights_are_counted_whole() {
    let after = |start: &str, end: &str| {
        two(
            ("2026-01-04T22:00", "2026-01-05T07:00"),
            (start, end),
            &["adv-hse"],
        )
    };
    assert!(
        finding(
            &after("2026-01-07T07:00", "2026-01-07T15:00"),
            "rest-after-nights"
        )
        .is_none()
    );
    let report = after("2026-01-07T05:00", "2026-01-07T13:00");
    let found = finding(&report, "rest-after-nights").unwrap();
    assert_eq!((found.measured, found.limit), (Some(1.0), Some(2.0)));
    assert_eq!(found.attention, Attention::Review);
}

#[test]
fn nights_in_a_row_end_at_a_day_off() {
    let nights = |dates: &[u32]| {
        let rows: Vec<String> = dates
            .iter()
            .map(|day| format!("A,2026-01-{day:02},22:00,06:00"))
            .collect();
        let csv = format!("worker,date,start,end\n{}\n", rows.join("\n"));
        report_with(&csv, "UTC", &screening(&["adv-nordic"]))
    };
    assert!(finding(&nights(&[5, 6, 7, 9, 10, 11]), "run-of-nights").is_none());
    let found = nights(&[5, 6, 7, 8]);
    let found = finding(&found, "run-of-nights").unwrap();
    assert_eq!((found.measured, found.limit), (Some(4.0), Some(3.0)));
    assert_eq!(found.rules, ["garde-nights", "wow-nights"]);
    assert_eq!((found.kind, found.attention), ("advice", Attention::Review));
}

/// rules.md 1.4: an average on a short roster is not judged and shows its value so far.
#[test]
fn averages_on_four_weeks_are_not_judged_with_the_value_so_far() {
    let csv = crate::rosters::pattern("OOOOO..", 4, &[('O', "08:00", "16:00")]);
    let report = report_with(&csv, "UTC", &screening(&["uk-wtr"]));
    let week = report
        .findings
        .iter()
        .find(|f| f.rules == ["uk-week"])
        .unwrap();
    assert_eq!(week.kind, "not-judged");
    // The last date with a shift is a Friday: 26 dates, 160 h.
    assert!(
        week.message
            .contains("4 of 17 weeks seen: 43.1 h a week so far"),
        "{}",
        week.message
    );
}

/// rules.md 1.4: with 17 weeks and no leave 8 h a day is 48 h a week.
#[test]
fn averages_over_a_whole_reference_period_are_judged() {
    let long: [(char, &str, &str); 1] = [('O', "08:00", "18:00")];
    let fifty = crate::rosters::pattern("OOOOO.O", 17, &long);
    let report = report_with(&fifty, "UTC", &screening(&["uk-wtr"]));
    let found = report
        .findings
        .iter()
        .find(|f| f.rules == ["uk-week"])
        .unwrap();
    assert_eq!(
        (found.measured, found.limit, found.kind),
        (Some(60.0), Some(48.0), "law")
    );
    let forty = crate::rosters::pattern("OOOOO..", 18, &[('O', "08:00", "16:00")]);
    let report = report_with(&forty, "UTC", &screening(&["uk-wtr"]));
    assert!(report.findings.iter().all(|f| f.rules != ["uk-week"]));
}

/// rules.md 1.3: an 08:00-16:00 worker over 17 weeks gets no law finding, a 07:00-19:00 four-on-four-off worker none from daily rest.
#[test]
fn ordinary_workers_get_no_law_finding() {
    let office = crate::rosters::pattern("OOOOO..", 17, &[('O', "08:00", "16:00")]);
    for pack in ["uk-wtr", "eu-wtd"] {
        let report = report_with(&office, "UTC", &screening(&[pack]));
        assert!(report.findings.iter().all(|f| f.kind != "law"), "{pack}");
    }
    let four = crate::rosters::pattern("DDDD....", 8, &[('D', "07:00", "19:00")]);
    for pack in ["uk-wtr", "eu-wtd"] {
        let report = report_with(&four, "UTC", &screening(&[pack]));
        assert!(report.findings.iter().all(|f| f.kind != "law"), "{pack}");
    }
}

/// UK reg 11: 24 h in each 7 days, or 48 h or twice 24 h in 14 days: one of them is enough.
#[test]
fn weekly_rest_is_met_by_any_of_its_forms() {
    let codes = [('O', "08:00", "16:00")];
    // Twelve days of work, two off: no 24 h in the first week, 64 h in the fortnight.
    let twelve = crate::rosters::pattern("OOOOOOOOOOOO..", 4, &codes);
    let report = report_with(&twelve, "UTC", &screening(&["uk-wtr"]));
    assert!(report.findings.iter().all(|f| f.code != "period-limit"));
    let never = crate::rosters::pattern("O", 4, &codes);
    let report = report_with(&never, "UTC", &screening(&["uk-wtr"]));
    let found: Vec<_> = report
        .findings
        .iter()
        .filter(|f| f.code == "period-limit")
        .collect();
    assert_eq!(found.len(), 1, "one finding for one cause");
    assert_eq!(found[0].attention, Attention::Priority);
    assert_eq!(
        found[0].rules,
        [
            "uk-weekly-rest",
            "uk-weekly-rest-14d",
            "uk-weekly-rest-2x24"
        ]
    );
}

#[test]
fn pauses_of_a_split_duty_are_no_windows() {
    let csv = "worker,start,end\nA,2026-01-05T06:00,2026-01-05T10:00\nA,2026-01-05T14:00,2026-01-05T18:00\nA,2026-01-06T08:00,2026-01-06T16:00\n";
    let report = report_with(csv, "UTC", &screening(&["eu-wtd"]));
    let hours: Vec<f64> = report.workers[0].windows.iter().map(|w| w.hours).collect();
    assert_eq!(hours, [14.0]);
}

#[test]
fn gaps_of_fifteen_minutes_are_joined_and_long_windows_only_listed() {
    let csv = "worker,start,end\nA,2026-01-05T06:00,2026-01-05T10:00\nA,2026-01-05T10:15,2026-01-05T14:00\nA,2026-01-14T08:00,2026-01-14T16:00\n";
    let report = report_with(csv, "UTC", &screening(&["eu-wtd"]));
    assert_eq!(report.workers[0].windows.len(), 1);
    assert_eq!(report.workers[0].windows[0].class, WindowClass::Listed);
    assert_eq!(report.summary.windows, 0);
}

#[test]
fn findings_of_the_directive_defer_to_national_law() {
    let report = two(
        ("2026-01-05T14:00", "2026-01-05T22:00"),
        ("2026-01-06T06:00", "2026-01-06T14:00"),
        &["eu-wtd"],
    );
    let found = finding(&report, "compressed-rest").unwrap();
    assert!(
        found
            .message
            .contains("EU minimum standard; the national law that implements it decides"),
        "{}",
        found.message
    );
}

/// A period that the roster does not hold completely accuses nobody, whichever form of weekly rest is asked.
#[test]
fn weekly_rest_on_a_short_roster_is_not_judged() {
    let codes = [('O', "08:00", "16:00")];
    for pack in ["uk-wtr", "eu-wtd"] {
        let seven = crate::rosters::pattern("O", 1, &codes);
        let report = report_with(&seven, "UTC", &screening(&[pack]));
        assert!(report.findings.iter().all(|f| f.kind != "law"), "{pack}");
        let weekly: Vec<_> = report
            .findings
            .iter()
            .filter(|f| f.kind == "not-judged" && f.rules[0].contains("weekly-rest"))
            .collect();
        assert!(weekly.len() >= 2, "{pack}: {weekly:?}");
    }
}

/// 47.5 h a week from Monday to Friday is 47.5 h, however the reference period lies.
#[test]
fn averages_do_not_depend_on_where_the_period_ends() {
    let codes = [('O', "08:00", "17:30")];
    let csv = crate::rosters::pattern("OOOOO..", 18, &codes);
    for pack in ["uk-wtr", "eu-wtd"] {
        let report = report_with(&csv, "UTC", &screening(&[pack]));
        assert!(
            report.findings.iter().all(|f| f.kind != "law"),
            "{pack}: {:?}",
            report.findings
        );
    }
}

/// An advice that is not met and sleep that is short are two things: the advice never reaches priority through the sleep.
#[test]
fn short_sleep_does_not_lift_a_softer_advice() {
    let mut nights = screening(&["adv-review"]);
    nights.site.commute_min = Some(185.0);
    let csv = crate::rosters::pattern(
        "DDD....NNNN...",
        4,
        &[('D', "07:00", "19:00"), ('N', "19:00", "07:00")],
    );
    let report = report_with(&csv, "UTC", &nights);
    let advice: Vec<_> = report
        .findings
        .iter()
        .filter(|f| f.kind == "advice")
        .collect();
    assert!(!advice.is_empty());
    assert!(
        advice.iter().all(|f| f.attention == Attention::Note),
        "{advice:?}"
    );
    let sleep = finding(&report, "compressed-sleep").unwrap();
    assert_eq!(
        (sleep.kind, sleep.attention, &sleep.worker),
        ("model", Attention::Review, &None)
    );
}

/// With advice alone the 11-h criterion is what is shown, in hours, whatever the order of the packs.
#[test]
fn a_gap_below_eleven_hours_is_measured_against_eleven_hours() {
    for packs in [
        &["adv-hse"][..],
        &["adv-review"],
        &["adv-review", "adv-nordic"],
    ] {
        let report = two(
            ("2026-01-05T14:00", "2026-01-05T22:00"),
            ("2026-01-06T06:00", "2026-01-06T14:00"),
            packs,
        );
        let found = finding(&report, "compressed-rest").unwrap();
        assert_eq!(
            (found.measured, found.limit, found.unit.as_str()),
            (Some(8.0), Some(11.0), "h")
        );
        assert_eq!(found.attention, Attention::Review, "8 h is not under 8 h");
    }
}

/// UK reg 12: work over 6 h; a pause of a split duty is a break.
#[test]
fn breaks_count_pauses_and_the_limit_is_on_work() {
    let breaks = |rows: &str| {
        let csv = format!("worker,start,end,break_min\n{rows}");
        let report = report_with(&csv, "UTC", &screening(&["uk-wtr"]));
        report.findings.iter().any(|f| f.code == "break-length")
    };
    assert!(breaks("A,2026-01-05T08:00,2026-01-05T16:00,10\n"));
    assert!(!breaks("A,2026-01-05T08:00,2026-01-05T16:00,20\n"));
    assert!(!breaks(
        "A,2026-01-05T08:00,2026-01-05T12:00,0\nA,2026-01-05T13:00,2026-01-05T17:00,0\n"
    ));
    assert!(!breaks("A,2026-01-05T06:00,2026-01-05T12:15,15\n"));
}

/// A duty of 16 h leaves at most 8 h of its 24: judged even when nothing is known of what follows.
#[test]
fn a_last_duty_too_long_for_its_daily_rest_is_found() {
    let csv = "worker,start,end\nA,2026-01-05T07:00,2026-01-05T23:00\n";
    let report = report_with(csv, "UTC", &screening(&["uk-wtr"]));
    let found = report.findings.iter().find(|f| f.kind == "law").unwrap();
    assert_eq!((found.measured, found.limit), (Some(8.0), Some(11.0)));
}

/// A worker who joins late is not averaged over weeks before the first duty.
#[test]
fn averages_of_joiners_begin_with_them() {
    let office = crate::rosters::pattern("OOOOO..", 18, &[('O', "08:00", "16:00")]);
    let late: Vec<String> = office
        .lines()
        .skip(1)
        .skip(14 * 5)
        .map(|row| row.replace('P', "Q").replace("16:00", "20:00"))
        .collect();
    let report = report_with(
        &format!("{office}{}\n", late.join("\n")),
        "UTC",
        &screening(&["uk-wtr"]),
    );
    let open = report
        .findings
        .iter()
        .find(|f| f.rules == ["uk-week"])
        .unwrap();
    assert_eq!(open.kind, "not-judged");
    assert!(
        open.message.contains("of 17 weeks seen"),
        "{}",
        open.message
    );
}

/// One worker's lost row takes nothing from the line that others share.
#[test]
fn findings_of_a_line_do_not_depend_on_who_comes_first() {
    let nights = |name: &str| {
        crate::rosters::pattern(
            "DDD....NNNN...",
            4,
            &[('D', "07:00", "19:00"), ('N', "19:00", "07:00")],
        )
        .lines()
        .skip(1)
        .map(|row| row.replacen('P', name, 1) + "\n")
        .collect::<Vec<_>>()
        .concat()
    };
    let lines = |broken: &str| {
        let csv = format!(
            "worker,date,start,end\n{}{}{broken},2026-01-20,soon,07:00\n",
            nights("A"),
            nights("B")
        );
        let mut far = screening(&["eu-wtd"]);
        far.site.commute_min = Some(185.0);
        let report = report_with(&csv, "UTC", &far);
        report
            .findings
            .iter()
            .filter(|f| f.kind == "model")
            .map(|f| f.message.clone())
            .collect::<Vec<_>>()
    };
    assert_eq!(lines("A"), lines("B"));
    assert!(!lines("A").is_empty());
}
