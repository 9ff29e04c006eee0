//! The demo ward: invented lines of 24 nurses, written out as the committed roster.
//!
//! Every name, place and line is invented. Each letter is a date from Monday 9 March 2026 on:
//! E early 07:00-15:00, L late 13:30-21:30, D long day 07:30-19:30, N night 19:30-07:30, T training, V leave, a dot is off.
//! `ACROSHIFT_WRITE_DEMO=1 cargo test --release demo_ward` writes the file anew.

use chrono::{Days, NaiveDate};
use std::fmt::Write;

const FILE: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/rosters/tern-quay-ward.csv");

/// Worker, team, 28 dates.
const LINES: [(&str, &str, &str); 24] = [
    ("N01", "B", "DD..NN...DD...DD..NN...DD..."),
    ("N02", "B", "D..NN...DD...DD..NN...DD...D"),
    // A run of four nights.
    ("N03", "B", "..NNNN......DD...DD..NN...DD"),
    ("N04", "B", ".NN...DD...DD..NN...DD...DD."),
    ("N05", "B", "NN...DD...DD..NN...DD...DD.."),
    ("N06", "B", "N...DD...DD..NN...DD...DD..N"),
    ("N07", "B", "..TDD...DD..NN...DD...DD..NN"),
    ("N08", "B", "..DD...DD..NN...DD...DD..NN."),
    // Nights to days with one night between.
    ("N09", "B", ".DD...DD..NN.D...DD...DD..N."),
    ("N10", "B", "DD...DD..NN...DD...DD..NN..."),
    ("N11", "B", "D...DD..NN...DD...DD..NN...D"),
    ("N12", "B", "...DD..NN...DD...DD..NN...DD"),
    ("N13", "B", "..DD..NN...DD...DD..NN...DD."),
    ("N14", "B", ".DD..NN...DD...DD..NN...DD.."),
    ("N15", "A", "EELLL..EEELL..EELLL..EEELL.."),
    // Late to early: quick returns.
    ("N16", "A", "ELELL..EELLE..EELLL..EEELL.E"),
    ("N17", "A", "LLL..EEELL..EELLL..EEELL..EE"),
    // A forward change over three kinds of shift.
    ("N18", "A", "LL..EEELL..EELLNN...EELL..EE"),
    ("N19", "A", "..EEELL..EELLL..EEELL..EELLL"),
    ("N20", "A", ".EEELL..EELLL..VVVVV..EELLL."),
    // A backward change.
    ("N21", "A", "EEELL..EELLL..LLEE..EELLL..E"),
    ("N22", "A", "ELL..EELLL..EEELL..EELEL..EE"),
    ("N23", "A", "LL..EELLL..EEELL..EELLL..EEE"),
    ("N24", "A", "..EELLL..EEELL..EELLL..EELEL"),
];

/// Code, start, end, kind, break minutes.
const CODES: [(char, &str, &str, &str, u32); 6] = [
    ('E', "07:00", "15:00", "work", 30),
    ('L', "13:30", "21:30", "work", 30),
    ('D', "07:30", "19:30", "work", 60),
    ('N', "19:30", "07:30", "work", 60),
    ('T', "09:00", "17:00", "training", 60),
    ('V', "09:00", "17:00", "leave", 0),
];

fn roster_text() -> String {
    let first = NaiveDate::from_ymd_opt(2026, 3, 9).unwrap();
    let mut text = String::from("worker,team,date,start,end,code,kind,break_min,zone\n");
    for (worker, team, letters) in LINES {
        assert_eq!(letters.len(), 28, "{worker}");
        for (day, letter) in (0..).zip(letters.chars()) {
            let Some((_, start, end, kind, break_min)) =
                CODES.iter().find(|(code, ..)| *code == letter)
            else {
                assert_eq!(letter, '.');
                continue;
            };
            let date = first + Days::new(day);
            writeln!(
                text,
                "{worker},{team},{date},{start},{end},{letter},{kind},{break_min},Europe/London"
            )
            .unwrap();
        }
    }
    text
}

#[test]
fn the_committed_roster_is_the_one_written_here() {
    if std::env::var_os("ACROSHIFT_WRITE_DEMO").is_some() {
        std::fs::write(FILE, roster_text()).unwrap();
    }
    let committed = std::fs::read_to_string(FILE).unwrap();
    assert_eq!(committed, roster_text());
}

#[test]
fn every_night_has_at_least_one_nurse_and_every_day_two() {
    for day in 0..28 {
        let on = |wanted: &str| {
            LINES
                .iter()
                .filter(|(_, _, letters)| wanted.contains(letters.as_bytes()[day] as char))
                .count()
        };
        assert!(on("N") >= 1, "night of day {day}");
        assert!(on("DEL") >= 4, "day {day}");
    }
}
