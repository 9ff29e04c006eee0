//! Features of shared crates are equal with and without dev-dependencies; otherwise run, test and bench each compile polars anew.

use std::collections::BTreeMap;
use std::process::Command;

/// Crate and version to features, as `cargo tree` sees them.
fn features(edges: &str) -> BTreeMap<String, String> {
    let output = Command::new(env!("CARGO"))
        .args([
            "tree", "--locked", "--prefix", "none", "-e", edges, "-f", "{p}|{f}",
        ])
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap();
    assert!(
        output.status.success(),
        "{}",
        String::from_utf8_lossy(&output.stderr)
    );
    String::from_utf8(output.stdout)
        .unwrap()
        .lines()
        .filter_map(|line| line.split_once('|'))
        .map(|(name, features)| {
            (
                name.to_owned(),
                features.trim_end_matches(" (*)").to_owned(),
            )
        })
        .collect()
}

#[test]
fn dev_dependencies_change_no_feature_of_a_shared_crate() {
    let plain = features("normal,build");
    let with_dev = features("normal,build,dev");
    assert!(plain.len() > 100, "only {} crates are listed", plain.len());
    for (name, features) in &plain {
        assert_eq!(with_dev.get(name), Some(features), "{name}");
    }
}
