//! Output folders: never overwritten unasked, never half-written, readable by the owner only, the same bytes every time.

use crate::scratch::{DEMO_RULES, demo, file, folder, messages, run};
use std::collections::BTreeMap;
use std::path::Path;
use std::process::Command;

const ROSTER: &str = "worker,start,end\nA1,2026-03-09T14:00,2026-03-09T22:00\nA1,2026-03-10T06:00,2026-03-10T14:00\n";

fn screen_into(roster: &Path, out: &Path, more: &[&str]) -> std::process::Output {
    let mut arguments = vec![
        "screen",
        roster.to_str().unwrap(),
        "--zone",
        "Europe/London",
        "--members",
        "8",
        "--out",
        out.to_str().unwrap(),
    ];
    arguments.extend(more);
    run(&arguments)
}

fn files(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| {
            let entry = entry.unwrap();
            let name = entry.file_name().into_string().unwrap();
            (name, std::fs::read(entry.path()).unwrap())
        })
        .collect()
}

#[test]
fn every_promised_file_is_written() {
    let roster = file("promised", "roster.csv", ROSTER);
    let out = folder("promised-out").join("new/report");
    let output = screen_into(&roster, &out, &[]);
    assert!(output.status.success(), "{}", messages(&output));
    let files = files(&out);
    let names: Vec<&str> = files.keys().map(String::as_str).collect();
    if cfg!(feature = "parquet") {
        assert_eq!(
            names,
            [
                "findings.csv",
                "findings.parquet",
                "lines.parquet",
                "report.html",
                "result.json",
                "shifts.parquet",
                "windows.parquet"
            ]
        );
        assert!(
            files["lines.parquet"].starts_with(b"PAR1")
                && files["lines.parquet"].ends_with(b"PAR1")
        );
    } else {
        assert_eq!(names, ["findings.csv", "report.html", "result.json"]);
    }
}

#[test]
fn an_existing_report_is_replaced_only_by_force() {
    let roster = file("existing", "roster.csv", ROSTER);
    let out = folder("existing-out");
    std::fs::write(out.join("result.json"), "mine").unwrap();
    let refused = screen_into(&roster, &out, &[]);
    assert_eq!(refused.status.code(), Some(2));
    assert!(messages(&refused).contains("--force"));
    assert_eq!(
        std::fs::read_to_string(out.join("result.json")).unwrap(),
        "mine"
    );
    let forced = screen_into(&roster, &out, &["--force"]);
    assert!(forced.status.success(), "{}", messages(&forced));
    assert_ne!(
        std::fs::read_to_string(out.join("result.json")).unwrap(),
        "mine"
    );
    assert!(files(&out).keys().all(|name| !name.contains("partial")));
}

#[test]
fn an_output_that_cannot_be_made_leaves_nothing_behind() {
    let roster = file("unwritable", "roster.csv", ROSTER);
    let place = folder("unwritable-out");
    std::fs::write(place.join("plain"), "a file, no folder").unwrap();
    // A folder cannot be made inside a file.
    let output = screen_into(&roster, &place.join("plain/report"), &[]);
    assert!(!output.status.success());
    let text = messages(&output);
    assert!(
        text.contains("plain") && !text.contains("panicked"),
        "{text}"
    );
    assert_eq!(files(&place).len(), 1);
}

#[cfg(unix)]
#[test]
fn reports_belong_to_their_owner_alone() {
    use std::os::unix::fs::PermissionsExt;
    let roster = file("owner", "roster.csv", ROSTER);
    let out = folder("owner-out").join("report");
    assert!(screen_into(&roster, &out, &[]).status.success());
    let mode = |path: &Path| std::fs::metadata(path).unwrap().permissions().mode() & 0o777;
    assert_eq!(mode(&out), 0o700);
    assert_eq!(mode(&out.join("result.json")), 0o600);
}

/// Same input twice, with one and with two threads: byte-identical files.
#[test]
fn one_thread_and_two_threads_give_the_same_bytes() {
    let place = folder("threads-out");
    let screened = |name: &str, threads: &str| {
        let out = place.join(name);
        let output = Command::new(env!("CARGO_BIN_EXE_acroshift"))
            .arg("screen")
            .arg(demo())
            .args(["--rules", DEMO_RULES, "--threads", threads, "--out"])
            .arg(&out)
            .env("POLARS_MAX_THREADS", threads)
            .env("RAYON_NUM_THREADS", threads)
            .output()
            .unwrap();
        assert!(output.status.success(), "{}", messages(&output));
        files(&out)
    };
    let one = screened("one", "1");
    let two = screened("two", "2");
    let again = screened("again", "2");
    assert!(one.len() >= 3);
    assert!(one == two, "one thread and two differ");
    assert!(two == again, "two runs differ");
}

#[test]
fn a_clinician_report_is_never_written_over_a_planner_one() {
    let roster = file("audiences", "roster.csv", ROSTER);
    let out = folder("audiences-out").join("report");
    assert!(screen_into(&roster, &out, &[]).status.success());
    let refused = screen_into(&roster, &out, &["--force", "--audience", "clinician"]);
    assert_eq!(refused.status.code(), Some(2));
    assert!(messages(&refused).contains("another audience"));
}

#[cfg(target_os = "linux")]
#[test]
fn messages_that_nobody_can_read_do_not_stop_the_work() {
    let roster = file("deaf", "roster.csv", ROSTER);
    let out = folder("deaf-out").join("report");
    let status = Command::new(env!("CARGO_BIN_EXE_acroshift"))
        .arg("screen")
        .arg(&roster)
        .args(["--zone", "UTC", "--members", "8", "--out"])
        .arg(&out)
        .stderr(
            std::fs::OpenOptions::new()
                .write(true)
                .open("/dev/full")
                .unwrap(),
        )
        .stdout(std::process::Stdio::null())
        .status()
        .unwrap();
    assert_eq!(status.code(), Some(0));
    assert!(out.join("result.json").exists());
}
