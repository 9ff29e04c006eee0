//! The project's own rules: who may use whom, how long a file may be, what stands nowhere.

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

/// Which module of the library may use which others.
fn allowed() -> BTreeMap<&'static str, &'static [&'static str]> {
    BTreeMap::from([
        ("units", &["numeric"][..]),
        ("numeric", &[][..]),
        ("source", &[][..]),
        ("diagnostic", &["source"][..]),
        ("roster", &["units", "source"][..]),
        ("samples", &[][..]),
        // Civil time is settled in one place, which intake asks for the instant of a local time.
        (
            "intake",
            &[
                "roster",
                "samples",
                "diagnostic",
                "source",
                "units",
                "timeline",
                "numeric",
            ][..],
        ),
        ("timeline", &["roster", "numeric", "units"][..]),
        ("physiology", &["timeline", "numeric", "units"][..]),
        ("rhythm", &["samples", "numeric", "units"][..]),
        (
            "biological_time",
            &["samples", "timeline", "physiology", "numeric", "units"][..],
        ),
        (
            "validation",
            &["timeline", "physiology", "numeric", "units"][..],
        ),
        (
            "assessment",
            &[
                "roster",
                "timeline",
                "physiology",
                "numeric",
                "diagnostic",
                "source",
                "units",
            ][..],
        ),
        (
            "report",
            &[
                "roster",
                "timeline",
                "physiology",
                "assessment",
                "diagnostic",
                "source",
                "numeric",
                "units",
            ][..],
        ),
        (
            "render",
            &[
                "report",
                "validation",
                "rhythm",
                "biological_time",
                "samples",
                "numeric",
                "units",
            ][..],
        ),
    ])
}

fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files.extend(sources(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            files.push(path);
        }
    }
    files.sort();
    files
}

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn domain(path: &Path) -> Option<String> {
    let inside = path.strip_prefix(root().join("src")).ok()?;
    let first = inside.components().next()?.as_os_str().to_str()?;
    Some(first.trim_end_matches(".rs").to_owned())
}

#[test]
fn modules_use_only_what_the_table_allows() {
    let allowed = allowed();
    let mut breaches = Vec::new();
    let mut seen = 0;
    for path in sources(&root().join("src")) {
        let Some(domain) = domain(&path) else {
            continue;
        };
        let Some(may_use) = allowed.get(domain.as_str()) else {
            assert!(
                ["lib", "main", "cli"].contains(&domain.as_str()),
                "{domain} has no row in the table"
            );
            continue;
        };
        seen += 1;
        let text = fs::read_to_string(&path).unwrap();
        let code = text.split("#[cfg(test)]").next().unwrap_or_default();
        for (number, line) in (1..).zip(code.lines()) {
            if line.trim_start().starts_with("//") {
                continue;
            }
            for (at, _) in line.match_indices("crate::") {
                let used: String = line[at + 7..]
                    .chars()
                    .take_while(|c| c.is_ascii_lowercase() || *c == '_')
                    .collect();
                let foreign = allowed.contains_key(used.as_str()) && used != domain;
                if foreign && !may_use.contains(&used.as_str()) {
                    breaches.push(format!("{}:{number} uses {used}", path.display()));
                }
            }
        }
    }
    assert!(seen > 40, "only {seen} files were looked at");
    assert!(breaches.is_empty(), "{breaches:#?}");
}

#[test]
fn the_table_would_notice_a_breach() {
    assert!(!allowed()["physiology"].contains(&"roster"));
    assert!(!allowed()["render"].contains(&"assessment"));
}

#[test]
fn the_library_neither_prints_nor_reads_clock_environment_or_network() {
    let forbidden = [
        "SystemTime",
        "Instant::now",
        "std::env::var",
        "println!",
        "eprintln!",
        "std::net",
        "std::fs",
        "Utc::now",
        "Local::now",
    ];
    for path in sources(&root().join("src")) {
        let domain = domain(&path).unwrap();
        if domain == "cli" || domain == "main" {
            continue;
        }
        let text = fs::read_to_string(&path).unwrap();
        for word in forbidden {
            assert!(!text.contains(word), "{} holds {word}", path.display());
        }
    }
}

#[test]
fn files_hold_one_concept() {
    const LONGEST: usize = 700;
    for path in sources(&root().join("src")) {
        let lines = fs::read_to_string(&path).unwrap().lines().count();
        assert!(lines <= LONGEST, "{} has {lines} lines", path.display());
    }
}

#[test]
fn nothing_unfinished_stands_in_the_sources() {
    let marks = [
        "todo!(",
        "unimplemented!(",
        "dbg!(",
        "FIXME",
        concat!("#[", "ignore"),
        concat!("should_", "panic"),
    ];
    let files = sources(&root().join("src"))
        .into_iter()
        .chain(sources(&root().join("tests")))
        .filter(|path| !path.ends_with("architecture.rs"));
    for path in files {
        let text = fs::read_to_string(&path).unwrap();
        for mark in marks {
            assert!(!text.contains(mark), "{} holds {mark}", path.display());
        }
    }
}

#[test]
fn no_module_file_is_called_mod_or_util() {
    for path in sources(&root().join("src")) {
        let name = path.file_name().unwrap().to_str().unwrap();
        assert!(
            !["mod.rs", "util.rs", "utils.rs", "common.rs", "helpers.rs"].contains(&name),
            "{}",
            path.display()
        );
    }
}
