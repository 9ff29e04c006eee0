//! Tests that hold the program against numbers, texts and files from outside it.
#![expect(
    clippy::unwrap_used,
    reason = "in a test a panic with the line is the message wanted"
)]

mod acceptance;
mod architecture;
mod bad_input;
mod clock_vectors;
mod demo_report;
mod demo_ward;
mod dependencies;
mod documentation;
mod light_log;
mod output_folder;
mod physiology_options;
mod pictures;
mod properties;
mod reference;
mod rhythm_command;
mod rosters;
mod rules;
mod samples;
mod scratch;
mod validation;
#[cfg(feature = "xlsx")]
mod workbook;
