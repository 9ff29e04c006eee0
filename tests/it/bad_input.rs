//! Bad input: a clear message with the place, exit code 3, no panic; with `--allow-partial` the rest is reported and the gap named.

use crate::scratch::{file, folder, messages, results, run};
use serde_json::Value;

/// Screens a file and returns exit code and messages.
fn screened(test: &str, name: &str, content: impl AsRef<[u8]>, more: &[&str]) -> (i32, String) {
    let path = file(test, name, content);
    let mut arguments = vec!["screen", path.to_str().unwrap()];
    arguments.extend(more);
    let output = run(&arguments);
    let text = messages(&output);
    assert!(!text.contains("panicked"), "{text}");
    assert!(results(&output).is_empty() || output.status.success());
    (output.status.code().unwrap(), text)
}

#[track_caller]
fn check(test: &str, content: impl AsRef<[u8]>, more: &[&str], expected: &[&str]) {
    let (code, text) = screened(test, "roster.csv", content, more);
    assert_eq!(code, 3, "{text}");
    for part in expected {
        assert!(text.contains(part), "{part:?} is not in:\n{text}");
    }
}

const LONDON: &[&str] = &["--zone", "Europe/London"];
const GOOD: &str = "A1,2026-03-09T08:00,2026-03-09T16:00\nA1,2026-03-10T08:00,2026-03-10T16:00\n";

#[test]
fn a_missing_column_is_named_with_the_ones_found() {
    check(
        "missing-column",
        "worker,start,ende\nA1,2026-03-09T08:00,2026-03-09T16:00\n",
        LONDON,
        &[
            "roster.csv:1:1",
            "C18",
            "no column end",
            "rename \"ende\" to end",
        ],
    );
}

#[test]
fn an_unreadable_date_is_shown_with_carets() {
    check(
        "unreadable-date",
        format!("worker,start,end\n{GOOD}A2,2026-13-45T08:00,2026-03-09T16:00\n"),
        LONDON,
        &[
            "roster.csv:4:4 (start): error D09",
            "\"2026-13-45T08:00\" is no date",
            "  4 | A2,2026-13-45T08:00,2026-03-09T16:00\n    |    ^^^^^^^^^^^^^^^^\n",
            "--allow-partial",
        ],
    );
}

#[test]
fn an_unknown_zone_in_the_file_is_told_with_a_near_name() {
    check(
        "unknown-zone",
        "worker,start,end,zone\nA1,2026-03-09T08:00,2026-03-09T16:00,Europe/Londn\n",
        &[],
        &[
            "roster.csv:2:38 (zone): error T11",
            "did you mean Europe/London?",
        ],
    );
    check(
        "abbreviated-zone",
        "worker,start,end,zone\nA1,2026-03-09T08:00,2026-03-09T16:00,BST\n",
        &[],
        &["T11", "ambiguous"],
    );
}

#[test]
fn a_file_without_any_zone_asks_for_one() {
    check(
        "no-zone",
        format!("worker,start,end\n{GOOD}"),
        &[],
        &["T10", "--zone Europe/London"],
    );
}

#[test]
fn an_end_before_its_start_is_t21() {
    check(
        "t21",
        format!("worker,start,end\n{GOOD}A2,2026-03-10T08:00,2026-03-09T16:00\n"),
        LONDON,
        &[
            "roster.csv:4:21 (end): error T21 end 2026-03-09T16:00 lies before start 2026-03-10T08:00; row not used",
        ],
    );
}

#[test]
fn empty_files_and_files_of_random_bytes_are_refused() {
    check(
        "empty",
        "",
        LONDON,
        &["roster.csv: fatal C08 the file is empty"],
    );
    check(
        "header-only",
        "worker,start,end\n",
        LONDON,
        &["C08", "no data rows"],
    );
    let mut state = 1_u64;
    let random: Vec<u8> = (0..4096)
        .map(|_| {
            state = state
                .wrapping_mul(6364136223846793005)
                .wrapping_add(1442695040888963407);
            state.to_be_bytes()[0]
        })
        .collect();
    check("random", random, LONDON, &["C17", "control character"]);
}

#[test]
fn a_folder_and_a_missing_file_are_refused_by_name() {
    let path = folder("a-folder");
    let output = run(&["screen", path.to_str().unwrap()]);
    assert_eq!(output.status.code(), Some(3));
    assert!(messages(&output).contains("a-folder: fatal F01 cannot be read: is a folder"));
    let output = run(&["screen", "no-such-roster.csv"]);
    assert_eq!(output.status.code(), Some(3));
    assert!(messages(&output).contains("no-such-roster.csv: fatal F01"));
}

#[test]
fn foreign_formats_are_named() {
    check(
        "old-excel",
        [0xD0, 0xCF, 0x11, 0xE0, 0xA1],
        LONDON,
        &["X10", "save the roster as .xlsx or .csv"],
    );
}

