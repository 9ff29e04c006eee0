//! README, help and packs say what the program does.

use crate::scratch::{results, run};
use std::path::Path;

fn text(name: &str) -> String {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join(name);
    std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

#[test]
fn the_readme_opens_with_the_job_and_the_two_commands() {
    let readme = text("README.md");
    let paragraphs: Vec<&str> = readme.split("\n\n").collect();
    assert!(paragraphs[0].starts_with("# acroshift"));
    assert!(paragraphs[1].len() > 200, "the job stands in one paragraph");
    let top: String = readme.lines().take(30).collect::<Vec<_>>().join("\n");
    assert!(top.contains(
        "cargo run --release -- screen rosters/tern-quay-ward.csv --rules uk-wtr,adv-nordic,adv-review,adv-hse --out output/ward"
    ));
    assert!(top.contains("cargo test --release"));
}

#[test]
fn links_of_the_documents_lead_to_files() {
    for name in [
        "README.md",
        "DEVELOPERS.md",
        "CHANGELOG.md",
        "output/README.md",
    ] {
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(name);
        let folder = folder.parent().unwrap().to_owned();
        let document = text(name);
        for part in document.split("](").skip(1) {
            let target = part.split(')').next().unwrap();
            if target.starts_with('#') {
                continue;
            }
            assert!(!target.contains("://"), "{name} links to {target}");
            assert!(folder.join(target).exists(), "{name} links to {target}");
        }
    }
}

#[test]
fn every_finding_code_is_explained_in_the_readme() {
    let readme = text("README.md");
    for code in acroshift::assessment::FindingCode::ALL {
        assert!(
            readme.contains(&format!("`{}`", code.name())),
            "{}",
            code.name()
        );
    }
}

#[test]
fn help_ends_with_an_example_on_the_demo_roster() {
    let output = run(&["screen", "--help"]);
    assert!(output.status.success());
    let help = results(&output);
    assert!(
        help.contains("acroshift screen rosters/tern-quay-ward.csv"),
        "{help}"
    );
}

#[test]
fn the_changelog_names_this_version() {
    assert!(text("CHANGELOG.md").contains(env!("CARGO_PKG_VERSION")));
}

#[test]
fn codes_are_explained_and_slips_are_mended() {
    let output = run(&["explain", "uk-daily-rest"]);
    assert!(output.status.success());
    let text = results(&output);
    assert!(
        text.contains("at least 11 h") && text.contains("reg 10(1)"),
        "{text}"
    );
    assert!(
        text.lines().all(|line| line.chars().count() <= 80),
        "{text}"
    );
    let slip = run(&["explain", "uk-dayly-rest"]);
    assert_eq!(slip.status.code(), Some(2));
    assert!(crate::scratch::messages(&slip).contains("did you mean uk-daily-rest?"));
    let help = run(&["explain", "--help"]);
    assert!(results(&help).contains("acroshift explain uk-daily-rest"));
}
