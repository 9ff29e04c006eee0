//! The command line of `rhythm`: tables of samples to rhythms, populations and comparisons of groups.

use crate::scratch::{file, messages, results, run};
use serde_json::Value;
use std::fmt::Write;

#[test]
fn the_rhythm_command_fits_refuses_and_tells() {
    let saliva = concat!(env!("CARGO_MANIFEST_DIR"), "/rosters/tern-quay-saliva.csv");
    let fitted = run(&[
        "rhythm",
        saliva,
        "--periods",
        "24,12",
        "--log",
        "--format",
        "json",
    ]);
    assert_eq!(fitted.status.code(), Some(0));
    let json: Value = serde_json::from_str(&results(&fitted)).unwrap();
    assert_eq!(json["schema"], "acroshift.rhythm/1");
    assert_eq!(json["subjects"].as_array().unwrap().len(), 3);
    assert_eq!(json["populations"][0]["k"], 3);
    let text = results(&run(&["rhythm", saliva]));
    assert!(text.contains("waking response") && text.contains("weak sampling"));
    let rows = results(&run(&["rhythm", saliva, "--format", "csv"]));
    assert_eq!(rows.lines().count(), 4);
    let refused = |name: &str, csv: &str| {
        let path = file(name, "samples.csv", csv);
        let output = run(&["rhythm", path.to_str().unwrap()]);
        (
            output.status.code().unwrap(),
            results(&output),
            messages(&output),
        )
    };
    let head = "subject,time,value,unit\n";
    let (code, out, _) = refused(
        "three",
        &format!("{head}A,7,9,nmol/L\nA,15,5,nmol/L\nA,23,2,nmol/L\n"),
    );
    assert!(code == 0 && out.contains("at least 4 are needed"), "{out}");
    let mornings = format!("{head}A,8,9,nmol/L\nA,9,8,nmol/L\nA,10,8,nmol/L\nA,11,7,nmol/L\n");
    let (_, out, _) = refused("mornings", &mornings);
    assert!(out.contains("spread the samples"), "{out}");
    for (name, csv, told) in [
        ("negative", "A,7,-9,nmol/L", "M03"),
        ("unit", "A,7,9,", "M01"),
        ("mixed", "A,7,9,nmol/L\nA,9,9,ug/dL", "M02"),
        ("twice", "A,7,9,nmol/L\nA,7,8,nmol/L", "M04"),
    ] {
        let (code, _, message) = refused(name, &format!("{head}{csv}\n"));
        assert_eq!(code, 3, "{name}");
        assert!(message.contains(told), "{name}: {message}");
    }
}

/// Samples every two hours that lie exactly on the curves of the reference table, written to 12 digits.
fn groups_of_the_reference() -> String {
    let mut csv = String::from("subject,group,time,value,unit,matrix\n");
    for row in include_str!("reference/data/pop_params_synth.csv")
        .lines()
        .skip(1)
    {
        let cells: Vec<&str> = row.split(',').collect();
        let number = |place: usize| cells[place].parse::<f64>().unwrap();
        let (mesor, amplitude, acrophase) = (number(2), number(3), number(4).to_radians());
        for hour in (0..24).step_by(2) {
            let turn = std::f64::consts::TAU * f64::from(hour) / 24.0;
            let value = mesor + amplitude * (turn + acrophase).cos();
            writeln!(
                csv,
                "{},{},{hour},{value:.12},nmol/L,saliva",
                cells[1], cells[0]
            )
            .unwrap();
        }
    }
    csv
}

/// Expected: `compare` of `pop_params_synth` in the reference, made with `NumPy` and `SciPy` and checked with statsmodels.
#[test]
fn groups_are_compared_as_in_the_reference() {
    let expected: Value =
        serde_json::from_str(include_str!("reference/data/cosinor_expected.json")).unwrap();
    let expected = &expected["pop_params_synth"]["compare"];
    let path = file("rhythm-groups", "samples.csv", groups_of_the_reference());
    let json = run(&["rhythm", path.to_str().unwrap(), "--format", "json"]);
    let json: Value = serde_json::from_str(&results(&json)).unwrap();
    assert_eq!(json["populations"][1]["group"], "night");
    let found = &json["comparisons"][0];
    for (key, expected) in [
        ("mesor", &expected["F_mesor"]),
        ("acrophase", &expected["F_phase"]),
        ("amplitude", &expected["F_amp"]),
        (
            "amplitude_and_acrophase",
            &expected["joint_beta_gamma"]["F"],
        ),
    ] {
        let (found, expected) = (
            found[key]["f"].as_f64().unwrap(),
            expected.as_f64().unwrap(),
        );
        assert!(
            (found / expected - 1.0).abs() < 1e-8,
            "{key}: {found}, {expected}"
        );
    }
    let text = results(&run(&["rhythm", path.to_str().unwrap()]));
    assert!(
        text.contains("Groups day, night (saliva, assay not said): MESOR F(1, 13) 3.11"),
        "{text}"
    );
}

#[test]
fn groups_that_share_a_subject_or_are_too_small_are_not_compared() {
    let compared = |csv: &str| {
        let path = file("rhythm-not-compared", "samples.csv", csv);
        results(&run(&["rhythm", path.to_str().unwrap()]))
    };
    let shared = groups_of_the_reference().replace("N1,night", "D1,night");
    assert!(compared(&shared).contains("subject \"D1\" stands in two groups"));
    let rows = groups_of_the_reference();
    let small = rows
        .lines()
        .filter(|row| !row.contains(",night,") || row.starts_with("N1,") || row.starts_with("N2,"))
        .fold(String::new(), |text, row| text + row + "\n");
    assert!(compared(&small).contains("not compared: a group has fewer than 3 subjects"));
}

/// Two days on time with increases of 3 and 5, one day whose first sample came 20 min after waking with 1.
#[test]
fn the_waking_response_is_told_with_and_without_late_days() {
    let mut csv = String::from("subject,time,value,unit,matrix,waking_time\n");
    for (day, late, rise) in [(9, 0, 3.0), (10, 0, 5.0), (11, 20, 1.0)] {
        for (after, value) in [(late, 8.0), (30, 8.0 + rise), (45, 8.0 + rise)] {
            writeln!(
                csv,
                "A,2026-03-{day:02}T07:{after:02},{value},nmol/L,saliva,2026-03-{day:02}T07:00"
            )
            .unwrap();
        }
    }
    let path = file("rhythm-late", "samples.csv", csv);
    let json = run(&["rhythm", path.to_str().unwrap(), "--format", "json"]);
    let json: Value = serde_json::from_str(&results(&json)).unwrap();
    let subject = &json["subjects"][0];
    let of = |key: &str| {
        let response = &subject[key];
        (
            response["days"].as_u64().unwrap(),
            response["mean_increase"].as_f64().unwrap(),
        )
    };
    assert_eq!(of("response_on_time"), (2, 4.0));
    let (days, mean) = of("response");
    assert!(days == 3 && (mean - 3.0).abs() < 1e-9, "{days} {mean}");
    let text = results(&run(&["rhythm", path.to_str().unwrap()]));
    assert!(
        text.contains("over 3 days: mean increase 3.00 nmol/L; over the 2 with"),
        "{text}"
    );
}
