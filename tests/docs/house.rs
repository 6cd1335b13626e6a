//! What of the house rules a test can see; clippy sees the bans on files, clocks, chance and panics.

use crate::root;
use std::path::{Path, PathBuf};

/// Files below a folder of the project that somebody wrote: Rust, grammars, and what the page is made of.
fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            if !path.ends_with("node_modules") {
                found.extend(sources(&path));
            }
        } else if path.extension().is_some_and(|own| {
            ["rs", "pest", "js", "mjs", "css", "html"]
                .iter()
                .any(|written| own == *written)
        }) {
            found.push(path);
        }
    }
    found.sort();
    found
}

/// About 500 lines are the most that one sits down to read.
#[test]
fn no_source_file_is_too_long() {
    let long: Vec<String> = ["src", "tests", "grammar"]
        .iter()
        .flat_map(|folder| sources(&root().join(folder)))
        .filter_map(|path| {
            let lines = std::fs::read_to_string(&path).unwrap().lines().count();
            (lines > 520).then(|| format!("{}: {lines} lines", path.display()))
        })
        .collect();
    assert!(long.is_empty(), "{long:#?}");
}

/// The audit would find nothing if it made the same mistakes: it takes the plan's boundaries and the laws' names, and
/// evaluates by itself.
#[test]
fn the_audit_evaluates_by_itself() {
    let evaluators = [
        "motion::inside",
        "motion::laws",
        "motion::bezier",
        "motion::derivatives",
        "motion::profile",
        "exact::fixed",
        "exact::line",
        "exact::root",
        "exact::sine",
        "plan::landing",
        "plan::passage",
        "setpoint::track",
        "setpoint::rows",
        "setpoint::Rows",
    ];
    for path in sources(&root().join("src/audit")) {
        let text = std::fs::read_to_string(&path).unwrap();
        for name in evaluators {
            assert!(!text.contains(name), "{} uses {name}", path.display());
        }
    }
}

/// Markdown files of the project, relative to its root.
fn pages() -> Vec<PathBuf> {
    let mut found: Vec<PathBuf> = ["README.md", "DEVELOPERS.md", "CHANGELOG.md"]
        .iter()
        .map(PathBuf::from)
        .collect();
    for entry in std::fs::read_dir(root().join("docs")).unwrap() {
        let name = entry.unwrap().file_name();
        if name.to_string_lossy().ends_with(".md") {
            found.push(Path::new("docs").join(name));
        }
    }
    found
}

/// A link within the project leads to a file that is there.
#[test]
fn every_link_leads_somewhere() {
    let mut checked = 0;
    for page in pages() {
        let text = crate::read(&page);
        for link in text
            .split("](")
            .skip(1)
            .filter_map(|rest| rest.split(')').next())
        {
            let file = link.split('#').next().unwrap_or_default();
            if file.is_empty() || file.contains("://") {
                continue;
            }
            let target = root().join(&page).parent().unwrap().join(file);
            assert!(
                target.exists(),
                "{} links to {link}, which is not there",
                page.display()
            );
            checked += 1;
        }
    }
    assert!(checked > 10, "only {checked} links were found");
}
