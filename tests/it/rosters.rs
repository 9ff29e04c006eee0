//! Rosters of tests as text, and reports made from them.

use acroshift::assessment::pack;
use acroshift::intake::site::Site;
use acroshift::intake::{self, Input, Intake, Reading};
use acroshift::physiology::ModelSets;
use acroshift::report::{Audience, ScreenReport};
use acroshift::timeline::LightLogs;
use acroshift::{Screening, screen};
use chrono::{Days, NaiveDate};
use std::fmt::Write;

/// Reads a roster; the zone is the one given.
pub(crate) fn read(csv: &str, zone: &str) -> Intake {
    let input = Input {
        name: "roster.csv",
        bytes: csv.as_bytes(),
    };
    let reading = Reading {
        zone: Some(zone.parse().unwrap()),
        ..Reading::default()
    };
    intake::read(&[input], &reading)
}

/// How tests screen, unless they say otherwise.
pub(crate) fn screening(packs: &[&str]) -> Screening {
    Screening {
        audience: Audience::Planner,
        packs: pack::named(packs).unwrap(),
        site: Site::default(),
        members: 32,
        seed: 1,
        sets: ModelSets::embedded(),
        beside: Vec::new(),
        light_logs: LightLogs::default(),
    }
}

/// The report of a roster in the default packs.
#[track_caller]
pub(crate) fn report(csv: &str, zone: &str) -> ScreenReport {
    report_with(csv, zone, &screening(&pack::DEFAULT_PACKS))
}

/// The report of a roster, screened as given.
#[track_caller]
pub(crate) fn report_with(csv: &str, zone: &str, screening: &Screening) -> ScreenReport {
    let read = read(csv, zone);
    let roster = read.roster.unwrap();
    screen(&roster, &read.diagnostics, &[], screening).unwrap()
}

/// A pattern of letters repeated over whole weeks from Monday 5 January 2026: one worker, times by letter.
pub(crate) fn pattern(letters: &str, weeks: u64, codes: &[(char, &str, &str)]) -> String {
    let first = NaiveDate::from_ymd_opt(2026, 1, 5).unwrap();
    let mut csv = String::from("worker,date,start,end\n");
    for (day, letter) in (0..weeks * 7).zip(letters.chars().cycle()) {
        if let Some((_, start, end)) = codes.iter().find(|(code, ..)| *code == letter) {
            writeln!(csv, "P,{},{start},{end}", first + Days::new(day)).unwrap();
        }
    }
    csv
}
