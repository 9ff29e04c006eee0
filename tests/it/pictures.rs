//! The pictures of the README are made by the program: a recovery strip and a raster of the demo ward.
//!
//! `ACROSHIFT_WRITE_DEMO=1 cargo test --release pictures` writes them anew.

use crate::rosters::{report_with, screening};
use crate::scratch::{DEMO_RULES, demo};
use acroshift::render::chart;
use std::path::Path;

#[test]
fn the_committed_pictures_are_those_of_the_demo_ward() {
    let csv = std::fs::read_to_string(demo()).unwrap();
    let packs: Vec<&str> = DEMO_RULES.split(',').collect();
    let report = report_with(&csv, "Europe/London", &screening(&packs));
    // The nurse with two quick returns, and the line with a run of four nights.
    let worker = report.workers.iter().find(|w| w.id == "N16").unwrap();
    let line = report
        .lines
        .iter()
        .find(|line| line.workers == ["N03"])
        .unwrap();
    let pictures = [
        (
            "recovery-strip.svg",
            chart::recovery_strip(&worker.strip, "strip"),
        ),
        ("raster.svg", chart::raster(&line.raster, "raster")),
        (
            "cortisol.svg",
            chart::cortisol_curve(&line.curve, "cortisol"),
        ),
    ];
    for (name, svg) in pictures {
        let path = Path::new(env!("CARGO_MANIFEST_DIR"))
            .join("rosters/pictures")
            .join(name);
        let drawn = chart::standalone(&svg);
        if std::env::var_os("ACROSHIFT_WRITE_DEMO").is_some() {
            std::fs::write(&path, &drawn).unwrap();
        }
        assert!(
            std::fs::read_to_string(&path).unwrap() == drawn,
            "{name} is stale"
        );
    }
}
