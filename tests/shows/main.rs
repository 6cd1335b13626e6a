//! Wrong shows, each with one mistake, through the built program. A new case is a new file in `wrong/`: its first lines
//! say `# expect CODE LINE:COLUMN` (or `FILE:LINE:COLUMN` where the place is in a rig).

#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    reason = "a test may stop at the first thing that is not so"
)]

use phasewright::finding::Code;
use serde_json::Value;
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use std::process::Command;

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/shows/wrong")
}

/// The wrong shows, by name.
fn shows() -> Vec<PathBuf> {
    let mut found: Vec<PathBuf> = std::fs::read_dir(folder())
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "show"))
        .collect();
    found.sort();
    found
}

/// `CODE FILE:LINE:COLUMN` of each line that says what is expected.
fn expected(show: &Path) -> BTreeSet<String> {
    let name = show.file_name().unwrap().to_str().unwrap();
    let text = std::fs::read_to_string(show).unwrap();
    text.lines()
        .filter_map(|line| line.strip_prefix("# expect "))
        .map(|line| {
            let (code, place) = line.split_once(' ').unwrap();
            match place.matches(':').count() {
                1 => format!("{code} {name}:{place}"),
                _ => format!("{code} {place}"),
            }
        })
        .collect()
}

fn validate(show: &Path, form: &str) -> (Option<i32>, String) {
    let output = Command::new(env!("CARGO_BIN_EXE_phasewright"))
        .current_dir(folder())
        .args(["validate", "--color", "never", "--findings", form])
        .arg(show.file_name().unwrap())
        .output()
        .unwrap();
    let error = String::from_utf8_lossy(&output.stderr);
    assert!(!error.contains("panicked"), "{}\n{error}", show.display());
    (
        output.status.code(),
        String::from_utf8(output.stdout).unwrap(),
    )
}

fn findings(show: &Path) -> (Option<i32>, Vec<Value>) {
    let (status, text) = validate(show, "json");
    let document: Value = serde_json::from_str(&text)
        .unwrap_or_else(|error| panic!("{}: {error}\n{text}", show.display()));
    (status, document["findings"].as_array().unwrap().clone())
}

fn code_and_place(finding: &Value) -> String {
    let place = &finding["place"];
    let (code, file) = (
        finding["code"].as_str().unwrap(),
        place["file"].as_str().unwrap(),
    );
    format!("{code} {file}:{}:{}", place["line"], place["column"])
}

/// Every finding but a note that nobody asked about is expected, and everything expected is found, at its place.
#[test]
fn each_wrong_show_gets_its_finding_at_its_place() {
    let mut wrong = Vec::new();
    for show in shows() {
        let want = expected(&show);
        assert!(
            !want.is_empty(),
            "{} says nothing of what is expected",
            show.display()
        );
        let codes: BTreeSet<&str> = want
            .iter()
            .filter_map(|line| line.split(' ').next())
            .collect();
        let (_, found) = findings(&show);
        let got: BTreeSet<String> = found
            .iter()
            .filter(|finding| {
                finding["severity"] != "note" || codes.contains(finding["code"].as_str().unwrap())
            })
            .map(code_and_place)
            .collect();
        if got != want {
            wrong.push(format!(
                "{}\n  want {want:?}\n  got  {got:?}",
                show.display()
            ));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn errors_exit_with_1_and_all_else_with_0() {
    for show in shows() {
        let (status, found) = findings(&show);
        let error = found.iter().any(|finding| finding["severity"] == "error");
        assert_eq!(status, Some(i32::from(error)), "{}", show.display());
    }
}

/// What a person reads names the code and the place as `FILE:LINE:COLUMN`.
#[test]
fn the_text_form_says_the_same() {
    for show in shows() {
        let (_, text) = validate(&show, "text");
        for line in expected(&show) {
            let (code, place) = line.split_once(' ').unwrap();
            assert!(
                text.contains(code) && text.contains(place),
                "{line} is not in\n{text}"
            );
        }
    }
}

/// A limit without the value that would pass helps nobody. Only what no duration can save has none, and such a show says
/// `# no duration helps`.
#[test]
fn limits_come_with_a_help_line() {
    for show in shows() {
        let text = std::fs::read_to_string(&show).unwrap();
        let hopeless = text.contains("# no duration helps");
        let (_, found) = findings(&show);
        for finding in found {
            let code = finding["code"].as_str().unwrap();
            if code.starts_with("limit/") || code == "loop/seam" {
                let helps = finding["help"].is_string();
                assert_eq!(helps, !hopeless, "{}: {finding:#}", show.display());
            }
        }
    }
}

#[test]
fn every_code_about_shows_is_drawn_by_some_wrong_show() {
    let drawn: BTreeSet<String> = shows()
        .iter()
        .flat_map(|show| expected(show))
        .filter_map(|line| line.split(' ').next().map(str::to_owned))
        .collect();
    let missing: Vec<&str> = Code::ALL
        .iter()
        .map(|code| code.text())
        // What an audit finds is drawn by logs and tables, not by shows: see tests/logs and tests/audit.
        .filter(|code| !code.starts_with("audit/") && !code.starts_with("drift/"))
        .filter(|code| !drawn.contains(*code))
        .collect();
    assert!(missing.is_empty(), "no wrong show draws {missing:?}");
}
