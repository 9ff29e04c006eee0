//! Cortisol samples in biological time: test persons of known rosters, and the command line of `sample`.
//!
//! Published: peak of serum cortisol 15.5 (11.7 to 20.6) ug/dL, that is 323 to 568 nmol/L (Debono 2009).

use crate::rosters::{read, screening};
use crate::scratch::{demo, messages, results, run};
use acroshift::biological_time::{NotPlaced, Placed, Stated, Timing};
use acroshift::intake::site;
use acroshift::samples::Matrix;
use acroshift::{SampleQuestion, SampleRefusal, Screening, sample};
use chrono::{Days, NaiveDate, NaiveDateTime};
use std::fmt::Write;

/// One worker; a letter per day from Monday 5 January 2026: D 08-16, N 22-06, L 18-06, anything else is free.
fn roster(letters: &str) -> String {
    let mut csv = String::from("worker,date,start,end\n");
    for (day, letter) in (0..).zip(letters.chars()) {
        let date = NaiveDate::from_ymd_opt(2026, 1, 5).unwrap() + Days::new(day);
        let hours = match letter {
            'D' => "08:00,16:00",
            'N' => "22:00,06:00",
            'L' => "18:00,06:00",
            _ => continue,
        };
        writeln!(csv, "P,{date},{hours}").unwrap();
    }
    csv
}

/// The instant of an hour on a day of the roster, 0 for its first.
fn at(day: u64, hour: u32, minute: u32) -> NaiveDateTime {
    let date = NaiveDate::from_ymd_opt(2026, 1, 5).unwrap() + Days::new(day);
    date.and_hms_opt(hour, minute, 0).unwrap()
}

fn ask(letters: &str, question: &SampleQuestion, site_file: &str) -> Result<Placed, SampleRefusal> {
    let read = read(&roster(letters), "UTC");
    let screening = Screening {
        site: site::read(site_file).unwrap(),
        members: 64,
        ..screening(&[])
    };
    sample(&read.roster.unwrap(), &screening, question).map(|(placed, _)| placed)
}

fn question(at: NaiveDateTime, matrix: Matrix) -> SampleQuestion {
    SampleQuestion {
        worker: "P".to_owned(),
        at,
        matrix,
        stated: None,
        next: false,
    }
}

/// Two working weeks, then free days up to a last duty.
const DAYS: &str = "DDDDD..DDDDD..DDDDD";

#[test]
fn the_day_worker_s_band_holds_the_published_range_and_is_never_narrow() {
    // A free Sunday in the second half.
    let nine = ask(DAYS, &question(at(13, 9, 0), Matrix::Serum), "").unwrap();
    assert!(
        nine.band.p05 <= 280.0 && nine.band.p95 >= 550.0,
        "{:?}",
        nine.band
    );
    assert_eq!(nine.standing.timing, Timing::Inside);
    let mut peak = nine.band;
    for hour in 0..24 {
        let placed = ask(DAYS, &question(at(12, hour, 0), Matrix::Serum), "").unwrap();
        let band = placed.band;
        assert!(
            band.p05 <= 0.75 * band.median && band.p95 >= 1.33 * band.median,
            "{hour} h: {band:?}"
        );
        if band.median > peak.median {
            peak = band;
        }
    }
    assert!(peak.p05 <= 323.0 && peak.p95 >= 568.0, "{peak:?}");
}

#[test]
fn a_worker_after_one_night_is_not_comparable() {
    let letters = "DDDDD..DDDN...DD";
    // 09:00 after the night that began on Thursday of the second week.
    let placed = ask(letters, &question(at(11, 9, 0), Matrix::Serum), "").unwrap();
    assert_eq!(placed.standing.nights_before, 1);
    assert!(!placed.standing.comparable);
    // Four days later, on a free morning, it is again.
    let placed = ask(
        "DDDDD..DDDN....DD",
        &question(at(14, 9, 0), Matrix::Serum),
        "",
    )
    .unwrap();
    assert_eq!(placed.standing.nights_before, 0);
    assert!(placed.standing.comparable, "{:?}", placed.standing);
}

