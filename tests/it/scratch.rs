//! Folders and files of one test, under the target folder.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// A fresh folder of the given name.
pub(crate) fn folder(name: &str) -> PathBuf {
    let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    if path.exists() {
        std::fs::remove_dir_all(&path).unwrap();
    }
    std::fs::create_dir_all(&path).unwrap();
    path
}

/// A file of the given name and content in a fresh folder of the test.
pub(crate) fn file(test: &str, name: &str, content: impl AsRef<[u8]>) -> PathBuf {
    let path = folder(test).join(name);
    std::fs::write(&path, content).unwrap();
    path
}

/// The demo roster.
pub(crate) fn demo() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("rosters/tern-quay-ward.csv")
}

/// Packs of the demo.
pub(crate) const DEMO_RULES: &str = "uk-wtr,adv-nordic,adv-review,adv-hse";

/// Runs the program.
pub(crate) fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_acroshift"))
        .args(arguments)
        .output()
        .unwrap()
}

/// What went to standard error.
pub(crate) fn messages(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

/// What went to standard output.
pub(crate) fn results(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}
