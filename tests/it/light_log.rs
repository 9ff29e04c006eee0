//! Measured light of a worker in the place of the scene: from the file to the clock.

use crate::rosters::{pattern, read, report_with, screening};
use crate::scratch::{file, messages, results, run};
use acroshift::intake::{Input, light_log};
use acroshift::report::Audience;
use acroshift::timeline::{LightLogs, MeasuredLight};
use acroshift::units::{Lux, Minute};
use acroshift::{Screening, screen};
use std::fmt::Write;

/// Two weeks of five nights each.
fn nights() -> String {
    pattern("NNNNN..", 2, &[('N', "22:00", "06:00")])
}

/// A reading every half hour over two weeks: `night` lux from 22 to 06, `day` otherwise.
fn log(worker: &str, night: f64, day: f64) -> String {
    let mut csv = String::from("worker,time,lux\n");
    for date in 5..19 {
        for half_hour in 0..48 {
            let (hour, minute) = (half_hour / 2, 30 * (half_hour % 2));
            let at_night = !(6..22).contains(&hour);
            let lux = if at_night { night } else { day };
            writeln!(
                csv,
                "{worker},2026-01-{date:02}T{hour:02}:{minute:02},{lux}"
            )
            .unwrap();
        }
    }
    csv
}

fn logs(csv: &str, roster: &acroshift::roster::Roster) -> LightLogs {
    let input = Input {
        name: "light.csv",
        bytes: csv.as_bytes(),
    };
    let (logs, diagnostics) = light_log::read(&input, roster);
    assert!(diagnostics.is_empty(), "{diagnostics:?}");
    logs
}

/// Displacement of `CBTmin` in the last window, hours, by what was measured.
fn displacement(audience: Audience, log: Option<&str>) -> f64 {
    let csv = nights();
    let roster = read(&csv, "UTC").roster.unwrap();
    let screening = Screening {
        audience,
        light_logs: log.map_or_else(LightLogs::default, |log| logs(log, &roster)),
        ..screening(&["eu-wtd"])
    };
    let report = report_with(&csv, "UTC", &screening);
    let windows = &report.lines[0].windows;
    windows[windows.len() - 1].cbtmin_displacement_h.all.median
}

/// Bright nights and dark days move the clock toward the night; dim nights and bright days hold it (Czeisler 1990, N Engl J Med 322:1253; order only).
#[test]
fn measured_light_moves_the_clock_in_the_published_direction() {
    let name = "P";
    let bright = displacement(Audience::Clinician, Some(&log(name, 2000.0, 5.0)));
    let dim = displacement(Audience::Clinician, Some(&log(name, 5.0, 2000.0)));
    let scene = displacement(Audience::Clinician, None);
    assert!(bright.abs() > dim.abs() + 1.0, "{bright} {dim} {scene}");
    assert!((scene - dim).abs() > 0.05, "{scene} {dim}");
}

#[test]
fn the_planner_s_generic_adult_has_no_measured_light() {
    let with = displacement(Audience::Planner, Some(&log("P", 2000.0, 5.0)));
    let without = displacement(Audience::Planner, None);
    assert!((with - without).abs() < 1e-12);
}

#[test]
fn a_worker_with_a_log_has_a_line_of_its_own_and_the_other_keeps_the_scene() {
    let both =
        nights()
            .lines()
            .skip(1)
            .fold(String::from("worker,date,start,end\n"), |mut text, row| {
                let (_, rest) = row.split_once(',').unwrap();
                writeln!(text, "A,{rest}\nB,{rest}").unwrap();
                text
            });
    let roster = read(&both, "UTC").roster.unwrap();
    let of = |light_logs: LightLogs| {
        let screening = Screening {
            audience: Audience::Clinician,
            light_logs,
            ..screening(&["eu-wtd"])
        };
        screen(&roster, &[], &[], &screening).unwrap()
    };
    let (plain, measured) = (
        of(LightLogs::default()),
        of(logs(&log("B", 2000.0, 5.0), &roster)),
    );
    assert_eq!((plain.summary.lines, measured.summary.lines), (1, 2));
    let last = |report: &acroshift::report::ScreenReport, worker: &str| {
        let line = report.lines.iter().find(|l| l.subject == worker).unwrap();
        let windows = &line.windows;
        windows[windows.len() - 1].cbtmin_displacement_h.all.median
    };
    assert!((last(&plain, "A") - last(&measured, "A")).abs() < 1e-12);
    assert!((last(&measured, "A") - last(&measured, "B")).abs() > 0.5);
    let told = &measured.provenance.morning_daylight;
    assert!(told.contains("measured for 1 worker"), "{told}");
}

#[test]
fn a_log_far_away_leaves_the_scene() {
    assert_eq!(MeasuredLight::of(std::iter::empty()).edges().count(), 0);
    let far = [(Minute(600_000), Lux::new(10_000.0).unwrap())];
    let light = MeasuredLight::of(far.into_iter());
    assert_eq!(light.at(Minute(0)), None);
}

#[test]
fn the_command_refuses_what_cannot_be() {
    let roster = file("light-roster", "roster.csv", nights());
    let ask = |csv: &str, audience: &str| {
        let light = file("light", "light.csv", csv);
        run(&[
            "screen",
            roster.to_str().unwrap(),
            "--zone",
            "UTC",
            "--members",
            "8",
            "--audience",
            audience,
            "--light-log",
            light.to_str().unwrap(),
        ])
    };
    let good = log("P", 100.0, 50.0);
    assert_eq!(ask(&good, "clinician").status.code(), Some(0));
    let planner = ask(&good, "planner");
    assert_eq!(planner.status.code(), Some(2));
    assert!(results(&planner).is_empty());
    for (row, told) in [
        ("P,2026-01-05T22:00,-1", "L01"),
        ("P,2026-01-05T22:00,NaN", "L01"),
        ("P,2026-01-05T22:00,300000", "L01"),
        ("P,yesterday,10", "T17"),
        ("Z,2026-01-05T22:00,10", "L02"),
    ] {
        let refused = ask(&format!("worker,time,lux\n{row}\n"), "clinician");
        assert_eq!(refused.status.code(), Some(3), "{row}");
        assert!(messages(&refused).contains(told), "{row}");
    }
}