#[test]
fn a_stated_clock_moves_the_band_as_the_reference_scenario_says() {
    let stated = |hour| SampleQuestion {
        stated: Some(Stated {
            cbtmin_h: 13.0,
            sleep_h: (8.0, 16.0),
        }),
        ..question(at(12, hour, 0), Matrix::Serum)
    };
    // S3: the day worker nine hours later: 59.3 at 09:00 (00:00 of S0), 396.6 at 18:00 (09:00 of S0).
    let morning = ask(DAYS, &stated(9), "").unwrap();
    assert!(
        (morning.band.median - 59.3).abs() < 3.0,
        "{:?}",
        morning.band
    );
    assert_eq!(morning.standing.timing, Timing::Outside);
    // A day worker's at that hour is far higher: the value alone would read as low.
    assert!(morning.day_worker.median > 5.0 * morning.band.median);
    let evening = ask(DAYS, &stated(18), "").unwrap();
    assert!(
        (evening.band.median - 396.6).abs() < 6.0,
        "{:?}",
        evening.band
    );
    assert_eq!(evening.standing.timing, Timing::Inside);
    assert!(evening.standing.comparable);
    assert!((evening.standing.since_waking_h.median - 2.0).abs() < 0.05);
    // Half an hour after waking the band is widened.
    let near = SampleQuestion {
        at: at(12, 16, 30),
        ..stated(16)
    };
    assert!(ask(DAYS, &near, "").unwrap().near_waking);
}

#[test]
fn fourteen_long_nights_without_daylight_put_the_morning_outside() {
    let letters = "DDDDD...LLLLLLLLLLLLLL....";
    let site = "morning_daylight = false\ntask_light_lux = 500";
    let placed = ask(letters, &question(at(22, 9, 0), Matrix::Serum), site).unwrap();
    assert_eq!(
        placed.standing.timing,
        Timing::Outside,
        "{:?}",
        placed.standing
    );
    assert!(!placed.standing.comparable);
    assert!(placed.band.median < 0.7 * placed.day_worker.median);
}

#[test]
fn a_sample_beyond_the_roster_is_refused_even_with_a_stated_clock() {
    let stated = |day, hour| SampleQuestion {
        stated: Some(Stated {
            cbtmin_h: 4.0,
            sleep_h: (23.0, 7.0),
        }),
        ..question(at(day, hour, 0), Matrix::Serum)
    };
    // The last day duty is that of day 18.
    assert!(ask(DAYS, &stated(18, 23), "").is_ok());
    for day in [19, 60] {
        let beyond = ask(DAYS, &stated(day, 9), "");
        assert!(
            matches!(
                beyond,
                Err(SampleRefusal::NotPlaced(NotPlaced::OutsideRoster))
            ),
            "{beyond:?}"
        );
    }
}

#[test]
fn a_stated_clock_keeps_local_hours_over_the_change_to_summer_time() {
    // Sunday 29 March 2026, 01:00 UTC: clocks of London go forward.
    let mut csv = String::from("worker,date,start,end\n");
    for day in 20..=31 {
        writeln!(csv, "P,2026-03-{day},08:00,16:00").unwrap();
    }
    let roster = read(&csv, "Europe/London").roster.unwrap();
    let standing = |day: u32| {
        let question = SampleQuestion {
            stated: Some(Stated {
                cbtmin_h: 4.0,
                sleep_h: (23.0, 7.0),
            }),
            ..question(
                NaiveDate::from_ymd_opt(2026, 3, day)
                    .unwrap()
                    .and_hms_opt(9, 0, 0)
                    .unwrap(),
                Matrix::Serum,
            )
        };
        let (placed, _) = sample(&roster, &screening(&[]), &question).unwrap();
        placed.standing
    };
    for day in [27, 30] {
        let standing = standing(day);
        assert!((standing.since_waking_h.median - 2.0).abs() < 1e-9, "{day}");
        assert!((standing.since_cbtmin_h.median - 5.0).abs() < 1e-9, "{day}");
    }
}