#[test]
fn overlaps_equal_times_and_long_shifts_are_errors_of_their_row() {
    check(
        "overlap",
        format!("worker,start,end\n{GOOD}A1,2026-03-10T15:00,2026-03-10T20:00\n"),
        LONDON,
        &["roster.csv:4:4 (start): error K05", "row 3", "60 min"],
    );
    check(
        "equal",
        format!("worker,start,end\n{GOOD}A2,2026-03-10T08:00,2026-03-10T08:00\n"),
        LONDON,
        &["T02", "0 h and 24 h"],
    );
    check(
        "long",
        format!("worker,start,end\n{GOOD}A2,2026-03-10T08:00,2026-03-12T08:00\n"),
        LONDON,
        &["T04", "48 h 00"],
    );
}

#[test]
fn every_problem_of_a_file_is_told_in_one_pass() {
    check(
        "all-at-once",
        format!(
            "worker,start,end\n{GOOD}A2,soon,2026-03-10T08:00\n,2026-03-10T08:00,2026-03-10T16:00\nA3,2026-03-10T08:00\n"
        ),
        LONDON,
        &[
            "roster.csv:4:4",
            "roster.csv:5:1",
            "K15",
            "roster.csv:6:4",
            "C06",
        ],
    );
}

#[test]
fn the_rest_is_reported_when_partial_results_are_allowed_and_the_gap_is_named() {
    let csv = format!(
        "worker,start,end\n{GOOD}A1,2026-03-11T08:00,2026-03-11T16:00\n\
         A2,2026-03-09T08:00,2026-03-09T16:00\nA2,2026-03-10T08:00,2026-03-09T16:00\nA2,2026-03-11T08:00,2026-03-11T16:00\n"
    );
    let path = file("partial", "roster.csv", csv);
    let arguments = [
        "screen",
        path.to_str().unwrap(),
        "--zone",
        "Europe/London",
        "--allow-partial",
        "--format",
        "json",
    ];
    let output = run(&arguments);
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    assert!(messages(&output).contains("T21"));
    let result: Value = serde_json::from_str(&results(&output)).unwrap();
    assert_eq!(result["summary"]["incomplete_workers"], 1);
    let workers = result["workers"].as_array().unwrap();
    let windows = |id: &str| {
        let worker = workers.iter().find(|worker| worker["id"] == id).unwrap();
        worker["windows"].as_array().unwrap().clone()
    };
    // The other worker is untouched; the window over the lost row is not judged.
    assert_eq!(windows("A1").len(), 2);
    assert!(windows("A1").iter().all(|w| w["class"] == "unmarked"));
    assert_eq!(windows("A2")[0]["class"], "not-judged");
}

#[test]
fn formula_text_is_kept_as_text_and_guarded_on_output() {
    // users.md fixture D.
    let csv = "worker,start,end\n=cmd|' /C calc'!A0,2026-03-09T14:00,2026-03-09T22:00\n=cmd|' /C calc'!A0,2026-03-10T06:00,2026-03-10T14:00\n";
    let path = file("formula", "roster.csv", csv);
    let out = folder("formula-out").join("report");
    let output = run(&[
        "screen",
        path.to_str().unwrap(),
        "--zone",
        "Europe/London",
        "--out",
        out.to_str().unwrap(),
    ]);
    assert!(output.status.success(), "{}", messages(&output));
    let findings = std::fs::read_to_string(out.join("findings.csv")).unwrap();
    assert!(findings.contains(",'=cmd|' /C calc'!A0,"));
    assert!(!findings.contains(",=cmd"));
}

#[test]
fn html_in_names_is_escaped() {
    let csv = "worker,start,end\n<script>alert(1)</script>,2026-03-09T14:00,2026-03-09T22:00\n<script>alert(1)</script>,2026-03-10T06:00,2026-03-10T14:00\n";
    let path = file("markup", "roster.csv", csv);
    let out = folder("markup-out").join("report");
    let output = run(&[
        "screen",
        path.to_str().unwrap(),
        "--zone",
        "Europe/London",
        "--out",
        out.to_str().unwrap(),
    ]);
    assert!(output.status.success(), "{}", messages(&output));
    let html = std::fs::read_to_string(out.join("report.html")).unwrap();
    assert!(!html.contains("<script"));
    assert!(html.contains("&lt;script&gt;"));
}

#[test]
fn wrong_usage_ends_with_two() {
    for arguments in [
        &["screen"][..],
        &["screen", "x.csv", "--rules", "uk-wrt"],
        &["screen", "x.csv", "--zone", "BST"],
        &[
            "screen",
            "x.csv",
            "--from",
            "2026-02-01",
            "--to",
            "2026-01-01",
        ],
        &["screen", "x.csv", "--members", "0"],
        &["sceen"],
    ] {
        let output = run(arguments);
        assert_eq!(
            output.status.code(),
            Some(2),
            "{arguments:?}: {}",
            messages(&output)
        );
    }
    let output = run(&["screen", "x.csv", "--rules", "uk-wrt"]);
    assert!(messages(&output).contains("did you mean uk-wtr?"));
}

#[cfg(feature = "xlsx")]
#[test]
fn a_broken_workbook_is_refused() {
    let (code, text) = screened(
        "broken-xlsx",
        "roster.xlsx",
        b"PK\x03\x04 not a workbook",
        LONDON,
    );
    assert_eq!(code, 3, "{text}");
    assert!(text.contains("roster.xlsx: fatal F01"));
}

