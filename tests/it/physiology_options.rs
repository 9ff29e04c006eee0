//! Pacemakers side by side, parameters by file, light of the site: what the options of the models do, end to end.

use crate::rosters::{pattern, report_with, screening};
use crate::scratch::{demo, file, messages, results, run};
use acroshift::Screening;
use acroshift::intake::site;
use acroshift::physiology::{ModelSets, PacemakerName};

const NIGHTS: &str = "NNNN...";
const NIGHT: [(char, &str, &str); 1] = [('N', "21:00", "07:30")];

/// The furthest shift of the last night on a site.
fn last_shift(site_file: &str) -> f64 {
    let csv = pattern(NIGHTS, 2, &NIGHT).replace("2026-01", "2026-06");
    let screening = Screening {
        site: site::read(site_file).unwrap(),
        ..screening(&["eu-wtd"])
    };
    let report = report_with(&csv, "Europe/London", &screening);
    let windows = &report.lines[0].windows;
    windows[windows.len() - 1].cbtmin_displacement_h.all.median
}

#[test]
fn brighter_work_at_night_moves_the_clock_later() {
    let dim = last_shift("work_area = \"ward-night\"\nmorning_daylight = false");
    let bright = last_shift("work_area = \"examination\"\nmorning_daylight = false");
    assert!(bright < dim - 0.5, "{bright} {dim}");
    // The eye factor is explicit: twice the share is the light of twice the task.
    let half = last_shift("task_light_lux = 500\neye_factor = 0.2\nmorning_daylight = false");
    let same = last_shift("task_light_lux = 250\neye_factor = 0.4\nmorning_daylight = false");
    assert!((half - same).abs() < 1e-9);
}

#[test]
fn morning_light_depends_on_sky_glasses_and_the_way() {
    // June in London: the sun is high at 07:30 and the way home is bright.
    let place = "latitude = 51.5\nlongitude = -0.1\nmorning_daylight = true\n";
    let plain = last_shift(place);
    let clear = last_shift(&format!("{place}sky = \"clear\""));
    let glasses = last_shift(&format!("{place}sky = \"clear\"\nsunglasses = true"));
    let covered = last_shift(&format!("{place}sky = \"clear\"\ncommute_outdoors = false"));
    // More morning light, less delay.
    assert!(clear > covered + 0.1, "{clear} {covered}");
    assert!(
        (covered..=clear).contains(&glasses),
        "{covered} {glasses} {clear}"
    );
    assert!((covered - plain).abs() < 3.0);
    // Light at home by day counts too.
    let bright_home = last_shift(&format!("{place}home_day_lux = 600"));
    assert!((bright_home - plain).abs() > 0.05, "{bright_home} {plain}");
}

#[test]
fn polar_day_and_polar_night_are_lived() {
    for month in ["2026-06", "2026-12"] {
        let csv = pattern(NIGHTS, 2, &NIGHT).replace("2026-01", month);
        let screening = Screening {
            site: site::read("latitude = 69.65\nlongitude = 18.96\nsky = \"overcast\"").unwrap(),
            ..screening(&["eu-wtd"])
        };
        let report = report_with(&csv, "Europe/Oslo", &screening);
        assert!(
            report.lines[0]
                .days
                .iter()
                .all(|day| day.sleep_h.median > 1.0)
        );
    }
}

#[test]
fn all_pacemakers_stand_side_by_side() {
    let csv = pattern(NIGHTS, 2, &NIGHT);
    let screening = Screening {
        beside: PacemakerName::ALL[1..].to_vec(),
        ..screening(&["eu-wtd"])
    };
    let line = &report_with(&csv, "Europe/London", &screening).lines[0];
    let names: Vec<_> = line
        .pacemakers
        .iter()
        .map(|row| &row.pacemaker[..])
        .collect();
    assert_eq!(
        names,
        ["hilaire2007", "forger1999", "jewett1999", "hannay2019"]
    );
    let sentence = line
        .evidence
        .iter()
        .find(|s| s.contains("Published models"));
    assert!(sentence.unwrap().contains("h apart"));
    // Sleep hardly depends on the pacemaker: its process C follows displacement.
    let sleeps: Vec<_> = line
        .pacemakers
        .iter()
        .map(|row| row.sleep_24h.median)
        .collect();
    assert!(
        sleeps.iter().all(|h| (h - sleeps[0]).abs() < 0.3),
        "{sleeps:?}"
    );
}

#[test]
fn another_cascade_gives_a_shorter_quiet_interval() {
    let csv = pattern("DDDDD..", 2, &[('D', "08:00", "16:00")]);
    let quiet = |name: Option<&str>| {
        let mut sets = ModelSets::embedded();
        if let Some(name) = name {
            sets.replace(name).unwrap();
        }
        let screening = Screening {
            sets,
            ..screening(&["eu-wtd"])
        };
        let report = report_with(&csv, "Europe/London", &screening);
        let day = &report.lines[0].days[7];
        let hours = day.quiescent_end.all.median - day.quiescent_start.all.median;
        acroshift::numeric::circular::wrap(hours, 24.0)
    };
    let (reference, measured) = (quiet(None), quiet(Some("hpa-cascade-measured")));
    assert!((7.0..9.5).contains(&reference), "{reference}");
    // Measured control groups: 5.0 to 6.3 h in three of four.
    assert!((5.0..6.7).contains(&measured), "{measured}");
}

#[test]
fn the_commands_take_the_options() {
    let run = |arguments: &[&str]| {
        let output = run(arguments);
        let code = output.status.code().unwrap();
        (code, results(&output), messages(&output))
    };
    let roster = demo();
    let roster = roster.to_str().unwrap();
    let (code, json, _) = run(&[
        "screen",
        roster,
        "--zone",
        "Europe/London",
        "--members",
        "8",
        "--pacemaker",
        "all",
        "--parameters",
        "hpa-cascade-measured",
        "--format",
        "json",
    ]);
    assert_eq!(code, 0);
    assert!(json.contains("\"pacemaker\": \"jewett1999\""));
    let (code, text, _) = run(&["validate", "--members", "8", "--pacemaker", "forger1999"]);
    assert_eq!(code, 0);
    assert!(text.contains("P01_santhi2008") && text.contains("not run"));
    let own = file(
        "own_experiments",
        "own.toml",
        "format = \"acroshift.experiments/1\"\n[[experiment]]\nid = 5\n",
    );
    let (code, _, told) = run(&["validate", "--experiments", own.to_str().unwrap()]);
    assert_eq!(code, 3);
    assert!(told.contains("own.toml"), "{told}");
    let (code, _, told) = run(&["screen", roster, "--parameters", "no-such-set"]);
    assert_eq!(code, 3);
    assert!(told.contains("hpa-cascade-measured"), "{told}");
    let (code, text, _) = run(&["explain", "ensemble"]);
    assert_eq!(code, 0);
    assert!(text.contains("Duffy 2011") && text.contains("low-discrepancy"));
}