#[test]
fn a_stated_clock_has_next_windows_of_its_own() {
    let asked = SampleQuestion {
        stated: Some(Stated {
            cbtmin_h: 4.0,
            sleep_h: (23.0, 7.0),
        }),
        next: true,
        ..question(at(3, 0, 0), Matrix::Serum)
    };
    let read = read(&roster(DAYS), "UTC");
    let (_, spans) = sample(&read.roster.unwrap(), &screening(&[]), &asked).unwrap();
    // CBTmin + 3 to + 7 h is 07:00 to 11:00; 1.5 to 5 h after waking leaves 08:30 to 11:00.
    let (from, to) = spans.unwrap()[0];
    let local = (from.naive_local(), to.naive_local());
    assert_eq!(local, (at(3, 8, 30), at(3, 11, 15)));
}

#[test]
fn saliva_has_a_band_of_its_own() {
    let placed = ask(DAYS, &question(at(13, 9, 0), Matrix::Saliva), "").unwrap();
    // About 15 nmol/L of parotid saliva at 08:00.
    assert!(
        (8.0..22.0).contains(&placed.band.median),
        "{:?}",
        placed.band
    );
    assert!(placed.band.p95 / placed.band.p05 > 4.0);
}

#[test]
fn a_roster_that_tells_too_little_is_refused() {
    let early = ask(DAYS, &question(at(3, 9, 0), Matrix::Serum), "");
    assert!(matches!(
        early,
        Err(SampleRefusal::NotPlaced(NotPlaced::ShortHistory { .. }))
    ));
    let permanent = "NNNNN..NNNNN..NNNNN..NNNNN..NNNNN..NNNNN";
    let nights = ask(permanent, &question(at(37, 9, 0), Matrix::Serum), "");
    assert!(matches!(
        nights,
        Err(SampleRefusal::NotPlaced(NotPlaced::NoStart { .. }))
    ));
    let outside = ask(DAYS, &question(at(300, 9, 0), Matrix::Serum), "");
    assert!(matches!(
        outside,
        Err(SampleRefusal::NotPlaced(NotPlaced::OutsideRoster))
    ));
    let unknown = SampleQuestion {
        worker: "Q".to_owned(),
        ..question(at(13, 9, 0), Matrix::Serum)
    };
    assert!(matches!(
        ask(DAYS, &unknown, ""),
        Err(SampleRefusal::UnknownWorker(_))
    ));
}

#[test]
fn the_command_keeps_to_its_audience_and_its_words() {
    let roster = demo();
    let roster = roster.to_str().unwrap();
    let common = [
        "sample",
        roster,
        "--worker",
        "N03",
        "--at",
        "2026-03-27T09:00",
        "--matrix",
        "serum",
        "--members",
        "16",
    ];
    let planner = run(&common);
    assert_eq!(planner.status.code(), Some(2));
    assert!(messages(&planner).contains("clinician"));
    let with = |more: &[&str]| {
        let mut arguments = common.to_vec();
        arguments.extend(["--audience", "clinician"]);
        arguments.extend(more);
        run(&arguments)
    };
    let text = results(&with(&[
        "--value",
        "11",
        "--unit",
        "ug/dL",
        "--next-window",
    ]));
    assert!(text.starts_with("Do not delay a sample, referral or treatment"));
    assert!(text.contains("303.5 nmol/L: within the modelled sample band"));
    assert!(text.contains("next comparable times"));
    let json: serde_json::Value =
        serde_json::from_str(&results(&with(&["--format", "json"]))).unwrap();
    assert_eq!(json["schema"], "acroshift.sample/1");
    assert!(
        json["sample_band"]["p05"].as_f64().unwrap() < json["sample_band"]["p95"].as_f64().unwrap()
    );
    assert_eq!(
        with(&["--value", "11"]).status.code(),
        Some(2),
        "a value without a unit"
    );
    assert_eq!(
        with(&["--value", "-1", "--unit", "nmol/L"]).status.code(),
        Some(2)
    );
    for words in ["unfit", "abnormal", "diagnosis of", "deficient"] {
        assert!(!text.contains(words), "{words}");
    }
}
