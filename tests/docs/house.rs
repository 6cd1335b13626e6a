//! What of the house rules a test can see; clippy sees the bans on files, clocks, chance and panics.

use crate::root;
use std::path::{Path, PathBuf};

/// Files below a folder of the project that end in `.rs` or `.pest`.
fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path
            .extension()
            .is_some_and(|own| own == "rs" || own == "pest")
        {
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
