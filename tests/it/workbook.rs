//! Workbooks: the same shifts as the text file, and places as cells.
//!
//! `tests/corpus/fixture-a.xlsx` was written by an independent library (openpyxl 3.1) from `fixture-a.csv`, times as dated cells.

use crate::scratch::{messages, results, run};
use serde_json::Value;

const FOLDER: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/corpus/");

fn screened(name: &str) -> Value {
    let path = format!("{FOLDER}{name}");
    let output = run(&[
        "screen",
        &path,
        "--zone",
        "Europe/London",
        "--members",
        "8",
        "--format",
        "json",
    ]);
    assert!(output.status.success(), "{}", messages(&output));
    serde_json::from_str(&results(&output)).unwrap()
}

#[test]
fn a_workbook_gives_the_same_windows_and_numbers_as_the_text_file() {
    let text = screened("fixture-a.csv");
    let book = screened("fixture-a.xlsx");
    assert_eq!(text["workers"][0]["windows"], book["workers"][0]["windows"]);
    assert_eq!(text["lines"], book["lines"]);
    assert_eq!(
        book["workers"][0]["shifts"][0]["origin"],
        "fixture-a.xlsx:2"
    );
}