#[test]
fn rows_are_cited_alike_whatever_the_line_ends() {
    let csv = "worker,start,end\n\nA1,2026-03-09T14:00,2026-03-09T22:00\nA1,2026-03-10T06:00,2026-03-10T14:00\n";
    let rows = |test: &str, text: String| {
        let path = file(test, "roster.csv", text);
        let output = run(&[
            "screen",
            path.to_str().unwrap(),
            "--zone",
            "UTC",
            "--members",
            "8",
            "--format",
            "json",
        ]);
        let result: Value = serde_json::from_str(&results(&output)).unwrap();
        result["findings"][0]["rows"].clone()
    };
    let plain = rows("line-feed", csv.to_owned());
    assert_eq!(plain, serde_json::json!(["roster.csv:3", "roster.csv:4"]));
    assert_eq!(rows("carriage-return", csv.replace('\n', "\r\n")), plain);
}

#[test]
fn rows_are_cited_from_the_file_they_stand_in_when_another_cannot_be_read() {
    let path = file(
        "second-file",
        "good.csv",
        "worker,start,end\nA1,2026-03-09T14:00,2026-03-09T22:00\nA1,2026-03-10T06:00,2026-03-10T14:00\n",
    );
    let output = run(&[
        "screen",
        "missing.csv",
        path.to_str().unwrap(),
        "--zone",
        "UTC",
        "--members",
        "8",
        "--allow-partial",
        "--format",
        "json",
    ]);
    assert!(output.status.success(), "{}", messages(&output));
    let result: Value = serde_json::from_str(&results(&output)).unwrap();
    assert_eq!(result["findings"][0]["rows"][0], "good.csv:2");
}

#[test]
fn leave_needs_no_times_and_may_last_for_weeks() {
    let csv = "worker,date,start,end,kind\nA1,2026-03-09,08:00,16:00,work\nA1,2026-03-10,,,leave\nA1,2026-03-11,,,sick\nA1,2026-03-16,08:00,16:00,work\n";
    let (code, text) = screened("leave", "roster.csv", csv, LONDON);
    assert_eq!(code, 0, "{text}");
    let csv = "worker,start,end,kind\nA1,2026-03-09T08:00,2026-03-09T16:00,work\nA1,2026-03-10T00:00,2026-03-24T00:00,leave\n";
    let (code, text) = screened("long-leave", "roster.csv", csv, LONDON);
    assert_eq!(code, 0, "{text}");
}

#[test]
fn a_slip_in_the_year_is_refused_with_its_row() {
    check(
        "slip",
        format!("worker,start,end\n{GOOD}A1,2062-03-10T08:00,2062-03-10T16:00\n"),
        LONDON,
        &["roster.csv:4:4 (start): fatal D10", "36 years"],
    );
    check(
        "far-offset",
        "worker,start,end\nA1,9999-01-01T08:00Z,9999-01-01T16:00Z\n",
        LONDON,
        &["D09"],
    );
}

#[test]
fn dates_that_leave_nothing_are_told() {
    check(
        "no-dates",
        format!("worker,start,end\n{GOOD}"),
        &["--zone", "UTC", "--from", "2027-01-01"],
        &["D11", "no shift lies between"],
    );
}

#[test]
fn columns_and_headers_that_are_nearly_right_are_named() {
    let (code, text) = screened(
        "near-column",
        "roster.csv",
        "worker,start,end,brk_min\nA1,2026-03-09T08:00,2026-03-09T16:00,30\n",
        LONDON,
    );
    assert_eq!(code, 0, "{text}");
    assert!(
        text.contains("warning C11 columns left out: brk_min (did you mean break_min?)"),
        "{text}"
    );
    check(
        "no-date",
        "worker,datum,start,end\nA1,2026-03-09,08:00,16:00\n",
        LONDON,
        &["no column date: start holds times of day only"],
    );
}

#[test]
fn names_that_nearly_agree_are_told_with_their_rows() {
    let (_, text) = screened(
        "twins",
        "roster.csv",
        "worker,start,end\nMary,2026-03-09T07:00,2026-03-09T15:00\nmary,2026-03-09T22:00,2026-03-10T06:00\n",
        LONDON,
    );
    assert!(
        text.contains("\"Mary\" (row 2) and \"mary\" (row 3) differ only by case or spaces"),
        "{text}"
    );
}

#[test]
fn a_derogation_that_no_pack_knows_is_refused() {
    let site = file("bad-site", "site.toml", "derogations = [\"banana\"]\n");
    let roster = file(
        "bad-site-roster",
        "roster.csv",
        format!("worker,start,end\n{GOOD}"),
    );
    let output = run(&[
        "screen",
        roster.to_str().unwrap(),
        "--zone",
        "UTC",
        "--rules",
        "uk-wtr",
        "--site",
        site.to_str().unwrap(),
    ]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        messages(&output).contains("reg22-shift-changeover"),
        "{}",
        messages(&output)
    );
}
