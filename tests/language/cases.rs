//! Every `NAME.show` and `NAME.rig` under `cases/` is a case.
//!
//! The file says itself what is found in it, in comments of the form `# finds CODE LINE:COLUMN`, one a finding and in the order
//! of the reference; a case without any has none. What the findings say, and what a text without errors means, stands
//! beside it in a snapshot.

use phasewright::finding::{FileId, Finding, Place, Severity, ordered};
use phasewright::language::{parse_show, read_rig, resolve_show};
use std::fmt::Write as _;
use std::fs;
use std::path::{Path, PathBuf};

/// `LINE:COLUMN` of a byte, both from 1, columns in characters.
fn line_and_column(text: &str, at: usize) -> String {
    let before = &text[..at];
    let line_start = before.rfind('\n').map_or(0, |found| found + 1);
    let column = before[line_start..]
        .trim_start_matches('\u{feff}')
        .chars()
        .count()
        + 1;
    format!("{}:{column}", before.matches('\n').count() + 1)
}

fn position(text: &str, place: Place) -> String {
    line_and_column(text, place.start)
}

/// What is found in a text, and what it means.
fn read(path: &Path, text: &str) -> (Vec<Finding>, String) {
    let file = FileId(0);
    let (found, meaning) = if path.extension().is_some_and(|ending| ending == "rig") {
        let (rig, found) = read_rig(file, text, "0".to_owned());
        let meaning = rig.map_or("no usable rig\n".to_owned(), |rig| {
            crate::dump::rig(text, &rig)
        });
        (found, meaning)
    } else {
        let (script, mut found) = parse_show(file, text);
        let (show, more) = resolve_show(&script, "0".to_owned(), false);
        found.extend(more);
        (found, crate::dump::show(text, &show))
    };
    (ordered(found), meaning)
}

fn findings_text(text: &str, findings: &[Finding]) -> String {
    let mut out = String::new();
    for finding in findings {
        let place = finding.place;
        let _ = writeln!(
            out,
            "{} {} {} `{}`{}",
            finding.severity.word(),
            finding.code.text(),
            position(text, place),
            &text[place.start..place.end],
            if finding.count > 1 {
                format!(" × {}", finding.count)
            } else {
                String::new()
            }
        );
        let _ = writeln!(out, "  {}", finding.message);
        if let Some((place, label)) = &finding.also {
            let _ = writeln!(
                out,
                "  also {} `{}`: {label}",
                position(text, *place),
                &text[place.start..place.end]
            );
        }
        if let Some(help) = &finding.help {
            let _ = writeln!(out, "  help: {help}");
        }
    }
    out
}

/// What the comments of a case say is found in it.
fn announced(text: &str) -> Vec<String> {
    text.lines()
        .filter_map(|line| line.split_once("# finds "))
        .map(|(_, what)| what.trim().to_owned())
        .collect()
}

fn collect(folder: &Path, into: &mut Vec<PathBuf>) {
    let mut entries: Vec<_> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    entries.sort();
    for path in entries {
        if path.is_dir() {
            collect(&path, into);
        } else if path
            .extension()
            .is_some_and(|ending| ending == "show" || ending == "rig")
        {
            into.push(path);
        }
    }
}

/// Every case there is.
pub(crate) fn all() -> Vec<PathBuf> {
    let mut paths = Vec::new();
    collect(
        &Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/language/cases"),
        &mut paths,
    );
    paths
}

#[test]
fn every_case_finds_what_it_announces_and_no_more() {
    let mut wrong = String::new();
    let paths = all();
    assert!(paths.len() >= 80, "only {} cases were found", paths.len());
    for path in &paths {
        let text = fs::read_to_string(path).unwrap();
        let (findings, meaning) = read(path, &text);
        let found: Vec<String> = findings
            .iter()
            .map(|finding| format!("{} {}", finding.code.text(), position(&text, finding.place)))
            .collect();
        let announced = announced(&text);
        if found != announced {
            let _ = writeln!(
                wrong,
                "{}\n  announced {announced:?}\n  found     {found:?}\n{}",
                path.display(),
                findings_text(&text, &findings)
            );
        }
        let errors = findings
            .iter()
            .any(|finding| finding.severity == Severity::Error);
        let said = findings_text(&text, &findings);
        let snapshot = if errors {
            said
        } else {
            format!("{said}{meaning}")
        };
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        insta::with_settings!({
            snapshot_path => path.parent().unwrap(),
            prepend_module_to_snapshot => false,
            omit_expression => true,
        }, {
            insta::assert_snapshot!(name, snapshot);
        });
    }
    assert!(wrong.is_empty(), "\n{wrong}");
}
